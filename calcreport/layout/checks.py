"""Check lines: quiet when OK, loud when NG.

`report.model.CheckLine` + lane -> one `Piece`. A check that holds is one ruled row: name, formula =
substitution, ratio, OK. One that does not is set between heavy rules with a boxed NG and a solid
bar at the frame. Loudness is ink, never tone or colour, so that it survives any copier.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.layout.kit import EQUALS_GAP, INDENT, RESULT_GAP, Kit
from calcreport.layout.lines import ROW, Part, chain_of, rows_of
from calcreport.layout.marks import loud_bar
from calcreport.layout.model import Box, Placed, Stroke
from calcreport.layout.pieces import Piece, Rows
from calcreport.layout.sheet import OUTLINE, Lane
from calcreport.layout.words import QUIET, STRONG
from calcreport.report.model import CheckLine, Formula, Operator, Row

#: Where formulas stand when the name leaves them room; room for the verdict right of the ratio.
TAB, VERDICT = 112.0, 36.0


def set_check(kit: Kit, check: CheckLine, lane: Lane) -> Piece:
    """Set one check, in one row where it fits."""
    loud = check.verdict == "NG"
    rows = Rows(5.5 if loud else 1.6)
    name = _name(kit, check.name)
    end = _verdict(kit, check, lane)
    tail = lane.right - min((x for x, _ in end), default=lane.right)
    sides = tuple(side for side in (check.formula, check.substitution) if side)
    baseline = _one_row(kit, rows, check, name, end, Lane(lane.left, lane.right - tail))
    if baseline < 0:
        baseline = rows.row(((lane.left, name),), ROW)
        _more_rows(kit, rows, check, sides, end, tail, lane)
    if check.reason:
        lines = kit.lettering.set(check.reason, QUIET, lane.width - INDENT)
        rows.words(lines, QUIET, lane.left + INDENT)
    return _closed(kit, rows, check, baseline, lane)


def _closed(kit: Kit, rows: Rows, check: CheckLine, baseline: float, lane: Lane) -> Piece:
    """Rule the check off and add its marks."""
    loud = check.verdict == "NG"
    rows.y += 5.5 if loud else 1.0
    piece = kit.marks.numbered(rows, baseline, check.number, check.anchor, check.source, check.delta, lane)
    if loud:
        items = (*loud_bar(kit.sheet, piece.height), *piece.items)
        return replace(piece, items=items, ruled=True)
    return replace(piece, before=2.0, opening=(kit.rule(lane, 0.0),))


def _name(kit: Kit, name: str) -> Box:
    """Return the small word CHECK and the name of the check."""
    small = kit.lettering.label("CHECK", "semibold", 6.5)
    label = kit.lettering.label(name, STRONG.face, STRONG.size)
    x = small.width + 4.0
    items = (Placed(0.0, 0.0, small), Placed(x, 0.0, label))
    return Box(x + label.width, label.ascent, label.descent, items)


def _verdict(kit: Kit, check: CheckLine, lane: Lane) -> list[tuple[float, Box]]:
    """Place ratio and verdict at the result edge."""
    placed: list[tuple[float, Box]] = []
    if check.verdict == "NG":
        word = boxed(kit.lettering.label("NG", "semibold", 11))
    elif check.verdict == "OK":
        word = kit.lettering.label("OK", "regular", 9)
    else:
        word = kit.lettering.label(check.verdict, "semibold", 8.5)
        word = word if check.verdict == "not applicable" else boxed(word, OUTLINE)
    if check.ratio:
        ratio = kit.lettering.label(check.ratio, "semibold", 10)
        placed.append((lane.right - max(VERDICT, word.width + 10.0) - ratio.width, ratio))
    placed.append((lane.right - word.width, word))
    return placed


def boxed(label: Box, weight: float = 1.2) -> Box:
    """Return a label in a ruled box."""
    top, foot = -label.ascent - 1.5, label.descent + 0.5
    right = label.width + 8.0
    edges = ((0.0, top), (right, top), (right, foot), (0.0, foot))
    items = (Stroke(edges, weight, closed=True), Placed(4.0, 0.0, label))
    return Box(right, -top + weight / 2, foot + weight / 2, items)


def _one_row(kit: Kit, rows: Rows, check: CheckLine, name: Box, end: list[tuple[float, Box]], lane: Lane) -> float:
    """Set the check in one row if it fits; return its baseline, or -1."""
    x = lane.left + max(TAB, name.width + 8.0)
    chain: list[tuple[float, Box]] = [(lane.left, name)]
    formula = kit.math(check.formula)
    chain.append((x, formula))
    x += formula.width
    if check.substitution is not None:
        sign = _sign(kit, check.formula)
        second = kit.math(check.substitution)
        chain.append((x + EQUALS_GAP, sign))
        chain.append((x + 2 * EQUALS_GAP + sign.width, second))
        x += 2 * EQUALS_GAP + sign.width + second.width
    if x + RESULT_GAP > lane.right:
        return -1.0
    return rows.row((*chain, *end), ROW, 1.2)


def _more_rows(
    kit: Kit,
    rows: Rows,
    check: CheckLine,
    sides: tuple[Formula, ...],
    end: list[tuple[float, Box]],
    tail: float,
    lane: Lane,
) -> None:
    """Set formula and substitution under the name, ratio and verdict on the last row."""
    sign = _sign(kit, check.formula)
    start = lane.left + INDENT
    parts = chain_of(kit, sides, Lane(start, lane.right))
    parts = [Part(part.box, sign if part.sign else None) for part in parts]
    shared = rows_of(parts, tail + RESULT_GAP, lane.right - start)
    for place, row in enumerate(shared):
        placed: list[tuple[float, Box]] = []
        x = start
        for part in row:
            first = place == 0 and not placed
            if part.sign is not None and not first:
                placed.append((x, part.sign))
            x += (part.sign.width if part.sign else INDENT) + EQUALS_GAP
            placed.append((x, part.box))
            x += part.box.width + EQUALS_GAP
        if place == len(shared) - 1:
            placed.extend(end)
        rows.row(placed, ROW, 1.2)


def _sign(kit: Kit, formula: Formula) -> Box:
    """Return what joins formula and substitution: an equals sign, or a colon after a condition."""
    if isinstance(formula, Row) and any(
        isinstance(item, Operator) and item.kind == "relation" for item in formula.items
    ):
        return kit.lettering.label(":", "regular", 10)
    return kit.equals
