"""The table of given values: columns, rules, breaks, long values."""

from __future__ import annotations

from inked import clashes, letters, texts
from specimen import given, m, unit, value

from calcreport.layout.fonts import Fonts
from calcreport.layout.givens import PITCH, SIZE, set_givens
from calcreport.layout.kit import EQUALS_GAP, INDENT, SYMBOL_CAP, Kit
from calcreport.layout.model import Anchor, Circle
from calcreport.layout.pieces import flat
from calcreport.layout.sheet import Lane
from calcreport.report.model import Givens, Letters, Row

ROWS = tuple(
    given(n, name, says, shown, "project file", "B1")
    for n, name, says, shown in (
        (1, "b", "width of the section", value("16", "in.")),
        (2, "h", "overall depth", value("28", "in.")),
        (3, "f′_c", "specified strength of concrete", value("4500", "psi")),
        (4, "A_s", "bottom steel", Row((Letters("4-#9:  "), m("A_s = 4.00"), *unit("in.2"), Letters(",  n = 4")))),
    )
)


def test_one_compact_row_each_with_its_ring(kit: Kit, fonts: Fonts) -> None:
    pieces = set_givens(kit, Givens(ROWS), kit.sheet.text)
    assert len(pieces) == len(ROWS)
    assert all(piece.height <= PITCH + 2.0 for piece in pieces)
    assert all(sum(isinstance(item, Circle) for item in flat(piece.items)) == 1 for piece in pieces)
    assert [item.name for piece in pieces for item in flat(piece.items) if isinstance(item, Anchor)] == [
        "B1.1", "B1.2", "B1.3", "B1.4"
    ]  # fmt: skip


def test_symbols_end_at_one_equals_sign_as_far_in_as_the_widest(kit: Kit, fonts: Fonts) -> None:
    pieces = set_givens(kit, Givens(ROWS), kit.sheet.text)
    xs = {round(next(ink.left for ink in letters(piece, fonts) if ink.text == "="), 2) for piece in pieces}
    widest = max(kit.math(row.symbol, SIZE).width for row in ROWS)
    assert xs == {round(kit.sheet.text.left + INDENT + widest + EQUALS_GAP, 2)}


def test_a_symbol_of_words_beyond_the_cap_moves_no_other(kit: Kit, fonts: Fonts) -> None:
    wide = given(5, "roundedyieldstrain", "yield strain taken as 0.002", value("yes"), "project file", "B1")
    pieces = set_givens(kit, Givens((*ROWS, wide)), kit.sheet.text)
    xs = [round(next(ink.left for ink in letters(piece, fonts) if ink.text == "="), 2) for piece in pieces]
    widest = max(kit.math(row.symbol, SIZE).width for row in ROWS)
    assert kit.math(wide.symbol, SIZE).width > SYMBOL_CAP
    assert set(xs[:-1]) == {round(kit.sheet.text.left + INDENT + widest + EQUALS_GAP, 2)} and xs[-1] > xs[0]


def test_first_and_last_row_are_never_left_alone(kit: Kit) -> None:
    pieces = set_givens(kit, Givens(ROWS), kit.sheet.text)
    assert [piece.keep for piece in pieces] == [True, False, True, False]
    assert set_givens(kit, Givens(()), kit.sheet.text) == ()
    assert [piece.keep for piece in set_givens(kit, Givens(ROWS[:1]), kit.sheet.text)] == [False]


def test_nothing_overlaps_beside_a_figure(kit: Kit, fonts: Fonts) -> None:
    left = kit.sheet.text.left
    for width in (kit.sheet.text.width, 190.0, 150.0):
        for piece in set_givens(kit, Givens(ROWS), Lane(left, left + width)):
            inks = letters(piece, fonts)
            assert clashes(inks) == []
            work = [ink for ink in inks if kit.sheet.work < ink.left < kit.sheet.source]
            assert max(ink.right for ink in work) <= left + width + 0.5


def test_every_word_is_set(kit: Kit) -> None:
    pieces = set_givens(kit, Givens(ROWS), kit.sheet.text)
    assert "specifiedstrengthofconcrete" in texts(pieces[2].items)
    assert texts(pieces[0].items).endswith("projectfile")
