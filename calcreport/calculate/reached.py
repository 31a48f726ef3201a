"""What a worked case reached of a template, read off its finished values: working a calculation keeps no count.

`Reachable` and `Worked` in, things out; and what none of the cases reached.
"""

from __future__ import annotations

from collections.abc import Iterable
from contextlib import suppress
from itertools import zip_longest

from calcreport.calculate.model import (
    NoValue,
    PlannedBranches,
    PlannedEach,
    PlannedGives,
    PlannedLine,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    PlannedUnknown,
    Reason,
    Values,
    Worked,
    WorkedBranches,
    WorkedEach,
    WorkedGives,
    WorkedLine,
    WorkedPart,
    WorkedRows,
    WorkedUnknown,
)
from calcreport.calculate.reachable import Reachable, Thing, nodes_of
from calcreport.core.expression import Compare, Logic, Node, Over, children
from calcreport.core.problems import Problems
from calcreport.core.record import record, replace
from calcreport.core.source import Span

#: two places of a table closer than this (relative) are one
_TIE = 1e-9


@record
class Unreached:
    """A thing no case reaches."""

    thing: Thing
    #: systems and editions that hold it, () for all
    variants: tuple[str, ...]
    #: why no case can, as the case file says; '' where it does not
    because: str = ""


def reached(worked: Worked, reachable: Reachable) -> set[Thing]:
    """Return what one worked case reached."""
    observer = _Observer(worked, reachable)
    observer.found.add(reachable.edition)
    if worked.stop is not None:
        # first, while the rows that were open at the stop still are
        observer.stopped()
    observer.lines(worked.lines)
    for check in worked.checks:
        if check.verdict in ("OK", "NG"):
            observer.touch(check.line, check.verdict)
    return observer.found


def unreached(plans: dict[str, Reachable], found: set[Thing]) -> tuple[Unreached, ...]:
    """Return, by place, what no case reached; of what stands inside something unreached only the outermost is told.

    Of a system or edition without any case that alone is told.
    """
    worked = {variant: reachable for variant, reachable in plans.items() if reachable.edition in found}
    holders: dict[Thing, list[str]] = {}
    inside: dict[Thing, set[Thing]] = {}
    for variant, reachable in worked.items():
        for thing, around in reachable.inside.items():
            holders.setdefault(thing, []).append(variant)
            inside.setdefault(thing, set()).update(around)
    missed = [Unreached(reachable.edition, ()) for variant, reachable in plans.items() if variant not in worked]
    missed += [
        Unreached(thing, () if len(names) == len(worked) else tuple(names))
        for thing, names in holders.items()
        if thing not in found and not (inside[thing] and inside[thing].isdisjoint(found))
    ]
    return tuple(sorted(missed, key=lambda one: (one.thing.span.start, one.thing.says)))


def explained(
    missed: tuple[Unreached, ...], reasons: tuple[Reason, ...], plans: dict[str, Reachable], problems: Problems
) -> tuple[Unreached, ...]:
    """Return what is unreached with its reasons; a reason for what is reached, or not there, is a problem."""
    because = {reason.what: reason.because for reason in reasons}
    left_out = {one.thing.says for one in missed}
    there = {thing.says for held in plans.values() for thing in (held.edition, *held.things.values())}
    for reason in reasons:
        if reason.what not in left_out:
            is_there = reason.what in there
            problems.add(
                "nothing-unreached",
                reason.span,
                f"`{reason.what[:60]}` needs no reason"
                if is_there
                else f"no thing that `lint` can name is `{reason.what[:60]}`",
                expected="; ".join(sorted(left_out)[:6]) if left_out else "no such entry: nothing is unreached",
                found="a case reaches it, or `lint` names what it stands in" if is_there else reason.what[:60],
                hint="leave the entry out" if is_there else problems.near(reason.what, left_out),
            )
    return tuple(replace(one, because=because.get(one.thing.says, "")) for one in missed)


