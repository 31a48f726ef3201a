"""Tables a project names: each read and echoed once, the rows asked for, columns that say the unit of their numbers.

Fields of an entry in, tables and chosen rows out. Schedules and sets given from a table share it.
"""

from __future__ import annotations

from collections.abc import Iterable

from calcreport.core.problems import Problems
from calcreport.core.record import made, record, state
from calcreport.core.source import Source
from calcreport.core.units import NONE
from calcreport.core.world import World
from calcreport.read.columns import Heading, Table, Use, is_bare, make_table
from calcreport.read.fields import Fields
from calcreport.read.model import Given
from calcreport.read.sheets import Sheet, SheetRow, read_sheet

#: keys by which an entry names a table and chooses its rows
TABLE_KEYS = ("file", "sheet", "heading row", "where", "hidden")
HIDDEN = ("skip", "read")
#: rows named when hidden ones are refused
_NAMED = 12


@record
class Choice:
    """The rows of a table that are asked for: those shown, or all, whose cells hold certain texts."""

    table: Table
    where: tuple[tuple[Heading, frozenset[str]], ...]
    hidden: str

    def takes(self, row: SheetRow) -> bool:
        """Tell whether a row is one of those asked for by their texts."""
        return all(row.cell(heading.index).text in words for heading, words in self.where)

    def read(self, row: SheetRow) -> bool:
        """Tell whether a row is asked for and may be read."""
        return (not row.hidden or self.hidden == "read") and self.takes(row)


@state
class Tables:
    """Reads the tables of one project."""

    world: World
    #: files read, for the echo of inputs
    files: list[Source]
    problems: Problems
    _sheets: dict[tuple[str, str], Sheet | None] = made(factory=dict)
    _tables: dict[tuple[str, str, int | None], Table | None] = made(factory=dict)
    #: rows by the text of a column, so that many choices from one long table do not each go through it
    _found: dict[tuple[int, int], dict[str, list[SheetRow]]] = made(factory=dict)

    def table(self, fields: Fields, label: str) -> Table | None:
        """Return the table an entry names; a file named twice is read and echoed once."""
        file, sheet = fields.scalar("file", required=True), fields.scalar("sheet")
        heading_row = fields.whole("heading row", low=1, high=1000)
        if file is None or (heading_row is None and fields.has("heading row")):
            return None
        key = file.text, sheet.text if sheet else ""
        if key not in self._sheets:
            self._sheets[key] = read_sheet(self.world, file, sheet, file.span.source, self.problems, label)
            found = self._sheets[key]
            if found is not None:
                self.files.append(found.source)
        found = self._sheets[key]
        if found is None:
            return None
        whole = (*key, heading_row)
        if whole not in self._tables:
            self._tables[whole] = make_table(found, heading_row, fields.span_of("file"), self.problems)
        return self._tables[whole]

    def choice(self, fields: Fields, table: Table) -> Choice:
        """Return the rows an entry chooses by the texts under `where`, and whether hidden ones are read."""
        hidden = fields.choice("hidden", HIDDEN)
        mapping = fields.mapping("where")
        if mapping is None:
            return Choice(table, (), hidden)
        choice = Fields(mapping, [key.text for key, _ in mapping.entries], "`where`", self.problems)
        found = []
        for key, _ in mapping.entries:
            heading = table.find(key.text, key.span, self.problems)
            words = frozenset(" ".join(scalar.text.split()) for scalar in choice.texts(key.text))
            if heading is not None:
                found.append((heading, words))
        return Choice(table, tuple(found), hidden)

    def rows(self, choice: Choice) -> list[SheetRow]:
        """Return the rows asked for, in the order of the table."""
        if not choice.where:
            return [row for row in choice.table.rows if choice.read(row)]
        heading, words = choice.where[0]
        key = id(choice.table), heading.index
        if key not in self._found:
            by_text: dict[str, list[SheetRow]] = {}
            for row in choice.table.rows:
                by_text.setdefault(row.cell(heading.index).text, []).append(row)
            self._found[key] = by_text
        rows = (row for word in words for row in self._found[key].get(word, ()) if choice.read(row))
        return sorted(rows, key=lambda row: row.number)

    def hold_shown(self, fields: Fields, choice: Choice, taken: Iterable[Use]) -> None:
        """Add `hidden-rows` where what a spreadsheet hides would be read, or passed over, without a word."""
        sheet, hidden = choice.table.sheet, choice.hidden
        rows = [row for row in choice.table.rows if row.hidden and choice.takes(row)]
        if sheet.is_hidden and hidden != "read":
            self.problems.add("hidden-rows", fields.span_of("sheet" if fields.has("sheet") else "file"),
                              "the sheet is hidden", expected="a sheet that is shown, or `hidden: read`",
                              found=sheet.source.sheet)  # fmt: skip
        used = {piece.index: piece for use in taken for piece in use.pieces if isinstance(piece, Heading)}
        for index in sorted(sheet.hidden_columns & used.keys()):
            if hidden != "read":
                self.problems.add("hidden-rows", used[index].cell.span, "this column is hidden, and it is asked for",
                                  expected="a column that is shown, or `hidden: read`",
                                  found=used[index].cell.text)  # fmt: skip
        if rows and not hidden:
            names = ", ".join(str(row.number) for row in rows[:_NAMED]) + (" and more" if rows[_NAMED:] else "")
            many = "1 row is" if len(rows) == 1 else f"{len(rows)} rows are"
            self.problems.add("hidden-rows", rows[0].cell(0).span, f"{many} hidden",
                              expected="`hidden: skip` or `hidden: read` beside `file`", found=f"row {names}",
                              hint="a filter hides rows too")  # fmt: skip

    def hold_unit(self, given: Given, use: Use, choice: Choice) -> None:
        """Add `bare-number` at the heading of a column of bare numbers that says no unit where one is needed."""
        unit = given.symbol.unit if given.symbol is not None else None
        if unit is None or unit.dimension == NONE or use.unit or not isinstance(use.pieces[0], Heading):
            return
        heading = use.pieces[0]
        texts = {row.cell(heading.index).text for row in choice.table.rows if choice.takes(row)} - {"", "0"}
        if texts and all(is_bare(text) for text in texts):
            self.problems.add("bare-number", heading.cell.span, f"the numbers under `{heading.stem}` have no unit",
                              expected=f"the unit of `{given.name}` in the heading, or beside the column",
                              found=f"bare numbers, such as {min(texts)}",
                              hint=f"write {heading.stem} ({unit.text}), or {{column: {heading.stem}, "
                              f"unit: {unit.text}}}, if that is the unit meant",
                              related=((use.span, "they are asked for here"),))  # fmt: skip

    def say_no_rows(self, fields: Fields, table: Table) -> None:
        """Add `no-rows`."""
        at = fields.span_of("where" if fields.has("where") else "file")
        self.problems.add("no-rows", at, "no row of the table is taken", expected="one or more rows",
                          found=f"{len(table.rows)} rows under the headings, none selected")  # fmt: skip
