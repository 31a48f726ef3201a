"""One pass over the blocks of a part: pieces placed in order, sheet after sheet.

Blocks and a manner of setting -> `Body` a sheet. Headings stay with what follows, a figure is set at the
right of the lane with the following lines left of it, no piece is parted. A figure that finds no room
waits for the next sheet while its lines go on. Which pass is used in the end is decided in `flow`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

from calcreport.layout.blocks import narrowed, set_block, stands_alone
from calcreport.layout.figures import draw
from calcreport.layout.kit import Kit
from calcreport.layout.marks import GAP, cloud
from calcreport.layout.model import Box, Item, Placed
from calcreport.layout.pieces import Cloud, Piece, Rows, parted
from calcreport.layout.sheet import Lane
from calcreport.layout.words import QUIET
from calcreport.report.model import Block, FigureBlock

#: A figure beside lines that its labels make wider than this share of the lane is set alone.
BESIDE = 0.62
#: Lines do not begin beside the last points of a figure.
SLACK = 14.0
#: Least share of its gap a heading keeps where gaps are closed.
HEADING_GAP = 0.5


@dataclass(frozen=True, slots=True)
class Manner:
    """How closely a part is set."""

    #: share of the gaps between pieces
    gaps: float
    #: width figures beside lines are drawn in
    figure: float


@dataclass(frozen=True, slots=True)
class Body:
    """The items of one sheet's body, and the y they end at."""

    items: tuple[Item, ...]
    foot: float


#: Pieces by block and lane, and figures by block, measured in earlier passes over the same part.
Measured: TypeAlias = tuple[dict[tuple[int, float], tuple[Piece, ...]], dict[tuple[int, float], Box]]


@dataclass(slots=True)
class _Held:
    """A piece waiting for the one it must stay with, and where it came from."""

    piece: Piece
    block: int
    place: int
    lane: Lane


