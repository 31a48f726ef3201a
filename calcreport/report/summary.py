"""The check summary: what needs eyes first, then a row a member, then every check and limit state.

Worked calculations with forms in, blocks and counts out.
Kept in one though long: one sheet and its counts.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.calculate.model import Comparison, Member, WorkedCheck, WorkedProject
from calcreport.core.units import ONE
from calcreport.report.candidates import headlines
from calcreport.report.digits import number_text
from calcreport.report.display import unit_text
from calcreport.report.forms import CalculationForms, is_size, side_unit
from calcreport.report.fronts import RegisterEntry, counted
from calcreport.report.governing import governing, rank, worst_checks
from calcreport.report.items import Script
from calcreport.report.limit_states import limit_states
from calcreport.report.model import (
    Block,
    Column,
    Heading,
    Paragraph,
    Reference,
    Strong,
    Table,
    TableRow,
    Words,
)

CLOSING = "Computed demand does not exceed computed capacity for the checks listed"


@dataclass(frozen=True, slots=True)
class Summary:
    """The counts a cover and a terminal state."""

    calculations: int
    checks: int
    failed: tuple[tuple[str, str], ...]
    not_evaluated: int
    #: (limit state, marks) without anyone's word
    not_covered: tuple[tuple[str, tuple[str, ...]], ...]
    open_assumptions: int


def summarise(project: WorkedProject, entries: tuple[RegisterEntry, ...]) -> Summary:
    """Return the counts."""
    failed, pending, checks = [], 0, 0
    for member in project.members:
        for check in worst_checks(member):
            checks += check.verdict != "not applicable"
            pending += check.verdict == "not evaluated"
            if check.verdict == "NG":
                failed.append((member.mark, check.line.name))
    # a calculation that stopped before any check of its own leaves something open too: what others take from it
    pending += sum(worked.stopped_unseen for worked in project.calculations)
    open_count = sum(entry.state.startswith("to be") for entry in entries)
    return Summary(len(project.calculations), checks, tuple(failed), pending, not_covered(project), open_count)


def not_covered(project: WorkedProject) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """Return the limit states that no calculation of a member decides and on which the project has no word."""
    found: dict[str, list[str]] = {}
    for name, states in project.left_open.items():
        for state in states:
            found.setdefault(state, []).append(name)
    return tuple((state, tuple(marks)) for state, marks in found.items())


def result_words(project: WorkedProject, summary: Summary) -> tuple[Words, ...]:
    """Return the result as the cover states it, with the engineer's word on what is NG."""
    failed = ", ".join(f"{mark} {name}" for mark, name in summary.failed)
    counts: list[str | Strong] = []
    if summary.failed:
        counts.append(Strong(f"{len(summary.failed)} NG ({failed})"))
    else:
        counts.append("0 NG")
    counts.append(
        f", {summary.not_evaluated} not evaluated, {counted(len(summary.not_covered), 'limit state')} not covered, "
        f"{counted(summary.open_assumptions, 'assumption')} to be verified"
    )
    said = [
        (f"Engineer's disposition of {mark} {name}: {words}",)
        for mark, name in summary.failed
        for words in dispositions(project, mark, name)
    ]
    moved = [(Strong(f"Selection of {mark}: "), words) for mark, words in headlines(project.calculations)]
    return (tuple(counts), (_closing(summary),), *moved, *said)


def _closing(summary: Summary) -> str:
    if summary.failed or summary.not_evaluated:
        return CLOSING + ", except those marked NG or not evaluated."
    return CLOSING + "."


def dispositions(project: WorkedProject, mark: str, check: str) -> tuple[str, ...]:
    """Return the engineer's words on a check."""
    return tuple(d.says for d in project.project.dispositions if d.check == f"{mark}.{check}")


