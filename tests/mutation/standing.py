"""Every template as it stands, worked once by its cases, so that a slip is worked only where it can be seen.

The plan of a variant and that of a mutant in, for a case out whether a line the mutant alters comes to something else
there. A line is judged on the finished values of the rule as it stands: what comes before it is the same, and what
comes after rests on it alone. Where that cannot be told (a set made otherwise, a method, a root), it may be seen.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal, TypeAlias

from calcreport.calculate.evaluate import Program, Run, Stopped, planned_checks
from calcreport.calculate.handing import hand_values
from calcreport.calculate.linking import find_path
from calcreport.calculate.model import (
    Expected,
    Key,
    NoValue,
    Plan,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedGives,
    PlannedLine,
    PlannedPart,
    PlannedRequire,
    PlannedText,
    PlannedUnknown,
    Stop,
    Values,
    Worked,
)
from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount
from calcreport.core.source import Citation, Span
from calcreport.driver import make_plan

from .judge import within
from .shelf import Held, Variant
from .sources import OUTSIDE

#: 'no': nothing comes to anything else; 'missed': an expected value does
Seen: TypeAlias = Literal["no", "perhaps", "missed"]
_NOWHERE = Citation("", "")

#: lines of the rule as it stands beside those of the mutant, only those that differ or hold one that does
Pairs = tuple[tuple[PlannedLine, PlannedLine, "Pairs"], ...]


@dataclass(slots=True)
class Standing:
    """A variant's plan, and what each of its cases came to, worked when first asked for."""

    variant: Variant
    program: Program = field(init=False)
    worked: dict[int, Worked] = field(default_factory=dict)
    places: dict[int, dict[tuple[int, Key], Expected]] = field(default_factory=dict)

    def __post_init__(self) -> None:
        """Plan the template as it stands."""
        plan = make_plan(self.variant.template, Problems())
        assert plan is not None, "a shelf holds sound templates"
        self.program = Program(plan)

    def of(self, held: Held) -> Worked:
        """Return what a case came to."""
        found = self.worked.get(id(held))
        if found is None:
            values = hand_values(held.case.calculation, self.program.plan, {}, Problems())
            found = self.worked[id(held)] = self.program.run(held.case.calculation, values, "")
        return found

    def altered(self, plan: Plan) -> Pairs | None:
        """Return the lines in which another plan differs; None where its slots are others, so that lines do not pair."""
        own = self.program.plan
        if [slot.path for slot in plan.slots] != [slot.path for slot in own.slots] or plan.sets != own.sets:
            return None
        return _pairs(own.lines, plan.lines)

    def seen(self, held: Held, pairs: Pairs | None, program: Program) -> Seen:
        """Tell whether a case may come to something else by a mutant's program, or does so at a value it expects."""
        worked = self.of(held)
        if pairs is not None and worked.stop is not None:
            pairs = self.reached(pairs, worked.stop)
        if pairs is None:
            return "perhaps"
        values = worked.values
        before, values.spent = list(values.open), 0
        replay = _Replay(self.program, program, values, self.expected(held))
        try:
            differs = replay.differs(pairs)
        except (Stopped, NoValue):
            return "perhaps"
        finally:
            values.open[:] = before
        return "missed" if replay.missed else "perhaps" if differs else "no"

    def reached(self, pairs: Pairs, stop: Stop) -> Pairs | None:
        """Return those before the line that stops; None if what stops, or is broken off by it, is among them."""
        lines = self.program.plan.lines
        last = next((line for line in lines if _holds(line, stop.span)), None)
        before = {id(line) for line in lines[: lines.index(last)]} if last is not None else set()
        if last is None or any(one is last for one, _, _ in pairs):
            return None
        return tuple(pair for pair in pairs if id(pair[0]) in before)

    def expected(self, held: Held) -> dict[tuple[int, Key], Expected]:
        """Return the values a case expects by an outside source, by slot and key."""
        found = self.places.get(id(held))
        if found is None:
            found = self.places[id(held)] = {}
            worked = self.of(held)
            for expected, kind in zip(held.case.expected, held.kinds, strict=True):
                if kind in OUTSIDE and isinstance(expected.value, Amount):
                    place = find_path(worked, expected.name, expected.span, Problems())
                    if place is not None:
                        found[place] = expected
        return found


