"""Numbers the lines of a calculation as they are told: given values, and what a method takes, gives and is proved by.

A `Writer` gathers items and line numbers; `report.script` decides their order.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcreport.calculate.model import Key, PlannedGiven, Worked, WorkedMethod
from calcreport.report.alike import alike
from calcreport.report.items import (
    Item,
    SayAlike,
    SayGivens,
    SayMethod,
    SayOutput,
    SayOutputs,
    SayProof,
    SayRows,
)


@dataclass(slots=True)
class Writer:
    """Items so far, and the line number of every value and check."""

    worked: Worked
    items: list[Item] = field(default_factory=list)
    line_of: dict[tuple[int, Key], int] = field(default_factory=dict)
    check_line: dict[int, int] = field(default_factory=dict)
    number: int = 0
    #: what parts came to that are words alone
    said: set[tuple[tuple[str, tuple[str | int, ...]], ...]] = field(default_factory=set)

    def next(self) -> int:
        self.number += 1
        return self.number


def tell_givens(writer: Writer) -> None:
    """Number the given values: single ones in a table, like ones in a line, sets and pairs by themselves."""
    joined = alike(writer.worked)
    own = [given for given in writer.worked.plan.givens if given.rows < 0 and not given.over]
    rows = []
    for given in own:
        if any(given in givens for givens in joined.values()):
            continue
        number = writer.next()
        rows.append((number, given))
        for slot in (given.slot, *given.outputs):
            writer.line_of[slot, ()] = number
    if rows:
        writer.items.append(SayGivens(tuple(rows)))
    for word, givens in joined.items():
        number = writer.next()
        writer.items.append(SayAlike(number, word, givens))
        for given in givens:
            for slot in (given.slot, *given.outputs):
                writer.line_of[slot, ()] = number
    for given in writer.worked.plan.givens:
        if given.rows >= 0 or given.over:
            _given_table(writer, given)


def _given_table(writer: Writer, given: PlannedGiven) -> None:
    number = writer.next()
    writer.items.append(SayRows(number, given))
    columns = given.columns if given.rows >= 0 else (given,)
    for column in columns:
        if column.rows < 0:
            _number_column(writer, column, number)
            continue
        alone = is_single(column, writer.worked)
        own = number if alone else writer.next()
        if not alone:
            writer.items.append(SayRows(own, column, given))
        for inner in column.columns:
            _number_column(writer, inner, own)


def _number_column(writer: Writer, column: PlannedGiven, number: int) -> None:
    for slot in (column.slot, *column.outputs):
        for key in writer.worked.values.rows[slot]:
            writer.line_of[slot, key] = number


def is_single(column: PlannedGiven, worked: Worked) -> bool:
    """Tell whether every member has one row of a set, so that the table of members can show it."""
    return all(len(names) == 1 for names in worked.values.names[column.rows].values())


def tell_method(writer: Writer, line: WorkedMethod) -> None:
    """Number a method, the values it gives, its tables, and every sum that proves them.

    Outputs over the same rows stand in one table; one that is not printed has the number of the method.
    """
    values, number = writer.worked.values, writer.next()
    writer.items.append(SayMethod(number, line))
    opened, shown = dict(line.open), line.line.table
    groups: dict[tuple[int, ...], list[int]] = {}
    for slot, _ in line.line.outputs:
        own = tuple(index for index in values.sets[slot] if index not in opened)
        if shown is None or slot in shown:
            groups.setdefault(own, []).append(slot)
    for own, slots in groups.items():
        if own:
            writer.items.append(SayOutputs(writer.next(), number, line, own, tuple(slots)))
        for slot in slots:
            if not own:
                key = tuple(opened[index] for index in values.sets[slot])
                writer.items.append(SayOutput(writer.next(), number, slot, key))
                writer.line_of[slot, key] = writer.number
    told = {slot: item.number for item in writer.items if isinstance(item, SayOutputs) for slot in item.columns}
    for slot, key in line.places(values):
        if (slot, key) not in writer.line_of:
            writer.line_of[slot, key] = told.get(slot, number)
    for place in range(len(line.result.proofs)):
        writer.items.append(SayProof(writer.next(), number, line, place))
