"""Subscripts and superscripts: how far they move from their base, and how far into its corners.

In: a base, its scripts as boxes, a style. Out: one box. Knows no formula trees.
Method: the published OpenType specification, chapter MATH (constants, MathKernInfo).
"""

from __future__ import annotations

from calcreport.core.record import record
from calcreport.layout.mathstyle import Nucleus, Style
from calcreport.layout.mathtable import Corner
from calcreport.layout.model import Box, Item, Placed

#: a last step of so much, in font units, keeps scripts clear of an arm at the very top of a letter
_ARM = 60


@record
class Scripted:
    """A script as a box, with its first glyph where it is letters, else 0."""

    box: Box
    first: int
    #: how high the script stands where it comes near its base: its first glyph, or the box
    reach: float
    #: a prime, which is read before the subscript: f'c, but b w squared
    prime: bool = False


def attach(style: Style, base: Nucleus, sub: Scripted | None, sup: Scripted | None) -> Box:
    """Set scripts beside a base; a base that is not letters has no glyphs and no corners to move into."""
    up, down = _shifts(style, base, sub, sup)
    box = base.box
    items: list[Item] = [Placed(0.0, 0.0, box)]
    ascent, descent = box.ascent, box.descent
    # a subscript goes under the lean of a slanted letter, a superscript stands clear of it
    ends: list[float] = []
    if sup is not None:
        bottom = up - sup.box.descent
        x = box.width + _cut_in(style, base, sup, ("top_right", "bottom_left"), (bottom, box.ascent), up)
        items.append(Placed(x, -up, sup.box))
        ends.append(x + sup.box.width)
        ascent, descent = max(ascent, up + sup.box.ascent), max(descent, -bottom)
    if sub is not None:
        top = sub.box.ascent - down
        x = box.width - base.italic
        x += _cut_in(style, base, sub, ("bottom_right", "top_left"), (sub.reach - down, -box.descent), -down)
        at = len(items) if sup is not None and sup.prime else 1
        items.insert(at, Placed(x, down, sub.box))
        ends.append(x + sub.box.width)
        ascent, descent = max(ascent, top), max(descent, down + sub.box.descent)
    return Box(max(ends, default=box.width) + style.after_script, ascent, descent, tuple(items))


def _shifts(style: Style, base: Nucleus, sub: Scripted | None, sup: Scripted | None) -> tuple[float, float]:
    """Give how far superscript and subscript stand above and below the baseline."""
    # letters keep their scripts in one line; scripts of anything else hang on its top and bottom
    tall = 0.0 if base.last else base.box.ascent - style.sup_drop
    deep = 0.0 if base.last else base.box.descent + style.sub_drop
    up = max(style.sup_up, sup.box.descent + style.sup_bottom, tall) if sup is not None else 0.0
    down = max(style.sub_down, sub.box.ascent - style.sub_top, deep) if sub is not None else 0.0
    if sub is not None and sup is not None:
        bottom = up - sup.box.descent
        lacking = style.both_gap - (bottom - (sub.box.ascent - down))
        if lacking > 0:
            raised = min(lacking, max(0.0, style.sup_bottom_with_sub - bottom))
            up, down = up + raised, down + lacking - raised
    return up, down


def _cut_in(
    style: Style,
    base: Nucleus,
    script: Scripted,
    corners: tuple[Corner, Corner],
    edges: tuple[float, float],
    shift: float,
) -> float:
    """Give how far a script moves into the corner of its base: the lesser move of the two heights that touch.

    `edges` are the near edges of script and base, `shift` its baseline, all above that of the base.
    """
    if not base.last:
        return 0.0
    kern, small = style.fonts.math.kern, style.kin("script", True)
    return max(
        _corner(style, base.last, corners[0], edge / style.unit) * style.unit
        + kern(script.first, corners[1], (edge - shift) / small.unit) * small.unit
        for edge in edges
    )


def _corner(style: Style, glyph: int, corner: Corner, height: float) -> float:
    """Give the distance the corner of a base asks for at a height, in font units.

    The last step of a letter such as V or r keeps scripts clear of its arm at the very top, so a subscript
    that only just enters it would be pushed far out; there the distance grows evenly up to the top.
    """
    table = style.fonts.math
    heights, values = table.steps(glyph, corner)
    past = corner == "bottom_right" and heights and height > heights[-1]
    if not past or values[-1] <= 0 or values[-1] - values[-2] < _ARM:
        return table.kern(glyph, corner, height)
    top = max(style.fonts.files["math"].bounds(glyph)[3], height)
    share = (height - heights[-1]) / (top - heights[-1])
    return values[-2] + share * (values[-1] - values[-2])
