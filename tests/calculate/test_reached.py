"""What cases reach of a template: every kind of thing, told when missed and silent when reached."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.driver import lint_template
from calcreport.filesystem import Disk

HEAD = """\
template: trial
title: Trial
code: {name: OWN, years: ['2010', '2020']}
units: [us, si]
symbols:
  b: {unit: {us: in, si: mm}, says: width}
  r: {unit: '1', says: ratio}
  q: {unit: '1', says: number}
  x: {unit: '1', says: place}
  y: {unit: '1', says: height}
  z: {unit: '1', says: other}
given: {b: , q: }
lines:
"""


def missed(folder: Path, lines: str, *givens: float, width: float = 1, everywhere: bool = True) -> list[str]:
    """Return what cases with these values of q leave unreached; each is worked in all systems and editions, or in one."""
    (folder / "trial.yaml").write_text(HEAD + lines, encoding="utf-8")
    variants = [(system, year) for system in ("us", "si") for year in ("2010", "2020")][: 4 if everywhere else 1]
    cases = [
        f"- case: trial {number}\n  units: {system}\n  year: '{year}'\n"
        f"  given: {{b: {width} {'in' if system == 'us' else 'mm'}, q: {given}}}\n"
        # nothing is held: what is reached is looked at, not what comes out
        "  expect: {q: {value: 0, tol: 100, source: any}}\n"
        for number, given in enumerate(givens)
        for system, year in variants
    ]
    (folder / "trial.cases.yaml").write_text("".join(cases), encoding="utf-8")
    report = lint_template(Disk(folder, folder), "trial")
    assert all(problem.slug == "case-differs" for problem in report.problems), report.problems
    return [one.thing.says + (f" ({', '.join(one.variants)})" if one.variants else "") for one in report.unreached]


def test_arms_of_a_value(tmp_path: Path) -> None:
    lines = "  - {gives: r, cite: geometry, branches: [{when: 'q < 1', formula: '1'}, {when: 'q < 2', formula: '2'}, {otherwise: '3'}]}\n"
    assert missed(tmp_path, lines, 0) == ["r when q < 2", "r otherwise"]
    assert missed(tmp_path, lines, 0, 1, 2) == []


BLOCK = """\
  - branches:
      - when: 'q < 1'
        lines:
          - {gives: r, formula: '1', cite: geometry}
          - {check: inner, holds: 'r <= q', cite: geometry}
      - when: 'q < 2'
        lines: [{gives: r, formula: '2', cite: geometry}]
      - otherwise: [{require: 'q < 2', says: too many, cite: geometry}, {gives: r, formula: '2', cite: geometry}]
  - {check: outer, holds: 'q <= 1', cite: geometry}
"""


def test_only_the_outermost_of_a_branch_not_taken_is_told(tmp_path: Path) -> None:
    assert missed(tmp_path, BLOCK, 1) == ["branch when q < 1", "branch otherwise, after q < 2", "check outer NG"]


def test_both_outcomes_of_a_check(tmp_path: Path) -> None:
    assert missed(tmp_path, BLOCK, 0, 1.5) == [
        "check inner OK",
        "branch otherwise, after q < 2",
    ]


def test_a_stop_reaches_the_branch_it_stands_in_and_no_line_after_it(tmp_path: Path) -> None:
    found = missed(tmp_path, BLOCK, 0, 1.5, 3)
    assert found == ["check inner OK", "line r"]


def test_a_requirement_never_unmet(tmp_path: Path) -> None:
    lines = "  - {require: 'q > 1', says: too few, cite: geometry}\n  - {gives: r, formula: 'q', cite: geometry}\n"
    assert missed(tmp_path, lines, 2) == ["require q > 1 not met"]
    assert missed(tmp_path, lines, 1) == ["line r"]
    assert missed(tmp_path, lines, 1, 2) == []


TABLE = """\
  - rows: step
    cite: geometry
    columns: {x: , y: }
    list:
      - {x: 1, y: 10}
      - {x: 2, y: 20}
      - {x: 4, y: 80}
"""


@pytest.mark.parametrize(
    ("places", "expected"),
    [
        ((1.5,), ["above the last row", "below the first row", "first row", "last row"]),
        ((1, 4), ["above the last row", "below the first row"]),
        ((0.5, 4.5), ["first row", "last row"]),
        ((0, 1, 4, 5), []),
    ],
)
def test_ends_of_a_line_between_rows(tmp_path: Path, places: tuple[float, ...], expected: list[str]) -> None:
    lines = TABLE + "  - {gives: r, formula: 'linear(y over step where x = q)', cite: geometry}\n"
    found = missed(tmp_path, lines, *places)
    assert [words.removeprefix("r: ").removesuffix(" of step") for words in found if words != "line r"] == expected


@pytest.mark.parametrize(
    ("places", "expected"),
    [((2,), ["first row of step", "last row of step", "no row of step fits"]), ((0.5, 3, 9), [])],
)
def test_rows_picked(tmp_path: Path, places: tuple[float, ...], expected: list[str]) -> None:
    lines = TABLE + "  - {gives: r, formula: 'pick(y over step where x >= q)', cite: geometry}\n"
    found = missed(tmp_path, lines, *places)
    assert found == [f"r: {words}" for words in expected]


def test_a_pick_that_does_not_fit_takes_the_otherwise(tmp_path: Path) -> None:
    lines = TABLE + "  - {gives: r, formula: 'pick(y over step where x >= q otherwise 0)', cite: geometry}\n"
    assert missed(tmp_path, lines, 1, 4) == ["r: no row of step fits, otherwise"]
    assert missed(tmp_path, lines, 1, 4, 5) == []


def test_a_row_that_is_never_made(tmp_path: Path) -> None:
    lines = TABLE + "      - {name: more, when: 'q > 3', x: 5, y: 90}\n"
    assert missed(tmp_path, lines, 1) == ["row more of step when q > 3"]
    assert missed(tmp_path, lines, 4) == []


def test_what_differs_between_systems_and_editions_is_told_for_each(tmp_path: Path) -> None:
    lines = "  - {gives: r, formula: {'2010': 'q', '2020': '2*q'}, cite: geometry}\n"
    lines += "  - {check: width, holds: 'b <= by_units(2 in, 50 mm)', cite: geometry}\n"
    assert missed(tmp_path, lines, 1) == [
        "check width NG (us 2010, us 2020)",
        "check width NG (si 2010, si 2020)",
    ]
    assert missed(tmp_path, lines, 1, width=3, everywhere=False) == [
        "any line in si 2010",
        "any line in si 2020",
        "any line in us 2020",
        "check width OK",
    ]


def test_rows_of_an_each_and_lines_of_an_unknown(tmp_path: Path) -> None:
    lines = (
        TABLE
        + """\
  - each: step
    lines:
      - unknown: z
        between: ['0', '100']
        satisfies: 'r = y'
        lines:
          - {gives: r, cite: geometry, branches: [{when: 'z > 50', formula: '2*z - 50'}, {otherwise: 'z'}]}
      - {check: height, holds: 'z <= 60*q', cite: geometry}
"""
    )
    # by hand: the roots are 10, 20 and 65, of which 65 lies above 50 and above 60
    assert missed(tmp_path, lines, 1) == []
    # trials go beyond 50, the roots 10, 20 and 40 do not
    assert missed(tmp_path, lines.replace("y: 80", "y: 40"), 1) == ["r when z > 50", "check height NG"]
