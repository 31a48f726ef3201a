"""The section figure: dimensions to scale, bars where they lie, labels clear of one another."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import pytest
from inked import clashes, inked
from specimen import m, section

from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Box, Circle, Stroke
from calcreport.layout.pieces import flat
from calcreport.layout.section_figure import HEIGHT, LEAST, bar_places, draw_section, tension_depths
from calcreport.report.model import Bar, SectionFigure

INCH = 25.4


def outline(box: Box) -> Stroke:
    """Return the concrete outline: the closed figure of four corners with the largest area."""
    return max(rectangles(box), key=area)


def rectangles(box: Box) -> list[Stroke]:
    items = [item for item in flat(box.items) if isinstance(item, Stroke)]
    return [item for item in items if item.closed and item.fill is None and len(item.points) == 4]


def area(shape: Stroke) -> float:
    (left, top), _, (right, foot), _ = shape.points
    return abs(right - left) * abs(foot - top)


def discs(box: Box) -> list[Circle]:
    return [item for item in flat(box.items) if isinstance(item, Circle)]


def drawn(kit: Kit, figure: SectionFigure, width: float = 206.0) -> Box:
    return draw_section(kit.lettering.formulas, figure, width)


def test_outline_and_bars_are_to_one_scale(kit: Kit) -> None:
    box = drawn(kit, section())
    (left, top), _, (right, foot), _ = outline(box).points
    scale = (foot - top) / (28 * INCH)
    assert (right - left) / scale == pytest.approx(16 * INCH)  # b = 16 in.
    assert 0 < foot - top <= HEIGHT
    bottom = [bar for bar in discs(box) if (bar.y - top) / scale > 14 * INCH]
    assert len(bottom) == 4  # 4-#9
    for bar in bottom:
        assert (bar.y - top) / scale == pytest.approx(25.436 * INCH)  # given depth of the layer
        assert bar.radius / scale == pytest.approx(1.128 * INCH / 2)
    xs = sorted(bar.x for bar in bottom)
    # cover 1.5 + stirrup 0.5 + half a bar 0.564 = 2.564 in. from either face, evenly spread between
    assert (xs[0] - left) / scale == pytest.approx(2.564 * INCH)
    assert (right - xs[-1]) / scale == pytest.approx(2.564 * INCH)
    gaps = [b - a for a, b in pairwise(xs)]
    assert gaps == pytest.approx([gaps[0]] * 3)


def test_the_block_is_as_deep_as_given_and_level_with_the_section(kit: Kit) -> None:
    box = drawn(kit, section())
    _, _, (right, foot), (_, top) = (*outline(box).points[:3], outline(box).points[1])
    scale = (foot - top) / (28 * INCH)
    (block,) = [shape for shape in rectangles(box) if shape.points[0][0] > right]
    assert block.points[0][1] == pytest.approx(top)
    assert (block.points[2][1] - block.points[0][1]) / scale == pytest.approx(3.922 * INCH)  # a = 3.922 in.


def test_the_strain_line_passes_through_the_neutral_axis(kit: Kit) -> None:
    figure = section()
    box = drawn(kit, figure)
    (_, top), _, (_, foot), _ = outline(box).points
    scale = (foot - top) / (28 * INCH)
    (strain,) = [i for i in flat(box.items) if isinstance(i, Stroke) and not i.closed and len(i.points) == 4]
    axis_x = strain.points[0][0]
    (x0, y0), (x1, y1) = strain.points[1], strain.points[2]
    crossing = y0 + (y1 - y0) * (x0 - axis_x) / (x0 - x1)
    assert (crossing - top) / scale == pytest.approx(4.754 * INCH)  # c = 4.754 in.
    assert (y1 - top) / scale == pytest.approx(25.436 * INCH)


def test_tension_at_the_top_turns_depths_about(kit: Kit) -> None:
    figure = replace(
        section(), tension_face="top",
        bars=(Bar(5, 28.65, 64.0, "5-#9"), Bar(2, 28.65, 115.0, "2-#9"), Bar(2, 25.4, 650.0, "2-#8")),
    )  # fmt: skip
    # depths from the bottom: 711.2 - 64 = 647.2 and 711.2 - 115 = 596.2; areas as 5 to 2
    centroid, extreme = tension_depths(figure)
    assert extreme == pytest.approx(647.2)
    assert centroid == pytest.approx((5 * 647.2 + 2 * 596.2) / 7)
    box = drawn(kit, figure)
    (_, top), _, (_, foot), _ = outline(box).points
    scale = (foot - top) / (28 * INCH)
    feet = [max(y for _, y in block.points) for block in rectangles(box) if block is not outline(box)]
    assert foot in [pytest.approx(y) for y in feet]  # the block stands on the bottom face
    assert sum((bar.y - top) / scale < 120.0 for bar in discs(box)) == 7


def test_bars_of_two_sizes_share_a_layer_the_larger_outermost() -> None:
    figure = replace(section(), bars=(Bar(2, 28.65, 640.0, "2-#9"), Bar(2, 19.05, 640.0, "2-#6")))
    radii = [radius for _, _, radius in bar_places(figure)]
    assert radii == [14.325, 9.525, 9.525, 14.325]
    single = replace(section(), bars=(Bar(1, 28.65, 640.0, "1-#9"),))
    assert bar_places(single)[0][0] == pytest.approx(8 * INCH + 0.0)  # one bar stands in the middle of 16 in.


VARIANTS = (
    section(),
    replace(section(), tension_face="top", bars=(Bar(5, 28.65, 64.0, "5-#9"), Bar(2, 28.65, 115.0, "2-#9"))),
    replace(section(), width=254.0, depth=1200.0, neutral_axis=500.0, block_depth=410.0),
    replace(section(), width=1200.0, depth=180.0, stirrup_diameter=0.0, cover=20.0, neutral_axis=18.0, block_depth=15.0,
            bars=(Bar(6, 12.7, 152.0, "#4 at 8 in."),)),
    replace(section(), neutral_axis=None, block_depth=None),
    replace(section(), labels=(("b", m("b = 16 in.")), ("h", m("h = 28 in.")), ("c", m("c = 4.754 in.")),
                               ("a", m("a = 3.922 in.")), ("strain_top", m("ε_{cu} = 0.003")),
                               ("strain_steel", m("ε_t = 0.01305")))),
    replace(section(), labels=()),
)  # fmt: skip


@pytest.mark.parametrize("figure", VARIANTS)
@pytest.mark.parametrize("width", [168.0, 206.0, 387.0])
def test_labels_never_overlap_and_all_is_inside_the_box(
    kit: Kit, fonts: Fonts, figure: SectionFigure, width: float
) -> None:
    box = drawn(kit, figure, width)
    inks = inked(box.items, fonts)
    assert clashes(inks) == []
    assert all(ink.left >= -0.5 and ink.right <= box.width + 0.5 for ink in inks)
    assert all(ink.top >= -0.5 and ink.foot <= box.descent + 0.5 for ink in inks)


def test_only_the_section_gives_way_to_a_narrow_lane(kit: Kit) -> None:
    wide, narrow = drawn(kit, section(), 387.0), drawn(kit, section(), 168.0)
    assert narrow.width < wide.width <= 387.0
    assert narrow.width == pytest.approx(168.0, abs=2.0)
    (_, top), _, (_, foot), _ = outline(drawn(kit, section(), 60.0)).points
    assert foot - top == pytest.approx(LEAST)
