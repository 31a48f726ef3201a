"""Tables: column widths, rows, and the heading row that repeats where a table runs on.

`report.model.Table` + lane -> `Piece`s: title, heading row, one piece a row. Columns keep their
natural width while the lane holds them; else the wide ones share what is left and their words wrap,
in smaller letters if even the longest words do not fit.
"""

from __future__ import annotations

import re
from dataclasses import replace

from calcreport.layout.grid import ABOVE, BELOW, FAINT, GUTTER, LETTERS, Grid, Letters, aligned, edge, joined
from calcreport.layout.kit import Kit
from calcreport.layout.long_rows import paragraphs, set_long_row
from calcreport.layout.marks import IN_ROW, loud_side
from calcreport.layout.model import Anchor, Item, Placed
from calcreport.layout.pieces import Piece, Rows
from calcreport.layout.sheet import HAIRLINE, OUTLINE, Lane
from calcreport.layout.words import STRONG, TextStyle
from calcreport.report.model import Column, Table, TableRow, Words

#: whole digits of a number, which a point, its decimals and a verdict may follow
_WHOLE = re.compile(r"[−+]?\d[\d,]*(?=\.\d|$| )")
#: A table of fewer columns is never set as two.
LEAST_PARTED = 5
#: A word wider than this share of the lane may part rather than keep other columns narrow.
LONGEST = 0.3


def set_table(kit: Kit, table: Table, lane: Lane) -> tuple[Piece, ...]:
    """Set a table; rows stay whole, and neither the first two nor the last two part.

    One that is too wide even in the smallest letters is set as two below one another, the row names in both.
    """
    halves = _halves(kit, table, lane)
    if halves is not None:
        return (*set_table(kit, halves[0], lane), *set_table(kit, halves[1], lane))
    grid = grid_of(kit, table, lane)
    title = _title(kit, table, lane, "")
    head = _head(kit, grid)
    again = joined(_title(kit, table, lane, ", continued"), head) if table.title else head
    opening = joined(title, head) if title else head
    opening, marks = _numbered(kit, table, opening, grid)
    pieces: list[Piece] = [replace(opening, before=6.0, keep=bool(table.rows))]
    last = len(table.rows) - 1
    for place, row in enumerate(table.rows):
        if row.over:
            pieces += set_long_row(kit, grid, row, again, last=place == last)
            continue
        piece = _row(kit, grid, row, again)
        if place == last:
            items = (*piece.items, *piece.closing)
        else:
            foot = piece.height
            items = piece.items if row.emphasis == "loud" else (*piece.items, edge(grid, foot, FAINT))
        pieces.append(replace(piece, items=items, keep=last > 1 and place in (0, last - 1)))
    needed = marks - sum(piece.height for piece in pieces)
    if needed > 0:
        pieces[-1] = replace(pieces[-1], height=pieces[-1].height + needed)
    return tuple(pieces)


def _halves(kit: Kit, table: Table, lane: Lane) -> tuple[Table, Table] | None:
    """Return a table whose words and numbers would have to part as two of half its columns each, or None."""
    columns = table.columns
    if len(columns) < LEAST_PARTED or any(row.over for row in table.rows):
        return None
    room = lane.width - GUTTER * (len(columns) - 1)
    least = _least(kit, table, LETTERS[-1], lane)
    if sum(least) <= room:
        return None
    # the second half begins where the first has as much as it: row names stand in both
    half, place = (sum(least[1:]) + GUTTER * (len(columns) - 1)) / 2, 1
    while place < len(columns) - 1 and sum(wide + GUTTER for wide in least[1 : place + 1]) <= half:
        place += 1
    first = replace(
        table, columns=columns[:place], rows=tuple(replace(row, cells=row.cells[:place]) for row in table.rows)
    )
    rest = tuple(replace(row, cells=(row.cells[0], *row.cells[place:]), anchor="", delta="") for row in table.rows)
    return first, Table((columns[0], *columns[place:]), rest)


