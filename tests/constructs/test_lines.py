"""Each kind of line once, on one sheet: expected text and places are written by hand.

Numbers are sums by hand, given beside them; places are those of the lanes (number, work, source) and of the rules of
the house: equals signs under one another, results and ratios at one right edge, sources at one left edge.
"""

from __future__ import annotations

import pytest

from tests.constructs.finished import Sheet, finish

TEMPLATE = """\
symbols:
  b: {unit: in, says: width}
  h: {unit: in, says: depth}
  A_g: {unit: in^2, says: gross area}
  k: {unit: '1', says: factor}
  m: {unit: '1', says: factor of the deep}
  ties: {one of: [tied, spiral], says: transverse steel}
  N_u: {unit: kip, says: axial force}
  y: {unit: in, says: depth of a layer}
  A_i: {unit: in^2, says: steel of a layer}
  S: {unit: in^3, says: first moment of the steel}
  y_1: {unit: in, says: depth of the first layer}
  y_max: {unit: in, says: deepest layer}
  q: {unit: '1', says: factor read from the table}
  p_i: {unit: '1', says: place}
  q_i: {unit: '1', says: factor at a place}
  f: {unit: kip, says: force of a layer}
  c: {unit: in, says: depth sought}
  z: {unit: in, says: twice the width}
parts:
  double: {lines: [{gives: z, formula: '2*b', cite: geometry}]}
given:
  b:
  h: {range: '> 0'}
  ties:
  N_u: {if none: 0 kip}
  layer: {rows: {y: , A_i: }, says: layers of steel}
lines:
  - {heading: Section}
  - {note: 'a note on {b}', cite: geometry}
  - {caution: a caution}
  - {assume: an assumption}
  - {gives: A_g, formula: 'b*h', cite: geometry}
  - {gives: k, cite: 'Table 2.1', branches: [{when: 'h <= 20 in', formula: '0.85'}, {otherwise: '0.75'}]}
  - {gives: m, cite: '2.2', branches: [{when: 'h > 20 in', formula: 'b/h'}, {otherwise: 'h/b'}]}
  - {require: 'h >= b and h <= 4*b', says: proportions of the section, cite: '1.1'}
  - {gives: S, formula: 'sum(A_i*y over layer)', cite: statics}
  - {gives: y_1, formula: 'pick(y over layer where layer is top)', cite: geometry}
  - {gives: y_max, formula: 'max(y over layer)', cite: geometry}
  - rows: table
    says: factors
    cite: 'Table 3.1'
    columns: {p_i: , q_i: }
    list: [{p_i: '0', q_i: '1'}, {p_i: '10', q_i: '0.5'}]
  - {gives: q, formula: 'linear(q_i over table where p_i = 5)', cite: 'Table 3.1'}
  - {unknown: c, between: ['1 in', 'h'], satisfies: 'b*c^2 = S'}
  - {part: double}
  - each: layer
    table: [y, A_i, f]
    lines:
      - {gives: f, formula: 'A_i*(60 ksi)', cite: statics}
      - {check: layer force, holds: 'f <= 100 kip', cite: '5.1'}
  - {check: depth, holds: 'h >= 12 in', cite: '5.2'}
  - {check: ends, holds: 'ties is tied', cite: '5.3'}
  - {use: 'Use {b} by {h}.', cite: '5.4'}
"""
GIVEN = (
    "{b: 12 in, h: 18 in, ties: tied, N_u: none, "
    "layer: [{name: top, y: 2.5 in, A_i: 1.2 in^2}, {name: bottom, y: 15.5 in, A_i: 2.37 in^2}]}"
)
#: text by line, number left out; a subscript and a superscript follow their letter
TEXT = {
    1: "b = 12 in. width project file",
    2: "h = 18 in. depth project file",
    3: "ties = tied transverse steel project file",
    4: "Nu = none (0 kip) axial force project file",
    5: "layers of steel layer y in. Ai in.² project file top 2.5 1.2 bottom 15.5 2.37 "
    "Section a note on 12 in. geometry a caution an assumption",
    # 12(18) = 216
    6: "gross area Ag = b h = 12 (18) = 216 in.² geometry 1 2",
    7: "factor since h = 18 in. ≤ 20 in. k = 0.85 Table 2.1 2",
    # the failed comparison is reversed; 18/12 = 1.5
    8: "factor of the deep since h = 18 in. ≤ 20 in. m = h/b = 18/12 = 1.5 2.2 1 2",
    # 4(12) = 48
    9: "Required b = 12 in. ≤ h = 18 in. ≤ 4 b = 48 in. 1.1 1 2",
    # 3 + 36.735 = 39.735; five digits, as line 18 holds it against the other side of the equation
    10: "first moment of the steel S = ∑ layer Ai y = 1.2 (2.5) + 2.37 (15.5) = 39.735 in.³ statics 5",
    11: "depth of the first layer, layer top y1 = ytop = 2.5 in. geometry 5",
    12: "deepest layer, layer bottom ymax = max layer y = 15.5 in. geometry 5",
    13: "factors table pi qi Table 3.1 1 0 1 2 10 0.5",
    # half way: 1 − 0.5/2 = 0.75
    14: "factor read from the table q = read table: pi=5 qi = 1 + (0.5 − 1) 5 − 0 10 − 0 = 0.75 Table 3.1 13",
    15: "depth sought, so that b c 2 = S 1 10",
    # √3.31125 = 1.819684
    16: "c = √S/b = √39.735/12 = 1.81968 in. 1 10",
    # 12(3.3112353) = 39.7348, to the digits of the other side 39.735
    17: "left side there b c 2 = 12 (1.819682 ) = 39.735 in.³ 1 16",
    18: "right side there S = 39.735 in.³ 10",
    19: "twice the width z = 2 b = 2 (12) = 24 in. geometry 1 layer bottom, which governs",
    # 2.37(60) = 142.2
    20: "force of a layer f = Ai (60 ksi) = 2.37 (60) = 142.2 kip statics 5",
    21: "CHECK layer force f/100 kip = 142.2/100 1.422 NG 5.1 20",
    # 1.2(60) = 72
    22: "layer y in. Ai in.² f kip layer force top 2.5 1.2 72 0.720 bottom 15.5 2.37 142.2 1.422 NG",
    # 12/18 = 0.667
    23: "CHECK depth 12 in./h = 12/18 0.667 OK 5.2 2",
    24: "CHECK ends ties is tied OK 5.3 3 Use 12 in. by 18 in. 5.4",
}


