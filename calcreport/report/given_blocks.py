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
    Symbol,
    ValueOrigin,
    singles,
)
from calcreport.core.quantity import Amount
from calcreport.core.units import NONE
from calcreport.report.display import row_words, show_row, show_symbol, trade_marks, unit_text
from calcreport.report.forms import link_place
from calcreport.report.items import SayAlike, SayRows
from calcreport.report.model import (
    Block,
    Column,
    Formula,
    GivenRow,
    Letters,
    Reference,
    Row,
    SourceLane,
    Statement,
    Table,
    TableRow,
    Words,
)
from calcreport.report.notation import (
    relation,
)
from calcreport.report.told import Told
from calcreport.report.writer import is_single


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

    def alike(self, item: SayAlike) -> Block:
        """Return the values there are none of, and what they count as; or those that are answered by no."""
        values = [self.told.values.get(given.slot) for given in item.givens]
        zero = all(value == 0.0 for value in values)
        items: list[Formula] = []
        for given in item.givens:
            items += [Letters(",  ")] if items else []
            items.append(self.told.shared.symbol(given.slot))
        words = "none, counted as 0" if item.word == "none" and zero else item.word
        anchor = self.told.anchor(item.number)
        origins = dict.fromkeys(self.given[given.given.name].origin.words or "project file" for given in item.givens)
        return Statement(item.number, anchor, (words,), Row(tuple(items)), SourceLane(", ".join(origins)))

    def as_typed(self, shown: Formula, value: GivenValue, slot: int) -> Formula:
        """Add the typed spelling where it is in another unit than the one used."""
        typed = typed_beside(value, self.told.slots[slot].symbol)
        return Row((shown, Letters(f"  ({trade_marks(typed)})"))) if typed else shown

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
            case "criteria":
                return ("criteria",)
            case "schedule" | "candidate":
                return (f"{origin.kind} {origin.words}",)
            case "none" if origin.words:
                return (origin.words,)
            case _:
                return ("project file",)

    def lane(self, value: GivenRows | GivenPairs) -> SourceLane:
        """Return the source lane of rows: a table, or the lines of other calculations that gave them or some cells."""
        match value.origin.kind:
            case "schedule" | "candidate":
                words = f"{value.origin.kind} {value.origin.words}"
            case "table" | "line":
                words = value.origin.words
            case _:
                words = "project file"
        lines: dict[str, set[int]] = {}
        for cell in singles((value,)):
            if isinstance(cell.value, LinkedValue):
                script = self.told.scripts[cell.value.mark]
                place = link_place(cell.value, script.worked)
                lines.setdefault(cell.value.mark, set()).add(script.line_of.get(place, 0))
        anchors = [f"{mark}.{number}" for mark, numbers in lines.items() for number in sorted(numbers)]
        return SourceLane(words, tuple(Reference(anchor, anchor) for anchor in anchors))

    def given_table(self, item: SayRows) -> Block:
        """Return a set of given rows, or a value over pairs, as a table."""
        if item.within is not None:
            return self.inner_table(item, item.within)
        planned, value = item.given, self.given[item.given.given.name]
        if isinstance(value, GivenPairs):
            return self.pair_table(item, planned, value)
        assert isinstance(value, GivenRows)
        if not planned.columns or not value.names:
            return self.names_only(item, planned, value)
        if len(value.names) == 1 and not any(column.rows >= 0 for column in planned.columns):
            return self.single_row(item, planned, value)
        #: what follows a row's own number in the key: the one row of a set that each member has for itself
        shown: list[tuple[int, Key]] = []
        for column in planned.columns:
            if column.rows < 0:
                shown += [(slot, ()) for slot in (column.slot, *column.outputs)]
            elif is_single(column, self.told.worked):
                shown += [(slot, (0,)) for inner in column.columns for slot in (inner.slot, *inner.outputs)]
        columns = (Column((planned.given.name,)), *(self.told.column(slot) for slot, _ in shown))
        rows = tuple(
            TableRow(((row_words(name),), *(self.told.cell(slot, (row, *inner)) for slot, inner in shown)))
            for row, name in enumerate(value.names)
        )
        words = (planned.given.says or planned.given.name,)
        return Table(columns, rows, words, item.number, self.told.anchor(item.number), self.lane(value))

    def inner_table(self, item: SayRows, within: PlannedGiven) -> Block:
        """Return the sets that members have for themselves as one table, a member's rows after another's."""
        planned, value = item.given, self.given[within.given.name]
        assert isinstance(value, GivenRows)
        slots = [slot for column in planned.columns for slot in (column.slot, *column.outputs)]
        columns = (Column((within.given.name,)), Column((planned.given.name,)), *map(self.told.column, slots))
        rows = []
        for member, mark in enumerate(value.names):
            for row, name in enumerate(self.told.values.names[planned.rows].get((member,), ())):
                cells = (self.told.cell(slot, (member, row)) for slot in slots)
                rows.append(TableRow(((row_words(mark) if row == 0 else "",), (row_words(name),), *cells)))
        words = (planned.given.says or planned.given.name,)
        return Table(columns, tuple(rows), words, item.number, self.told.anchor(item.number), self.lane(value))

    def names_only(self, item: SayRows, planned: PlannedGiven, value: GivenRows) -> Block:
        """Return a set that has no columns, or no rows: its row names in one line, or that there are none."""
        items: list[Formula] = [] if value.names else [Letters("none")]
        for name in value.names:
            items += [Letters(",  ")] if items else []
            items.append(show_row(name))
        anchor = self.told.anchor(item.number)
        words = (planned.given.says or planned.given.name,)
        return Statement(item.number, anchor, words, Row(tuple(items)), self.lane(value))

    def single_row(self, item: SayRows, planned: PlannedGiven, value: GivenRows) -> Block:
        """Return the one row of a set as a statement: layer first: 4-#9, A_s,i = 4.00 in.^2, …"""
        items: list[Formula] = []
        for column in planned.columns:
            for slot in (column.slot, *column.outputs):
                items += [Letters(",  ")] if items else []
                if slot == column.slot and column.outputs:
                    items.append(self.told.value(slot, (0,)))
                else:
                    items += [self.told.shared.symbol(slot), relation("="), self.told.value(slot, (0,))]
        words = (f"{planned.given.name} {value.names[0]}",)
        anchor = self.told.anchor(item.number)
        return Statement(item.number, anchor, words, Row(tuple(items)), self.lane(value))

    def pair_table(self, item: SayRows, planned: PlannedGiven, value: GivenPairs) -> Block:
        """Return a value over pairs of rows: one set down, one across."""
        names = [self.told.values.names[index].get((), ()) for index in planned.over]
        sets = [self.told.worked.plan.sets[index].name for index in planned.over]
        if len(names) != 2:
            cells = tuple(
                TableRow(((row_words(name),), self.told.cell(planned.slot, (row,))))
                for row, name in enumerate(names[0])
            )
            columns: tuple[Column, ...] = (Column((sets[0],)), self.told.column(planned.slot))
        else:
            columns = (Column((f"{sets[0]} / {sets[1]}",)), *(Column((show_row(name),), "right") for name in names[1]))
            cells = tuple(
                TableRow(
                    (
                        (row_words(name),),
                        *(self.told.cell(planned.slot, (row, other)) for other in range(len(names[1]))),
                    )
                )
                for row, name in enumerate(names[0])
            )
        symbol = self.told.slots[planned.slot].symbol
        unit = f", {unit_text(symbol.unit)}" if symbol.unit and symbol.unit.dimension != NONE else ""
        words: Words = (self.told.shared.symbol(planned.slot), f"  {planned.given.says}{unit}")
        return Table(columns, cells, words, item.number, self.told.anchor(item.number), self.lane(value))


def typed_beside(value: GivenValue, symbol: Symbol) -> str:
    """Return the typed spelling where it is printed beside the value: in another unit, or in feet and inches."""
    handed, unit = value.value, symbol.unit
    if not isinstance(handed, Amount) or unit is None or value.origin.kind == "none":
        return ""
    feet = "'" in handed.text or '"' in handed.text or len(handed.text.split()) > 2
    return "" if handed.unit.scale == unit.scale and (symbol.inches is not None or not feet) else handed.text
