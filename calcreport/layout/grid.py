"""What the rows of a table share: columns at fixed places, letters, rules."""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.layout.model import Box, Placed, Stroke
from calcreport.layout.pieces import Piece
from calcreport.layout.sheet import HAIRLINE, Lane
from calcreport.layout.words import TextStyle
from calcreport.report.model import Column

#: Gap between columns, room above and below the text of a row, weight of the rules between rows.
GUTTER, ABOVE, BELOW, FAINT = 10.0, 2.4, 0.3, 0.2


@dataclass(frozen=True, slots=True)
class Letters:
    """The styles of a table's cells, of its governing and failing rows, and of its headings."""

    plain: TextStyle
    heavy: TextStyle
    heading: TextStyle


LETTERS = tuple(
    Letters(
        TextStyle("regular", size, leading),
        TextStyle("semibold", size, leading),
        TextStyle("semibold", max(6.5, size - 1.0), leading),
    )
    for size, leading in ((8.5, 10.5), (7.5, 9.2), (6.5, 8.0))
)


@dataclass(frozen=True, slots=True)
class Grid:
    """Columns at fixed places, with the letters their cells are set in."""

    columns: tuple[Column, ...]
    lefts: tuple[float, ...]
    widths: tuple[float, ...]
    letters: Letters
    lane: Lane
    #: room behind the last whole digit of a column's numbers, which stand with their points under one another
    tails: tuple[float, ...]


def aligned(grid: Grid, place: int, line: Box) -> float:
    """Return the x of a line in a column."""
    spare = grid.widths[place] - line.width
    share = {"left": 0.0, "centre": 0.5, "right": 1.0}[grid.columns[place].align]
    return grid.lefts[place] + max(0.0, spare) * share


def edge(grid: Grid, y: float, weight: float = HAIRLINE) -> Stroke:
    """Return a rule across the table."""
    right = grid.lefts[-1] + grid.widths[-1]
    return Stroke(((grid.lane.left - 3.0, y), (right + 3.0, y)), weight)


def joined(above: Piece | None, below: Piece) -> Piece:
    """Return one piece of two, the second under the first."""
    if above is None:
        return below
    moved = Placed(0.0, above.height, Box(0.0, 0.0, below.height, below.items))
    return Piece(above.height + below.height, (*above.items, moved))
