"""Rows of a set, and values over pairs of rows, taken from a table: each row as if it had been written out.

`{file: forces.csv, columns: {P_u: Axial}, where: {Mark: C3}}` in, nodes out whose texts have their places in the table.
"""

from __future__ import annotations

from collections.abc import Sequence as Many

from calcreport.core.record import record
from calcreport.read.columns import Table, Use, take
from calcreport.read.fields import Fields
from calcreport.read.filled import prepare_use
from calcreport.read.links import hold_columns
from calcreport.read.model import Given, ValueOrigin
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told
from calcreport.read.sheets import SheetRow
from calcreport.read.tables import TABLE_KEYS, Choice, Tables
from calcreport.read.values import Taken, TakenPair

KEYS = (*TABLE_KEYS, "columns")
#: stretches of row numbers named in print
_NAMED = 4


@record
class RowTables:
    """Reads what sets and pairs take from tables."""

    tables: Tables

    def rows(self, given: Given, node: Mapping) -> Taken | None:
        """Return the rows of a set as a list of mappings, with the place they were taken from in words."""
        before = self.tables.problems.met
        fields = Fields(node, KEYS, f"the rows of `{given.name}`", self.tables.problems)
        found = self.chosen(fields, given.name)
        if found is None:
            return None
        choice, mapping = found
        entries = hold_columns(given, mapping, fields, "name")
        uses = self.uses(mapping, entries, choice.table, given.columns)
        rows = self.taken(fields, choice, uses, given.columns, before)
        if rows is None:
            return None
        items: list[Node] = []
        for row in rows:
            cells = [(key, value) for key, use in uses for value in [self.cell(use, row, choice.table)]]
            if all(value is not None for _, value in cells):
                kept = tuple((key, value) for key, value in cells if value is not None)
                items.append(Mapping(kept, row.cell(0).span))
        return Taken(Sequence(tuple(items), node.span), origin(choice.table, rows))

    def pairs(self, given: Given, node: Mapping) -> tuple[tuple[TakenPair, ...], ValueOrigin] | None:
        """Return a value for each row of a table that names a row of every set it varies over."""
        problems = self.tables.problems
        before = problems.met
        fields = Fields(node, KEYS, f"the values of `{given.name}`", problems)
        found = self.chosen(fields, given.name)
        if found is None:
            return None
        choice, mapping = found
        wanted = (*(name.name for name in given.over), given.name)
        inner = Fields(mapping, wanted, "`columns`", problems)
        entries = {key.text: key for key, _ in mapping.entries if key.text in wanted}
        for name in wanted:
            if name not in entries:
                inner.say_missing(name)
        uses = {key.text: use for key, use in self.uses(mapping, entries, choice.table, (given,))}
        rows = self.taken(fields, choice, tuple((entries[n], use) for n, use in uses.items()), (given,), before)
        if rows is None:
            return None
        pairs: list[TakenPair] = []
        seen: dict[tuple[str, ...], Scalar] = {}
        for row in rows:
            cells = [self.cell(uses[name], row, choice.table) for name in wanted]
            names = tuple(cell for cell in cells[:-1] if isinstance(cell, Scalar))
            value = cells[-1]
            if len(names) < len(given.over) or value is None:
                continue
            key = tuple(name.text for name in names)
            if key in seen:
                problems.add("given-twice", names[-1].span, f"`{given.name}` has two values for {', '.join(key)}",
                             expected="every pair once", found=", ".join(key),
                             related=((seen[key].span, "first here"),))  # fmt: skip
            seen.setdefault(key, names[-1])
            pairs.append(TakenPair(names, value))
        return tuple(pairs), origin(choice.table, rows)

    def chosen(self, fields: Fields, name: str) -> tuple[Choice, Mapping] | None:
        """Return the rows of the table asked for, and the mapping of columns."""
        mapping = fields.mapping("columns", required=True)
        file = fields.text("file")
        table = self.tables.table(fields, file)
        return (self.tables.choice(fields, table), mapping) if table is not None and mapping is not None else None

    def uses(
        self, mapping: Mapping, entries: dict[str, Scalar], table: Table, givens: tuple[Given, ...]
    ) -> tuple[tuple[Scalar, Use | Scalar | Told], ...]:
        """Return what every column takes: cells, or the word `none` for every row where it may be none."""
        problems = self.tables.problems
        empty = {one.name for one in givens if one.if_none is not None}
        found: list[tuple[Scalar, Use | Scalar | Told]] = []
        for key, value in mapping.entries:
            if key.text not in entries:
                continue
            if isinstance(value, Scalar) and value.text == "none" and key.text in empty and not table.named("none"):
                found.append((key, value))
            elif isinstance(value, Sequence):
                problems.add("wrong-shape", value.span.part(0, 1), f"`{key.text[:40]}` is not given a column",
                             expected="a heading, or {column: …, unit: …, if empty: …}", found="a list")  # fmt: skip
                found.append((key, Told(value.span)))
            elif not isinstance(value, Told):
                found.append((key, prepare_use(value, table, problems, True)))
        return tuple(found)

    def taken(
        self,
        fields: Fields,
        choice: Choice,
        uses: tuple[tuple[Scalar, Use | Scalar | Told], ...],
        givens: tuple[Given, ...],
        before: int,
    ) -> list[SheetRow] | None:
        """Return the rows taken; None where something about the table or its columns was told since `before`."""
        problems = self.tables.problems
        declared = {one.name: one for one in givens}
        self.tables.hold_shown(fields, choice, (use for _, use in uses if isinstance(use, Use)))
        for key, use in uses:
            if isinstance(use, Use) and key.text in declared:
                self.tables.hold_unit(declared[key.text], use, choice)
        if problems.met > before or any(isinstance(use, Told) for _, use in uses):
            return None
        rows = self.tables.rows(choice)
        if not rows:
            self.tables.say_no_rows(fields, choice.table)
            return None
        return rows

    def cell(self, use: Use | Scalar | Told, row: SheetRow, table: Table) -> Scalar | Told | None:
        """Return what a row holds for a column; None where an empty cell takes the row away."""
        return take(use, row, table, self.tables.problems) if isinstance(use, Use) else use


def origin(table: Table, rows: Many[SheetRow]) -> ValueOrigin:
    """Return a table's file and the rows taken of it, as print names them: 'forces.csv rows 2 to 6, 9'."""
    runs: list[list[int]] = []
    for row in rows:
        if runs and row.number == runs[-1][1] + 1:
            runs[-1][1] = row.number
        else:
            runs.append([row.number, row.number])
    words = [f"{low}" if low == high else f"{low} to {high}" for low, high in runs]
    shown = ", ".join(words[:_NAMED]) + (" and others" if words[_NAMED:] else "")
    source = table.sheet.source
    sheet = f", sheet {source.sheet}" if source.sheet else ""
    return ValueOrigin("table", f"{source.name}{sheet} row{'s' if len(rows) > 1 else ''} {shown}")
