"""Pages as items at fixed points. Lengths in points, origin at the top-left corner, y downwards.

Made by `layout.paginate` and its neighbours, written by `output.pdf`, which decides nothing.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

#: 'words' faces serve running text; 'math' is the formula face.
Face: TypeAlias = Literal["regular", "italic", "semibold", "math"]


@dataclass(frozen=True, slots=True)
class Run:
    """Glyphs of one face and size, baseline at (x, y)."""

    x: float
    y: float
    face: Face
    size: float
    #: glyph ids in the face's font file
    glyphs: tuple[int, ...]
    #: text the glyphs stand for, as a reader would search and copy it
    text: str
    #: distance added after each glyph in thousandths of the size (kerning, spaces in formulas); () for none
    shifts: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True)
class Stroke:
    """An open or closed polyline; `width` 0 strokes nothing; `fill` is a grey 0..1 or None."""

    points: tuple[tuple[float, float], ...]
    width: float
    closed: bool = False
    fill: float | None = None
    dash: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Circle:
    """A circle: a bar in section, a tick ring."""

    x: float
    y: float
    radius: float
    width: float
    fill: float | None = None


@dataclass(frozen=True, slots=True)
class Box:
    """Items about their own origin (baseline, left), with extents; placed as one piece.

    `output.pdf` may render a Box once and place it many times.
    """

    width: float
    ascent: float
    descent: float
    items: tuple[Item, ...]


@dataclass(frozen=True, slots=True)
class Placed:
    """A box with its origin at (x, y)."""

    x: float
    y: float
    box: Box


@dataclass(frozen=True, slots=True)
class Link:
    """An area that leads to an anchor."""

    x: float
    y: float
    width: float
    height: float
    target: str


@dataclass(frozen=True, slots=True)
class Anchor:
    """A place others lead to."""

    name: str
    x: float
    y: float


Item: TypeAlias = Run | Stroke | Circle | Placed | Link | Anchor


@dataclass(frozen=True, slots=True)
class Page:
    """One sheet: its body and its title block apart, so that bodies can be compared."""

    #: printed number, also bookmark and PDF page label: 'B12-2', 'COVER'
    label: str
    #: part it belongs to, and its place there: 2 of 5
    part: str
    number: int
    count: int
    body: tuple[Item, ...]
    title_block: tuple[Item, ...]


@dataclass(frozen=True, slots=True)
class Bookmark:
    """An outline entry; level 0 is a part, level 1 a sheet."""

    title: str
    target: str  # page label
    level: int


@dataclass(frozen=True, slots=True)
class Pages:
    """All sheets with what the document needs to know about itself."""

    width: float
    height: float
    title: str
    author: str
    subject: str
    language: str
    date: str  # ISO
    pages: tuple[Page, ...]
    bookmarks: tuple[Bookmark, ...]
