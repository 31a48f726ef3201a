"""Points at equal distances, rows worked once in a table, and a method with its closures: text and places by hand."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.constructs.finished import Sheet, finish

SPACED = """\
symbols:
  l: {unit: ft, says: span}
  w: {unit: kip/ft, says: load}
  x: {unit: ft, says: place}
  M: {unit: kip*ft, says: moment}
  M_m: {unit: kip*ft, says: greatest}
given: {l: , w: }
lines:
  - {rows: point, cite: geometry, spaced: {symbol: x, from: '0', to: l, count: 5}}
  - each: point
    table: [x, M]
    lines: [{gives: M, formula: 'w*x*(l - x)/2', cite: statics}]
  - {gives: M_m, formula: 'max(M over point)', cite: statics}
"""
# 2 kip/ft on 10 ft: 2(2.5)(7.5)/2 = 18.75, 2(5)(5)/2 = 25
POINTS = {
    3: "place, 5 values in equal steps x from 0 ft to l = 10 ft geometry 1",
    4: "moment M = w x(l − x) 2 statics 1 2 3",
    5: "point x ft M kip·ft 1 0 0 2 2.5 18.75 3 5 25 4 7.5 18.75 5 10 0",
    6: "greatest, point 3 Mm = max point M = 25 kip·ft statics 4",
}
METHOD = """\
symbols:
  l: {unit: ft, says: span}
  w: {unit: kip/ft, says: load}
  EI: {unit: kip*ft^2, says: stiffness}
  hold: {one of: [pinned, fixed, spring, free], says: how it holds}
  placing: {one of: [everywhere, patterned], says: how it lies}
  x: {unit: ft, says: place}
  V: {unit: kip, says: shear}
  M: {unit: kip*ft, says: moment}
  M_hi: {unit: kip*ft, says: greatest moment}
  R: {unit: kip, says: reaction}
given:
  EI:
  span: {rows: {l: }, says: spans}
  support: {rows: {hold: }, says: supports}
  load: {rows: {placing: }, says: load cases}
  w: {over: [span, load]}
lines:
  - method: member on supports
    with: {spans: span, l: l, EI: EI, cut: '1 ft', supports: support, hold: hold, k: '0', face: '1 ft', cases: load,
      placing: placing, w: w, parts: '2'}
    gives: {station: stations, x: x, V: V, M: M, M_hi: M_hi, R: R}
    table: [V, M, R]
    cite: statics
"""
# two spans of 8 ft under 2 kip/ft: w l/8 = 2, so the end reactions are 3(2)(8)/8 = 6 and the middle one 10(2)(8)/8 = 20 kip;
# V = 6 - 2x and M = 6x - x^2 in the first span, 10 - 2x and -16 + 10x - x^2 in the second; faces 1 ft from the
# supports, sections 1 ft from the faces
MEMBER = {
    6: "Member on supports: each span of length l and stiffness EI, each support (hold), a spring by 0, with "
    "faces 1 ft from its line and sections 1 ft from those, each load (placing), w along a span, 2 parts a span. "
    "Supports hold without settling; loads down, reactions up, sagging positive; places from the left of a span. A "
    "patterned case lies on any spans, and its greatest and least are over every arrangement. Stations are at the parts, "
    "the faces, the sections, the loads, and where the factored moment is greatest and least. statics 1 2 3 4 5",
    7: "span, station, load V kip M kip·ft 6 a, start, D 6 0 a, left, D 4 5 a, left_d, D 2 8 a, middle, D −2 8 a, right_d, D −6 0 "
    "a, right, D −8 −7 a, end, D −10 −16 b, start, D 10 −16 b, left, D 8 −7 b, left_d, D 6 0 b, middle, D 2 8 b, right_d, D −2 8 "
    "b, right, D −4 5 b, end, D −6 0",
    8: "support, load R kip 6 A, D 6 B, D 20 C, D 6",
}
# the sums that prove it: 6 + 20 + 6 - 2(16) = 0, greatest term 20; 20(8) + 6(16) - 16(4) - 16(12) = 0, greatest term 192;
# the slopes over the middle support are both zero, the largest area under M/EI 10(8)(8)/2/9000 = 0.03556
CLOSURES = {
    9: "forces: reactions − loads = 0.00000 kip of 20.00 kip 6",
    10: "moments about the left end: of reactions − of loads = 0.0000 kip·ft of 192.0 kip·ft 6",
    11: "continuity: largest gap between the slopes left and right of a support and of what holds it, by the areas under M/EI "
    "= 0.00000000 of 0.03556 6",
}


@pytest.fixture(scope="module")
def points(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    return finish(tmp_path_factory.mktemp("points"), SPACED, "{l: 10 ft, w: 2 kip/ft}")


@pytest.fixture(scope="module")
def member(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    given = """{EI: 9000 kip*ft^2, span: [{name: a, l: 8 ft}, {name: b, l: 8 ft}], load: [{name: D, placing: everywhere}],
      support: [{name: A, hold: pinned}, {name: B, hold: pinned}, {name: C, hold: pinned}],
      w: {a: {D: 2 kip/ft}, b: {D: 2 kip/ft}}}"""
    return finish(tmp_path_factory.mktemp("member"), METHOD, given)


@pytest.mark.parametrize("number", sorted(POINTS))
def test_points_in_reading_order(points: Sheet, number: int) -> None:
    assert points.lines[number] == POINTS[number]


@pytest.mark.parametrize("number", sorted(MEMBER))
def test_what_a_method_gives_in_reading_order(member: Sheet, number: int) -> None:
    assert member.lines[number] == MEMBER[number]


@pytest.mark.parametrize("number", sorted(CLOSURES))
def test_the_sums_that_prove_a_method_stand_below_it(member: Sheet, number: int) -> None:
    assert member.lines[number] == CLOSURES[number]


def test_a_table_begins_where_the_words_of_lines_do(points: Sheet) -> None:
    # one left edge of the work lane: common practice of typesetting
    words = points.row("moment M")
    head = points.row("point x ft M kip·ft")
    lanes = points.frame.lanes
    assert lanes is not None
    edges = [min(g.left for g in row if g.left > lanes[0] and g.text.strip()) for row in (words, head)]
    assert edges[0] == pytest.approx(edges[1], abs=0.1)


def test_a_minus_hangs_left_of_the_digits_of_its_column(member: Sheet) -> None:
    # digits of one column end at one edge, signs before them: common practice of tables
    rows = [member.row("a, middle, D −2 8"), member.row("b, middle, D 2 8")]
    ends = []
    for row in rows:
        glyphs = [g for g in row if g.text.strip()]
        text = "".join(g.text for g in glyphs)
        at = text.index("−2") + 1 if "−2" in text else text.index("128") - 0 if "128" in text else text.rindex("28")
        ends.append(glyphs[at].right)
    assert ends[0] == pytest.approx(ends[1], abs=0.1)


EMPTY = """\
symbols:
  q_D: {unit: psf, says: dead load}
  q_i: {unit: psf, says: load of a layer}
given: {layer: {rows: {q_i: }, least: 0, says: layers of the floor}}
lines: [{gives: q_D, formula: 'sum(q_i over layer)', cite: statics}]
"""


def test_a_set_without_rows_is_one_line_and_no_table(tmp_path: Path) -> None:
    sheet = finish(tmp_path, EMPTY, "{layer: []}")
    assert sheet.lines[1] == "layers of the floor none project file"
    assert sheet.lines[2].endswith("= 0 psf statics")