@pytest.fixture(scope="module")
def sheet(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    return finish(tmp_path_factory.mktemp("lines"), TEMPLATE, GIVEN)


@pytest.mark.parametrize("number", sorted(TEXT))
def test_text_in_reading_order(sheet: Sheet, number: int) -> None:
    assert sheet.lines[number] == TEXT[number]


def test_nothing_else_is_printed(sheet: Sheet) -> None:
    assert sorted(sheet.lines) == [0, *sorted(TEXT)]
    assert sheet.lines[0] == "1 CHECK NG IN THIS CALCULATION: line 21 layer force"
    assert sheet.code == 1


# ---------------------------------------------------------------- lanes


def test_each_lane_holds_its_own(sheet: Sheet) -> None:
    assert sheet.frame.lanes is not None
    left, right = sheet.frame.lanes
    for number, words, source in (
        (6, "gross area", "geometry"),
        (10, "first moment", "statics"),
        (20, "force of a layer", "statics"),
    ):
        row = sheet.row(words)
        inside = [g for g in row if g.text.strip()]
        # number, work, source from left to right, none over a rule
        assert "".join(g.text for g in inside if g.right < left).startswith(str(number))
        assert "".join(g.text for g in inside if g.left > right).startswith(source)
        assert all(g.right < left or (g.left > left and g.right < right) or g.left > right for g in inside)


def test_line_numbers_end_at_one_edge_and_sources_begin_at_one(sheet: Sheet) -> None:
    assert sheet.frame.lanes is not None
    left, right = sheet.frame.lanes
    numbers = [sheet.row(words) for words in ("width", "gross area", "depth of the first layer", "twice the width")]
    ends = [max(g.right for g in row if g.right < left and g.text.isdigit()) for row in numbers]
    assert ends == pytest.approx([ends[0]] * 4, abs=0.05)
    begins = [min(g.left for g in row if g.left > right) for row in numbers]
    assert begins == pytest.approx([begins[0]] * 4, abs=0.05)


def test_equals_signs_stand_under_one_another(sheet: Sheet) -> None:
    given = [
        next(g.left for g in sheet.row(words) if g.text == "=") for words in ("width", "transverse", "axial force")
    ]
    assert given == pytest.approx([given[0]] * 3, abs=0.05)
    lines = [
        next(g.left for g in sheet.row(words) if g.text == "=")
        for words in ("gross area", "twice the width", "deepest")
    ]
    assert lines == pytest.approx([lines[0]] * 3, abs=0.05)


def test_results_end_at_one_edge_and_so_do_ratios(sheet: Sheet) -> None:
    assert sheet.frame.lanes is not None
    results = [sheet.find(text)[-1].right for text in ("= 2.5 in.", "= 15.5 in.", "= 24 in.", "= 142.2 kip", "= 0.75")]
    assert results == pytest.approx([results[0]] * 5, abs=0.05)
    assert results[0] < sheet.frame.lanes[1]
    ratios = [max(g.right for g in sheet.find(text)) for text in ("0.667",)]
    (worst,) = [max(g.right for g in sheet.find("142.2/100 1.422")[-5:])]
    assert ratios == pytest.approx([worst], abs=0.05)


# ---------------------------------------------------------------- tables


@pytest.mark.parametrize(
    ("one", "other"), [("top 2.5 1.2", "bottom 15.5 2.37"), ("top 2.5 1.2 72 0.720", "bottom 15.5 2.37 142.2 1.422 NG")]
)
def test_numbers_of_a_column_have_their_points_under_one_another(sheet: Sheet, one: str, other: str) -> None:
    points = [[g.left for g in sheet.find(text) if g.text == "."] for text in (one, other)]
    if len(points[1]) > len(points[0]):
        # 72 has none: its last digit ends where the point of 142.2 begins
        whole = [g for g in sheet.find(one) if g.text == "2"]
        seventy_two = next(g for g in whole if g.left > points[0][1] + 8)
        assert seventy_two.right == pytest.approx(points[1][2], abs=0.1)
        del points[1][2]
    assert points[0] == pytest.approx(points[1], abs=0.1)


# ---------------------------------------------------------------- signs


def test_limits_of_a_sum_stand_centred_below_it(sheet: Sheet) -> None:
    (sign,) = [g for g in sheet.ink.glyphs if g.text == "∑"]
    below = [g for g in sheet.find("layer") if abs(g.left - sign.left) < 20 and g.size < 8] or [
        g for g in sheet.ink.glyphs if g.size < 8 and abs(g.left - sign.left) < 15 and 0 < sign.y - g.y < 12
    ]
    middle = (min(g.x0 for g in below) + max(g.x1 for g in below)) / 2
    assert middle == pytest.approx((sign.x0 + sign.x1) / 2, abs=0.5)
    assert max(g.y1 for g in below) < sign.y0


def test_a_power_is_raised_and_a_subscript_lowered(sheet: Sheet) -> None:
    row = sheet.row("gross area")
    base = next(g for g in row if g.text == "A")
    (script,) = [g for g in sheet.ink.glyphs if g.text == "g" and 0 < g.left - base.left < 12 and 0 < base.y - g.y < 6]
    # SubscriptShiftDown of the face is 210 thousandths (MATH table, read by fontTools)
    assert (base.y - script.y) / base.size == pytest.approx(0.210, abs=0.02)
    assert script.size < base.size


def test_the_rule_of_a_root_covers_what_it_holds(sheet: Sheet) -> None:
    inside = list(sheet.find("= S/b"))[1:]
    sign, _ = [g for g in sheet.ink.glyphs if g.text == "√"]
    rules = [
        ln for ln in sheet.ink.lines if ln.y0 == ln.y1 and abs(ln.x0 - sign.right) < 1.0 and 0 < ln.y0 - sign.y < 15
    ]
    assert len(rules) == 1
    assert rules[0].x0 <= inside[0].x0 and rules[0].x1 >= inside[-1].x1
    assert rules[0].y0 > max(g.y1 for g in inside) and sign.x1 <= inside[0].x0 + 0.5