class Filling:
    """One pass over the blocks of a part."""

    def __init__(
        self,
        kit: Kit,
        blocks: tuple[Block, ...],
        top: float,
        measured: Measured,
        manner: Manner,
    ) -> None:
        self.kit, self.blocks, self.top = kit, blocks, top
        self.gaps, self.width = manner.gaps, manner.figure
        self.measured, self.drawn = measured
        self.full = kit.sheet.text
        self.sheets: list[list[Item]] = [[]]
        self.feet: list[float] = [top]
        self.y = top
        self.first_block = 0
        self.held: list[_Held] = []
        self.last: tuple[float, Piece] | None = None
        #: a row that may part: where it begins on this sheet, and its items so far by column
        self.row: tuple[float, list[list[Item]]] = (0.0, [])
        self.beside: tuple[float, Lane] | None = None
        self.waiting: int | None = None
        #: a figure that waited until the lines ended, and the first block of the sheet it waited on
        self.stranded: tuple[int, int] | None = None
        #: the revision cloud being drawn, its top and its foot so far
        self.round: tuple[Cloud, float, float] | None = None

    def run(self, order: tuple[int, ...]) -> None:
        """Place every block."""
        for place, block in enumerate(order):
            record = self.blocks[block]
            follower = self.blocks[order[place + 1]] if place + 1 < len(order) else None
            lines_follow = follower is not None and not stands_alone(follower)
            beside = isinstance(record, FigureBlock) and record.beside and lines_follow
            if not (beside and self._figure(block)):
                self._block(block)
        if self.held:
            self._settle()
        if self.waiting is not None:
            self.stranded = (self.waiting, self.first_block)
            figure, self.waiting = self.waiting, None
            self._break()
            self._block(figure)
            self._settle()
        self._end_cloud()
        self._clear()
        self.feet[-1] = self.y

    def bodies(self) -> tuple[Body, ...]:
        """Return what has been placed, a body a sheet."""
        return tuple(Body(tuple(items), foot) for items, foot in zip(self.sheets, self.feet, strict=True))

    def _lane(self, block: Block) -> Lane:
        """Return the lane for a block that begins here; step below the figure if it cannot be beside."""
        if self.beside is None:
            return self.full
        foot, lane = self.beside
        y = self.y + sum(held.piece.height + held.piece.before for held in self.held)
        if stands_alone(block) or y > foot - SLACK:
            if not self.held:
                self._clear()
            return self.full
        return lane

    def _clear(self) -> None:
        """Go on below the figure at the right."""
        if self.beside is not None:
            self.y = max(self.y, self.beside[0])
            self.beside = None

    def _pieces(self, block: int, lane: Lane) -> tuple[Piece, ...]:
        key = (block, lane.right)
        pieces = self.measured.get(key)
        if pieces is None:
            pieces = self.measured[key] = set_block(self.kit, self.blocks[block], lane)
        return pieces

    def _block(self, block: int) -> None:
        lane = self._lane(self.blocks[block])
        pieces = self._pieces(block, lane)
        for place in range(len(pieces)):
            self.held.append(_Held(pieces[place], block, place, lane))
            if not pieces[place].keep:
                sheet = len(self.sheets)
                self._settle()
                # a table of givens takes the whole lane again below the figure, a block on a new sheet its own
                if (len(self.sheets) > sheet or self.beside is not None) and lane is not self._lane(self.blocks[block]):
                    other = self._pieces(block, self._lane(self.blocks[block]))
                    if len(other) == len(pieces):
                        pieces, lane = other, self._lane(self.blocks[block])

    def _settle(self) -> None:
        """Place the pieces held, all on one sheet."""
        held, self.held = self.held, []
        if self.beside is not None and any(one.lane is self.full for one in held):
            self._clear()
        if not self._fits(held) and (self.sheets[-1] or self.beside):
            self._break()
            self.first_block = held[0].block
            held = [self._again(one) for one in held]
            self._set_again(held[0].piece)
        if self._fits(held):
            for one in held:
                self._put(one.piece)
            return
        for one in held:
            self._put_monster(one.piece)

    def _again(self, held: _Held) -> _Held:
        """Set a held piece anew where its lane is not the one of the sheet it now stands on."""
        lane = self._lane(self.blocks[held.block])
        if lane is held.lane:
            return held
        pieces = self._pieces(held.block, lane)
        fresh = pieces[held.place] if held.place < len(pieces) else held.piece
        return _Held(fresh, held.block, held.place, lane)

    def _fits(self, held: list[_Held]) -> bool:
        y = self.y
        for one in held:
            y += one.piece.height + (self._gap(one.piece) if y > self.top else 0.0)
        return y <= self.kit.sheet.body_foot + 0.01

    def _gap(self, piece: Piece) -> float:
        """Return the gap above a piece; a heading keeps more of its own than a line."""
        return piece.before * (max(self.gaps, HEADING_GAP) if piece.before > GAP else self.gaps)

    def _set_again(self, piece: Piece) -> None:
        """Repeat the heading row a table piece asks for."""
        if piece.again is not None:
            self._put(piece.again)

    def _put(self, piece: Piece) -> None:
        if self.y > self.top:
            self.y += self._gap(piece)
        items = piece.items
        if piece.opening and self.last is not None and not self.last[1].ruled:
            items = (*piece.opening, *items)
        if piece.cells:
            self._put_cells(piece)
        else:
            box = Box(self.kit.sheet.width, 0.0, piece.height, items)
            self.sheets[-1].append(Placed(0.0, self.y, box))
        self.last = (self.y, piece)
        self._cloud(piece)
        self.y += piece.height

    def _put_cells(self, piece: Piece) -> None:
        """Place a line of a row that may part with the lines of the row before it on this sheet."""
        if piece.continues and self.last is not None and self.last[1].cells:
            self.sheets[-1].pop()
        else:
            self.row = (self.y, [[] for _ in piece.cells])
        top, columns = self.row
        for column, items in zip(columns, piece.cells, strict=True):
            if items:
                column.append(Placed(0.0, self.y - top, Box(self.kit.sheet.width, 0.0, piece.height, items)))
        whole = tuple(item for column in columns for item in column)
        self.sheets[-1].append(Placed(0.0, top, Box(self.kit.sheet.width, 0.0, self.y + piece.height - top, whole)))

    def _cloud(self, piece: Piece) -> None:
        """Draw on at the cloud round the pieces above, or begin one, or end it."""
        mark = piece.cloud
        if mark is not None and self.kit.clouded not in ("", mark.revision):
            mark = None
        if self.round is not None and self.round[0] != mark:
            self._end_cloud()
        if mark is not None:
            top = self.round[1] if self.round is not None else self.y
            self.round = (mark, top, self.y + piece.height)

    def _end_cloud(self) -> None:
        if self.round is not None:
            mark, top, foot = self.round
            self.sheets[-1].append(cloud(mark.left, top + mark.inside[0], mark.right, foot - mark.inside[1]))
            self.round = None

    def _put_monster(self, piece: Piece) -> None:
        """Place a piece higher than a sheet, in strips."""
        room = self.kit.sheet.body_foot - self.top
        for strip in parted(piece, room) if piece.height > room else (piece,):
            gap = self._gap(strip) if self.y > self.top else 0.0
            if self.y + gap + strip.height > self.kit.sheet.body_foot + 0.01:
                self._break()
            self._put(strip)

    def _break(self) -> None:
        """Begin a new sheet; a waiting figure stands at its head."""
        if self.last is not None and self.last[1].closing:
            y, piece = self.last
            box = Box(self.kit.sheet.width, 0.0, piece.height, piece.closing)
            self.sheets[-1].append(Placed(0.0, y, box))
        self._end_cloud()
        self._clear()
        self.feet[-1] = self.y
        self.sheets.append([])
        self.feet.append(self.top)
        self.y, self.last = self.top, None
        if self.waiting is not None:
            figure, self.waiting = self.waiting, None
            self._figure(figure)

    def _figure(self, block: int) -> bool:
        """Set a figure at the right of the lane, or let it wait; False if it is too wide for that."""
        record = self.blocks[block]
        assert isinstance(record, FigureBlock)
        lane = self.full
        box = self.drawn.get((block, self.width))
        if box is None:
            box = draw(self.kit.lettering.formulas, record.figure, self.width)
            self.drawn[block, self.width] = box
        if box.width > BESIDE * lane.width:
            return False
        caption = self.kit.lettering.set(record.caption, QUIET, box.width)
        rows = Rows(box.descent + 3.0)
        rows.words(caption, QUIET, lane.right - box.width)
        above = sum(one.piece.height + one.piece.before for one in self.held)
        start = max(self.y, self.beside[0] if self.beside else 0.0) + above
        if start + 6.0 + rows.y > self.kit.sheet.body_foot and self.sheets[-1]:
            if self.waiting is not None:
                self._break()
                return self._figure(block)
            self.waiting = block
            return True
        self._clear()
        if self.held:
            self._settle()
        top = self.y + (6.0 if self.y > self.top else 0.0)
        items = (Placed(lane.right - box.width, 0.0, box), *rows.items)
        self.sheets[-1].append(Placed(0.0, top, Box(lane.width, 0.0, rows.y, items)))
        self.beside = (top + rows.y + 2.0, narrowed(lane, box.width))
        return True
