"""Takes the first of the engineer's candidates that meets every check, and keeps what was found of those before it.

Worked candidates in, a `Selection` out. Looks for nothing: the order is the engineer's, and a pinned candidate stays.
Among candidates of one preference, those that meet every check are told apart by the value the template wants least.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from calcreport.calculate.model import Calculation, Selection, Tried, Worked

#: values closer than this, relative, are one: the engineer's order decides
_ALIKE = 1e-9


def select(calculation: Calculation, work: Callable[[Calculation], Worked | None], least: int = -1) -> Worked | None:
    """Return the calculation worked with the candidate that serves, or with the pinned one.

    Candidates of a preference after the first with one that meets every check are not worked, save a pinned one. Where
    none does, the one whose worst check is least over stands in its place, and its sheets say NG. None where values
    could not be handed. `least` is the slot of the value wanted least among those of one preference, -1 for none.
    """
    tried: list[Tried] = []
    first = -1
    for place, candidate in enumerate(calculation.candidates):
        if first >= 0 and candidate.preference != calculation.candidates[first].preference:
            break
        worked = work(calculation.taking(place))
        if worked is None:
            return None
        tried.append(Tried(place, worked))
        if worked.verdict == "OK" and (first < 0 or _is_less(worked, tried[first].worked, least)):
            first = place
    pinned = calculation.pinned
    if pinned >= len(tried):
        worked = work(calculation.taking(pinned))
        if worked is None:
            return None
        tried.append(Tried(pinned, worked))
    used = pinned if pinned >= 0 else first if first >= 0 else _least_over(tried)
    selection = Selection(calculation.candidates, tuple(tried), used, first, pinned >= 0, least)
    return replace(next(one.worked for one in tried if one.place == used), selection=selection)


def _is_less(one: Worked, other: Worked, least: int) -> bool:
    """Tell whether a candidate has less of the value wanted least than another that serves as well."""
    mine, its = one.values.get(least), other.values.get(least)
    assert isinstance(mine, float) and isinstance(its, float)
    return mine < its - _ALIKE * abs(its)


def _least_over(tried: list[Tried]) -> int:
    """Return the candidate nearest to serving: one that ran to its end, then by the worst ratio, then the first."""

    def distance(one: Tried) -> tuple[bool, float]:
        worst = max((check.ratio for check in one.worked.checks if check.ratio is not None), default=float("inf"))
        return one.worked.stop is not None, worst

    return min(tried, key=distance).place
