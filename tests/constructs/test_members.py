"""Candidates and like members on a sheet: text in reading order and places, written by hand."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.constructs.finished import Sheet, finish

TEMPLATE = """\
symbols:
  P: {unit: kip, says: force}
  b: {unit: in, says: width}
  t: {unit: in, says: thickness}
  f: {unit: ksi, says: stress}
given: {P: , b: , t: }
lines:
  - {require: 't >= 0.2 in', says: thinner than this is not covered, cite: geometry}
  - {gives: f, formula: 'P/(b*t)', cite: statics}
  - {check: stress, holds: 'f <= 10 ksi', cite: statics}
  - {use: 'plate with {f}'}
"""
# by hand, P = 20 kip, b = 4 in: 0.1 in is not covered; 0.25 in: 20 ksi, 2.000; 0.5 in: 10 ksi, 1.000
CHOSEN = {
    1: "P = 20 kip force project file",
    2: "b = 4 in. width project file",
    3: "t = 0.5 in. thickness candidate 3 of 4",
    4: "candidates, in the engineer's order of preference no. t worst check ratio outcome "
    "project file 1 0.1 in requirement not met: thinner than this is not covered stopped 2 0.25 in stress 2.000 NG "
    "3 0.5 in stress 1.000 OK Number 3 is used: the first that meets every check and stops nowhere; "
    "those after number 3 are not worked.",
    5: "Required t = 0.5 in. ≥ 0.2 in. geometry 3",
    6: "stress f = P b t = 20 4 (0.5) = 10 ksi statics 1 2 3",
    7: "CHECK stress f/10 ksi = 10/10 1.000 OK statics 6 plate with 10 ksi",
}
# by hand, b = 4 in: T7 20/(4(1)) = 5, 0.500; T8 30/(4(0.5)) = 15, 1.500; T9 8/(4(0.25)) = 8, 0.800
SHARED = {
    1: "b = 4 in. width project file",
    2: "like members, a row each member P kip t in. project file T7 20 1 T8 30 0.5 T9 8 0.25 member T8, which governs",
    3: "Required t = 0.5 in. ≥ 0.2 in. geometry 2",
    4: "stress f = P b t = 30 4 (0.5) = 15 ksi statics 1 2",
    5: "CHECK stress f/10 ksi = 15/10 1.500 NG statics 4 plate with 15 ksi",
    6: "member f ksi stress T7 5 0.500 T8 15 1.500 NG T9 8 0.800",
}
MEMBERS = "{mark: T7, P: 20 kip, t: 1 in}, {mark: T8, P: 30 kip, t: 0.5 in}, {mark: T9, P: 8 kip, t: 0.25 in}"


@pytest.fixture(scope="module")
def chosen(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    given = "{P: 20 kip, b: 4 in}, choose: [{t: 0.1 in}, {t: 0.25 in}, {t: 0.5 in}, {t: 1 in}]"
    return finish(tmp_path_factory.mktemp("chosen"), TEMPLATE, given)


@pytest.fixture(scope="module")
def shared(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    return finish(tmp_path_factory.mktemp("shared"), TEMPLATE, f"{{b: 4 in}}, members: [{MEMBERS}]")


@pytest.mark.parametrize("number", sorted(CHOSEN))
def test_candidates_in_reading_order(chosen: Sheet, number: int) -> None:
    assert chosen.lines[number] == CHOSEN[number]


@pytest.mark.parametrize("number", sorted(SHARED))
def test_members_in_reading_order(shared: Sheet, number: int) -> None:
    assert shared.lines[number] == SHARED[number]


def test_nothing_else_is_printed(chosen: Sheet, shared: Sheet) -> None:
    assert sorted(chosen.lines) == [0, *CHOSEN]
    assert sorted(shared.lines) == [0, *SHARED]
    assert (chosen.code, shared.code) == (0, 1)


def test_the_points_of_ratios_stand_under_one_another(chosen: Sheet) -> None:
    # common practice of tables: numbers are read down a column by their points
    points = []
    for words, ratio in (("2 0.25 in stress 2.000 NG", "2.000"), ("3 0.5 in stress 1.000 OK", "1.000")):
        row = [glyph for glyph in chosen.row(words) if glyph.text.strip()]
        at = "".join(glyph.text for glyph in row).index(ratio) + 1
        points.append((row[at].left + row[at].right) / 2)
    # a heavier point is a little wider
    assert abs(points[0] - points[1]) < 0.2, points


def test_the_used_candidate_is_set_in_the_heavier_face(chosen: Sheet) -> None:
    used, other = chosen.row("3 0.5 in stress 1.000 OK"), chosen.row("2 0.25 in stress 2.000 NG")
    faces = [{glyph.font for glyph in row if glyph.text.isalpha()} for row in (used, other)]
    assert faces[0].isdisjoint(faces[1])


def test_members_stand_below_one_another_at_the_left_edge(shared: Sheet) -> None:
    for first in ("T7 20 1", "T7 5 0.500"):
        left = round(shared.row(first)[0].left, 1)
        others = {"T7 20 1": ("T8 30 0.5", "T9 8 0.25"), "T7 5 0.500": ("T9 8 0.800",)}[first]
        for words in others:
            starts = [glyph.left for glyph in shared.row(words) if glyph.text == "T"]
            assert round(starts[0], 1) == round(left, 1)


WORDED = """\
symbols:
  P: {unit: kip, says: force}
  f: {unit: kip, says: force counted}
  end: {one of: [fixed, free], says: end}
given: {P: , end: }
lines:
  - branches:
      - when: 'end is fixed'
        lines: [{gives: f, formula: 'P', cite: statics}]
      - otherwise: [{gives: f, formula: '2*P', cite: statics}]
  - {check: force, holds: 'f <= 10 kip', cite: statics}
"""


def test_a_word_of_a_member_says_why_a_branch_holds(tmp_path: Path) -> None:
    members = "{mark: T7, P: 3 kip, end: fixed}, {mark: T8, P: 4 kip, end: free}"
    sheet = finish(tmp_path, WORDED, f"{{}}, members: [{members}]")
    # 2(4) = 8 governs over 3
    assert "member T8, which governs Since end is free:" in sheet.lines[1]


LAYERED = """\
symbols:
  a: {unit: in, says: a length}
given: {bar: {rows: {a: }}}
lines:
  - each: bar
    table: [a]
    lines: [{check: length, holds: 'a <= 10 in', cite: geometry}]
"""


def test_a_check_in_rows_of_a_member_is_told_by_its_worst_row(tmp_path: Path) -> None:
    members = "{mark: T7, bar: [{a: 8 in}, {a: 3 in}]}, {mark: T8, bar: [{a: 11 in}, {a: 2 in}]}"
    sheet = finish(tmp_path, LAYERED, f"{{}}, members: [{members}]")
    # T7: 8/10 and 3/10; T8: 11/10 and 2/10, the last row of neither is its worst
    assert "member length T7 0.800 T8 1.100 NG" in " ".join(sheet.lines.values())
