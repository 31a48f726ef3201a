"""Level strokes that belong to formulas: fraction rules and the tops of radicals, told from all other strokes.

In: glyphs and strokes of a lane. Out: `Rule` records, and the strokes left over: rules of tables, frames, figures.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence
from typing import NamedTuple

from .glyphs import Glyph, Line

#: how far above or below its rule the nearest ink of a fraction stands, in points
RULE_REACH = 5.6


class Rule(NamedTuple):
    """A fraction rule, or the top of a radical."""

    x0: float
    x1: float
    y: float
    radical: bool


def find_rules(glyphs: Sequence[Glyph], lines: Sequence[Line]) -> tuple[list[Rule], list[Line]]:
    """Part level strokes into rules of formulas and all other strokes."""
    level = [line for line in lines if abs(line.y0 - line.y1) < 0.01 and 0.45 < line.width < 1.0]
    widths: dict[tuple[float, float], set[float]] = defaultdict(set)
    for line in lines:
        if abs(line.y0 - line.y1) < 0.01:
            widths[round(line.x0, 1), round(line.x1, 1)].add(round(line.width, 2))
    shelves: dict[int, list[Glyph]] = defaultdict(list)
    for glyph in glyphs:
        for shelf in range(int(glyph.y0 // 12), int(glyph.y1 // 12) + 1):
            shelves[shelf].append(glyph)
    ends = [(x, y) for line in lines for x, y in ((line.x0, line.y0), (line.x1, line.y1))]
    rules, others = [], []
    for line in lines:
        rule = _rule(line, widths, shelves, ends) if line in level else None
        if rule is None:
            others.append(line)
        else:
            rules.append(rule)
    return rules, others


def _rule(
    line: Line,
    widths: dict[tuple[float, float], set[float]],
    shelves: dict[int, list[Glyph]],
    ends: list[tuple[float, float]],
) -> Rule | None:
    x0, x1, y = min(line.x0, line.x1), max(line.x0, line.x1), line.y0
    if len(widths[round(line.x0, 1), round(line.x1, 1)]) > 1:
        return None  # the rules of a table
    near = {g for shelf in range(int((y - 14) // 12), int((y + 14) // 12) + 1) for g in shelves[shelf]}
    for glyph in near:
        if glyph.text == "√" and abs(glyph.x1 - x0) < 1.2 and -1.0 < y - glyph.y1 < 1.2:
            return Rule(x0, x1, y, True)
    if (
        sum((abs(x - x0) < 0.05 and abs(v - y) < 0.05) or (abs(x - x1) < 0.05 and abs(v - y) < 0.05) for x, v in ends)
        > 2
    ):
        return None
    inside = [g for g in near if x0 - 0.6 <= (g.x0 + g.x1) / 2 <= x1 + 0.6]
    above = [g.y0 - y for g in inside if g.y0 > y - 0.3]
    below = [y - g.y1 for g in inside if g.y1 < y + 0.3]
    if above and below and min(above) < RULE_REACH and min(below) < RULE_REACH:
        return Rule(x0, x1, y, False)
    return None
