"""`calcreport reconcile`: what differs between drawings and calculations, in both directions."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from calcreport.filesystem import library_folder
from tests.commands.desk import run
from tests.read.tables import book

HEAD = """\
project: {title: Trial, number: T1, address: none}
office: {name: trial office}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: TRIAL, year: 2024, amendments: none}, concrete: DEMO-20, loads: LOADS-22}
criteria: {risk category: II, seismic design category: B}
revisions: [{number: 1, date: 2026-11-16, why: trial}]
calculations:
"""
#: lengths stand in the result line; bars in a set, alone, and at a spacing
TEMPLATE = """\
template: trial
title: Trial
code: {name: OWN}
units: [us]
symbols:
  b: {unit: in, says: width}
  h: {unit: in, says: depth}
  face: {one of: [bottom, top], says: face}
  A: {unit: in^2, says: area}
given:
  b:
  h:
  face:
  layer: {rows: {steel: {kind: bars, says: bars}}, names: [first, second], says: layers}
  tie: {kind: spaced bars, says: ties, if none: absent}
lines:
  - {gives: A, formula: 'b*h', cite: geometry}
  - {use: '{b} × {h}'}
"""
GIVEN = "b: 16 in, h: 28 in, face: bottom, layer: [{name: first, steel: 4-#8}], tie: '#4 @ 12 in'"
ALIKE = {
    "as typed": "B1,16 in,28 in,4-#8,#4 @ 12 in",
    "other units": "B1,1'-4\",711.2 mm,4-#8,#4 @ 1 ft",
    "other spellings": 'B1,"16""",2 ft 4 in,4#8,#4@12"',
    "number signs and words": 'B1,16 in,28 in,4 No. 8,"#4 @ 12"" o.c."',
    "halves of one callout": "B1,16 in,28 in,2#8 + 2-#8,No. 4 @ 12 in",
}
DIFFERENT = {
    "size": ("B1,18 in,28 in,4-#8,#4 @ 12 in", "b", "18 in", "16 in"),
    "a hair": ("B1,406 mm,28 in,4-#8,#4 @ 12 in", "b", "406 mm", "16 in"),
    "count": ("B1,16 in,28 in,5-#8,#4 @ 12 in", "layer.first.steel", "5-#8", "4-#8"),
    "bar": ("B1,16 in,28 in,4-#9,#4 @ 12 in", "layer.first.steel", "4-#9", "4-#8"),
    "spacing": ("B1,16 in,28 in,4-#8,#4 @ 10 in", "tie", "#4 @ 10 in", "#4 @ 12 in"),
    "legs": ("B1,16 in,28 in,4-#8,2 legs #4 @ 12 in", "tie", "2 legs #4 @ 12 in", "#4 @ 12 in"),
    "nothing": ("B1,16 in,28 in,4-#8,", "tie", "nothing", "#4 @ 12 in"),
}
COLUMNS = ("--columns", "layer.first=Bottom", "tie=Ties")


def make(folder: Path, *given: str) -> Path:
    """Write a project of calculations B1, B2, …"""
    entries = "".join(
        f"  - {{mark: B{number}, title: Trial, template: trial, given: {{{one}}}}}\n"
        for number, one in enumerate(given or (GIVEN,), 1)
    )
    (folder / "project.yaml").write_text(HEAD + entries, encoding="utf-8")
    (folder / "trial.yaml").write_text(TEMPLATE, encoding="utf-8")
    # sizes of bars are data: those of the library
    for name in ("bars-us.yaml",):
        text = (library_folder() / "aci318" / name).read_text(encoding="utf-8")
        (folder / name).write_text(text, encoding="utf-8")
    return folder


def drawn(folder: Path, *rows: str, headings: str = "Mark,Width,Depth,Bottom,Ties") -> str:
    """Write a schedule of the drawings."""
    (folder / "drawn.csv").write_text("\n".join((headings, *rows)) + "\n", encoding="utf-8")
    return str(folder / "drawn.csv")


