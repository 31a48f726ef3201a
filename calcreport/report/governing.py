"""Which check of a calculation governs: the worst row of each check, and the worst of those.

A worked calculation in, its checks ranked out.
"""

from __future__ import annotations

from calcreport.calculate.model import Member, Worked, WorkedCheck
from calcreport.report.below import severity


def worst_checks(owner: Worked | Member) -> tuple[WorkedCheck, ...]:
    """Return one check of each name, its worst row, in page order."""
    found: dict[str, WorkedCheck] = {}
    for check in owner.checks:
        before = found.get(check.line.name)
        if before is None or rank(check) > rank(before):
            found[check.line.name] = check
    return tuple(found.values())


def rank(check: WorkedCheck) -> tuple[int, float]:
    """Rank a check by verdict, NG first, then by ratio."""
    order = {"not applicable": 0, "OK": 1, "not evaluated": 2, "NG": 3}
    return order[check.verdict], severity(check)


def governing(owner: Worked | Member) -> WorkedCheck | None:
    """Return the check that governs a calculation or a member."""
    judged = [check for check in worst_checks(owner) if check.verdict != "not applicable"]
    return max(judged, key=rank, default=None)
