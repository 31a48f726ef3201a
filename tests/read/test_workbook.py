"""XLSX workbooks: cells as text with places, what is hidden or merged, damage, and archives made to exhaust."""

from __future__ import annotations

import io
import time
import zipfile
from collections.abc import Callable
from datetime import date
from pathlib import Path
from random import Random
from typing import Any

import pytest

from calcreport.core.problems import Problems, to_json
from calcreport.core.source import Source
from calcreport.read.columns import make_table, take, text_use
from calcreport.read.nodes import Told
from calcreport.read.workbook import read_workbook
from tests.read.tables import book, named, read, repacked, texts

#: processor seconds that tell a bound from an explosion
LONGEST = 3.0


def test_numbers_are_texts_of_fifteen_digits(tmp_path: Path) -> None:
    # 0.1 + 0.2 is 0.30000000000000004 in binary; a spreadsheet keeps and shows fifteen digits of it
    data = book(rows=(("Mark", "x"), ("B1", 0.1 + 0.2), ("B2", 16), ("B3", 14.5), ("B4", "16 in"), ("B5", True)))
    sheet, problems = read(tmp_path, data)
    assert not problems
    assert [row[1] for row in texts(sheet)] == ["x", "0.3", "16", "14.5", "16 in", "TRUE"]


def test_places_are_cells(tmp_path: Path) -> None:
    sheet, _ = read(tmp_path, book())
    assert sheet is not None
    cell = sheet.rows[2].cell(1)
    assert (cell.text, cell.span.place) == ("14.5", "there/beams.xlsx:Beams!B3")
    problems = Problems()
    problems.add("empty-cell", cell.span, "m", expected="e", found="f")
    shown = to_json(problems.sorted()[0])
    assert (shown["file"], shown["line"], shown["cell"]) == ("there/beams.xlsx", 3, "Beams!B3")


def test_the_unit_a_number_format_shows_is_read_with_the_number(tmp_path: Path) -> None:
    def change(sheet: Any) -> None:
        sheet["B2"].number_format, sheet["B3"].number_format = '0" in"', "#,##0.00_);[Red](#,##0.00)"

    sheet, _ = read(tmp_path, book(change))
    assert [row[1] for row in texts(sheet)[1:3]] == ["16 in", "14.5"]


def _changed(data: bytes, old: bytes, new: bytes) -> bytes:
    """Return a workbook with a piece of its sheet's markup replaced."""
    name = "xl/worksheets/sheet1.xml"
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        text = archive.read(name)
    assert old in text
    return repacked(data, {name: text.replace(old, new, 1)})


def _taken(tmp_path: Path, change: Callable[[Any], None]) -> str:
    """Return what is found where the width of the first row cannot be taken."""
    sheet, problems = read(tmp_path, book(change))
    assert sheet is not None and not problems
    collector = Problems()
    table = make_table(sheet, None, sheet.rows[0].cell(0).span, collector)
    assert table is not None
    use = text_use(named("Width"), table, collector)
    assert use is not None
    assert isinstance(take(use, table.rows[0], table, collector), Told)
    told = collector.sorted()
    assert [problem.slug for problem in told] == ["bad-cell"]
    assert told[0].span is not None and told[0].span.place == "there/beams.xlsx:Beams!B2"
    return told[0].found


def _put(value: object) -> Callable[[Any], None]:
    def change(sheet: Any) -> None:
        sheet["B2"] = value

    return change


def test_a_date_is_refused(tmp_path: Path) -> None:
    assert _taken(tmp_path, _put(date(2026, 5, 3))) == "a date or a time"


def test_an_error_is_refused(tmp_path: Path) -> None:
    assert _taken(tmp_path, _put("#REF!")) == "the error #REF!"


def test_a_formula_never_worked_is_refused(tmp_path: Path) -> None:
    # the library writes formulas without values; a spreadsheet program stores both
    assert _taken(tmp_path, _put("=8*2")) == "a formula without the value it last had"


def test_a_formula_with_its_value_is_that_value(tmp_path: Path) -> None:
    sheet, problems = read(tmp_path, _changed(book(_put("=8*2")), b"<v />", b"<v>16</v>"))
    assert not problems
    assert texts(sheet)[1][1] == "16"


