"""The figure of envelopes: member, supports and both diagrams to one scale, each value where it belongs, labels clear."""

from __future__ import annotations

from dataclasses import replace

import pytest
from inked import clashes, inked
from specimen import value

from calcreport.layout.envelope_figure import SPARE, TALLEST, draw_envelope
from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Box, Stroke
from calcreport.layout.pieces import flat
from calcreport.report.model import EnvelopeDiagram, EnvelopeFigure, Letters

#: two spans of 8 and 6 m, an overhang of 2 m
SHEARS = EnvelopeDiagram(
    (((0.0, 50.0), (4.0, 0.0), (8.0, -30.0), (8.0, 80.0), (14.0, -20.0), (14.0, 25.0), (16.0, 0.0)),
     ((0.0, 20.0), (4.0, -5.0), (8.0, -60.0), (8.0, 30.0), (14.0, -50.0), (14.0, 10.0), (16.0, 0.0))),
    ((0.0, 50.0, value("50"), 0.0), (8.0, -60.0, value("60"), 1.0), (8.0, 80.0, value("80"), 0.0),
     (14.0, -50.0, value("50"), 1.0), (14.0, 25.0, value("25"), 0.0)),
    Letters("V kN"), False,
)  # fmt: skip
MOMENTS = EnvelopeDiagram(
    (((0.0, -10.0), (4.0, 60.0), (8.0, -30.0), (8.0, -30.0), (11.0, 40.0), (14.0, -10.0), (14.0, -10.0), (16.0, 0.0)),
     ((0.0, -40.0), (4.0, 10.0), (8.0, -120.0), (8.0, -120.0), (11.0, 5.0), (14.0, -25.0), (14.0, -25.0), (16.0, 0.0))),
    ((0.0, -40.0, value("−40"), 0.0), (4.0, 60.0, value("60"), 0.5), (8.0, -120.0, value("−120"), 1.0),
     (8.0, -120.0, value("−120"), 0.0), (11.0, 40.0, value("40"), 0.5), (14.0, -25.0, value("−25"), 1.0)),
    Letters("M kN·m"), True,
)  # fmt: skip
FIGURE = EnvelopeFigure(
    supports=((0.0, "fixed"), (8.0, "spring"), (14.0, "pinned"), (16.0, "free")),
    spans=((0.0, 8.0, value("8")), (8.0, 14.0, value("6")), (14.0, 16.0, value("2"))),
    length_unit=Letters("m"), shears=SHEARS, moments=MOMENTS, alternative="",
)  # fmt: skip
WIDTH = 380.0


def drawn(kit: Kit, figure: EnvelopeFigure, width: float = WIDTH) -> Box:
    return draw_envelope(kit.lettering.formulas, figure, width)


def curve(box: Box, count: int) -> list[Stroke]:
    """Return the lines of so many points."""
    return [item for item in flat(box.items) if isinstance(item, Stroke) and len(item.points) == count + 2]


def test_both_diagrams_share_the_scale_along_the_member(kit: Kit) -> None:
    box = drawn(kit, FIGURE)
    scale = (WIDTH - 2 * SPARE) / 16.0
    upper, lower = curve(box, 7)
    (left, base), *points, (right, end) = upper.points
    assert (right - left, end) == pytest.approx((16.0 * scale, base))
    # 80 is the greatest shear: it stands TALLEST above the base line
    assert [((x - left) / scale, (base - y) / TALLEST * 80) for x, y in points] == [
        pytest.approx(p) for p in SHEARS.curves[0]
    ]
    assert [(base - y) / TALLEST * 80 for _, y in lower.points[1:-1]] == pytest.approx([v for _, v in SHEARS.curves[1]])


def test_sagging_moments_stand_below_the_base_line(kit: Kit) -> None:
    first, second = curve(drawn(kit, FIGURE), 8)
    (left, base), *points, _ = first.points
    scale = (WIDTH - 2 * SPARE) / 16.0
    assert [((x - left) / scale, (y - base) / TALLEST * 120) for x, y in points] == [
        pytest.approx(p) for p in MOMENTS.curves[0]
    ]
    assert min(y for _, y in second.points) == pytest.approx(base - TALLEST)


@pytest.mark.parametrize("width", [250.0, 380.0, 470.0])
def test_labels_are_clear_of_one_another_and_inside_the_box(kit: Kit, fonts: Fonts, width: float) -> None:
    box = drawn(kit, FIGURE, width)
    inks = inked(box.items, fonts)
    assert clashes(inks) == []
    assert all(ink.left >= -0.5 and ink.right <= box.width + 0.5 for ink in inks)


def test_of_narrow_spans_the_largest_values_alone_are_labelled(kit: Kit, fonts: Fonts) -> None:
    count = 12
    spans = tuple((16.0 * n / count, 16.0 * (n + 1) / count, value("1")) for n in range(count))
    supports = tuple((16.0 * n / count, "pinned") for n in range(count + 1))
    many = {ink.text for ink in inked(drawn(kit, replace(FIGURE, spans=spans, supports=supports)).items, fonts)}
    few = {ink.text for ink in inked(drawn(kit, FIGURE).items, fonts)}
    assert {"80", "−120"} <= many and not {"60", "−40", "25"} & many
    assert {"80", "−120", "60", "−40"} <= few


def test_free_ends_have_no_support(kit: Kit) -> None:
    with_support = drawn(kit, replace(FIGURE, supports=(*FIGURE.supports[:3], (16.0, "pinned"))))
    assert len(list(flat(with_support.items))) > len(list(flat(drawn(kit, FIGURE).items)))
