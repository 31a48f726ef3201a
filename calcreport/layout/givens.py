"""The table of given values: one ruled row each, a tick ring beside every number.

`report.model.Givens` + lane -> one `Piece` a row. Symbols end at the same equals signs as the lines
column; where a value came from stands in the source lane.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from calcreport.layout.kit import EQUALS_GAP, HANG, INDENT, SYMBOL_CAP, Kit
from calcreport.layout.marks import IN_ROW
from calcreport.layout.model import Anchor, Box, Item, Placed
from calcreport.layout.pieces import Piece, Rows
from calcreport.layout.sheet import Lane
from calcreport.layout.words import SMALL, SOURCE
from calcreport.report.model import GivenRow, Givens

#: Size of symbols and values, height of a row, its baseline, gap before the words.
SIZE, PITCH, BASE, GAP = 9.5, 11.3, 8.4, 8.0
#: Widest value the words of all rows make room for; words of a wider one follow it, with at least this room.
COLUMN, LEAST_WORDS = 84.0, 90.0


@dataclass(frozen=True, slots=True)
class _Columns:
    """Where equals signs, values and words of the rows stand."""

    lane: Lane
    equals: float
    words: float


def set_givens(kit: Kit, givens: Givens, lane: Lane) -> tuple[Piece, ...]:
    """Set the table; it may break between rows, but not off its first or last one."""
    wide = (kit.math(row.symbol, SIZE).width for row in givens.rows)
    symbols = max((width for width in wide if width <= SYMBOL_CAP), default=0.0)
    equals = lane.left + INDENT + symbols + EQUALS_GAP
    start = equals + kit.equals.width + EQUALS_GAP
    most = min(COLUMN, lane.right - start - LEAST_WORDS)
    widths = (kit.math(row.value, SIZE).width for row in givens.rows)
    words = start + max((width for width in widths if width <= most), default=0.0) + GAP
    columns = _Columns(lane, equals, words)
    pieces = [_set_row(kit, row, columns) for row in givens.rows]
    if not pieces:
        return ()
    pieces[0] = replace(pieces[0], before=4.0, keep=len(pieces) > 1)
    if len(pieces) > 1:
        pieces[-2] = replace(pieces[-2], keep=True)
    pieces[-1] = replace(pieces[-1], items=(*pieces[-1].items, *pieces[-1].closing))
    return tuple(pieces)


def _set_row(kit: Kit, row: GivenRow, columns: _Columns) -> Piece:
    """Set one row: number and ring, symbol = value, words, source; a rule above it."""
    lane = columns.lane
    rows = Rows()
    symbol = kit.math(row.symbol, SIZE)
    equals = max(columns.equals, lane.left + INDENT + symbol.width + EQUALS_GAP)
    start = equals + kit.equals.width + EQUALS_GAP
    values = _value_rows(kit, row, lane.right - start)
    baseline = max(BASE, symbol.ascent + 1.5, values[0].ascent + 1.5)
    rows.items.append(Placed(start, baseline, values[0]))
    if symbol.width > 0:
        rows.items[:0] = [
            Placed(equals - EQUALS_GAP - symbol.width, baseline, symbol),
            Placed(equals, baseline, kit.equals),
        ]
    rows.y = baseline + max(PITCH - BASE, symbol.descent + 0.5, values[0].descent + 0.5)
    for box in values[1:]:
        rows.row(((start + HANG, box),), PITCH)
    _words(kit, row, columns, rows, (start + values[0].width, baseline))
    items: list[Item] = [kit.rule(lane, 0.0), Anchor(row.anchor, kit.sheet.work, 0.0)]
    items.append(Placed(kit.sheet.number_axis, baseline, kit.marks.number(row.number)))
    items.extend(rows.items)
    height = max(rows.y, _source(kit, row, baseline, items))
    if row.delta:
        items.extend(kit.marks.delta(row.delta, height))
    cloud = kit.marks.cloud(row.delta, lane, IN_ROW)
    return Piece(height, tuple(items), closing=(kit.rule(lane, height),), cloud=cloud)


def _value_rows(kit: Kit, row: GivenRow, room: float) -> tuple[Box, ...]:
    """Return the value in one row, or in more where it is wider than the lane."""
    value = kit.math(row.value, SIZE)
    return (value,) if value.width <= room else kit.rows(row.value, room)


def _words(kit: Kit, row: GivenRow, columns: _Columns, rows: Rows, end: tuple[float, float]) -> None:
    """Set the words behind the value where they fit one row there, else from the column of words down."""
    right = columns.lane.right
    x, baseline = end
    at = max(columns.words, x + GAP)
    lines = kit.lettering.set(row.says, SMALL, max(right - at, LEAST_WORDS))
    behind = at == columns.words or (len(lines) == 1 and at + lines[0].width <= right)
    if not behind or rows.y > baseline + PITCH:
        lines = kit.lettering.set(row.says, SMALL, right - columns.words)
        rows.words(lines, SMALL, columns.words)
    elif lines:
        rows.items.append(Placed(at, baseline, lines[0]))
        rows.words(lines[1:], SMALL, at)


def _source(kit: Kit, row: GivenRow, baseline: float, items: list[Item]) -> float:
    """Add where the value came from; return the y below it."""
    lane = kit.sheet.sources
    y = baseline
    for line in kit.lettering.set(row.source, SOURCE, lane.width):
        items.append(Placed(lane.left, y, line))
        y += SOURCE.leading
    return y - SOURCE.leading + 2.5
