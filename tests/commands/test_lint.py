"""`lint` of projects, templates and files that are neither; what `values` still shows beside problems."""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest

from tests.commands.desk import HEAD, LINES, PROJECT, TEMPLATE, make, run


def test_forty_mistakes_of_one_stage_are_told_in_one_run(tmp_path: Path) -> None:
    lines = "".join(f"  - {{gives: r, formula: 'b + z{i}', cite: geometry}}\n" for i in range(10))
    lines += "".join(f"  - {{check: c{i}, holds: 'b <= {i + 1}', cite: geometry}}\n" for i in range(15))
    lines += "".join(f"  - {{each: s{i}, lines: []}}\n" for i in range(15))
    make(tmp_path, template=TEMPLATE + lines)
    ran = run("lint", str(tmp_path / "trial.yaml"), "--json")
    problems = json.loads(ran.out)["problems"]
    slugs = [problem["slug"] for problem in problems]
    assert ran.code == 2
    # ten unknown symbols, of which nine give r again; fifteen bare numbers; fifteen unknown sets
    assert {slug: slugs.count(slug) for slug in set(slugs)} == {
        "unknown-name": 25,
        "given-twice": 9,
        "unit-mismatch": 15,
    }
    assert problems == sorted(problems, key=lambda p: (p["line"], p["column"]))


def test_forty_mistakes_of_reading(tmp_path: Path) -> None:
    lines = "".join(
        f"  - {{gives: r{i}, unit: '1', says: ratio, formula: 'b {i} +', cite: geometry}}\n" for i in range(20)
    )
    lines += "".join(f"  - {{give{i}: r}}\n" for i in range(20))
    make(tmp_path, template=TEMPLATE + lines)
    assert run("lint", str(tmp_path / "trial.yaml")).err.count("error[") == 40


def test_a_broken_calculation_does_not_hide_the_others(tmp_path: Path) -> None:
    second = "  - {mark: T2, title: Other, template: broken, given: {b: 3 in}}\n"
    third = "  - {mark: T3, title: Bare, template: trial, given: {b: 3}}\n"
    make(tmp_path, PROJECT + second + third)
    (tmp_path / "broken.yaml").write_text(TEMPLATE.replace("trial", "broken") + LINES.replace("b/3 in", "b/3 inn"))
    ran = run("values", str(tmp_path))
    assert ran.code == 2
    assert "T1  Trial" in ran.out and "T2" not in ran.out and "T3" not in ran.out
    assert ran.err.count("error[") == 2 and "broken.yaml:8" in ran.err and "`3` has no unit" in ran.err


def test_problems_name_files_as_they_were_typed(tmp_path: Path) -> None:
    make(tmp_path, PROJECT.replace("3 in", "3") + "  - include: level.yaml\n")
    (tmp_path / "level.yaml").write_text("calculations:\n" + PROJECT.split("calculations:\n")[1].replace("T1", "2"))
    ran = run("lint", str(tmp_path))
    assert f"{tmp_path}/project.yaml:10:58: error[bare-number]" in ran.err
    assert f"{tmp_path}/level.yaml:2:12: error[bad-mark]" in ran.err


def test_a_case_file_stands_for_its_template(tmp_path: Path) -> None:
    make(tmp_path)
    (tmp_path / "trial.cases.yaml").write_text(
        "- case: third\n  units: us\n  given: {b: 1 in}\n  expect:\n"
        "    r: {value: 0.3333, tol: 0.0001, source: 'hand: 1/3'}\n"
        "    ratio: {outcome: OK, source: 'hand: 0.33 is below 1'}\n"
    )
    ran = run("lint", str(tmp_path / "trial.cases.yaml"))
    assert ran.code == 0
    assert ran.out.split("\n")[0] == "trial: no problems in us; 1 case agrees"


def test_what_is_neither_project_nor_template(tmp_path: Path) -> None:
    (tmp_path / "level.yaml").write_text("calculations: []\n")
    ran = run("lint", str(tmp_path / "level.yaml"))
    assert ran.code == 2 and ran.err.count("error[") == 1 and "neither a project nor a template" in ran.err


