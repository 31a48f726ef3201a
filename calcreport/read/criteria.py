"""Design criteria of a project, held against the closed list of the library; and what templates read of them.

Mappings in, `Criteria` out. `criteria.yaml` says which criteria there are, with their words and units.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from calcreport.core.problems import Problems, listed
from calcreport.core.quantity import read_in_unit
from calcreport.core.source import Span
from calcreport.core.units import Unit, dimension_words, read_unit
from calcreport.read.fields import Fields, as_scalar, say_not_a_word
from calcreport.read.model import Given
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence

#: file of the library that says which criteria there are
CRITERIA = "criteria.yaml"


@dataclass(frozen=True, slots=True)
class Criteria:
    """The criteria a project states."""

    #: by name, in written order; None for one about which a problem was told
    stated: dict[str, Scalar | None]
    #: the place they stand at; None where they could not be read
    span: Span | None

    @property
    def rows(self) -> tuple[tuple[str, str], ...]:
        """Names and texts for the front sheets."""
        return tuple((name, scalar.text) for name, scalar in self.stated.items() if scalar is not None)


def read_criteria(node: Mapping | None, known: Mapping | None, system: str, problems: Problems) -> Criteria:
    """Read the criteria against the library's closed list, the tree of its file."""
    if node is None:
        return Criteria({}, None)
    entries = _entries(known)
    fields = Fields(node, entries, "`criteria`", problems)
    stated: dict[str, Scalar | None] = {}
    for key, value in node.entries:
        if key.text in entries:
            scalar = as_scalar(value, f"`{key.text[:40]}`", problems)
            good = scalar is not None and _holds(scalar, key.text, entries[key.text], system, problems)
            stated[key.text] = scalar if good else None
    for name in entries:
        if name in fields.mistaken:
            stated.setdefault(name, None)
    for name, entry in entries.items():
        required = entry.get("required") if isinstance(entry, Mapping) else None
        if isinstance(required, Scalar) and required.text == "yes" and fields.node_of(name) is None:
            fields.say_missing(name)
            stated[name] = None
    return Criteria(stated, node.span)


def hold_criteria(
    givens: tuple[Given, ...], tree: Callable[[str], Mapping | None], system: str, problems: Problems
) -> None:
    """Hold what a template reads from the criteria against the closed list: the name, and what may stand there."""
    entries = _entries(tree(CRITERIA)) if any(given.criterion for given in givens) else {}
    for given in givens:
        name = given.criterion
        if name is None:
            continue
        if name.name not in entries:
            problems.add("unknown-name", name.span, f"there is no criterion `{name.name[:40]}`",
                         expected=listed(entries), found=name.name[:40],
                         hint=problems.near(name.name, entries))  # fmt: skip
            continue
        words, unit = _words(entries[name.name]), _unit(entries[name.name], system, problems)
        symbol = given.symbol
        if symbol is None:
            continue
        if set(words) - set(symbol.words):
            problems.add("not-a-word", name.span, f"`{given.name}` does not take every word of this criterion",
                         expected=listed(words), found=listed(symbol.words))  # fmt: skip
        elif unit is not None and (symbol.unit is None or symbol.unit.dimension != unit.dimension):
            found = dimension_words(symbol.unit.dimension) if symbol.unit else "a word"
            problems.add("unit-mismatch", name.span, f"`{given.name}` cannot take this criterion",
                         expected=dimension_words(unit.dimension), found=f"{found}, by its symbol")  # fmt: skip


def _entries(known: Mapping | None) -> dict[str, Node]:
    found = known.get("criteria") if known else None
    return {key.text: value for key, value in found.entries} if isinstance(found, Mapping) else {}


def _words(entry: Node) -> tuple[str, ...]:
    words = entry.get("one of") if isinstance(entry, Mapping) else None
    return tuple(w.text for w in words.items if isinstance(w, Scalar)) if isinstance(words, Sequence) else ()


def _unit(entry: Node, system: str, problems: Problems) -> Unit | None:
    unit = entry.get("unit") if isinstance(entry, Mapping) else None
    if isinstance(unit, Mapping):
        unit = unit.get(system)
    return read_unit(unit.text, unit.span, problems) if isinstance(unit, Scalar) else None


def _holds(scalar: Scalar, name: str, entry: Node, system: str, problems: Problems) -> bool:
    """Hold one criterion against its entry: a closed list of words, a unit, or free text."""
    allowed, unit = _words(entry), _unit(entry, system, problems)
    if allowed and scalar.text not in allowed:
        say_not_a_word(scalar, allowed, f"`{name}`", problems)
        return False
    return unit is None or read_in_unit(scalar.text, scalar.span, problems, unit) is not None
