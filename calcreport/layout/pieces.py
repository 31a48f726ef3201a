"""Pieces of a body: measured strips that are never parted between sheets.

Items -> `Piece`. A piece holds its items with x in sheet coordinates and y from its own upper edge,
so that placing it on a sheet is one translation. Knows heights and gaps, not where sheets end; the
one exception is `parted`, for a piece that is higher than a whole sheet.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace

from calcreport.layout.model import Anchor, Box, Circle, Item, Link, Placed, Run, Stroke
from calcreport.layout.words import TextStyle


@dataclass(frozen=True, slots=True)
class Cloud:
    """The revision cloud round a changed piece, or round several that follow one another."""

    revision: str
    left: float
    right: float
    #: how far its upper and lower edge stand inside the piece, so that its bows clear the lines above and below
    inside: tuple[float, float]


@dataclass(frozen=True, slots=True)
class Piece:
    """A strip of the body, with what paginating must know about it; points."""

    height: float
    items: tuple[Item, ...]
    #: gap above, dropped where the piece begins a sheet
    before: float = 0.0
    #: True where the next piece must stand on the same sheet
    keep: bool = False
    #: what is set again above this piece where it begins a sheet: a heading row
    again: Piece | None = None
    #: rule drawn at the piece's head unless it begins a sheet or the piece above is ruled off
    opening: tuple[Item, ...] = ()
    #: True where a rule closes the piece already
    ruled: bool = False
    #: rule drawn at the piece's foot where a sheet ends after it
    closing: tuple[Item, ...] = ()
    #: the same items by column, for a line of a row that may part: on one sheet such lines are read column by column
    cells: tuple[tuple[Item, ...], ...] = ()
    #: True for the second and later lines of such a row
    continues: bool = False
    #: drawn where the piece is placed, as one with those of its neighbours
    cloud: Cloud | None = None


class Rows:
    """Rows stacked from y = 0 down, gathered into a piece."""

    __slots__ = ("items", "y")

    def __init__(self, y: float = 0.0) -> None:
        self.items: list[Item] = []
        self.y = y

    def twin(self) -> Rows:
        """Return the same rows once more, for another way to go on."""
        found = Rows(self.y)
        found.items = list(self.items)
        return found

    def words(self, lines: tuple[Box, ...], style: TextStyle, x: float) -> float:
        """Add text lines; return the baseline of the first."""
        first = self.y
        spare = max(0.0, style.leading - style.rise - style.fall) / 2
        for place, box in enumerate(lines):
            baseline = self.y + max(box.ascent, style.rise) + spare
            first = baseline if place == 0 else first
            self.items.append(Placed(x, baseline, box))
            self.y = baseline + max(box.descent, style.fall) + spare
        return first

    def row(self, boxes: Iterable[tuple[float, Box]], least: float, lead: float = 1.0) -> float:
        """Add boxes on one baseline, no lower than `least` in height; return the baseline."""
        placed = tuple(boxes)
        ascent = max(box.ascent for _, box in placed)
        descent = max(box.descent for _, box in placed)
        high = ascent + descent
        spare = max(lead + (0.8 if high > least else 0.0), least - high) / 2
        baseline = self.y + spare + ascent
        self.items.extend(Placed(x, baseline, box) for x, box in placed)
        self.y = baseline + descent + spare
        return baseline


def shifted(item: Item, dx: float, dy: float) -> Item:
    """Return the item moved by (dx, dy)."""
    if isinstance(item, Stroke):
        return replace(item, points=tuple((x + dx, y + dy) for x, y in item.points))
    return replace(item, x=item.x + dx, y=item.y + dy)


def flat(items: Iterable[Item], dx: float = 0.0, dy: float = 0.0) -> Iterator[Item]:
    """Yield the items with every placed box resolved, moved by (dx, dy)."""
    for item in items:
        if isinstance(item, Placed):
            yield from flat(item.box.items, dx + item.x, dy + item.y)
        else:
            yield shifted(item, dx, dy)


def reach(item: Item) -> tuple[float, float]:
    """Return the upper and lower edge an item takes up."""
    match item:
        case Placed():
            return item.y - item.box.ascent, item.y + item.box.descent
        case Run():
            return item.y - 0.74 * item.size, item.y + 0.24 * item.size
        case Stroke():
            return min(y for _, y in item.points), max(y for _, y in item.points)
        case Circle():
            return item.y - item.radius, item.y + item.radius
        case Link():
            return item.y, item.y + item.height
        case Anchor():
            return item.y, item.y


def parted(piece: Piece, height: float) -> tuple[Piece, ...]:
    """Part a piece that is higher than a sheet's body into strips that are not.

    Rows stay whole as long as no single row is higher than a sheet; this is the last resort that
    keeps a monstrous input on paper.
    """
    loose = sorted(flat(piece.items), key=lambda item: reach(item)[1])
    strips: list[list[Item]] = [[]]
    top = 0.0
    for item in loose:
        upper, lower = reach(item)
        if lower - top > height and strips[-1]:
            strips.append([])
            top = upper
        strips[-1].append(item)
    pieces: list[Piece] = []
    for strip in strips:
        upper = min(reach(item)[0] for item in strip)
        lower = max(reach(item)[1] for item in strip)
        items = tuple(shifted(item, 0.0, -upper) for item in strip)
        pieces.append(replace(piece, height=min(height, lower - upper), items=items, keep=False))
    return tuple(pieces)
