"""The whole package: parts -> numbered sheets, title blocks, index, cover and bookmarks.

`report.model.Report` + fonts -> `layout.model.Pages`. Parts are laid out first; then the index can name
their sheets, and last the cover can count them. Sheets are numbered inside their part, so that a part
that grows moves no other part's numbers. Knows the order of work; what stands on a sheet is decided in
`flow`.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import astuple, dataclass
from functools import partial

from calcreport.core.kept import FRESH, Fresh
from calcreport.layout.banner import banner_items
from calcreport.layout.cover import set_cover
from calcreport.layout.filling import Body
from calcreport.layout.flow import flow
from calcreport.layout.fonts import Fonts
from calcreport.layout.index import Extent, index_blocks
from calcreport.layout.kit import MATH, SYMBOL_CAP, Kit
from calcreport.layout.marks import Marks
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Bookmark, Box, Item, Page, Pages, Placed
from calcreport.layout.sheet import Sheet, sheet_of
from calcreport.layout.titleblock import STRIP, frame_box, sheet_number, strip_items, title_block
from calcreport.layout.words import Lettering
from calcreport.report.model import (
    Block,
    CheckLine,
    Givens,
    Line,
    Part,
    Report,
    ResultBox,
    Statement,
    Table,
)


@dataclass(frozen=True, slots=True)
class _Desk:
    """What all parts share on one kind of sheet."""

    sheet: Sheet
    lettering: Lettering
    marks: Marks
    frame: Box
    #: the frame of sheets with a strip under its upper edge
    stripped: Box


def lay_out(report: Report, fonts: Fonts, kept: Fresh = FRESH) -> Pages:
    """Lay out a report; every item of every sheet at its place, numbers and links resolved."""
    lettering = Lettering(fonts, Formulas(fonts))
    marks = [part.mark for part in report.parts]
    if len(set(marks)) < len(marks):
        raise ValueError(f"two parts of one mark: {', '.join(marks)}")
    laned, wide = (_desk(report, lettering, lanes) for lanes in (True, False))
    bodies: dict[str, tuple[Body, ...]] = {}
    for part in report.parts:
        if part.index is None and part.cover is None:
            desk = laned if _needs_lanes(part) else wide
            inputs = (part.blocks, bool(part.strip), desk is laned, report.paper, part.clouded)
            bodies[part.mark] = kept.of("bodies", part.mark, inputs, partial(_bodies, desk, part, part.blocks))
    covers = [part for part in report.parts if part.cover is not None]
    for part in covers:
        bodies[part.mark] = _cover_bodies(wide, part, 0)
    _indexes(report, wide, bodies)
    count = sum(len(sheets) for sheets in bodies.values())
    for part in covers:
        bodies[part.mark] = _cover_bodies(wide, part, count)
    pages: list[Page] = []
    for part in report.parts:
        desk = laned if _needs_lanes(part) else wide
        rests_on = (bodies[part.mark], part.strip, part.kind, desk is laned, report.paper, astuple(part.facts))
        pages.extend(kept.of("pages", part.mark, rests_on, partial(_pages, desk, part, bodies[part.mark])))
    return Pages(
        width=wide.sheet.width,
        height=wide.sheet.height,
        title=report.title,
        author=report.author,
        subject=report.subject,
        language=report.language,
        date=report.date,
        pages=tuple(pages),
        bookmarks=tuple(_bookmarks(report.parts, bodies)),
    )


def sheet_label(part: Part, number: int) -> str:
    """Return the printed number of a part's sheet; a cover's first sheet is called by its mark alone."""
    return part.mark if part.kind == "cover" and number == 1 else f"{part.mark}-{number}"


def _desk(report: Report, lettering: Lettering, lanes: bool) -> _Desk:
    sheet = sheet_of(report.paper, lanes)
    return _Desk(sheet, lettering, Marks(sheet, lettering), frame_box(sheet), frame_box(sheet, True))


def _needs_lanes(part: Part) -> bool:
    """Tell whether a part has numbered lines, and so needs number lane and source lane."""
    numbered = (Line, CheckLine, Givens, Statement, ResultBox)
    return part.kind == "calculation" or any(
        isinstance(block, numbered) or (isinstance(block, Table) and block.number > 0) for block in part.blocks
    )


def _bodies(desk: _Desk, part: Part, blocks: tuple[Block, ...]) -> tuple[Body, ...]:
    """Lay out the blocks of one part."""
    kit = Kit(desk.sheet, desk.lettering, desk.marks, _symbol_column(desk.lettering, blocks), part.clouded)
    top = desk.sheet.body_top + (STRIP if part.strip else 0.0)
    return flow(kit, blocks, top)


def _symbol_column(lettering: Lettering, blocks: tuple[Block, ...]) -> float:
    """Return the width of the widest symbol that is not beyond the cap."""
    boxes = (lettering.formulas.box(block.symbol, MATH, "text") for block in blocks if isinstance(block, Line))
    return max((box.width for box in boxes if box.width <= SYMBOL_CAP), default=20.0)


def _cover_bodies(desk: _Desk, part: Part, count: int) -> tuple[Body, ...]:
    """Lay out a cover; lists that do not fit it go on further sheets of its part, in two columns."""
    assert part.cover is not None
    sheet = desk.sheet
    cover = set_cover(sheet, desk.lettering, part.cover, sheet_label(part, 1), count)
    bodies = [Body(cover.items, sheet.foot)]
    column, y = 2, sheet.body_foot
    items: list[Item] = []
    for piece in cover.rest:
        if y + piece.before + piece.height > sheet.body_foot:
            column, y = column + 1, sheet.body_top
            if column > 1:
                column, items = 0, []
                bodies.append(Body((), sheet.body_foot))
        y += piece.before if y > sheet.body_top else 0.0
        x = column * (sheet.right - sheet.left) / 2
        items.append(Placed(x, y, Box(sheet.width, 0.0, piece.height, piece.items)))
        bodies[-1] = Body(tuple(items), sheet.body_foot)
        y += piece.height
    return tuple(bodies)


def _indexes(report: Report, desk: _Desk, bodies: dict[str, tuple[Body, ...]]) -> None:
    """Lay out the index parts, again if their own length moves the pages they name."""
    indexes = [part for part in report.parts if part.index is not None]
    for part in indexes:
        bodies[part.mark] = (Body((), desk.sheet.body_top),)
    for _ in range(3):
        before = [len(bodies[part.mark]) for part in indexes]
        extents = _extents(report.parts, bodies)
        for part in indexes:
            assert part.index is not None
            bodies[part.mark] = _bodies(desk, part, (*part.blocks, *index_blocks(part.index, extents)))
        if before == [len(bodies[part.mark]) for part in indexes]:
            return


def _extents(parts: Iterable[Part], bodies: dict[str, tuple[Body, ...]]) -> dict[str, Extent]:
    extents: dict[str, Extent] = {}
    page = 1
    for part in parts:
        count = len(bodies[part.mark])
        extents[part.mark] = Extent(sheet_label(part, 1), sheet_label(part, count), page)
        page += count
    return extents


def _pages(desk: _Desk, part: Part, bodies: tuple[Body, ...]) -> tuple[Page, ...]:
    """Number the sheets of a part and put frame and title block round their bodies."""
    sheet, lettering = desk.sheet, desk.lettering
    block = title_block(sheet, lettering, part.facts)
    frame = Placed(0.0, 0.0, desk.stripped if part.strip else desk.frame)
    strip = strip_items(sheet, lettering, part.strip) if part.strip else ()
    facts = part.facts
    # strokes keep off the cover, whose seal area stays clear
    banner, banner_struck = (
        banner_items(sheet, lettering, facts.banner, strokes) if facts.banner else () for strokes in (0, facts.strokes)
    )
    count = len(bodies)
    pages: list[Page] = []
    for number, body in enumerate(bodies, start=1):
        label = sheet_label(part, number)
        around: tuple[Item, ...]
        if part.kind == "cover" and number == 1:
            around = (Placed(0.0, 0.0, frame_box(sheet, foot=False)), *banner)
        else:
            around = (frame, Placed(0.0, 0.0, block), *sheet_number(sheet, lettering, label, count), *banner_struck)
        pages.append(Page(label, part.mark, number, count, (*strip, *body.items), around))
    return tuple(pages)


def _bookmarks(parts: Iterable[Part], bodies: dict[str, tuple[Body, ...]]) -> Iterable[Bookmark]:
    """Give one entry a part and under it one a sheet."""
    for part in parts:
        same = part.title.casefold() == part.mark.casefold()
        marked = part.title.startswith(f"{part.mark}  ")
        title = part.mark if same else part.title if marked else f"{part.mark}  {part.title}"
        yield Bookmark(title, sheet_label(part, 1), 0)
        for number in range(1, len(bodies[part.mark]) + 1):
            label = sheet_label(part, number)
            yield Bookmark(label, label, 1)
