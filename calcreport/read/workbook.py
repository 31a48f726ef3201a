"""XLSX workbooks, opened under limits: bytes to a grid of text with what is hidden, merged or refused.

Only values are read. Macros, links to other files, pictures and charts are left where they are; nothing outside the
file is followed. The sizes stated in the archive are held against bounds before any of it is unpacked.
"""

from __future__ import annotations

import re
import warnings
import zlib
from contextlib import redirect_stdout
from datetime import date, time, timedelta
from io import BytesIO, StringIO
from typing import Any
from xml.etree.ElementTree import ParseError
from xml.parsers.expat import ExpatError, ParserCreate
from zipfile import BadZipFile, ZipFile

from calcreport.core.late import load
from calcreport.core.problems import Problems, listed
from calcreport.core.record import made, state
from calcreport.core.source import column_index, column_letters
from calcreport.read.nodes import Scalar

#: bounds of an archive: bytes packed and unpacked, how far one part may swell, parts, marks of its XML
LARGEST_PACKED, LARGEST_UNPACKED, MOST_SWELLING, MOST_PARTS, MOST_TAGS = 20_000_000, 80_000_000, 200, 2000, 4_000_000
#: a part this small may swell as it likes
_SMALL = 1_000_000
#: bounds of a sheet: rows, columns, cells of the area used
_MOST_ROW, _MOST_COLUMN, _MOST_CELLS = 100_000, 1000, 1_000_000
#: how the archive's library tells of a damaged file
_PACKED = (BadZipFile, zlib.error, OSError, EOFError, KeyError, ValueError, NotImplementedError, RuntimeError,
           OverflowError)  # fmt: skip
#: how the workbook's library does, its own asserts and slips among them: held against nothing but calls into it
_DAMAGE = (
    *_PACKED, ParseError, ExpatError, TypeError, AttributeError, IndexError, AssertionError, UnboundLocalError,
)  # fmt: skip
_FORMULA = re.compile(rb"<(?:\w+:)?f[ />]")
#: elements whose areas the library writes out cell by cell, and how many cells they may come to
_SPREADING, _MOST_SPREAD = (b"mergeCell", b"hyperlink", b"comment"), 100_000
_AREA = re.compile(r"\$?([A-Z]{1,3})\$?([0-9]{1,7})(?::\$?([A-Z]{1,3})\$?([0-9]{1,7}))?")
_OTHER_ALPHABETS = (b"\xff\xfe", b"\xfe\xff")
#: the unit a number format shows behind the number: 0.0" in"
_SHOWN_UNIT = re.compile(r'[0#?][^;"]*"\s*([^";]+?)\s*"')


@state
class Grid:
    """The text of a sheet, every row as wide as the widest."""

    name: str
    hidden: bool
    rows: list[list[str]] = made(factory=list)
    hidden_rows: frozenset[int] = frozenset()
    #: counted from 0
    hidden_columns: frozenset[int] = frozenset()
    #: why a cell cannot be taken, by row (counted from 1) and column (from 0)
    flaws: dict[int, dict[int, str]] = made(factory=dict)


def read_workbook(data: bytes, file: Scalar, sheet: Scalar | None, problems: Problems) -> Grid | None:
    """Return the named sheet, or the only one; None after adding why it cannot be read."""
    opened = _open(data)
    if isinstance(opened, str):
        _refuse(file, opened, problems)
        return None
    book, formulas = opened
    chosen = _choose(book, file, sheet, problems)
    if chosen is None:
        return None
    large = _too_large(chosen)
    if large:
        problems.add("file-too-large", (sheet or file).span, "the sheet covers too many cells",
                     expected=f"{_MOST_CELLS:,} cells at most", found=large,
                     hint="delete what stands below and beside the table, formats too")  # fmt: skip
        return None
    return _grid(chosen, formulas and formulas[chosen.title])


def _open(data: bytes) -> tuple[Any, Any] | str:
    """Return the workbook with its cached values, and with its formulas if it has any; or why it is refused."""
    # the library tells of some damage by warnings, and of some on standard output, where values and JSON go
    with warnings.catch_warnings(), redirect_stdout(StringIO()):
        warnings.simplefilter("ignore")
        try:
            found = _inspect(data)
        except _PACKED as error:
            return _damaged(error)
        if isinstance(found, str):
            return found
        try:
            return _load(data, values=True), _load(data, values=False) if found else None
        except _DAMAGE as error:
            return _damaged(error)


def _damaged(error: Exception) -> str:
    return f"a damaged file ({type(error).__name__})"


def _refuse(file: Scalar, found: str, problems: Problems) -> None:
    problems.add("bad-table", file.span, f"`{file.text[:60]}` cannot be read as a workbook",
                 expected="an XLSX workbook of ordinary size, without a password", found=found,
                 hint="save it anew as XLSX, or the sheet alone as CSV")  # fmt: skip