def _pairs(own: tuple[PlannedLine, ...], other: tuple[PlannedLine, ...]) -> Pairs | None:
    if len(own) != len(other):
        return None
    found: list[tuple[PlannedLine, PlannedLine, Pairs]] = []
    for one, two in zip(own, other, strict=True):
        if one == two:
            continue
        inner: Pairs | None = ()
        match one, two:
            case PlannedEach(lines=lines), PlannedEach(lines=others):
                inner = _pairs(lines, others)
            case PlannedPart(lines=lines), PlannedPart(lines=others):
                inner = _pairs(lines, others)
            case (PlannedBranches(), PlannedBranches()) if len(one.arms) != len(two.arms):
                inner = None
            case _:
                pass
        if inner is None:
            return None
        found.append((one, two, inner))
    return tuple(found)


def _holds(line: PlannedLine, span: Span) -> bool:
    match line:
        case PlannedEach(lines=lines) | PlannedPart(lines=lines) | PlannedUnknown(lines=lines):
            return line.span == span or any(_holds(inner, span) for inner in lines)
        case PlannedBranches(arms):
            return line.span == span or any(_holds(inner, span) for arm in arms for inner in arm.lines)
        case _:
            return line.span == span


class _Replay:
    """Altered lines worked again on finished values, which they leave as they are."""

    def __init__(self, own: Program, other: Program, values: Values, expected: dict[tuple[int, Key], Expected]) -> None:
        self.own, self.other, self.values = Run(own, values), Run(other, values), values
        self.expected = expected
        #: a value comes out otherwise than the case expects
        self.missed = False

    def differs(self, pairs: Pairs) -> bool:
        return any(self.line(*pair) for pair in pairs)

    def line(self, one: PlannedLine, two: PlannedLine, inner: Pairs) -> bool:
        match one, two:
            case PlannedEach(rows), PlannedEach(other) if rows == other:
                before = self.values.open[rows]
                for row in range(len(self.values.row_names(rows))):
                    self.values.open[rows] = row
                    if self.differs(inner):
                        return True
                self.values.open[rows] = before
                return False
            case PlannedPart(), PlannedPart():
                return self.differs(inner)
            case PlannedBranches(), PlannedBranches():
                number = _arm(self.own, one)
                # a check of an arm passed over is told as not applicable
                if number != _arm(self.other, two) or _names(one) != _names(two):
                    return True
                found_pairs = _pairs(one.arms[number].lines, two.arms[number].lines)
                return found_pairs is None or self.differs(found_pairs)
            case PlannedGives(slot), PlannedGives(other) if slot == other:
                kind = self.own.program.plan.slots[slot].symbol.kind
                if kind == "word":
                    return True
                arm, key = two.arms[_arm(self.other, two)].formula, self.values.key(slot)
                value = self.other.value(arm, two.span, two.cite)
                expected = self.expected.get((slot, key))
                self.missed = expected is not None and not within(expected, value)
                return value != self.values.get(slot, key)
            case PlannedCheck(), PlannedCheck():
                self.own.check(one)
                self.other.check(two)
                was, now = self.own.checks[-1], self.other.checks[-1]
                return (was.verdict, was.ratio) != (now.verdict, now.ratio)
            case (PlannedRequire() | PlannedText(), PlannedRequire() | PlannedText()):
                # words are not judged, but the limit states they leave out are
                leaves = tuple(line.leaves if isinstance(line, PlannedText) else () for line in (one, two))
                met = isinstance(two, PlannedText) or self.other.holds(two.condition, two.span, two.cite)
                return leaves[0] != leaves[1] or not met
            case _:
                return True


def _names(line: PlannedBranches) -> list[str]:
    return [check.name for check in planned_checks((line,))]


def _arm(run: Run, line: PlannedGives | PlannedBranches) -> int:
    for number, arm in enumerate(line.arms):
        if arm.when is None or run.holds(
            arm.when, line.span, line.cite if isinstance(line, PlannedGives) else _NOWHERE
        ):
            return number
    raise NoValue("no arm")
