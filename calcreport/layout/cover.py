"""The cover: ruled cells from the title down to the empty area for the engineer's seal.

`report.model.CoverFacts` and the count of sheets -> items of the cover, and pieces that found no room
on it. The seal area is a clear square of 66 mm (2.6 in.): nothing is ever drawn in it. Cells take the
height their words need; what a long list of members leaves over goes on a second cover sheet.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.layout.fonts import Manner
from calcreport.layout.marks import BAR
from calcreport.layout.model import Box, Item, Placed, Stroke
from calcreport.layout.pieces import Piece
from calcreport.layout.sheet import FRAME, HAIRLINE, HEAVY, MM, OUTLINE, Sheet
from calcreport.layout.titleblock import cell_label, fitted, rule, text_lines
from calcreport.layout.words import Lettering, TextStyle
from calcreport.report.model import CoverFacts, Words

#: Side of the clear square for the seal.
SEAL = 66 * MM
_PAD = 10.0
#: Least height of the cell that holds the seal area and its words, and height of the last row.
SEAL_CELL = SEAL + 2 * _PAD + 18.0
FOOT = 46.0
_TITLE = tuple(TextStyle("semibold", size, 1.2 * size) for size in (22.0, 18.0, 15.0, 12.0))
_BIG = tuple(TextStyle("semibold", size, 1.2 * size) for size in (13.0, 11.0, 9.0))
_TEXT = TextStyle("regular", 10, 13.5)
_MARKS = TextStyle("semibold", 9.5, 12.5)
_PLACES = TextStyle("regular", 9.5, 12.5)
_CAUTION = (
    TextStyle("regular", 9.5, 12.8),
    TextStyle("regular", 8.5, 11),
    TextStyle("regular", 8, 10.2),
    TextStyle("regular", 7, 8.8),
)
_SMALL = (TextStyle("regular", 8.5, 10.5), TextStyle("regular", 7.5, 9), TextStyle("regular", 6.5, 8))


@dataclass(frozen=True, slots=True)
class Cover:
    """Items of the cover sheet, and the pieces that go on the next one."""

    items: tuple[Item, ...]
    rest: tuple[Piece, ...]


class _Cells:
    """Cells ruled one under another across the frame, each widened by its share of what is spare."""

    def __init__(self, sheet: Sheet, lettering: Lettering, spare: float = 0.0) -> None:
        self.sheet, self.lettering, self.spare = sheet, lettering, spare
        self.items: list[Item] = []
        self.y = sheet.top
        self.left, self.right = sheet.left + _PAD, sheet.right - _PAD

    def lines(self, words: Words, style: TextStyle, x: float, y: float, width: float) -> float:
        """Set words from `y` down; return the y below them."""
        placed, foot = text_lines(self.lettering.set(words, style, width), style, x, y)
        self.items.extend(placed)
        return foot

    def named(self, text: str, x: float, y: float) -> float:
        """Set the small name of a cell; return the y below it."""
        self.items.append(cell_label(self.lettering, text, x - 4.5, y + 2.0))
        return y + 15.0

    def close(self, foot: float, weight: float = HAIRLINE) -> None:
        """Rule the cell off at `foot`."""
        self.y = foot
        self.items.append(rule(self.sheet.left, foot, self.sheet.right, foot, weight))


def set_cover(sheet: Sheet, lettering: Lettering, facts: CoverFacts, label: str, count: int) -> Cover:
    """Set the cover of a package of `count` sheets.

    Set once close to find what is spare, then with the spare shared out over the cells.
    """
    foot = sheet.foot - FOOT
    room = foot - sheet.top - SEAL_CELL
    close = _Cells(sheet, lettering)
    rest = _upper(close, facts, room)
    cells = _Cells(sheet, lettering, max(0.0, room - (close.y - sheet.top)))
    if cells.spare:
        rest = _upper(cells, facts, room)
    else:
        cells = close
    _cautions(cells, facts, foot)
    _foot(cells, facts, foot, label, count)
    return Cover(tuple(cells.items), rest)


def _upper(cells: _Cells, facts: CoverFacts, room: float) -> tuple[Piece, ...]:
    """Set the cells above the seal; return the rows of the lists that found no room."""
    _header(cells, facts)
    # Basis and result are set first on paper of their own, to know what the lists may take.
    below = _Cells(cells.sheet, cells.lettering, cells.spare)
    _basis(below, facts)
    _result(below, facts)
    height = below.y - cells.sheet.top
    rest = _lists(cells, facts, cells.sheet.top + room - cells.y - height)
    shift = cells.y - cells.sheet.top
    cells.items.append(Placed(0.0, shift, Box(cells.sheet.width, 0.0, 0.0, tuple(below.items))))
    cells.y += height
    return rest


def _header(cells: _Cells, facts: CoverFacts) -> None:
    """Say what this is, of which project, at which issue and status."""
    split = cells.left + 0.62 * (cells.right - cells.left)
    lettering, top = cells.lettering, cells.y + 14.0 + 0.18 * cells.spare
    style = TextStyle("semibold", 9.5, 12, Manner(tracking=60))
    y = cells.lines(("STRUCTURAL CALCULATIONS",), style, cells.left, top, split - cells.left)
    lines, style = fitted(lettering, facts.title, _TITLE, split - cells.left - _PAD, 56.0)
    placed, y = text_lines(lines, style, cells.left, y + 8.0)
    cells.items.extend(placed)
    y += 9.0
    for line in facts.header:
        y = cells.lines((line,), _TEXT, cells.left, y, split - cells.left - _PAD)
    right = status = top
    for text, styles, gap in (
        (facts.issue, _BIG, 1.0),
        (facts.date, (_TEXT,), 12.0),
        (facts.status, _BIG, 1.0),
        (facts.status_note, (_TEXT,), 0.0),
    ):
        lines, style = fitted(lettering, text, styles, cells.right - split, 3 * styles[-1].leading)
        status = right if text is facts.status else status
        placed, right = text_lines(lines, style, split, right)
        cells.items.extend(placed)
        right += gap
    if facts.status_is_loud:
        edge, foot = cells.right, right + 5.0
        corners = ((split - 6.0, status - 5.0), (edge, status - 5.0), (edge, foot), (split - 6.0, foot))
        cells.items.append(Stroke(corners, HEAVY, closed=True))
    cells.close(max(y, right) + 12.0 + 0.22 * cells.spare)


def _lists(cells: _Cells, facts: CoverFacts, room: float) -> tuple[Piece, ...]:
    """Set what the package holds beside what it leaves to others; return the rows that do not fit."""
    sheet = cells.sheet
    middle = (sheet.left + sheet.right) / 2
    top = cells.y
    halves = (
        (cells.left, middle - _PAD, "SCOPE OF THIS PACKAGE", facts.scope),
        (middle + _PAD, cells.right, "NOT IN THIS PACKAGE, AND WHERE IT IS", facts.elsewhere),
    )
    foot = top + 26.0
    rest: list[Piece] = []
    for left, right, name, entries in halves:
        y = cells.named(name, left, top) + 1.0
        rows = _entries(cells.lettering, entries, left, right)
        whole = sum(row.height for row in rows) <= top + room - y - 8.0
        for place, row in enumerate(rows):
            if not whole and y + row.height > top + room - 20.0:
                y = cells.lines(("continued on the next sheet",), _SMALL[1], left, y, right - left)
                rest.extend((_heading(cells, name), *_from_left(cells, rows[place:], left)))
                break
            cells.items.append(Placed(0.0, y, Box(sheet.width, 0.0, row.height, row.items)))
            y += row.height
        foot = max(foot, y + 8.0)
    foot += 0.2 * cells.spare
    cells.items.append(rule(middle, top, middle, foot))
    cells.close(foot)
    return tuple(rest)


def _entries(lettering: Lettering, entries: tuple[tuple[str, str], ...], left: float, right: float) -> list[Piece]:
    """Set marks and the words about them at one tab; marks too wide for it stand above their words."""
    most = 0.5 * (right - left)
    widths = [lettering.natural((marks,), _MARKS) + 12.0 for marks, _ in entries]
    tab = max((width for width in widths if width <= most), default=most)
    return [_entry(lettering, entry, left, right, tab) for entry in entries]


def _entry(lettering: Lettering, entry: tuple[str, str], left: float, right: float, tab: float) -> Piece:
    marks, words = entry
    first = lettering.set((marks,), _MARKS, right - left)
    beside = len(first) == 1 and first[0].width + 12.0 <= tab + 0.01
    items, y = text_lines(first, _MARKS, left, 1.0)
    start = left + (tab if beside else 12.0)
    lines = lettering.set((words,), _PLACES, right - start)
    placed, foot = text_lines(lines, _PLACES, start, 1.0 if beside else y)
    return Piece(max(foot, y) + 1.5, (*items, *placed))


def _heading(cells: _Cells, name: str) -> Piece:
    style = TextStyle("semibold", 9, 12)
    items, foot = text_lines(cells.lettering.set((f"{name}, continued",), style, 240.0), style, cells.left, 0.0)
    return Piece(foot + 2.0, tuple(items), 10.0, keep=True)


def _from_left(cells: _Cells, rows: list[Piece], left: float) -> list[Piece]:
    """Move rows set in either half to the left edge of the sheet."""
    move = cells.left - left
    return [Piece(row.height, (Placed(move, 0.0, Box(0.0, 0.0, row.height, row.items)),)) for row in rows]


def _basis(cells: _Cells, facts: CoverFacts) -> None:
    """Give codes, loads and criteria."""
    y = cells.named("BASIS", cells.left, cells.y)
    for line in facts.basis:
        y = cells.lines((line,), _PLACES, cells.left, y, cells.right - cells.left)
    cells.close(y + 8.0 + 0.07 * cells.spare)


def _result(cells: _Cells, facts: CoverFacts) -> None:
    """Give the result; loud where a check is NG, between heavy rules with a bar at the frame."""
    sheet, top = cells.sheet, cells.y
    y = cells.named("RESULT", cells.left, top)
    for place, line in enumerate(facts.result):
        style = TextStyle("semibold", 11, 14) if place == 0 else _PLACES
        y = cells.lines(line, style, cells.left, y, cells.right - cells.left)
    foot = y + 8.0 + 0.08 * cells.spare
    if facts.result_is_loud:
        left, right = sheet.left, sheet.left + BAR
        bar = ((left, top), (right, top), (right, foot), (left, foot))
        cells.items.append(Stroke(bar, 0.0, closed=True, fill=0.0))
        cells.items.append(rule(sheet.left, top, sheet.right, top, HEAVY))
    cells.close(foot, HEAVY if facts.result_is_loud else HAIRLINE)


def _cautions(cells: _Cells, facts: CoverFacts, foot: float) -> None:
    """Set the words to the reviewing engineer left of the empty seal area."""
    top = cells.y
    seal_right = cells.sheet.right - _PAD
    seal_left = seal_right - SEAL
    width = seal_left - 1.6 * _PAD - cells.left
    y = cells.named("FOR THE REVIEWING ENGINEER", cells.left, top) + 1.0
    for style in _CAUTION:
        rows = [cells.lettering.set((text,), style, width) for text in facts.cautions]
        need = sum(len(lines) * style.leading + 0.45 * style.leading for lines in rows)
        if y + need <= foot - 4.0 or style is _CAUTION[-1]:
            for lines in rows:
                placed, y = text_lines(lines, style, cells.left, y)
                cells.items.extend(placed)
                y += 0.45 * style.leading
            break
    seal_top = top + _PAD + 0.25 * max(0.0, foot - top - SEAL_CELL)
    cells.items.append(Stroke(seal_square(seal_left, seal_top), OUTLINE, closed=True))
    lines, style = fitted(cells.lettering, facts.seal_words, _SMALL[1:], SEAL, 2 * 9.0)
    cells.items.extend(text_lines(lines, style, seal_left, seal_top + SEAL + 3.0)[0])


def seal_square(left: float, top: float) -> tuple[tuple[float, float], ...]:
    """Return the corners of the seal area."""
    return ((left, top), (left + SEAL, top), (left + SEAL, top + SEAL), (left, top + SEAL))


def _foot(cells: _Cells, facts: CoverFacts, top: float, label: str, count: int) -> None:
    """Rule the last row: office, count of sheets, fingerprint, and the name of the sheet."""
    sheet, lettering = cells.sheet, cells.lettering
    cells.items.append(rule(sheet.left, top, sheet.right, top, FRAME))
    edges = (sheet.left, sheet.left + 0.42 * (sheet.right - sheet.left), 0.0, sheet.source, sheet.right)
    edges = (*edges[:2], edges[1] + 0.42 * (sheet.source - edges[1]), *edges[3:])
    texts = (
        ("PREPARED BY", "\n".join(facts.office)),
        ("SHEETS IN PACKAGE", str(count)),
        ("PACKAGE FINGERPRINT", facts.fingerprint),
    )
    for place, (name, text) in enumerate(texts):
        left, right = edges[place], edges[place + 1]
        y = cells.named(name, left + _PAD, top) - 2.0
        for line in text.split("\n"):
            lines, style = fitted(lettering, line, _SMALL, right - left - 1.5 * _PAD, 10.6)
            placed, y = text_lines(lines, style, left + _PAD, y)
            cells.items.extend(placed)
        cells.items.append(rule(right, top, right, sheet.foot))
    number = lettering.label(label, "semibold", 16)
    x, y = sheet.right - 4.5 - number.width, sheet.foot - 8.0
    cells.items.append(cell_label(lettering, "SHEET", sheet.source, top))
    cells.items.append(Placed(x, y, number))
