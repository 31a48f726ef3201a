"""Checks of each kind, arms, stops and rows; every expected value is a hand sum written beside it."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.small import number, verdicts, work_small

SYMBOLS = """\
symbols:
  a: {unit: in, says: a length}
  b: {unit: in, says: a length}
  c: {unit: in, says: a length}
  n: {unit: '1', says: a number}
  kind: {one of: [round, square], says: shape}
given: {a: , b: }
"""


def checks(folder: Path, holds: str, a: str, b: str) -> tuple[str, float | None, str]:
    worked = work_small(
        folder, SYMBOLS + f"lines:\n  - {{check: it, holds: '{holds}', cite: statics}}\n", f"{{a: {a}, b: {b}}}"
    )
    (check,) = worked.checks
    return check.verdict, check.ratio, check.kind


@pytest.mark.parametrize(
    ("holds", "a", "b", "expected"),
    [
        ("a <= b", "3 in", "4 in", ("OK", 0.75, "demand / capacity")),  # 3/4
        ("a <= b", "5 in", "4 in", ("NG", 1.25, "demand / capacity")),  # 5/4
        ("a >= b", "8 in", "4 in", ("OK", 0.5, "required / provided")),  # 4/8
        ("a <= b", "-3 in", "4 in", ("OK", 0.0, "demand / capacity")),  # demand not above zero
        ("a <= b", "3 in", "0 in", ("NG", None, "demand / capacity")),  # no capacity: no division
        ("a <= b", "3 in", "-4 in", ("NG", None, "demand / capacity")),
        ("a = b", "3 in", "3 in", ("OK", None, "condition")),
        ("a <= b or a <= 2*b", "3 in", "2 in", ("OK", 0.75, "demand / capacity")),  # the second route: 3/4
        ("a <= b and a <= 2*b", "3 in", "4 in", ("OK", 0.75, "demand / capacity")),  # the harder of the two
        ("a <= b and a <= 2*b", "6 in", "4 in", ("NG", 1.5, "demand / capacity")),
    ],
)
def test_kinds_of_check(tmp_path: Path, holds: str, a: str, b: str, expected: tuple[str, float | None, str]) -> None:
    verdict, ratio, kind = checks(tmp_path, holds, a, b)
    assert (verdict, kind) == (expected[0], expected[2])
    assert ratio == (None if expected[1] is None else pytest.approx(expected[1], rel=1e-12))


def test_limit_exactly_met_in_mixed_units_is_ok(tmp_path: Path) -> None:
    # a third of 1.1 ft is 4.4 in: 13.2/3; in binary the two differ in the last place
    assert checks(tmp_path, "b <= a/3", "1.1 ft", "4.4 in")[0] == "OK"
    assert checks(tmp_path, "b < a/3", "1.1 ft", "4.4 in")[0] == "NG"
    assert checks(tmp_path, "b <= a/3", "1.1 ft", "4.4000044 in")[0] == "NG"  # one part in a million beyond


def test_the_first_arm_that_holds_is_taken(tmp_path: Path) -> None:
    lines = """\
lines:
  - {gives: c, cite: geometry, branches: [{when: 'a < b', formula: 'a'}, {when: 'a < 2*b', formula: '2*b'}, {otherwise: '3*b'}]}
"""
    assert number(work_small(tmp_path, SYMBOLS + lines, "{a: 1 in, b: 2 in}"), "c") == pytest.approx(1)
    assert number(work_small(tmp_path, SYMBOLS + lines, "{a: 3 in, b: 2 in}"), "c") == pytest.approx(4)
    assert number(work_small(tmp_path, SYMBOLS + lines, "{a: 9 in, b: 2 in}"), "c") == pytest.approx(6)


def test_a_check_of_the_arm_not_taken_is_not_applicable(tmp_path: Path) -> None:
    lines = """\
lines:
  - branches:
      - {when: 'a < b', lines: [{check: small, holds: 'a <= 1 in', cite: statics}]}
      - {otherwise: [{check: large, holds: 'a <= 9 in', cite: statics}]}
"""
    found = verdicts(work_small(tmp_path, SYMBOLS + lines, "{a: 3 in, b: 2 in}"))
    assert found["small"] == ("not applicable", None)
    assert found["large"] == ("OK", pytest.approx(1 / 3))


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("{require: 'a <= b', says: too long, cite: statics}", "requirement not met: too long"),
        ("{gives: n, formula: 'a/(b - b)', cite: geometry}", "division by zero"),
        ("{gives: c, formula: 'sqrt((b - a)*a)', cite: geometry}", "root of a negative value"),
        ("{gives: n, formula: 'exp(900*a/b)', cite: geometry}", "beyond all bounds"),
        ("{gives: n, formula: 'ln((b - a)/a)', cite: geometry}", "logarithm"),
    ],
)
def test_a_stop_leaves_later_checks_unevaluated(tmp_path: Path, line: str, words: str) -> None:
    lines = f"lines:\n  - {line}\n  - {{check: later, holds: 'a <= b', cite: statics}}\n"
    worked = work_small(tmp_path, SYMBOLS + lines, "{a: 3 in, b: 2 in}")
    assert worked.stop is not None and words in worked.stop.words
    assert verdicts(worked)["later"][0] == "not evaluated"
    assert worked.verdict == "not evaluated"


def test_rows_sums_and_extremes(tmp_path: Path) -> None:
    text = """\