def _least(kit: Kit, table: Table, letters: Letters, lane: Lane) -> tuple[float, ...]:
    """Return each column's least width that parts no word, but one of a good share of the lane."""
    return tuple(min(LONGEST * lane.width, wide) for wide in _widths(kit, table, letters, whole=False))


def grid_of(kit: Kit, table: Table, lane: Lane) -> Grid:
    """Find the column widths of a table in a lane."""
    columns = table.columns
    room = lane.width - GUTTER * (len(columns) - 1)
    for letters in LETTERS:
        natural = _widths(kit, table, letters, whole=True)
        if sum(natural) <= room:
            widths = _stretched(columns, natural, room)
            break
        least = _least(kit, table, letters, lane)
        if sum(least) <= room:
            widths = _shrunk(natural, least, room)
            break
    else:
        widths = tuple(room * wide / sum(least) for wide in least)
    lefts = tuple(lane.left + sum(widths[:place]) + GUTTER * place for place in range(len(columns)))
    return Grid(columns, lefts, widths, letters, lane, _tails(kit, table, letters))


def _widths(kit: Kit, table: Table, letters: Letters, whole: bool) -> tuple[float, ...]:
    """Return each column's natural width, or the least that parts no word."""
    measure = kit.lettering.natural if whole else kit.lettering.longest
    widths = [measure(column.heading, letters.heading) for column in table.columns]
    tails = _tails(kit, table, letters)
    for row in table.rows:
        face = letters.heavy if row.emphasis else letters.plain
        for place, cell in enumerate(row.cells):
            for words in paragraphs(cell) if row.over else (cell,):
                if words:
                    lacking = _lacking(kit, words, face, tails[place])
                    widths[place] = max(widths[place], measure(words, face) + lacking)
    return tuple(width + 0.1 for width in widths)


def _tails(kit: Kit, table: Table, letters: Letters) -> tuple[float, ...]:
    """Return the widest end behind the whole digits of each column set to the right; 0 for other columns."""
    tails = [0.0] * len(table.columns)
    places = [place for place, column in enumerate(table.columns) if column.align == "right"]
    for row in table.rows:
        face = letters.heavy if row.emphasis else letters.plain
        for place in places:
            tails[place] = max(tails[place], _tail(kit, row.cells[place], face) or 0.0)
    return tuple(tails)


def _tail(kit: Kit, cell: Words, face: TextStyle) -> float | None:
    """Return what stands behind the whole digits of a number; None where a cell begins with none."""
    first = cell[0] if cell else None
    match = _WHOLE.match(first) if isinstance(first, str) else None
    if match is None or not isinstance(first, str):
        return None
    return kit.lettering.natural((first[match.end() :], *cell[1:]), face)


def _lacking(kit: Kit, cell: Words, face: TextStyle, tail: float) -> float:
    """Return how far short of its column's right edge a number ends, its point under the others."""
    own = _tail(kit, cell, face) if tail else None
    return 0.0 if own is None else tail - own


def _stretched(columns: tuple[Column, ...], natural: tuple[float, ...], room: float) -> tuple[float, ...]:
    shares = sum(column.stretch for column in columns)
    if not shares:
        return natural
    spare = room - sum(natural)
    return tuple(width + spare * column.stretch / shares for width, column in zip(natural, columns, strict=True))


def _shrunk(natural: tuple[float, ...], least: tuple[float, ...], room: float) -> tuple[float, ...]:
    """Let columns narrower than an even share keep their width, and cap the others alike."""
    low, high = 0.0, max(natural)
    for _ in range(40):
        cap = (low + high) / 2
        total = sum(max(few, min(wide, cap)) for wide, few in zip(natural, least, strict=True))
        low, high = (cap, high) if total <= room else (low, cap)
    return tuple(max(few, min(wide, low)) for wide, few in zip(natural, least, strict=True))


