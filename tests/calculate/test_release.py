"""What a final status does not let pass, and what the engineer's word settles."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.commands.desk import Opened, open_project
from calcreport.publish import report
from tests.small import write_small

TEMPLATE = """\
symbols: {a: {unit: in, says: a length}}
given: {a: }
lines: [{check: short, holds: 'a <= 2 in', cite: geometry}]
"""


def slugs(folder: Path, a: str, *, status: str = "for permit", more: str = "", excludes: str = "[]") -> list[str]:
    path = write_small(folder, TEMPLATE, f"{{a: {a}}}")
    path.write_text(path.read_text().replace("status: preliminary", f"status: {status}") + more)
    template = folder / "small.yaml"
    template.write_text(template.read_text().replace("excludes: []", f"excludes: {excludes}"))
    opened = open_project(str(path))
    assert isinstance(opened, Opened)
    return [problem.slug for problem in report(opened.world, opened.source).problems]


@pytest.mark.parametrize("status", ["for permit", "issued for construction"])
def test_a_failing_check_stops_a_final_status(tmp_path: Path, status: str) -> None:
    assert slugs(tmp_path, "3 in", status=status) == ["not-ready"]
    assert slugs(tmp_path, "1 in", status=status) == []


def test_an_earlier_status_lets_it_pass(tmp_path: Path) -> None:
    assert slugs(tmp_path, "3 in", status="for review") == []


def test_the_engineers_word_settles_it(tmp_path: Path) -> None:
    assert slugs(tmp_path, "3 in", more="dispositions: [{check: T1.short, says: by judgement}]\n") == []


def test_an_uncovered_limit_state_stops_it(tmp_path: Path) -> None:
    assert slugs(tmp_path, "1 in", excludes="[shear]") == ["not-ready"]
    word = "dispositions: [{limit state: T1 shear, covered by: package 2}]\n"
    assert slugs(tmp_path, "1 in", excludes="[shear]", more=word) == []


def test_a_caution_leaves_a_limit_state_out_where_it_is_reached(tmp_path: Path) -> None:
    template = """\
symbols: {a: {unit: in, says: a length}}
given: {a: }
lines:
  - branches:
      - {when: 'a > 1 in', lines: [{caution: Longer than an inch., leaves out: [creep, sway]}]}
      - otherwise: [{note: Short.}]
  - {check: short, holds: 'a <= 2 in', cite: geometry}
"""

    def found(a: str, more: str = "", status: str = "for permit") -> tuple[list[str], tuple[tuple[str, ...], ...]]:
        path = write_small(tmp_path, template, f"{{a: {a}}}")
        path.write_text(path.read_text().replace("status: preliminary", f"status: {status}") + more)
        opened = open_project(str(path))
        assert isinstance(opened, Opened)
        package = report(opened.world, opened.source)
        left = package.composed.summary.not_covered if package.composed else ()
        return [problem.found or problem.slug for problem in package.problems], left

    assert found("2 in", status="for review") == ([], (("creep", ("T1",)), ("sway", ("T1",))))
    assert found("2 in") == (["creep, sway"], ())
    word = "dispositions: [{limit state: creep, covered by: package 2}]\n"
    assert found("2 in", word) == (["sway"], ())
    # nothing is left out where the caution is not reached; a word on it stays a word on something that is there
    assert found("1 in", word, "for review") == ([], ())
    assert found("1 in", "dispositions: [{limit state: fire, covered by: none}]\n", "for review")[0] == ["fire"]


def test_an_open_assumption_stops_it(tmp_path: Path) -> None:
    assert slugs(tmp_path, "1 in", more="assumptions: [{says: dry, to be verified: yes, by: owner}]\n") == ["not-ready"]
    assert slugs(tmp_path, "1 in", more="assumptions: [{says: dry, to be verified: no}]\n") == []


def test_a_calculation_that_stopped_without_a_check_stops_it_too(tmp_path: Path) -> None:
    template = """\
symbols: {a: {unit: in, says: a length}, c: {unit: in, says: a length}}
given: {a: }
lines:
  - {require: 'a <= 2 in', says: too long, cite: geometry}
  - {gives: c, formula: '2*a', cite: geometry}
"""

    def found(a: str, status: str) -> tuple[list[str], int]:
        path = write_small(tmp_path, template, f"{{a: {a}}}")
        path.write_text(path.read_text().replace("status: preliminary", f"status: {status}"))
        opened = open_project(str(path))
        assert isinstance(opened, Opened)
        package = report(opened.world, opened.source)
        return [p.slug for p in package.problems], package.composed.summary.not_evaluated if package.composed else -1

    assert found("3 in", "for permit") == (["not-ready"], -1)
    assert found("3 in", "for review") == ([], 1)
    assert found("1 in", "for permit") == ([], 0)