def test_merged_cells_are_refused(tmp_path: Path) -> None:
    assert _taken(tmp_path, lambda sheet: sheet.merge_cells("B2:B3")) == "merged cells B2:B3"


def test_merged_cells_above_the_table_are_no_matter(tmp_path: Path) -> None:
    def change(sheet: Any) -> None:
        sheet.insert_rows(1)
        sheet["A1"] = "BEAMS"
        sheet.merge_cells("A1:C1")

    sheet, problems = read(tmp_path, book(change))
    assert not problems and sheet is not None
    collector = Problems()
    table = make_table(sheet, 2, sheet.rows[0].cell(0).span, collector)
    assert table is not None and [h.stem for h in table.headings] == ["Mark", "Width", "Bars"]


def test_hidden_rows_columns_and_sheets_are_known(tmp_path: Path) -> None:
    def change(sheet: Any) -> None:
        sheet.row_dimensions[3].hidden = True
        sheet.column_dimensions.group("B", "C", hidden=True)
        sheet.parent.create_sheet("Other")
        sheet.sheet_state = "hidden"

    # a row without height is as little to be seen
    flat = _changed(book(change), b'<row r="4"', b'<row r="4" ht="0" customHeight="1"')
    sheet, problems = read(tmp_path, flat, sheet="Beams")
    assert not problems and sheet is not None
    assert [row.number for row in sheet.rows if row.hidden] == [3, 4]
    assert sheet.hidden_columns == {1, 2} and sheet.is_hidden


@pytest.mark.parametrize(("sheet", "found"), [(None, "no `sheet`"), ("Beam", "Beam")])
def test_which_sheet(tmp_path: Path, sheet: str | None, found: str) -> None:
    data = book(lambda one: one.parent.create_sheet("Other"))
    _, problems = read(tmp_path, data, sheet=sheet)
    assert [(problem.slug, problem.found) for problem in problems] == [("no-sheet", found)]
    assert "Beams, Other" in problems[0].expected
    assert read(tmp_path, data, sheet="Other")[1][0].slug == "bad-table"


def test_macros_and_links_to_other_files_are_left_alone(tmp_path: Path) -> None:
    link = b"<externalLink><externalBook><sheetNames/></externalBook></externalLink>"
    data = repacked(book(), {"xl/vbaProject.bin": b"\xd0\xcf\x11\xe0", "xl/externalLinks/externalLink1.xml": link})
    sheet, problems = read(tmp_path, data, "beams.xlsm")
    assert not problems
    assert texts(sheet)[1] == ["B1", "16", "4-#8"]


def _bomb(size: int) -> bytes:
    return repacked(book(), {"xl/media/image1.png": bytes(size)})


def _many_cells() -> bytes:
    cells = b"".join(b"<row>" + b"<c><v>1</v></c>" * 200 + b"</row>" for _ in range(12_000))
    return _changed(book(), b"</sheetData>", cells + b"</sheetData>")


def _with(part: str, text: bytes) -> bytes:
    return repacked(book(), {part: text})


def _spreading(element: str) -> bytes:
    """Return a workbook whose sheet ends in an element naming an area of seventeen thousand million cells."""
    return _changed(book(), b"</sheetData>", b"</sheetData>" + element.encode())


HOSTILE: dict[str, Callable[[], bytes]] = {
    "one part that swells": lambda: _bomb(50_000_000),
    "parts that swell together": lambda: repacked(
        book(), {f"xl/media/{i}.bin": Random(i).randbytes(60_000) + bytes(9_000_000) for i in range(12)}
    ),
    "many parts": lambda: repacked(book(), {f"xl/media/{i}.bin": b"" for i in range(3000)}),
    "many cells": _many_cells,
    "a merged area as large as a sheet": lambda: _spreading(
        '<mergeCells count="1"><mergeCell ref="A1:XFD1048576"/></mergeCells>'
    ),
    "a merged area spelled in references": lambda: _spreading(
        '<mergeCells count="1"><mergeCell ref="&#65;1:XFD1048576"/></mergeCells>'
    ),
    "a link over the whole sheet": lambda: _spreading('<hyperlinks><hyperlink ref="A1:XFD1048576"/></hyperlinks>'),
    "entities that multiply": lambda: _with(
        "xl/sharedStrings.xml",
        b'<!DOCTYPE a [<!ENTITY a "aaaaaaaaaa"><!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;">]><sst><si><t>&b;</t></si></sst>',
    ),
    "a file of the machine as an entity": lambda: _with(
        "xl/workbook.xml", b'<!DOCTYPE a [<!ENTITY a SYSTEM "file:///other.txt">]><a>&a;</a>'
    ),
    "markup in another alphabet": lambda: _with("xl/workbook.xml", "<!DOCTYPE a []><a/>".encode("utf-16")),
    "not an archive": lambda: b"\xd0\xcf\x11\xe0 an older workbook, or a protected one",
    "an archive of something else": lambda: repacked(book(), {"[Content_Types].xml": b"<Types/>"}),
    "cut short": lambda: book()[:-200],
    "a name alone": lambda: b"PK",
}


