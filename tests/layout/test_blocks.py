"""Blocks by kind: headings, paragraphs, figures alone."""

from __future__ import annotations

import pytest
from inked import inked, letters, texts
from specimen import check, flexure, lane, over, section, shear

from calcreport.layout.blocks import MEASURE, narrowed, set_block, stands_alone
from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.words import HEADINGS
from calcreport.report.model import FigureBlock, Heading, Line, Paragraph, ResultBox, Table


def test_every_kind_of_block_is_set_inside_the_lanes(kit: Kit, fonts: Fonts) -> None:
    for block in (*flexure(), *shear()):
        pieces = set_block(kit, block, kit.sheet.text)
        assert pieces
        for piece in pieces:
            for ink in letters(piece, fonts):
                if ink.left > kit.sheet.left:  # not a revision number in the margin
                    assert ink.right <= kit.sheet.right - 2.0
                    assert ink.top >= 0.0 and ink.foot <= piece.height + 0.01


def test_headings_stay_with_what_follows_and_grow_with_their_rank(kit: Kit) -> None:
    first, second, third = (set_block(kit, Heading("Words", level), kit.sheet.text)[0] for level in (1, 2, 3))
    assert first.keep and second.keep and third.keep
    assert first.height > second.height > third.height
    assert [HEADINGS[n].size for n in (1, 2, 3)] == [12.5, 10.5, 9]


def test_small_capitals_keep_the_letters_they_stand_for(kit: Kit) -> None:
    (piece,) = set_block(kit, Heading("Bottom steel at midspan", 1), kit.sheet.text)
    assert texts(piece.items) == "Bottomsteelatmidspan"


def test_long_paragraphs_part_but_keep_two_lines_on_each_sheet(kit: Kit) -> None:
    words = ("A sentence that goes on for a while and says little. " * 20,)
    pieces = set_block(kit, Paragraph(words), kit.sheet.text)
    assert len(pieces) > 6
    assert pieces[0].keep and pieces[-2].keep and not pieces[-1].keep
    assert len(set_block(kit, Paragraph(("Short.",)), kit.sheet.text)) == 1


def test_running_text_is_no_wider_than_it_reads_well(wide_kit: Kit, fonts: Fonts) -> None:
    words = ("A sentence that goes on for a while and says little. " * 12,)
    pieces = set_block(wide_kit, Paragraph(words), wide_kit.sheet.text)
    inks = [ink for piece in pieces for ink in letters(piece, fonts)]
    assert max(ink.right for ink in inks) - min(ink.left for ink in inks) <= MEASURE


@pytest.mark.parametrize(("kind", "barred"), [("plain", 0), ("note", 0), ("caution", 1), ("assumption", 1)])
def test_cautions_and_assumptions_stand_beside_a_bar(kit: Kit, fonts: Fonts, kind: str, barred: int) -> None:
    (piece,) = set_block(kit, Paragraph(("Words.",), kind), kit.sheet.text)  # type: ignore[arg-type]
    assert sum(not ink.text for ink in inked(piece.items, fonts)) == barred


def test_loud_and_wide_blocks_never_stand_beside_a_figure() -> None:
    ng = check(1, "shear", over("V_u", "φV_n"), None, "1.2", "NG", lane("9"))
    ok = check(1, "shear", over("V_u", "φV_n"), None, "0.2", "OK", lane("9"))
    kinds = {type(block): block for block in shear()}
    assert all(stands_alone(kinds[kind]) for kind in (Table, ResultBox, FigureBlock))
    assert stands_alone(ng) and not stands_alone(ok) and not stands_alone(kinds[Line])


def test_a_figure_leaves_its_width_and_a_gap(kit: Kit) -> None:
    assert narrowed(kit.sheet.text, 200.0).right == kit.sheet.text.right - 212.0
    (piece,) = set_block(kit, FigureBlock(section(), False, ("Section of B1",)), kit.sheet.text)
    assert "SectionofB1" in texts(piece.items)
