"""Sheet geometry: every length against the sum it comes from (`sheet-sketches`: frame, lanes, title block)."""

from __future__ import annotations

import pytest

from calcreport.layout.sheet import MM, sheet_of


def test_letter_frame_and_lanes_add_up() -> None:
    sheet = sheet_of("letter")
    assert (sheet.width, sheet.height) == (612, 792)  # 8.5 in. x 72, 11 in. x 72
    assert sheet.left == pytest.approx(53.858, abs=1e-3)  # 19 mm for punching: 19 / 25.4 x 72
    assert sheet.right == pytest.approx(583.654, abs=1e-3)  # 612 - 10 mm
    assert sheet.top == pytest.approx(28.346, abs=1e-3)  # 10 mm
    assert sheet.foot == pytest.approx(766.488, abs=1e-3)  # 792 - 9 mm
    assert (sheet.work - sheet.left) / MM == pytest.approx(10)  # number lane
    assert (sheet.right - sheet.source) / MM == pytest.approx(34)  # source lane
    # 215.9 - 19 - 10 = 186.9 mm of frame; 186.9 - 10 - 34 = 142.9 mm of work lane
    assert (sheet.source - sheet.work) / MM == pytest.approx(142.9)


def test_a4_keeps_the_outer_lanes_and_narrows_the_work_lane() -> None:
    sheet = sheet_of("a4")
    assert sheet.width / MM == pytest.approx(210)
    assert sheet.height / MM == pytest.approx(297)
    # 210 - 19 - 10 - 10 - 34 = 137 mm
    assert (sheet.source - sheet.work) / MM == pytest.approx(137)


@pytest.mark.parametrize(("paper", "height"), [("letter", 279.4), ("a4", 297.0)])
def test_title_block_stands_on_the_foot(paper: str, height: float) -> None:
    sheet = sheet_of(paper)  # type: ignore[arg-type]
    assert (sheet.foot - sheet.block) / MM == pytest.approx(26)
    # height - 10 top - 9 foot - 26 block - 2 above - 1.4 below the body
    assert sheet.body_height / MM == pytest.approx(height - 10 - 9 - 26 - 2 - 1.4)


def test_body_lane_keeps_clear_of_the_rules() -> None:
    laned, wide = sheet_of("letter"), sheet_of("letter", lanes=False)
    assert laned.text.left > laned.work and laned.text.right < laned.source
    assert (laned.source - laned.text.right) / MM == pytest.approx(4)  # results end 4 mm inside the lane
    assert wide.left < wide.text.left and wide.text.right < wide.right
    assert wide.text.width > laned.text.width
    assert laned.left < laned.number_axis < laned.work
    assert laned.source < laned.sources.left < laned.sources.right < laned.right
