"""Holds a project against what its status claims: what leaves the office for permit or construction has no open end.

`WorkedProject` in, problems `not-ready` out. The engineer's word settles what the program cannot, and is printed.
"""

from __future__ import annotations

from calcreport.calculate.model import Worked, WorkedProject
from calcreport.core.problems import Problems

#: statuses under which nothing may be open
FINAL = ("for permit", "issued for construction")


def hold_release(project: WorkedProject, problems: Problems) -> None:
    """Add a problem for every check, limit state or assumption that is open under a final status."""
    facts = project.project
    if facts.status not in FINAL:
        return
    said = {d.check or d.limit_state for d in facts.dispositions}
    for worked in project.calculations:
        _hold_checks(worked, said, facts.status, problems)
        _hold_selection(worked, facts.status, problems)
    _hold_limit_states(project, problems)
    for assumption in facts.assumptions:
        if assumption.to_be_verified:
            problems.add(
                "not-ready",
                assumption.span.part(0, 1),
                f"an assumption is open, and the status is `{facts.status}`",
                expected="`to be verified: no`, once it is",
                found=f"to be verified by: {assumption.by}",
                hint="issue it `for review` until then",
            )


def _hold_checks(worked: Worked, said: set[str], status: str, problems: Problems) -> None:
    told: set[str] = set()
    if worked.stop is not None and worked.stopped_unseen:
        problems.add(
            "not-ready",
            worked.calculation.span,
            f"`{worked.calculation.mark}` is not evaluated to its end, and the status is `{status}`",
            expected="a calculation that runs to its end",
            found=worked.stop.told,
            hint="correct what it is given, or use a template that covers it",
        )
    for member in worked.members:
        for check in member.checks:
            name = f"{member.mark}.{check.line.name}"
            if check.verdict not in ("NG", "not evaluated") or name in told or name in said:
                continue
            told.add(name)
            problems.add(
                "not-ready",
                worked.calculation.span,
                f"`{name}` is {check.verdict}, and the status is `{status}`",
                expected="OK, or the engineer's disposition of it",
                found=check.verdict,
                hint=f"under `dispositions:` write {{check: {name}, says: …}}; it is printed and hides nothing",
            )


def _hold_selection(worked: Worked, status: str, problems: Problems) -> None:
    """What leaves the office is pinned, so that a later run cannot put another member in its place unseen."""
    selection = worked.selection
    if selection is None or selection.pinned:
        return
    candidate = selection.candidates[selection.used]
    text = ", ".join(f"{name}: {text}" for name, text in candidate.named)
    problems.add(
        "not-ready",
        worked.calculation.span,
        f"the selection of `{worked.calculation.mark}` is not pinned, and the status is `{status}`",
        expected="`pinned:` beside `choose:`",
        found=f"candidate {selection.used + 1} of {len(selection.candidates)} used, none pinned",
        hint=f"write pinned: {{{text}}}, as it stands under `choose:`",
    )


def _hold_limit_states(project: WorkedProject, problems: Problems) -> None:
    """What one calculation of a member leaves out another of them may decide; the rest needs a word."""
    status = project.project.status
    for name, left in project.left_open.items():
        first = next(worked for worked in project.calculations if worked.calculation.member == name)
        problems.add(
            "not-ready",
            first.calculation.span,
            f"nobody says who covers the limit states `{name}` leaves out, and the status is `{status}`",
            expected="a disposition for each",
            found=", ".join(left),
            hint="under `dispositions:` write {limit state: …, covered by: …}",
        )
