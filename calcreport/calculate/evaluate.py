"""Works a plan with one calculation's values: every line in page order, the arm taken, every check judged.

`Calculation`, `Plan` and `Values` in, `Worked` out. A requirement not met, or a formula without a value,
stops this calculation with words; the checks it did not reach are not evaluated.
Kept in one: one run, a method for each kind of line.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

from calcreport.calculate.analysed import hand_over, keep_result
from calcreport.calculate.compile import condition, formula
from calcreport.calculate.judging import comparisons, deciding, kind_of, ratio_of
from calcreport.calculate.model import (
    Calculation,
    Comparison,
    Kind,
    NoValue,
    Plan,
    PlannedArm,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedFigure,
    PlannedGives,
    PlannedLine,
    PlannedMethod,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    PlannedText,
    PlannedUnknown,
    Stop,
    Test,
    Values,
    Verdict,
    Work,
    Worked,
    WorkedBranches,
    WorkedCheck,
    WorkedEach,
    WorkedFigure,
    WorkedGives,
    WorkedLine,
    WorkedMethod,
    WorkedPart,
    WorkedRequire,
    WorkedRows,
    WorkedText,
    WorkedUnknown,
)
from calcreport.core.expression import Compare, Condition, Expression, Name
from calcreport.core.rows import MOST_ROWS, fits
from calcreport.core.source import Citation, Span
from calcreport.methods.results import NoResult
from calcreport.methods.roots import NoRoot, find_root
from calcreport.methods.table import WORKS

#: what a line costs beside one row that a formula goes through
_LINE_COST = 8


#: sides apart by more than this share of the larger difference at the bounds have no root there
JUMP = 1e-9
#: a root by a formula leaves no more than this share; digits lost in a difference send it to the bracket
FORMED = 1e-12
_NOWHERE = Citation("", "")


class Stopped(Exception):
    """Leaves a calculation that cannot go on."""

    def __init__(self, stop: Stop) -> None:
        super().__init__(stop.words)
        self.stop = stop


@dataclass(frozen=True, slots=True)
class _Side:
    test: Compare
    left: Work
    right: Work


class Program:
    """A plan compiled once, run for every calculation made by its template."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan
        self.sets = tuple(slot.sets for slot in plan.slots)
        self._tests: dict[int, Test] = {}
        self._works: dict[int, Work] = {}
        self._sides: dict[int, tuple[_Side, ...]] = {}

    def run(self, calculation: Calculation, values: Values, fingerprint: str) -> Worked:
        """Work all lines; returns what was worked even where the calculation stops."""
        run = Run(self, values)
        stop: Stop | None = None
        lines = run.top
        try:
            for line in self.plan.lines:
                found = run.line(line)
                if found is not None:
                    lines.append(found)
        except Stopped as stopped:
            stop = stopped.stop
            lines.extend(run.rescued())
        checks = list(run.checks)
        if stop is not None:
            reached = {id(check.line) for check in checks}
            left = [check for check in planned_checks(self.plan.lines) if id(check) not in reached]
            checks += [_not_evaluated(check, stop) for check in left]
        return Worked(
            calculation, self.plan, values, tuple(lines), tuple(checks), stop, fingerprint, self.work, self.test,
            left_out=tuple(dict.fromkeys([*self.plan.template.excludes, *run.left])),
            broken_off=tuple(owner for owner, _ in run.unfinished) if stop is not None else (),
        )  # fmt: skip

    def work(self, node: Expression) -> Work:
        """Return a formula's callable, compiled at its first use."""
        found = self._works.get(id(node))
        if found is None:
            found = self._works[id(node)] = formula(node, self.sets)
        return found

    def test(self, node: Condition) -> Test:
        """Return a condition's callable, compiled at its first use."""
        found = self._tests.get(id(node))
        if found is None:
            found = self._tests[id(node)] = condition(node, self.sets)
        return found

    def sides(self, node: Condition) -> tuple[_Side, ...]:
        """Return the comparisons of a condition, compiled at their first use."""
        found = self._sides.get(id(node))
        if found is None:
            compares = comparisons(node)
            found = tuple(_Side(c, formula(c.left, self.sets), formula(c.right, self.sets)) for c in compares)
            self._sides[id(node)] = found
        return found


def planned_checks(lines: tuple[PlannedLine, ...]) -> list[PlannedCheck]:
    """Return the checks of some lines, those of every arm and block among them."""
    found: list[PlannedCheck] = []
    for line in lines:
        match line:
            case PlannedCheck():
                found.append(line)
            case PlannedBranches(arms):
                for arm in arms:
                    found += planned_checks(arm.lines)
            case PlannedEach(_, inner) | PlannedPart(_, _, inner) | PlannedUnknown(lines=inner):
                found += planned_checks(inner)
    return found


