"""Blocks shared out over sheets: order, keeping together, figures beside lines, monsters."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from inked import clashes, inked, texts
from specimen import check, lane, line, m, over, section, span, value
from specimen import given as given_row

from calcreport.layout.filling import Body
from calcreport.layout.flow import flow
from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Placed, Run
from calcreport.layout.pieces import flat
from calcreport.report.model import (
    Block,
    Column,
    Fence,
    FigureBlock,
    Givens,
    Heading,
    Letters,
    Line,
    Paragraph,
    ResultBox,
    Row,
    SourceLane,
    Stack,
    Table,
    TableRow,
)


def a_line(n: int) -> Line:
    """Make a line whose words, citation and result can be told from every other line's."""
    return line(n, (f"words{n}x and a few more of them",), "V_n", m("V_c + V_s"), m("58.8 + 73.1 + 12.25"),
                Letters(f"result{n}x"), SourceLane(f"cite{n}x"))  # fmt: skip


def sheet_of_text(bodies: tuple[Body, ...], text: str) -> list[int]:
    """Return the sheets on which a text is printed."""
    return [n for n, body in enumerate(bodies) if any(text in i.text for i in flat(body.items) if isinstance(i, Run))]


def cite(n: int) -> SourceLane:
    """Make a source lane that can be told from every other."""
    return SourceLane(f"cite{n}x")


MAKERS: dict[str, Callable[[int], Block]] = {
    "heading": lambda n: Heading(f"head{n}x", 1 + n % 3),
    "line": a_line,
    "check": lambda n: check(n, f"check{n}x", over("V_u", "φV_n"), over("1", "2"), "0.5", "OK", cite(n)),
    "ng": lambda n: check(n, f"check{n}x", over("V_u", "φV_n"), over("2", "1"), "2.0", "NG", cite(n)),
    "paragraph": lambda n: Paragraph((f"para{n}x " + "and so on and on " * (n % 40),)),
    "table": lambda n: Table(
        (Column(("one",)), Column(("two",))),
        tuple(TableRow(((f"row{n}x{k}y",), ("words",))) for k in range(n % 60)), (f"table{n}x",), n, f"T.{n}",
    ),
    "figure": lambda n: FigureBlock(section() if n % 2 else span()),
    "alone": lambda n: FigureBlock(section(), False, (f"caption{n}x",)),
    "box": lambda n: ResultBox(n, f"R.{n}", (f"use{n}x",), SourceLane("")),
    "givens": lambda n: Givens(tuple(
        given_row(n * 100 + k, "b", f"given{n}x{k}y", value("16", "in."), "project file", "B1") for k in range(n % 9)
    )),
}  # fmt: skip


@settings(max_examples=60, deadline=None)
@given(st.lists(st.sampled_from([*MAKERS, "line", "line"]), min_size=1, max_size=45))
def test_whatever_comes_is_set_once_in_the_frame_and_in_order(kit: Kit, fonts: Fonts, kinds: list[str]) -> None:
    blocks = tuple(MAKERS[kind](place + 1) for place, kind in enumerate(kinds))
    sheet = kit.sheet
    bodies = flow(kit, blocks, sheet.body_top)
    order: list[int] = []
    for place, kind in enumerate(kinds, start=1):
        if kind in ("line", "check", "ng"):
            key = "words" if kind == "line" else "check"
            where = sheet_of_text(bodies, f"{key}{place}x")
            assert len(where) == 1
            assert sheet_of_text(bodies, f"cite{place}x") == where  # citation and words never part
            assert kind != "line" or sheet_of_text(bodies, f"result{place}x") == where
            order += where
        if kind == "table":
            assert all(len(sheet_of_text(bodies, f"row{place}x{k}y")) == 1 for k in range(place % 60))
    assert order == sorted(order)
    for number, body in enumerate(bodies):
        inks = inked(body.items, fonts)
        assert clashes(inks) == []
        assert all(sheet.left - 1.1 <= ink.left and ink.right <= sheet.right + 1.1 for ink in inks)
        assert all(sheet.body_top - 2.0 <= ink.top and ink.foot <= sheet.body_foot + 2.0 for ink in inks)
        if number < len(bodies) - 1:
            last = max((ink for ink in inks if ink.text.strip()), key=lambda ink: ink.foot)
            assert not last.text.startswith("head")


def test_an_empty_part_still_has_a_sheet(kit: Kit) -> None:
    assert len(flow(kit, (), kit.sheet.body_top)) == 1


def test_lines_fill_a_sheet_before_the_next_begins(kit: Kit) -> None:
    lines = tuple(a_line(n) for n in range(1, 60))
    bodies = flow(kit, lines, kit.sheet.body_top)
    for body in bodies[:-1]:
        assert kit.sheet.body_foot - body.foot < 40.0  # less than one line with its gap is left


