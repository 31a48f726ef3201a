"""The frame of a page, its lanes, its title block and the sheet number in it.

In: the ink of a page. Out: `Frame`. Known by strokes alone: one frame round all, upright rules that run down to the
title block.
"""

from __future__ import annotations

from dataclasses import dataclass

from .glyphs import PageInk
from .pieces import spaced


@dataclass(frozen=True, slots=True)
class Frame:
    """The frame of a page and its lanes, in points."""

    left: float
    right: float
    top: float
    foot: float
    #: top of the title block
    block: float
    #: right edge of the number lane and left edge of the source lane; None without lanes
    lanes: tuple[float, float] | None


def find_frame(ink: PageInk) -> Frame | None:
    """Find the frame, the title block and the lanes."""
    frames = [a for a in ink.areas if not a.filled and not a.curved and a.x1 - a.x0 > 0.7 * ink.width]
    if not frames:
        return None
    frame = max(frames, key=lambda a: (a.x1 - a.x0) * (a.y1 - a.y0))
    upright = [ln for ln in ink.lines if ln.x0 == ln.x1 and frame.x0 + 5 < ln.x0 < frame.x1 - 5]
    long = [
        (ln.x0, min(ln.y0, ln.y1))
        for ln in upright
        if max(ln.y0, ln.y1) > frame.y1 - 40 and frame.y0 + 20 < min(ln.y0, ln.y1) < frame.y0 + 150
    ]
    if len(long) >= 2:
        return Frame(frame.x0, frame.x1, frame.y1, frame.y0, long[0][1], (min(long)[0], max(long)[0]))
    tops = [round(max(ln.y0, ln.y1), 1) for ln in upright if min(ln.y0, ln.y1) < frame.y0 + 5]
    block = max((y for y in tops if tops.count(y) >= 2 and y < frame.y0 + 150), default=frame.y0)
    return Frame(frame.x0, frame.x1, frame.y1, frame.y0, block, None)


def sheet_name(ink: PageInk, frame: Frame) -> str:
    """Return the sheet number: the largest type in the right half of the title block."""
    below = [g for g in ink.glyphs if g.y < frame.block and g.left > (frame.left + frame.right) / 2 and g.text.strip()]
    if not below:
        return ""
    size = max(g.size for g in below)
    return spaced(g for g in below if g.size == size).replace(" ", "")
