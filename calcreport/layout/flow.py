"""Blocks of one part -> bodies of its sheets, in the pass that serves the reader and the paper best.

Takes the passes of `filling`: an open one first; where its last sheet is nearly empty, closer ones; and
where a figure was left without lines, one with that figure taken to the head of its sheet. Knows no sheet
numbers and no title blocks.
"""

from __future__ import annotations

from calcreport.layout.filling import Body, Filling, Manner, Measured
from calcreport.layout.kit import Kit
from calcreport.layout.pieces import Piece
from calcreport.report.model import Block

#: Width a figure beside lines is drawn in.
WIDEST = 178.0
#: A last sheet filled less than this is worth closing the gaps for.
SPARSE = 0.5

OPEN = Manner(1.0, WIDEST)
#: A part of more sheets than this is set closer: what it takes in paper it takes of a reader's overview.
LONG = 4
CLOSE = Manner(0.5, WIDEST)
#: Manners tried, in order, to bring a sparse last sheet back.
CLOSER = (Manner(0.75, WIDEST), *(Manner(gaps, 168.0) for gaps in (0.75, 0.6, 0.5, 0.42, 0.36, 0.25)))


def flow(kit: Kit, blocks: tuple[Block, ...], top: float) -> tuple[Body, ...]:
    """Share the blocks out over sheets whose bodies begin at `top`; one sheet at least."""
    measured: Measured = ({}, {})
    order = tuple(range(len(blocks)))
    bodies = _run(kit, blocks, order, top, measured, OPEN)
    if len(bodies) > LONG:
        bodies = _run(kit, blocks, order, top, measured, CLOSE)
    room = kit.sheet.body_foot - top
    if len(bodies) > 1 and bodies[-1].foot - top < SPARSE * room:
        filled, gaps = _extent(measured)
        for manner in CLOSER:
            if filled + manner.gaps * gaps <= (len(bodies) - 1) * room:
                closer = _run(kit, blocks, order, top, measured, manner)
                if len(closer) < len(bodies):
                    return closer
    return bodies


def _extent(measured: Measured) -> tuple[float, float]:
    """Return the height of all pieces and of the gaps between them; lines beside figures count as half."""
    by_block: dict[int, list[tuple[Piece, ...]]] = {}
    for (block, _), pieces in measured[0].items():
        by_block.setdefault(block, []).append(pieces)
    widest = max((right for _, right in measured[0]), default=0.0)
    filled = gaps = 0.0
    for block, settings in by_block.items():
        share = 1.0 if (block, widest) in measured[0] else 0.5
        filled += share * min(sum(piece.height for piece in pieces) for pieces in settings)
        gaps += sum(piece.before for piece in settings[0])
    return filled, gaps


def _run(
    kit: Kit,
    blocks: tuple[Block, ...],
    order: tuple[int, ...],
    top: float,
    measured: Measured,
    manner: Manner,
) -> tuple[Body, ...]:
    """Flow the blocks once, and once more with a figure moved up if it was left without lines."""
    once = Filling(kit, blocks, top, measured, manner)
    once.run(order)
    if once.stranded is None:
        return once.bodies()
    figure, before = once.stranded
    moved = tuple(block for block in order if block != figure)
    at = moved.index(before) if before in moved else len(moved)
    twice = Filling(kit, blocks, top, measured, manner)
    twice.run((*moved[:at], figure, *moved[at:]))
    return twice.bodies()