def found(folder: Path, schedule: str, *options: str) -> tuple[int, dict[str, Any]]:
    """Return exit code and what was found."""
    ran = run("reconcile", str(folder), schedule, "--json", *options)
    assert not ran.err
    return ran.code, json.loads(ran.out)


@pytest.mark.parametrize("name", ALIKE)
def test_alike(tmp_path: Path, name: str) -> None:
    code, one = found(make(tmp_path), drawn(tmp_path, ALIKE[name]), *COLUMNS)
    assert (code, one["differences"], one["marks"], one["values"]) == (0, [], 1, 4), one


@pytest.mark.parametrize("name", DIFFERENT)
def test_different(tmp_path: Path, name: str) -> None:
    row, what, there, here = DIFFERENT[name]
    code, one = found(make(tmp_path), drawn(tmp_path, row), *COLUMNS)
    assert code == 1
    assert [(d["mark"], d["what"], d["drawings"], d["calculations"]) for d in one["differences"]] == [
        ("B1", what, there, here)
    ]
    assert one["differences"][0]["place"].startswith(f"{tmp_path}/drawn.csv:2:")


def test_marks_in_both_directions(tmp_path: Path) -> None:
    make(tmp_path, GIVEN, GIVEN)
    schedule = drawn(tmp_path, ALIKE["as typed"], ALIKE["as typed"].replace("B1", "B7"))
    code, one = found(tmp_path, schedule, *COLUMNS)
    assert code == 1
    assert one["not_calculated"] == [{"mark": "B7", "place": f"{tmp_path}/drawn.csv:3:1"}]
    assert one["not_drawn"] == ["B2"]
    ran = run("reconcile", str(tmp_path), schedule, *COLUMNS)
    assert "B7           on the drawings, not calculated" in ran.out
    assert "B2           calculated, not on the drawings" in ran.out


@pytest.mark.parametrize(
    ("size", "bars", "differences"),
    [
        ("16 x 28 in", "first: 4-#8; tie: #4 @ 12 in", []),
        ("16 in × 28 in", "#4 @ 1 ft; 4 No. 8", []),
        ("1'-4\" X 2'-4\"", "4-#8; #4 @ 12 in", []),
        ("28 in x 16 in", "4-#8; #4 @ 12 in", ["size"]),
        ("16 in", "4-#8", ["size", "bars"]),
        ("16 x 28 in", "2-#8; 2-#8; #4 @ 12 in", ["bars"]),
    ],
)
def test_size_and_bars_in_one_cell_each(tmp_path: Path, size: str, bars: str, differences: list[str]) -> None:
    schedule = drawn(tmp_path, f'B1,"{size.replace(chr(34), chr(34) * 2)}","{bars}"', headings="Mark,Size,Bars")
    code, one = found(make(tmp_path), schedule)
    assert [d["what"] for d in one["differences"]] == differences
    assert code == (1 if differences else 0)


def test_what_the_program_wrote_agrees_with_it(tmp_path: Path) -> None:
    make(tmp_path, GIVEN, GIVEN.replace("4-#8", "3-#7 + 1-#8"))
    for name in ("out.csv", "out.xlsx"):
        assert run("schedule", str(tmp_path), "-o", str(tmp_path / name)).code == 0
        code, one = found(tmp_path, str(tmp_path / name))
        assert (code, one["marks"], one["values"]) == (0, 2, 4)


def test_the_columns_of_the_projects_own_schedule_are_known(tmp_path: Path) -> None:
    make(tmp_path)
    schedule = """\
schedules:
  - file: beams.csv
    template: trial
    mark: Mark
    columns: {b: W, h: D, tie: Ties}
    given: {face: bottom, layer: [{name: first, steel: {column: Bottom}}]}
"""
    (tmp_path / "project.yaml").write_text(HEAD.replace("calculations:\n", schedule), encoding="utf-8")
    (tmp_path / "beams.csv").write_text("Mark,W (in),D (in),Bottom,Ties\nB1,16,28,4-#8,#4 @ 12 in\n")
    code, one = found(tmp_path, drawn(tmp_path, "B1,16,28,4-#8,#4 @ 8 in", headings="Mark,W (in),D (in),Bottom,Ties"))
    assert code == 1 and one["values"] == 4
    assert [(d["what"], d["drawings"]) for d in one["differences"]] == [("tie", "#4 @ 8 in")]


