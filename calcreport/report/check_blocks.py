"""Checks and requirements as blocks, with the engineer's word on what is NG, and where a calculation stopped.

A calculation as told in, blocks out.
"""

from __future__ import annotations

from calcreport.core.expression import Binary, Compare
from calcreport.core.units import ONE
from calcreport.report.digits import number_text
from calcreport.report.forms import Opened, joint_comparisons
from calcreport.report.items import SayCheck, SayRequire, SayStop, SayTable
from calcreport.report.model import (
    Block,
    CheckLine,
    Formula,
    Paragraph,
    SourceLane,
    Statement,
    Strong,
    Words,
)
from calcreport.report.told import Told


class CheckBlocks:
    """Composes what is judged."""

    def __init__(self, told: Told, dispositions: dict[int, tuple[str, ...]]) -> None:
        #: the engineer's words by the identity of a worked check
        self.dispositions = dispositions
        self.told, self.worked, self.forms, self.shared = told, told.worked, told.forms, told.shared

    def check(self, item: SayCheck) -> Block:
        """Return a check in full."""
        check = item.worked
        opened, by = check.open, check.by
        formula: Formula
        substituted: Formula | None = None
        if by is None:
            formula = self.shared.condition(check.line.holds)
        elif check.ratio is None or check.kind == "condition":
            formula = self.shared.condition(by.test)
            substituted = self.told.numbers(by.test, opened)
        elif check.kind == "ratio":
            formula = self.shared.formula(by.test.left)
        else:
            formula, substituted = self.ratio_steps(by.test, opened)
        figure = self.forms.ratio(check)
        reason: Words = (check.reason,) if check.reason else ()
        return CheckLine(
            item.number,
            self.told.anchor(item.number),
            check.line.name,
            formula,
            substituted,
            number_text(figure) if figure else "",
            check.verdict,
            reason,
            self.told.source(check.line.cite.printed, (check.line.holds,), opened, item.number),
        )

    def disposition(self, item: SayCheck) -> tuple[Block, ...]:
        """Return the engineer's word on a check that is NG."""
        said = self.dispositions.get(id(item.worked), ()) if item.worked.verdict == "NG" else ()
        return tuple(Paragraph((Strong("Engineer's disposition: "), words), "plain") for words in said)

    def dispositions_left(self, item: SayTable) -> tuple[Block, ...]:
        """Return the engineer's word on checks of like members that only the table tells."""
        found: list[Block] = []
        for member in self.worked.members:
            if member.place[0] != item.worked.line.rows or member.place[1] == item.governing:
                continue
            for check in member.checks:
                for words in self.dispositions.get(id(check), ()) if check.verdict == "NG" else ():
                    of = Strong(f"Engineer's disposition of {member.mark} {check.line.name}: ")
                    found.append(Paragraph((of, words), "plain"))
        return tuple(found)

    def ratio_steps(self, test: Compare, opened: Opened) -> tuple[Formula, Formula | None]:
        """Return demand over capacity with symbols and with numbers."""
        demand, capacity = (test.left, test.right) if test.op in ("<", "<=") else (test.right, test.left)
        node = self.shared.ratios.setdefault(id(test), Binary("/", demand, capacity, test.span))
        return self.shared.formula(node), self.told.substitution(node, opened, ONE)

    def require(self, item: SayRequire) -> Block:
        """Return a requirement that was met."""
        worked = item.worked
        condition = worked.line.condition
        shown = self.shared.condition(condition)
        tests = joint_comparisons(condition)
        if tests and all(self.forms.side(test, worked.open, "left") for test in tests):
            shown = self.told.all_compared(tests, worked.open)
        lane = self.told.source(worked.line.cite.printed, (condition,), worked.open, item.number)
        return Statement(item.number, self.told.anchor(item.number), ("Required",), shown, lane)

    def stopped(self, item: SayStop) -> tuple[Block, ...]:
        """Say where the calculation stopped and what that leaves undone."""
        words: Words = (Strong("Stopped: "), item.stop.told, ". Checks below this line are not evaluated.")
        blocks: list[Block] = [Paragraph(words, "caution")]
        for number, checks in item.left:
            line = checks[0].line
            shown = self.shared.condition(line.holds)
            rows = (f"in {len(checks)} rows",) if len(checks) > 1 else ()
            anchor, lane = self.told.anchor(number), SourceLane(line.cite.printed)
            blocks.append(CheckLine(number, anchor, line.name, shown, None, "", "not evaluated", rows, lane))
        return tuple(blocks)