symbols:
  x: {unit: in, says: a length}
  y: {unit: in, says: twice the length}
  s: {unit: in, says: sum}
  m: {unit: in, says: greatest}
  p: {unit: in, says: y where x is greatest}
given: {row: {rows: {x: }}}
lines:
  - {each: row, table: [y], lines: [{gives: y, formula: '2*x', cite: geometry}]}
  - {gives: s, formula: 'sum(y over row where x > 1 in)', cite: geometry}
  - {gives: m, formula: 'max(x over row)', cite: geometry}
  - {gives: p, formula: 'pick(y over row where x = m)', cite: geometry}
"""
    worked = work_small(tmp_path, text, "{row: [{x: 1 in}, {x: 3 in}, {x: 2 in}]}")
    assert number(worked, "s") == pytest.approx(10)  # 2*3 + 2*2; the row of 1 in does not count
    assert number(worked, "m") == pytest.approx(3)
    assert number(worked, "p") == pytest.approx(6)  # 2*3


def test_rounding_to_a_practical_step_keeps_a_multiple(tmp_path: Path) -> None:
    lines = "lines:\n  - {gives: c, formula: 'rounddown(a + b, 0.1 in)', cite: geometry}\n"
    # 0.1 + 0.2 is 0.30000000000000004 in binary and three tenths on paper
    assert number(work_small(tmp_path, SYMBOLS + lines, "{a: 0.1 in, b: 0.2 in}"), "c") == pytest.approx(0.3, rel=1e-12)


def test_a_stop_in_a_row_leaves_the_checks_of_later_rows_not_evaluated(tmp_path: Path) -> None:
    template = """\
symbols:
  x: {unit: in, says: a length}
given: {bar: {rows: {x: }}}
lines:
  - each: bar
    lines:
      - {require: 'x > 1 in', says: too short, cite: geometry}
      - {check: long enough, holds: 'x >= 2 in', cite: geometry}
"""
    worked = work_small(tmp_path, template, "{bar: [{name: p, x: 3 in}, {name: q, x: 1 in}, {name: r, x: 4 in}]}")
    assert worked.stop is not None and worked.stop.told == "bar q: requirement not met: too short"
    assert [(check.open, check.verdict) for check in worked.checks] == [
        (((0, 0),), "OK"), (((0, 1),), "not evaluated"), (((0, 2),), "not evaluated"),
    ]  # fmt: skip
    assert worked.verdict == "not evaluated"
    # the row worked before it stands on the sheet
    assert [type(line).__name__ for line in worked.lines] == ["WorkedEach"]


@pytest.mark.parametrize(
    ("place", "expected"),
    [
        ("1 in", 30.0),  # halfway from 40 to 20
        ("2 in", 20.0),  # at the step the row that stands first
        ("3 in", -15.0),  # halfway from -10 to -20
        ("5 in", 5.0),  # halfway from -20 to 30: the first of two at 6
        ("7 in", 0.0),  # halfway from 10 to -10: the last of two at 6
    ],
)
def test_between_rows_a_step_holds_on_its_own_side(tmp_path: Path, place: str, expected: float) -> None:
    lines = """\
lines:
  - rows: station
    cite: geometry
    columns: {b_i: , c: }
    list:
      - {b_i: '0 in', c: '40 in'}
      - {b_i: '2 in', c: '20 in'}
      - {b_i: '2 in', c: '-10 in'}
      - {b_i: '4 in', c: '-20 in'}
      - {b_i: '6 in', c: '30 in'}
      - {b_i: '6 in', c: '10 in'}
      - {b_i: '8 in', c: '-10 in'}
  - {gives: d, formula: 'linear(c over station where b_i = a)', cite: geometry}
"""
    symbols = SYMBOLS.replace("symbols:\n", "symbols:\n  b_i: {unit: in, says: place}\n  d: {unit: in, says: there}\n")
    worked = work_small(tmp_path, symbols + lines, f"{{a: {place}, b: 1 in}}")
    assert number(worked, "d") == pytest.approx(expected, rel=1e-12, abs=1e-12)
