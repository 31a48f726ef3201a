"""Comma-, semicolon- and tab-separated tables: what is read, where it stands, what is refused."""

from __future__ import annotations

import csv
import io
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.filesystem import Disk
from calcreport.read.sheets import LONGEST_CELL, MOST_COLUMNS, MOST_ROWS, _records, read_sheet
from tests.read.tables import named, read, texts


@pytest.mark.parametrize("sign", [",", ";", "\t"])
def test_what_parts_the_columns_is_told_from_the_lines(tmp_path: Path, sign: str) -> None:
    text = f"Mark{sign}Title, short; plain\nB1{sign}beam\nB2{sign}beam\n".replace("Title, short; plain", "Title")
    sheet, problems = read(tmp_path, text, "beams.csv")
    assert not problems
    assert texts(sheet) == [["Mark", "Title"], ["B1", "beam"], ["B2", "beam"]]
    assert sheet is not None and sheet.commas == (sign == ";")


def test_commas_inside_the_cells_of_a_tabbed_table(tmp_path: Path) -> None:
    sheet, _ = read(tmp_path, "Mark\tLoad\nB1\t1,200 lb\nB2\t900 lb\n", "beams.txt")
    assert texts(sheet)[1] == ["B1", "1,200 lb"]


def test_quotes_marks_of_other_editors_and_line_ends(tmp_path: Path) -> None:
    data = '\ufeffMark,Depth,Note\r\nB1,"18\'-6""","wide,\r\nlow"\r\n\r\nB2,2′-6″,  two   words \r\n'
    sheet, problems = read(tmp_path, data, "beams.csv")
    assert not problems
    # primes are the marks of feet and inches; white space is made single
    assert texts(sheet) == [["Mark", "Depth", "Note"], ["B1", "18'-6\"", "wide, low"], ["B2", "2'-6\"", "two words"]]
    assert sheet is not None
    # a spreadsheet counts the record with a line end inside it as one row, and the blank one too
    assert [row.number for row in sheet.rows] == [1, 2, 4]
    assert [row.cell(1).span.place.partition(":")[2] for row in sheet.rows] == ["1:6", "2:5", "5:4"]


def test_a_row_that_is_shorter_ends_in_empty_cells(tmp_path: Path) -> None:
    sheet, _ = read(tmp_path, "Mark,Width,Bars\nB1,16\n", "beams.csv")
    assert sheet is not None
    assert sheet.rows[1].cell(2).is_empty and sheet.rows[1].cell(2).span.place.endswith(":2:6")


@pytest.mark.parametrize(("text", "empty"), [("", True), ("-", True), ("—", True), ("0", False), ("none", False)])
def test_a_dash_alone_is_an_empty_cell(tmp_path: Path, text: str, empty: bool) -> None:
    sheet, _ = read(tmp_path, f"Mark,Width\nB1,{text}\n", "beams.csv")
    assert sheet is not None and sheet.rows[1].cell(1).is_empty is empty


def test_the_apostrophe_before_text_like_a_formula_is_taken_away(tmp_path: Path) -> None:
    sheet, _ = read(tmp_path, "Mark,Note\nB1,'=1+1\nB2,'tis\n", "beams.csv")
    assert [row[1] for row in texts(sheet)[1:]] == ["=1+1", "'tis"]


@pytest.mark.parametrize(
    ("data", "slug", "place"),
    [
        ('Mark,Width\nB1,"16\n', "bad-table", ":2:4"),
        ('Mark,Width\nB1,"16"x\n', "bad-table", ":2:4"),
        # a ditto mark
        ('Mark,Width\nB1,16\nB2,"\n', "bad-table", ":3:4"),
        ("Mark,Width\nB1,\x001\n", "odd-character", ":2:4"),
        (b"Mark,Width\nB1,\xb2\n", "no-file", ""),
        ("Mark\n".encode("utf-16"), "no-file", ""),
        ("", "bad-table", ""),
        (" \n\n", "bad-table", ""),
        ("M\n" * (MOST_ROWS + 1), "file-too-large", ""),
        ("M," * MOST_COLUMNS + "\n", "file-too-large", ""),
        ("M," + "x" * (LONGEST_CELL + 1) + "\n", "file-too-large", ":1:3"),
    ],
)
def test_refused(tmp_path: Path, data: bytes | str, slug: str, place: str) -> None:
    sheet, problems = read(tmp_path, data, "beams.csv")
    assert sheet is None
    assert [problem.slug for problem in problems] == [slug]
    span = problems[0].span
    assert span is not None and span.place.endswith(place)


@pytest.mark.parametrize("name", ["../beams.csv", "/etc/hosts.csv", "none.csv", "../beams.xlsx", "none.xlsx"])
def test_nothing_outside_the_folder_is_read(tmp_path: Path, name: str) -> None:
    folder = tmp_path / "project"
    folder.mkdir()
    (tmp_path / "beams.csv").write_text("Mark\n")
    (tmp_path / "beams.xlsx").write_bytes(b"PK")
    (folder / "link.csv").symlink_to("../beams.csv")
    for one in (name, "link.csv"):
        problems = Problems()
        assert read_sheet(Disk(folder, folder), named(one), None, Source("", ""), problems) is None
        assert [problem.slug for problem in problems.sorted()] == ["no-file"]


_CELL = st.text(alphabet="ab,;\t\"' \n#8", max_size=8)


@settings(max_examples=200, deadline=None)
@given(st.lists(st.lists(_CELL, min_size=2, max_size=4), min_size=1, max_size=5), st.sampled_from(",;\t"))
def test_cells_are_those_the_standard_library_reads(rows: list[list[str]], sign: str) -> None:
    # written and read by the csv module of Python; the bounds of every cell are this program's
    out = io.StringIO()
    csv.writer(out, delimiter=sign, lineterminator="\n").writerows(rows)
    text = out.getvalue()
    found = _records(Source("a.csv", text), sign, Problems())
    assert found is not None
    cells = [[text[start:end].replace('""', '"') for start, end in record] for record in found[1]]
    assert cells == list(csv.reader(io.StringIO(text, newline=""), delimiter=sign))


def test_many_quotes_take_no_more_than_their_time(tmp_path: Path) -> None:
    text = "Mark,Note\n" + 'B1,"' + '""' * 400 + '"\n' + 'B2,"' + 'x""' * 100_000
    sheet, problems = read(tmp_path, text, "beams.csv")
    assert sheet is None and problems[0].slug == "bad-table"
