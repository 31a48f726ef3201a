"""Sums over the rows that fit, a set made of mappings beside numbers, strength told at places: text by hand."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.constructs.finished import Sheet, finish

TEMPLATE = """\
symbols:
  A: {unit: in^2, says: steel}
  A_in: {unit: in^2, says: steel that reaches x}
  M: {unit: kip*ft, says: moment}
  M_n: {unit: kip*ft, says: strength}
  on: {unit: '1', says: the group}
  right: {unit: '1', says: side}
  x: {unit: ft, says: place}
  x_c: {unit: ft, says: end}
  x_e: {unit: ft, says: end}
given:
  x: {range: '>= 0'}
  group: {rows: {A: , x_e: }, least: 1, says: groups}
lines:
  - {gives: A_in, formula: 'sum(A over group where x_e >= x)', cite: geometry}
  - rows: end
    cite: geometry
    columns: {on: {over: group, else: 0}, right: , x_c: }
    list:
      - {name: '{g} left', for: {g: '*'}, on: {g: 1}, right: '-1', x_c: '0'}
      - {name: '{g} right', for: {g: '*'}, on: {g: 1}, right: '1', x_c: '2*x'}
"""
ROWS = "group: [{name: a, A: 1 in^2, x_e: 4 ft}, {name: b, A: 2 in^2, x_e: 6 ft}, {name: c, A: 3 in^2, x_e: 8 ft}]"
#: groups b and c reach 5 ft: 2 + 3
FEW = "steel that reaches x Ain = ∑ group: xe≥x A = 2 + 3 = 5 in.² geometry 1 2"
#: seven groups of 1 in^2: no one row's figures stand for all
MANY = "steel that reaches x Ain = ∑ group: xe≥x A = 7 in.² geometry 1 2"


@pytest.fixture(scope="module")
def few(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    return finish(tmp_path_factory.mktemp("few"), TEMPLATE, "{x: 5 ft, " + ROWS + "}")


def test_a_sum_of_the_rows_that_fit_is_written_out(few: Sheet) -> None:
    assert few.lines[3] == FEW


def test_a_set_of_mappings_and_formulas_has_its_table_and_its_formulas(few: Sheet) -> None:
    # the table of all rows, then each formula with its numbers: 2(5) = 10
    words = few.lines[4]
    assert "end on (factors) right xc ft" in words
    assert "a left 1 a −1 0" in words
    assert "b right 1 b 1 10" in words
    assert words.count("xc = 2 x = 2 (5) = 10 ft") == 3


def test_a_long_sum_is_told_by_its_symbols(tmp_path: Path) -> None:
    rows = ", ".join(f"{{name: g{n}, A: 1 in^2, x_e: 9 ft}}" for n in range(7))
    assert finish(tmp_path, TEMPLATE, f"{{x: 5 ft, group: [{rows}]}}").lines[3] == MANY


PLACES = """\
symbols:
  x: {unit: ft, says: place}
  M: {unit: kip*ft, says: moment}
  M_n: {unit: kip*ft, says: strength}
given: {station: {rows: {x: , M: , M_n: }, least: 2, says: stations}}
lines:
  - {figure: moment strength along span, with: {stations: station, x: x, demand: M, pieces: station, from: x, to: x, strength: M_n}}
"""


def test_strength_told_at_places_is_labelled_once_and_ticked_at_the_ends(tmp_path: Path) -> None:
    rows = "[{x: 0 ft, M: 0 kip*ft, M_n: 90 kip*ft}, {x: 5 ft, M: 50 kip*ft, M_n: 95 kip*ft}, {x: 10 ft, M: 0 kip*ft, M_n: 90 kip*ft}]"
    sheet = finish(tmp_path, PLACES, f"{{station: {rows}}}")
    words = " ".join(sheet.lines.values())
    assert words.count("Mn = 95 kip·ft") == 1
    assert "Mn = 90" not in words
    assert words.endswith("0 10 ft")  # both ends, the unit once
