"""Numbered lines: symbol = formula = substitution = result, statements and boxed results.

`report.model` Line, Statement, ResultBox + lane -> one `Piece` each. Words, formula, substitution and
result share a row when they fit, else take two rows, three or four, the formula behind the words where that saves a
row; equals signs stand under one another
down the sheet, at a tab behind the words or near the left edge; results end at one edge. Checks are in
`layout.checks`.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.layout.kit import EQUALS_GAP, HANG, INDENT, RESULT_GAP, Kit
from calcreport.layout.model import Box, Item, Stroke
from calcreport.layout.pieces import Piece, Rows
from calcreport.layout.sheet import OUTLINE, Lane
from calcreport.layout.words import PLAIN, RESULT, SMALL, TextStyle
from calcreport.report.model import Formula, Line, ResultBox, Statement

#: Least height of a formula row; share of the lane at which chains behind words have their equals signs.
ROW, TAB = 11.5, 0.40
#: A chain is parted behind the words only where that makes the line lower by this much.
LEAST_SAVED = 4.0


@dataclass(frozen=True, slots=True)
class Part:
    """One member of a chain of equals signs: a box, and the sign it stands after."""

    box: Box
    #: sign before it, or None where a broken formula goes on
    sign: Box | None


@dataclass(frozen=True, slots=True)
class _Head:
    """The words of a line and the condition that chose its form, broken into text rows."""

    #: text rows above the last, with their style and left edge
    above: tuple[tuple[Box, TextStyle, float], ...]
    #: boxes of the last text row at their places, and the x they end at
    last: tuple[tuple[float, Box], ...]
    end: float


def set_line(kit: Kit, line: Line, lane: Lane) -> Piece:
    """Set a line; its citation, words, formula and result are one piece.

    Words, formula, substitution and result share one row where they fit, equals signs at a tab; else
    the words stand above.
    """
    rows, baseline = rows_of_line(kit, line, lane)
    return kit.marks.numbered(rows, baseline, line.number, line.anchor, line.source, line.delta, lane)


def rows_of_line(kit: Kit, line: Line, lane: Lane) -> tuple[Rows, float]:
    """Return the rows of a line and the baseline its number stands on."""
    rows = Rows()
    head = _head(kit, line, lane)
    symbol, result = kit.math(line.symbol), kit.math(line.result)
    sides = tuple(side for side in (line.formula, line.substitution, line.coherent) if side)
    baseline = -1.0
    for box, style, x in head.above:
        first = rows.words((box,), style, x)
        baseline = first if baseline < 0 else baseline
    chain = _beside(kit, head, symbol, sides, result, lane)
    if chain:
        first = rows.row((*head.last, *chain), PLAIN.leading, 1.0)
    else:
        split = rows.twin()
        first = _under(kit, rows, head, symbol, sides, result, lane)
        beside = _split(kit, split, head, symbol, sides, result, lane)
        if beside >= 0 and split.y < rows.y - LEAST_SAVED:
            rows, first = split, beside
    return rows, first if baseline < 0 else baseline


def _under(
    kit: Kit, rows: Rows, head: _Head, symbol: Box, sides: tuple[Formula, ...], result: Box, lane: Lane
) -> float:
    """Set the chain under the words; return the first baseline."""
    first = rows.row(head.last, PLAIN.leading, 0.0) if head.last else -1.0
    start = max(kit.equals_at(lane), lane.left + INDENT + symbol.width + EQUALS_GAP)
    inner = Lane(start if sides else _bare(kit, result, lane.right), lane.right)
    under = set_chain(kit, rows, symbol, chain_of(kit, sides, inner), result, inner)
    return first if first >= 0 else under


def _split(
    kit: Kit, rows: Rows, head: _Head, symbol: Box, sides: tuple[Formula, ...], result: Box, lane: Lane
) -> float:
    """Set the formula behind the words and the rest under it, equals signs under one another where there is room.

    Returns the first baseline, or -1 where there is no room for that.
    """
    if len(sides) < 2 or not head.last or head.above:
        return -1.0
    sign = kit.equals.width + EQUALS_GAP
    boxes = tuple(kit.math(side) for side in sides)
    first, rest = sign + boxes[0].width, sum(box.width + sign + EQUALS_GAP for box in boxes[1:])
    rest += RESULT_GAP + sign + result.width
    least, tab = head.end + RESULT_GAP + symbol.width + EQUALS_GAP, lane.left + TAB * lane.width
    start = max(least, min(tab, lane.right - max(first, rest)))
    x = start
    if start + rest > lane.right + 0.01:
        # the rest begins where chains under their words do
        start, x = max(least, min(tab, lane.right - first)), kit.equals_at(lane)
    if max(start + first, x + rest) > lane.right + 0.01:
        return -1.0
    placed: list[tuple[float, Box]] = [*head.last, (start - EQUALS_GAP - symbol.width, symbol)]
    put(placed, Part(boxes[0], kit.equals), start)
    baseline = rows.row(placed, PLAIN.leading, 1.0)
    placed = []
    for box in boxes[1:]:
        x = put(placed, Part(box, kit.equals), x)
    rows.row((*placed, *_after_equals(kit, result, lane.right)), ROW, 1.4)
    return baseline


def _head(kit: Kit, line: Line, lane: Lane) -> _Head:
    """Break the words, and set the condition behind them or under them."""
    words = kit.lettering.set(line.says, PLAIN, lane.width)
    above = tuple((box, PLAIN, lane.left) for box in words[:-1])
    last = ((lane.left, words[-1]),) if words else ()
    end = lane.left + (words[-1].width if words else 0.0)
    if line.because is None:
        return _Head(above, last, end)
    left = lane.left + INDENT
    note = kit.lettering.set(("since ", line.because), SMALL, lane.right - left)
    if last and len(note) == 1 and end + RESULT_GAP + note[0].width <= lane.right:
        start = end + RESULT_GAP
        return _Head(above, (*last, (start, note[0])), start + note[0].width)
    above = (*above, *((box, PLAIN, lane.left) for box in words[-1:]), *((box, SMALL, left) for box in note[:-1]))
    return _Head(above, ((left, note[-1]),), left + note[-1].width)


def _beside(
    kit: Kit, head: _Head, symbol: Box, sides: tuple[Formula, ...], result: Box, lane: Lane
) -> tuple[tuple[float, Box], ...]:
    """Place the chain behind the last text row, where it has room there; else return nothing."""
    if not head.last or (sides and head.above):
        return ()
    least = head.end + RESULT_GAP + symbol.width + EQUALS_GAP
    boxes = tuple(kit.math(side) for side in sides)
    sign = kit.equals.width + 2 * EQUALS_GAP
    need = sum(box.width + sign for box in boxes) + RESULT_GAP * bool(boxes) + sign - EQUALS_GAP + result.width
    # At the tab if words and chain leave it free, else as far left or right of it as they ask.
    start = max(least, min(lane.left + TAB * lane.width, lane.right - need)) if sides else lane.right - need
    if start < least or start + need > lane.right + 0.01:
        return ()
    placed: list[tuple[float, Box]] = [(start - EQUALS_GAP - symbol.width, symbol)]
    x = start
    for box in boxes:
        x = put(placed, Part(box, kit.equals), x)
    return (*placed, *_after_equals(kit, result, lane.right))


def _bare(kit: Kit, result: Box, right: float) -> float:
    """Return where the equals sign of `symbol = result` stands, the result ending at `right`."""
    return right - result.width - EQUALS_GAP - kit.equals.width


def _after_equals(kit: Kit, result: Box, right: float) -> tuple[tuple[float, Box], ...]:
    """Place an equals sign and the result so that the result ends at `right`."""
    x = right - result.width
    return ((x - EQUALS_GAP - kit.equals.width, kit.equals), (x, result))


def chain_of(kit: Kit, sides: tuple[Formula, ...], inner: Lane) -> list[Part]:
    """Measure right-hand sides; break those that are wider than the lane right of its equals sign."""
    room = inner.width - kit.equals.width - EQUALS_GAP
    parts: list[Part] = []
    for side in sides:
        box = kit.math(side)
        if box.width <= room:
            parts.append(Part(box, kit.equals))
            continue
        rows = kit.rows(side, room)
        parts.extend(Part(row, None if place else kit.equals) for place, row in enumerate(rows))
    return parts


def rows_of(parts: list[Part], closing: float, width: float) -> list[list[Part]]:
    """Share parts out over rows, filled from the last one, which also holds the result.

    `closing` is the room the result takes with its sign and gap; a result that finds no room behind
    the last part has a row of its own, an empty one at the end of what is returned.
    """
    rows: list[list[Part]] = [[]]
    room = width - closing
    for part in reversed(parts):
        wide = part.box.width + (part.sign.width if part.sign else HANG) + 2 * EQUALS_GAP
        alone = part.sign is None or (rows[0] and rows[0][0].sign is None)
        if wide > room + EQUALS_GAP or (alone and rows[0]):
            rows.insert(0, [])
            room = width
        rows[0].insert(0, part)
        room -= wide
    return rows


def set_chain(kit: Kit, rows: Rows, symbol: Box, parts: list[Part], result: Box, inner: Lane) -> float:
    """Add `symbol = part = part … = result`, first sign at `inner.left`; return the first baseline."""
    closing = RESULT_GAP + kit.equals.width + EQUALS_GAP + result.width
    shared = rows_of(parts, closing, inner.width)
    first = -1.0
    for place, row in enumerate(shared):
        placed: list[tuple[float, Box]] = []
        if place == 0:
            placed.append((inner.left - EQUALS_GAP - symbol.width, symbol))
        x = inner.left
        for part in row:
            x = put(placed, part, x)
        if place == len(shared) - 1:
            placed.extend(_after_equals(kit, result, inner.right))
        baseline = rows.row(placed, ROW, 1.4)
        first = baseline if place == 0 else first
    return first


def put(placed: list[tuple[float, Box]], part: Part, x: float) -> float:
    """Place one part with its sign at `x`; return where the next sign may stand."""
    if part.sign is None:
        placed.append((x + HANG, part.box))
        return x + HANG + part.box.width + EQUALS_GAP
    placed.append((x, part.sign))
    x += part.sign.width + EQUALS_GAP
    placed.append((x, part.box))
    return x + part.box.width + EQUALS_GAP


def set_statement(kit: Kit, statement: Statement, lane: Lane) -> Piece:
    """Set a requirement: words and formula in one row when they fit, else under one another.

    Further forms of a formula stand behind it where its row has room.
    """
    rows, baseline, end = Rows(), -1.0, lane.left
    row: list[tuple[float, Box]] = []
    for one in (statement, *statement.others):
        words = kit.lettering.set(one.says, PLAIN, lane.width)
        formula = kit.math(one.formula)
        wide = (words[0].width + RESULT_GAP if words else 0.0) + formula.width
        start = end + 2 * RESULT_GAP if row else lane.left
        whole = len(words) == 1 and start + wide <= lane.right
        if row and not whole:
            baseline = _closing(rows, row, baseline)
            start, whole = lane.left, len(words) == 1 and wide <= lane.width
        if whole:
            at = start + words[0].width + RESULT_GAP
            tab = lane.left + TAB * lane.width - kit.symbols - EQUALS_GAP
            at = at if row else max(at, min(tab, lane.right - formula.width))
            row += [(start, words[0]), (at, formula)]
            end = at + formula.width
            continue
        first = rows.words(words, PLAIN, lane.left) if words else -1.0
        baseline = first if baseline < 0 else baseline
        room = lane.width - INDENT
        for place, box in enumerate(kit.rows(one.formula, room) if formula.width else ()):
            baseline = _closing(rows, row, baseline)
            x = lane.left + INDENT + (HANG if place else 0.0)
            row, end = [(x, box)], x + box.width
    baseline = _closing(rows, row, baseline)
    return kit.marks.numbered(
        rows, baseline, statement.number, statement.anchor, statement.source, statement.delta, lane
    )


def _closing(rows: Rows, row: list[tuple[float, Box]], baseline: float) -> float:
    """Set a row begun, which is empty then; return the first baseline of all rows."""
    if not row:
        return baseline
    own = rows.row(tuple(row), PLAIN.leading if len(row) > 1 else ROW)
    row.clear()
    return own if baseline < 0 else baseline


def set_result_box(kit: Kit, result: ResultBox, lane: Lane) -> Piece:
    """Set the result to use, ruled round."""
    rows = Rows(3.2)
    words = kit.lettering.set(result.words, RESULT, lane.width - 6.0)
    baseline = rows.words(words, RESULT, lane.left + 3.0) if words else 3.2
    left, right, foot = lane.left - 3.0, lane.right + 3.0, rows.y + 3.0
    edges = ((left, 0.5), (right, 0.5), (right, foot), (left, foot))
    rules: list[Item] = [Stroke(edges, OUTLINE, closed=True)]
    rows.items[:0] = rules
    rows.y = foot + 0.5
    return kit.marks.numbered(rows, baseline, result.number, result.anchor, result.source, result.delta, lane)
