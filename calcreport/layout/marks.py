"""Marks around a numbered line: number with tick ring, source lane, revision delta and cloud.

Numbers, citations and references -> boxes and items in sheet coordinates, kept so that the same
mark is built once. Knows the number lane, the source lane and the left margin; not what a line says.
"""

from __future__ import annotations

import math
from itertools import pairwise

from calcreport.layout.model import Anchor, Box, Circle, Item, Link, Placed, Stroke
from calcreport.layout.pieces import Cloud, Piece, Rows
from calcreport.layout.sheet import HAIRLINE, HEAVY, MM, OUTLINE, Lane, Sheet
from calcreport.layout.words import CITATION, SOURCE, Lettering
from calcreport.report.model import Reference, SourceLane

#: Gap above a numbered line.
GAP = 2.6
#: Line weight of a revision cloud.
CLOUD = 0.5
#: How far its edges stand inside a line, and inside a row between rules, above and below.
IN_LINE, IN_ROW = (0.6, 0.6), (1.1, 0.2)
#: Rise of a cloud's bow at five points along it.
_BOW = (0.0, 0.76, 1.24, 1.24, 0.76)
#: Radius of the tick ring a checker fills by pencil.
RING = 1.25 * MM
#: How far a number and its ring reach below their baseline.
BELOW_NUMBER = 3.0
#: Width of the solid bar that marks a failing line at the frame.
BAR = 1.2 * MM
#: Gap between citation and references where both stand on one row, and between references.
APART, BETWEEN = 6.0, 4.0


class Marks:
    """Makes the marks of one kind of sheet."""

    __slots__ = ("_loud", "_numbers", "_sources", "lettering", "sheet")

    def __init__(self, sheet: Sheet, lettering: Lettering) -> None:
        self.sheet = sheet
        self.lettering = lettering
        self._numbers: dict[int, Box] = {}
        self._sources: dict[str, tuple[Box, float]] = {}

    def numbered(
        self,
        rows: Rows,
        baseline: float,
        number: int,
        anchor: str,
        source: SourceLane,
        delta: str,
        lane: Lane,
    ) -> Piece:
        """Close a numbered line: add number, ring, source and delta; return the piece."""
        items: list[Item] = []
        height = rows.y
        if anchor:
            items.append(Anchor(anchor, self.sheet.work, 0.0))
        if number:
            items.append(Placed(self.sheet.number_axis, baseline, self.number(number)))
            height = max(height, baseline + BELOW_NUMBER)
        items.extend(rows.items)
        placed, foot = self.source(source, baseline, height)
        items.extend(placed)
        height = max(height, foot)
        if delta:
            items.extend(self.delta(delta, height))
        return Piece(height, tuple(items), GAP, cloud=self.cloud(delta, lane, IN_LINE))

    def number(self, number: int) -> Box:
        """Return the number and the ring beside it, left and right of the axis of the number lane.

        Numbers and rings so form two columns down the sheet, and a line of one row needs no second.
        """
        box = self._numbers.get(number)
        if box is None:
            label = self.lettering.label(str(number), "regular", 8)
            ring = Circle(2.2 + RING, -2.6, RING, HAIRLINE)
            items = (Placed(-label.width, 0.0, label), ring)
            box = self._numbers[number] = Box(label.width, label.ascent, label.descent, items)
        return box

    def source(self, source: SourceLane, baseline: float, height: float) -> tuple[list[Item], float]:
        """Return the items of the source lane, first row on `baseline`, and the y below them.

        Citation and references have a row each, but share one where the line is no higher than that.
        """
        lane = self.sheet.sources
        items: list[Item] = []
        x, y = lane.left, baseline
        if source.citation:
            box, deep = self._citation(source.citation, lane.width)
            items.append(Placed(x, y, box))
            low = height < baseline + SOURCE.leading + 2.5
            references = sum(self._reference(one).width + APART for one in source.comes_from)
            if low and references and x + box.width + references <= lane.right:
                x += box.width + APART
            else:
                y += deep
        for one in source.comes_from:
            box = self._reference(one)
            if x > lane.left and x + box.width > lane.right:
                x, y = lane.left, y + SOURCE.leading
            items.append(Placed(x, y, box))
            if one.target:
                items.append(Link(x, y - box.ascent, box.width, box.ascent + box.descent, one.target))
            x += box.width + BETWEEN
        if source.comes_from:
            y += SOURCE.leading
        return items, y - SOURCE.leading + 2.5 if items else 0.0

    def _reference(self, reference: Reference) -> Box:
        return self.lettering.label(reference.text, SOURCE.face, SOURCE.size)

    def _citation(self, citation: str, width: float) -> tuple[Box, float]:
        done = self._sources.get(citation)
        if done is None:
            lines = self.lettering.set((citation,), CITATION, width)
            step = CITATION.leading
            placed = tuple(Placed(0.0, step * place, line) for place, line in enumerate(lines))
            wide = max(line.width for line in lines)
            box = Box(wide, CITATION.rise, step * (len(lines) - 1) + CITATION.fall, placed)
            done = self._sources[citation] = (box, step * len(lines))
        return done

    def delta(self, revision: str, height: float) -> list[Item]:
        """Return the revision delta in the left margin beside a piece of some height."""
        x, y = self.sheet.left - 5.5 * MM, min(height, 20.0) / 2
        sides = ((x, y - 6.0), (x + 6.2, y + 4.4), (x - 6.2, y + 4.4))
        label = self.lettering.label(revision, "semibold", 6.0 if len(revision) < 2 else 4.8)
        return [
            Stroke(sides, OUTLINE, closed=True),
            Placed(x - label.width / 2, y + 3.2, label),
        ]

    def cloud(self, revision: str, lane: Lane, inside: tuple[float, float], most: float = math.inf) -> Cloud | None:
        """Return the cloud round what stands in the lane, no further right than `most`; None without a revision."""
        left, right = edges(self.sheet, lane)
        return Cloud(revision, left + 2.0, min(right - 2.0, most), inside) if revision else None


