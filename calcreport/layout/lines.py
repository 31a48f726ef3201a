"""Numbered lines: symbol = formula = substitution = result, statements and boxed results.

`report.model` Line, Statement, ResultBox + lane -> one `Piece` each. Formula, substitution and result
share a row when they fit, else take two rows or three; equals signs stand under one another down the
sheet, results end at one edge. Checks are in `layout.checks`.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.layout.kit import EQUALS_GAP, HANG, INDENT, RESULT_GAP, Kit
from calcreport.layout.model import Box, Item, Stroke
from calcreport.layout.pieces import Piece, Rows
from calcreport.layout.sheet import OUTLINE, Lane
from calcreport.layout.words import PLAIN, RESULT, SMALL
from calcreport.report.model import Formula, Line, ResultBox, Statement

#: Least height of a formula row.
ROW = 13.5


@dataclass(frozen=True, slots=True)
class Part:
    """One member of a chain of equals signs: a box, and the sign it stands after."""

    box: Box
    #: sign before it, or None where a broken formula goes on
    sign: Box | None


def set_line(kit: Kit, line: Line, lane: Lane) -> Piece:
    """Set a line; its citation, words, formula and result are one piece."""
    rows = Rows()
    words = kit.lettering.set(line.says, PLAIN, lane.width)
    symbol = kit.math(line.symbol)
    result = kit.math(line.result)
    sides = tuple(side for side in (line.formula, line.substitution, line.coherent) if side)
    if not sides and line.because is None and words and _fits_beside(kit, words, symbol, result, lane):
        first = rows.words(words[:-1], PLAIN, lane.left)
        start = lane.right - result.width - 2 * EQUALS_GAP - kit.equals.width - symbol.width
        chain = ((lane.left, words[-1]), (start, symbol), *_after_equals(kit, result, lane.right))
        last = rows.row(chain, PLAIN.leading)
        baseline = first if len(words) > 1 else last
    else:
        baseline = _opening(kit, rows, line, words, lane)
        start = max(kit.equals_at(lane), lane.left + INDENT + symbol.width + EQUALS_GAP)
        inner = Lane(start, lane.right)
        first = set_chain(kit, rows, symbol, chain_of(kit, sides, inner), result, inner)
        baseline = first if baseline < 0 else baseline
    return kit.marks.numbered(rows, baseline, line.number, line.anchor, line.source, line.delta, lane)


def _opening(kit: Kit, rows: Rows, line: Line, words: tuple[Box, ...], lane: Lane) -> float:
    """Add the words, and the condition that chose this form behind or under them.

    Return the first baseline, -1 where there is neither.
    """
    if line.because is None:
        return rows.words(words, PLAIN, lane.left) if words else -1.0
    note = kit.lettering.set(("since ", line.because), SMALL, lane.width - INDENT)
    if words and len(note) == 1 and words[-1].width + RESULT_GAP + note[0].width <= lane.width:
        first = rows.words(words[:-1], PLAIN, lane.left)
        start = lane.left + words[-1].width + RESULT_GAP
        last = rows.row(((lane.left, words[-1]), (start, note[0])), PLAIN.leading, 0.0)
        return first if len(words) > 1 else last
    baseline = rows.words(words, PLAIN, lane.left) if words else -1.0
    first = rows.words(note, SMALL, lane.left + INDENT)
    return first if baseline < 0 else baseline


def _fits_beside(kit: Kit, words: tuple[Box, ...], symbol: Box, result: Box, lane: Lane) -> bool:
    """Tell whether `symbol = result` has room behind the last text line."""
    need = symbol.width + result.width + kit.equals.width + 2 * EQUALS_GAP + RESULT_GAP
    return words[-1].width + need <= lane.width


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


def set_chain(
    kit: Kit, rows: Rows, symbol: Box, parts: list[Part], result: Box, inner: Lane
) -> float:
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
            x = _put(placed, part, x)
        if place == len(shared) - 1:
            placed.extend(_after_equals(kit, result, inner.right))
        baseline = rows.row(placed, ROW)
        first = baseline if place == 0 else first
    return first


def _put(placed: list[tuple[float, Box]], part: Part, x: float) -> float:
    """Place one part with its sign at `x`; return where the next sign may stand."""
    if part.sign is None:
        placed.append((x + HANG, part.box))
        return x + HANG + part.box.width + EQUALS_GAP
    placed.append((x, part.sign))
    x += part.sign.width + EQUALS_GAP
    placed.append((x, part.box))
    return x + part.box.width + EQUALS_GAP


def set_statement(kit: Kit, statement: Statement, lane: Lane) -> Piece:
    """Set a requirement: words and formula in one row when they fit, else under one another."""
    rows = Rows()
    words = kit.lettering.set(statement.says, PLAIN, lane.width)
    formula = kit.math(statement.formula)
    if len(words) == 1 and words[0].width + RESULT_GAP + formula.width <= lane.width:
        start = lane.left + words[0].width + RESULT_GAP
        baseline = rows.row(((lane.left, words[0]), (start, formula)), PLAIN.leading)
    else:
        baseline = rows.words(words, PLAIN, lane.left) if words else -1.0
        room = lane.width - INDENT
        for place, box in enumerate(kit.rows(statement.formula, room)):
            x = lane.left + INDENT + (HANG if place else 0.0)
            first = rows.row(((x, box),), ROW)
            baseline = first if baseline < 0 else baseline
    return kit.marks.numbered(
        rows, baseline, statement.number, statement.anchor, statement.source, statement.delta, lane
    )


def set_result_box(kit: Kit, result: ResultBox, lane: Lane) -> Piece:
    """Set the result to use, ruled round."""
    rows = Rows(4.0)
    words = kit.lettering.set(result.words, RESULT, lane.width - 6.0)
    baseline = rows.words(words, RESULT, lane.left + 3.0) if words else 4.0
    left, right, foot = lane.left - 3.0, lane.right + 3.0, rows.y + 4.0
    edges = ((left, 0.5), (right, 0.5), (right, foot), (left, foot))
    rules: list[Item] = [Stroke(edges, OUTLINE, closed=True)]
    rows.items[:0] = rules
    rows.y = foot + 0.5
    return kit.marks.numbered(
        rows, baseline, result.number, result.anchor, result.source, result.delta, lane
    )
