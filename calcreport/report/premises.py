"""What a package takes for granted or leaves to others, in short: the premises nobody has verified yet.

A composed package in, blocks out, as many as asked for; the rest is counted.
"""

from __future__ import annotations

from collections.abc import Callable

from calcreport.calculate.model import WorkedProject
from calcreport.report.compose import Composed
from calcreport.report.fronts import counted, register
from calcreport.report.governing import worst_checks
from calcreport.report.model import Block, Column, Heading, Paragraph, Reference, Strong, Table, TableRow, Words
from calcreport.report.summary import dispositions

#: marks named of a limit state that nobody covers
NAMED = 6


class Premises:
    """Composes the premises of one package; `line` and `sheet` name a line or a front sheet, linked or not."""

    def __init__(
        self,
        project: WorkedProject,
        composed: Composed,
        line: Callable[[str, int], str | Reference],
        sheet: Callable[[str], str | Reference],
    ) -> None:
        self.project, self.composed, self.line, self.sheet = project, composed, line, sheet

    def blocks(self, most: int) -> list[Block]:
        """Return the premises, at most so many, those that are open first."""
        rows = [*self.assumptions(), *self.uncovered(), *self.checks()]
        states = [(said.limit_state, said.says) for said in self.project.project.dispositions if said.limit_state]
        if not rows and not states:
            return []
        columns = (Column(("What",), stretch=0.5), Column(("Stated",), stretch=1.0), Column(("Where",)))
        found: list[Block] = [Heading("Unverified premises", 2)]
        if rows[:most]:
            found.append(Table(columns, tuple(rows[:most])))
        kept = states[: max(0, most - len(rows))]
        if kept:
            words: list[str | Strong | Reference] = ["Limit states covered elsewhere, by the engineer's word on "]
            words += [self.sheet("SUMMARY"), ": "]
            for place, (state, says) in enumerate(kept):
                words += ["; " if place else "", Strong(state), f": {says}"]
            found.append(Paragraph((*words, "."), "note"))
        left = len(rows[most:]) + len(states) - len(kept)
        if left:
            further = f"{counted(left, 'further premise')}: sheets "
            found.append(Paragraph((further, self.sheet("CRITERIA"), " and ", self.sheet("SUMMARY"), "."), "note"))
        return found

    def assumptions(self) -> list[TableRow]:
        """Return the assumptions that are to be verified."""
        return [
            TableRow(((f"assumption {entry.number}",), (f"{entry.says} ({entry.state})",), (self.sheet("CRITERIA"),)))
            for entry in register(self.project, self.composed.scripts)
            if entry.state.startswith("to be")
        ]

    def uncovered(self) -> list[TableRow]:
        """Return the limit states nobody covers, those of the same calculations in one row."""
        groups: dict[tuple[str, ...], list[str]] = {}
        for state, marks in self.composed.summary.not_covered:
            groups.setdefault(marks, []).append(state)
        rows: list[TableRow] = []
        for marks, states in groups.items():
            named = " ".join(marks[:NAMED]) + (f" and {len(marks) - NAMED} more" if len(marks) > NAMED else "")
            words = f"not covered ({named}); engineer to state who covers {'it' if len(states) == 1 else 'them'}"
            rows.append(TableRow(((", ".join(states),), (words,), (self.sheet("SUMMARY"),))))
        return rows

    def checks(self) -> list[TableRow]:
        """Return the checks that are not evaluated, and those NG on which the engineer has a word."""
        rows: list[TableRow] = []
        for worked in self.project.calculations:
            mark = worked.calculation.mark
            for check in worst_checks(worked):
                said = " ".join(dispositions(self.project, mark, check.line.name))
                words = ""
                if check.verdict == "not evaluated":
                    words = f"not evaluated: {check.reason}" + (f"; engineer's disposition: {said}" if said else "")
                elif check.verdict == "NG" and said:
                    words = f"NG; engineer's disposition: {said}"
                if words:
                    number = self.composed.scripts[mark].check_line.get(id(check), 0)
                    where: Words = (self.line(mark, number),) if number else (mark,)
                    rows.append(TableRow(((f"{mark} {check.line.name}",), (words,), where)))
        return rows
