"""What items ink on paper, worked out from glyph advances and points: the yardstick of the layout tests."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from calcreport.layout.fonts import Fonts
from calcreport.layout.model import Circle, Item, Link, Run, Stroke
from calcreport.layout.pieces import Piece, flat


@dataclass(frozen=True, slots=True)
class Ink:
    """The rectangle an item takes up, and its text if it is one."""

    left: float
    top: float
    right: float
    foot: float
    text: str
    size: float


def inked(items: Iterable[Item], fonts: Fonts) -> tuple[Ink, ...]:
    """Return the ink of items, boxes resolved; letters count from x-height to baseline."""
    found: list[Ink] = []
    for item in flat(items):
        if isinstance(item, Run):
            advance = sum(fonts.advances[item.face][glyph] for glyph in item.glyphs) + sum(item.shifts)
            right = item.x + advance * item.size / 1000
            found.append(Ink(item.x, item.y - 0.45 * item.size, right, item.y, item.text, item.size))
        elif isinstance(item, Stroke):
            xs, ys = [x for x, _ in item.points], [y for _, y in item.points]
            half = item.width / 2
            found.append(Ink(min(xs) - half, min(ys) - half, max(xs) + half, max(ys) + half, "", 0.0))
        elif isinstance(item, Circle):
            r = item.radius + item.width / 2
            found.append(Ink(item.x - r, item.y - r, item.x + r, item.y + r, "", 0.0))
        elif isinstance(item, Link):
            found.append(Ink(item.x, item.y, item.x + item.width, item.y + item.height, "", 0.0))
    return tuple(found)


def texts(items: Iterable[Item]) -> str:
    """Return all letters in the order they are set, without spaces."""
    return "".join(item.text for item in flat(items) if isinstance(item, Run)).replace(" ", "").replace("\u00a0", "")


def letters(piece: Piece, fonts: Fonts) -> tuple[Ink, ...]:
    """Return the ink of a piece's letters only."""
    return tuple(ink for ink in inked(piece.items, fonts) if ink.text.strip())


def clashes(inks: Iterable[Ink], slack: float = 0.6) -> list[tuple[str, str]]:
    """Return the pairs of texts that overlap by more than `slack` points both ways.

    A script may be cut into the corner of its base by up to 2.5 pt more.
    """
    ordered = sorted((ink for ink in inks if ink.text.strip()), key=lambda ink: ink.top)
    found: list[tuple[str, str]] = []
    for place, one in enumerate(ordered):
        for other in ordered[place + 1 :]:
            if other.top >= one.foot:
                break
            across = min(one.right, other.right) - max(one.left, other.left)
            down = min(one.foot, other.foot) - max(one.top, other.top)
            if across > slack + (2.5 if one.size != other.size else 0.0) and down > slack:
                found.append((one.text, other.text))
    return found
