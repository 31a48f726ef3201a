"""Values into a method and its result back into slots: numbers in base units, rows in their order.

A planned method and `Values` in; what the method takes out, and its result kept.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from calcreport.calculate.model import BoundInput, PlannedMethod, Values
from calcreport.core.expression import Expression
from calcreport.core.methods import METHODS
from calcreport.methods.results import Handed, Result


def hand_over(line: PlannedMethod, values: Values, work: Callable[[Expression], float]) -> Handed:
    """Return the inputs of a method by name; `work` is the value of a formula in the open rows."""
    takes, sets = METHODS[line.kind].takes, {given.name: given.rows for given in line.inputs if given.rows >= 0}
    handed: Handed = {}
    for given in line.inputs:
        if given.rows >= 0:
            handed[given.name] = values.row_names(given.rows)
        else:
            rows = tuple(sets[name] for name in takes[given.name].rows)
            handed[given.name] = _by_row(given, rows, values, work)
    return handed


def _by_row(given: BoundInput, rows: tuple[int, ...], values: Values, work: Callable[[Expression], float]) -> Any:
    """Return a number or a word; a tuple with one for every row of the first of `rows`, and so on inside it."""
    if not rows and given.formula is not None:
        return work(given.formula)
    if not rows:
        return given.word or values.get(given.slot, values.key(given.slot))
    before, found = values.open[rows[0]], []
    for row in range(len(values.row_names(rows[0]))):
        values.open[rows[0]] = row
        found.append(_by_row(given, rows[1:], values, work))
    values.open[rows[0]] = before
    return tuple(found)


def keep_result(line: PlannedMethod, result: Result, values: Values, put: Callable[[int, float], None]) -> None:
    """Store the outputs a line takes; `put` fills a slot in the open rows."""
    for index, name in line.sets:
        outer = values.outer[index]
        for key, names in result.sets[name].items():
            around = tuple(values.open[other] for other in outer[: len(outer) - len(key)])
            values.names[index][(*around, *key)] = names
    for slot, name in line.outputs:
        over = METHODS[line.kind].gives[name].over
        own = values.sets[slot][len(values.sets[slot]) - len(over) :]
        before = [values.open[index] for index in own]
        for key, value in result.by_row[name].items() if over else (((), result.outputs[name]),):
            for index, row in zip(own, key, strict=True):
                values.open[index] = row
            put(slot, value)
            values.by_method[slot, values.key(slot)] = line
        for index, row in zip(own, before, strict=True):
            values.open[index] = row
