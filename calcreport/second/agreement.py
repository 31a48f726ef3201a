"""Holds the first path's values against the second path's, for a whole project.

`WorkedProject` in, an `Agreement` out: how many values and verdicts were compared, the largest difference, and
every line that differs by more than one part in a thousand million.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial
from typing import Any

from calcreport.calculate.model import Key, Worked, WorkedProject, row_cells
from calcreport.core.quantity import Amount
from calcreport.plan.model import (
    BarCallout,
    GivenPairs,
    GivenRows,
    GivenValue,
    LinkedRows,
    LinkedValue,
    PlannedGiven,
    PlannedMethod,
)
from calcreport.second.closing import Found
from calcreport.second.quantities import Quantities, make_quantities
from calcreport.second.rework import Rework, Stopped

WITHIN = 1e-9


@dataclass(frozen=True, slots=True)
class Difference:
    """One value or verdict on which the two paths part."""

    #: 'B1.phiM_n', or 'B1.flexure' for a verdict
    name: str
    first: str
    second: str


@dataclass(frozen=True, slots=True)
class Agreement:
    """What the comparison came to."""

    values: int
    verdicts: int
    #: largest relative difference of any value
    largest: float
    differences: tuple[Difference, ...]

    def with_more(self, other: Agreement) -> Agreement:
        """Return both comparisons together."""
        return Agreement(
            self.values + other.values,
            self.verdicts + other.verdicts,
            max(self.largest, other.largest),
            self.differences + other.differences,
        )

    @property
    def words(self) -> tuple[str, ...]:
        """What a disclosure says of it: the count and the largest difference, then every line that differs."""
        first = (
            f"{self.values} values and {self.verdicts} verdicts were worked again from the project file's own "
            "spellings, in thirty-digit arithmetic with quantities and another library's unit factors; only the "
            "formulas are shared. "
            f"Largest relative difference {_power_of_ten(self.largest)}; "
            f"{len(self.differences) or 'none'} beyond one part in 1,000,000,000."
        )
        return (first, *(f"{d.name}: {d.first} by the first path, {d.second} by the second." for d in self.differences))


def _power_of_ten(value: float) -> str:
    """Return '2.3 × 10^-15' for a small number, '0' for none."""
    if value == 0:
        return "0"
    mantissa, _, power = f"{value:.1e}".partition("e")
    return f"{mantissa} × 10^{int(power)}"


def compare_paths(project: WorkedProject, make: Quantities | None = None) -> Agreement:
    """Work every calculation again and compare; `make` saves loading the libraries anew."""
    make = make or make_quantities()
    again: dict[str, Rework] = {}
    total = Agreement(0, 0, 0.0, ())
    for place in project.order:
        worked = project.calculations[place]
        selection = worked.selection
        for other in selection.tried if selection else ():
            if selection and other.place != selection.used:
                total = total.with_more(_compare(other.worked, again, make)[1])
        again[worked.calculation.mark], found = _compare(worked, again, make)
        total = total.with_more(found)
    return total


def _compare(worked: Worked, again: dict[str, Rework], make: Quantities) -> tuple[Rework, Agreement]:
    """Work one calculation again and compare."""
    mark = worked.calculation.mark
    found: list[Difference] = []
    rework = Rework(
        worked.plan, make, partial(_given_names, worked, again), partial(_root, worked), partial(_found, worked)
    )
    _hand(worked, rework, again, make)
    stopped = ""
    try:
        rework.run()
    except Stopped as error:
        stopped = str(error)
    if bool(stopped) != bool(worked.stop):
        found.append(Difference(f"{mark} stop", worked.stop.told if worked.stop else "none", stopped or "none"))
    count, largest, differing = _compare_values(worked, rework)
    found += differing
    judged = [check for check in worked.checks if check.verdict in ("OK", "NG")]
    for check, (name, ok) in zip(judged, rework.verdicts, strict=False):
        if check.line.name != name or (check.verdict == "OK") != ok:
            found.append(Difference(f"{mark}.{check.line.name}", check.verdict, "OK" if ok else "NG"))
    if len(judged) != len(rework.verdicts):
        found.append(Difference(f"{mark} checks", str(len(judged)), str(len(rework.verdicts))))
    return rework, Agreement(count, len(judged), largest, tuple(found))


def _given_names(worked: Worked, again: dict[str, Rework], index: int) -> list[tuple[Key, tuple[str, ...]]]:
    """Return the row names of a set handed over; sets made on the sheet, here or there, are made again."""
    for planned in worked.plan.givens:
        value = next(v for v in worked.calculation.given if v.given.name == planned.given.name)
        if isinstance(value, GivenRows) and planned.rows == index:
            if value.linked is not None:
                return [((), _linked_names(value.linked, again[value.linked.mark]))]
            return [((), value.names)]
        for place, column in enumerate(planned.columns):
            if isinstance(value, GivenRows) and column.rows == index:
                inner = [(row, cells[place]) for row, cells in enumerate(value.cells)]
                return [((row,), cell.names) for row, cell in inner if isinstance(cell, GivenRows)]
    return []


def _linked_names(linked: LinkedRows, source: Rework) -> tuple[str, ...]:
    """Return the names of the rows another calculation made, by the second path."""
    named = [source.plan.slots[source.plan.by_path[name.name]] for _, name in linked.columns]
    rows = [source.plan.sets[index] for slot in named for index in slot.sets] or list(source.plan.sets)
    owner = next(one for one in rows if one.name == linked.rows.name)
    at = {name.name: row.name for name, row in linked.at}
    key: Key = ()
    for outer in owner.outer:
        one = source.plan.sets[outer]
        key = (*key, source.names[outer, key[: len(one.outer)]].index(at[one.name]))
    return source.names[owner.index, key]


def _root(worked: Worked, slot: int, key: Key) -> float:
    """Return a root of the first path in its declared unit."""
    unit = worked.plan.slots[slot].symbol.unit
    assert unit is not None
    return worked.values.number(slot, key) / unit.size


def _found(worked: Worked, line: PlannedMethod, opened: tuple[tuple[int, int], ...]) -> Found:
    """Return what a method of the first path came to; `Stopped` where the first path came to nothing."""
    result = worked.values.results.get((id(line), opened))
    if result is None:
        raise Stopped(f"{line.kind}: the first path came to no result")
    return Found(result.outputs, result.sets, result.by_row)


def _hand(worked: Worked, rework: Rework, again: dict[str, Rework], make: Quantities) -> None:
    """Give the second path the values as they were typed."""
    planned = {given.given.name: given for given in worked.plan.givens}
    for value in worked.calculation.given:
        owner = planned[value.given.name]
        match value:
            case GivenValue():
                _hand_one(owner, value, (), rework, again, make)
            case GivenRows():
                for column, key, cell in row_cells(owner, value):
                    _hand_one(column, cell, key, rework, again, make)
            case GivenPairs():
                names = [rework.names.get((index, ()), ()) for index in owner.over]
                for key in _keys([len(n) for n in names]):
                    rework.values[owner.slot, key] = _worth(value.given.if_none, make)
                for row_names, cell in value.cells:
                    key = tuple(n.index(r) for n, r in zip(names, row_names, strict=True))
                    _hand_one(owner, cell, key, rework, again, make)


def _keys(counts: list[int]) -> list[Key]:
    keys: list[Key] = [()]
    for count in counts:
        keys = [(*key, row) for key in keys for row in range(count)]
    return keys


def _worth(handed: Amount | str | None, make: Quantities) -> Any:
    if isinstance(handed, Amount):
        return make.read(handed.text)
    return None if handed in ("absent", None) else handed


def _hand_one(
    owner: PlannedGiven, value: GivenValue, key: Key, rework: Rework, again: dict[str, Rework], make: Quantities
) -> None:
    handed = value.value
    match handed:
        case Amount():
            rework.values[owner.slot, key] = make.read(handed.text)
        case LinkedValue():
            rework.values[owner.slot, key] = _linked(handed, again[handed.mark])
        case BarCallout():
            rework.values[owner.slot, key] = handed.text
            for slot, (_, output) in zip(owner.outputs, owner.given.gives, strict=True):
                rework.values[slot, key] = _callout(handed, output, make)
        case _:
            rework.values[owner.slot, key] = handed
            if handed is None:
                for slot in owner.outputs:
                    rework.values[slot, key] = None


def _linked(link: LinkedValue, source: Rework) -> Any:
    *steps, symbol = link.path.split("].")
    slot = source.plan.by_path[symbol]
    key: list[int] = []
    for step, index in zip(steps, source.plan.slots[slot].sets, strict=True):
        outer = len(source.plan.sets[index].outer)
        key.append(source.names[index, tuple(key[:outer])].index(step.partition("[")[2]))
    return source.values[slot, tuple(key)]


def _callout(callout: BarCallout, output: str, make: Quantities) -> Any:
    match output:
        case "area":
            total = 0 * make.read(callout.groups[0].area.text)
            for group in callout.groups:
                total = total + group.count * make.read(group.area.text)
            return total
        case "diameter":
            return make.read(callout.groups[0].diameter.text)
        case "count":
            return make.pure(sum(group.count for group in callout.groups))
        case _:
            assert callout.spacing is not None
            return make.read(callout.spacing.text)


def _compare_values(worked: Worked, rework: Rework) -> tuple[int, float, list[Difference]]:
    """Compare every number of one calculation in its declared unit."""
    count, largest = 0, 0.0
    found: list[Difference] = []
    mark = worked.calculation.mark
    for slot in worked.plan.slots:
        unit = slot.symbol.unit
        keys = list(worked.values.rows[slot.index]) if slot.sets else [()]
        for key in keys:
            first, second = worked.values.get(slot.index, key), rework.values.get((slot.index, key))
            if unit is None or not isinstance(first, float):
                if first != second:
                    found.append(Difference(f"{mark}.{slot.path}", str(first), str(second)))
                continue
            count += 1
            if second is None or isinstance(second, str):
                found.append(Difference(f"{mark}.{slot.path}", f"{first / unit.size:.12g}", str(second)))
                continue
            one = rework.make.unit(unit.factors)
            number = (rework.alike(second, one)[0] / one).to("").magnitude
            gap = abs(float(number) - first / unit.size) / max(abs(float(number)), 1e-30)
            gap = 0.0 if abs(float(number)) < 1e-12 and abs(first / unit.size) < 1e-9 else gap
            largest = max(largest, gap)
            if gap > WITHIN:
                found.append(Difference(f"{mark}.{slot.path}", f"{first / unit.size:.12g}", f"{float(number):.12g}"))
    return count, largest, found
