"""Rows that are too long to stay whole: a piece a line, so that a row parts where its sheet ends.

A row and its table's grid in, pieces out. Where a row runs on, the heading row and the words that name it stand again.
"""

from __future__ import annotations

from calcreport.layout.grid import ABOVE, BELOW, FAINT, Grid, aligned, edge, joined
from calcreport.layout.kit import Kit
from calcreport.layout.model import Anchor, Box, Item, Placed
from calcreport.layout.pieces import Piece
from calcreport.layout.sheet import HAIRLINE
from calcreport.report.model import Formula, Reference, Strong, TableRow, Words


def paragraphs(cell: Words) -> tuple[Words, ...]:
    """Part a cell at the line ends of its texts."""
    found: list[list[str | Strong | Reference | Formula]] = [[]]
    for word in cell:
        first, *more = word.split("\n") if isinstance(word, str) else (word,)
        found[-1].append(first)
        found += [[text] for text in more]
    return tuple(tuple(word for word in words if word != "") for words in found)


def set_long_row(kit: Kit, grid: Grid, row: TableRow, again: Piece, *, last: bool) -> list[Piece]:
    """Set a row as a piece a line, so that it may part; two lines at least stay together at either end."""
    style = grid.letters.heavy if row.emphasis else grid.letters.plain
    blank = (Box(0.0, style.rise, style.fall, ()),)
    columns = [
        [box for words in paragraphs(cell) for box in kit.lettering.set(words, style, width + 0.05) or blank]
        for cell, width in zip(row.cells, grid.widths, strict=True)
    ]
    label = kit.lettering.label(row.over, grid.letters.heading.face, grid.letters.heading.size)
    height = ABOVE + grid.letters.heading.leading
    over = joined(again, Piece(height, (Placed(grid.lefts[0], ABOVE + style.rise, label),)))
    count = max(map(len, columns), default=1)
    pieces: list[Piece] = []
    for number in range(count):
        boxes = [(place, lines[number]) for place, lines in enumerate(columns) if number < len(lines)]
        baseline = (ABOVE if number == 0 else 0.0) + max([style.rise, *(box.ascent for _, box in boxes)])
        cells: list[tuple[Item, ...]] = [() for _ in columns]
        for place, box in boxes:
            cells[place] = (Placed(aligned(grid, place, box), baseline, box),)
        foot = baseline + max([style.leading - style.rise, *(box.descent for _, box in boxes)])
        ends = number == count - 1
        foot += BELOW if ends else 0.0
        rest: list[Item] = [Anchor(row.anchor, grid.lane.left, 0.0)] if row.anchor and not number else []
        rest += [edge(grid, foot, HAIRLINE if last else FAINT)] if ends else []
        cells.append(tuple(rest))
        items = tuple(item for column in cells for item in column)
        keep = count > 1 and number in (0, count - 2)
        pieces.append(
            Piece(foot, items, keep=keep, again=over if number else again, closing=(edge(grid, foot),),
                  cells=tuple(cells), continues=number > 0)
        )  # fmt: skip
    return pieces
