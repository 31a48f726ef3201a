"""A project folder to do harm in, and the command line run inside this process."""

from __future__ import annotations

import io
import time
from contextlib import redirect_stderr, redirect_stdout
from dataclasses import dataclass
from pathlib import Path

from calcreport.__main__ import main

HEAD = """\
project: {title: Trial, number: T1, address: none}
office: {name: trial office}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: TRIAL, year: 2024, amendments: none}, concrete: DEMO-20, loads: LOADS-22}
criteria: {risk category: II, seismic design category: B}
revisions: [{number: 1, date: 2026-11-16, why: trial}]
"""
CALCULATION = "  - {mark: T1, title: Trial, template: trial, given: {b: 3 in}}\n"
PROJECT = HEAD + "calculations:\n" + CALCULATION
TEMPLATE = """\
template: trial
title: Trial
code: {name: OWN}
units: [us]
symbols: {b: {unit: in, says: width}, q: {unit: '1', says: number}, r: {unit: '1', says: ratio}}
given: {b: }
lines:
"""
LINES = """\
  - {gives: r, formula: 'b/3 in', cite: geometry}
  - {check: ratio, holds: 'r <= 1', cite: geometry}
"""
EARLIER = b"%PDF-1.7 an earlier package"


@dataclass(frozen=True, slots=True)
class Ran:
    """What a command did."""

    code: int
    out: str
    err: str
    #: processor seconds
    seconds: float


def run(*arguments: str) -> Ran:
    """Run a command in this process; a traceback fails the test."""
    out, err = io.StringIO(), io.StringIO()
    before = time.process_time()
    with redirect_stdout(out), redirect_stderr(err):
        try:
            code = main(arguments)
        except SystemExit as stopped:
            code = int(stopped.code or 0)
    return Ran(code, out.getvalue(), err.getvalue(), time.process_time() - before)


def make(folder: Path, project: str | bytes = PROJECT, template: str = TEMPLATE + LINES) -> Path:
    """Write a project, its template and an earlier package into a folder."""
    data = project if isinstance(project, bytes) else project.encode()
    (folder / "project.yaml").write_bytes(data)
    (folder / "trial.yaml").write_text(template, encoding="utf-8")
    (folder / "project.pdf").write_bytes(EARLIER)
    return folder


def names(folder: Path) -> list[str]:
    """Return what stands in a folder."""
    return sorted(path.name for path in folder.iterdir())
