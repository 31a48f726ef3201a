"""Which check of a calculation governs: the worst row of each check, and the worst of those; which rows tell that.

A worked calculation in, its checks ranked out; a worked set of rows in, those that must stand in print out.
"""

from __future__ import annotations

from calcreport.calculate.model import Member, Worked, WorkedCheck, WorkedEach, WorkedLine
from calcreport.report.below import below, severity


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


def governing_row(each: WorkedEach) -> int:
    """Return the row whose worst check is the worst of all, an NG before any ratio."""
    return max(range(len(each.rows)), key=lambda row: _worst(each.rows[row]))


def _worst(lines: tuple[WorkedLine, ...]) -> tuple[bool, float]:
    checks = below(lines, WorkedCheck)
    failed = any(check.verdict == "NG" for check in checks)
    return failed, max((severity(check) for check in checks), default=-1.0)


def telling_rows(each: WorkedEach) -> tuple[int, ...]:
    """Return the rows that stand in print: all, or where the template asks for those that tell what governs, these.

    They are the row told in full, the worst row of each check that has a demand, and every row that is not OK.
    """
    if each.line.show != "governing" or not any(below(row, WorkedCheck) for row in each.rows):
        return tuple(range(len(each.rows)))
    worst: dict[str, tuple[tuple[int, float], int]] = {}
    found = {governing_row(each)}
    for row, lines in enumerate(each.rows):
        for check in below(lines, WorkedCheck):
            name, own = check.line.name, rank(check)
            if own > worst.get(name, ((-1, 0.0), row))[0]:
                worst[name] = own, row
            if check.verdict in ("NG", "not evaluated"):
                found.add(row)
    found.update(row for own, row in worst.values() if own[1] > 0.0)
    return tuple(sorted(found))