def test_lengths_without_a_unit_are_problems_until_it_is_told(tmp_path: Path) -> None:
    make(tmp_path)
    schedule = drawn(tmp_path, "B1,16,28,4-#8,#4 @ 12")
    code, one = found(tmp_path, schedule, *COLUMNS)
    assert code == 2 and {p["slug"] for p in one["problems"]} == {"bare-number"} and len(one["problems"]) == 3
    assert found(tmp_path, schedule, *COLUMNS, "--lengths", "in")[0] == 0
    assert found(tmp_path, schedule, *COLUMNS, "--lengths", "mm")[0] == 1


@pytest.mark.parametrize(
    ("row", "slug"),
    [("B1,16 in,28 in,four bars,#4 @ 12 in", "not-a-callout"), ("B1,wide,28 in,4-#8,#4 @ 12 in", "not-a-quantity")],
)
def test_what_cannot_be_read_is_no_agreement(tmp_path: Path, row: str, slug: str) -> None:
    code, one = found(make(tmp_path), drawn(tmp_path, row), *COLUMNS)
    assert code == 2 and [p["slug"] for p in one["problems"]] == [slug]


@pytest.mark.parametrize(
    ("options", "slug", "place"),
    [
        (("--columns", "b=Widht"), "unknown-column", "--columns:1:3"),
        (("--columns", "Width"), "unknown-column", "--columns:1:1"),
        (("--columns", "w=Width"), "unknown-name", "--columns:1:1"),
        (("--lengths", "inch"), "unknown-unit", "--lengths:1:1"),
        (("--sheet", "Beams"), "no-sheet", "--sheet:1:1"),
        (("--heading-row", "nine"), "not-a-number", "--heading-row:1:1"),
        (("--template", "trail"), "no-template", "--template:1:1"),
    ],
)
def test_options_that_cannot_be_met(tmp_path: Path, options: tuple[str, str], slug: str, place: str) -> None:
    make(tmp_path)
    ran = run("reconcile", str(tmp_path), drawn(tmp_path, ALIKE["as typed"]), *options)
    assert ran.code == 2 and f"{place}: error[{slug}]" in ran.err


def test_marks_alone_are_no_comparison(tmp_path: Path) -> None:
    ran = run("reconcile", str(make(tmp_path)), drawn(tmp_path, "B1,wide", headings="Mark,Note"))
    assert ran.code == 2 and "no column but the mark can be compared" in ran.err


def test_a_mark_twice_and_hidden_rows(tmp_path: Path) -> None:
    make(tmp_path)
    code, one = found(tmp_path, drawn(tmp_path, ALIKE["as typed"], ALIKE["as typed"]), *COLUMNS)
    assert code == 2 and [p["slug"] for p in one["problems"]] == ["given-twice"]
    rows = (("Mark", "Width", "Depth"), ("B1", "16 in", "28 in"), ("B2", "16 in", "28 in"))

    def change(sheet: Any) -> None:
        sheet.row_dimensions[3].hidden = True

    (tmp_path / "drawn.xlsx").write_bytes(book(change, rows))
    assert found(tmp_path, str(tmp_path / "drawn.xlsx"))[0] == 2
    assert found(tmp_path, str(tmp_path / "drawn.xlsx"), "--hidden", "skip")[0] == 0
    assert found(tmp_path, str(tmp_path / "drawn.xlsx"), "--hidden", "read")[1]["not_calculated"][0]["mark"] == "B2"


def test_without_a_schedule(tmp_path: Path) -> None:
    ran = run("reconcile", str(make(tmp_path)), str(tmp_path / "none.csv"))
    assert ran.code == 2 and "error[no-file]" in ran.err
