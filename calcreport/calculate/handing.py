"""Puts given values into the slots of a plan: amounts, words, callouts, rows, pairs and links.

`Calculation` and `Plan` in, `Values` out. Links read the finished values of the calculation they name.
"""

from __future__ import annotations

from fractions import Fraction

from calcreport.calculate.exact import exact_or_float
from calcreport.calculate.linking import find_path
from calcreport.calculate.model import (
    BarCallout,
    Calculation,
    GivenPairs,
    GivenRows,
    GivenValue,
    Key,
    LinkedValue,
    Plan,
    PlannedGiven,
    Value,
    Values,
    Worked,
)
from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount


def empty_values(plan: Plan) -> Values:
    """Return values with nothing in them yet."""
    sets = tuple(slot.sets for slot in plan.slots)
    outer = tuple(rows.outer for rows in plan.sets)
    return Values([None] * len(sets), [{} for _ in sets], [0] * len(outer), [{} for _ in outer], sets, outer)


def hand_values(calculation: Calculation, plan: Plan, worked: dict[str, Worked], problems: Problems) -> Values:
    """Return values holding all that was given; adds problems about rows and links."""
    hander = _Hander(plan, empty_values(plan), worked, problems)
    found = {value.given.name: value for value in calculation.given}
    for planned in plan.givens:
        value = found.get(planned.given.name)
        if isinstance(value, GivenRows):
            hander.rows(planned, value, ())
    for planned in plan.givens:
        value = found.get(planned.given.name)
        if isinstance(value, GivenValue):
            hander.value(planned, value, ())
        elif isinstance(value, GivenPairs):
            hander.pairs(planned, value)
    return hander.values


class _Hander:
    def __init__(self, plan: Plan, values: Values, worked: dict[str, Worked], problems: Problems) -> None:
        self.plan, self.values, self.worked, self.problems = plan, values, worked, problems

    def rows(self, planned: PlannedGiven, value: GivenRows, outer: Key) -> None:
        self.values.names[planned.rows][outer] = value.names
        for row, cells in enumerate(value.cells):
            by_name = {cell.given.name: cell for cell in cells}
            for column in planned.columns:
                cell = by_name[column.given.name]
                if isinstance(cell, GivenRows):
                    self.rows(column, cell, (*outer, row))
                else:
                    self.value(column, cell, (*outer, row))

    def value(self, planned: PlannedGiven, value: GivenValue, key: Key) -> None:
        handed = value.value
        if isinstance(handed, LinkedValue):
            self.link(planned.slot, handed, key)
        else:
            self.put(planned.slot, handed, key)
        if isinstance(handed, BarCallout):
            for slot, (_, output) in zip(planned.outputs, planned.given.gives, strict=True):
                self.exact(slot, key, callout_output(handed, output))

    def put(self, slot: int, handed: Amount | str | BarCallout | None, key: Key) -> None:
        if isinstance(handed, Amount):
            self.exact(slot, key, handed.value)
        else:
            self.store(slot, key, handed.text if isinstance(handed, BarCallout) else handed)

    def exact(self, slot: int, key: Key, amount: Fraction) -> None:
        self.values.given[slot, key] = amount
        self.store(slot, key, float(amount))

    def store(self, slot: int, key: Key, value: Value) -> None:
        if self.values.sets[slot]:
            self.values.rows[slot][key] = value
        else:
            self.values.plain[slot] = value

    def pairs(self, planned: PlannedGiven, value: GivenPairs) -> None:
        """Fill every pair of rows; a pair not named takes the worth of none, or is missing."""
        names = [self.values.names[index].get((), ()) for index in planned.over]
        filled: set[Key] = set()
        for row_names, cell in value.cells:
            for name, known in zip(row_names, names, strict=True):
                if name not in known:
                    self.problems.add(
                        "not-a-row",
                        cell.span,
                        f"`{value.given.name}` names a row `{name[:40]}` that is not given",
                        expected="one of " + ", ".join(known),
                        found=name[:40],
                        hint=self.problems.near(name, known),
                    )
                    return
            key = tuple(known.index(name) for name, known in zip(row_names, names, strict=True))
            self.value(planned, cell, key)
            filled.add(key)
        worth = value.given.if_none
        for key in _keys([len(known) for known in names]):
            if key in filled:
                continue
            if worth is None:
                words = ", ".join(known[row] for row, known in zip(key, names, strict=True))
                self.problems.add(
                    "missing-value",
                    value.span.part(0, 1),
                    f"`{value.given.name}` has no value for {words}",
                    expected="a value for every pair of rows",
                    found="no value",
                )
                return
            self.put(planned.slot, None if worth == "absent" else worth, key)

    def link(self, slot: int, linked: LinkedValue, key: Key) -> None:
        source = self.worked.get(linked.mark)
        if source is None:
            return
        place = find_path(source, linked.path, linked.span, self.problems)
        if place is None:
            return
        value = source.values.get(*place)
        if isinstance(value, float):
            self.exact(slot, key, exact_or_float(*place, source.values))
            self.store(slot, key, value)
        else:
            self.store(slot, key, value)


def callout_output(callout: BarCallout, output: str) -> Fraction:
    """Return what a callout gives, in base units: total area, largest diameter, count or spacing."""
    match output:
        case "area":
            return sum((group.count * group.area.value for group in callout.groups), Fraction(0))
        case "diameter":
            return max(group.diameter.value for group in callout.groups)
        case "count":
            return Fraction(sum(group.count for group in callout.groups))
        case _:
            assert callout.spacing is not None
            return callout.spacing.value


def _keys(counts: list[int]) -> list[Key]:
    keys: list[Key] = [()]
    for count in counts:
        keys = [(*key, row) for key in keys for row in range(count)]
    return keys
