"""Numbered lines: rows they take, where equals signs and results stand, marks, nothing overlapping."""

from __future__ import annotations

from dataclasses import replace

import pytest
from inked import clashes, inked, letters
from specimen import lane as source
from specimen import line, m, value

from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.lines import TAB, Part, rows_of, set_line, set_result_box, set_statement
from calcreport.layout.model import Anchor, Box
from calcreport.layout.pieces import Piece, flat
from calcreport.layout.sheet import Lane
from calcreport.report.model import Line, Reference, ResultBox, SourceLane, Statement

SHORT = line(
    10, ("Nominal strength",), "V_n", m("V_c + V_s"), m("58.8 + 73.1"), value("131.9", "kip"), source("22.5", 8)
)
LONG = line(
    11, ("Sum",), "V_u",
    m("1.2 V_D + 1.6 V_L + 0.5 V_S + 1.2 V_{SDL} + 1.6 V_{corridor}"),
    m("1.2(31.46) + 1.6(22.08) + 0.5(6.125) + 1.2(9.75) + 1.6(11.2)"),
    value("117.6", "kip"), source("2.3.1", 1),
)  # fmt: skip


def baselines(piece: Piece, kit: Kit, fonts: Fonts) -> list[float]:
    """Return the baselines of equals signs in the work lane, one a row."""
    signs = [ink for ink in letters(piece, fonts) if ink.text == "=" and ink.left < kit.sheet.source]
    return sorted({round(ink.foot, 2) for ink in signs})


def signs(piece: Piece, fonts: Fonts) -> list[tuple[float, float]]:
    """Return y and x of every equals sign, from the top down."""
    return sorted((round(ink.foot, 2), round(ink.left, 2)) for ink in letters(piece, fonts) if ink.text == "=")


def test_formula_substitution_and_result_share_one_row(kit: Kit, fonts: Fonts) -> None:
    piece = set_line(kit, SHORT, kit.sheet.text)
    assert len(baselines(piece, kit, fonts)) == 1
    assert len(signs(piece, fonts)) == 3  # V_n = V_c + V_s = 58.8 + 73.1 = 131.9 kip


def test_a_longer_line_takes_two_rows_and_a_narrow_lane_three(kit: Kit, fonts: Fonts) -> None:
    wide = kit.sheet.text
    assert len(baselines(set_line(kit, LONG, wide), kit, fonts)) == 2
    narrow = Lane(wide.left, wide.left + 175.0)
    assert len(baselines(set_line(kit, SHORT, narrow), kit, fonts)) == 2
    assert len(baselines(set_line(kit, LONG, narrow), kit, fonts)) >= 3


def test_a_chain_of_two_rows_begins_behind_its_words_where_that_saves_a_row(kit: Kit, fonts: Fonts) -> None:
    # words, formula, and a rest that fills the lane: three rows where the words stand alone, two where they do not
    text = kit.sheet.text
    rest = m("1,548(420)(539.4 − 72.85) + 1,548(420)(539.4 − 72.85)")
    one = line(
        25, ("Strength",), "M_n", m("A_s f_y (d − a) + A_s f_y (d − a)"), rest, value("327", "kN·m"), source("1")
    )
    piece = set_line(kit, one, text)
    assert len(baselines(piece, kit, fonts)) == 2 and clashes(letters(piece, fonts)) == []
    words = [ink for ink in letters(piece, fonts) if ink.left == text.left]
    assert words and {round(ink.foot, 2) for ink in words} <= {signs(piece, fonts)[0][0]}, "the formula is in their row"
    assert max(ink.right for ink in letters(piece, fonts) if ink.left < kit.sheet.source) <= text.right + 0.5
    # words that leave the formula no room stand above it
    long = replace(one, says=("Nominal flexural strength of the whole section about its stronger axis",))
    assert len({round(ink.foot, 2) for ink in letters(set_line(kit, long, text), fonts) if ink.text == "="}) == 2
    assert set_line(kit, long, text).height > piece.height + 10.0


def test_equals_signs_stand_under_one_another(kit: Kit, fonts: Fonts) -> None:
    other = replace(LONG, symbol=m("V_s"))
    rows: dict[tuple[int, float], float] = {}
    for number, one in enumerate((LONG, other)):
        for y, x in signs(set_line(kit, one, kit.sheet.text), fonts):
            rows.setdefault((number, y), x)
    assert len(rows) == 4  # two rows each
    assert len(set(rows.values())) == 1  # the same column in both lines


def test_lines_of_one_row_have_their_equals_signs_at_a_tab(kit: Kit, fonts: Fonts) -> None:
    text = kit.sheet.text
    heads = {
        signs(set_line(kit, one, text), fonts)[0][1]
        for one in (SHORT, replace(SHORT, says=("Strength",)), replace(SHORT, symbol=m("V")))
    }
    assert heads == {round(text.left + TAB * text.width, 2)}
    long = replace(SHORT, says=("Nominal strength of the section in one-way shear",))
    assert signs(set_line(kit, long, text), fonts)[0][1] > text.left + TAB * text.width


