"""What a template reads from the criteria of a project: once for all, and never beside it."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.calculate.model import GivenValue, WorkedProject
from calcreport.core.problems import Problem
from calcreport.core.quantity import Amount
from calcreport.driver import Result, work
from calcreport.filesystem import Disk, read_text
from calcreport.publish import report
from calcreport.report.model import GivenRow, Givens

LIBRARY = Path(__file__).parents[1] / "problems" / "library"
HEAD = """\
project: {title: Trial, number: T1, address: none}
office: {name: trial office}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: TRIAL, year: 2024, amendments: none}, concrete: DEMO-20, loads: LOADS-22}
revisions: [{number: 1, date: 2026-11-16, why: trial}]
"""
BEAM = "  - {mark: B1, title: Trial, template: demo/reads-criteria, given: {b: 12 in}}\n"
STATED = "criteria: {category: I, floor load: 0.05 ksf, use: office}\n"


def opened(folder: Path, text: str) -> Result:
    (folder / "project.yaml").write_text(HEAD + text, encoding="utf-8")
    source = read_text(folder, "project.yaml")
    assert not isinstance(source, str)
    return work(Disk(folder, LIBRARY), source)


def project(folder: Path, text: str) -> WorkedProject:
    result = opened(folder, text)
    assert not result.problems and result.worked is not None, result.problems
    return result.worked


def problems(folder: Path, text: str) -> list[tuple[str, str]]:
    def told(problem: Problem) -> tuple[str, str]:
        return problem.slug, problem.message

    return [told(problem) for problem in opened(folder, text).problems]


def test_a_quantity_and_a_word_with_their_origin(tmp_path: Path) -> None:
    worked = project(tmp_path, STATED + "calculations:\n" + BEAM).calculations[0]
    given = {v.given.name: v for v in worked.calculation.given if isinstance(v, GivenValue)}
    load = given["q"].value
    # 0.05 ksf is 50 psf, a pound-force over a square foot of 144 in.²: exactly as typed, in the criterion's own unit
    assert isinstance(load, Amount) and load.text == "0.05 ksf" and given["use"].value == "office"
    assert [given[name].origin.kind for name in ("b", "q", "use")] == ["project file", "criteria", "criteria"]
    # hand: 50 psf against 100 psf
    assert [check.ratio for check in worked.checks] == [0.5]


def test_the_sheet_says_so(tmp_path: Path) -> None:
    (tmp_path / "project.yaml").write_text(HEAD + STATED + "calculations:\n" + BEAM, encoding="utf-8")
    source = read_text(tmp_path, "project.yaml")
    assert not isinstance(source, str)
    package = report(Disk(tmp_path, LIBRARY), source)
    assert package.composed is not None
    part = next(part for part in package.composed.report.parts if part.mark == "B1")
    rows: list[GivenRow] = [row for block in part.blocks if isinstance(block, Givens) for row in block.rows]
    assert [row.source for row in rows] == [("project file",), ("criteria",), ("criteria",)]


def test_what_nobody_states_is_told_once_for_all(tmp_path: Path) -> None:
    two = "calculations:\n" + BEAM + BEAM.replace("B1", "B2")
    lacking = "criteria: {category: I, floor load: 50 psf}\n"
    assert problems(tmp_path, lacking + two) == [("missing-value", "the criteria do not state `use`")]
    # a key that was misspelled is told as that, and not as missing besides
    misspelled = problems(tmp_path, "criteria: {category: I, flor load: 50 psf, use: office}\n" + two)
    assert misspelled == [("unknown-key", "`criteria` has no key `flor load`")]
    assert [slug for slug, _ in problems(tmp_path, two)] == ["missing-key"]


@pytest.mark.parametrize(
    ("stated", "slug"),
    [("floor load: 50, use: office", "bare-number"), ("floor load: 50 kip, use: office", "unit-mismatch"),
     ("floor load: 0 psf, use: office", "out-of-range"), ("floor load: 50 psf, use: shop", "not-a-word"),
     ("floor load: none, use: office", "not-a-quantity")],
)  # fmt: skip
def test_what_stands_there_is_held_against_the_template(tmp_path: Path, stated: str, slug: str) -> None:
    text = f"criteria: {{category: I, {stated}}}\ncalculations:\n" + BEAM
    assert [one for one, _ in problems(tmp_path, text)] == [slug]


@pytest.mark.parametrize(
    "entry",
    ["given: {b: 12 in, q: 60 psf}", "given: {b: 12 in}, choose: [{q: 50 psf}, {q: 60 psf}]",
     "given: {}, members: [{mark: M1, b: 12 in, q: 60 psf}]", "given: {b: 12 in, q: {from: B2.q}}"],
)  # fmt: skip
def test_no_calculation_states_it_for_itself(tmp_path: Path, entry: str) -> None:
    text = STATED + f"calculations:\n  - {{mark: B1, title: Trial, template: demo/reads-criteria, {entry}}}\n"
    found = problems(tmp_path, text)
    assert {slug for slug, _ in found} == {"given-twice"}, found


def test_members_and_candidates_beside_it(tmp_path: Path) -> None:
    members = "given: {}, members: [{mark: M1, b: 12 in}, {mark: M2, b: 14 in}]"
    text = STATED + f"calculations:\n  - {{mark: G1, title: Trial, template: demo/reads-criteria, {members}}}\n"
    assert [len(one.checks) for one in project(tmp_path, text).calculations] == [2]