def _cells(kit: Kit, grid: Grid, cells: tuple[Words, ...], style: TextStyle, rows: Rows) -> None:
    """Set the cells of one row side by side from the rows' present y."""
    set_cells = [kit.lettering.fitting(cell, style, grid.widths[place] + 0.05) for place, cell in enumerate(cells)]
    top = rows.y
    first = max((lines[0].ascent for lines in set_cells if lines), default=style.rise)
    foot = top
    for place, lines in enumerate(set_cells):
        rows.y = top + first - (lines[0].ascent if lines else 0.0)
        lacking = _lacking(kit, cells[place], style, grid.tails[place])
        for line in lines:
            x = max(grid.lefts[place], aligned(grid, place, line) - lacking)
            baseline = rows.y + line.ascent
            rows.items.append(Placed(x, baseline, line))
            rows.y = baseline + max(line.descent, style.leading - line.ascent)
        foot = max(foot, rows.y)
    rows.y = foot


def _head(kit: Kit, grid: Grid) -> Piece:
    """Set the heading row between its rules, headings standing on the lower one."""
    style = grid.letters.heading
    columns = [
        kit.lettering.set(column.heading, style, grid.widths[place] + 0.05) for place, column in enumerate(grid.columns)
    ]
    most = max((len(lines) for lines in columns), default=0)
    height = ABOVE + BELOW + 0.6 + most * style.leading
    items: list[Item] = [edge(grid, 0.0, OUTLINE)] if most else []
    for place, lines in enumerate(columns):
        y = height - BELOW - 0.6 - len(lines) * style.leading + style.rise
        for line in lines:
            items.append(Placed(aligned(grid, place, line), y, line))
            y += style.leading
    items.append(edge(grid, height, OUTLINE if not most else HAIRLINE))
    return Piece(height, tuple(items))


def _title(kit: Kit, table: Table, lane: Lane, suffix: str) -> Piece | None:
    if not table.title:
        return None
    rows = Rows()
    rows.words(kit.lettering.set((*table.title, suffix), STRONG, lane.width), STRONG, lane.left)
    return Piece(rows.y + 2.0, tuple(rows.items))


def _numbered(kit: Kit, table: Table, opening: Piece, grid: Grid) -> tuple[Piece, float]:
    """Give the opening of a numbered table its number, source and anchor; return their height too.

    Ring and source rows may reach down beside the first rows of the table.
    """
    rows = Rows(opening.height)
    rows.items.extend(opening.items)
    if not kit.sheet.lanes:
        if table.anchor:
            rows.items.insert(0, Anchor(table.anchor, grid.lane.left, 0.0))
        return replace(opening, items=tuple(rows.items)), 0.0
    baseline = STRONG.leading - 3.0 if table.title else ABOVE + grid.letters.heading.rise
    piece = kit.marks.numbered(rows, baseline, table.number, table.anchor, table.source, "", grid.lane)
    return replace(piece, height=opening.height), piece.height


def _row(kit: Kit, grid: Grid, row: TableRow, again: Piece) -> Piece:
    """Set one row with its rules; an NG row is barred at the frame and ruled off."""
    rows = Rows(ABOVE)
    _cells(kit, grid, row.cells, grid.letters.heavy if row.emphasis else grid.letters.plain, rows)
    rows.y += BELOW
    items: list[Item] = [Anchor(row.anchor, grid.lane.left, 0.0)] if row.anchor else []
    items.extend(rows.items)
    if row.emphasis == "loud":
        items.extend((edge(grid, 0.0, OUTLINE), edge(grid, rows.y, OUTLINE)))
        items.append(loud_side(kit.sheet, rows.y))
    if row.delta:
        items.extend(kit.marks.delta(row.delta, rows.y))
    cloud = kit.marks.cloud(row.delta, grid.lane, IN_ROW, grid.lefts[-1] + grid.widths[-1] + 7.0)
    return Piece(rows.y, tuple(items), again=again, closing=(edge(grid, rows.y),), cloud=cloud)
