"""Signs that grow: fences, radicals and large operators, from sizes in the font or put together from pieces.

In: a character, a height in points, a style. Out: a box. Knows no formula trees.
Method: the published OpenType specification, chapter MATH, MathVariants table.
"""

from __future__ import annotations

from itertools import pairwise

from calcreport.layout.mathstyle import Style
from calcreport.layout.mathtable import Part
from calcreport.layout.model import Box, Item, Run

#: stands for the further pieces of a sign in copied text: a zero-width space
_SILENT = "\u200b"


def grown(style: Style, character: str, height: float) -> Box:
    """Set a sign at least so high, centred on the axis; the plain sign keeps its place on the baseline.

    A sign that is not high enough in its largest form is set in that form.
    """
    form = choose(style, character, height)
    if form < 0:
        return _stacked(style, character, height)
    return style.sign(character, form, lambda: set_form(style, character, form, form > 0))


def choose(style: Style, character: str, height: float) -> int:
    """Choose the smallest form of a sign so high, counted from 0; -1 where it must be put together."""
    sizes = style.sizes(character)
    for form, (_, size) in enumerate(sizes):
        if size >= height:
            return form
    return -1 if style.fonts.math.parts(sizes[0][0]) else len(sizes) - 1


def set_form(style: Style, character: str, form: int, centred: bool) -> Box:
    """Set one form of a sign, with its ink centred on the axis when asked."""
    glyph = style.sizes(character)[form][0]
    font = style.fonts.files["math"]
    _, bottom, _, top = font.bounds(glyph)
    up = style.axis - (top + bottom) / 2 * style.unit if centred else 0.0
    run = Run(0.0, -up, "math", style.size, (glyph,), character)
    return Box(font.advance(glyph) * style.unit, top * style.unit + up, -bottom * style.unit - up, (run,))


def _stacked(style: Style, character: str, height: float) -> Box:
    """Put a sign together from pieces, centred on the axis."""
    pieces = style.fonts.math.parts(style.sizes(character)[0][0])
    need = height / style.unit
    repeats = 0
    while any(p.repeats for p in pieces) and _extent(style, _repeated(pieces, repeats))[0] < need:
        repeats += 1
    chosen = _repeated(pieces, repeats)
    largest, overlap = _extent(style, chosen)
    if len(chosen) > 1:
        overlap += max(0.0, (largest - need) / (len(chosen) - 1))
        overlap = min(overlap, *(min(a.end, b.start) for a, b in pairwise(chosen)))
    total = sum(p.length for p in chosen) - overlap * (len(chosen) - 1)
    font = style.fonts.files["math"]
    at = style.axis / style.unit - total / 2
    top_at = at + total
    items: list[Item] = []
    for n, piece in enumerate(chosen):
        # a piece is drawn from its own lower edge of ink, wherever the font puts that
        up = (at - font.bounds(piece.glyph)[1]) * style.unit
        text = character if n == len(chosen) - 1 else _SILENT
        items.append(Run(0.0, -up, "math", style.size, (piece.glyph,), text))
        at += piece.length - overlap
    width = max(font.advance(p.glyph) for p in chosen) * style.unit
    # read from the top down
    return Box(width, top_at * style.unit, (total - top_at) * style.unit, tuple(reversed(items)))


def _repeated(pieces: tuple[Part, ...], repeats: int) -> tuple[Part, ...]:
    """List the pieces with those that repeat taken so many times."""
    return tuple(p for piece in pieces for p in (piece,) * (repeats if piece.repeats else 1))


def _extent(style: Style, pieces: tuple[Part, ...]) -> tuple[float, float]:
    """Give the greatest height of pieces in a row, in font units, and the overlap that gives it."""
    overlap = style.fonts.math.min_overlap
    return sum(p.length for p in pieces) - overlap * max(len(pieces) - 1, 0), overlap