def test_results_end_at_one_edge(kit: Kit, fonts: Fonts) -> None:
    for one in (SHORT, LONG):
        work = [ink for ink in letters(set_line(kit, one, kit.sheet.text), fonts) if ink.left < kit.sheet.source]
        assert max(ink.right for ink in work) == pytest.approx(kit.sheet.text.right, abs=0.2)


def test_a_line_without_formula_puts_its_value_behind_its_words(kit: Kit, fonts: Fonts) -> None:
    bare = replace(SHORT, formula=None, substitution=None)
    piece = set_line(kit, bare, kit.sheet.text)
    feet = {round(ink.foot, 1) for ink in letters(piece, fonts) if "strength" in ink.text or "131.9" in ink.text}
    assert len(feet) == 1


def test_nothing_of_a_line_overlaps(kit: Kit, fonts: Fonts) -> None:
    wide = kit.sheet.text
    for one in (SHORT, LONG, replace(LONG, because=m("4 < f′_c = 4.5 < 8"), coherent=value("117,650", "lb"))):
        for right in (wide.right, wide.left + 190.0, wide.left + 120.0):
            piece = set_line(kit, one, Lane(wide.left, right))
            assert clashes(letters(piece, fonts)) == []
            work = [
                ink for ink in inked(piece.items, fonts) if ink.left > kit.sheet.work and ink.left < kit.sheet.source
            ]
            assert max(ink.right for ink in work) <= right + 0.3


def test_number_citation_and_references_stand_in_their_lanes(kit: Kit, fonts: Fonts) -> None:
    many = replace(
        SHORT, source=SourceLane("ASCE/SEI 7-22: 2.3.1", tuple(Reference(str(n), f"B1.{n}") for n in range(10, 40)))
    )
    piece = set_line(kit, many, kit.sheet.text)
    left = [ink for ink in inked(piece.items, fonts) if ink.right <= kit.sheet.work]
    right = [ink for ink in inked(piece.items, fonts) if ink.left >= kit.sheet.source]
    assert {ink.text for ink in left} == {"10", ""}  # the number and its empty ring
    assert all(ink.left > kit.sheet.left for ink in left)
    assert max(ink.right for ink in right) <= kit.sheet.right
    assert max(ink.foot for ink in right) <= piece.height
    assert [item.name for item in flat(piece.items) if isinstance(item, Anchor)] == ["B1.10"]


def test_rows_fill_from_the_result_back() -> None:
    def part(width: float) -> Part:
        return Part(Box(width, 7.0, 2.0, ()), Box(7.0, 5.0, 0.0, ()))

    # each part takes its width + 7 (sign) + 6 (gaps); the result takes 40 of the 200
    one, two = part(60.0), part(60.0)
    assert [len(row) for row in rows_of([one, two], 40.0, 200.0)] == [2]  # 73 + 73 + 40 = 186 <= 200
    assert [len(row) for row in rows_of([one, part(90.0)], 40.0, 200.0)] == [1, 1]  # 73 + 103 + 40 = 216
    assert [len(row) for row in rows_of([one, part(170.0)], 40.0, 200.0)] == [1, 1, 0]  # 183 + 40 > 200
    assert rows_of([], 40.0, 200.0) == [[]]


def test_a_statement_keeps_words_and_condition_in_one_row_when_they_fit(kit: Kit, fonts: Fonts) -> None:
    statement = Statement(15, "B1.15", ("Tension-controlled:",), m("ε_t = 0.01305 ≥ 0.00507"), source("21.2.2", 14))
    piece = set_statement(kit, statement, kit.sheet.text)
    narrow = set_statement(kit, statement, Lane(kit.sheet.text.left, kit.sheet.text.left + 110.0))
    assert piece.height < narrow.height
    assert clashes(letters(narrow, fonts)) == []


def test_a_result_box_is_ruled_round_its_words(kit: Kit, fonts: Fonts) -> None:
    box = ResultBox(
        23, "B1.23", ("Use 4-#9 at the bottom, #4 stirrups, and a good many words more " * 3,), source("", 20)
    )
    piece = set_result_box(kit, box, kit.sheet.text)
    frame = max(inked(piece.items, fonts), key=lambda ink: (ink.right - ink.left) * (ink.foot - ink.top))
    for ink in letters(piece, fonts):
        if kit.sheet.work < ink.left < kit.sheet.source:
            assert frame.left < ink.left and ink.right < frame.right
            assert frame.top < ink.top and ink.foot < frame.foot


@pytest.mark.parametrize("number", [1, 23, 999])
def test_numbers_keep_clear_of_frame_bar_and_ring(kit: Kit, fonts: Fonts, number: int) -> None:
    inks = inked(set_line(kit, replace(SHORT, number=number), kit.sheet.text).items, fonts)
    label = next(ink for ink in inks if ink.text == str(number))
    ring = next(ink for ink in inks if not ink.text and ink.right < kit.sheet.work)
    assert kit.sheet.left + 3.4 <= label.left + 0.2  # the bar of a failing line is 1.2 mm = 3.4 pt wide
    assert label.right < ring.left and ring.right < kit.sheet.work


def test_the_line_record_is_left_as_it_was(kit: Kit) -> None:
    before = replace(LONG)
    set_line(kit, LONG, kit.sheet.text)
    assert isinstance(before, Line) and before == LONG
