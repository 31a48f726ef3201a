"""Whether a case notices: the expectations that what was worked misses, judged as `lint` judges them.

A case and a worked calculation in, numbers of expectations out, -1 for the place where it stops.
"""

from __future__ import annotations

from collections.abc import Iterator

from calcreport.calculate.handing import find_path
from calcreport.calculate.model import Case, Expected, Worked
from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount

#: stands for the place where a calculation stops
STOP = -1


def missed(case: Case, worked: Worked) -> Iterator[int]:
    """Yield what a case misses, the stop first."""
    found = worked.stop.words if worked.stop else ""
    if bool(case.stops) != bool(worked.stop) or case.stops not in found:
        yield STOP
    for number, expected in enumerate(case.expected):
        if not _met(expected, worked):
            yield number


def _met(expected: Expected, worked: Worked) -> bool:
    checks = [check for check in worked.checks if check.line.name == expected.name]
    if expected.outcome and not checks and expected.name in worked.plan.leaves:
        # a limit state, left out or not
        return (expected.outcome == "not covered") == (expected.name in worked.left_out)
    if expected.outcome and expected.outcome != _worst([check.verdict for check in checks]):
        return False
    if expected.value is None:
        return True
    if checks and expected.name not in worked.plan.by_path:
        ratios = [check.ratio for check in checks if check.ratio is not None]
        return within(expected, max(ratios) if ratios else None)
    place = find_path(worked, expected.name, expected.span, Problems())
    if place is None:
        return False
    value = worked.values.get(*place)
    if isinstance(expected.value, str):
        return value == expected.value
    return within(expected, value if isinstance(value, float) else None)


def _worst(verdicts: list[str]) -> str:
    """Return NG if any row of a check is, else the verdict of the rows it was judged in."""
    if not verdicts:
        return "no such check"
    judged = [verdict for verdict in verdicts if verdict in ("OK", "NG")]
    if "NG" in judged:
        return "NG"
    return judged[0] if judged and verdicts[0] == "not applicable" else verdicts[0]


def within(expected: Expected, value: float | None) -> bool:
    """Tell whether a number is the one expected, within its tolerance."""
    assert isinstance(expected.value, Amount)
    if value is None:
        return False
    tolerance = float(expected.tolerance.value) if expected.tolerance else 0.0
    wanted = float(expected.value.value)
    # one part in 10^12 for the binary form of the tolerance itself
    return abs(value - wanted) <= tolerance + 1e-12 * abs(wanted)
