"""Boxes looked at from outside: what lies where, and which pixels its ink covers.

Outlines come from fontTools and are drawn by Pillow; nothing of the layout's own measures is used.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from functools import cache
from io import BytesIO
from itertools import combinations
from typing import TypeAlias

from fontTools.pens.recordingPen import DecomposingRecordingPen
from fontTools.ttLib import TTFont
from PIL import Image, ImageChops, ImageDraw

from calcreport.layout.fonts import installed_fonts
from calcreport.layout.model import Box, Item, Placed, Run, Stroke

Point: TypeAlias = tuple[float, float]

#: pixels to the point, and a margin in points drawn round the box
SCALE, MARGIN = 16, 4.0
#: slanted letters overhang their advance by up to 0.6 pt at 10 pt; pixels are rounded
SIDE, EDGE = 0.7, 0.15


@cache
def font() -> TTFont:
    """The formula face, read by fontTools."""
    return TTFont(BytesIO(installed_fonts().files["math"].data))


def name_of(glyph: int) -> str:
    return str(font().getGlyphName(glyph))


def placed(box: Box, x: float = 0.0, y: float = 0.0) -> Iterator[tuple[Item, float, float]]:
    """Every run and stroke of a box with the offset of its own coordinates."""
    for item in box.items:
        if isinstance(item, Placed):
            yield from placed(item.box, x + item.x, y + item.y)
        else:
            yield item, x, y


def runs(box: Box) -> list[Run]:
    """The runs of a box at their places, in order."""
    found = []
    for item, x, y in placed(box):
        if isinstance(item, Run):
            found.append(Run(x + item.x, y + item.y, item.face, item.size, item.glyphs, item.text, item.shifts))
    return found


def strokes(box: Box) -> list[tuple[float, float, float, float]]:
    """The rules of a box: left, right, height above the baseline of the middle, width."""
    return [
        (x + s.points[0][0], x + s.points[1][0], -(y + s.points[0][1]), s.width)
        for s, x, y in placed(box)
        if isinstance(s, Stroke)
    ]


def overlaps(box: Box) -> list[tuple[Item, Item]]:
    """List the pairs of items whose ink covers a common pixel."""
    inked = [(item, image) for item, x, y in placed(box) if (image := ink(item, x, y, box)).getbbox()]
    return [
        (a, b)
        for (a, one), (b, other) in combinations(inked, 2)
        if not one_sign(a, b) and ImageChops.multiply(one, other).getbbox()
    ]


def outside(box: Box) -> list[Item]:
    """List the items with ink outside the box."""
    (left, top), (right, bottom) = (
        at(box, -SIDE, -box.ascent - EDGE),
        at(box, box.width + SIDE, box.descent + EDGE),
    )
    found = []
    for item, x, y in placed(box):
        area = ink(item, x, y, box).getbbox()
        if area and (area[0] < left or area[1] < top or area[2] > right or area[3] > bottom):
            found.append(item)
    return found


def one_sign(a: Item, b: Item) -> bool:
    """Tell what is drawn as one sign: the pieces of a brace, a radical with its rule."""
    texts = {item.text for item in (a, b) if isinstance(item, Run)}
    return "\u200b" in texts or ("√" in texts and any(isinstance(item, Stroke) for item in (a, b)))


def at(box: Box, x: float, y: float) -> Point:
    """Give the pixel of a point."""
    return (x + MARGIN) * SCALE, (y + box.ascent + MARGIN) * SCALE


def ink(item: Item, x: float, y: float, box: Box) -> Image.Image:
    """Draw one item alone, glyph by glyph from its outlines."""
    width, height = box.width + 2 * MARGIN, box.ascent + box.descent + 2 * MARGIN
    image = Image.new("1", (int(width * SCALE), int(height * SCALE)))
    if isinstance(item, Stroke):
        (left, level), (right, _) = item.points
        half = item.width / 2 - 0.1  # rules may touch
        corners = [at(box, x + left + 0.1, y + level - half), at(box, x + right - 0.1, y + level + half)]
        ImageDraw.Draw(image).rectangle(corners, fill=1)
    elif isinstance(item, Run):
        pen = x + item.x
        for glyph, shift in zip(item.glyphs, item.shifts or (0,) * len(item.glyphs), strict=True):
            unit = item.size / 1000

            def pixel(px: float, py: float, pen: float = pen, unit: float = unit) -> Point:
                return at(box, pen + px * unit, y + item.y - py * unit)

            image = ImageChops.logical_or(image, filled(glyph, image.size, pixel))
            pen += (font()["hmtx"][name_of(glyph)][0] + shift) * unit
    return image


def filled(glyph: int, size: tuple[int, int], pixel: Callable[[float, float], Point]) -> Image.Image:
    """Fill the outline of a glyph by the even-odd rule."""
    whole = Image.new("1", size)
    for contour in contours(glyph):
        layer = Image.new("1", size)
        ImageDraw.Draw(layer).polygon([pixel(*point) for point in contour], fill=1)
        whole = ImageChops.logical_xor(whole, layer)
    return whole


@cache
def contours(glyph: int) -> tuple[tuple[Point, ...], ...]:
    """Give the outline of a glyph as polygons, curves as ten chords."""
    glyphs = font().getGlyphSet()
    pen = DecomposingRecordingPen(glyphs)
    glyphs[name_of(glyph)].draw(pen)
    found: list[list[Point]] = []
    for verb, points in pen.value:
        if verb == "moveTo":
            found.append([points[0]])
        elif verb == "lineTo":
            found[-1].append(points[0])
        elif verb == "qCurveTo":
            found[-1] += chords(found[-1][-1], points)
    return tuple(tuple(contour) for contour in found if len(contour) > 2)


def chords(start: Point, points: tuple[Point, ...]) -> Iterator[Point]:
    """Follow quadratic curves through implied points."""
    *controls, end = points
    for i, (cx, cy) in enumerate(controls):
        last = i + 1 == len(controls)
        ex, ey = end if last else ((cx + controls[i + 1][0]) / 2, (cy + controls[i + 1][1]) / 2)
        for n in range(1, 11):
            t = n / 10
            a, b, c = (1 - t) ** 2, 2 * t * (1 - t), t * t
            yield a * start[0] + b * cx + c * ex, a * start[1] + b * cy + c * ey
        start = (ex, ey)