def _inspect(data: bytes) -> bool | str:
    """Tell whether any cell holds a formula, or why the archive is refused."""
    if len(data) > LARGEST_PACKED:
        return f"a file of {len(data):,} bytes"
    if not data.startswith(b"PK"):
        return "a file of another kind, perhaps an older or a protected one"
    with ZipFile(BytesIO(data)) as archive:
        parts = archive.infolist()
        if len(parts) > MOST_PARTS or sum(part.file_size for part in parts) > LARGEST_UNPACKED:
            return "an archive that unpacks to far more than a table"
        tags, formulas = 0, False
        for part in parts:
            if part.file_size > max(_SMALL, MOST_SWELLING * part.compress_size):
                return "an archive that unpacks to far more than a table"
            if part.flag_bits & 1:
                return "a protected file"
            text = archive.read(part)
            if not _is_markup(part.filename, text):
                continue
            if b"<!DOCTYPE" in text or b"<!ENTITY" in text or b"\0" in text or text.startswith(_OTHER_ALPHABETS):
                return "markup that no workbook needs"
            tags += text.count(b"<")
            formulas = formulas or _FORMULA.search(text) is not None
            if any(name in text for name in _SPREADING) and _spread(text) > _MOST_SPREAD:
                return "areas of more cells than a table needs"
        return formulas if tags <= MOST_TAGS else "more cells than a table needs"


def _is_markup(name: str, text: bytes) -> bool:
    """Tell whether the library could take a part for XML, whatever its name is."""
    return name.endswith((".xml", ".rels")) or text[:64].lstrip(b"\xef\xbb\xbf\xff\xfe \t\r\n\0").startswith(b"<")


def _spread(text: bytes) -> int:
    """Count the cells of the areas that the library writes out cell by cell; one it may misread counts as too many."""
    found = 0

    def start(name: str, attributes: dict[str, str]) -> None:
        nonlocal found
        if name.rpartition(" ")[2].encode() not in _SPREADING or "ref" not in attributes:
            return
        match = _AREA.fullmatch(attributes["ref"])
        if match is None:
            found += _MOST_SPREAD + 1
        elif match[3]:
            across = abs(column_index(match[3]) - column_index(match[1])) + 1
            found += across * (abs(int(match[4]) - int(match[2])) + 1)

    parser = ParserCreate(namespace_separator=" ")
    parser.StartElementHandler = start
    parser.Parse(text, True)
    return found


def _load(data: bytes, *, values: bool) -> Any:
    """Open a workbook for its cached values, or for its formulas; links to other files are not kept."""
    return load("openpyxl").load_workbook(BytesIO(data), data_only=values, keep_links=False, keep_vba=False)


def _choose(book: Any, file: Scalar, sheet: Scalar | None, problems: Problems) -> Any:
    """Return the sheet named, or the only one."""
    sheets = {found.title: found for found in book.worksheets}
    if sheet is not None and sheet.text in sheets:
        return sheets[sheet.text]
    if sheet is None and len(sheets) == 1:
        return next(iter(sheets.values()))
    if sheet is None:
        problems.add("no-sheet", file.span, f"`{file.text[:60]}` holds {len(sheets)} sheets",
                     expected="`sheet: …` beside `file`, " + listed(sheets), found="no `sheet`")  # fmt: skip
    else:
        problems.add("no-sheet", sheet.span, f"there is no sheet `{sheet.text[:40]}`", expected=listed(sheets),
                     found=sheet.text[:40] or "nothing", hint=problems.near(sheet.text, sheets))  # fmt: skip
    return None


def _too_large(sheet: Any) -> str:
    """Return the area a sheet uses where it is beyond the bounds, else ''."""
    rows, columns = sheet.max_row, sheet.max_column
    if rows > _MOST_ROW or columns > _MOST_COLUMN or rows * columns > _MOST_CELLS:
        return f"cells down to {column_letters(columns - 1)}{rows}"
    return ""


def _grid(sheet: Any, formulas: Any) -> Grid:
    grid = Grid(sheet.title, sheet.sheet_state != "visible")
    for number, row in enumerate(sheet.iter_rows(), 1):
        texts: list[str] = []
        for index, cell in enumerate(row):
            text, flaw = _text(cell)
            if formulas is not None and cell.value is None and formulas.cell(number, index + 1).data_type == "f":
                flaw = "a formula without the value it last had"
            if flaw:
                grid.flaws.setdefault(number, {})[index] = flaw
            texts.append(text)
        grid.rows.append(texts)
    for area in sheet.merged_cells.ranges:
        across = range(area.min_col - 1, area.max_col)
        for number in range(area.min_row, area.max_row + 1):
            grid.flaws.setdefault(number, {}).update(dict.fromkeys(across, f"merged cells {area}"))
    grid.hidden_rows = frozenset(n for n, d in sheet.row_dimensions.items() if d.hidden or d.height == 0)
    hidden: set[int] = set()
    for found in sheet.column_dimensions.values():
        found.reindex()  # a width that names no last column is for its own alone
        if found.hidden or found.width == 0:
            hidden.update(range(found.min - 1, min(found.max, sheet.max_column)))
    grid.hidden_columns = frozenset(hidden)
    return grid


def _text(cell: Any) -> tuple[str, str]:
    """Return the text of a cell and why it cannot be taken, or ''."""
    value = cell.value
    if value is None:
        return "", ""
    if cell.data_type == "e":
        return _plain(str(value)), f"the error {str(value)[:20]}"
    if isinstance(value, date | time | timedelta):
        return _plain(str(value)), "a date or a time"
    if isinstance(value, bool):
        return ("TRUE" if value else "FALSE"), ""
    if isinstance(value, int | float):
        # fifteen digits are what spreadsheets keep and show
        text = format(value, ".15g")
        shown = _SHOWN_UNIT.search(cell.number_format or "")
        return (f"{text} {_plain(shown[1])}" if shown else text), ""
    return _plain(str(value)), ""


def _plain(text: str) -> str:
    """Return text on one line: a tab or a line end would part cells."""
    return " ".join(text.split())
