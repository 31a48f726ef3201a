"""A calculation sheet taken apart: lanes, line numbers, statements, tables, figure labels, boxed results.

In: the ink of a page. Out: `SheetPage`. Places and sizes alone decide
what is what: number lane left, source lane right, title block at the foot, tables by their level rules, figures by
strokes that belong to nothing else. Works nothing out.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable
from dataclasses import dataclass

from .formulas import read_tokens
from .frames import Frame, find_frame, sheet_name
from .glyphs import Area, Glyph, Line, PageInk, with_bars
from .letters import Token
from .pieces import Piece, find_pieces, spaced
from .rules import Rule, find_rules
from .statements import VERDICTS, NumberedLine, RowReader, rows_of
from .tables import Table, find_tables

#: type of labels in figures is no larger, in points
LABEL = 7.6


@dataclass(slots=True)
class SheetPage:
    """One page with lanes."""

    name: str
    mark: str
    index: int
    lines: list[NumberedLine]
    #: what stands above the first number of the page and continues the sheet before
    carried: NumberedLine
    tables: list[Table]
    labels: list[tuple[str, list[Token]]]
    boxes: list[list[Token]]
    strip: str
    problems: list[str]
    #: all text of the page by rows, for notes below tables
    text: str = ""


def read_sheet(ink: PageInk, index: int) -> SheetPage | None:
    """Take a page with lanes apart; None for a page without."""
    frame = find_frame(ink)
    if frame is None or frame.lanes is None:
        return None
    return _Page(ink, frame, frame.lanes, index).read()


#: line weight of revision clouds, which no other line has
CLOUD = 0.5


class _Page:
    """One page being read."""

    def __init__(self, ink: PageInk, frame: Frame, lanes: tuple[float, float], index: int) -> None:
        self.frame, self.index = frame, index
        self.left, self.right = lanes
        body = [g for g in with_bars(ink.glyphs) if g.text != " " and g.y > frame.block + 0.5]
        across = [ln.y0 for ln in ink.lines if ln.y0 == ln.y1 and ln.width >= 1.5 and ln.x0 <= frame.left + 0.5]
        strips = [y for y in across if y > frame.top - 30]
        self.roof = min(strips, default=frame.top)
        self.strip = spaced(g for g in ink.glyphs if g.y > self.roof and g.y < frame.top) if strips else ""
        body = [g for g in body if g.y < self.roof]
        # the number of a revision stands in its triangle outside the frame
        self.numbers = [g for g in body if frame.left <= g.left and g.right <= self.left]
        self.sources = [g for g in body if g.left >= self.right]
        self.work = [g for g in body if self.left < g.left and g.right < self.right + 1]
        self.strokes = [
            line for line in ink.lines
            if abs(line.width - CLOUD) > 0.01 and min(line.x0, line.x1) >= self.left + 1 and max(line.x0, line.x1) <= self.right + 1
            and frame.block + 1 < min(line.y0, line.y1) and max(line.y0, line.y1) < self.roof
        ]  # fmt: skip
        self.areas = [
            a
            for a in ink.areas
            if a.x0 >= self.left + 1 and a.x1 <= self.right + 1 and frame.block < a.y0 and a.y1 < self.roof
        ]
        self.name = sheet_name(ink, frame)
        self.problems: list[str] = []

    def read(self) -> SheetPage:
        marks = self._line_numbers()
        rules, strokes = find_rules(self.work, self.strokes)
        tables, in_tables, strokes = find_tables(self.work, strokes, self.index)
        boxed, in_boxes, strokes = self._boxes(strokes)
        free = [g for g in self.work if id(g) not in in_tables and id(g) not in in_boxes]
        pieces = find_pieces(free, rules)
        labels, pieces = self._labels(pieces, strokes)
        lines = [NumberedLine(number, self.index, y) for number, y in marks]
        carried = NumberedLine(0, self.index, self.roof)
        self._sources(lines)
        for table in tables:
            _line_at(lines, carried, table.y).tables.append(table)
        for row in rows_of(pieces):
            RowReader(_line_at(lines, carried, row.y), self.index, self.problems).read(row)
        boxes = [self._tokens(piece.glyphs, piece.rules) for piece in boxed]
        mark = self.name.rpartition("-")[0] or self.name
        shown = [(piece.text, self._tokens(piece.glyphs, piece.rules)) for piece in labels]
        return SheetPage(self.name, mark, self.index, lines, carried, tables, shown, boxes, self.strip, self.problems)

    def _tokens(self, glyphs: Iterable[Glyph], rules: Iterable[Rule]) -> list[Token]:
        try:
            return read_tokens(glyphs, rules)
        except ValueError as error:
            text = spaced(glyphs)
            self.problems.append(f"{text!r} in a figure or box cannot be read: {error}")
            return []

    def _line_numbers(self) -> list[tuple[int, float]]:
        rows: dict[float, list[Glyph]] = defaultdict(list)
        for glyph in self.numbers:
            rows[round(glyph.y, 1)].append(glyph)
        found = []
        for row in rows.values():
            text = spaced(row).replace(" ", "")
            if text.isdigit():
                found.append((int(text), row[0].y))
            else:
                self.problems.append(f"{text!r} in the number lane")
        return sorted(found, key=lambda pair: -pair[1])

    def _sources(self, lines: list[NumberedLine]) -> None:
        rows: dict[float, list[Glyph]] = defaultdict(list)
        for glyph in self.sources:
            rows[round(glyph.y, 1)].append(glyph)
        for y in sorted(rows, reverse=True):
            above = [line for line in lines if line.y > y - 1]
            if above:
                above[-1].source.append(spaced(rows[y]))

    # ------------------------------------------------------------ boxes and figures

    def _boxes(self, strokes: list[Line]) -> tuple[list[Piece], set[int], list[Line]]:
        """Take the framed results: wide boxes round one or a few rows of words."""
        found: list[Piece] = []
        taken: set[int] = set()
        for area in self.areas:
            if (
                area.filled
                or area.curved
                or area.x1 - area.x0 < 0.6 * (self.right - self.left)
                or area.y1 - area.y0 > 90
            ):
                continue
            inside = [g for g in self.work if area.x0 < g.left and g.right < area.x1 and area.y0 < g.y < area.y1]
            if inside:
                rows: dict[float, list[Glyph]] = defaultdict(list)
                for glyph in inside:
                    rows[round(glyph.y / 11)].append(glyph)
                found += find_pieces(inside, [], reach=3.0)
                taken.update(map(id, inside))
                strokes = [ln for ln in strokes if not _on_edge(ln, area)]
        # the small frame of an NG
        for area in self.areas:
            if not area.filled and not area.curved and area.x1 - area.x0 < 60 and area.y1 - area.y0 < 20:
                inside = [g for g in self.work if area.x0 < g.left and g.right < area.x1 and area.y0 < g.y < area.y1]
                if spaced(inside) in VERDICTS:
                    strokes = [ln for ln in strokes if not _on_edge(ln, area)]
        return found, taken, strokes

    def _labels(self, pieces: list[Piece], strokes: list[Line]) -> tuple[list[Piece], list[Piece]]:
        """Part the labels of figures from the work."""
        drawn = [s for s in strokes if not (s.x0 == s.x1 and s.x0 < self.left + 12)]
        curved = [a for a in self.areas if a.curved or a.filled]
        boxes = [(min(s.x0, s.x1), min(s.y0, s.y1), max(s.x0, s.x1), max(s.y0, s.y1)) for s in drawn]
        boxes += [(a.x0, a.y0, a.x1, a.y1) for a in curved]
        labels: list[Piece] = []
        rest: list[Piece] = []
        for piece in pieces:
            near = piece.size <= LABEL and any(
                x0 - 70 < piece.right and piece.left < x1 + 70 and y0 - 30 < piece.top and piece.bottom < y1 + 30
                for x0, y0, x1, y1 in boxes
            )
            (labels if near else rest).append(piece)
        return labels, rest


def _on_edge(line: Line, area: Area) -> bool:
    return (
        min(line.x0, line.x1) >= area.x0 - 0.1 and max(line.x0, line.x1) <= area.x1 + 0.1
        and min(line.y0, line.y1) >= area.y0 - 0.1 and max(line.y0, line.y1) <= area.y1 + 0.1
        and ((line.x0 == line.x1 and min(abs(line.x0 - area.x0), abs(line.x0 - area.x1)) < 0.1)
             or (line.y0 == line.y1 and min(abs(line.y0 - area.y0), abs(line.y0 - area.y1)) < 0.1))
    )  # fmt: skip


def _line_at(lines: list[NumberedLine], carried: NumberedLine, y: float) -> NumberedLine:
    """Return the line a baseline belongs to: the nearest number at its height or above."""
    above = [line for line in lines if line.y > y - 1.2]
    return above[-1] if above else carried
