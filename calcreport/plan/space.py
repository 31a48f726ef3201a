"""Name spaces: what is visible at a line, what is given in some arms only, and what was told of already.

Makes slots and row sets; adds `given-twice` and `arms-differ`.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TypeAlias

from calcreport.core.problems import Problems
from calcreport.core.source import Span
from calcreport.core.units import dimension_words
from calcreport.plan.model import RowSet, Slot, Symbol
from calcreport.read.model import EVERY

Known: TypeAlias = Slot | RowSet


@dataclass(slots=True)
class Space:
    """One name space."""

    #: what may be used now
    names: dict[str, Known]
    #: names that some line further down gives
    later: frozenset[str]
    #: path prefix of a part with `as`
    stem: str = ""
    #: given in the earlier arms of the blocks that are open now; the same name in this arm is the same thing
    siblings: dict[str, Known] = field(default_factory=dict)
    #: given in some arms only of a block further up
    partial: dict[str, Known] = field(default_factory=dict)
    #: names about which a problem was told, `stem.*` for all of a part and `*` for all that are not known
    told: set[str] = field(default_factory=set)

    def is_told(self, name: str) -> bool:
        """Tell whether a name that is not visible here may be the work of a line that could not be read."""
        stems = [name[:place] for place, sign in enumerate(name) if sign == "."]
        return bool(self.told) and not self.told.isdisjoint((EVERY, name, *stems, *(f"{s}.{EVERY}" for s in stems)))


@dataclass(frozen=True, slots=True)
class Context:
    """Where a line stands: sets open around it, and slots known to hold a value."""

    open: tuple[int, ...] = ()
    assured: frozenset[int] = frozenset()


class Maker:
    """Makes the slots and sets of one plan."""

    def __init__(self, problems: Problems) -> None:
        self.problems = problems
        self.slots: list[Slot] = []
        self.sets: list[RowSet] = []

    def slot(self, symbol: Symbol, space: Space, sets: tuple[int, ...], span: Span, *, absent: bool = False) -> Slot:
        """Make a slot, or reuse the one an earlier arm made under this name."""
        sibling = space.siblings.get(symbol.name)
        if isinstance(sibling, Slot) and symbol.name not in space.names:
            space.names[symbol.name] = sibling
            if self._are_alike(sibling, symbol, sets, span):
                return sibling
            self.slots.append(Slot(len(self.slots), symbol, space.stem + symbol.name, sets, absent, span))
            return self.slots[-1]
        made = Slot(len(self.slots), symbol, space.stem + symbol.name, sets, absent, span)
        self.slots.append(made)
        if self._is_free(symbol.name, space, span):
            space.names[symbol.name] = made
        return made

    def _are_alike(self, sibling: Slot, symbol: Symbol, sets: tuple[int, ...], span: Span) -> bool:
        one, other = sibling.symbol.unit, symbol.unit
        # a set that could not be made out may be any
        sets = sibling.sets if -1 in (*sets, *sibling.sets) else sets
        found = dimension_words(other.dimension) if other else "a word"
        expected = dimension_words(one.dimension) if one else "a word"
        if found == expected and sibling.sets != sets:
            found, expected = "another set around it", "the same sets around it in every arm"
        elif found == expected:
            return True
        self.problems.add("arms-differ", span, f"`{symbol.name}` is another thing in another branch", expected=expected,
                          found=found, related=((sibling.span, "given here"),))  # fmt: skip
        return False

    def row_set(
        self, name: str, space: Space, outer: tuple[int, ...], row_names: tuple[str, ...], span: Span
    ) -> RowSet:
        """Make a set, or reuse the one an earlier arm made under this name."""
        sibling = space.siblings.get(name)
        if isinstance(sibling, RowSet) and name not in space.names and sibling.outer == outer:
            both = tuple(dict.fromkeys([*sibling.row_names, *row_names])) if sibling.row_names and row_names else ()
            joined = self.sets[sibling.index] = replace(sibling, row_names=both)
            space.names[name] = joined
            return joined
        made = RowSet(len(self.sets), name, outer, row_names, span)
        self.sets.append(made)
        if self._is_free(name, space, span):
            space.names[name] = made
        return made

    def _is_free(self, name: str, space: Space, span: Span) -> bool:
        taken = space.names.get(name) or space.partial.get(name)
        if taken is None:
            return True
        self.problems.add(
            "given-twice",
            span,
            f"`{name}` is given twice",
            expected="a name given once, or once in each branch of one block",
            found=name,
            hint="take another name for the second value",
            related=((taken.span, "first here"),),
        )
        return name not in space.names
