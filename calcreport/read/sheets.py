"""Tables as people keep them, CSV or XLSX: rows of cells, each with its place. Reads the text kind itself.

A file name in, a `Sheet` out. What is in a cell is text here; what it means is told by who uses it. A cell that
cannot be taken as it stands (a date, an error, part of a merged area) carries the reason, and is refused on use.
"""

from __future__ import annotations

import re
from collections import Counter

from calcreport.core.problems import Problems
from calcreport.core.record import made, record
from calcreport.core.source import Source, Span, TableSource
from calcreport.core.world import World
from calcreport.read.nodes import Scalar, say_odd
from calcreport.read.workbook import Grid, read_workbook

#: bounds against files made to exhaust: rows, columns, characters of a cell
MOST_ROWS, MOST_COLUMNS, LONGEST_CELL = 20_000, 200, 1000
_DELIMITERS = ",;\t"
#: lines of a file from which its delimiter is told
_LOOKED_AT = 40
_TEXT, _BOOK = (".csv", ".tsv", ".txt"), (".xlsx", ".xlsm")
_DASHES = ("-", "–", "—")
#: marks of feet and inches as drawing programs write them
_PRIMES = str.maketrans({"′": "'", "’": "'", "″": '"', "”": '"'})
#: how a table keeps text that begins like a formula from being taken for one
_GUARDED = re.compile(r"'[=+\-@]")


@record
class Cell:
    """The text of a cell, white space made single; `flaw` says why it cannot be taken."""

    text: str
    span: Span
    flaw: str = ""

    @property
    def is_empty(self) -> bool:
        """Tell whether nothing stands there: no text, or a dash alone."""
        return not self.flaw and (not self.text or self.text in _DASHES)


@record
class SheetRow:
    """A row of a sheet; its cells are made when they are asked for."""

    source: TableSource
    #: number a spreadsheet shows
    number: int
    #: start and end of every cell in the source
    bounds: tuple[tuple[int, int], ...]
    hidden: bool
    flaws: dict[int, str] = made(factory=dict)

    def cell(self, index: int) -> Cell:
        """Return the cell of a column; an empty one at the row's end where the row is shorter."""
        if index >= len(self.bounds):
            end = self.bounds[-1][1]
            return Cell("", Span(self.source, end, end))
        start, end = self.bounds[index]
        raw = self.source.text[start:end]
        text = raw.translate(_PRIMES)
        if not self.source.sheet:
            if start and self.source.text[start - 1] == '"':
                text = text.replace('""', '"')
            text = text[1:] if _GUARDED.match(text) else text
        text = " ".join(text.split())
        return Cell(text, Span(self.source, start, end, text != raw), self.flaws.get(index, ""))

    @property
    def is_blank(self) -> bool:
        """Tell whether no cell holds anything."""
        return not self.flaws and not any(self.source.text[start:end].strip() for start, end in self.bounds)


@record
class Sheet:
    """The rows of one sheet that hold something."""

    source: TableSource
    rows: tuple[SheetRow, ...]
    is_hidden: bool = False
    hidden_columns: frozenset[int] = frozenset()
    #: semicolons part the columns: a comma in a number may be a decimal comma
    commas: bool = False


def read_sheet(
    world: World, file: Scalar, sheet: Scalar | None, home: Source, problems: Problems, label: str = ""
) -> Sheet | None:
    """Return the sheet of a file in the project folder, or None after adding why not; `home` names the folder."""
    name = file.text.lower()
    if name.endswith(_TEXT):
        if sheet is not None:
            problems.add("no-sheet", sheet.span, "a text file has no sheets", expected="no `sheet` beside a text file",
                         found=sheet.text[:40])  # fmt: skip
            return None
        source = world.project_text(file.text)
        if isinstance(source, str):
            _say_no_file(file, source, problems)
            return None
        return read_text_table(source, label, problems)
    if not name.endswith(_BOOK):
        problems.add("bad-table", file.span, f"`{file.text[:60]}` is not a table this program reads",
                     expected="a file ending in " + " ".join((*_TEXT, *_BOOK)), found=file.text[-20:] or "nothing",
                     hint="save the table as CSV or XLSX")  # fmt: skip
        return None
    data = world.project_bytes(file.text)
    if isinstance(data, str):
        _say_no_file(file, data, problems)
        return None
    grid = read_workbook(data, file, sheet, problems)
    return _from_grid(grid, file, home, label, problems) if grid is not None else None


def _say_no_file(file: Scalar, why: str, problems: Problems) -> None:
    problems.add("no-file", file.span, f"`{file.text[:60]}` cannot be read",
                 expected="a file inside the project folder", found=why)  # fmt: skip


