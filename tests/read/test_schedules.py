"""Schedules: rows as calculations, with the origin and the place of every value."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.calculate.model import GivenRows, GivenValue, Worked
from calcreport.core.problems import Problem
from calcreport.core.quantity import Amount
from calcreport.core.source import Source
from calcreport.driver import Result, work
from calcreport.filesystem import Disk, read_text
from tests.read.tables import book

LIBRARY = Path(__file__).parents[1] / "problems" / "library"
HEAD = """\
project: {title: Trial, number: T1, address: none}
office: {name: trial office}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: TRIAL, year: 2024, amendments: none}, concrete: DEMO-20, loads: LOADS-22}
criteria: {category: I}
revisions: [{number: 1, date: 2026-11-16, why: trial}]
materials: {C4: {f_c: 4000 psi}, C5: {f_c: 5000 psi}}
"""
SCHEDULE = """\
schedules:
  - file: beams.csv
    template: demo/beam
    mark: Mark
    title: Beam {Mark}, level {Level}
    concrete: C4
    columns: {b: Width, h: Depth, steel: Bars}
    given: {face: bottom, n: 3, V: none, tie: none, layer: [{name: first, y: 17 in, A_i: 2 in^2}]}
"""
TABLE = 'Mark,Level,Width (in),Depth (in),Bars\nB1,1,12,20,4-#8\nB2,2,14,"2\'-0""",5-#8\n'


def result(folder: Path, project: str, **tables: str | bytes) -> Result:
    """Work a project with its tables, named without their endings: text is CSV, bytes are XLSX."""
    (folder / "project.yaml").write_text(HEAD + project, encoding="utf-8")
    for name, data in tables.items():
        path = folder / (name + (".csv" if isinstance(data, str) else ".xlsx"))
        path.write_bytes(data.encode() if isinstance(data, str) else data)
    source = read_text(folder, "project.yaml")
    assert isinstance(source, Source)
    return work(Disk(folder, LIBRARY), source)


def worked(folder: Path, project: str, **tables: str | bytes) -> dict[str, Worked]:
    """Return the calculations by mark; a problem fails the test."""
    found = result(folder, project, **tables)
    assert not found.problems, found.problems
    assert found.worked is not None
    return {one.calculation.mark: one for one in found.worked.calculations}


def told(problems: tuple[Problem, ...]) -> list[tuple[str, str]]:
    """Return slug and place without the folder."""
    return [(p.slug, p.span.place.rpartition("/")[2] if p.span else "") for p in problems]


def given(one: Worked, name: str) -> GivenValue:
    """Return a given value."""
    value = next(v for v in one.calculation.given if v.given.name == name)
    assert isinstance(value, GivenValue)
    return value


def test_rows_are_calculations(tmp_path: Path) -> None:
    found = worked(tmp_path, SCHEDULE, beams=TABLE)
    assert list(found) == ["B1", "B2"]
    assert found["B2"].calculation.title == "Beam B2, level 2"
    h = given(found["B2"], "h")
    assert isinstance(h.value, Amount) and h.value.text == "2'-0\""
    # by hand: 14 in by 24 in, 336 in.^2
    area = found["B2"].values.number(found["B2"].plan.by_path["A"])
    assert area / 0.0254**2 == pytest.approx(336)


def test_values_keep_their_origin(tmp_path: Path) -> None:
    one = worked(tmp_path, SCHEDULE, beams=TABLE)["B2"]
    origins = {name: (given(one, name).origin.kind, given(one, name).origin.words) for name in ("b", "face", "f_c")}
    assert origins == {"b": ("schedule", "row 3"), "face": ("project file", ""), "f_c": ("material", "C4")}


def test_the_table_is_among_the_files_read(tmp_path: Path) -> None:
    found = result(tmp_path, SCHEDULE, beams=TABLE)
    assert found.worked is not None
    assert [source.name for source in found.worked.project.files] == ["project.yaml", "beams.csv"]
    other = result(tmp_path, SCHEDULE, beams=TABLE.replace("Level", "Storey"))
    assert other.problems and not (other.worked and other.worked.calculations)


