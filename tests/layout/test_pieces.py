"""Pieces: rows stacked, items moved, monsters parted."""

from __future__ import annotations

from dataclasses import replace

from calcreport.layout.model import Anchor, Box, Circle, Link, Placed, Run, Stroke
from calcreport.layout.pieces import Piece, Rows, flat, parted, reach, shifted
from calcreport.layout.words import PLAIN

LETTER = Box(10.0, 7.0, 2.0, (Run(0.0, 0.0, "regular", 9.0, (1,), "a"),))


def test_rows_stack_text_lines_at_their_leading() -> None:
    rows = Rows()
    first = rows.words((LETTER, LETTER), PLAIN, 5.0)
    ys = [item.y for item in rows.items if isinstance(item, Placed)]
    assert ys[0] == first
    # from baseline to baseline: fall 2.16 + rise 7.00 (the box is taller than 6.66) + spare 11 - 6.66 - 2.16
    assert round(ys[1] - ys[0], 3) == round(2.16 + 7.0 + 2.18, 3)


def test_a_row_is_at_least_as_high_as_asked() -> None:
    rows = Rows()
    rows.row(((0.0, LETTER),), 20.0)
    assert rows.y == 20.0
    tall = Box(10.0, 20.0, 10.0, ())
    rows = Rows()
    rows.row(((0.0, LETTER), (12.0, tall)), 13.5, 2.0)
    assert rows.y == 30.0 + 2.0 + 0.8  # the box, the lead, and a little more round a tall row


def test_every_kind_of_item_moves() -> None:
    items = (
        Run(1.0, 2.0, "regular", 9.0, (1,), "a"), Circle(1.0, 2.0, 3.0, 0.35), Link(1.0, 2.0, 3.0, 4.0, "x"),
        Anchor("x", 1.0, 2.0), Placed(1.0, 2.0, LETTER),
    )  # fmt: skip
    for item in items:
        assert shifted(item, 10.0, 20.0) == replace(item, x=11.0, y=22.0)
    assert shifted(Stroke(((0.0, 0.0), (1.0, 1.0)), 0.35), 2.0, 3.0) == Stroke(((2.0, 3.0), (3.0, 4.0)), 0.35)


def test_boxes_inside_boxes_are_resolved_to_sheet_coordinates() -> None:
    outer = Box(20.0, 9.0, 9.0, (Placed(3.0, 4.0, LETTER),))
    (run,) = flat((Placed(100.0, 200.0, outer),))
    assert isinstance(run, Run)
    assert (run.x, run.y) == (103.0, 204.0)


def test_a_piece_higher_than_a_sheet_is_parted_between_its_rows() -> None:
    rows = Rows()
    for _ in range(50):
        rows.row(((0.0, LETTER),), 20.0)
    strips = parted(Piece(rows.y, tuple(rows.items)), 300.0)
    assert rows.y == 1000.0
    assert all(strip.height <= 300.0 for strip in strips)
    assert sum(len(strip.items) for strip in strips) == 50
    for strip in strips:
        assert all(reach(item)[0] >= -1e-9 and reach(item)[1] <= 300.0 + 1e-9 for item in strip.items)


def test_an_item_higher_than_a_sheet_still_ends_on_some_sheet() -> None:
    bar = Stroke(((0.0, 0.0), (0.0, 900.0)), 1.0)
    strips = parted(Piece(900.0, (bar, Run(0.0, 10.0, "regular", 9.0, (1,), "a"))), 300.0)
    assert sum(len(strip.items) for strip in strips) == 2
