"""A member on supports with its shear and moment envelopes, to scale along it.

`report.model.EnvelopeFigure` -> `Box`. Greatest and least are drawn with hatching between them and the base line;
moments stand on the tension side, sagging below. Where spans are narrow only the largest values are labelled.
"""

from __future__ import annotations

from itertools import pairwise

from calcreport.layout.drawing import Drawing, Point
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Box
from calcreport.layout.sheet import HAIRLINE, OUTLINE
from calcreport.report.model import Curve, EnvelopeDiagram, EnvelopeFigure

SIZE = 7.5
#: Widest drawing; reach of the greatest ordinate either way; reach of a support; space at both ends.
WIDEST, TALLEST, SUPPORT, SPARE = 400.0, 34.0, 8.0, 30.0
#: Gap of hatching; narrowest span whose values are labelled; space between diagrams.
HATCH, NARROW, GAP = 6.0, 62.0, 8.0


def draw_envelope(formulas: Formulas, figure: EnvelopeFigure, width: float) -> Box:
    """Draw member and envelopes no wider than `width` points."""
    whole = figure.spans[-1][1]
    scale = (min(width, WIDEST) - 2 * SPARE) / whole
    drawing = Drawing()
    drawing.line(((0.0, 0.0), (whole * scale, 0.0)), 1.4)
    for position, kind in figure.supports:
        _support(drawing, position * scale, kind, whole * scale)
    foot = _dimensions(drawing, formulas, figure, scale)
    for diagram in (figure.shears, figure.moments):
        foot = _diagram(drawing, formulas, diagram, (figure, scale), foot + GAP)
    return drawing.box()


def _support(drawing: Drawing, x: float, kind: str, whole: float) -> None:
    half = SUPPORT * 0.55
    if kind == "fixed" and (x == 0.0 or x == whole):
        drawing.line(((x, -9.0), (x, 9.0)), OUTLINE)
        out = -1.0 if x == 0.0 else 1.0
        for step in range(6):
            y = -9.0 + 3.2 * step
            drawing.line(((x, y), (x + out * 3.5, y + 3.0)))
    elif kind in ("spring", "fixed"):
        # a column stands on its ground, a clamp is a block
        wide = 1.6 if kind == "spring" else half
        drawing.shape(((x - wide, 0.7), (x + wide, 0.7), (x + wide, SUPPORT), (x - wide, SUPPORT)))
        drawing.line(((x - half - 2.0, SUPPORT), (x + half + 2.0, SUPPORT)), OUTLINE)
    elif kind == "pinned":
        drawing.shape(((x, 1.0), (x + half, SUPPORT), (x - half, SUPPORT)))
        drawing.line(((x - half - 2.0, SUPPORT), (x + half + 2.0, SUPPORT)), OUTLINE)


def _dimensions(drawing: Drawing, formulas: Formulas, figure: EnvelopeFigure, scale: float) -> float:
    """Draw the lengths of the spans below the supports; return the y below them."""
    y = SUPPORT + 8.0
    for start, end, label in figure.spans:
        for x in (start * scale, end * scale):
            drawing.line(((x, y - 4.0), (x, y + 2.5)))
        drawing.dimension((start * scale, y), (end * scale, y))
        box = formulas.box(label, SIZE, "text")
        if box.width < (end - start) * scale:
            drawing.label(box, ((start + end) / 2 * scale, y + 6.5, 0.5))
    box = formulas.box(figure.length_unit, SIZE, "text")
    drawing.label(box, (figure.spans[-1][1] * scale + 6.0, y, 0.0))
    return y + 11.0


def _diagram(
    drawing: Drawing, formulas: Formulas, diagram: EnvelopeDiagram, of: tuple[EnvelopeFigure, float], top: float
) -> float:
    """Draw one envelope below `top`; return the y below it."""
    figure, scale = of
    values = [value for curve in diagram.curves for _, value in curve]
    sign = 1.0 if diagram.down else -1.0
    unit = sign * TALLEST / (max(map(abs, values)) or 1.0)
    room = 9.0
    base = top + room - min(0.0, *(value * unit for value in values))
    foot = base + max(0.0, *(value * unit for value in values)) + room

    def at(place: float, value: float) -> Point:
        return place * scale, base + value * unit

    whole = figure.spans[-1][1] * scale
    drawing.line(((0.0, base), (whole, base)), OUTLINE)
    for curve in diagram.curves:
        points = tuple(at(*point) for point in curve)
        drawing.line(((0.0, base), *points, (whole, base)), OUTLINE)
        for (x1, y1), (x2, y2) in pairwise(points):
            drawing.keep_clear(x1, min(y1, y2, base), x2, max(y1, y2, base))
    for step in range(1, int(whole / HATCH) + 1):
        x = step * HATCH
        ends = [base, *(at(0.0, _at(curve, x / scale))[1] for curve in diagram.curves)]
        drawing.line(((x, min(ends)), (x, max(ends))), HAIRLINE * 0.72)
    for position, kind in figure.supports:
        if kind != "free":
            drawing.line(((position * scale, base - 2.0), (position * scale, base + 2.0)))
    title = formulas.box(diagram.title, SIZE, "text")
    drawing.label(title, (-SPARE, top + room, 0.0), (-SPARE, base, 0.0))
    largest = max((abs(value) for _, value, _, _ in diagram.labels), default=0.0)
    for place, value, label, share in diagram.labels:
        start, end = next((a, b) for a, b, _ in figure.spans if a <= place <= b * (1 + 1e-12))
        if (end - start) * scale < NARROW and abs(value) < largest:
            continue
        box = formulas.box(label, SIZE, "text")
        x, y = at(place, value)
        out = (1.0 if value * unit > 0 else -1.0) * (2.5 + (box.ascent + box.descent) / 2)
        drawing.label(box, (x, y + out, share), (x, y + out, 0.5))
    return foot


def _at(curve: Curve, position: float) -> float:
    """Return the value at a position, straight between the given points."""
    for (x0, y0), (x1, y1) in pairwise(curve):
        if x0 <= position <= x1 and x1 > x0:
            return y0 + (y1 - y0) * (position - x0) / (x1 - x0)
    return 0.0
