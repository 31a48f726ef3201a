"""Demand against strength along a member, to scale: demand hatched, strength in heavy steps or slopes.

`report.model.StrengthFigure` -> `Box`. Positive values stand above the base line, or below it where they are
drawn on the tension side.
"""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise

from calcreport.layout.drawing import Drawing, Point
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Box
from calcreport.layout.sheet import HAIRLINE, OUTLINE
from calcreport.report.model import Curve, StrengthFigure

SIZE = 7.5
#: Widest drawing; reach of the greatest ordinate; weight of the strength.
WIDEST, TALLEST, BOLD = 300.0, 42.0, 1.2
#: Space at both ends for labels; gap of hatching; reach of a tick.
SPARE, HATCH, TICK = 22.0, 6.0, 2.5


def draw_strength(formulas: Formulas, figure: StrengthFigure, width: float) -> Box:
    """Draw demand and strength no wider than `width` points."""
    scale = (min(width, WIDEST) - 2 * SPARE) / (figure.end - figure.start)
    values = [value for curve in (*figure.demands, *figure.strengths) for _, value in curve]
    unit = TALLEST / (max(map(abs, values)) or 1.0) * (1.0 if figure.down else -1.0)
    drawing = Drawing()

    def at(place: float, value: float) -> Point:
        return (place - figure.start) * scale, value * unit

    length = (figure.end - figure.start) * scale
    drawing.line(((0.0, 0.0), (length, 0.0)), OUTLINE)
    for curve in figure.demands:
        _demand(drawing, curve, at, length)
    for curve in figure.strengths:
        points = tuple(at(*point) for point in curve)
        drawing.line(((points[0][0], 0.0), *points, (points[-1][0], 0.0)), BOLD)
        for (x1, y1), (x2, y2) in pairwise(points):
            drawing.keep_clear(x1, min(y1, y2) - BOLD, x2, max(y1, y2) + BOLD)
    for place, value, label in (*figure.strength_labels, *figure.demand_labels):
        box = formulas.box(label, SIZE, "text")
        x, y = at(place, value)
        out = (1.0 if value * unit > 0 else -1.0) * (2.5 + (box.ascent + box.descent) / 2)
        drawing.label(box, (x, y + out, 0.5), (x, y + out, 0.0), (x, y + out, 1.0))
    edge = max(0.0, *(value * unit for value in values))
    # in one row under whatever labels stand below the curves
    foot = max(edge, *(area.foot for area in drawing.labels))
    for place, label in figure.ticks:
        x, _ = at(place, 0.0)
        drawing.line(((x, edge + 1.5), (x, edge + 1.5 + TICK)))
        box = formulas.box(label, SIZE, "text")
        y = foot + TICK + 3.0 + (box.ascent + box.descent) / 2
        drawing.label(box, *((x, y, share) for share in (0.5, 0.2, 0.8, 0.0, 1.0, 0.5)))
    return drawing.box()


def _demand(drawing: Drawing, curve: Curve, at: Callable[[float, float], Point], length: float) -> None:
    """Draw one demand with hatching down to the base line."""
    points = tuple(at(*point) for point in curve)
    drawing.line(((points[0][0], 0.0), *points, (points[-1][0], 0.0)), OUTLINE)
    for (x1, y1), (x2, y2) in pairwise(points):
        drawing.keep_clear(x1, min(y1, y2, 0.0), x2, max(y1, y2, 0.0))
    for step in range(1, int(length / HATCH) + 1):
        x = step * HATCH
        for (x1, y1), (x2, y2) in pairwise(points):
            if x1 <= x < x2:
                drawing.line(((x, 0.0), (x, y1 + (y2 - y1) * (x - x1) / (x2 - x1))), HAIRLINE * 0.72)
                break
