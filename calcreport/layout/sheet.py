"""Sheet geometry: paper, frame, lanes and title block of a letter or A4 sheet.

Paper name -> `Sheet`, all lengths in points from the top-left corner, y downwards. Knows nothing of
what stands on a sheet. The office drawing sheet is the model: one frame, a wide left margin for
punching, a number lane, a work lane, a source lane, and a title block along the foot whose last
cell continues the source lane.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

#: Points in a millimetre.
MM = 72 / 25.4

#: Line weights in points: frame; section outline and axes; everything else; loud rules.
FRAME, OUTLINE, HAIRLINE, HEAVY = 1.0, 0.7, 0.35, 2.0

_PAPERS = {"letter": (612.0, 792.0), "a4": (210 * MM, 297 * MM)}


@dataclass(frozen=True, slots=True)
class Lane:
    """The strip a block is set in, between its left text edge and its right (result) edge."""

    left: float
    right: float

    @property
    def width(self) -> float:
        """Width between the text edges."""
        return self.right - self.left


@dataclass(frozen=True, slots=True)
class Sheet:
    """Edges of one kind of sheet, in points."""

    width: float
    height: float
    #: frame edges
    left: float
    right: float
    top: float
    foot: float
    #: rule between number lane and work lane, and between work lane and source lane
    work: float
    source: float
    #: upper edge of the title block
    block: float
    #: first and last y at which a body may stand
    body_top: float
    body_foot: float
    #: False on sheets without numbered lines: the body then uses the whole width
    lanes: bool

    @property
    def text(self) -> Lane:
        """The lane body text is set in: the work lane, or the whole frame."""
        if self.lanes:
            return Lane(self.work + 2.5 * MM, self.source - 4 * MM)
        return Lane(self.left + 4 * MM, self.right - 4 * MM)

    @property
    def sources(self) -> Lane:
        """Text edges of the source lane."""
        return Lane(self.source + 2 * MM, self.right - 1.5 * MM)

    @property
    def number_axis(self) -> float:
        """Where line numbers end; their tick rings follow."""
        return self.left + 5.8 * MM

    @property
    def body_height(self) -> float:
        """Height a body can use."""
        return self.body_foot - self.body_top


def sheet_of(paper: Literal["letter", "a4"], lanes: bool = True) -> Sheet:
    """Return the geometry of a letter or A4 sheet, with the three lanes or with one wide body."""
    width, height = _PAPERS[paper]
    left, right = 19 * MM, width - 10 * MM
    top, foot = 10 * MM, height - 9 * MM
    block = foot - 26 * MM
    return Sheet(
        width=width,
        height=height,
        left=left,
        right=right,
        top=top,
        foot=foot,
        work=left + 10 * MM,
        source=right - 34 * MM,
        block=block,
        body_top=top + 2 * MM,
        body_foot=block - 1.4 * MM,
        lanes=lanes,
    )
