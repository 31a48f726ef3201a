"""Frame, lane rules, strip and title block: what stands round the body of every sheet.

`report.model.TitleFacts` -> `Box`es made once a part, and the few items that differ by sheet. The boxes
for originator, checker and back-checker are ruled and left blank: they are for pens. Nothing here says
that anyone has looked at the sheet.
"""

from __future__ import annotations

from calcreport.layout.model import Box, Item, Placed, Stroke
from calcreport.layout.sheet import FRAME, HAIRLINE, HEAVY, MM, Sheet
from calcreport.layout.words import RISE, Lettering, TextStyle
from calcreport.report.model import TitleFacts

#: Height of the strip under the upper frame edge.
STRIP = 17.0
#: Widths of the project cell and the blank boxes; the subject cell takes what is left.
_PROJECT, _BOXES = 46 * MM, 45 * MM
_PAD = 4.5
_LABEL = 6.0

_NAME = (TextStyle("semibold", 8.5, 10.5), TextStyle("semibold", 7.5, 9), TextStyle("semibold", 6.5, 8))
_FACT = (TextStyle("regular", 8.5, 10.5), TextStyle("regular", 7.5, 9), TextStyle("regular", 6.5, 8))
_STATUS = (TextStyle("semibold", 10, 12), TextStyle("semibold", 8.5, 10), TextStyle("semibold", 7, 8.5))
_FINE = (TextStyle("regular", 7.5, 9), TextStyle("regular", 6.5, 7.8))


def frame_box(sheet: Sheet, strip: bool = False, foot: bool = True) -> Box:
    """Return frame, lane rules (from under the strip) and upper edge of the title block; sheet coordinates."""
    left, right, top, base = sheet.left, sheet.right, sheet.top, sheet.foot
    items: list[Item] = []
    if sheet.lanes:
        head = top + STRIP if strip else top
        items.extend(rule(x, head, x, sheet.block) for x in (sheet.work, sheet.source))
    if foot:
        items.append(Stroke(((left, sheet.block), (right, sheet.block)), FRAME))
    items.append(Stroke(((left, top), (right, top), (right, base), (left, base)), FRAME, closed=True))
    return Box(sheet.width, 0.0, sheet.height, tuple(items))


def title_block(sheet: Sheet, lettering: Lettering, facts: TitleFacts) -> Box:
    """Return the title block without its sheet number, in sheet coordinates."""
    boxes_left = sheet.source - _BOXES
    subject_left = sheet.left + _PROJECT
    items: list[Item] = [rule(x, sheet.block, x, sheet.foot) for x in (subject_left, boxes_left, sheet.source)]
    items.extend(_project(sheet, lettering, facts, subject_left))
    items.extend(_subject(sheet, lettering, facts, subject_left, boxes_left))
    items.extend(_blank_boxes(sheet, lettering, boxes_left))
    items.extend(_revision(sheet, lettering, facts))
    return Box(sheet.width, 0.0, sheet.height, tuple(items))


def sheet_number(sheet: Sheet, lettering: Lettering, label: str, count: int) -> tuple[Item, ...]:
    """Return the large sheet number with its count."""
    room = sheet.right - sheet.source - 2 * _PAD
    right = sheet.right - _PAD
    size = next((size for size in (16, 14, 12, 10, 8) if _wide(lettering, label, size) <= room), 7)
    number = lettering.label(label, "semibold", size)
    of = lettering.label(f"of {count}", "regular", 8.5)
    return (
        Placed(right - number.width, sheet.foot - 19.0, number),
        Placed(right - of.width, sheet.foot - 6.5, of),
    )


def strip_items(sheet: Sheet, lettering: Lettering, words: str) -> tuple[Item, ...]:
    """Return the strip that names failing checks under the upper edge of the frame."""
    foot = sheet.top + STRIP
    right = sheet.work if sheet.lanes else sheet.left + 10 * MM
    bar = ((sheet.left, sheet.top), (right, sheet.top), (right, foot), (sheet.left, foot))
    room = sheet.right - right - 12.0
    style = TextStyle("semibold", 9, 11)
    text = clipped(lettering, words, style, room)
    return (
        Stroke(bar, 0.0, closed=True, fill=0.0),
        Stroke(((sheet.left, foot), (sheet.right, foot)), HEAVY),
        *lettering.fonts.run(text, style.face, style.size, right + 7.0, foot - 5.6),
    )


def rule(x0: float, y0: float, x1: float, y1: float, width: float = HAIRLINE) -> Stroke:
    """Return a straight rule."""
    return Stroke(((x0, y0), (x1, y1)), width)


def cell_label(lettering: Lettering, text: str, x: float, y: float) -> Placed:
    """Place the small name of a cell under its upper edge `y`."""
    return Placed(x + _PAD, y + 2.0 + RISE * _LABEL, lettering.label(text, "regular", _LABEL))


def fitted(
    lettering: Lettering, text: str, styles: tuple[TextStyle, ...], width: float, height: float
) -> tuple[tuple[Box, ...], TextStyle]:
    """Set text in the first style that keeps it within width and height; the last one is cut short."""
    for style in styles:
        lines = lettering.set((text,), style, width)
        if len(lines) * style.leading <= height + 0.01:
            return lines, style
    style = styles[-1]
    most = max(1, int(height / style.leading + 0.01))
    kept = lettering.set((text,), style, width)[:most]
    words = text.split()
    while words and len(lettering.set((" ".join(words) + " …",), style, width)) > most:
        words.pop()
    return (lettering.set((" ".join(words) + " …",), style, width) if words else kept), style