class _Observer:
    def __init__(self, worked: Worked, reachable: Reachable) -> None:
        self.worked, self.reachable = worked, reachable
        self.values: Values = worked.values
        self.found: set[Thing] = set()

    def touch(self, what: object, detail: str | int = "") -> None:
        thing = self.reachable.things.get((id(what), detail))
        if thing is not None:
            self.found.add(thing)

    # -------------------------------------------------------- lines worked

    def lines(self, lines: Iterable[WorkedLine]) -> None:
        for line in lines:
            self.touch(line.line)
            if not isinstance(line, WorkedPart):
                self.stand_in(line.open)
            match line:
                case WorkedGives(planned, arm):
                    self.touch(planned, arm)
                    for one in planned.arms[: arm + 1]:
                        self.look(one.when)
                    self.look(planned.arms[arm].formula)
                case WorkedBranches(block, arm, inner):
                    self.touch(block, arm)
                    for tried in block.arms[: arm + 1]:
                        self.look(tried.when)
                    self.lines(inner)
                case WorkedRows():
                    self.rows(line)
                case WorkedEach(rows=rows):
                    for row in rows:
                        self.lines(row)
                case WorkedPart(lines=inner):
                    self.lines(inner)
                case WorkedUnknown(lines=inner):
                    self.looks(line.line)
                    self.lines(inner)
                case _:
                    self.looks(line.line)

    def stand_in(self, rows: tuple[tuple[int, int], ...]) -> None:
        for index, row in rows:
            self.values.open[index] = row

    def rows(self, line: WorkedRows) -> None:
        before = self.values.open[line.line.rows]
        for row, (number, _) in enumerate(line.entries):
            self.touch(line.line, number)
            self.values.open[line.line.rows] = row
            entry = line.line.entries[number]
            self.look(entry.when)
            for cell in entry.cells:
                if not isinstance(cell, tuple):
                    self.look(cell)
        self.values.open[line.line.rows] = before

    # -------------------------------------------------------- where it stopped

    def stopped(self) -> None:
        """Touch the line a stop stands at, the blocks it broke out of, and the arms it was in."""
        chain = [*self.worked.broken_off]
        for outer, inner in zip_longest(chain, chain[1:]):
            self.touch(outer)
            if isinstance(outer, PlannedBranches):
                for number, arm in enumerate(outer.arms):
                    if self.at(arm.lines) if inner is None else any(line is inner for line in arm.lines):
                        self.touch(outer, number)
        innermost = chain[-1] if chain else None
        match innermost:
            case None:
                last = self.at(self.reachable.plan.lines)
            case PlannedBranches(arms):
                last = next((line for arm in arms if (line := self.at(arm.lines))), None)
            case PlannedEach(lines=inside) | PlannedPart(lines=inside) | PlannedUnknown(lines=inside):
                last = self.at(inside) or (innermost if innermost.span == self._place else None)
            case _:
                last = None
        if last is not None:
            self.stopped_at(last)

    @property
    def _place(self) -> Span | None:
        return self.worked.stop.span if self.worked.stop else None

    def at(self, lines: tuple[PlannedLine, ...]) -> PlannedLine | None:
        """Return the line a stop stands at, among these."""
        return next((line for line in lines if self._place in _places(line)), None)

    def stopped_at(self, line: PlannedLine) -> None:
        self.touch(line)
        assert self.worked.stop is not None
        match line:
            case PlannedRequire() if self.worked.stop.words == line.stops_with:
                self.touch(line, "unmet")
                self.looks(line)
            case PlannedGives(arms=arms):
                for number, one in enumerate(arms):
                    self.look(one.when)
                    if one.when is None or self.holds(one.when):
                        self.touch(line, number)
                        self.look(one.formula)
                        break
            case _:
                self.looks(line)

    def holds(self, node: Node) -> bool:
        try:
            return self.worked.tested(node)(self.values)  # type: ignore[arg-type]
        except (NoValue, OverflowError):
            return False

    # -------------------------------------------------------- tables looked into

    def looks(self, line: PlannedLine) -> None:
        for node in nodes_of(line):
            self.look(node)

    def look(self, node: Node | None) -> None:
        """Find the rows that a formula or condition looks up, as far as it was worked."""
        if node is None:
            return
        if isinstance(node, Logic):
            self.look(node.left)
            if self.holds(node.left) == (node.op == "and"):
                self.look(node.right)
            return
        if not isinstance(node, Over):
            for child in children(node):
                self.look(child)
            return
        # what has no value stopped the calculation, and looked no further
        with suppress(NoValue, OverflowError):
            self.over(node)

    def over(self, node: Over) -> None:
        rows = len(self.values.row_names(node.bound))
        before = self.values.open[node.bound]
        if node.function == "linear" and isinstance(node.where, Compare):
            self.linear(node, node.where, rows)
            return
        fits: list[int] = []
        for row in range(rows):
            self.values.open[node.bound] = row
            self.look(node.where)
            if node.where is None or self.worked.tested(node.where)(self.values):
                fits.append(row)
                self.look(node.body)
                if node.function == "pick":
                    break
        self.values.open[node.bound] = before
        if not fits:
            self.touch(node, f"no row of {node.rows} fits, otherwise")
            self.touch(node, f"no row of {node.rows} fits")
            self.look(node.otherwise)
        elif node.function == "pick":
            if fits[0] == 0:
                self.touch(node, f"first row of {node.rows}")
            if fits[0] == rows - 1:
                self.touch(node, f"last row of {node.rows}")

    def linear(self, node: Over, where: Compare, rows: int) -> None:
        place, before = self.worked.compiled(where.right)(self.values), self.values.open[node.bound]
        places: list[float] = []
        for row in range(rows):
            self.values.open[node.bound] = row
            places.append(self.worked.compiled(where.left)(self.values))
        self.values.open[node.bound] = before
        if not places:
            return
        low, high, slack = min(places), max(places), _TIE * abs(place)
        ends = {
            f"first row of {node.rows}": abs(place - low) <= slack,
            f"last row of {node.rows}": abs(place - high) <= slack,
            f"below the first row of {node.rows}": place < low - slack,
            f"above the last row of {node.rows}": place > high + slack,
            f"no row of {node.rows} fits, otherwise": not low - slack <= place <= high + slack,
        }
        for end, is_there in ends.items():
            if is_there:
                self.touch(node, end)


def _places(line: PlannedLine) -> tuple[Span, ...]:
    """Return where a stop of a line may stand: at the line, or at a row it lists."""
    return (line.span, *(entry.span for entry in line.entries)) if isinstance(line, PlannedRows) else (line.span,)
