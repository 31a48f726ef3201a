"""Ink that stands on other ink: glyphs over glyphs, strokes through glyphs.

In: a `Package`. Out: findings. Judged by the boxes of the ink, with a hair's breadth allowed; scripts tucked under the
letter before them, and signs made to enclose others, are no collision.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator

from .account import Finding
from .glyphs import Glyph, Line
from .package import Package, Page

#: what may overlap unseen, in points: box corners are empty in most letters
GLYPH, STROKE = 0.3, 0.15
_ENCLOSING = "√(){}[]|∑"


def overlaps(package: Package) -> list[Finding]:
    """Return what is printed over something else."""
    found: list[Finding] = []
    for page in package.pages:
        shelves = _shelves(page)
        found += _glyphs(page, shelves)
        found += _strokes(page, shelves)
    return found


def _shelves(page: Page) -> dict[int, list[Glyph]]:
    shelves: dict[int, list[Glyph]] = defaultdict(list)
    for glyph in page.ink.glyphs:
        if glyph.text.strip(" \u200b") and glyph.x1 > glyph.x0:
            for shelf in range(int(glyph.y0 // 8), int(glyph.y1 // 8) + 1):
                shelves[shelf].append(glyph)
    return shelves


def _glyphs(page: Page, shelves: dict[int, list[Glyph]]) -> Iterator[Finding]:
    told: set[tuple[int, int]] = set()
    for shelf in shelves.values():
        shelf.sort(key=lambda g: g.x0)
        for at, one in enumerate(shelf):
            for other in shelf[at + 1 :]:
                if other.x0 > one.x1 - GLYPH:
                    break
                high = min(one.y1, other.y1) - max(one.y0, other.y0)
                place = (round(other.x0 / 20), round(other.y / 8))
                if high > GLYPH and not _joined(one, other) and place not in told:
                    told.add(place)
                    text = f"{one.text} and {other.text} at {other.x0:.0f}, {other.y:.0f}"
                    yield Finding("nothing is printed over print", page.name, 0, text)


def _joined(one: Glyph, other: Glyph) -> bool:
    """Tell whether two glyphs are neighbours in a word, or letter and script."""
    if one.text in _ENCLOSING or other.text in _ENCLOSING:
        return True
    if abs(one.y - other.y) < 0.01:
        return abs(one.right - other.left) < 1.6
    if -1.0 < other.left - one.right < 0.6 and abs(one.y - other.y) < 0.4 * one.size:
        return True  # a script in the smallest type is no smaller than its letter
    scripted = min(one.size, other.size) < 0.85 * max(one.size, other.size)
    return scripted and abs(one.right - other.left) < 6 and abs(one.y - other.y) < 0.5 * max(one.size, other.size)


def _strokes(page: Page, shelves: dict[int, list[Glyph]]) -> Iterator[Finding]:
    for line in page.ink.lines:
        if line.x0 != line.x1 and line.y0 != line.y1:
            continue
        glyph = _struck(shelves, line)
        if glyph is not None:
            text = f"a stroke through {glyph.text!r} at {glyph.x0:.0f}, {glyph.y:.0f}"
            yield Finding("nothing is printed over print", page.name, 0, text)


def _struck(shelves: dict[int, list[Glyph]], line: Line) -> Glyph | None:
    """Return the first glyph that an upright or level stroke goes through."""
    half = line.width / 2 - STROKE
    left, right = sorted((line.x0, line.x1))
    low, high = sorted((line.y0, line.y1))
    for shelf in range(int((low - 1) // 8), int((high + 1) // 8) + 1):
        for glyph in shelves.get(shelf, ()):
            if glyph.x1 > left - half and glyph.x0 < right + half and glyph.y1 > low - half and glyph.y0 < high + half:
                wide = min(glyph.x1, right + half + STROKE) - max(glyph.x0, left - half - STROKE)
                tall = min(glyph.y1, high + half + STROKE) - max(glyph.y0, low - half - STROKE)
                if wide > STROKE and tall > STROKE and glyph.text != "√":
                    return glyph
    return None
