"""Tables as bytes: read back by other readers; formulas stay text; the same rows give the same bytes."""

from __future__ import annotations

import csv
import io
from pathlib import Path
from zipfile import ZipFile

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from openpyxl import load_workbook

from calcreport.output.spreadsheet import CSV_MARK, XLSX_MARK, csv_bytes, xlsx_bytes
from tests.read.tables import read, texts

ROWS = (
    ("Mark", "Size", "Ratio", "Note"),
    ("B1", "16 in × 28 in", "0.880", 'stirrup: #4, "closed"'),
    ("B2", "18'-6\"", "-1.5", "<a> & b"),
    ("B3", "", "1,029", "two\nlines"),
)
FORMULAS = ("=1+1", "+1 kip", "-120 kip*ft", "@SUM(A1)", "=HYPERLINK(0)", "-")


def _back(data: bytes) -> list[list[str]]:
    """Read CSV with the standard library."""
    return list(csv.reader(io.StringIO(data.decode("utf-8-sig"), newline="")))


def test_csv_is_read_back_by_the_standard_library() -> None:
    data = csv_bytes(ROWS)
    assert data.startswith(CSV_MARK)
    assert _back(data) == [list(row) for row in ROWS]


@settings(max_examples=100, deadline=None)
@given(st.lists(st.lists(st.text(alphabet="a,;\"'\n\t ×", max_size=6), min_size=2, max_size=2), min_size=1, max_size=4))
def test_csv_of_any_text(rows: list[list[str]]) -> None:
    guarded = [["'" + cell if cell.startswith("\t") else cell for cell in row] for row in rows]
    assert _back(csv_bytes(rows)) == guarded


@pytest.mark.parametrize("text", FORMULAS)
def test_text_that_begins_like_a_formula_is_text(text: str, tmp_path: Path) -> None:
    rows = (("Mark", "Note"), ("B1", text))
    assert _back(csv_bytes(rows))[1][1] == "'" + text
    cell = load_workbook(io.BytesIO(xlsx_bytes(rows, "Schedule")))["Schedule"]["B2"]
    assert (cell.value, cell.data_type) == (text, "s")
    # and what this program wrote it reads as it was
    for name, data in (("a.csv", csv_bytes(rows)), ("a.xlsx", xlsx_bytes(rows, "Schedule"))):
        sheet, problems = read(tmp_path, data, name)
        assert not problems and texts(sheet)[1][1] == text


def test_a_number_is_a_number() -> None:
    assert _back(csv_bytes((("a", "b"), ("-1.5", "0.88"))))[1] == ["-1.5", "0.88"]
    sheet = load_workbook(io.BytesIO(xlsx_bytes(ROWS, "Schedule")))["Schedule"]
    assert [sheet["C2"].value, sheet["C3"].value, sheet["C4"].value] == [0.88, -1.5, "1,029"]


def test_a_workbook_is_read_back_by_the_library() -> None:
    book = load_workbook(io.BytesIO(xlsx_bytes(ROWS, "A & B")))
    assert book.sheetnames == ["A & B"]
    sheet = book["A & B"]
    assert [cell.value for cell in sheet[2]] == ["B1", "16 in × 28 in", 0.88, 'stirrup: #4, "closed"']
    assert sheet["D3"].value == "<a> & b" and sheet["B4"].value is None and sheet["D4"].value == "two\nlines"
    assert sheet.freeze_panes == "A2" and sheet["A1"].font.b


def test_the_same_rows_give_the_same_bytes() -> None:
    data = xlsx_bytes(ROWS, "Schedule")
    assert data == xlsx_bytes(ROWS, "Schedule")
    assert data.startswith(XLSX_MARK)
    with ZipFile(io.BytesIO(data)) as archive:
        assert {part.date_time for part in archive.infolist()} == {(2000, 1, 1, 0, 0, 0)}
        assert b"2000-01-01T00:00:00Z" in archive.read("docProps/core.xml")


def test_characters_xml_has_no_place_for_are_dropped() -> None:
    sheet = load_workbook(io.BytesIO(xlsx_bytes((("a",), ("x\x00y_x0041_",)), "S")))["S"]
    assert sheet["A2"].value in ("xy_x0041_", "xy_x005F_x0041_")
