"""An unknown between bounds: roots known in closed form, and every way to have none."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from calcreport.core.late import load
from tests.small import number, work_or_problems, work_small

TEXT = """\
symbols:
  a: {{unit: in, says: a length}}
  x: {{unit: in, says: the length sought}}
  y: {{unit: in^2, says: an area that depends on it}}
given: {{a: }}
lines:
  - {{unknown: x, between: {between}, satisfies: '{equation}', lines: [{{gives: y, formula: '{y}', cite: geometry}}]}}
  - {{check: found, holds: 'y <= 4*a^2', cite: geometry}}
"""


def text(between: str = "['0 in', '9*a']", equation: str = "y = 2*a^2", y: str = "x^2") -> str:
    return TEXT.format(between=between, equation=equation, y=y)


def test_root_and_the_lines_at_it(tmp_path: Path) -> None:
    worked = work_small(tmp_path, text(), "{a: 3 in}")
    assert number(worked, "x") == pytest.approx(3 * math.sqrt(2), rel=1e-14)  # x^2 = 2*9
    assert number(worked, "y") == pytest.approx(18, rel=1e-14)
    assert worked.checks[0].ratio == pytest.approx(0.5)  # 18/36


def test_roots_of_a_cubic_agree_with_the_algebra_of_sympy(tmp_path: Path) -> None:
    sympy = load("sympy")
    x = sympy.Symbol("x", real=True)
    (wanted,) = [r for r in sympy.Poly(x**3 - 3 * x**2 + 1, x).nroots(30) if 1 < r < 3]
    worked = work_small(
        tmp_path,
        text("['1*a', '3*a']", "y*x/a^3 = 3*y/a^2 - 1", "x^2"),
        "{a: 1 in}",
    )
    assert number(worked, "x") == pytest.approx(float(wanted), rel=1e-14)


@pytest.mark.parametrize(
    ("between", "equation", "words"),
    [
        ("['2*a', '9*a']", "y = 2*a^2", "do not cross"),  # x^2 is above 2 a^2 on all of it
        ("['0.5*a', '2.5*a']", "a^3/(x - a) = y*0", "jump"),  # a pole at x = a, no root
        ("['0 in', '9*a']", "a^3/(x - x) = y", "division by zero"),
    ],
)
def test_where_there_is_no_root_the_calculation_stops(tmp_path: Path, between: str, equation: str, words: str) -> None:
    worked = work_small(tmp_path, text(between, equation), "{a: 1 in}")
    assert worked.stop is not None and words in worked.stop.words
    assert worked.checks[0].verdict == "not evaluated"


def test_a_limit_met_at_the_root_is_ok(tmp_path: Path) -> None:
    # x = 1.5 in exactly; the check compares it with three halves of an inch
    lines = text(equation="y = 2.25*a^2").replace("'y <= 4*a^2'", "'x <= 1.5*a'")
    assert work_small(tmp_path, lines, "{a: 1 in}").checks[0].verdict == "OK"


def test_a_check_inside_is_a_problem(tmp_path: Path) -> None:
    lines = text().replace("cite: geometry}]", "cite: geometry}, {check: in, holds: 'x > a', cite: geometry}]")
    _, problems = work_or_problems(tmp_path, lines, "{a: 1 in}")
    assert [problem.slug for problem in problems] == ["not-in-unknown"]
