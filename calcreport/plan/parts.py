"""What a part is handed, and what its user sees of it afterwards.

Part lines and name spaces in, planned lines for handed formulas out; adds `part-not-handed`, `part-clash` and kin.
"""

from __future__ import annotations

from collections.abc import Iterator
from decimal import Decimal
from functools import reduce

from calcreport.core.expression import Compare, Condition, IsGiven, Logic, Name, Not, Number
from calcreport.core.problems import Problems, listed
from calcreport.core.quantity import Amount
from calcreport.core.source import Citation, Span
from calcreport.core.units import dimension_words
from calcreport.plan.model import Given, PlannedArm, PlannedGives, PlannedLine, PlannedRequire, RowSet, Slot
from calcreport.plan.names import Names
from calcreport.plan.space import Context, Known, Maker, Space
from calcreport.read.model import PartBody, PartUse


class PartHander:
    """Hands values over to parts."""

    def __init__(self, names: Names, maker: Maker, problems: Problems) -> None:
        self.names, self.maker, self.problems = names, maker, problems

    def inner_space(self, line: PartUse, body: PartBody, space: Space, later: frozenset[str]) -> Space:
        """Return a part's name space: empty for a file, all that is visible for an entry of `parts`."""
        mark = f"{line.stem}." if line.stem else ""
        siblings = {name.removeprefix(mark): value for name, value in space.siblings.items() if name.startswith(mark)}
        if not body.sees_user:
            return Space({}, later, space.stem + mark, siblings, told=set(body.told))
        space.told |= body.told
        names = {name: value for name, value in space.names.items() if name not in later}
        return Space(names, later | space.later, space.stem + mark, siblings, dict(space.partial), space.told)

    def hand_over(
        self, line: PartUse, body: PartBody, space: Space, inner: Space, at: Context
    ) -> tuple[PlannedLine, ...]:
        """Bind the part's givens to what it is handed; what is missing counts as told of inside the part."""
        wanted = {given.name: given for given in body.given}
        lines: list[PlannedLine] = []
        for name in line.same:
            given = wanted.get(name.name)
            if given is None:
                self._say_not_wanted(name, wanted, line, inner)
            else:
                self._hand_same(given, name, space, inner, at)
        for name, formula in line.handed:
            given = wanted.get(name.name)
            if given is None:
                self._say_not_wanted(name, wanted, line, inner)
            elif formula is None:
                inner.told.add(name.name)
            elif given.symbol is None or given.kind not in ("value", "pairs"):
                self.problems.add("part-not-handed", name.span, f"`{name.name}` of the part is {_kind(given)}",
                                  expected=f"`same: [{name.name}]`", found="a formula under `with`")  # fmt: skip
                inner.told.add(name.name)
            else:
                bound = self.names.value(formula, given.symbol, space, at)
                slot = self.maker.slot(given.symbol, inner, at.open, name.span)
                lines.append(PlannedGives(slot.index, (PlannedArm(None, bound),), Citation("", "geometry"), None, True,
                                          name.span))  # fmt: skip
        missing = [name for name in wanted if name not in inner.names and name not in inner.told]
        if missing:
            self.problems.add(
                "part-not-handed", line.name.span, f"the part `{line.name.name}` is not handed all it needs",
                expected=", ".join(missing), found="neither under `same` nor under `with`",
            )  # fmt: skip
        for given in body.given:
            for inner_name in given.names():
                if inner_name not in inner.names:
                    inner.told.add(inner_name)
        return (*lines, *_ranges(line, body, inner, at))

    def _hand_same(self, given: Given, name: Name, space: Space, inner: Space, at: Context) -> None:
        """Let a part see our value or set of the same name."""
        found = space.names.get(name.name)
        inner.told.add(name.name)
        if found is None:
            self.names.say_unknown(name, space)
        elif isinstance(found, RowSet) != (given.kind == "rows"):
            kind = "a set" if isinstance(found, RowSet) else "a value"
            self.problems.add("part-not-handed", name.span, f"`{name.name}` is {kind} here",
                              expected=f"{_kind(given)}, which the part takes", found=kind)  # fmt: skip
        elif isinstance(found, RowSet):
            self.names.hold_open(found.outer, name.name, name.span, at)
            if self._hand_columns(given, found, name, space, inner):
                inner.names[name.name] = found
        elif self._fits(given, found, name):
            if given.if_none == "absent":
                self.names.hold_open(found.sets, name.name, name.span, at)
            else:
                self.names.look_name(name, space, at)
            inner.names[name.name] = found
            for symbol, _ in given.gives:
                self._take(symbol.name, space, inner)

    def _hand_columns(self, given: Given, rows: RowSet, name: Name, space: Space, inner: Space) -> bool:
        missing: list[str] = []
        for column in given.columns:
            for wanted in column.names():
                found = space.names.get(wanted)
                if isinstance(found, Slot) and rows.index in found.sets:
                    self._take(wanted, space, inner)
                else:
                    missing.append(wanted)
        if missing:
            self.problems.add("part-not-handed", name.span, f"the rows of `{name.name}` lack columns the part takes",
                              expected=", ".join(missing), found="no such column here")  # fmt: skip
        return not missing

    def _take(self, name: str, space: Space, inner: Space) -> None:
        found = space.names.get(name)
        if found is not None:
            inner.names[name] = found

    def _fits(self, given: Given, found: Known, name: Name) -> bool:
        """Hold our symbol against the part's: the same dimension, or words among its words."""
        assert isinstance(found, Slot)
        theirs, ours = given.symbol, found.symbol
        if theirs is None or (theirs.unit is None and ours.unit is None and set(ours.words) <= set(theirs.words)):
            return True
        if theirs.unit is not None and ours.unit is not None and theirs.unit.dimension == ours.unit.dimension:
            return True
        self.problems.add(
            "unit-mismatch", name.span, f"`{name.name}` is not what the part takes",
            expected=dimension_words(theirs.unit.dimension) if theirs.unit else listed(theirs.words),
            found=dimension_words(ours.unit.dimension) if ours.unit else listed(ours.words),
            related=((given.span, "the part takes it here"),),
        )  # fmt: skip
        return False

    def _say_not_wanted(self, name: Name, wanted: dict[str, Given], line: PartUse, inner: Space) -> None:
        """Add `unknown-given`; a given that the name seems to mean is not missing besides."""
        if inner.is_told(name.name):
            return
        inner.told.update(self.problems.close(name.name, wanted))
        self.problems.add("unknown-given", name.span, f"the part `{line.name.name}` takes no `{name.name[:40]}`",
                          expected=listed(wanted), found=name.name[:40],
                          hint=self.problems.near(name.name, wanted))  # fmt: skip

    def publish(self, line: PartUse, body: PartBody, inner: Space, space: Space, hidden: set[str]) -> None:
        """Let the user see what the part gives, under its stem if it has one."""
        told = {name.name for name in body.gives}
        mark = f"{line.stem}." if line.stem else ""
        if not body.sees_user:
            # what was handed over well is known, and a wrong use of it by the user is still to be told
            space.told |= {mark + name for name in inner.told if name not in inner.names}
        taken: dict[str, Known] = {}
        for name, value in inner.names.items():
            if name in hidden or (told and name not in told):
                continue
            known = space.names.get(mark + name) or space.partial.get(mark + name)
            if known is not None and known is not value:
                taken[name] = known
            else:
                space.names[mark + name] = value
        if taken:
            first, *more = taken
            also = "" if not more else f", with {len(more)} more"
            self.problems.add(
                "part-clash",
                line.name.span,
                f"the part `{line.name.name}` gives `{first}`, which stands already{also}",
                expected="names that are free",
                found=", ".join(taken),
                hint=f"write `as: name`, and use name.{first}",
                related=((taken[first].span, "given here"),),
            )


