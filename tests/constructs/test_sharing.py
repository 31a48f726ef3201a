"""What shares a row or is left out of a table: values handed on, forms of one formula, headings, rows that do not govern.

Expected text by hand: 3 x 5 = 15, 15 / 20 = 0.75, and so on, beside the rows.
"""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from calcreport.__main__ import main
from tests.constructs.finished import Sheet, finish

HANDED = """\
symbols:
  b: {unit: in, says: width}
  h: {unit: in, says: depth}
  b_0: {unit: in, says: width handed on}
  k: {unit: '1', says: factor}
  h_0: {unit: in, says: depth handed on}
  phi: {unit: '1', says: reduction}
  A: {unit: in^2, says: area}
  A_2: {unit: in^2, says: a part of the area}
parts:
  outer: {title: Outer part, lines: [{part: inner}]}
  inner:
    title: Inner part
    lines:
      - branches:
          - {when: 'b <= h', lines: [{heading: Upright}, {gives: A, formula: 'b_0*h_0', cite: geometry}]}
          - {otherwise: [{gives: A, formula: '2*b_0*h_0', cite: geometry}]}
given:
  b:
  h:
lines:
  - {gives: b_0, formula: 'b', cite: geometry}
  - {gives: k, formula: '1', cite: geometry}
  - {gives: h_0, formula: 'h', cite: geometry}
  - {gives: phi, formula: '0.9', cite: '5.1'}
  - {part: outer}
  - {gives: A_2, formula: 'A + k*b_0*h_0 + k*b_0*h_0 + k*b_0*h_0', cite: geometry}
"""

ROWS = """\
symbols:
  x: {unit: ft, says: place}
  M: {unit: kip*ft, says: moment}
  N: {unit: kip*ft, says: other moment}
  r: {unit: kip*ft, says: strength}
  sign: {unit: '1', says: sign}
given:
  r: {range: '> 0'}
  station: {rows: {x: , M: , N: }, least: 1, says: stations}
lines:
  - each: station
    lines:
      - {gives: sign, cite: geometry, branches: [{when: 'x <= 2 ft', formula: '1'}, {otherwise: '2'}]}
  - each: station
    show: governing
    table: [x, M, N]
    lines:
      - {check: bending, holds: 'M <= r', cite: '5.1'}
      - {check: bending back, holds: 'N <= r', cite: '5.1'}
"""
#: moments of five stations against 20: ratios 0.2 0.6 0.9 0.5 0.1, and 0 0 0 0.25 0.3 back
STATIONS = [(1, 4, 0), (2, 12, 0), (3, 18, 0), (4, 10, 5), (5, 2, 6)]


def _given(stations: list[tuple[int, int, int]]) -> str:
    rows = (f"{{name: s{x}, x: {x} ft, M: {m} kip*ft, N: {n} kip*ft}}" for x, m, n in stations)
    return f"{{r: 20 kip*ft, station: [{', '.join(rows)}]}}"


@pytest.fixture(scope="module")
def handed(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    return finish(tmp_path_factory.mktemp("handed"), HANDED, "{b: 12 in, h: 20 in}")


@pytest.fixture(scope="module")
def rows(tmp_path_factory: pytest.TempPathFactory) -> tuple[Sheet, Path]:
    folder = tmp_path_factory.mktemp("rows")
    return finish(folder, ROWS, _given(STATIONS)), folder


def test_values_handed_on_share_a_line_and_its_number(handed: Sheet) -> None:
    assert (
        handed.lines[3] == "width handed on b0 = b = 12 in. factor k = 1 depth handed on h0 = h = 20 in. geometry 1 2"
    )


def test_a_value_of_another_source_has_its_own_line(handed: Sheet) -> None:
    assert handed.lines[4].startswith("reduction φ = 0.9 5.1")


def test_headings_and_their_condition_share_a_row(handed: Sheet) -> None:
    # 12 <= 20 chose the arm, whose own heading begins a row
    row = "".join(glyph.text for glyph in handed.row("Outer part")).replace(" ", "")
    assert row == "OuterpartInnerpartSinceb=12in.≤h=20in.:"


def test_the_first_member_of_a_long_chain_stands_beside_the_words(handed: Sheet) -> None:
    # 240 + 3(240) = 960; words, symbol and formula in one row, numbers and result in the next
    first = "".join(glyph.text for glyph in handed.row("a part of the area")).replace(" ", "")
    assert first.startswith("6apartoftheareaA=A+kbh") and "240" not in first
    assert handed.row("240+1(12)(20)") == handed.row("=960")


def test_forms_of_one_formula_stand_behind_one_another(rows: tuple[Sheet, Path]) -> None:
    sheet, _ = rows
    assert sheet.lines[3] == "sign where x ≤ 2 ft sign = 1 otherwise sign = 2 geometry 2"
    assert {glyph.text for glyph in sheet.row("sign where")} >= set("otherwise")


def test_only_rows_that_tell_what_governs_are_printed(rows: tuple[Sheet, Path]) -> None:
    # bending governs at 3 ft with 18/20, bending back at 5 ft with 6/20
    sheet, _ = rows
    assert sheet.lines[5].startswith("CHECK bending M/r = 18/20 0.900 OK 5.1 1 2")
    assert "s3 3 18 0 0.900 0.000" in sheet.lines[7]
    assert "s5 5 2 6 0.100 0.300" in sheet.lines[7]
    assert all(name not in sheet.lines[7] for name in ("s1", "s2", "s4"))
    assert "3 other rows of station have no larger ratio of any check." in sheet.lines[7]


def test_the_values_file_keeps_all_rows(rows: tuple[Sheet, Path], capsys: pytest.CaptureFixture[str]) -> None:
    _, folder = rows
    capsys.readouterr()
    assert main(["values", str(folder), "--json"]) == 0
    checks = json.loads(capsys.readouterr().out)["calculations"]["T1"]["checks"]
    ratios = [check["ratio"] for check in checks if check["name"] == "bending"]
    assert ratios == pytest.approx([0.2, 0.6, 0.9, 0.5, 0.1])


def test_a_row_that_is_ng_is_always_printed(tmp_path: Path) -> None:
    # two stations over 20: 30/20 governs, 22/20 is NG beside it
    sheet = finish(tmp_path, ROWS, _given([(1, 22, 0), (2, 30, 0), (3, 18, 0)]))
    assert sheet.code == 1
    words = " ".join(sheet.lines.values())
    assert "s1 1 22 0 1.100 NG" in words
    assert "One other row of station has no larger ratio of any check." in words


def test_where_one_row_governs_all_there_is_no_table(tmp_path: Path) -> None:
    sheet = finish(tmp_path, ROWS, _given([(1, 4, 2), (2, 12, 3), (3, 18, 4)]))
    words = sheet.lines[max(sheet.lines)]
    assert "2 other rows of station have no larger ratio of any check." in words
    assert "station x ft" not in words
