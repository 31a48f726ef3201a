"""Uses of names in formulas and conditions: each is bound to what is visible where it stands.

Trees in, bound trees out; unknown names, rows that leak out of their set and values that may be absent are problems.
Knows no dimension.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.core.expression import (
    Compare,
    Condition,
    Expression,
    Is,
    IsGiven,
    Logic,
    Name,
    Node,
    Number,
    Over,
    children,
    rebuilt_condition,
    rebuilt_expression,
)
from calcreport.core.problems import Problems, listed
from calcreport.core.rows import fits
from calcreport.core.source import Span
from calcreport.plan.model import RowSet, Slot, Symbol
from calcreport.plan.space import Context, Space
from calcreport.read.model import EVERY


class Names:
    """Binds names; `sets` grows as the linker makes sets."""

    def __init__(self, sets: list[RowSet], problems: Problems) -> None:
        self.sets, self.problems = sets, problems

    # -------------------------------------------------------- binding

    def expression(self, node: Expression, space: Space, at: Context) -> Expression:
        """Bind a formula."""
        self.look(node, space, at)
        return rebuilt_expression(node, lambda n: _bound(n, space))

    def condition(self, node: Condition, space: Space, at: Context) -> Condition:
        """Bind a condition."""
        self.look(node, space, at)
        return rebuilt_condition(node, lambda n: _bound(n, space))

    def word(self, node: Expression, symbol: Symbol, space: Space, at: Context) -> Expression:
        """Bind the value of a word: a word of its list, or a symbol whose words are among them."""
        if not isinstance(node, Name):
            self.problems.add("unit-mismatch", node.span, f"`{symbol.name}` is a word", expected=listed(symbol.words),
                              found="a formula")  # fmt: skip
            return node
        found = space.names.get(node.name)
        if node.name in symbol.words or (found is None and space.is_told(node.name)):
            return node
        if isinstance(found, Slot) and found.symbol.kind == "word" and set(found.symbol.words) <= set(symbol.words):
            return self.expression(node, space, at)
        self.problems.add("not-a-word", node.span, f"`{node.name[:40]}` is not a word of `{symbol.name}`",
                          expected=listed(symbol.words), found=node.name[:40],
                          hint=self.problems.near(node.name, symbol.words))  # fmt: skip
        return node

    def value(self, node: Expression, symbol: Symbol, space: Space, at: Context) -> Expression:
        """Bind the formula of a symbol, be it a quantity or a word."""
        return self.word(node, symbol, space, at) if symbol.kind == "word" else self.expression(node, space, at)

    def set_named(self, name: str, span: Span, space: Space) -> int:
        """Return the number of a set, or -1 after adding a problem."""
        found = space.names.get(name)
        if isinstance(found, RowSet):
            return found.index
        if found is None and space.is_told(name):
            return -1
        if isinstance(found, Slot):
            self.problems.add(
                "unknown-name",
                span,
                f"`{name[:40]}` is a value, not a set",
                expected="a set given or made above",
                found=f"the value {name[:40]}",
            )
            return -1
        sets = [key for key, value in space.names.items() if isinstance(value, RowSet)]
        self.problems.add("unknown-name", span, f"there is no set `{name[:40]}` here",
                          expected="a set given or made above", found=name[:40],
                          hint=self.problems.near(name, sets))  # fmt: skip
        return -1

    # -------------------------------------------------------- looking

    def look(self, node: Node, space: Space, at: Context) -> None:
        """Report what is wrong with the names below a node."""
        match node:
            case Number():
                self._look_number(node, space)
            case Name():
                self.look_name(node, space, at)
            case IsGiven(name):
                self.look_name(name, space, replace(at, assured=at.assured | _slot_of(name, space)))
            case Is():
                self._look_is(node, space, at)
            case Over():
                self._look_over(node, space, at)
            case Logic("and", left, right):
                self.look(left, space, at)
                self.look(right, space, replace(at, assured=at.assured | assured(left, space)))
            case Compare(_, left, right) if word := _word_of(left, space) or _word_of(right, space):
                other = left if word is right else right
                self.problems.add("unit-mismatch", word.span, f"`{word.name}` is a word, not a number",
                                  expected="a quantity in a comparison", found="a word",
                                  hint=f"ask for a word with `is`: {word.name} is {other.span.text[:40]}")  # fmt: skip
            case _:
                for child in children(node):
                    self.look(child, space, at)

    def _look_number(self, node: Number, space: Space) -> None:
        """Refuse `2 h` where h is a symbol too: it may be two hours, or twice h."""
        name = node.unit.text if node.unit is not None else ""
        if _is_ambiguous(node, space):
            self.problems.add(
                "ambiguous-unit", node.span, f"`{name}` is a unit and a symbol of this template",
                expected="a reading that is plain", found=node.span.text[:40],
                hint=f"write {node.text}*{name} for the symbol, or qty({node.text}, {name}) for the unit",
            )  # fmt: skip

    def look_name(self, node: Name, space: Space, at: Context) -> None:
        """Report a name that is unknown, a set, a row out of its set, or perhaps absent."""
        found = space.names.get(node.name)
        if found is None:
            self.say_unknown(node, space)
        elif isinstance(found, RowSet):
            self.problems.add(
                "row-leak",
                node.span,
                f"`{node.name}` is a set, not a value",
                expected=f"a value, or sum(… over {node.name})",
                found=f"the set {node.name}",
            )
        else:
            self.hold_open(found.sets, node.name, node.span, at)
            if found.may_be_absent and found.index not in at.assured:
                self.problems.add(
                    "may-be-absent", node.span, f"`{node.name}` may be missing here",
                    expected=f"a branch under `when: given({node.name})`", found="a use without it",
                    related=((found.span, "the project may say none"),),
                )  # fmt: skip

    def say_unknown(self, node: Name, space: Space) -> None:
        """Add the problem of a name that is not visible here."""
        name = node.name
        if space.is_told(name):
            return
        # where the mending is one line elsewhere, further uses say nothing new
        if name in space.partial or name in space.siblings:
            space.told.add(name)
            known = space.partial.get(name) or space.siblings[name]
            self.problems.add("arms-differ", node.span, f"`{name}` is given in some branches only",
                              expected="a name given in every branch of the block above", found=name,
                              hint="use it inside those branches, or give it in the others too",
                              related=((known.span, "given here"),))  # fmt: skip
        elif name in space.later:
            space.told.add(name)
            self.problems.add(
                "used-before-given",
                node.span,
                f"`{name}` is given further down",
                expected="a name given above",
                found=name,
                hint="the order on the page is the order of work: move the line that gives it up",
            )
        else:
            hint = self.problems.near(name, space.names)
            if not hint:
                space.told.add(name)
            self.problems.add("unknown-name", node.span, f"`{name[:40]}` is not known here",
                              expected="a name given above", found=name[:40],
                              hint=hint or "give it: under `given`, or by a line above this one")  # fmt: skip

    def hold_open(self, sets: tuple[int, ...], name: str, span: Span, at: Context) -> None:
        """Report a value used where one of its sets is not open."""
        closed = [self.sets[index].name for index in sets if index >= 0 and index not in at.open]
        # a set that could not be made out may be the one
        if closed and -1 not in at.open:
            self.problems.add(
                "row-leak",
                span,
                f"`{name}` has a value for every row of `{closed[0]}`",
                expected=f"a use in `each: {closed[0]}`, or in sum(… over {closed[0]}) and its kin",
                found="a use outside",
            )

    def _look_over(self, node: Over, space: Space, at: Context) -> None:
        index = self.set_named(node.rows, node.rows_span, space)
        inner = replace(at, open=(*at.open, index))
        if index >= 0:
            self.hold_open(self.sets[index].outer, node.rows, node.rows_span, at)
        else:
            # what is not known here may be a column of that set
            space = replace(space, told={EVERY})
        self.look(node.body, space, inner)
        if node.where is not None:
            self.look(node.where, space, inner)
        if node.otherwise is not None:
            self.look(node.otherwise, space, at)

    def _look_is(self, node: Is, space: Space, at: Context) -> None:
        found, word = space.names.get(node.name.name), node.word
        end = node.span.end - node.span.start
        place = node.span.part(end - len(word), end)
        if isinstance(found, RowSet):
            self.hold_open((found.index,), found.name, node.name.span, at)
            self.hold_row(word, found, place)
            return
        self.look_name(node.name, space, at)
        if isinstance(found, Slot) and word not in found.symbol.words:
            words = found.symbol.words
            expected = listed(words) if words else f"a comparison: {found.symbol.name} is not a word"
            self.problems.add("not-a-word", place, f"`{word[:40]}` is not a word of `{found.symbol.name}`",
                              expected=expected, found=word[:40], hint=self.problems.near(word, words))  # fmt: skip

    def hold_row(self, name: str, rows: RowSet, span: Span) -> None:
        """Report a row name that a set cannot have."""
        known = rows.row_names
        if known and name not in known and not fits(name, known, known):
            self.problems.add("not-a-row", span, f"`{rows.name}` has no row `{name[:40]}`", expected=listed(known),
                              found=name[:40], hint=self.problems.near(name, known))  # fmt: skip


def assured(node: Condition, space: Space) -> frozenset[int]:
    """Return the slots a condition that holds shows to be given."""
    match node:
        case IsGiven(name):
            return _slot_of(name, space)
        case Logic("and", left, right):
            return assured(left, space) | assured(right, space)
        case _:
            return frozenset()


def _slot_of(name: Name, space: Space) -> frozenset[int]:
    found = space.names.get(name.name)
    return frozenset({found.index}) if isinstance(found, Slot) else frozenset()


def _word_of(node: Expression, space: Space) -> Name | None:
    """Return a side of a comparison that is the name of a word."""
    found = space.names.get(node.name) if isinstance(node, Name) else None
    return node if isinstance(node, Name) and isinstance(found, Slot) and found.symbol.kind == "word" else None


def _is_ambiguous(node: Number, space: Space) -> bool:
    return node.unit is not None and node.unit.text in space.names


def _bound(node: Node, space: Space) -> Node:
    """Return a node with its name, set or open row bound; what a problem was told about stays unbound."""
    match node:
        case Number() if _is_ambiguous(node, space):
            return Name(node.text, node.span)
        case Name(name):
            found = space.names.get(name)
            return replace(node, slot=found.index) if isinstance(found, Slot) else node
        case Over(_, _, name) | Is(Name(name)):
            found = space.names.get(name)
            return replace(node, bound=found.index) if isinstance(found, RowSet) else node
        case _:
            return node
