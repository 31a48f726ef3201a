"""Which check of a calculation governs: the worst row of each check, and the worst of those.

A worked calculation in, its checks ranked out.
"""

from __future__ import annotations

from calcreport.calculate.model import Worked, WorkedCheck
from calcreport.report.script import severity


def worst_checks(worked: Worked) -> tuple[WorkedCheck, ...]:
    """Return one check of each name, its worst row, in page order."""
    found: dict[str, WorkedCheck] = {}
    for check in worked.checks:
        before = found.get(check.line.name)
        if before is None or rank(check) > rank(before):
            found[check.line.name] = check
    return tuple(found.values())


def rank(check: WorkedCheck) -> tuple[int, float]:
    """Rank a check by verdict, NG first, then by ratio."""
    order = {"not applicable": 0, "OK": 1, "not evaluated": 2, "NG": 3}
    return order[check.verdict], severity(check)


def governing(worked: Worked) -> WorkedCheck | None:
    """Return the check that governs a calculation."""
    judged = [check for check in worst_checks(worked) if check.verdict != "not applicable"]
    return max(judged, key=rank, default=None)