def test_names_of_library_templates_and_none(tmp_path: Path) -> None:
    assert run("lint", "aci318/beta-1").code == 0
    ran = run("lint", "aci318/beta-9")
    assert ran.code == 2 and "error[no-file]" in ran.err
    ran = run("templates", "aci318/beta-9")
    assert ran.code == 2 and "did you mean aci318/beta-1" in ran.err


def test_a_template_that_begins_with_a_mistake_is_still_a_template(tmp_path: Path) -> None:
    make(tmp_path, HEAD, ("templat" + TEMPLATE.removeprefix("template")) + LINES)
    ran = run("lint", str(tmp_path / "trial.yaml"))
    assert ran.code == 2 and "a template has no key `templat`" in ran.err


CASE = """\
- case: third
  units: us
  given: {b: 1 in}
  expect:
    r: {value: 0.3333, tol: 0.0001, source: 'hand: 1/3'}
    ratio: {outcome: OK, source: 'hand: 0.33 is below 1'}
"""


def test_what_no_case_reaches_is_told_and_changes_the_exit_code_only_when_asked(tmp_path: Path) -> None:
    make(tmp_path)
    file = str(tmp_path / "trial.yaml")
    (tmp_path / "trial.cases.yaml").write_text(CASE)
    ran = run("lint", file)
    assert ran.code == 0
    assert ran.out.split("\n")[1:3] == ["no case reaches this:", f"  {file}:9  check ratio NG"]
    assert run("lint", file, "--strict").code == 1
    found = json.loads(run("lint", file, "--json").out)
    assert found["cases"] == 1 and found["problems"] == []
    assert found["unreached"] == [
        {"file": file, "line": 9, "column": 5, "kind": "check", "says": "check ratio NG", "in": [], "because": ""}
    ]
    (tmp_path / "trial.cases.yaml").write_text(CASE + CASE.replace("third", "wide").replace("1 in", "4 in").replace(
        "0.3333", "1.3333").replace("1/3", "4/3").replace("OK", "NG").replace("0.33 is below", "1.33 is above"))  # fmt: skip
    ran = run("lint", file, "--strict")
    assert ran.code == 0 and ran.out == "trial: no problems in us; 2 cases agree\n"


def test_a_reason_stands_for_a_case(tmp_path: Path) -> None:
    make(tmp_path)
    (tmp_path / "trial.cases.yaml").write_text(CASE + "- {no case: check ratio NG, because: it is never wide}\n")
    ran = run("lint", str(tmp_path / "trial.yaml"), "--strict")
    assert ran.code == 0
    assert ran.out.split("\n")[1:3] == [
        "no case reaches this, for the reason given:",
        f"  {tmp_path}/trial.yaml:9  check ratio NG: it is never wide",
    ]


def test_a_template_without_cases(tmp_path: Path) -> None:
    make(tmp_path)
    file = str(tmp_path / "trial.yaml")
    ran = run("lint", file)
    assert ran.code == 0 and run("lint", file, "--strict").code == 1
    assert ran.out == (
        "trial: no problems in us; no cases\n"
        "no case reaches anything: there is no trial.cases.yaml beside the template\n"
    )


#: templates of the library and of the samples
OURS = sorted(
    path
    for folder in ("templates", "samples")
    for path in (Path(__file__).parents[2] / folder).rglob("*.yaml")
    if re.search("^template:", path.read_text(encoding="utf-8"), re.MULTILINE)
)


@pytest.mark.parametrize("path", OURS, ids=[path.stem for path in OURS])
def test_every_rule_of_our_templates_is_reached_or_says_why_not(path: Path) -> None:
    ran = run("lint", str(path), "--strict")
    assert ran.code == 0, ran.out + ran.err


def test_our_templates_are_found() -> None:
    assert {"beam-seat", "beta-1", "phi-flexure", "phi-tied"} <= {path.stem for path in OURS}
