"""`calcreport schedule`: rows on the terminal, a file written whole or not at all."""

from __future__ import annotations

import csv
import io
from pathlib import Path

import pytest
from openpyxl import load_workbook

from tests.commands.desk import EARLIER, PROJECT, make, names, run

TEMPLATE = """\
template: trial
title: Trial
code: {name: OWN}
units: [us]
symbols: {b: {unit: in, says: width}, r: {unit: '1', says: ratio}}
given: {b: }
lines:
  - {gives: r, formula: 'b/4 in', cite: geometry}
  - {check: ratio, holds: 'r <= 1', cite: geometry}
  - {use: 'width {b}'}
"""
HEADINGS = ["Mark", "Title", "Size", "Bars", "Governing check", "Ratio", "Verdict", "Result"]
#: by hand: 3 in over 4 in is 0.75
ROW = ["T1", "=Trial", "3 in", "", "ratio", "0.750", "OK", "width 3 in."]


def _make(folder: Path) -> Path:
    return make(folder, PROJECT.replace("mark: T1, title: Trial", "mark: T1, title: =Trial"), TEMPLATE)


def test_on_the_terminal(tmp_path: Path) -> None:
    ran = run("schedule", str(_make(tmp_path)))
    assert ran.code == 0, ran.err
    rows = list(csv.reader(io.StringIO(ran.out)))
    assert rows == [HEADINGS, [cell.replace("=Trial", "'=Trial") for cell in ROW]]


def test_as_a_workbook(tmp_path: Path) -> None:
    target = tmp_path / "out.xlsx"
    assert run("schedule", str(_make(tmp_path)), "-o", str(target)).code == 0
    before = target.read_bytes()
    rows = [[cell.value for cell in row] for row in load_workbook(io.BytesIO(before))["Schedule"].iter_rows()]
    assert rows == [HEADINGS, ["T1", "=Trial", "3 in", None, "ratio", 0.75, "OK", "width 3 in."]]
    assert run("schedule", str(tmp_path), "-o", str(target)).code == 0
    assert target.read_bytes() == before


def test_an_earlier_schedule_is_replaced_and_nothing_else(tmp_path: Path) -> None:
    _make(tmp_path)
    target = tmp_path / "out.csv"
    assert run("schedule", str(tmp_path), "-o", str(target)).code == 0
    assert run("schedule", str(tmp_path), "-o", str(target)).code == 0
    for name, data in (("in.csv", b"Mark,Width\nB1,16 in\n"), ("in.xlsx", b"PK\x03\x04 a workbook of another program")):
        (tmp_path / name).write_bytes(data)
        ran = run("schedule", str(tmp_path), "-o", str(tmp_path / name))
        assert ran.code == 2 and "error[cannot-write]" in ran.err
        assert (tmp_path / name).read_bytes() == data


@pytest.mark.parametrize("output", ["out.pdf", "out", "project.yaml", "none/out.csv"])
def test_where_it_cannot_be_written(tmp_path: Path, output: str) -> None:
    _make(tmp_path)
    before = names(tmp_path)
    ran = run("schedule", str(tmp_path), "-o", str(tmp_path / output))
    assert ran.code == 2 and "error[cannot-write]" in ran.err
    assert names(tmp_path) == before
    assert (tmp_path / "project.pdf").read_bytes() == EARLIER


def test_problems_write_nothing(tmp_path: Path) -> None:
    make(tmp_path, PROJECT.replace("3 in", "3"), TEMPLATE)
    ran = run("schedule", str(tmp_path), "-o", str(tmp_path / "out.csv"))
    assert ran.code == 2 and "error[bare-number]" in ran.err
    assert "out.csv" not in names(tmp_path)


def test_a_check_that_is_ng_is_exit_code_1_and_stands_in_the_row(tmp_path: Path) -> None:
    make(tmp_path, PROJECT.replace("3 in", "5 in"), TEMPLATE)
    ran = run("schedule", str(tmp_path))
    assert ran.code == 1
    # by hand: 5/4 = 1.25
    assert "ratio,1.250,NG" in ran.out
