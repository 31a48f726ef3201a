"""The check summary: what several calculations of one member leave open between them, and what stops them all."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.commands.desk import Opened, open_project
from calcreport.publish import Package, report
from tests.plain import rows
from tests.small import HEAD

SECTION = """\
template: {name}
title: {title}
code: {{name: ACI 318, years: ['2019']}}
units: [us]
covers: [{covers}]
excludes: [{excludes}]
symbols: {{a: {{unit: in, says: a length}}}}
given: {{a: }}
lines:
  - {{require: 'a <= 9 in', says: too long, cite: geometry}}
  - {{check: {covers}, holds: 'a <= 4 in', cite: geometry}}
  - {{check: {covers} again, holds: 'a <= 8 in', cite: geometry}}
"""
#: a beam of two calculations, and another of one
BEAMS = """\
  - {{mark: B1, title: bending of the beam, template: bending, given: {{a: {bending}}}}}
  - {{mark: V1, title: shear of the beam, template: shear, {member}given: {{a: 3 in}}}}
  - {{mark: B2, title: another beam, template: bending, given: {{a: 1 in}}}}
"""


def package(folder: Path, calculations: str, more: str = "", status: str = "preliminary") -> Package:
    bending = SECTION.format(name="bending", title="Bending", covers="flexure", excludes="shear, torsion")
    shear = SECTION.format(name="shear", title="Shear", covers="shear", excludes="flexure, torsion")
    (folder / "bending.yaml").write_text(bending)
    (folder / "shear.yaml").write_text(shear)
    head = HEAD.replace("status: preliminary", f"status: {status}")
    (folder / "project.yaml").write_text(head + calculations + more)
    opened = open_project(str(folder / "project.yaml"))
    assert isinstance(opened, Opened)
    return report(opened.world, opened.source)


def left(found: Package) -> dict[str, tuple[str, ...]]:
    assert not found.problems and found.composed is not None, found.problems
    return dict(found.composed.summary.not_covered)


def printed(found: Package) -> list[str]:
    assert found.composed is not None
    return rows(next(part for part in found.composed.report.parts if part.mark == "SUMMARY").blocks)


def test_what_one_calculation_leaves_out_another_of_the_member_decides(tmp_path: Path) -> None:
    apart = left(package(tmp_path, BEAMS.format(bending="2 in", member="")))
    assert apart == {"shear": ("B1", "B2"), "torsion": ("B1", "V1", "B2"), "flexure": ("V1",)}
    together = left(package(tmp_path, BEAMS.format(bending="2 in", member="member: B1, ")))
    assert together == {"shear": ("B2",), "torsion": ("B1", "B2")}


@pytest.mark.parametrize(
    ("word", "torsion"),
    [("torsion", ()), ("B1 torsion", ("B2",)), ("B2 torsion", ("B1",)), ("V1 torsion", ("B1", "B2"))],
)
def test_the_engineers_word_is_on_the_member(tmp_path: Path, word: str, torsion: tuple[str, ...]) -> None:
    more = f"dispositions: [{{limit state: {word}, covered by: package 2}}]\n"
    found = left(package(tmp_path, BEAMS.format(bending="2 in", member="member: B1, "), more))
    # a word on one calculation of the member leaves what another of them leaves out
    assert found.get("torsion", ()) == torsion


def test_a_member_may_have_a_name_of_its_own(tmp_path: Path) -> None:
    calculations = BEAMS.format(bending="2 in", member="member: GB, ").replace("B1, title", "B1, member: GB, title")
    more = "dispositions: [{limit state: GB torsion, covered by: package 2}]\n"
    assert left(package(tmp_path, calculations, more)) == {"shear": ("B2",), "torsion": ("B2",)}
    final = package(tmp_path, calculations, more, "for permit").problems
    assert [(problem.slug, problem.found) for problem in final] == [("not-ready", "shear, torsion")]
    odd = package(tmp_path, BEAMS.format(bending="2 in", member="member: the beam, ")).problems
    assert [problem.slug for problem in odd] == ["bad-mark"]


def test_a_member_has_one_row(tmp_path: Path) -> None:
    told = printed(package(tmp_path, BEAMS.format(bending="2 in", member="member: B1, ")))
    start = told.index("Governing check of every member")
    # hand: shear 3/4 is above flexure 2/4; the other beam 1/4
    found = [row for row in told[start + 1 : start + 5] if "of the beam" in row or "another beam" in row]
    assert len(found) == 2 and "B1" in found[0] and "shear of the beam" in found[0] and "0.75" in found[0]
    assert "another beam" in found[1]


def test_checks_that_wait_for_one_reason_stand_in_one_row(tmp_path: Path) -> None:
    told = printed(package(tmp_path, BEAMS.format(bending="10 in", member="")))
    waiting = [row for row in told if "too long" in row]
    assert len(waiting) == 1 and "2 checks" in waiting[0]
