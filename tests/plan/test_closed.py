"""Closed forms of an unknown: what they say, when there is none, and what the finished sheet shows of them.

Values come from closed formulas of the trade in another form, or from the numbers put in by hand.
"""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from calcreport.calculate.model import Worked, WorkedUnknown
from calcreport.core import late
from calcreport.plan import closed
from tests.proof.prove import prove
from tests.small import number, work_small, write_small

TEXT = """\
symbols:
  b: {unit: in, says: width}
  d: {unit: in, says: effective depth}
  n: {unit: '1', says: modular ratio}
  A_s: {unit: in^2, says: area of tension steel}
  c: {unit: in, says: depth of the neutral axis}
given: {b: , d: , n: , A_s: }
lines:
  - {unknown: c, between: ['BOUND', 'd'], satisfies: 'EQUATION'}
  - {check: half the depth, holds: 'c <= d/2', cite: geometry}
"""
GIVEN = "{b: 12 in, d: 19.5 in, n: 8, A_s: 2.37 in^2}"
CRACKED = "b*c^2/2 = n*A_s*(d - c)"


def text(equation: str = CRACKED, bound: str = "0.1 in") -> str:
    return TEXT.replace("BOUND", bound).replace("EQUATION", equation)


def worked_unknown(worked: Worked) -> WorkedUnknown:
    (line,) = [line for line in worked.lines if isinstance(line, WorkedUnknown)]
    return line


def test_neutral_axis_of_a_cracked_section(tmp_path: Path) -> None:
    worked = work_small(tmp_path, text(), GIVEN)
    # k = √(2 ρn + (ρn)^2) − ρn and c = k d, the working-stress formula of the trade (from memory)
    rho_n = 8 * 2.37 / (12 * 19.5)
    assert number(worked, "c") == pytest.approx(19.5 * (math.sqrt(2 * rho_n + rho_n**2) - rho_n), rel=1e-14)
    found = worked_unknown(worked).closed
    assert found is not None
    assert found.line.arms[0].formula.span.text == "(-n*A_s + sqrt((n*A_s)^2 + 2*b*n*A_s*d))/b"


@pytest.mark.parametrize(
    ("equation", "forms"),
    [
        ("A_s/c = b", ("A_s/b",)),
        # a decimal stays as it was written
        ("0.85*b*c = 3.4*A_s", ("3.4*A_s/(0.85*b)",)),
        ("c^2 = 4*A_s", ("sqrt(4*A_s)", "-sqrt(4*A_s)")),
        ("0 = c^2 - 4*A_s", ("sqrt(4*A_s)", "-sqrt(4*A_s)")),
        # c² + d² = 5 c d; halves of 5 d would be broken, so twice the equation
        ("c/d + d/c = 5", ("(5*d + sqrt((5*d)^2 - 4*d^2))/2", "(5*d - sqrt((5*d)^2 - 4*d^2))/2")),
        # a half is a half: twice the equation has whole numbers
        ("0.5*c^2 = d*c - A_s", ("d + sqrt(d^2 - 2*A_s)", "d - sqrt(d^2 - 2*A_s)")),
        # what does not hold the unknown stands as it is
        ("c*max(b, d) = 3 in*d", ("3 in*d/max(b, d)",)),
        ("-c^2/b = c - d", ("(-b + sqrt(b^2 + 4*b*d))/2", "(-b - sqrt(b^2 + 4*b*d))/2")),
    ],
)
def test_closed_forms(tmp_path: Path, equation: str, forms: tuple[str, ...]) -> None:
    worked = work_small(tmp_path, text(equation), GIVEN)
    line = worked.plan.lines[0]
    assert isinstance(line, closed.PlannedUnknown)
    assert tuple(node.span.text for node in line.closed) == forms


