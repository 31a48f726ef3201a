"""Short lines that share rows: values handed on, words, constants.

`report.model.Lines` + lane -> one `Piece`. Each begins at a quarter of the lane where that leaves it room.
"""

from __future__ import annotations

from calcreport.layout.kit import EQUALS_GAP, RESULT_GAP, Kit
from calcreport.layout.lines import Part, put, rows_of_line
from calcreport.layout.model import Box, Placed
from calcreport.layout.pieces import Piece, Rows
from calcreport.layout.sheet import Lane
from calcreport.layout.words import PLAIN, UNBROKEN
from calcreport.report.model import Line, Lines

#: Gap between short lines that share a row.
RUN_GAP = 16.0


def set_lines(kit: Kit, lines: Lines, lane: Lane) -> Piece:
    """Set short lines in common rows, each from a tab of its row; one that is alone in its row as any line."""
    rows = Rows()
    first = -1.0
    for shared in _shared(kit, lines.lines, lane):
        if len(shared) > 1:
            baseline = rows.row(tuple(box for boxes in shared for box in boxes[1]), PLAIN.leading, 1.0)
        else:
            alone, baseline = rows_of_line(kit, shared[0][0], lane)
            rows.items.append(Placed(0.0, rows.y, Box(0.0, 0.0, alone.y, tuple(alone.items))))
            baseline += rows.y
            rows.y += alone.y
        first = baseline if first < 0 else first
    return kit.marks.numbered(rows, first, lines.number, lines.anchor, lines.source, lines.delta, lane)


def _shared(kit: Kit, lines: tuple[Line, ...], lane: Lane) -> list[list[tuple[Line, list[tuple[float, Box]]]]]:
    """Share lines out over rows, every one placed at a quarter of the lane where that leaves it room."""
    shared: list[list[tuple[Line, list[tuple[float, Box]]]]] = []
    end = lane.right
    for line in lines:
        boxes = _flowing(kit, line)
        width = boxes[-1][0] + boxes[-1][1].width
        tabs = (lane.left + lane.width * quarter / 4 for quarter in range(4))
        least = end + RUN_GAP
        start = next((tab for tab in tabs if least <= tab and tab + width <= lane.right), least)
        if not shared or start + width > lane.right:
            shared.append([])
            start = lane.left
        shared[-1].append((line, [(start + x, box) for x, box in boxes]))
        end = start + width
    return shared


def _flowing(kit: Kit, line: Line) -> list[tuple[float, Box]]:
    """Place words, symbol, formula and result behind one another from x = 0."""
    placed: list[tuple[float, Box]] = []
    x = 0.0
    for words in kit.lettering.set(line.says, PLAIN, UNBROKEN):
        placed.append((x, words))
        x += words.width + RESULT_GAP - EQUALS_GAP
    symbol = kit.math(line.symbol)
    placed.append((x, symbol))
    x += symbol.width + EQUALS_GAP
    for side in (line.formula, line.substitution, line.coherent, line.result):
        if side is not None:
            x = put(placed, Part(kit.math(side), kit.equals), x)
    return placed