class SummarySheets:
    """Composes the check summary."""

    def __init__(self, project: WorkedProject, forms: dict[str, CalculationForms], scripts: dict[str, Script]) -> None:
        self.project, self.forms, self.scripts = project, forms, scripts

    def blocks(self, summary: Summary, entries: tuple[RegisterEntry, ...]) -> tuple[Block, ...]:
        """Return all blocks of the summary."""
        counts = (
            f"{counted(summary.calculations, 'calculation')}, {counted(summary.checks, 'check')}.  ",
            Strong(f"{len(summary.failed)} NG"),
            f",  {summary.not_evaluated} not evaluated,  "
            f"{counted(len(summary.not_covered), 'limit state')} not covered.",
        )
        blocks: list[Block] = [Paragraph(counts, "plain")]
        blocks += self.attention(summary, entries)
        blocks += self.members()
        blocks += limit_states(self.project, self.ratio)
        blocks.append(Paragraph((_closing(summary),), "plain"))
        return tuple(blocks)

    def attention(self, summary: Summary, entries: tuple[RegisterEntry, ...]) -> list[Block]:
        """Return what needs eyes: NG, not evaluated, not covered, unverified."""
        rows: list[TableRow] = []
        for member in self.project.members:
            mark = member.worked.calculation.mark
            open_checks: dict[object, list[WorkedCheck]] = {}
            for check in worst_checks(member):
                if check.verdict in ("NG", "not evaluated"):
                    said = dispositions(self.project, member.mark, check.line.name)
                    # what waits for one reason, without a word of its own, stands in one row
                    alone = check.verdict == "NG" or said
                    open_checks.setdefault(id(check) if alone else check.reason, []).append(check)
            for checks in open_checks.values():
                check = checks[0]
                words = self.sides(check, mark) if check.verdict == "NG" else f"not evaluated: {check.reason}"
                said = dispositions(self.project, member.mark, check.line.name)
                words += f". Engineer's disposition: {' '.join(said)}" if said else ""
                what = check.line.name if len(checks) == 1 else f"{len(checks)} checks"
                cells = ((member.mark,), (what,), (words,), (self.ratio(check, mark),), self.place(check, mark))
                rows.append(TableRow(cells, "loud"))
        for worked in (one for one in self.project.calculations if one.stopped_unseen):
            words = f"not evaluated to the end: {worked.stop.told if worked.stop else ''}"
            mark = worked.calculation.mark
            rows.append(TableRow(((mark,), ("calculation",), (words,), ("",), (mark,)), "loud"))
        for mark, words in headlines(self.project.calculations):
            rows.append(TableRow(((mark,), ("selection",), (words,), ("",), (mark,)), "loud"))
        for entry in entries:
            if entry.state.startswith("to be"):
                rows.append(
                    TableRow(((entry.number,), ("assumption",), (f"{entry.says} ({entry.state})",), ("",), entry.where))
                )
        for state, marks in summary.not_covered:
            text = "not covered; engineer to state who covers it"
            rows.append(TableRow(((_short(marks),), (state,), (text,), ("",), ("",))))
        if not rows:
            return []
        columns = (
            Column(("Mark",), stretch=0.6),
            Column(("What",), stretch=1.0),
            Column(("State",), stretch=2.0),
            Column(("Ratio",), "right"),
            Column(("Where",)),
        )
        return [Heading("Needs attention", 2), Table(columns, tuple(rows))]

    def members(self) -> list[Block]:
        """Return a row a member with its governing check, highest ratio first."""
        together: dict[str, list[Member]] = {}
        for member in self.project.members:
            alike = member.worked.calculation.members
            together.setdefault(member.mark if alike else member.worked.calculation.member, []).append(member)
        chief = {name: max(own, key=_order) for name, own in together.items()}
        rows: list[TableRow] = []
        silent: list[str] = []
        for name, member in sorted(chief.items(), key=lambda one: _order(one[1]), reverse=True):
            mark, check = member.worked.calculation.mark, governing(member)
            if check is None:
                silent += [one.mark for one in together[name]]
                continue
            demand, capacity = self.demand(check, mark)
            ratio = self.ratio(check, mark) + (" NG" if check.verdict == "NG" else "")
            title, where = member.worked.calculation.title, self.place(check, mark)
            cells = ((name,), (title,), (check.line.name,), (demand,), (capacity,), (ratio,), where)
            rows.append(TableRow(cells, "loud" if check.verdict == "NG" else ""))
        columns = (
            Column(("Mark",)),
            Column(("Calculation",), stretch=1.4),
            Column(("Governing check",), stretch=1.0),
            Column(("Demand or required",), "right"),
            Column(("Capacity or provided",), "right"),
            Column(("Ratio",), "right"),
            Column(("Where",)),
        )
        blocks: list[Block] = [Heading("Governing check of every member", 2), Table(columns, tuple(rows))]
        if silent:
            blocks.append(
                Paragraph((f"Without checks of their own, giving values to others: {', '.join(silent)}.",), "note")
            )
        return blocks

    # -------------------------------------------------------- pieces

    def ratio(self, check: WorkedCheck, mark: str) -> str:
        """Return a check's printed ratio, or ''."""
        figure = self.forms[mark].ratio(check)
        return number_text(figure) if figure else ""

    def demand(self, check: WorkedCheck, mark: str) -> tuple[str, str]:
        """Return demand and capacity as printed, with their unit."""
        if check.by is None:
            return "", ""
        left, right = self.side(check.by, check, mark, "left"), self.side(check.by, check, mark, "right")
        return (left, right) if check.by.test.op in ("<", "<=") else (right, left)

    def side(self, by: Comparison, check: WorkedCheck, mark: str, side: str) -> str:
        forms = self.forms[mark]
        figure = forms.side(by.test, check.open, side)
        if figure is None:
            return ""
        node = by.test.left if side == "left" else by.test.right
        unit = side_unit(by.test, forms)
        power = f" × 10^{figure.exponent}" if figure.exponent else ""
        text = number_text(figure, unsigned=is_size(node)) + power
        return f"{text} {unit_text(unit)}" if unit is not ONE and unit_text(unit) else text

    def sides(self, check: WorkedCheck, mark: str) -> str:
        """Return `118.4 kip > 116.3 kip` for a failing check."""
        demand, capacity = self.demand(check, mark)
        return f"{demand} against {capacity}" if demand else check.reason

    def place(self, check: WorkedCheck, mark: str) -> Words:
        """Return where a check stands."""
        number = self.scripts[mark].check_line.get(id(check))
        return (Reference(f"{mark} line {number}", f"{mark}.{number}"),) if number else (mark,)