def _kind(given: Given) -> str:
    return {"rows": "a set", "bars": "a bar callout", "spaced bars": "a bar callout"}.get(given.kind, "a value")


def _ranges(line: PartUse, body: PartBody, inner: Space, at: Context) -> Iterator[PlannedRequire]:
    """Yield the ranges of the part's givens as requirements on what it is handed; columns keep those of their table."""
    for given in body.given:
        found, span = inner.names.get(given.name), line.span
        if given.range is None or not isinstance(found, Slot) or not set(found.sets) <= set(at.open):
            continue
        name, limits = Name(given.name, span, found.index), given.range
        sides: list[Condition] = []
        if limits.low is not None:
            sides.append(Compare(">" if limits.low_open else ">=", name, _number(limits.low, span), span))
        if limits.high is not None:
            sides.append(Compare("<" if limits.high_open else "<=", name, _number(limits.high, span), span))
        held = reduce(lambda left, right: Logic("and", left, right, span), sides)
        if given.if_none == "absent":
            held = Logic("or", Not(IsGiven(name, span), span), held, span)
        says = f"{body.title or line.name.name} covers {limits.words(given.name)}"
        yield PlannedRequire(held, says, Citation("", ""), span, silent=True)


def _number(amount: Amount, span: Span) -> Number:
    """Return an amount as a number of a formula, in the unit it was typed in."""
    value = amount.value / amount.unit.scale
    return Number(value, str(Decimal(value.numerator) / Decimal(value.denominator)), amount.unit, span)
