"""Drawing: labels keep clear, arrows and roundings have the dimensions asked for, boxes hug their items."""

from __future__ import annotations

import math

import pytest

from calcreport.layout.drawing import CLEAR, Area, Drawing, rounded
from calcreport.layout.model import Box, Placed, Stroke
from calcreport.layout.pieces import flat

LABEL = Box(20.0, 6.0, 2.0, ())


def test_a_label_takes_the_first_free_place() -> None:
    drawing = Drawing()
    drawing.keep_clear(0.0, 0.0, 30.0, 10.0)
    area = drawing.label(LABEL, (15.0, 5.0, 0.5), (15.0, 40.0, 0.5))
    # centred on 15: from 5 to 25; middle height 40: from 36 to 44
    assert area == Area(5.0, 36.0, 25.0, 44.0)


def test_a_label_without_a_free_place_moves_on_until_it_is_clear() -> None:
    drawing = Drawing()
    areas = [drawing.label(LABEL, (0.0, 0.0, 0.0)) for _ in range(6)]
    for place, one in enumerate(areas):
        for other in areas[place + 1 :]:
            assert not one.meets(other)
            assert one.top - other.foot >= CLEAR or other.top - one.foot >= CLEAR


def test_an_arrow_ends_in_a_filled_head_at_its_point() -> None:
    drawing = Drawing()
    drawing.arrow((0.0, 0.0), (30.0, 40.0), head=5.0)
    shaft, head = [item for item in flat((Placed(0.0, 0.0, drawing.box()),)) if isinstance(item, Stroke)]
    assert math.dist(*shaft.points) == pytest.approx(45.0)  # 50 less the head of 5
    assert head.fill == 0.0 and head.closed and head.width == 0.0
    assert math.dist(head.points[0], shaft.points[0]) == pytest.approx(50.0)


def test_a_rounded_rectangle_touches_its_edges_and_no_more() -> None:
    points = rounded(10.0, 20.0, 110.0, 80.0, 6.0)
    assert (min(x for x, _ in points), max(x for x, _ in points)) == (10.0, 110.0)
    assert (min(y for _, y in points), max(y for _, y in points)) == (20.0, 80.0)
    assert min(math.dist(point, (10.0, 20.0)) for point in points) == pytest.approx(6.0 * (math.sqrt(2) - 1))


def test_the_box_hugs_what_is_drawn() -> None:
    drawing = Drawing()
    drawing.line(((-5.0, 3.0), (25.0, 3.0)), 1.0)
    drawing.disc(10.0, 20.0, 4.0)
    box = drawing.box()
    # x: line from -5 to 25 with half a point of width at either end; y: 3 - 0.5 to 20 + 4
    assert (box.width, box.ascent, box.descent) == (31.0, 0.0, 21.5)
    line, disc = flat(box.items)
    assert isinstance(line, Stroke) and line.points[0] == (0.5, 0.5)
    assert not isinstance(disc, Stroke) and (disc.x, disc.y) == (15.5, 17.5)
