"""Title block: cells ruled off, boxes for pens left blank, long texts fitted."""

from __future__ import annotations

from dataclasses import replace

import pytest
from inked import Ink, clashes, inked, texts
from specimen import facts

from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Run
from calcreport.layout.pieces import flat
from calcreport.layout.sheet import MM
from calcreport.layout.titleblock import (
    frame_box,
    sheet_number,
    strip_items,
    title_block,
)
from calcreport.report.model import TitleFacts

PLAIN = facts("B1  Level 2 beam on grid B, 2 to 4: flexure at midspan")
LONG = TitleFacts(
    project="A project with a name far longer than any title block was ever ruled for, phase two, levels 2 to 9",
    project_number="Q-2604 / 117-B / submittal 14 / correspondence 2026-11-16 and following",
    subject="B12  A beam whose title goes on about its place on the plan, the grids it runs between, and why",
    code="A code with a long name and a longer year (in.-lb), as amended by the authority having jurisdiction",
    status="ISSUED FOR CONSTRUCTION, SECOND PART",
    status_note="not for construction, not for permit, not for fabrication",
    revision="revision 12", date="16 November 2026", fingerprint="input 3fa2 81c0 3fa2 81c0",
    program="calcreport 10.20.30",
)  # fmt: skip


def block(kit: Kit, fonts: Fonts, of: TitleFacts) -> tuple[Ink, ...]:
    return inked(title_block(kit.sheet, kit.lettering, of).items, fonts)


@pytest.mark.parametrize("of", [PLAIN, LONG, replace(PLAIN, code="", fingerprint="", status_note="")])
def test_nothing_leaves_the_block_or_overlaps(kit: Kit, fonts: Fonts, of: TitleFacts) -> None:
    inks = (*block(kit, fonts, of), *inked(sheet_number(kit.sheet, kit.lettering, "B12-3", 5), fonts))
    sheet = kit.sheet
    assert all(sheet.left - 0.5 <= ink.left and ink.right <= sheet.right + 0.5 for ink in inks)
    assert all(sheet.block - 0.5 <= ink.top and ink.foot <= sheet.foot + 0.5 for ink in inks)
    assert clashes(inks) == []
    assert min(ink.size for ink in inks if ink.text) >= 6.0
    upright = [ink for ink in inks if not ink.text and ink.right - ink.left < 1.0]
    for ink in inks:
        if ink.text:
            assert not any(ink.left < line.left < ink.right and line.top < ink.foot < line.foot for line in upright)


def test_the_boxes_for_pens_hold_their_names_only(kit: Kit, fonts: Fonts) -> None:
    left = kit.sheet.source - 45 * MM
    inside = [ink.text for ink in block(kit, fonts, PLAIN) if ink.text and left <= ink.left < kit.sheet.source]
    assert sorted(inside) == ["BACK-CHECKER", "CHECKER", "DATE", "DATE", "DATE", "ORIGINATOR"]
    assert min(ink.size for ink in block(kit, fonts, PLAIN) if ink.text == "CHECKER") == 6.0


@pytest.mark.parametrize("label", ["B12-3", "SUMMARY-1", "ASSUMPTIONS-12", "A-VERY-LONG-MARK-12"])
def test_the_sheet_number_fits_its_cell_bottom_right(kit: Kit, fonts: Fonts, label: str) -> None:
    number, of = inked(sheet_number(kit.sheet, kit.lettering, label, 5), fonts)
    assert (number.text, of.text) == (label, "of 5")
    assert kit.sheet.source < number.left and number.right < kit.sheet.right
    assert number.foot < of.top and of.foot < kit.sheet.foot
    assert number.size == 16 or label != "B12-3"


def test_the_strip_keeps_to_its_height_and_says_what_fails(kit: Kit, fonts: Fonts) -> None:
    for words in ("1 CHECK NG IN THIS CALCULATION: LINE 13, SHEAR", "MANY CHECKS NG, " * 30):
        inks = inked(strip_items(kit.sheet, kit.lettering, words), fonts)
        (text,) = [ink for ink in inks if ink.text]
        assert kit.sheet.work < text.left and text.right < kit.sheet.right
        assert kit.sheet.top < text.top and text.foot < kit.sheet.body_top + 17.0 - 8.0
        assert text.text == words or text.text.endswith(" …")


def test_lane_rules_begin_under_a_strip(kit: Kit, fonts: Fonts) -> None:
    plain, stripped = (inked(frame_box(kit.sheet, strip).items, fonts) for strip in (False, True))
    assert min(ink.top for ink in plain if ink.right - ink.left < 0.5) == pytest.approx(kit.sheet.top, abs=0.2)
    assert min(ink.top for ink in stripped if ink.right - ink.left < 0.5) == pytest.approx(
        kit.sheet.top + 17.0, abs=0.2
    )


def test_no_word_says_that_anyone_has_looked(kit: Kit) -> None:
    said = texts(title_block(kit.sheet, kit.lettering, PLAIN).items).lower()
    assert not any(word in said for word in ("certified", "approved", "checked", "compliant", "safe"))
    assert all(isinstance(item, Run) and item.text for item in flat(title_block(kit.sheet, kit.lettering, PLAIN).items)
               if isinstance(item, Run))  # fmt: skip
