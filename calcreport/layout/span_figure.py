"""A line member with supports, loads and moment diagram, to scale along its span.

`report.model.SpanFigure` -> `Box`. Loads stand above the member, one tier a load where they overlap;
moments are drawn on the tension side, sagging below the base line.
"""

from __future__ import annotations

from itertools import pairwise

from calcreport.layout.drawing import Drawing
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Box
from calcreport.layout.sheet import HAIRLINE, OUTLINE
from calcreport.report.model import BeamLoad, SpanFigure

SIZE = 7.5
#: Widest drawing of a span; greatest ordinate of the moment diagram; reach of supports and labels.
WIDEST, MOMENT, SUPPORT = 300.0, 30.0, 8.0


def draw_span(formulas: Formulas, figure: SpanFigure, width: float) -> Box:
    """Draw the member no wider than `width` points."""
    spare = 26.0
    scale = (min(width, WIDEST) - 2 * spare) / figure.span
    drawing = Drawing()
    length = figure.span * scale
    drawing.line(((0.0, 0.0), (length, 0.0)), 1.4)
    drawing.keep_clear(0.0, -2.0, length, 2.0)
    foot = _supports(drawing, figure, scale)
    _loads(drawing, formulas, figure, scale)
    y = foot + 7.0
    for x in (0.0, length):
        drawing.line(((x, foot - 1.0), (x, y + 2.5)))
    drawing.dimension((0.0, y), (length, y))
    label = formulas.box(figure.span_label, SIZE, "text")
    drawing.label(label, (length / 2, y + 7.0, 0.5))
    if figure.moments:
        _moments(drawing, formulas, figure, scale, y + 16.0)
    return drawing.box()


def _supports(drawing: Drawing, figure: SpanFigure, scale: float) -> float:
    """Draw the supports; return the y below them."""
    half = SUPPORT * 0.55
    for position, kind in figure.supports:
        x = position * scale
        if kind == "fixed":
            out = -1.0 if position <= figure.span / 2 else 1.0
            drawing.line(((x, -9.0), (x, 9.0)), OUTLINE)
            for step in range(6):
                y = -9.0 + 3.2 * step
                drawing.line(((x, y), (x + out * 3.5, y + 3.0)))
            continue
        drawing.shape(((x, 1.0), (x + half, SUPPORT), (x - half, SUPPORT)))
        if kind == "roller":
            drawing.line(((x - half, SUPPORT + 2.0), (x + half, SUPPORT + 2.0)), OUTLINE)
        else:
            drawing.line(((x - half - 2.0, SUPPORT), (x + half + 2.0, SUPPORT)), OUTLINE)
    return SUPPORT + 3.0


def _loads(drawing: Drawing, formulas: Formulas, figure: SpanFigure, scale: float) -> None:
    """Draw distributed loads in tiers, then point loads reaching down to the member."""
    spread = [load for load in figure.loads if load.end > load.start]
    tiers: list[list[BeamLoad]] = []
    for load in spread:
        for tier in tiers:
            if all(load.start >= other.end or load.end <= other.start for other in tier):
                tier.append(load)
                break
        else:
            tiers.append([load])
    points = [load for load in figure.loads if load.end <= load.start]
    base = -2.5
    labels: list[tuple[BeamLoad, float]] = []
    for tier in tiers:
        high = max(5.0 + 7.0 * load.size for load in tier)
        for load in tier:
            top = base - 5.0 - 7.0 * load.size
            _distributed(drawing, load, scale, base, top)
            labels.append((load, top - 6.0))
        base -= high + 13.0
    for load in points:
        top = (base if tiers else -2.5) - 8.0 - 8.0 * load.size
        x = load.start * scale
        drawing.arrow((x, top), (x, -1.0), OUTLINE, 5.0)
        drawing.keep_clear(x - 2.0, top, x + 2.0, -1.0)
        labels.append((load, top - 6.0))
    for load, y in labels:
        box = formulas.box(load.label, SIZE, "text")
        spots = (0.5, 0.25, 0.75, 0.12, 0.88) if load.end > load.start else (0.5,)
        at = [((load.start + (load.end - load.start) * spot) * scale, y, 0.5) for spot in spots]
        drawing.label(box, *at)


def _distributed(drawing: Drawing, load: BeamLoad, scale: float, base: float, top: float) -> None:
    """Draw one distributed load between the y of its arrow heads and its upper edge."""
    left, right = load.start * scale, load.end * scale
    drawing.line(((left, top), (right, top)))
    count = max(2, round((right - left) / 9.0) + 1)
    for step in range(count):
        x = left + (right - left) * step / (count - 1)
        drawing.arrow((x, top), (x, base), head=2.8)
    drawing.keep_clear(left, top, right, base)


def _moments(drawing: Drawing, formulas: Formulas, figure: SpanFigure, scale: float, top: float) -> None:
    """Draw the moment diagram below `top`, with its labels outside the curve."""
    largest = max(abs(moment) for _, moment in figure.moments) or 1.0
    unit = MOMENT / largest
    hog = max(0.0, -min(moment for _, moment in figure.moments)) * unit
    base = top + hog + (9.0 if hog else 0.0)
    curve = tuple((x * scale, base + moment * unit) for x, moment in figure.moments)
    length = figure.span * scale
    drawing.line(((0.0, base), (length, base)))
    drawing.line(((curve[0][0], base), *curve, (curve[-1][0], base)), OUTLINE)
    for start, end in pairwise(curve):
        upper, lower = min(start[1], end[1], base), max(start[1], end[1], base)
        drawing.keep_clear(start[0], upper, end[0], lower)
    count = max(2, int(length / 9.0))
    for step in range(1, count):
        x = length * step / count
        drawing.line(((x, base), (x, base + unit * _at(figure.moments, x / scale))), HAIRLINE * 0.72)
    for position, label in figure.moment_labels:
        box = formulas.box(label, SIZE, "text")
        moment = _at(figure.moments, position)
        out = -1.0 if moment < 0 else 1.0
        y = base + moment * unit + out * (2.0 + (box.ascent + box.descent) / 2)
        drawing.label(box, (position * scale, y, 0.5))


def _at(moments: tuple[tuple[float, float], ...], position: float) -> float:
    """Return the moment at a position, straight between the given points."""
    for (x0, m0), (x1, m1) in pairwise(moments):
        if x0 <= position <= x1 and x1 > x0:
            return m0 + (m1 - m0) * (position - x0) / (x1 - x0)
    return moments[-1][1] if position > moments[-1][0] else moments[0][1]
