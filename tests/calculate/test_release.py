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


def test_an_open_assumption_stops_it(tmp_path: Path) -> None:
    assert slugs(tmp_path, "1 in", more="assumptions: [{says: dry, to be verified: yes, by: owner}]\n") == ["not-ready"]
    assert slugs(tmp_path, "1 in", more="assumptions: [{says: dry, to be verified: no}]\n") == []
