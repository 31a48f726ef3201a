"""Tables on a page: level rules of one width over each other, a head in small type, rows below.

In: glyphs and strokes of a lane or a page. Out: `Table` records with the text of every cell, the glyphs they took, and
the strokes that are no rules of tables. Cells go to the column whose edge they share.
"""

from __future__ import annotations

import itertools
from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass

from .formulas import read_tokens
from .glyphs import Glyph, Line
from .letters import Token, plain
from .pieces import Piece, find_pieces

#: type of table heads and of cells is no larger, in points
HEAD, CELL = 7.8, 8.7
#: gap that parts two cells, in type sizes: columns of wide tables stand close
CELL_GAP = 0.5


@dataclass(slots=True)
class Column:
    """A column of a table: its symbol, or its words, and its unit."""

    name: str
    unit: str
    math: bool
    left: float
    right: float


@dataclass(slots=True)
class Table:
    """A table on a sheet; the first column names the rows of a set."""

    columns: list[Column]
    rows: list[list[str]]
    page: int
    y: float

    @property
    def set_name(self) -> str:
        return self.columns[0].name

    @property
    def sets(self) -> list[str]:
        """The sets whose rows the first column names: one, or several as in `span, load`."""
        return self.set_name.partition(" / ")[0].split(", ")

    def named(self, row: list[str]) -> list[tuple[str, str]]:
        """Return the rows of sets that a row of the table belongs to: `AB, D` of `span, load`."""
        sets = self.sets
        names = row[0].rsplit(", ", len(sets) - 1) if len(sets) > 1 else [row[0]]
        return list(zip(sets, names, strict=False))

    @property
    def given(self) -> bool:
        """Whether the rows hold no ratio of a check: those stand in the last columns, under words without a unit."""
        last = self.columns[-1]
        return last.math or bool(last.unit)

    def column(self, name: str) -> int | None:
        """Return the place of a column of a symbol."""
        return next((i for i, c in enumerate(self.columns) if c.name == name and i), None)


Band = tuple[float, float, list[Glyph]]


def find_tables(
    glyphs: Sequence[Glyph], strokes: Sequence[Line], page: int
) -> tuple[list[Table], set[int], list[Line]]:
    """Return the tables from the top down, the ids of their glyphs, and the strokes left over."""
    spans: dict[tuple[float, float], list[Line]] = defaultdict(list)
    for line in strokes:
        if abs(line.y0 - line.y1) < 0.01:
            spans[round(line.x0, 1), round(line.x1, 1)].append(line)
    tables: list[Table] = []
    taken: set[int] = set()
    used: set[Line] = set()
    for (x0, x1), level in spans.items():
        ys = sorted({round(line.y0, 2) for line in level}, reverse=True)
        bands = [(top, low, _band(glyphs, x0, x1, top, low)) for top, low in itertools.pairwise(ys)]
        for first, last in _stretches(bands):
            tables.append(_table(bands[first], bands[first + 1 : last], page))
            for top, low, inside in bands[first:last]:
                taken.update(map(id, inside))
                used.update(line for line in level if low - 0.1 <= line.y0 <= top + 0.1)
    tables.sort(key=lambda t: -t.y)
    return tables, taken, [line for line in strokes if line not in used]


def _band(glyphs: Sequence[Glyph], x0: float, x1: float, top: float, low: float) -> list[Glyph]:
    return [g for g in glyphs if low < g.y < top and x0 - 1 <= g.left and g.right <= x1 + 1]


def _stretches(bands: Sequence[Band]) -> list[tuple[int, int]]:
    """Return where tables begin and end among bands: a head, then rows without gap."""
    found = []
    at = 0
    while at < len(bands):
        last = at + 1
        head = max((g.size for g in bands[at][2]), default=CELL)
        if head <= HEAD:
            # wide tables are set smaller, head and cells alike
            while last < len(bands) and bands[last][2] and head + 0.3 < max(g.size for g in bands[last][2]) <= CELL:
                last += 1
            if last > at + 1:
                found.append((at, last))
        at = last
    return found


def _table(head: Band, body: Sequence[Band], page: int) -> Table:
    columns = [_heading(pieces) for pieces in _over_each_other(find_pieces(head[2], []))]
    rows = []
    for _, _, glyphs in body:
        cells = [""] * len(columns)
        for piece in find_pieces(glyphs, [], CELL_GAP):
            place = _column(columns, piece)
            text = plain(read_tokens(piece.glyphs, [])) if piece.math else piece.text
            cells[place] = f"{cells[place]} {text}".strip()
        rows.append(cells)
    return Table(columns, rows, page, max(g.y for g in head[2]))


def _over_each_other(pieces: Sequence[Piece]) -> list[list[Piece]]:
    """Gather the pieces of a head by column, each from the top down: a head may run over several lines."""
    found: list[list[Piece]] = []
    edge = float("-inf")
    for piece in sorted(pieces, key=lambda p: p.left):
        if piece.left < edge - 0.5:
            found[-1].append(piece)
        else:
            found.append([piece])
        edge = max(edge, piece.right)
    return [sorted(column, key=lambda p: -p.baseline) for column in found]


def _heading(pieces: Sequence[Piece]) -> Column:
    """Read the head of one column: a symbol and its unit, or words."""
    left, right = min(p.left for p in pieces), max(p.right for p in pieces)
    for at, piece in enumerate(pieces):
        tokens = read_tokens(piece.glyphs, []) if piece.math else []
        if tokens and not tokens[0].words:
            unit = "".join(t.text + _power(t) for t in tokens[1:])
            return Column(tokens[0].text, unit + "".join(p.text for p in pieces[at + 1 :]), True, left, right)
    return Column(" ".join(piece.text for piece in pieces), "", False, left, right)


def _power(token: Token) -> str:
    return plain(token.raised).translate(str.maketrans("23", "²³"))


def _column(columns: list[Column], piece: Piece) -> int:
    """Return the column whose edge a cell shares, else the one it lies under."""
    edges = [min(abs(c.left - piece.left), abs(c.right - piece.right)) for c in columns]
    best = min(range(len(columns)), key=lambda i: edges[i])
    if edges[best] < 1.2:
        return best
    shared = [min(c.right, piece.right) - max(c.left, piece.left) for c in columns]
    return max(range(len(columns)), key=lambda i: shared[i])
