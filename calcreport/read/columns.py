"""Columns of a table by their headings, and what a calculation takes from a row: a cell, or text with cells in it.

Names of columns and rows in, text nodes with places out. A heading may state a unit, `Width (in)` or `Width, in`; a
number without a unit takes it from there or from the project file, and otherwise stays the bare number it is.
"""

from __future__ import annotations

import re
from functools import lru_cache

from calcreport.core.problems import Problems, listed
from calcreport.core.record import record
from calcreport.core.source import Source, Span
from calcreport.core.units import read_unit
from calcreport.read.fields import Fields
from calcreport.read.nodes import Mapping, Node, Scalar, Told
from calcreport.read.sheets import Cell, Sheet, SheetRow

USE_KEYS = ("column", "unit", "if empty")
NO_ROW = "no row"
#: rows in which headings are looked for to help an author
_LOOKED_AT = 30
_STATED = re.compile(r"(.*\S)(?:\s*[(\[]([^()\[\]]+)[)\]]|,\s*([^,]+))")
_BRACES = re.compile(r"\{([^{}]*)\}")
_DIGITS = r"(?:[0-9][0-9,]*(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
_BARE = re.compile(rf"[+-]?(?:{_DIGITS}|(?:[0-9]+[ -])?[0-9]+/[0-9]+)")
_SPACED = re.compile(r"(.*@.*?)(?:\s+|(?<=[\"'0-9]))(?:[oO]\.?\s?[cC]\.?|[cC]/[cC])|(.*@.*)")
_COMMA = re.compile(r"[0-9],[0-9]")


@record
class Heading:
    """A column's heading: its words without the unit it states, and that unit as a file would write it."""

    index: int
    cell: Cell
    stem: str
    unit: str


@record
class Use:
    """What one place of a calculation takes from a row: text and the cells of columns, most often one cell alone."""

    pieces: tuple[str | Heading, ...]
    unit: str
    #: what stands for an empty cell, None for nothing
    if_empty: Scalar | None
    span: Span


@record
class Table:
    """The rows of a sheet under their headings."""

    sheet: Sheet
    headings: tuple[Heading, ...]
    rows: tuple[SheetRow, ...]

    def find(self, name: str, span: Span, problems: Problems) -> Heading | None:
        """Return the column of a heading, with or without its unit; adds `unknown-column`."""
        found = self.named(name)
        if len(found) == 1:
            return found[0]
        known = [heading.cell.text for heading in self.headings]
        if found:
            problems.add("unknown-column", span, f"`{name[:40]}` names {len(found)} columns",
                         expected="a heading that stands once, in full", found=listed(h.cell.text for h in found),
                         related=tuple((h.cell.span, "one of them") for h in found[:3]))  # fmt: skip
            return None
        problems.add("unknown-column", span, f"the table has no column `{name[:40]}`", expected=listed(known),
                     found=name[:40] or "nothing", hint=self._elsewhere(name) or self._near(name, known, problems),
                     related=((self.headings[0].cell.span, "the headings"),) if self.headings else ())  # fmt: skip
        return None

    def named(self, name: str) -> list[Heading]:
        """Return the columns a name fits: the whole heading, else the heading without its unit."""
        whole = [heading for heading in self.headings if heading.cell.text == name]
        return whole or [heading for heading in self.headings if heading.stem == name]

    def _near(self, name: str, known: list[str], problems: Problems) -> str:
        return problems.near(name, known) or problems.near(name, [heading.stem for heading in self.headings])

    def _elsewhere(self, name: str) -> str:
        """Return a hint where the heading stands in a row below the one taken for headings."""
        for row in self.rows[:_LOOKED_AT]:
            if any(_heading(row, index).stem == name for index in range(len(row.bounds))):
                return f"the headings seem to stand in row {row.number}: write `heading row: {row.number}`"
        return ""


def make_table(sheet: Sheet, heading_row: int | None, at: Span, problems: Problems) -> Table | None:
    """Return the table under a row of headings, the first that holds anything where none is named."""
    place = next((p for p, row in enumerate(sheet.rows) if heading_row in (None, row.number)), None)
    if place is None:
        last = sheet.rows[-1].number
        problems.add("unknown-column", at, f"row {heading_row} holds nothing",
                     expected=f"the row of the headings, up to {last}", found=f"{heading_row}")  # fmt: skip
        return None
    row = sheet.rows[place]
    headings = (_heading(row, index) for index in range(len(row.bounds)))
    return Table(sheet, tuple(h for h in headings if h.cell.text), sheet.rows[place + 1 :])


def _heading(row: SheetRow, index: int) -> Heading:
    cell = row.cell(index)
    match = _STATED.fullmatch(cell.text)
    unit = _heading_unit(match[2] or match[3]) if match else ""
    return Heading(index, cell, match[1] if match and unit else cell.text, unit)


@lru_cache(maxsize=512)
def _heading_unit(text: str) -> str:
    """Return the unit a heading states, `in.` and `kip-ft` as the trade writes them too; '' where it is none."""
    plain = re.sub(r"(?<=[A-Za-z])[-·⋅](?=[A-Za-z])", "*", text.strip().rstrip("."))
    plain = plain.replace("in.", "in").replace("²", "^2").replace("³", "^3").replace("⁴", "^4")
    whole = Source("", plain)
    return plain if read_unit(plain, Span(whole, 0, len(plain)), Problems()) is not None else ""


