"""Which given values share one line: those there are none of, and the plain no's of a project.

Given values in, groups of planned ones out.
"""

from __future__ import annotations

from typing import Literal

from calcreport.calculate.model import GivenPairs, GivenRows, GivenValue, PlannedGiven, Worked


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
