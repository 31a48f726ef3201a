"""Strokes, arrows, dimension lines and labels that keep clear of one another.

Points -> items, gathered in a `Drawing` and closed into a `Box` whose origin is the top-left corner.
Line weights are those of the sheets. Knows no structure: what is drawn is decided in
`section_figure` and `span_figure`.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from calcreport.layout.model import Box, Circle, Item, Placed, Stroke
from calcreport.layout.sheet import HAIRLINE, OUTLINE

Point = tuple[float, float]

#: Least distance of a label from whatever it keeps clear of.
CLEAR = 1.3
#: Long dash, gap, short dash, gap: centre lines and neutral axes.
CHAIN = (5.0, 1.6, 1.0, 1.6)


@dataclass(frozen=True, slots=True)
class Area:
    """A rectangle that a label or a line takes up."""

    left: float
    top: float
    right: float
    foot: float

    def meets(self, other: Area) -> bool:
        """Tell whether two areas overlap."""
        return self.left < other.right and other.left < self.right and self.top < other.foot and other.top < self.foot


class Drawing:
    """Items drawn so far, and the areas labels must keep out of."""

    __slots__ = ("_areas", "_items", "labels")

    def __init__(self) -> None:
        self._items: list[Item] = []
        self._areas: list[Area] = []
        #: areas of the labels placed, for anyone who checks that they are clear of one another
        self.labels: list[Area] = []

    def line(self, points: tuple[Point, ...], weight: float = HAIRLINE, dash: tuple[float, ...] = ()) -> None:
        """Draw an open polyline."""
        self._items.append(Stroke(points, weight, dash=dash))

    def shape(self, points: tuple[Point, ...], weight: float = OUTLINE, fill: float | None = None) -> None:
        """Draw a closed polyline."""
        self._items.append(Stroke(points, weight, closed=True, fill=fill))

    def disc(self, x: float, y: float, radius: float) -> None:
        """Draw a filled circle."""
        self._items.append(Circle(x, y, radius, 0.0, fill=0.0))

    def ring(self, x: float, y: float, radius: float) -> None:
        """Draw an open circle."""
        self._items.append(Circle(x, y, radius, OUTLINE))

    def keep_clear(self, left: float, top: float, right: float, foot: float) -> None:
        """Mark an area that no label may cover."""
        self._areas.append(Area(left, top, right, foot))

    def arrow(self, start: Point, end: Point, weight: float = HAIRLINE, head: float = 3.6) -> None:
        """Draw an arrow with a filled head at `end`."""
        length = math.hypot(end[0] - start[0], end[1] - start[1])
        ux, uy = (end[0] - start[0]) / length, (end[1] - start[1]) / length
        head = min(head, length)
        neck = (end[0] - ux * head, end[1] - uy * head)
        half = head * 0.3
        self._items.append(Stroke((start, neck), weight))
        sides = (end, (neck[0] - uy * half, neck[1] + ux * half), (neck[0] + uy * half, neck[1] - ux * half))
        self._items.append(Stroke(sides, 0.0, closed=True, fill=0.0))

    def dimension(self, start: Point, end: Point) -> None:
        """Draw a dimension line with oblique ticks; extension lines are the caller's."""
        self.line((start, end))
        for x, y in (start, end):
            self.line(((x - 1.6, y + 1.6), (x + 1.6, y - 1.6)), OUTLINE)

    def label(self, box: Box, *places: tuple[float, float, float]) -> Area:
        """Place a label at the first free of `places`: x, y of its middle height, share of width left of x.

        If none is free the label moves away from the last place, down and up by turns, until one is.
        """
        for place in places:
            area = _area(box, place)
            if self._free(area):
                return self._put(box, area)
        x, y, share = places[-1]
        for step in range(1, 40):
            moved = y + (step + 1) // 2 * 4.0 * (1 if step % 2 else -1)
            area = _area(box, (x, moved, share))
            if self._free(area):
                break
        return self._put(box, area)

    def _free(self, area: Area) -> bool:
        wide = Area(area.left - CLEAR, area.top - CLEAR, area.right + CLEAR, area.foot + CLEAR)
        return not any(wide.meets(taken) for taken in self._areas)

    def _put(self, box: Box, area: Area) -> Area:
        self._areas.append(area)
        self.labels.append(area)
        self._items.append(Placed(area.left, area.top + box.ascent, box))
        return area

    def box(self) -> Box:
        """Close the drawing: return it as a box that its items fill, origin top left."""
        edges = [_edges(item) for item in self._items]
        left, top = min([edge[0] for edge in edges]), min([edge[1] for edge in edges])
        right, foot = max([edge[2] for edge in edges]), max([edge[3] for edge in edges])
        drawn = Box(right, -top, foot, tuple(self._items))
        return Box(right - left, 0.0, foot - top, (Placed(-left, -top, drawn),))


def _area(box: Box, place: tuple[float, float, float]) -> Area:
    x, y, share = place
    left = x - share * box.width
    top = y - (box.ascent + box.descent) / 2
    return Area(left, top, left + box.width, top + box.ascent + box.descent)


def _edges(item: Item) -> tuple[float, float, float, float]:
    """Return left, top, right and foot of what an item inks."""
    if isinstance(item, Stroke):
        xs, ys = [x for x, _ in item.points], [y for _, y in item.points]
        half = item.width / 2
        return min(xs) - half, min(ys) - half, max(xs) + half, max(ys) + half
    if isinstance(item, Circle):
        reach = item.radius + item.width / 2
        return item.x - reach, item.y - reach, item.x + reach, item.y + reach
    if isinstance(item, Placed):
        box = item.box
        return item.x, item.y - box.ascent, item.x + box.width, item.y + box.descent
    return item.x, item.y, item.x, item.y


def rounded(left: float, top: float, right: float, foot: float, radius: float) -> tuple[Point, ...]:
    """Return the corners of a rectangle rounded by `radius`, as a closed polyline."""
    centres = (
        (right - radius, top + radius, -90.0),
        (right - radius, foot - radius, 0.0),
        (left + radius, foot - radius, 90.0),
        (left + radius, top + radius, 180.0),
    )
    points: list[Point] = []
    for x, y, start in centres:
        for step in range(7):
            angle = math.radians(start + 15.0 * step)
            points.append((x + radius * math.cos(angle), y + radius * math.sin(angle)))
    return tuple(points)