def is_use(node: Node) -> bool:
    """Tell whether a node says `{column: …}`."""
    return isinstance(node, Mapping) and node.get("column") is not None and all(
        key.text in USE_KEYS for key, _ in node.entries
    )  # fmt: skip


def read_use(node: Node, table: Table, problems: Problems) -> Use | None:
    """Read `Width`, `'{Count}-{Size}'` or `{column: Width, unit: in, if empty: none}`."""
    if isinstance(node, Scalar):
        return text_use(node, table, problems)
    assert isinstance(node, Mapping)
    fields = Fields(node, USE_KEYS, "a column", problems)
    name, stated = fields.scalar("column", required=True), fields.scalar("unit")
    use = text_use(name, table, problems) if name is not None else None
    if use is None:
        return None
    unit = use.unit
    if stated is not None:
        if read_unit(stated.text, stated.span, problems) is None:
            return None
        if unit and unit != stated.text:
            heading = next(piece for piece in use.pieces if isinstance(piece, Heading))
            problems.add("given-twice", stated.span, "the unit of this column is stated twice",
                         expected=f"{unit}, as the heading says", found=stated.text,
                         related=((heading.cell.span, "the heading"),))  # fmt: skip
            return None
        unit = stated.text
    return Use(use.pieces, unit, fields.scalar("if empty"), use.span)


def text_use(scalar: Scalar, table: Table, problems: Problems) -> Use | None:
    """Read a column's name, or text with names of columns in braces."""
    if "{" not in scalar.text:
        heading = table.find(" ".join(scalar.text.split()), scalar.span, problems)
        return Use((heading,), heading.unit, None, scalar.span) if heading is not None else None
    pieces: list[str | Heading] = []
    at = 0
    for match in _BRACES.finditer(scalar.text):
        heading = table.find(" ".join(match[1].split()), scalar.span.part(match.start(1), match.end(1)), problems)
        if heading is None:
            return None
        pieces += [scalar.text[at : match.start()], heading]
        at = match.end()
    pieces.append(scalar.text[at:])
    units = [piece.unit for piece in pieces if isinstance(piece, Heading)]
    return Use(tuple(p for p in pieces if p), units[-1] if units else "", None, scalar.span)


def take(use: Use, row: SheetRow, table: Table, problems: Problems) -> Scalar | Told | None:
    """Return what a row holds for a use; None where an empty cell stands for no row at all."""
    cells = [row.cell(piece.index) for piece in use.pieces if isinstance(piece, Heading)]
    for cell in cells:
        if cell.flaw:
            problems.add("bad-cell", cell.span, "this cell cannot be taken as it stands",
                         expected="text, or a number with its unit", found=cell.flaw, hint=_mend(cell.flaw),
                         related=((use.span, "it is asked for here"),))  # fmt: skip
            return Told(cell.span)
    empty = next((cell for cell in cells if cell.is_empty), None)
    if empty is not None:
        return _empty(use, empty, problems)
    if len(use.pieces) == 1 and cells:
        text, span = cells[0].text, cells[0].span
    else:
        found = iter(cells)
        text = "".join(piece if isinstance(piece, str) else next(found).text for piece in use.pieces)
        span = Span(cells[0].span.source, cells[0].span.start, cells[0].span.end, True) if cells else use.span
    full = with_unit(text, use.unit)
    if table.sheet.commas and _COMMA.search(full) and _BARE.match(full):
        problems.add("not-a-quantity", span, f"`{text[:40]}` may be read in two ways",
                     expected="a number without a comma, as semicolons part the columns", found=text[:40],
                     hint="write decimals with a point, and thousands without a sign")  # fmt: skip
        return Told(span)
    return Scalar(full, span if full == text else Span(span.source, span.start, span.end, True), True)


def _empty(use: Use, cell: Cell, problems: Problems) -> Scalar | Told | None:
    if use.if_empty is None:
        problems.add("empty-cell", cell.span, "this cell is empty, and a value is asked of it",
                     expected="a value, or `if empty: …` beside the column", found=cell.text or "nothing",
                     related=((use.span, "it is asked for here"),))  # fmt: skip
        return Told(cell.span)
    return None if use.if_empty.text == NO_ROW else use.if_empty


def _mend(flaw: str) -> str:
    if flaw.startswith("a date"):
        return "format the cell as text, then type its content again"
    if flaw.startswith("merged"):
        return "part the cells, and write the value into each"
    return "open the workbook in a spreadsheet program, let it work the formulas, and save it"


def is_bare(text: str) -> bool:
    """Tell whether a text is a number alone."""
    return _BARE.fullmatch(text) is not None


def with_unit(text: str, unit: str) -> str:
    """Return a number with the unit of its column, a spacing likewise; `o.c.` after a spacing is dropped."""
    spaced = _SPACED.fullmatch(text) if "@" in text else None
    if spaced:
        text = (spaced[1] or spaced[2]).rstrip()
        number = text.rpartition("@")[2].strip()
    else:
        number = text
    return f"{text} {unit}" if unit and _BARE.fullmatch(number) else text
