"""Given values as blocks: the table of single values, sets of rows, values over pairs; each with its origin.

A calculation as told in, blocks out.
"""

from __future__ import annotations

from calcreport.calculate.model import (
    GivenPairs,
    GivenRows,
    GivenValue,
    Key,
    LinkedValue,
    PlannedGiven,
    ValueOrigin,
)
from calcreport.core.quantity import Amount
from calcreport.core.units import NONE
from calcreport.report.display import show_symbol, unit_text
from calcreport.report.forms import link_place
from calcreport.report.model import (
    Block,
    Column,
    Formula,
    GivenRow,
    Letters,
    Reference,
    Row,
    SourceLane,
    Table,
    TableRow,
    Words,
)
from calcreport.report.notation import (
    relation,
)
from calcreport.report.script import (
    SayRows,
)
from calcreport.report.told import Told


class GivenBlocks:
    """Composes what a calculation was given."""

    def __init__(self, told: Told) -> None:
        self.told = told
        self.given = {value.given.name: value for value in told.worked.calculation.given}

    def given_row(self, number: int, planned: PlannedGiven) -> GivenRow:
        """Return the row of one given value."""
        value = self.given[planned.given.name]
        assert isinstance(value, GivenValue)
        shown = self.told.value(planned.slot, ())
        if planned.outputs:
            shown = self.with_outputs(shown, planned, ())
        if value.origin.kind == "none":
            worth = self.told.values.get(planned.slot)
            shown = Letters("none") if worth is None else Row((Letters("none ("), shown, Letters(")")))
        shown = self.as_typed(shown, value, planned.slot)
        symbol = self.told.slots[planned.slot].symbol
        return GivenRow(
            number,
            self.told.anchor(number),
            show_symbol(symbol),
            (planned.given.says,),
            shown,
            self.origin(value.origin, value.value),
        )

    def as_typed(self, shown: Formula, value: GivenValue, slot: int) -> Formula:
        """Add the typed spelling where it is in another unit than the one used."""
        handed, unit = value.value, self.told.slots[slot].symbol.unit
        if not isinstance(handed, Amount) or unit is None or value.origin.kind == "none":
            return shown
        feet = "'" in handed.text or '"' in handed.text or len(handed.text.split()) > 2
        if handed.unit.scale == unit.scale and not feet:
            return shown
        return Row((shown, Letters(f"  ({handed.text})")))

    def with_outputs(self, shown: Formula, planned: PlannedGiven, key: Key) -> Formula:
        """Add what a callout gives: its area, diameter, count."""
        items: list[Formula] = [shown]
        for place, slot in enumerate(planned.outputs):
            items += [
                Letters(",  " if place else ":  "),
                self.told.shared.symbol(slot),
                relation("="),
                self.told.value(slot, key),
            ]
        return Row(tuple(items))

    def origin(self, origin: ValueOrigin, handed: object) -> Words:
        """Say where a given value came from."""
        if isinstance(handed, LinkedValue):
            script = self.told.scripts[handed.mark]
            place = link_place(handed, script.worked)
            number = script.line_of.get(place)
            target = f"{handed.mark}.{number}"
            return (Reference(f"{handed.mark} line {number}", target),)
        match origin.kind:
            case "material":
                return (f"material {origin.words}",)
            case "source":
                return (origin.words,)
            case "schedule":
                return (f"schedule {origin.words}",)
            case _:
                return ("project file",)

    def given_table(self, item: SayRows) -> Block:
        """Return a set of given rows, or a value over pairs, as a table."""
        planned, value = item.given, self.given[item.given.given.name]
        if isinstance(value, GivenPairs):
            return self.pair_table(item, planned)
        assert isinstance(value, GivenRows)
        columns = [Column((planned.given.name,))]
        slots: list[int] = []
        for column in planned.columns:
            slots += [column.slot, *column.outputs]
        columns += [self.told.column(slot) for slot in slots]
        rows = tuple(
            TableRow(((name,), *tuple(self.told.cell(slot, (row,)) for slot in slots)))
            for row, name in enumerate(value.names)
        )
        words = (planned.given.says or planned.given.name,)
        return Table(
            tuple(columns), rows, words, item.number, self.told.anchor(item.number), SourceLane("project file")
        )

    def pair_table(self, item: SayRows, planned: PlannedGiven) -> Block:
        """Return a value over pairs of rows: one set down, one across."""
        names = [self.told.values.names[index].get((), ()) for index in planned.over]
        sets = [self.told.worked.plan.sets[index].name for index in planned.over]
        if len(names) != 2:
            cells = tuple(
                TableRow(((name,), self.told.cell(planned.slot, (row,)))) for row, name in enumerate(names[0])
            )
            columns: tuple[Column, ...] = (Column((sets[0],)), self.told.column(planned.slot))
        else:
            columns = (Column((f"{sets[0]} / {sets[1]}",)), *(Column((name,), "right") for name in names[1]))
            cells = tuple(
                TableRow(((name,), *(self.told.cell(planned.slot, (row, other)) for other in range(len(names[1])))))
                for row, name in enumerate(names[0])
            )
        symbol = self.told.slots[planned.slot].symbol
        unit = f", {unit_text(symbol.unit)}" if symbol.unit and symbol.unit.dimension != NONE else ""
        words: Words = (self.told.shared.symbol(planned.slot), f"  {planned.given.says}{unit}")
        return Table(columns, cells, words, item.number, self.told.anchor(item.number), SourceLane("project file"))
