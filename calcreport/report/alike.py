"""Which values share one line: given ones there are none of, the plain no's of a project, and what is handed on.

Given values in, groups of planned ones out; worked lines in, whether one goes on from another.
"""

from __future__ import annotations

from typing import Literal

from calcreport.calculate.model import (
    GivenPairs,
    GivenRows,
    GivenValue,
    PlannedGiven,
    Worked,
    WorkedGives,
    WorkedLine,
)
from calcreport.core.expression import Name, Negate, Number


def alike(worked: Worked) -> dict[Literal["none", "no"], tuple[PlannedGiven, ...]]:
    """Return the given values without rows to which the project says one word, where it says it to more than one."""
    said = {value.given.name: _word(value) for value in worked.calculation.given}
    plain = [given for given in worked.plan.givens if given.rows < 0 and not given.over]
    found: dict[Literal["none", "no"], tuple[PlannedGiven, ...]] = {}
    for word in ("none", "no"):
        givens = tuple(given for given in plain if said[given.given.name] == word)
        if len(givens) > 1:
            found[word] = givens
    return found


def _word(value: GivenValue | GivenRows | GivenPairs) -> Literal["none", "no", ""]:
    if value.origin.kind == "none":
        return "none"
    symbol = value.given.symbol
    is_no = isinstance(value, GivenValue) and value.value == "no" and symbol and symbol.words == ("yes", "no")
    return "no" if is_no and value.origin.kind == "project file" else ""


def runs_on(before: WorkedLine | None, line: WorkedGives) -> bool:
    """Tell whether a line shares the number of the one before it: both only hand a value on, from one source."""
    if not isinstance(before, WorkedGives) or before.line.cite.printed != line.line.cite.printed:
        return False
    return _hands_on(before) and _hands_on(line)


def _hands_on(line: WorkedGives) -> bool:
    """Tell whether a line has nothing to work: one form, and that a name, a number or a word."""
    arms = line.line.arms
    formula = arms[0].formula
    return len(arms) == 1 and isinstance(formula.body if isinstance(formula, Negate) else formula, Name | Number)
