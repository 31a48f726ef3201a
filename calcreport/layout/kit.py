"""What setting a block needs besides the block: sheet, lettering, marks and the symbol column.

Made once a part by `layout.paginate`; holds no state of its own.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.layout.marks import Marks, edges
from calcreport.layout.model import Box, Stroke
from calcreport.layout.sheet import HAIRLINE, Lane, Sheet
from calcreport.layout.words import Lettering
from calcreport.report.model import Formula, Operator

#: Size of formulas, substitutions and results.
MATH = 10.0
#: Gap on either side of an equals sign, and least gap between a formula and the result.
EQUALS_GAP, RESULT_GAP = 3.0, 12.0
#: How far the rows of a broken formula stand in behind its first.
HANG = 11.0
#: Symbols stand this far in from the words, and widen the symbol column no further than the cap.
INDENT, SYMBOL_CAP = 9.0, 46.0

_EQUALS = Operator("=", "relation")


@dataclass(frozen=True, slots=True)
class Kit:
    """Shared tools of one part's blocks."""

    sheet: Sheet
    lettering: Lettering
    marks: Marks
    #: width of the widest symbol of the part's lines, at most `SYMBOL_CAP`
    symbols: float
    #: revision whose changed lines are clouded; '' clouds all that carry a delta
    clouded: str = ""

    def math(self, formula: Formula, size: float = MATH) -> Box:
        """Return the box of a formula set inside a row."""
        return self.lettering.formulas.box(formula, size, "text")

    def rows(self, formula: Formula, width: float) -> tuple[Box, ...]:
        """Return a formula in rows no wider than `width`, all but the first to be hung by `HANG`.

        It is broken at its signs; letters get smaller only where a part without a break is too wide.
        """
        formulas = self.lettering.formulas
        rows: tuple[Box, ...] = ()
        for size in (MATH, 8.5, 7.2, 6.2):
            rows = formulas.broken(formula, width, size, "text", HANG)
            if all(box.width <= width - (HANG if place else 0.0) + 0.01 for place, box in enumerate(rows)):
                break
        return rows

    @property
    def equals(self) -> Box:
        """The equals sign."""
        return self.lettering.formulas.box(_EQUALS, MATH, "text")

    def rule(self, lane: Lane, y: float) -> Stroke:
        """Return a hairline across the lane: from rule to rule, or up to a figure beside it."""
        left, right = edges(self.sheet, lane)
        return Stroke(((left, y), (right, y)), HAIRLINE)

    def equals_at(self, lane: Lane) -> float:
        """Return the x at which the equals signs of a lane's lines stand."""
        return lane.left + INDENT + self.symbols + EQUALS_GAP
