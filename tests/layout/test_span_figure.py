"""The span figure: positions and ordinates to scale, moments on the tension side, labels clear."""

from __future__ import annotations

from dataclasses import replace

import pytest
from inked import clashes, inked
from specimen import m, span, value

from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Box, Stroke
from calcreport.layout.pieces import flat
from calcreport.layout.span_figure import MOMENT, draw_span
from calcreport.report.model import BeamLoad, SpanFigure

CANTILEVER = SpanFigure(
    2.0, ((0.0, "fixed"),),
    (BeamLoad(0.0, 2.0, 1.0, m("D: 1.2 kip")), BeamLoad(1.9, 1.9, 1.0, m("L: 3 kip"))),
    tuple((2.0 * i / 20, -10.0 * (2.0 - 2.0 * i / 20) ** 2 / 2) for i in range(21)),
    ((0.0, value("−20.0", "kip·ft")),), value("6.5", "ft"), "",
)  # fmt: skip
CASES = replace(
    span(),
    loads=(
        BeamLoad(0.0, 7.315, 1.0, m("D: 1.2")), BeamLoad(0.0, 7.315, 0.6, m("L: 0.8")),
        BeamLoad(2.0, 2.0, 1.0, m("D: 10")), BeamLoad(2.0, 2.0, 0.7, m("L: 7")), BeamLoad(4.0, 4.0, 0.7, m("S: 7")),
    ),
)  # fmt: skip


def drawn(kit: Kit, figure: SpanFigure, width: float = 206.0) -> Box:
    return draw_span(kit.lettering.formulas, figure, width)


def member(box: Box) -> Stroke:
    """Return the member's own line: the heaviest."""
    return max((i for i in flat(box.items) if isinstance(i, Stroke)), key=lambda item: item.width)


def curve(box: Box) -> Stroke:
    """Return the moment diagram: the open line of most points."""
    return max((item for item in strokes(box) if not item.closed), key=lambda item: len(item.points))


def strokes(box: Box) -> list[Stroke]:
    return [item for item in flat(box.items) if isinstance(item, Stroke)]


def test_moments_are_to_scale_along_and_across(kit: Kit) -> None:
    box = drawn(kit, span())
    (left, _), (right, _) = member(box).points
    scale = (right - left) / 7.315
    base, *points, last = curve(box).points
    assert last[1] == pytest.approx(base[1])
    largest = max(abs(moment) for _, moment in span().moments)
    for (x, y), (position, moment) in zip(points, span().moments, strict=True):
        assert (x - left) / scale == pytest.approx(position, abs=1e-6)
        assert y - base[1] == pytest.approx(MOMENT * moment / largest)  # sagging below the base line


def test_hogging_is_drawn_above(kit: Kit) -> None:
    base, *points, _ = curve(drawn(kit, CANTILEVER)).points
    assert all(y <= base[1] + 1e-9 for _, y in points)
    assert min(y for _, y in points) == pytest.approx(base[1] - MOMENT)


def test_supports_and_point_loads_stand_at_their_places(kit: Kit) -> None:
    box = drawn(kit, CASES)
    (left, y), (right, _) = member(box).points
    scale = (right - left) / 7.315
    heads = [item for item in strokes(box) if item.fill == 0.0 and abs(item.points[0][1] - (y - 1.0)) < 0.01]
    assert sorted(round((head.points[0][0] - left) / scale, 3) for head in heads) == [2.0, 2.0, 4.0]
    triangles = [item for item in strokes(box) if item.closed and item.fill is None and len(item.points) == 3]
    assert sorted(round((t.points[0][0] - left) / scale, 3) for t in triangles) == [0.0, 7.315]


@pytest.mark.parametrize("figure", [span(), CANTILEVER, CASES, replace(span(), moments=(), moment_labels=())])
@pytest.mark.parametrize("width", [168.0, 206.0, 387.0])
def test_labels_never_overlap_and_all_is_inside_the_box(
    kit: Kit, fonts: Fonts, figure: SpanFigure, width: float
) -> None:
    box = drawn(kit, figure, width)
    inks = inked(box.items, fonts)
    assert clashes(inks) == []
    assert all(ink.left >= -0.5 and ink.right <= box.width + 0.5 for ink in inks)
    assert all(ink.top >= -0.5 and ink.foot <= box.descent + 0.5 for ink in inks)
