"""A small template and its given values, worked: what tests of one construct need."""

from __future__ import annotations

from pathlib import Path

from calcreport.calculate.model import Worked
from calcreport.commands.desk import Opened, open_project
from calcreport.core.problems import Problem
from calcreport.driver import work

HEAD = """\
project: {title: Small, number: T-1, address: none}
office: {name: (office)}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: IBC, year: 2024, amendments: none}, concrete: ACI 318-19, loads: ASCE/SEI 7-22}
criteria: {risk category: II, seismic design category: A}
revisions: [{number: 1, date: 2026-11-16, why: first}]
calculations:
"""
TEMPLATE_HEAD = """\
template: small
title: Small
code: {name: ACI 318, years: ['2019']}
units: [us]
covers: []
excludes: []
"""


def write_small(folder: Path, template: str, given: str) -> Path:
    """Write a project with one calculation `T1` made by `template` (from `symbols:` on) with `given` (flow mapping)."""
    (folder / "small.yaml").write_text(TEMPLATE_HEAD + template, encoding="utf-8")
    entry = f"  - {{mark: T1, title: small, template: small, given: {given}}}\n"
    (folder / "project.yaml").write_text(HEAD + entry, encoding="utf-8")
    return folder / "project.yaml"


def work_small(folder: Path, template: str, given: str) -> Worked:
    """Return the worked calculation; a problem fails the test with its words."""
    worked, problems = work_or_problems(folder, template, given)
    assert not problems, problems
    assert worked is not None
    return worked


def work_or_problems(folder: Path, template: str, given: str) -> tuple[Worked | None, tuple[Problem, ...]]:
    """Return the worked calculation, or the problems."""
    opened = open_project(str(write_small(folder, template, given)))
    assert isinstance(opened, Opened), opened
    result = work(opened.world, opened.source)
    worked = result.worked.calculations[0] if result.worked and result.worked.calculations else None
    return worked, result.problems


def number(worked: Worked, path: str) -> float:
    """Return a value without rows in its declared unit."""
    slot = worked.plan.slots[worked.plan.by_path[path]]
    assert slot.symbol.unit is not None
    return worked.values.number(slot.index) / slot.symbol.unit.size


def verdicts(worked: Worked) -> dict[str, tuple[str, float | None]]:
    """Return verdict and ratio by check."""
    return {check.line.name: (check.verdict, check.ratio) for check in worked.checks}
