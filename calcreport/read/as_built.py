"""Changes put into the inputs of a project: every value typed by the template's declaration, as the project's own is.

Inputs and changes in, inputs out. A value that another calculation hands over, that a line works, or that like members
have in common is refused: it is not to be set where it stands.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TypeAlias

from calcreport.core.problems import Problems, listed
from calcreport.core.quantity import Amount, read_in_unit
from calcreport.core.record import record
from calcreport.read.changes import AsBuilt, Change
from calcreport.read.library import Library
from calcreport.read.model import (
    MEMBER,
    BarCallout,
    Calculation,
    GivenPairs,
    GivenRows,
    GivenValue,
    Handed,
    Inputs,
    LinkedValue,
    ValueOrigin,
)
from calcreport.read.nodes import Scalar
from calcreport.read.single_values import SingleReader

Given: TypeAlias = GivenValue | GivenRows | GivenPairs


def build_otherwise(inputs: Inputs, built: AsBuilt, library: Library, problems: Problems) -> Inputs:
    """Return the inputs with what was built otherwise; the candidates of the design stay taken."""
    by_mark = {c.mark: c.taking(built.taken[c.mark]) if c.mark in built.taken else c for c in inputs.calculations}
    owner = {member: c.mark for c in inputs.calculations for member in c.members}
    for change in built.changes:
        mark = owner.get(change.mark, change.mark)
        calculation = by_mark.get(mark)
        if calculation is None:
            known = [*by_mark, *owner]
            problems.add("unknown-name", change.span, f"there is no calculation `{change.mark[:40]}`",
                         expected="the mark of a calculation or member of this project", found=change.mark[:40],
                         hint=problems.near(change.mark, known))  # fmt: skip
            continue
        if change.mark in owner:
            change = replace_steps(change, ((MEMBER, change.mark), *change.steps))
        by_mark[mark] = _Changer(calculation, change, built, library, problems).changed()
    return replace(inputs, calculations=tuple(by_mark[c.mark] for c in inputs.calculations))


def replace_steps(change: Change, steps: tuple[tuple[str, str], ...]) -> Change:
    """Return a change of a value in other rows."""
    return Change(change.mark, steps, change.name, change.sign, change.scalar, change.span)


@record
class _Changer:
    """Changes one value of one calculation."""

    calculation: Calculation
    change: Change
    built: AsBuilt
    library: Library
    problems: Problems

    def changed(self) -> Calculation:
        given = self.within(self.calculation.given, self.change.steps)
        return replace(self.calculation, given=given)

    def within(self, values: tuple[Given, ...], steps: tuple[tuple[str, str], ...]) -> tuple[Given, ...]:
        """Return given values of which one is changed; the same where a problem was told."""
        found: list[Given] = []
        met = False
        # the sets that a value is given for pairs of are given beside it, under the same names
        paired = bool(steps) and any(isinstance(v, GivenPairs) and v.given.name == self.change.name for v in values)
        for value in values:
            match value:
                case GivenValue() if not steps and value.given.name == self.change.name:
                    met = True
                    found.append(self.value(value))
                case GivenRows() if steps and value.given.name == steps[0][0] and not paired:
                    met = True
                    found.append(self.rows(value, steps))
                case GivenPairs() if steps and value.given.name == self.change.name:
                    met = True
                    found.append(self.pairs(value, steps))
                case _:
                    found.append(value)
        if not met:
            self.say_unknown(values, steps)
        return tuple(found)

    def rows(self, value: GivenRows, steps: tuple[tuple[str, str], ...]) -> GivenRows:
        if value.linked is not None:
            self.say_linked(value.linked.mark, value.linked.rows.name)
            return value
        row = steps[0][1]
        if row not in value.names:
            self.problems.add("not-a-row", self.change.span, f"`{value.given.name}` has no row named `{row[:40]}`",
                              expected=listed(value.names), found=row[:40],
                              hint=self.problems.near(row, value.names))  # fmt: skip
            return value
        place = value.names.index(row)
        inner = tuple(one for one in self.within(value.cells[place], steps[1:]) if not isinstance(one, GivenPairs))
        return replace(value, cells=(*value.cells[:place], inner, *value.cells[place + 1 :]))

    def pairs(self, value: GivenPairs, steps: tuple[tuple[str, str], ...]) -> GivenPairs:
        over = tuple(name.name for name in value.given.over)
        if tuple(name for name, _ in steps) != over:
            path = "".join(f"{name}[ROW]." for name in over) + self.change.name
            self.problems.add("not-a-change", self.change.span, f"`{self.change.name}` has a value for pairs of rows",
                              expected=f"{path}=VALUE", found=self.change.path)  # fmt: skip
            return value
        names = tuple(row for _, row in steps)
        before = next((cell for pair, cell in value.cells if pair == names), None)
        if before is None:
            none = GivenValue(value.given, None, ValueOrigin("none", ""), self.change.span)
            cells = (*value.cells, (names, self.value(none)))
        else:
            cell = self.value(before)
            cells = tuple((pair, cell if pair == names else one) for pair, one in value.cells)
        # pairs have one origin for all
        return replace(value, cells=cells, origin=ValueOrigin("source", self.built.source))

    def value(self, before: GivenValue) -> GivenValue:
        """Return the value as built."""
        if isinstance(before.value, LinkedValue):
            self.say_linked(before.value.mark, before.value.path)
            return before
        if before.given.criterion is not None:
            self.problems.add("not-a-change", self.change.span, f"`{self.named}` is a criterion of the whole project",
                              expected="a value of one calculation", found=before.given.criterion.name,
                              hint="change it under `criteria:`")  # fmt: skip
            return before
        template = self.calculation.template
        bars = self.library.bar_table(template.name, template.system)
        scalar = self.sum(before) if self.change.sign else self.change.scalar
        if scalar is None:
            return before
        found = SingleReader({}, bars, self.change.span, self.problems).value(before.given, scalar)
        if found is None:
            return before
        if _plain(found.value) == _plain(before.value):
            self.problems.add("not-a-change", scalar.span, f"`{self.named}` is {_shown(before.value)} as designed too",
                              expected="a value that differs", found=self.change.scalar.text[:40])  # fmt: skip
        return replace(found, origin=ValueOrigin("source", self.built.source))

    def sum(self, before: GivenValue) -> Scalar | None:
        """Return the value as designed with a difference added, written out in the unit of the difference."""
        symbol, text = before.given.symbol, self.change.scalar
        if symbol is None or symbol.unit is None or not isinstance(before.value, Amount):
            self.problems.add("not-a-change", self.change.span, f"`{self.named}` is no quantity to add to",
                              expected=f"{self.change.name}=VALUE", found=f"`{self.change.sign}=`")  # fmt: skip
            return None
        difference = read_in_unit(text.text, text.span, self.problems, symbol.unit)
        if difference is None:
            return None
        total = before.value.value + (difference.value if self.change.sign == "+" else -difference.value)
        unit = difference.unit
        number = _decimal(total / unit.scale)
        if not number:
            self.problems.add("not-a-change", text.span, f"the sum has no end in {unit.text}",
                              expected=f"{self.change.name}=VALUE, the value as built", found=text.text[:40],
                              )  # fmt: skip
            return None
        words = f"{number} {unit.text}" if unit.text != "1" else number
        return Scalar(words, text.span, False)

    @property
    def named(self) -> str:
        return f"{self.calculation.mark}.{self.change.path}"

    def say_linked(self, mark: str, path: str) -> None:
        self.problems.add("not-a-change", self.change.span, f"`{self.named}` is taken from {mark}.{path}",
                          expected="a change of what that line is worked from", found="a value in its place",
                          hint=f"name what {mark} is given, such as {mark}.NAME=VALUE")  # fmt: skip

    def say_unknown(self, values: tuple[Given, ...], steps: tuple[tuple[str, str], ...]) -> None:
        """Say why nothing of this name can be changed here."""
        name, mark = self.change.name, self.calculation.mark
        common = [value.given.name for value in self.calculation.given if value.given.name != MEMBER]
        rows = [row for row, _ in self.change.steps]
        if rows[:1] == [MEMBER] and (*rows[1:], name)[0] in common:
            self.problems.add("not-a-change", self.change.span, f"`{name}` is common to all members of {mark}",
                              expected="a value the member has for itself", found="one they share",
                              hint=f"{mark}.NAME=VALUE changes it for all of them")  # fmt: skip
        elif name in self.built.worked.get(mark, ()):
            self.problems.add("not-a-change", self.change.span, f"`{name}` is worked by a line of {mark}, not given",
                              expected="a change of what it is worked from: " + listed(_paths(values)),
                              found=name)  # fmt: skip
        else:
            known = _paths(values)
            self.problems.add("unknown-given", self.change.span, f"{mark} is given no `{self.change.path[:60]}`",
                              expected=listed(known), found=self.change.path[:60],
                              hint=self.problems.near(self.change.path, known))  # fmt: skip


def _paths(values: tuple[Given, ...]) -> list[str]:
    """Return what can be changed, rows of sets by their names."""
    found: list[str] = []
    for value in values:
        match value:
            case GivenRows():
                rows = zip(value.names, value.cells, strict=True)
                found += [f"{value.given.name}[{row}].{path}" for row, cells in rows for path in _paths(cells)]
            case GivenPairs():
                found.append("".join(f"{one.name}[ROW]." for one in value.given.over) + value.given.name)
            case _:
                found.append(value.given.name)
    return found


def _plain(value: Handed) -> object:
    match value:
        case Amount():
            return value.value
        case BarCallout():
            return value.text
    return value


def _shown(value: Handed) -> str:
    match value:
        case Amount() | BarCallout():
            return value.text
        case None:
            return "none"
    return str(value)


def _decimal(number: Fraction) -> str:
    """Return a number written out in decimals, or '' where it has no end within twelve places."""
    scaled = number * 10**12
    if scaled.denominator != 1:
        return ""
    whole, part = divmod(abs(scaled.numerator), 10**12)
    digits = f"{whole}.{part:012d}".rstrip("0").rstrip(".")
    return ("-" if number < 0 else "") + digits
