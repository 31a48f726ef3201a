"""Values into a method and its result back into slots: numbers in base units, rows in their order.

A planned method and `Values` in; what the method takes out, and its result kept.
"""

from __future__ import annotations

from collections.abc import Callable

from calcreport.calculate.model import PlannedMethod, Values
from calcreport.core.expression import Expression
from calcreport.core.methods import METHODS
from calcreport.methods.results import Handed, Result


def hand_over(line: PlannedMethod, values: Values, work: Callable[[Expression], float]) -> Handed:
    """Return the inputs of a method by name; `work` is the value of a formula in the open rows."""
    takes, sets = METHODS[line.kind].takes, {given.name: given.rows for given in line.inputs if given.rows >= 0}
    handed: Handed = {}
    for given in line.inputs:
        if given.formula is None:
            handed[given.name] = given.word or float(len(values.row_names(given.rows)))
        elif takes[given.name].shape == "row number":
            handed[given.name] = _by_row(given.formula, sets[takes[given.name].rows], values, work)
        else:
            handed[given.name] = work(given.formula)
    return handed


def _by_row(formula: Expression, rows: int, values: Values, work: Callable[[Expression], float]) -> tuple[float, ...]:
    before, found = values.open[rows], []
    for row in range(len(values.row_names(rows))):
        values.open[rows] = row
        found.append(work(formula))
    values.open[rows] = before
    return tuple(found)


def keep_result(line: PlannedMethod, result: Result, values: Values, put: Callable[[int, float], None]) -> None:
    """Store the outputs a line takes; `put` fills a slot in the open rows."""
    ours = {name: index for index, name in line.sets}
    for index, name in line.sets:
        outer = tuple(values.open[other] for other in values.outer[index])
        values.names[index][outer] = result.sets[name].names
    for slot, name in line.outputs:
        owner = next((made for made in result.sets if name in result.sets[made].columns), "")
        if not owner:
            put(slot, result.outputs[name])
            values.by_method[slot, values.key(slot)] = line
            continue
        before = values.open[ours[owner]]
        for row, value in enumerate(result.sets[owner].columns[name]):
            values.open[ours[owner]] = row
            put(slot, value)
            values.by_method[slot, values.key(slot)] = line
        values.open[ours[owner]] = before
