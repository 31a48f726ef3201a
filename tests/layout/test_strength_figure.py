"""The figure of demand against strength: both to one scale, each where it belongs, labels clear."""

from __future__ import annotations

from dataclasses import replace

import pytest
from inked import clashes, inked
from specimen import value

from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Box, Stroke
from calcreport.layout.pieces import flat
from calcreport.layout.strength_figure import BOLD, SPARE, TALLEST, draw_strength
from calcreport.report.model import StrengthFigure

STEPS = ((0.0, 80.0), (2.0, 80.0), (2.0, 50.0), (6.0, 50.0), (6.0, 100.0), (8.0, 100.0))
SHEAR = StrengthFigure(
    start=0.0, end=8.0,
    demands=(((0.0, 60.0), (4.0, 0.0), (8.0, -60.0)),),
    strengths=(STEPS, tuple((x, -v) for x, v in STEPS)),
    demand_labels=((0.0, 60.0, value("60", "kip")),),
    strength_labels=((1.0, 80.0, value("80", "kip")), (4.0, 50.0, value("50", "kip")), (7.0, 100.0, value("100", "kip"))),
    ticks=((0.0, value("0", "ft")), (2.0, value("6.56", "ft")), (6.0, value("19.7", "ft")), (8.0, value("26.2", "ft"))),
    down=False, alternative="",
)  # fmt: skip
#: strength that slopes within its pieces, as bars develop; hogging above the base line
MOMENT = replace(
    SHEAR,
    demands=(((0.0, -90.0), (4.0, 45.0), (8.0, -90.0)), ((0.0, -120.0), (4.0, 20.0), (8.0, -120.0))),
    strengths=(((0.0, 20.0), (2.0, 60.0), (2.0, 60.0), (8.0, 60.0)), ((0.0, -130.0), (3.0, -40.0), (3.0, -40.0), (8.0, -130.0))),
    demand_labels=((0.0, -120.0, value("−120", "kip·ft")),), strength_labels=((4.0, 60.0, value("60", "kip·ft")),),
    down=True,
)  # fmt: skip
SHORT = replace(SHEAR, ticks=((0.0, value("0", "ft")), (0.2, value("0.66", "ft")), (0.4, value("1.31", "ft")), (8.0, value("26", "ft"))))  # fmt: skip


def drawn(kit: Kit, figure: StrengthFigure, width: float = 206.0) -> Box:
    return draw_strength(kit.lettering.formulas, figure, width)


def bold(box: Box) -> list[Stroke]:
    return [item for item in flat(box.items) if isinstance(item, Stroke) and item.width == BOLD]


def test_strength_steps_stand_at_their_places_and_to_scale(kit: Kit) -> None:
    upper, lower = bold(drawn(kit, SHEAR))
    scale = (206.0 - 2 * SPARE) / 8.0
    (left, base), *steps, (right, _) = upper.points
    assert right - left == pytest.approx(8.0 * scale)
    # 100 is the greatest ordinate and reaches TALLEST above the base line
    assert [((x - left) / scale, (base - y) / TALLEST * 100) for x, y in steps] == [pytest.approx(p) for p in STEPS]
    assert [(base - y) / TALLEST * 100 for _, y in lower.points[1:-1]] == pytest.approx([-v for _, v in STEPS])


def test_demand_shares_the_scale_of_strength(kit: Kit) -> None:
    box = drawn(kit, SHEAR)
    (left, base), *_ = bold(box)[0].points
    curves = [i for i in flat(box.items) if isinstance(i, Stroke) and len(i.points) == 5]
    assert len(curves) == 1
    ((_, first), *points, _) = curves[0].points
    scale = (206.0 - 2 * SPARE) / 8.0
    assert first == pytest.approx(base)
    assert [((x - left) / scale, (base - y) / TALLEST * 100) for x, y in points] == [
        pytest.approx(p) for p in SHEAR.demands[0]
    ]


def test_sagging_moments_are_drawn_below(kit: Kit) -> None:
    sagging, hogging = bold(drawn(kit, MOMENT))
    base = sagging.points[0][1]
    assert max(y for _, y in sagging.points) == pytest.approx(base + TALLEST * 60 / 130)
    assert min(y for _, y in hogging.points) == pytest.approx(base - TALLEST)


@pytest.mark.parametrize("figure", [SHEAR, MOMENT, SHORT])
@pytest.mark.parametrize("width", [168.0, 206.0, 387.0])
def test_labels_never_overlap_and_all_is_inside_the_box(
    kit: Kit, fonts: Fonts, figure: StrengthFigure, width: float
) -> None:
    box = drawn(kit, figure, width)
    inks = inked(box.items, fonts)
    assert clashes(inks) == []
    assert all(ink.left >= -0.5 and ink.right <= box.width + 0.5 for ink in inks)
    assert all(ink.top >= -0.5 and ink.foot <= box.descent + 0.5 for ink in inks)