def clipped(lettering: Lettering, text: str, style: TextStyle, width: float) -> str:
    """Return text that fits one line, cut at a word and ended with an ellipsis if need be."""
    if lettering.width(text, style, style.face) <= width:
        return text
    words = text.split()
    while len(words) > 1 and lettering.width(" ".join(words) + " …", style, style.face) > width:
        words.pop()
    return " ".join(words) + " …"


def text_lines(lines: tuple[Box, ...], style: TextStyle, x: float, top: float) -> tuple[list[Item], float]:
    """Place text lines from `top` down; return them and the y below."""
    items: list[Item] = []
    for place, line in enumerate(lines):
        items.append(Placed(x, top + RISE * style.size + place * style.leading, line))
    return items, top + len(lines) * style.leading


def _split(sheet: Sheet) -> float:
    """Return the y of the rule that continues the lowest of the blank boxes to the left."""
    return sheet.block + 2 * (sheet.foot - sheet.block) / 3


def _wide(lettering: Lettering, text: str, size: float) -> float:
    return lettering.label(text, "semibold", size).width


def _project(sheet: Sheet, lettering: Lettering, facts: TitleFacts, right: float) -> list[Item]:
    """Name the project, its number, and the status of the sheet."""
    left, width = sheet.left + _PAD, right - sheet.left - 2 * _PAD
    split = _split(sheet)
    items: list[Item] = [cell_label(lettering, "PROJECT", sheet.left, sheet.block)]
    lines, style = fitted(lettering, facts.project, _NAME, width, 27.0)
    placed, y = text_lines(lines, style, left, sheet.block + 11.0)
    items.extend(placed)
    lines, style = fitted(lettering, facts.project_number, _FACT, width, split - y - 1.0)
    items.extend(text_lines(lines, style, left, y)[0])
    items.append(rule(sheet.left, split, right, split))
    lines, style = fitted(lettering, facts.status, _STATUS, width, 12.5)
    placed, y = text_lines(lines, style, left, split + 3.0)
    items.extend(placed)
    lines, style = fitted(lettering, facts.status_note, _FINE, width, sheet.foot - y - 1.0)
    items.extend(text_lines(lines, style, left, y)[0])
    return items


def _subject(sheet: Sheet, lettering: Lettering, facts: TitleFacts, left: float, right: float) -> list[Item]:
    """Name what is calculated, by which code, from which inputs, with which program."""
    x, width = left + _PAD, right - left - 2 * _PAD
    split = _split(sheet)
    items: list[Item] = [cell_label(lettering, "SUBJECT", left, sheet.block)]
    # Two spaces part the mark from the title; no-break spaces keep them.
    subject = facts.subject.replace("  ", "\u00a0\u00a0 ")
    lines, style = fitted(lettering, subject, _NAME, width, split - sheet.block - 13.0)
    items.extend(text_lines(lines, style, x, sheet.block + 11.0)[0])
    items.append(rule(left, split, right, split))
    inputs = "\u00a0\u00a0 ".join(text for text in (facts.fingerprint, facts.program) if text)
    rows = [text for text in (facts.code, inputs) if text]
    y = split + 2.2
    for text in rows:
        lines, style = fitted(lettering, text, _FINE, width, 9.0)
        items.extend(text_lines(lines, style, x, y)[0])
        y += 8.9
    return items


def _blank_boxes(sheet: Sheet, lettering: Lettering, left: float) -> list[Item]:
    """Rule the boxes for initials and date of the three people of a hand check; they stay blank."""
    step = (sheet.foot - sheet.block) / 3
    dates = left + 0.58 * (sheet.source - left)
    items: list[Item] = [rule(dates, sheet.block, dates, sheet.foot)]
    for place, role in enumerate(("ORIGINATOR", "CHECKER", "BACK-CHECKER")):
        y = sheet.block + place * step
        if place:
            items.append(rule(left, y, sheet.source, y))
        items.append(cell_label(lettering, role, left, y))
        items.append(cell_label(lettering, "DATE", dates, y))
    return items


def _revision(sheet: Sheet, lettering: Lettering, facts: TitleFacts) -> list[Item]:
    """Give the revision and date of the sheet above its number."""
    left, right = sheet.source, sheet.right
    middle = left + 0.36 * (right - left)
    foot = sheet.block + (sheet.foot - sheet.block) / 3
    items: list[Item] = [rule(left, foot, right, foot), rule(middle, sheet.block, middle, foot)]
    cells = ((left, middle, "REVISION", facts.revision), (middle, right, "DATE", facts.date))
    for start, end, name, text in cells:
        items.append(cell_label(lettering, name, start, sheet.block))
        lines, style = fitted(lettering, text, _FACT, end - start - 2 * _PAD, 19.0)
        items.extend(text_lines(lines, style, start + _PAD, sheet.block + 11.0)[0])
    items.append(cell_label(lettering, "SHEET", left, foot))
    return items