@pytest.mark.parametrize("name", HOSTILE)
def test_refused(tmp_path: Path, name: str) -> None:
    data = HOSTILE[name]()
    before = time.process_time()
    sheet, problems = read(tmp_path, data)
    assert sheet is None
    assert [problem.slug for problem in problems] == ["bad-table"], problems
    assert time.process_time() - before < LONGEST


@pytest.mark.parametrize("place", ["A1048576", "XFD2", "ZZ30000"])
def test_a_cell_far_away_is_refused(tmp_path: Path, place: str) -> None:
    def change(sheet: Any) -> None:
        sheet[place] = "x"

    before = time.process_time()
    sheet, problems = read(tmp_path, book(change))
    assert sheet is None
    assert [problem.slug for problem in problems] == ["file-too-large"]
    assert time.process_time() - before < LONGEST


def test_damage_ends_in_a_problem() -> None:
    base, draw = book(_put("=8*2")), Random(1)
    file, sheet = named("beams.xlsx"), named("Beams")
    for _ in range(150):
        data = bytearray(base)
        for _ in range(draw.randint(1, 5)):
            data[draw.randrange(4, len(data))] = draw.randrange(256)
        problems = Problems()
        assert (read_workbook(bytes(data), file, sheet, problems) is None) == bool(problems)


def test_damaged_markup_ends_in_a_problem() -> None:
    base, draw = book(_put(date(2026, 5, 3))), Random(2)
    words = [b'"', b"<", b">", b"/", b"99999999999999999999", b"-1", b"", b"ZZZZ9", b"1e999", b'r="1048577"']
    with zipfile.ZipFile(io.BytesIO(base)) as archive:
        parts = {part.filename: archive.read(part) for part in archive.infolist()}
    for _ in range(150):
        name = draw.choice([name for name in parts if "sheet1" in name or draw.random() < 0.3] or list(parts))
        text, at = parts[name], draw.randrange(len(parts[name]))
        changed = text[:at] + draw.choice(words) + text[at + draw.randint(0, 4) :]
        problems = Problems()
        found = read_workbook(repacked(base, {name: changed}), named("beams.xlsx"), named("Beams"), problems)
        assert (found is None) == bool(problems)


def test_a_column_that_names_no_last_one_is_hidden_alone(tmp_path: Path) -> None:
    data = _changed(book(), b"<sheetData>", b'<cols><col min="2" hidden="1" width="9"/></cols><sheetData>')
    grid = read_workbook(data, named("beams.xlsx"), named("Beams"), Problems())
    assert grid is not None and grid.hidden_columns == {1}


def test_what_the_library_says_of_damage_stays_off_standard_output(capsys: pytest.CaptureFixture[str]) -> None:
    with zipfile.ZipFile(io.BytesIO(book())) as archive:
        styles = archive.read("xl/styles.xml")
    damaged = styles.replace(b'name="Normal" xfId="0"', b'name="Normal" xfId="77"')
    assert damaged != styles
    problems = Problems()
    assert read_workbook(_with("xl/styles.xml", damaged), named("beams.xlsx"), named("Beams"), problems) is None
    assert problems
    assert capsys.readouterr().out == ""


def test_the_text_made_of_a_sheet_is_echoed_row_by_row(tmp_path: Path) -> None:
    sheet, _ = read(tmp_path, book())
    assert sheet is not None
    source: Source = sheet.source
    assert source.text.split("\n")[1] == "B1\t16\t4-#8"
    assert source.titled == "beams.xlsx, sheet Beams"