def _not_evaluated(check: PlannedCheck, stop: Stop, opened: tuple[tuple[int, int], ...] = ()) -> WorkedCheck:
    return WorkedCheck(check, "not evaluated", None, None, "condition", stop.told, None, opened)


class Run:
    """One run of a program; `checks` gathers every check as it is judged."""

    def __init__(self, program: Program, values: Values) -> None:
        self.program, self.values = program, values
        self.checks: list[WorkedCheck] = []
        #: limit states that cautions reached say are left out
        self.left: list[str] = []
        self.opened: tuple[tuple[int, int], ...] = ()
        #: lines worked outside all blocks
        self.top: list[WorkedLine] = []
        #: unfinished lists of the blocks a stop breaks out of, innermost last
        self.unfinished: list[tuple[PlannedLine, list[WorkedLine]]] = []

    def rescued(self) -> list[WorkedLine]:
        """Return the lines worked inside blocks that a stop left unfinished, in page order."""
        return [line for _, lines in self.unfinished for line in lines]

    def lines(self, owner: PlannedLine, planned: tuple[PlannedLine, ...]) -> tuple[WorkedLine, ...]:
        kept: list[WorkedLine] = []
        self.unfinished.append((owner, kept))
        for line in planned:
            found = self.line(line)
            if found is not None:
                kept.append(found)
        self.unfinished.pop()
        return tuple(kept)

    def line(self, line: PlannedLine) -> WorkedLine | None:
        try:
            self.values.spend(_LINE_COST)
        except NoValue as error:
            raise Stopped(Stop(line.span, str(error), "")) from error
        match line:
            case PlannedGives():
                return self.gives(line)
            case PlannedCheck():
                return self.check(line)
            case PlannedText():
                self.left.extend(line.leaves)
                return WorkedText(line, self.opened)
            case PlannedBranches():
                return self.branches(line)
            case PlannedEach():
                return self.each(line)
            case PlannedUnknown():
                return self.unknown(line)
            case PlannedPart(_, _, lines):
                return WorkedPart(line, self.lines(line, lines))
            case PlannedRequire():
                return self.require(line)
            case PlannedRows():
                return self.rows(line)
            case PlannedFigure():
                return WorkedFigure(line, self.opened)
            case PlannedMethod():
                return self.method(line)

    # -------------------------------------------------------- values

    def value(self, node: Expression, at: Span, cite: Citation) -> float:
        """Work a formula; no value stops the calculation."""
        try:
            found = self.program.work(node)(self.values)
        except NoValue as error:
            raise Stopped(Stop(at, str(error), cite.printed)) from error
        except OverflowError as error:
            raise Stopped(Stop(at, "a value beyond all bounds", cite.printed)) from error
        if not math.isfinite(found) or abs(found) > 1e100:
            raise Stopped(Stop(at, "a value beyond all bounds", cite.printed))
        return found

    def holds(self, node: Condition, at: Span, cite: Citation) -> bool:
        """Test a condition; no value on a side stops the calculation."""
        try:
            return self.program.test(node)(self.values)
        except (NoValue, OverflowError) as error:
            raise Stopped(Stop(at, str(error), cite.printed)) from error

    def store(self, slot: int, value: float | str, worked: Expression) -> tuple[int, ...]:
        if self.values.sets[slot]:
            key = self.values.key(slot)
            self.values.rows[slot][key] = value
        else:
            key = ()
            self.values.plain[slot] = value
        self.values.worked[slot, key] = worked
        return key

    def gives(self, line: PlannedGives) -> WorkedLine:
        for number, arm in enumerate(line.arms):  # noqa: B007
            if arm.when is None or self.holds(arm.when, line.span, line.cite):
                break
        node = arm.formula
        key = self.fill(line.slot, node, line.span, line.cite)
        word = self.program.plan.slots[line.slot].symbol.kind == "word"
        return WorkedGives(line, number, key, self.opened, _no_work if word else self.program.work(node))

    def fill(self, slot: int, node: Expression, at: Span, cite: Citation) -> tuple[int, ...]:
        """Work a formula into a slot; a word is a word of its list, or taken from another symbol."""
        if self.program.plan.slots[slot].symbol.kind != "word":
            return self.store(slot, self.value(node, at, cite), node)
        assert isinstance(node, Name)
        word = node.name if node.slot < 0 else str(self.values.get(node.slot, self.values.key(node.slot)))
        return self.store(slot, word, node)

    # -------------------------------------------------------- blocks

    def branches(self, line: PlannedBranches) -> WorkedLine:
        for number, arm in enumerate(line.arms):  # noqa: B007
            if arm.when is None or self.holds(arm.when, line.span, Citation("", "")):
                break
        for other, passed in enumerate(line.arms):
            if other != number:
                because = line.arms[number].when or line.arms[0].when
                for check in planned_checks(passed.lines):
                    self.checks.append(
                        WorkedCheck(check, "not applicable", None, None, "condition", "", because, self.opened)
                    )
        return WorkedBranches(line, number, self.lines(line, arm.lines), self.opened)

    def each(self, line: PlannedEach) -> WorkedLine:
        names = self.values.row_names(line.rows)
        rows: list[tuple[WorkedLine, ...]] = []
        before, opened = self.values.open[line.rows], self.opened
        depth = len(self.unfinished)
        for row in range(len(names)):
            self.values.open[line.rows] = row
            self.opened = (*opened, (line.rows, row))
            judged = len(self.checks)
            try:
                rows.append(self.lines(line, line.lines))
            except Stopped as stopped:
                where = f"{self.program.plan.sets[line.rows].name} {names[row]}"
                stop = replace(stopped.stop, where=f"{where}, {stopped.stop.where}".rstrip(", "))
                self.stop_rows(line, row, {id(check.line) for check in self.checks[judged:]}, opened, stop)
                if rows:
                    # the rows before it stand where the whole block would
                    around = self.unfinished[depth - 1][1] if depth else self.top
                    around.append(WorkedEach(line, names[:row], tuple(rows), opened))
                raise Stopped(stop) from stopped
        self.values.open[line.rows], self.opened = before, opened
        return WorkedEach(line, names, tuple(rows), self.opened)

    def stop_rows(
        self, line: PlannedEach, row: int, reached: set[int], opened: tuple[tuple[int, int], ...], stop: Stop
    ) -> None:
        """Say of every check that the stopped row and the rows after it leave: not evaluated, in that row."""
        planned = planned_checks(line.lines)
        for other in range(row, len(self.values.row_names(line.rows))):
            left = planned if other > row else [check for check in planned if id(check) not in reached]
            self.checks += [_not_evaluated(check, stop, (*opened, (line.rows, other))) for check in left]

    def unknown(self, line: PlannedUnknown) -> WorkedLine:
        """Find the root; its lines are left at their values there."""
        low, high = self.value(line.low, line.span, _NOWHERE), self.value(line.high, line.span, _NOWHERE)
        judged = len(self.checks)
        worked: tuple[WorkedLine, ...] = ()
        sides = (0.0, 0.0)

        def difference(trial: float) -> float:
            nonlocal worked, sides
            del self.checks[judged:]
            self.put(line.slot, trial)
            worked = self.lines(line, line.lines)
            sides = self.value(line.left, line.span, _NOWHERE), self.value(line.right, line.span, _NOWHERE)
            return sides[0] - sides[1]

        symbol = self.program.plan.slots[line.slot].symbol.name
        try:
            solved = self.closed(line, difference, low, high) if line.closed else None
            root, larger = solved[:2] if solved else find_root(difference, low, high)
        except NoRoot as error:
            raise Stopped(Stop(line.span, f"no {symbol} found: {error}", "")) from error
        left_over = abs(difference(root))
        if left_over > JUMP * larger:
            raise Stopped(Stop(line.span, f"no {symbol} found: the two sides jump past one another", ""))
        key = self.values.key(line.slot)
        self.values.worked.pop((line.slot, key), None)
        formed: WorkedGives | None = None
        if solved:
            node = self.values.worked[line.slot, key] = solved[2]
            gives = PlannedGives(line.slot, (PlannedArm(None, node),), _NOWHERE, None, False, line.span)
            formed = WorkedGives(gives, 0, key, self.opened, self.program.work(node))
        return WorkedUnknown(line, key, worked, *sides, self.opened, formed)

    def closed(
        self, line: PlannedUnknown, difference: Callable[[float], float], low: float, high: float
    ) -> tuple[float, float, Expression] | None:
        """Return the one root between the bounds by its formula, if it stands the test of the equation itself."""
        at_low, at_high = difference(low), difference(high)
        if not min(at_low, at_high) < 0 < max(at_low, at_high):
            return None
        fits: list[tuple[float, Expression]] = []
        for node in line.closed:
            try:
                root = self.program.work(node)(self.values)
            except (NoValue, OverflowError):
                continue
            if min(low, high) < root < max(low, high):
                fits.append((root, node))
        larger = max(abs(at_low), abs(at_high))
        if len(fits) != 1 or abs(difference(fits[0][0])) > FORMED * larger:
            return None
        return fits[0][0], larger, fits[0][1]

    def method(self, line: PlannedMethod) -> WorkedLine:
        """Work a method; one that has no result stops the calculation."""
        handed = hand_over(line, self.values, lambda node: self.value(node, line.span, line.cite))
        try:
            result = WORKS[line.kind](handed, self.values.spend)
        except (NoResult, NoValue) as error:
            raise Stopped(Stop(line.span, f"{line.kind}: {error}", line.cite.printed)) from error
        keep_result(line, result, self.values, self.put)
        self.values.results[id(line), tuple(sorted(self.opened))] = result
        return WorkedMethod(line, result, self.opened)

    def put(self, slot: int, value: float) -> None:
        """Store a value that no formula gave; what was worked exactly from an earlier one is forgotten."""
        self.values.exact.clear()
        if self.values.sets[slot]:
            self.values.rows[slot][self.values.key(slot)] = value
        else:
            self.values.plain[slot] = value

    def rows(self, line: PlannedRows) -> WorkedLine:
        names: list[str] = []
        taken: list[tuple[int, tuple[tuple[str, str], ...]]] = []
        rows = self.program.plan.sets[line.rows]
        outer = tuple(self.values.open[index] for index in rows.outer)
        before = self.values.open[line.rows]
        for number, entry in enumerate(line.entries):
            for pairing in self.pairings(line, number):
                if len(names) >= MOST_ROWS:
                    raise Stopped(Stop(line.span, f"more than {MOST_ROWS} rows", line.cite.printed))
                self.values.open[line.rows] = len(names)
                if entry.when is not None and not self.holds(entry.when, entry.span, line.cite):
                    continue
                name = entry.name or str(len(names) + 1)
                for variable, row_name in pairing:
                    name = name.replace("{" + variable + "}", row_name)
                self.cells(line, number, dict(pairing))
                names.append(name)
                taken.append((number, pairing))
        self.values.open[line.rows] = before
        self.values.names[line.rows][outer] = tuple(names)
        return WorkedRows(line, tuple(names), tuple(taken), self.opened)

    def pairings(self, line: PlannedRows, number: int) -> list[tuple[tuple[str, str], ...]]:
        """Return every pairing of an entry's `for` with the rows at hand; one empty pairing without `for`."""
        entry = line.entries[number]
        over = next((column.over for column in line.columns if column.over >= 0), -1)
        names = self.values.row_names(over) if over >= 0 else ()
        listed = self.program.plan.sets[over].row_names if over >= 0 else ()
        found: list[tuple[tuple[str, str], ...]] = [()]
        for variable, patterns in entry.pairing:
            fitting = [name for name in names if fits(name, patterns, listed)]
            found = [(*pairing, (variable, name)) for pairing in found for name in fitting]
        return found

    def cells(self, line: PlannedRows, number: int, pairing: dict[str, str]) -> None:
        for column, cell in zip(line.columns, line.entries[number].cells, strict=True):
            if not isinstance(cell, tuple):
                self.fill(column.slot, cell, line.span, line.cite)
                continue
            mapped = {pairing.get(name, name): node for name, node in cell}
            before = self.values.open[column.over]
            for row, name in enumerate(self.values.row_names(column.over)):
                node = mapped.get(name, column.other)
                if node is None:
                    raise Stopped(Stop(line.span, f"no value for the row {name}", line.cite.printed))
                self.values.open[column.over] = row
                self.fill(column.slot, node, line.span, line.cite)
            self.values.open[column.over] = before

    # -------------------------------------------------------- judging

    def require(self, line: PlannedRequire) -> WorkedLine | None:
        if not self.holds(line.condition, line.span, line.cite):
            raise Stopped(Stop(line.span, line.stops_with, line.cite.printed))
        if line.silent or line.quiet:
            return None
        return WorkedRequire(line, self.compared(line.condition, line.span, line.cite), self.opened)

    def compared(self, node: Condition, at: Span, cite: Citation) -> tuple[Comparison, ...]:
        found = []
        for side in self.program.sides(node):
            try:
                left, right = side.left(self.values), side.right(self.values)
            except (NoValue, OverflowError) as error:
                raise Stopped(Stop(at, str(error), cite.printed)) from error
            found.append(Comparison(side.test, left, right, side.left, side.right))
        return tuple(found)

    def check(self, line: PlannedCheck) -> WorkedLine:
        ok = self.holds(line.holds, line.span, line.cite)
        sides = self.compared(line.holds, line.span, line.cite)
        judged = [(ratio_of(side), side) for side in sides]
        chosen = deciding(line.holds, judged, self.values)
        ratio, side = chosen if chosen is not None else (None, None)
        reason = ""
        verdict: Verdict = "OK" if ok else "NG"
        if line.bare:
            ratio = None
        elif side is not None and ratio is None and side.test.op not in ("=", "!="):
            reason = "no ratio: the capacity is not above zero"
        kind: Kind = kind_of(side.test) if side is not None and not line.bare else "condition"
        worked = WorkedCheck(line, verdict, side, ratio, kind, reason, None, self.opened)
        self.checks.append(worked)
        return worked


def _no_work(values: Values) -> float:
    raise NoValue("a word has no number")
