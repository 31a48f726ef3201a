"""Tables as bytes: CSV, and XLSX of one plain sheet. Rows of text in, the same bytes for the same rows.

Every cell is text or a plain number. Text that begins like a formula is kept from being taken for one: by its type in
a workbook, by an apostrophe before it in CSV. Knows nothing of what the columns mean.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from datetime import datetime
from io import BytesIO
from zipfile import ZIP_DEFLATED, ZipFile, ZipInfo

from calcreport.core.late import load

_NUMBER = re.compile(r"-?[0-9]{1,15}(?:\.[0-9]{1,15})?")
#: signs a spreadsheet program takes for the beginning of a formula
_FORMULA = ("=", "+", "-", "@", "\t", "\r")
#: characters XML 1.0 has no place for
_NO_XML = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
#: the date archives of this program bear, by which they are known again; nothing reads a clock
_DATE = (2000, 1, 1, 0, 0, 0)
XLSX_MARK = b"PK\x03\x04\x14\x00\x00\x00\x08\x00\x00\x00\x21\x28"
CSV_MARK = "\ufeff".encode()
#: widths of columns, in characters
_WIDEST, _NARROWEST = 60, 8
_LONGEST = 32_767


def csv_bytes(rows: Sequence[Sequence[str]]) -> bytes:
    """Return rows as comma-separated text: UTF-8 with its mark, lines ended as RFC 4180 has them."""
    return CSV_MARK + "".join(",".join(_csv_cell(cell) for cell in row) + "\r\n" for row in rows).encode()


def _csv_cell(text: str) -> str:
    if text.startswith(_FORMULA) and not _NUMBER.fullmatch(text):
        text = "'" + text
    return '"' + text.replace('"', '""') + '"' if re.search(r'[",\r\n;\t]|^\s|\s$', text) else text


def xlsx_bytes(rows: Sequence[Sequence[str]], name: str) -> bytes:
    """Return rows as a workbook of one sheet, the first row as headings that stay in sight.

    Characters XML has no place for are dropped; a cell holds 32,767 characters at most.
    """
    made = BytesIO()
    book = load("xlsxwriter").Workbook(made, {"in_memory": True})
    book.set_properties({"created": datetime(*_DATE)})
    sheet = book.add_worksheet(name)
    sheet.freeze_panes(1, 0)
    heading, plain = book.add_format({"bold": True}), book.add_format({"text_wrap": True, "valign": "top"})
    for at, column in enumerate(zip(*rows, strict=True)):
        sheet.set_column(at, at, min(max(*map(len, column), _NARROWEST), _WIDEST) + 2)
        for row, text in enumerate(column):
            style = plain if row else heading
            if _NUMBER.fullmatch(text):
                sheet.write_number(row, at, float(text), style)
            elif text:
                sheet.write_string(row, at, _NO_XML.sub("", text)[:_LONGEST], style)
    book.close()
    return _dated(made)


def _dated(made: BytesIO) -> bytes:
    """Return the archive anew with the date this program's workbooks are known by."""
    out = BytesIO()
    with ZipFile(made) as source, ZipFile(out, "w", ZIP_DEFLATED) as archive:
        for part in source.namelist():
            entry = ZipInfo(part, _DATE)
            entry.compress_type, entry.create_system, entry.external_attr = ZIP_DEFLATED, 0, 0
            archive.writestr(entry, source.read(part), compresslevel=6)
    return out.getvalue()