def _order(member: Member) -> tuple[int, float]:
    """Rank a member by its governing check; one without any comes last."""
    return rank(check) if (check := governing(member)) else (0, -1.0)


def _short(marks: tuple[str, ...]) -> str:
    return " ".join(marks) if len(marks) <= 6 else f"{' '.join(marks[:5])} and {len(marks) - 5} more"


def summary_lines(project: WorkedProject, forms: dict[str, CalculationForms], summary: Summary) -> list[str]:
    """Return the check summary as a terminal shows it: a line a calculation, then the counts."""
    lines = []
    lines += [f"{mark:<8} selection: {words}" for mark, words in headlines(project.calculations)]
    for member in project.members:
        check, title = governing(member), member.worked.calculation.title
        if member.worked.stop is not None and member.verdict == "not evaluated":
            lines.append(f"{member.mark:<8} stopped: {member.worked.stop.told}")
        if check is None:
            lines.append(f"{member.mark:<8} {'':>8}      {title}")
            continue
        figure = forms[member.worked.calculation.mark].ratio(check)
        ratio = number_text(figure) if figure else ""
        lines.append(f"{member.mark:<8} {ratio:>8}  {check.verdict:<3} {title}: {check.line.name}")
    lines.append(
        f"{counted(summary.checks, 'check')}: {len(summary.failed)} NG, {summary.not_evaluated} not evaluated; "
        f"{counted(len(summary.not_covered), 'limit state')} not covered, "
        f"{counted(summary.open_assumptions, 'assumption')} to be verified"
    )
    lines.append(_closing(summary))
    return lines
