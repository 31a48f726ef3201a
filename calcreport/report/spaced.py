"""Which values of rows stand in print: what only figures use needs no table and no digits that confirm it.

A plan in, answers out.
"""

from __future__ import annotations

from collections.abc import Iterator

from calcreport.calculate.model import Plan, PlannedBranches, PlannedEach, PlannedFigure, PlannedLine, PlannedPart
from calcreport.core.expression import Condition, Expression, Name, walk


def is_printed(plan: Plan, slot: int) -> bool:
    """Tell whether a line on the sheets uses a value, and no table of an `each` shows its rows."""
    used, tabled = False, False
    for line in _shown(plan.lines):
        tabled = tabled or (isinstance(line, PlannedEach) and slot in line.table)
        used = used or any(isinstance(n, Name) and n.slot == slot for node in _formulas(line) for n in walk(node))
    return used and not tabled


def _shown(lines: tuple[PlannedLine, ...]) -> Iterator[PlannedLine]:
    """Yield every line that is told on the sheets, at any depth."""
    for line in lines:
        match line:
            case PlannedEach(show="figure") | PlannedFigure():
                continue
            case PlannedBranches(arms):
                for arm in arms:
                    yield from _shown(arm.lines)
            case PlannedPart(lines=inner):
                yield from _shown(inner)
            case _:
                yield from _shown(getattr(line, "lines", ()))
        yield line


def _formulas(line: PlannedLine) -> Iterator[Expression | Condition]:
    """Yield the formulas and conditions of one line, not of the lines in it."""
    for name in ("condition", "holds", "left", "right", "low", "high"):
        node = getattr(line, name, None)
        if node is not None:
            yield node
    for arm in getattr(line, "arms", ()):
        if arm.when is not None:
            yield arm.when
        if getattr(arm, "formula", None) is not None:
            yield arm.formula
    for entry in getattr(line, "entries", ()) if getattr(line, "spaced", None) is None else ():
        for cell in entry.cells:
            yield from (node for _, node in cell) if isinstance(cell, tuple) else (cell,)