def test_a_figure_stands_right_of_the_lines_that_follow_it(kit: Kit, fonts: Fonts) -> None:
    (body,) = flow(kit, (FigureBlock(section()), *(a_line(n) for n in range(1, 8))), kit.sheet.body_top)
    inks = [ink for ink in inked(body.items, fonts) if ink.text]
    first = next(ink for ink in inks if "words1x" in ink.text)
    last = next(ink for ink in inks if "words7x" in ink.text)
    label = next(ink for ink in inks if "4-#9" in ink.text)
    assert first.right < label.left
    assert first.top < label.top < last.top
    results = {n: next(ink.right for ink in inks if f"result{n}x" in ink.text) for n in (1, 7)}
    assert results[1] < label.left  # narrowed lane
    assert results[7] == pytest.approx(kit.sheet.text.right, abs=0.2)  # full lane again


def test_a_figure_without_room_waits_while_its_lines_go_on(kit: Kit) -> None:
    fill = tuple(a_line(n) for n in range(1, 48))
    (alone,) = flow(kit, fill, kit.sheet.body_top)
    assert kit.sheet.body_foot - alone.foot < 100.0  # no room for the figure, but for a line
    after = tuple(a_line(n) for n in range(48, 80))
    bodies = flow(kit, (*fill, FigureBlock(section()), *after), kit.sheet.body_top)
    assert len(bodies) == 2
    assert sheet_of_text(bodies, "words48x") == [0]  # the line after the figure stays on the first sheet
    assert sheet_of_text(bodies, "4-#9") == [1]


def test_a_figure_is_not_left_alone_on_a_last_sheet(kit: Kit) -> None:
    for count in (25, 30, 33, 35, 36):
        fill = tuple(a_line(n) for n in range(1, count))
        bodies = flow(kit, (*fill, FigureBlock(section()), a_line(count)), kit.sheet.body_top)
        others = {n for k in range(1, count + 1) for n in sheet_of_text(bodies, f"words{k}x")}
        assert set(sheet_of_text(bodies, "4-#9")) <= others


def test_a_sparse_last_sheet_is_brought_back_by_closing_the_gaps(kit: Kit) -> None:
    (whole,) = flow(kit, tuple(a_line(n) for n in range(1, 11)), kit.sheet.body_top)
    pitch = (whole.foot - kit.sheet.body_top) / 9.77  # ten lines with nine gaps of 4 pt: 10 p - 4 = 9.77 p at p = 17.5
    fit = int(kit.sheet.body_height / pitch)
    more = int(kit.sheet.body_height / (pitch - 2.0))  # gaps closed by half
    assert more > fit + 2
    assert len(flow(kit, tuple(a_line(n) for n in range(more)), kit.sheet.body_top)) == 1
    assert len(flow(kit, tuple(a_line(n) for n in range(more + 8)), kit.sheet.body_top)) == 2


def test_the_heading_row_is_set_again_where_a_table_runs_on(kit: Kit) -> None:
    table = Table((Column(("station",)),), tuple(TableRow(((f"row{n}",),)) for n in range(120)), ("Stations",))
    bodies = flow(kit, (table,), kit.sheet.body_top)
    assert len(bodies) == 3
    assert sheet_of_text(bodies, "station") == [0, 1, 2]
    assert sheet_of_text(bodies, "continued") == [1, 2]


def test_a_monster_is_parted_rather_than_lost(kit: Kit, fonts: Fonts) -> None:
    stack = Row((Letters("max"), Fence("(", Stack(tuple(Letters(f"r{n}z") for n in range(120))), ")")))
    monster = line(1, ("A line higher than a sheet",), "V_n", stack, None, Letters("end"), lane("", 1))
    bodies = flow(kit, (a_line(2), monster, a_line(3)), kit.sheet.body_top)
    assert all(len(sheet_of_text(bodies, f"r{n}z")) == 1 for n in (0, 60, 119))
    for body in bodies:
        for ink in inked(body.items, fonts):
            assert ink.text.strip("()⎛⎜⎝⎞⎟⎠") == "" or ink.foot <= kit.sheet.body_foot + 2.0


def test_bodies_are_one_placed_box_a_piece(kit: Kit) -> None:
    (body,) = flow(kit, (a_line(1), a_line(2)), kit.sheet.body_top)
    assert all(isinstance(item, Placed) for item in body.items)
    assert [item.y for item in body.items] == sorted(item.y for item in body.items)  # type: ignore[union-attr]
    assert texts(body.items).index("words1x") < texts(body.items).index("words2x")
