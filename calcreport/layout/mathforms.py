"""Fractions, roots, fences, stacks and limits: finished boxes put together.

In: the boxes of the parts, a style. Out: one box. Knows no formula trees; `mathbox` walks those.
Method: the constants of the MATH table (published OpenType specification) under the rules of Knuth, The
TeXbook, appendix G.
"""

from __future__ import annotations

from itertools import pairwise

from calcreport.layout.delimiters import choose, grown, set_form
from calcreport.layout.mathstyle import Nucleus, Style
from calcreport.layout.model import Box, Item, Placed, Stroke

#: a fence grows once its body is taller than this many ems, then covers the first share of it and falls
#: short of it by no more than the second, in ems (after The TeXbook, page 152, eased for subscripts)
_PLAIN_FENCE, _COVER, _SHORT = 1.3, 0.9, 0.5
#: rows of a stack: from baseline to baseline, and least clear distance, in ems
_PITCH, _CLEAR = 1.35, 0.3
#: space beside a fraction (The TeXbook: 1.2 pt at 10), inside a fence round a stack, outside a fence that has
#: grown, between an index and the hook of its root, and after the rule of a root, in ems
_BESIDE, _STACK_GAP, _TALL_GAP, _HOOK_GAP, _AFTER_ROOT = 0.12, 0.18, 0.12, 0.08, 0.06


def fraction(style: Style, above: Box, below: Box) -> Box:
    """Set one box over another with a rule on the axis between."""
    half = style.rule / 2
    up = max(style.num_up, style.axis + half + style.num_gap + above.descent)
    down = max(style.den_down, below.ascent + style.den_gap + half - style.axis)
    side = _BESIDE * style.size
    length = max(above.width, below.width)
    items = (
        Placed(side + (length - above.width) / 2, -up, above),
        Stroke(((side, -style.axis), (side + length, -style.axis)), style.rule),
        Placed(side + (length - below.width) / 2, down, below),
    )
    return Box(length + 2 * side, up + above.ascent, down + below.descent, items)


def root(style: Style, body: Box, index: Box | None) -> Box:
    """Set a radical round a box, with a small index in its hook."""
    value = style.value
    rule = value["RadicalRuleThickness"]
    gap = value["RadicalDisplayStyleVerticalGap" if style.display else "RadicalVerticalGap"]
    inside = body.ascent + body.descent + gap
    sign = grown(style, "√", inside + rule)
    # what the sign is too tall for is shared between the gap and the foot (appendix G, rule 11)
    height = sign.ascent + sign.descent
    top = body.ascent + gap + max(0.0, height - rule - inside) / 2 + rule
    highest, x = top, 0.0
    items: list[Item] = []
    if index is not None:
        raised = value["RadicalDegreeBottomRaisePercent"] / style.unit / 100 * height
        foot = top - height + raised + _HOOK_GAP * style.size
        items.append(Placed(value["RadicalKernBeforeDegree"], -foot - index.descent, index))
        x = max(0.0, value["RadicalKernBeforeDegree"] + index.width + value["RadicalKernAfterDegree"])
        highest = max(top, foot + index.descent + index.ascent)
    items.append(Placed(x, sign.ascent - top, sign))
    x += sign.width
    # the rule begins under the tip of the sign, so that no hairline parts them
    items.append(Stroke(((x - rule / 2, rule / 2 - top), (x + body.width, rule / 2 - top)), rule))
    items.append(Placed(x, 0.0, body))
    descent = max(body.descent, height - top)
    width = x + body.width + _AFTER_ROOT * style.size
    return Box(width, highest + value["RadicalExtraAscender"], descent, tuple(items))


def accent(style: Style, base: Nucleus, mark: Nucleus) -> Nucleus:
    """Set a mark over letters: its point over theirs, raised by what they stand above the height it is drawn for.

    The width is that of the letters (appendix G, rule 12), and scripts come as near as without the mark.
    """
    point = style.fonts.math.top_point
    letters, above = base.box, mark.box
    at = point(base.first) * style.unit if base.first == base.last else letters.width / 2
    rise = max(0.0, letters.ascent - style.value["AccentBaseHeight"])
    items = (Placed(0.0, 0.0, letters), Placed(at - point(mark.first) * style.unit, -rise, above))
    box = Box(letters.width, max(letters.ascent, rise + above.ascent), letters.descent, items)
    return Nucleus(box, base.italic, base.first, base.last)


def fence(style: Style, opening: str, body: Box, closing: str, holds_stack: bool) -> Box:
    """Set signs that grow with it about a box; '' leaves a side open."""
    reach = 2 * max(body.ascent - style.axis, body.descent + style.axis)
    plain = reach <= _PLAIN_FENCE * style.size
    height = 0.0 if plain else max(_COVER * reach, reach - _SHORT * style.size)
    outside = 0.0 if plain else _TALL_GAP * style.size
    inside = _STACK_GAP * style.size if holds_stack else 0.0
    items: list[Item] = []
    x, ascent, descent = 0.0, body.ascent, body.descent
    if opening:
        sign = grown(style, opening, height)
        items.append(Placed(outside, 0.0, sign))
        x = outside + sign.width + inside
        ascent, descent = max(ascent, sign.ascent), max(descent, sign.descent)
    items.append(Placed(x, 0.0, body))
    x += body.width
    if closing:
        sign = grown(style, closing, height)
        items.append(Placed(x, 0.0, sign))
        x += sign.width + outside
        ascent, descent = max(ascent, sign.ascent), max(descent, sign.descent)
    return Box(x, ascent, descent, tuple(items))


def stack(style: Style, rows: tuple[Box, ...]) -> Box:
    """Set boxes under one another, left aligned, centred on the axis."""
    lines = [0.0]
    for upper, lower in pairwise(rows):
        clear = upper.descent + lower.ascent + _CLEAR * style.size
        lines.append(lines[-1] + max(_PITCH * style.size, clear))
    half = (rows[0].ascent + lines[-1] + rows[-1].descent) / 2
    first = rows[0].ascent - half - style.axis
    items = tuple(Placed(0.0, first + y, box) for y, box in zip(lines, rows, strict=True))
    return Box(max(box.width for box in rows), half + style.axis, half - style.axis, items)


def limits(style: Style, sign: Box, below: Box | None, above: Box | None) -> Box:
    """Set what stands under and over a large operator, centred."""
    value = style.value
    width = max(box.width for box in (sign, below, above) if box is not None)
    items: list[Item] = []
    ascent, descent = sign.ascent, sign.descent
    if above is not None:
        rise = max(value["UpperLimitBaselineRiseMin"], above.descent + value["UpperLimitGapMin"])
        items.append(Placed((width - above.width) / 2, -sign.ascent - rise, above))
        ascent += rise + above.ascent
    items.append(Placed((width - sign.width) / 2, 0.0, sign))
    if below is not None:
        drop = max(value["LowerLimitBaselineDropMin"], below.ascent + value["LowerLimitGapMin"])
        items.append(Placed((width - below.width) / 2, sign.descent + drop, below))
        descent += drop + below.descent
    return Box(width, ascent, descent, tuple(items))


def large_operator(style: Style, character: str) -> Box:
    """Set a sum or product sign centred on the axis, in its larger form in a display."""
    height = style.value["DisplayOperatorMinHeight"] if style.display else 0.0
    return set_form(style, character, choose(style, character, height), centred=True)
