"""What makes a withdrawn sheet unmistakable: words over its frame and strokes across it.

The words stand in the margin, where nothing else does, and the strokes with the title block: the body stays as it was.
"""

from __future__ import annotations

from calcreport.layout.model import Item, Placed, Stroke
from calcreport.layout.sheet import OUTLINE, Sheet
from calcreport.layout.words import RISE, Lettering

#: upper edge of the band: printers leave some twelve points of the margin white
_TOP, _GAP = 12.5, 1.5
_SIZES = (12.0, 10.0, 8.0, 6.5)
_PAD = 10.0


def banner_items(sheet: Sheet, lettering: Lettering, words: str, strokes: int) -> tuple[Item, ...]:
    """Return the band over the frame, black at either end of its words, and strokes from corner to corner."""
    foot = sheet.top - _GAP
    room = sheet.right - sheet.left - 4 * _PAD
    labels = (lettering.label(words, "semibold", size) for size in _SIZES)
    label = next((label for label in labels if label.width <= room), lettering.label(words, "semibold", _SIZES[-1]))
    size = label.ascent / RISE
    start = (sheet.left + sheet.right - label.width) / 2
    baseline = (_TOP + foot) / 2 + 0.33 * size
    bars = ((sheet.left, start - _PAD), (start + label.width + _PAD, sheet.right))
    items: list[Item] = [
        Stroke(((left, _TOP), (right, _TOP), (right, foot), (left, foot)), 0.0, closed=True, fill=0.0)
        for left, right in bars
    ]
    items.append(Placed(start, baseline, label))
    corners = (
        ((sheet.left, sheet.block), (sheet.right, sheet.top)),
        ((sheet.left, sheet.top), (sheet.right, sheet.block)),
    )
    items += [Stroke(corner, OUTLINE) for corner in corners[:strokes]]
    return tuple(items)