@pytest.mark.parametrize(
    "equation",
    [
        "c^3 = A_s*(d - 2*c)",
        "sqrt(c*b) = A_s/d + d/3",
        "max(c, b) = d*c/(9 in)",
        "c^2.5 = b^2.5",
        # as many terms as the bound forbids
        f"c*({'+'.join(['b', 'd', '1 in', '2 in', '3 in', '4 in', '5 in'])})^7/(b^7*n) = d",
    ],
)
def test_no_closed_form_leaves_the_bracket(tmp_path: Path, equation: str) -> None:
    worked = work_small(tmp_path, text(equation), GIVEN)
    line = worked.plan.lines[0]
    assert isinstance(line, closed.PlannedUnknown) and line.closed == ()
    if worked.stop is None:
        assert worked_unknown(worked).closed is None


def test_bracket_and_formula_agree(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    by_formula = number(work_small(tmp_path, text(), GIVEN), "c")
    monkeypatch.setattr(closed, "MOST_TERMS", 0)
    worked = work_small(tmp_path, text(), GIVEN)
    assert worked_unknown(worked).closed is None
    assert number(worked, "c") == pytest.approx(by_formula, rel=1e-14)


def test_digits_lost_in_a_difference_send_the_root_to_the_bracket(tmp_path: Path) -> None:
    # x = −B + √(B² + x₀), B = 1e9 in.: sixteen digits less eighteen leave none
    worked = work_small(
        tmp_path, text("c^2 + 2*n*10^9*1 in*c = A_s"), GIVEN.replace("n: 8", "n: 1").replace("2.37", "1e9")
    )
    assert worked_unknown(worked).closed is None
    # c = A_s/(2e9 in.) but for c², which is 2e-10 of it: 0.5 − 0.5²/2e9
    assert number(worked, "c") == pytest.approx(0.5 - 0.125e-9, rel=1e-12)


def test_no_root_between_the_bounds_stops_as_before(tmp_path: Path) -> None:
    worked = work_small(tmp_path, text(bound="9 in"), GIVEN)
    assert worked.stop is not None and "do not cross" in worked.stop.words


def test_a_limit_met_by_the_formula_is_a_tie(tmp_path: Path) -> None:
    # c = √(4·9) = 6 = d/2 exactly, by the roots of squares
    worked = work_small(tmp_path, text("c^2 = 4*A_s"), "{b: 12 in, d: 12 in, n: 8, A_s: 9 in^2}")
    assert worked.checks[0].verdict == "OK"


def test_sympy_is_loaded_for_such_an_unknown_only(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    loaded: list[str] = []
    monkeypatch.setattr(closed, "load", lambda name: loaded.append(name) or late.load(name))
    lines = "lines: [{gives: c, formula: '2*d', cite: geometry}]"
    work_small(
        tmp_path,
        text().replace("d'], satisfies: 'b*c^2/2 = n*A_s*(d - c)'}", "d'], satisfies: 'c = d/3', lines: []}"),
        GIVEN,
    )
    assert loaded == ["sympy"]
    loaded.clear()
    work_small(tmp_path, TEXT.partition("lines:")[0] + lines + "\n", GIVEN)
    assert loaded == []


def test_the_finished_sheet_can_be_worked_again(tmp_path: Path) -> None:
    proof = prove("cracked", write_small(tmp_path, text(), GIVEN), tmp_path / "cracked.pdf", 100)
    assert proof.code == 0, proof.said
    assert not proof.account.findings and not proof.account.unread
    # the formula of c, both sides there, and the ratio
    assert proof.account.counts["substitutions"] >= 1
    assert proof.account.counts["ratios"] == proof.account.counts["equations"] == 1


def test_an_equation_with_zero_on_one_side_shows_two_numbers(tmp_path: Path) -> None:
    # b c²/2 + n A_s c = n A_s d: what is subtracted stands on the other side
    worked = work_small(tmp_path, text("b*c^2/2 + n*A_s*c - n*A_s*d = 0"), GIVEN)
    line = worked_unknown(worked)
    inch = 0.0254
    # 8(2.37)(19.5) = 369.72 in.³
    assert line.right / inch**3 == pytest.approx(369.72, rel=1e-12)
    assert line.left == pytest.approx(line.right, rel=1e-12)
