"""Blocks of a part -> measured pieces: one function a kind, chosen by type.

`report.model` Block + lane -> tuple of `Piece`. Headings and paragraphs are set here, the numbered
kinds and tables in their own modules. Figures are drawn by `layout.figures`.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.layout.checks import set_check
from calcreport.layout.figures import draw
from calcreport.layout.givens import set_givens
from calcreport.layout.kit import Kit
from calcreport.layout.lines import set_line, set_result_box, set_statement
from calcreport.layout.model import Box, Item, Placed, Stroke
from calcreport.layout.pieces import Piece, Rows
from calcreport.layout.sharing import set_lines
from calcreport.layout.sheet import FRAME, HAIRLINE, Lane
from calcreport.layout.tables import set_table
from calcreport.layout.words import HEADINGS, PLAIN, QUIET, SMALL, TextStyle
from calcreport.report.model import (
    Block,
    CheckLine,
    FigureBlock,
    Givens,
    Heading,
    Line,
    Lines,
    Listing,
    Paragraph,
    ResultBox,
    Statement,
    Table,
    Words,
)

#: Words set wider than this are tiring to read.
MEASURE = 430.0
#: Paragraphs of more lines than this may part between sheets, two lines at least on each.
WHOLE = 6
#: Gap between headings that share a row.
APART = 16.0
#: Style of a file's lines, and room for their numbers.
FILE = TextStyle("regular", 7.5, 8.8)
NUMBERS = 26.0


def set_block(kit: Kit, block: Block, lane: Lane) -> tuple[Piece, ...]:
    """Set one block in a lane."""
    match block:
        case Line():
            return (set_line(kit, block, lane),)
        case Lines():
            return (set_lines(kit, block, lane),)
        case CheckLine():
            return (set_check(kit, block, lane),)
        case Statement():
            return (set_statement(kit, block, lane),)
        case ResultBox():
            return (set_result_box(kit, block, lane),)
        case Givens():
            return set_givens(kit, block, lane)
        case Table():
            return set_table(kit, block, lane)
        case Listing():
            return set_listing(kit, block, lane)
        case Heading():
            return (set_heading(kit, block, lane),)
        case Paragraph():
            return set_paragraph(kit, block, lane)
        case FigureBlock():
            return (set_figure(kit, block, lane),)


def stands_alone(block: Block) -> bool:
    """Tell whether a block needs the whole lane and so never stands beside a figure."""
    loud = isinstance(block, CheckLine) and block.verdict == "NG"
    return loud or isinstance(block, Table | FigureBlock | ResultBox)


def set_heading(kit: Kit, heading: Heading, lane: Lane) -> Piece:
    """Set a heading, those that follow it at once and their condition in its row; it stays with what follows."""
    style = HEADINGS.get(heading.level, HEADINGS[3])
    rows, x = Rows(), lane.left
    boxes: list[tuple[float, Box]] = []
    stretches: list[tuple[Words, TextStyle]] = [((text,), style) for text in (heading.text, *heading.then)]
    stretches += [(heading.since, SMALL)] if heading.since else []
    for words, own in stretches:
        lines = kit.lettering.set(words, own, lane.width)
        fits = len(lines) == 1 and x + lines[0].width <= lane.right
        if boxes and not fits:
            rows.row(boxes, style.leading, 0.0)
            boxes, x = [], lane.left
        if len(lines) > 1:
            rows.words(lines[:-1], own, lane.left)
        boxes.extend((x, line) for line in lines[-1:])
        x += lines[-1].width + APART if lines else 0.0
    if boxes:
        rows.row(boxes, style.leading, 0.0)
    return Piece(rows.y, tuple(rows.items), 7.5 - 1.5 * heading.level, keep=True)


def set_paragraph(kit: Kit, paragraph: Paragraph, lane: Lane) -> tuple[Piece, ...]:
    """Set running text: a note smaller, a caution and an assumption beside a bar."""
    style = QUIET if paragraph.kind == "note" else PLAIN
    barred = paragraph.kind in ("caution", "assumption")
    left = lane.left + (8.0 if barred else 0.0)
    width = min(lane.right - left, MEASURE)
    lines = kit.lettering.set(paragraph.words, style, width)
    groups = (lines,) if len(lines) <= WHOLE else tuple((line,) for line in lines)
    pieces: list[Piece] = []
    for place, group in enumerate(groups):
        rows = Rows()
        rows.words(group, style, left)
        items: list[Item] = list(rows.items)
        if barred:
            weight = FRAME * 1.4 if paragraph.kind == "caution" else HAIRLINE
            items.insert(0, Stroke(((lane.left + 1.0, 0.0), (lane.left + 1.0, rows.y)), weight))
        if place == 0 and paragraph.source.citation:
            placed, foot = kit.marks.source(paragraph.source, PLAIN.rise, rows.y)
            items.extend(placed)
            rows.y = max(rows.y, foot)
        keep = len(groups) > 1 and place in (0, len(groups) - 2)
        keep = keep or (place == len(groups) - 1 and _announces(paragraph))
        pieces.append(Piece(rows.y, tuple(items), 4.5 if place == 0 else 0.0, keep=keep))
    return tuple(pieces)


def set_listing(kit: Kit, listing: Listing, lane: Lane) -> tuple[Piece, ...]:
    """Set the lines of a file close under one another, each with its number; a long line hangs."""
    pieces: list[Piece] = []
    left = lane.left + NUMBERS
    for number, text in enumerate(listing.lines, 1):
        rows = Rows()
        label = kit.lettering.label(str(number), FILE.face, FILE.size)
        lines = kit.lettering.set((text,), FILE, lane.right - left) if text else ()
        baseline = rows.words(lines, FILE, left) if lines else FILE.leading - 2.0
        rows.items.append(Placed(left - 8.0 - label.width, baseline, label))
        pieces.append(
            Piece(max(rows.y, FILE.leading), tuple(rows.items), 3.0 if number == 1 else 0.0, keep=number == 1)
        )
    return tuple(pieces)


def _announces(paragraph: Paragraph) -> bool:
    """Tell whether words end with a colon, and so belong to what follows."""
    last = paragraph.words[-1] if paragraph.words else ""
    return isinstance(last, str) and last.rstrip().endswith(":")


def set_figure(kit: Kit, block: FigureBlock, lane: Lane) -> Piece:
    """Draw a figure at the left of the lane, its caption under it."""
    formulas = kit.lettering.formulas
    box = draw(formulas, block.figure, lane.width)
    rows = Rows(2.0)
    rows.items.append(Placed(lane.left, rows.y + box.ascent, box))
    rows.y += box.ascent + box.descent + 3.0
    rows.words(kit.lettering.set(block.caption, QUIET, lane.width), QUIET, lane.left)
    return Piece(rows.y, tuple(rows.items), 6.0)


def narrowed(lane: Lane, width: float) -> Lane:
    """Return the lane left of a figure of that width."""
    return replace(lane, right=lane.right - width - 12.0)
