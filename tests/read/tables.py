"""Tables written for tests: workbooks by the library, archives by hand; and a table read out of a folder."""

from __future__ import annotations

import io
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

from openpyxl import Workbook

from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source, Span
from calcreport.filesystem import Disk
from calcreport.read.nodes import Scalar
from calcreport.read.sheets import Sheet, read_sheet

ROWS = (("Mark", "Width (in)", "Bars"), ("B1", 16, "4-#8"), ("B2", 14.5, "5-#8"), ("B3", 12, "3-#8"))


def named(text: str) -> Scalar:
    """Return text as a node of a project file."""
    source = Source("project.yaml", text)
    return Scalar(text, Span(source, 0, len(text)), True)


def book(change: Callable[[Any], None] | None = None, rows: tuple[tuple[object, ...], ...] = ROWS) -> bytes:
    """Return a workbook with one sheet, `Beams`, after a change to it."""
    workbook = Workbook()
    sheet = workbook.active
    assert sheet is not None
    sheet.title = "Beams"
    for row in rows:
        sheet.append(row)
    if change is not None:
        change(sheet)
    out = io.BytesIO()
    workbook.save(out)
    return out.getvalue()


def repacked(data: bytes, changes: dict[str, bytes]) -> bytes:
    """Return an archive with parts changed or added."""
    with zipfile.ZipFile(io.BytesIO(data)) as archive:
        parts = {part.filename: archive.read(part) for part in archive.infolist()}
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, text in (parts | changes).items():
            archive.writestr(name, text)
    return out.getvalue()


def read(
    folder: Path, data: bytes | str, name: str = "beams.xlsx", sheet: str | None = None
) -> tuple[Sheet | None, tuple[Problem, ...]]:
    """Write a table into a folder and read it."""
    (folder / name).write_bytes(data if isinstance(data, bytes) else data.encode())
    problems = Problems()
    chosen = named(sheet) if sheet is not None else None
    found = read_sheet(Disk(folder, folder), named(name), chosen, Source("project.yaml", "", "there"), problems)
    return found, problems.sorted()


def texts(sheet: Sheet | None) -> list[list[str]]:
    """Return the texts of all cells."""
    assert sheet is not None
    return [[row.cell(index).text for index in range(len(row.bounds))] for row in sheet.rows]
