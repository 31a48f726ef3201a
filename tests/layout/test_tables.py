"""Tables: widths, wrapping, heading rows, emphasis."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from inked import clashes, inked, letters, texts

from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.sheet import Lane
from calcreport.layout.tables import GUTTER, grid_of, set_table
from calcreport.report.model import Column, SourceLane, Table, TableRow


def table(cells: tuple[tuple[str, ...], ...], stretch: int = -1, **more: object) -> Table:
    columns = tuple(Column((f"column {n}",), stretch=1.0 if n == stretch else 0.0) for n in range(len(cells[0])))
    return Table(columns, tuple(TableRow(tuple((cell,) for cell in row)) for row in cells), **more)  # type: ignore[arg-type]


SMALL = table((("a", "b", "c"), ("alpha", "beta", "gamma")))


def test_natural_widths_stand_where_the_lane_holds_them(kit: Kit) -> None:
    grid = grid_of(kit, SMALL, kit.sheet.text)
    heading = kit.lettering.natural(("column 0",), grid.letters.heading)
    assert grid.widths[0] == pytest.approx(heading, abs=0.2)  # the heading is wider than 'alpha'
    assert grid.lefts[1] - grid.lefts[0] == pytest.approx(grid.widths[0] + GUTTER)


def test_a_stretching_column_takes_what_is_left(kit: Kit) -> None:
    grid = grid_of(kit, table((("a", "b", "c"),), stretch=1), kit.sheet.text)
    assert grid.lefts[-1] + grid.widths[-1] == pytest.approx(kit.sheet.text.right)


def test_long_cells_wrap_and_short_columns_keep_their_width(kit: Kit, fonts: Fonts) -> None:
    words = "words that go on and on " * 8
    grid = grid_of(kit, table((("mark", words),)), kit.sheet.text)
    assert grid.widths[0] == pytest.approx(kit.lettering.natural(("column 0",), grid.letters.heading), abs=0.2)
    pieces = set_table(kit, table((("mark", words),)), kit.sheet.text)
    assert pieces[-1].height > 2 * grid.letters.plain.leading
    assert texts(pieces[-1].items) == "mark" + words.replace(" ", "")


def test_the_heading_row_repeats_with_the_title(kit: Kit) -> None:
    pieces = set_table(kit, table((("a", "b"), ("c", "d"), ("e", "f")), title=("Stations",)), kit.sheet.text)
    again = pieces[2].again
    assert again is not None
    assert texts(again.items) == "Stations,continuedcolumn0column1"
    assert [piece.keep for piece in pieces] == [True, True, True, False]  # heading, first two and last two rows


def test_a_table_that_would_part_its_numbers_is_set_as_two_with_the_row_names_in_both(kit: Kit, fonts: Fonts) -> None:
    # ten columns of sixteen digits at 6.5 points are about 600 points, a lane about 390
    numbers = tuple(f"{n}234567.89012345" for n in range(1, 11))
    wide = table((("left", *numbers), ("right", *numbers)), title=("Sides",), number=7, anchor="B1.7")
    lane = kit.sheet.text
    pieces = set_table(kit, wide, lane)
    rows = [texts(piece.items) for piece in pieces]
    assert [row.count("left") for row in rows] == [0, 1, 0, 0, 1, 0]
    assert rows[1] + rows[4] == "left" + "".join(numbers[:5]) + "left" + "".join(numbers[5:])
    assert all(row.find("Sides") < 0 for row in rows[3:])
    right = max(ink.right for piece in pieces for ink in letters(piece, fonts))
    assert right <= lane.right + 0.1
    # a number stands on one row: no row of either half is higher than one of letters
    assert all(piece.height < 2 * 8.0 for piece in (pieces[1], pieces[2], pieces[4], pieces[5]))


def test_a_failing_row_is_barred_and_a_governing_one_heavier(kit: Kit, fonts: Fonts) -> None:
    rows = (TableRow((("a",),), "loud"), TableRow((("a",),), "governing"), TableRow((("a",),)))
    pieces = set_table(kit, Table((Column(("x",)),), rows), kit.sheet.text)
    assert min(ink.left for ink in inked(pieces[1].items, fonts)) == pytest.approx(kit.sheet.left)
    assert letters(pieces[2], fonts)[0].right > letters(pieces[3], fonts)[0].right


def test_source_rows_longer_than_the_table_push_on(kit: Kit) -> None:
    one = table((("a",),), number=18, anchor="B1.18", source=SourceLane("ASCE/SEI 7-22: 2.3.1 and 12.4.2.3 " * 3))
    pieces = set_table(kit, one, kit.sheet.text)
    assert sum(piece.height for piece in pieces) > 40.0  # four source rows of 9 pt and their descent


@settings(max_examples=40, deadline=None)
@given(
    st.lists(st.tuples(*[st.text("ab c_/é", max_size=60)] * 4), min_size=1, max_size=4),
    st.floats(120.0, 500.0),
)
def test_no_cell_leaves_the_lane_or_meets_another(
    kit: Kit, fonts: Fonts, cells: list[tuple[str, ...]], width: float
) -> None:
    lane = Lane(kit.sheet.text.left, kit.sheet.text.left + width)
    for piece in set_table(kit, table(tuple(cells)), lane):
        inks = letters(piece, fonts)
        assert clashes(inks) == []
        assert all(lane.left - 0.1 <= ink.left and ink.right <= lane.right + 1.0 for ink in inks)