def cloud(left: float, top: float, right: float, foot: float) -> Stroke:
    """Return a revision cloud: bows of about 4 mm bulging outwards from a rectangle."""
    corners = ((left, top), (right, top), (right, foot), (left, foot), (left, top))
    points: list[tuple[float, float]] = []
    for (x0, y0), (x1, y1) in pairwise(corners):
        length = math.hypot(x1 - x0, y1 - y0)
        bows = max(1, round(length / (4 * MM)))
        ux, uy = (x1 - x0) / length, (y1 - y0) / length
        step = length / (bows * len(_BOW))
        for place in range(bows * len(_BOW)):
            # Outwards is to the left of a walk round the corners in sheet coordinates.
            way, bow = place * step, _BOW[place % len(_BOW)]
            points.append((x0 + ux * way + uy * bow, y0 + uy * way - ux * bow))
    return Stroke(tuple(points), CLOUD, closed=True)


def edges(sheet: Sheet, lane: Lane) -> tuple[float, float]:
    """Return the outer edges of a lane: the rules beside it, or a figure's clear side."""
    if not sheet.lanes:
        return lane.left - 5.0, lane.right + 5.0
    return sheet.work, sheet.source if lane.right == sheet.text.right else lane.right + 6.0


def loud_side(sheet: Sheet, height: float) -> Stroke:
    """Return the solid bar at the frame that marks a failing line or row."""
    left, right = sheet.left, sheet.left + BAR
    corners = ((left, 0.0), (right, 0.0), (right, height), (left, height))
    return Stroke(corners, 0.0, closed=True, fill=0.0)


def loud_bar(sheet: Sheet, height: float) -> list[Item]:
    """Return what makes a failing line loud: heavy rules above and below, a solid bar at the left."""
    half = HEAVY / 2
    return [
        Stroke(((sheet.left, half), (sheet.right, half)), HEAVY),
        Stroke(((sheet.left, height - half), (sheet.right, height - half)), HEAVY),
        loud_side(sheet, height),
    ]
