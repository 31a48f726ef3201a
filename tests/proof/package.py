"""A finished PDF read once: pages with their ink, tables, links and names, and the calculations on them.

In: the path of a PDF. Out: `Package`. Judges nothing.
"""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from pypdf import PdfReader

from .calculations import Calculation, assemble
from .frames import Frame, find_frame, sheet_name
from .glyphs import Glyph, PageInk, Reader
from .pieces import spaced
from .sheets import SheetPage, read_sheet
from .tables import Table, find_tables


@dataclass(slots=True)
class Page:
    """One page of the package."""

    index: int
    ink: PageInk
    frame: Frame
    name: str
    label: str
    text: str
    tables: list[Table]
    #: (text inside the area, page index, height) of every link
    links: list[Link]


@dataclass(frozen=True, slots=True)
class Link:
    """A link: the text it stands on, its place, and where it leads."""

    text: str
    x: float
    y: float
    page: int
    top: float | None


#: mark of the sheet that repeats lines of others
SAMPLER = "SAMPLER"


@dataclass(slots=True)
class Package:
    """A finished PDF, read once."""

    path: Path
    reader: PdfReader
    pages: list[Page]
    sheets: list[SheetPage]
    calculations: list[Calculation]
    fonts: list[tuple[str, bool]]
    annotations: Counter[str] = field(default_factory=Counter)
    #: sheets with lanes that repeat lines of calculations; no calculation themselves
    sampler: list[SheetPage] = field(default_factory=list)


def read_package(path: Path) -> Package:
    """Read a package; every page once."""
    reader = PdfReader(path)
    glyphs = Reader()
    numbers = {page.indirect_reference.idnum: i for i, page in enumerate(reader.pages) if page.indirect_reference}
    pages, sheets = [], []
    annotations: Counter[str] = Counter()
    for index, page in enumerate(reader.pages):
        ink = glyphs.read(page)
        frame = find_frame(ink) or Frame(0, ink.width, ink.height, 0, 0, None)
        links = list(_links(page, ink, numbers, annotations))
        sheet = read_sheet(ink, index)
        if sheet is not None:
            sheet.text = page_text(ink)
            sheets.append(sheet)
        body = [g for g in ink.glyphs if g.text != " " and g.y > frame.block]
        tables = [] if sheet is not None else find_tables(body, ink.lines, index)[0]
        label = reader.page_labels[index]
        pages.append(Page(index, ink, frame, sheet_name(ink, frame), label, page_text(ink), tables, links))
    fonts = [(face.name, face.embedded) for face in glyphs.faces]
    own, sampler = ([s for s in sheets if (s.mark == SAMPLER) is other] for other in (False, True))
    return Package(path, reader, pages, own, assemble(own), fonts, annotations, sampler)


def page_text(ink: PageInk) -> str:
    """Return the text of a page by rows, for a search of words."""
    rows: dict[float, list[Any]] = defaultdict(list)
    for glyph in ink.glyphs:
        rows[round(glyph.y, 1)].append(glyph)
    return "\n".join(re.sub(r" +", " ", spaced(rows[y])) for y in sorted(rows, reverse=True))


def _links(page: Any, ink: PageInk, numbers: dict[int, int], kinds: Counter[str]) -> Iterator[Link]:
    shelves: dict[int, list[Glyph]] = defaultdict(list)
    for glyph in ink.glyphs:
        shelves[int(glyph.y // 10)].append(glyph)
    for reference in page.get("/Annots", []):
        annotation = reference.get_object()
        kinds[annotation["/Subtype"]] += 1
        if annotation["/Subtype"] != "/Link":
            continue
        x0, y0, x1, y1 = (float(v) for v in annotation["/Rect"])
        near = [g for shelf in range(int(y0 // 10), int(y1 // 10) + 1) for g in shelves[shelf]]
        inside = [g for g in near if x0 - 0.5 <= (g.left + g.right) / 2 <= x1 + 0.5 and y0 - 0.5 <= g.y <= y1 + 0.5]
        target = annotation.get("/Dest") or annotation["/A"]["/D"]
        top = float(target[3]) if target[1] == "/XYZ" and target[3] is not None else None
        yield Link(spaced(inside).strip(), x0, y0, numbers[target[0].idnum], top)