def test_a_change_in_a_row_changes_its_fingerprint_and_no_other(tmp_path: Path) -> None:
    before = worked(tmp_path, SCHEDULE, beams=TABLE)
    after = worked(tmp_path, SCHEDULE, beams=TABLE.replace("14,", "15,"))
    assert before["B1"].fingerprint == after["B1"].fingerprint
    assert before["B2"].fingerprint != after["B2"].fingerprint


def test_rows_are_selected(tmp_path: Path) -> None:
    some = SCHEDULE + "    where: {Level: [2, 3]}\n"
    # the cells of rows not selected are not looked at
    assert list(worked(tmp_path, some, beams=TABLE.replace("12,20", "wide,"))) == ["B2"]


def test_marks_and_materials_from_columns(tmp_path: Path) -> None:
    project = SCHEDULE.replace("mark: Mark", "mark: 'V{Mark}'").replace("concrete: C4", "concrete: {column: Concrete}")
    table = "\n".join(line + tail for line, tail in zip(TABLE.splitlines(), (",Concrete", ",C4", ",C5"), strict=True))
    found = worked(tmp_path, project, beams=table)
    assert [given(found[mark], "f_c").origin.words for mark in ("VB1", "VB2")] == ["C4", "C5"]


def test_rows_of_a_set_from_columns(tmp_path: Path) -> None:
    project = SCHEDULE.replace(
        "layer: [{name: first, y: 17 in, A_i: 2 in^2}]",
        "layer: [{name: first, y: {column: Deep, unit: in}, A_i: 2 in^2}, "
        "{name: second, y: {column: High, unit: in, if empty: no row}, A_i: 1 in^2}]",
    )
    table = "\n".join(
        line + tail for line, tail in zip(TABLE.splitlines(), (",Deep,High", ",17,", ",21,18"), strict=True)
    )
    found = worked(tmp_path, project, beams=table)
    layers = [next(v for v in one.calculation.given if isinstance(v, GivenRows)) for one in found.values()]
    assert [value.names for value in layers] == [("first",), ("first", "second")]
    assert layers[1].origin.words == "row 3"


def test_values_with_a_source_and_links_from_columns(tmp_path: Path) -> None:
    project = SCHEDULE.replace("{b: Width, h: Depth,", "{h: Depth,").replace(
        "given: {", "given: {b: {from: {column: 'L{Mark}.b'}}, "
    ).replace("V: none", "V: {value: {column: Shear, unit: kip}, source: frame analysis}")  # fmt: skip
    lines = "".join(
        f"  - {{mark: L{mark}, title: x, template: demo/beam, concrete: C4, given: {{b: {b} in, h: 20 in, "
        "face: bottom, n: 1, V: none, steel: 1-#8, tie: none, layer: [{name: first, y: 1 in, A_i: 1 in^2}]}}\n"
        for mark, b in (("B1", 12), ("B2", 14))
    )
    table = "\n".join(line + tail for line, tail in zip(TABLE.splitlines(), (",Shear", ",10", ",12"), strict=True))
    found = worked(tmp_path, project + "calculations:\n" + lines, beams=table)
    # by hand: 14 in
    assert found["B2"].values.number(found["B2"].plan.by_path["b"]) == pytest.approx(14 * 0.0254)
    assert given(found["B2"], "V").origin.words == "frame analysis"


def test_schedules_of_included_files_and_labels(tmp_path: Path) -> None:
    (tmp_path / "more.yaml").write_text(
        "calculations: []\n" + SCHEDULE.replace("beams.csv", "others.csv"), encoding="utf-8"
    )
    project = "calculations:\n  - include: more.yaml\n" + SCHEDULE
    found = worked(tmp_path, project, beams=TABLE, others=TABLE.replace("B", "D").replace("Dars", "Bars"))
    assert list(found) == ["B1", "B2", "D1", "D2"]
    # with two tables a row's number alone would not tell the row
    assert given(found["D1"], "b").origin.words == "others.csv row 2"


