"""Tables as bytes: CSV, and XLSX of one plain sheet. Rows of text in, the same bytes for the same rows.

Every cell is text or a plain number. Text that begins like a formula is kept from being taken for one: by its type in
a workbook, by an apostrophe before it in CSV. Knows nothing of what the columns mean.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from io import BytesIO
from zipfile import ZIP_DEFLATED, ZipFile, ZipInfo

from calcreport.core.source import column_letters

_NUMBER = re.compile(r"-?[0-9]{1,15}(?:\.[0-9]{1,15})?")
#: signs a spreadsheet program takes for the beginning of a formula
_FORMULA = ("=", "+", "-", "@", "\t", "\r")
#: characters XML 1.0 has no place for
_NO_XML = re.compile("[^\t\n\r\x20-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
#: the date archives of this program bear, by which they are known again; nothing reads a clock
_DATE = (2000, 1, 1, 0, 0, 0)
XLSX_MARK = b"PK\x03\x04\x14\x00\x00\x00\x08\x00\x00\x00\x21\x28"
CSV_MARK = "\ufeff".encode()
_WIDEST, _NARROWEST = 60, 8

_HEAD = '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n'
_MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
_OFFICE = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_PACKAGE = "http://schemas.openxmlformats.org/package/2006"
_KIND = "application/vnd.openxmlformats-officedocument.spreadsheetml"
_PARTS = {
    "[Content_Types].xml": f'<Types xmlns="{_PACKAGE}/content-types">'
    '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
    '<Default Extension="xml" ContentType="application/xml"/>'
    f'<Override PartName="/xl/workbook.xml" ContentType="{_KIND}.sheet.main+xml"/>'
    f'<Override PartName="/xl/worksheets/sheet1.xml" ContentType="{_KIND}.worksheet+xml"/>'
    f'<Override PartName="/xl/styles.xml" ContentType="{_KIND}.styles+xml"/></Types>',
    "_rels/.rels": f'<Relationships xmlns="{_PACKAGE}/relationships">'
    f'<Relationship Id="rId1" Type="{_OFFICE}/officeDocument" Target="xl/workbook.xml"/></Relationships>',
    "xl/_rels/workbook.xml.rels": f'<Relationships xmlns="{_PACKAGE}/relationships">'
    f'<Relationship Id="rId1" Type="{_OFFICE}/worksheet" Target="worksheets/sheet1.xml"/>'
    f'<Relationship Id="rId2" Type="{_OFFICE}/styles" Target="styles.xml"/></Relationships>',
    # style 0 is plain, 1 the headings, 2 wrapped text
    "xl/styles.xml": f'<styleSheet xmlns="{_MAIN}"><fonts count="2"><font><sz val="10"/><name val="Arial"/></font>'
    '<font><b/><sz val="10"/><name val="Arial"/></font></fonts><fills count="2"><fill><patternFill '
    'patternType="none"/></fill><fill><patternFill patternType="gray125"/></fill></fills><borders count="1"><border>'
    '<left/><right/><top/><bottom/><diagonal/></border></borders><cellStyleXfs count="1"><xf/></cellStyleXfs>'
    '<cellXfs count="3"><xf fontId="0"/><xf fontId="1" applyFont="1"/><xf fontId="0" applyAlignment="1">'
    '<alignment vertical="top" wrapText="1"/></xf></cellXfs><cellStyles count="1"><cellStyle name="Normal" xfId="0" '
    'builtinId="0"/></cellStyles></styleSheet>',
}


def csv_bytes(rows: Sequence[Sequence[str]]) -> bytes:
    """Return rows as comma-separated text: UTF-8 with its mark, lines ended as RFC 4180 has them."""
    return CSV_MARK + "".join(",".join(_csv_cell(cell) for cell in row) + "\r\n" for row in rows).encode()


def _csv_cell(text: str) -> str:
    if text.startswith(_FORMULA) and not _NUMBER.fullmatch(text):
        text = "'" + text
    return '"' + text.replace('"', '""') + '"' if re.search(r'[",\r\n;\t]|^\s|\s$', text) else text


def xlsx_bytes(rows: Sequence[Sequence[str]], name: str) -> bytes:
    """Return rows as a workbook of one sheet, the first row as headings that stay in sight."""
    out = BytesIO()
    parts = {
        **_PARTS,
        "xl/workbook.xml": f'<workbook xmlns="{_MAIN}" xmlns:r="{_OFFICE}"><sheets><sheet name="{_escaped(name)}" '
        'sheetId="1" r:id="rId1"/></sheets></workbook>',
        "xl/worksheets/sheet1.xml": _sheet(rows),
    }
    with ZipFile(out, "w", ZIP_DEFLATED) as archive:
        for path, text in parts.items():
            part = ZipInfo(path, _DATE)
            part.compress_type = ZIP_DEFLATED
            part.create_system, part.external_attr = 0, 0
            archive.writestr(part, (_HEAD + text).encode(), compresslevel=6)
    return out.getvalue()


def _sheet(rows: Sequence[Sequence[str]]) -> str:
    columns = "".join(
        f'<col min="{at}" max="{at}" width="{min(max(*map(len, column), _NARROWEST), _WIDEST) + 2}" customWidth="1"/>'
        for at, column in enumerate(zip(*rows, strict=True), 1)
    )
    found = []
    for number, row in enumerate(rows, 1):
        style = 1 if number == 1 else 2
        cells = "".join(_cell(f"{column_letters(at)}{number}", text, style) for at, text in enumerate(row) if text)
        found.append(f'<row r="{number}">{cells}</row>')
    pane = '<pane ySplit="1" topLeftCell="A2" activePane="bottomLeft" state="frozen"/>'
    return (
        f'<worksheet xmlns="{_MAIN}"><sheetViews><sheetView workbookViewId="0">{pane}</sheetView></sheetViews>'
        f"<cols>{columns}</cols><sheetData>{''.join(found)}</sheetData></worksheet>"
    )


def _cell(place: str, text: str, style: int) -> str:
    if _NUMBER.fullmatch(text):
        return f'<c r="{place}" s="{style}"><v>{text}</v></c>'
    words = f'<is><t xml:space="preserve">{_escaped(text)}</t></is>'
    return f'<c r="{place}" s="{style}" t="inlineStr">{words}</c>'


def _escaped(text: str) -> str:
    """Return text as XML has it; characters it has no place for are dropped, `_x0041_` stays as it is."""
    text = re.sub(r"_(?=x[0-9A-Fa-f]{4}_)", "_x005F_", _NO_XML.sub("", text))
    return text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;").replace('"', "&quot;")