def _from_grid(grid: Grid, file: Scalar, home: Source, label: str, problems: Problems) -> Sheet | None:
    """Return a workbook's sheet as text with places: a line a row, cells apart by tabs."""
    pieces: list[str] = []
    starts: list[int] = []
    bounds: list[tuple[tuple[int, int], ...]] = []
    at = 0
    for row in grid.rows:
        starts.append(at)
        found = []
        for text in row:
            found.append((at, at + len(text)))
            pieces += [text, "\t"]
            at += len(text) + 1
        pieces[-1] = "\n"
        bounds.append(tuple(found))
    source = TableSource(file.text, "".join(pieces), home.folder, records=tuple(starts), sheet=grid.name, label=label)
    if say_odd(source, problems):
        return None
    rows = (
        SheetRow(source, number, cells, number in grid.hidden_rows, grid.flaws.get(number, {}))
        for number, cells in enumerate(bounds, 1)
    )
    return _bounded(Sheet(source, tuple(rows), grid.hidden, grid.hidden_columns), problems)


def read_text_table(source: Source, label: str, problems: Problems) -> Sheet | None:
    """Return the rows of comma-, semicolon- or tab-separated text; quotes as RFC 4180 has them."""
    if say_odd(source, problems):
        return None
    delimiter = _delimiter(source.text)
    found = _records(source, delimiter, problems)
    if found is None:
        return None
    starts, bounds = found
    table = TableSource(source.name, source.text, source.folder, records=tuple(starts), label=label)
    rows = (SheetRow(table, number, cells, False) for number, cells in enumerate(bounds, 1))
    return _bounded(Sheet(table, tuple(rows), commas=delimiter == ";"), problems)


def _bounded(sheet: Sheet, problems: Problems) -> Sheet | None:
    """Return a sheet without its blank rows, held against the bounds."""
    rows = tuple(row for row in sheet.rows if not row.is_blank)
    source = sheet.source
    if not rows:
        problems.add("bad-table", Span(source, 0, 0), "the table holds nothing", expected="a row of headings",
                     found="no text")  # fmt: skip
        return None
    longest = max(((end - start, start) for row in rows for start, end in row.bounds), default=(0, 0))
    widest = max(rows, key=lambda row: len(row.bounds))
    for much, most, at, what in (
        (len(rows), MOST_ROWS, rows[-1].bounds[0][0], "rows"),
        (len(widest.bounds), MOST_COLUMNS, widest.bounds[-1][0], "columns"),
        (longest[0], LONGEST_CELL, longest[1], "characters in a cell"),
    ):
        if much > most:
            problems.add("file-too-large", Span(source, at, at), f"the table has too many {what}",
                         expected=f"{most:,} at most", found=f"{much:,}")  # fmt: skip
            return None
    return Sheet(source, rows, sheet.is_hidden, sheet.hidden_columns, sheet.commas)


def _delimiter(text: str) -> str:
    """Tell what parts the columns: the sign that stands equally often in most lines."""
    lines = [re.sub(r'"[^"]*"', "", line) for line in text.split("\n", _LOOKED_AT)[:_LOOKED_AT] if line.strip()]

    def steady(sign: str) -> tuple[int, int]:
        counts = Counter(count for line in lines if (count := line.count(sign)))
        return max(((many, count) for count, many in counts.items()), default=(0, 0))

    return max(_DELIMITERS, key=steady)


def _records(
    source: Source, delimiter: str, problems: Problems
) -> tuple[list[int], list[tuple[tuple[int, int], ...]]] | None:
    """Return where records begin, and start and end of their cells; adds `bad-table` for a quote left open."""
    text, size = source.text, len(source.text)
    pattern = re.compile(rf'"([^"]*+(?:""[^"]*+)*+)"(?=[{delimiter}\n]|\Z)|([^{delimiter}\n]*+)')
    starts, records, cells, at = [0], [], [], 0
    while True:
        match = pattern.match(text, at)
        assert match is not None
        if match[2] is not None and match[2].startswith('"'):
            problems.add("bad-table", Span(source, at, at + 1), "a quotation mark is opened and not closed",
                         expected='a cell in quotes that ends before the next column, with "" for a mark inside it',
                         found=match[2][:40])  # fmt: skip
            return None
        cells.append(match.span(1) if match[2] is None else match.span(2))
        at = match.end()
        if at < size and text[at] == delimiter:
            at += 1
            continue
        records.append(tuple(cells))
        cells = []
        if at + 1 >= size:
            return starts, records
        at += 1
        starts.append(at)