def test_a_workbook_is_read_like_text(tmp_path: Path) -> None:
    rows = (("Mark", "Level", "Width (in)", "Depth (in)", "Bars"), ("B1", 1, 12, 20, "4-#8"), ("B2", 2, 14, 24, "5-#8"))
    project = SCHEDULE.replace("beams.csv", "beams.xlsx")
    found = worked(tmp_path, project, beams=book(rows=rows))
    same = worked(tmp_path, SCHEDULE, beams=TABLE.replace('2\'-0""', "24").replace('"24"', "24"))
    assert {m: one.fingerprint for m, one in found.items()} == {m: one.fingerprint for m, one in same.items()}
    wide = (*rows[:2], ("B2", 2, -14, 24, "5-#8"))
    assert told(result(tmp_path, project, beams=book(rows=wide)).problems) == [("out-of-range", "beams.xlsx:Beams!C3")]


@pytest.mark.parametrize(
    ("says", "marks", "slug"), [("", [], "hidden-rows"), ("skip", ["B1"], ""), ("read", ["B1", "B2"], "")]
)
def test_hidden_rows(tmp_path: Path, says: str, marks: list[str], slug: str) -> None:
    rows = (("Mark", "Level", "Width (in)", "Depth (in)", "Bars"), ("B1", 1, 12, 20, "4-#8"), ("B2", 2, 14, 24, "5-#8"))

    def change(sheet: object) -> None:
        sheet.row_dimensions[3].hidden = True  # type: ignore[attr-defined]

    project = SCHEDULE.replace("beams.csv", "beams.xlsx") + (f"    hidden: {says}\n" if says else "")
    found = result(tmp_path, project, beams=book(change, rows))
    assert told(found.problems) == ([(slug, "beams.xlsx:Beams!A3")] if slug else [])
    if marks:
        assert found.worked is not None
        assert [one.calculation.mark for one in found.worked.calculations] == marks


def test_a_hidden_column_is_no_matter_until_it_is_asked_for(tmp_path: Path) -> None:
    rows = (("Mark", "Level", "Width (in)", "Depth (in)", "Bars"), ("B1", 1, 12, 20, "4-#8"))

    def hide(letter: str) -> bytes:
        def change(sheet: object) -> None:
            sheet.column_dimensions[letter].hidden = True  # type: ignore[attr-defined]

        return book(change, rows)

    project = SCHEDULE.replace("beams.csv", "beams.xlsx").replace(", level {Level}", "")
    assert not result(tmp_path, project, beams=hide("B")).problems
    assert told(result(tmp_path, project, beams=hide("C")).problems) == [("hidden-rows", "beams.xlsx:Beams!C1")]


def test_every_row_with_a_problem_is_named_and_the_others_are_worked(tmp_path: Path) -> None:
    table = TABLE + "B3,3,,20,4-#8\nB4,4,12,20,4-#99\n"
    found = result(tmp_path, SCHEDULE, beams=table)
    assert told(found.problems) == [("empty-cell", "beams.csv:4:6"), ("unknown-bar", "beams.csv:5:14")]
    assert found.worked is not None
    assert [one.calculation.mark for one in found.worked.calculations] == ["B1", "B2"]


def test_what_all_rows_lack_is_told_once(tmp_path: Path) -> None:
    found = result(tmp_path, SCHEDULE.replace("n: 3, ", ""), beams=TABLE)
    assert [slug for slug, _ in told(found.problems)] == ["missing-value"]


def test_too_many_rows(tmp_path: Path) -> None:
    many = TABLE + "".join(f"X{i},1,12,20,4-#8\n" for i in range(20_000))
    assert [slug for slug, _ in told(result(tmp_path, SCHEDULE, beams=many).problems)] == ["file-too-large"]
