"""Runs the cases beside a template and holds what was worked against what outside sources say.

Cases and plans in, problems `case-differs` out.
"""

from __future__ import annotations

from calcreport.calculate.evaluate import Program
from calcreport.calculate.handing import hand_values
from calcreport.calculate.linking import find_path
from calcreport.calculate.model import Case, Expected, Plan, Worked, WorkedCheck
from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount


def run_case(case: Case, plan: Plan, problems: Problems) -> Worked | None:
    """Work one case and add a `case-differs` for each expectation it misses."""
    before = problems.met
    values = hand_values(case.calculation, plan, {}, problems)
    if problems.met > before:
        return None
    worked = Program(plan).run(case.calculation, values, "")
    if case.stops or worked.stop:
        found = worked.stop.words if worked.stop else "no stop"
        if not case.stops or case.stops not in found:
            problems.add(
                "case-differs",
                case.span.part(0, 1),
                f"the case `{case.name}` stops elsewhere",
                expected=case.stops or "no stop",
                found=found,
            )
    for expected in case.expected:
        _hold(case, expected, worked, problems)
    return worked


def _hold(case: Case, expected: Expected, worked: Worked, problems: Problems) -> None:
    checks = [check for check in worked.checks if check.line.name == expected.name]
    if expected.outcome:
        found = _outcome(expected.name, checks, worked)
        if found != expected.outcome:
            _say(case, expected, expected.outcome, found, problems)
    if expected.value is None:
        return
    if checks and expected.name not in worked.plan.by_path:
        ratios = [check.ratio for check in checks if check.ratio is not None]
        _compare(case, expected, max(ratios) if ratios else None, 1.0, problems)
        return
    place = find_path(worked, expected.name, expected.span, problems)
    if place is None:
        return
    value = worked.values.get(*place)
    unit = worked.plan.slots[place[0]].symbol.unit
    if isinstance(expected.value, str):
        if value != expected.value:
            _say(case, expected, expected.value, str(value), problems)
        return
    if unit is not None and expected.value.dimension != unit.dimension:
        _say(case, expected, expected.value.text, f"a value in {unit.text}", problems)
        return
    _compare(case, expected, value if isinstance(value, float) else None, expected.value.unit.size, problems)


def _outcome(name: str, checks: list[WorkedCheck], worked: Worked) -> str:
    """Return what checks of a name come to, or whether a limit state is left out."""
    if not checks:
        left = "not covered" if name in worked.left_out else "not applicable"
        return left if name in worked.plan.leaves else "no such check"
    worst = "NG" if any(check.verdict == "NG" for check in checks) else checks[0].verdict
    evaluated = [check for check in checks if check.verdict in ("OK", "NG")]
    return evaluated[0].verdict if worst == "not applicable" and evaluated else worst


def _compare(case: Case, expected: Expected, value: float | None, size: float, problems: Problems) -> None:
    assert isinstance(expected.value, Amount)
    within = float(expected.tolerance.value) if expected.tolerance else 0.0
    wanted = float(expected.value.value)
    #: one part in 10^12 for the binary form of the tolerance itself
    if value is None or abs(value - wanted) > within + 1e-12 * abs(wanted):
        found = "no value" if value is None else f"{value / size:.7g} {expected.value.unit.text}"
        _say(case, expected, f"{expected.value.text} ({expected.source})", found, problems)


def _say(case: Case, expected: Expected, wanted: str, found: str, problems: Problems) -> None:
    problems.add(
        "case-differs",
        expected.span,
        f"`{expected.name}` of the case `{case.name}` differs",
        expected=wanted,
        found=found,
    )
