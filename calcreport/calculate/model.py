"""What calculating hands on: every value, the arm each line took, every check, and where a calculation stopped.

`Values` is filled while a calculation is worked and only read afterwards; the other records are frozen.
Kept in one though long: records that are read together.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from fractions import Fraction
from typing import Literal, TypeAlias

from calcreport.core.expression import Compare, Condition, Expression
from calcreport.core.source import Span
from calcreport.methods.results import Result
from calcreport.plan.model import (
    MEMBER,
    BarCallout,
    BoundInput,
    Calculation,
    Candidate,
    Case,
    Expected,
    GivenPairs,
    GivenRows,
    GivenValue,
    Inputs,
    LinkedRows,
    LinkedValue,
    Plan,
    PlannedArm,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedFigure,
    PlannedGiven,
    PlannedGives,
    PlannedLine,
    PlannedMethod,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    PlannedText,
    PlannedUnknown,
    Project,
    Reason,
    RowSet,
    Slot,
    Symbol,
    ValueOrigin,
    singles,
)

Value: TypeAlias = "float | str | None"
Key: TypeAlias = tuple[int, ...]
Kind: TypeAlias = Literal["demand / capacity", "required / provided", "ratio", "condition"]
Verdict: TypeAlias = Literal["OK", "NG", "not evaluated", "not applicable"]


#: rows that the formulas of one calculation may go through, lines counted as some: a bound against hostile templates
MOST_WORK = 1_500_000


class NoValue(ArithmeticError):
    """A formula has no value here; the words say why."""


@dataclass(slots=True)
class Values:
    """The values of one calculation by slot: base units for quantities, text for words, None for absent."""

    #: values that have no rows
    plain: list[Value]
    #: values by row key, for slots that have rows
    rows: list[dict[Key, Value]]
    #: the open row of every set
    open: list[int]
    #: row names of every set by outer row key
    names: list[dict[Key, tuple[str, ...]]]
    #: sets of every slot
    sets: tuple[tuple[int, ...], ...]
    #: outer sets of every set
    outer: tuple[tuple[int, ...], ...]
    #: exact amounts of given values and of links by (slot, key)
    given: dict[tuple[int, Key], Fraction] = field(default_factory=dict)
    #: formula that gave a value, by (slot, key)
    worked: dict[tuple[int, Key], Expression] = field(default_factory=dict)
    #: exact values already worked again
    exact: dict[tuple[int, Key], Fraction] = field(default_factory=dict)
    #: something worked exactly rests on a root, which is known to the last bits only
    rough: bool = False
    #: work done so far
    spent: int = 0
    #: the method that gave a value, by (slot, key)
    by_method: dict[tuple[int, Key], PlannedMethod] = field(default_factory=dict)
    #: what a method came to, by identity of its line and the rows open around it, in order of their sets
    results: dict[tuple[int, tuple[tuple[int, int], ...]], Result] = field(default_factory=dict)
    #: the values by which rows are chosen, with the same open rows, where these here are printed figures
    judge: Values | None = None

    def spend(self, work: int) -> None:
        """Count work; raises `NoValue` beyond the bound."""
        self.spent += work
        if self.spent > MOST_WORK:
            raise NoValue("more rows than one calculation may go through")

    def key(self, slot: int) -> Key:
        """Return the key of a slot's open row."""
        return tuple(self.open[index] for index in self.sets[slot])

    def get(self, slot: int, key: Key = ()) -> Value:
        """Return a value by its key."""
        return self.rows[slot].get(key) if self.sets[slot] else self.plain[slot]

    def number(self, slot: int, key: Key = ()) -> float:
        """Return a value that must be a number."""
        value = self.get(slot, key)
        assert isinstance(value, float)
        return value

    def row_names(self, index: int) -> tuple[str, ...]:
        """Return the names of a set's rows where its outer sets are open."""
        return self.names[index].get(tuple(self.open[outer] for outer in self.outer[index]), ())


def split_path(path: str) -> tuple[list[tuple[str, str]], str]:
    """Split `section[foot].combination[4 W+].P_u` into sets with their rows, and the symbol."""
    *steps, symbol = path.split("].")
    parted = (step.partition("[") for step in steps)
    return [(name, row) for name, _, row in parted], symbol


def row_cells(
    planned: PlannedGiven, value: GivenRows, outer: Key = ()
) -> Iterator[tuple[PlannedGiven, Key, GivenValue]]:
    """Return every cell of given rows with its column and its key, those of sets inside them too."""
    columns = {column.given.name: column for column in planned.columns}
    for row, cells in enumerate(value.cells):
        for cell in cells:
            column = columns[cell.given.name]
            if isinstance(cell, GivenRows):
                yield from row_cells(column, cell, (*outer, row))
            else:
                yield column, (*outer, row), cell


Work: TypeAlias = Callable[[Values], float]
Test: TypeAlias = Callable[[Values], bool]


@dataclass(frozen=True, slots=True)
class WorkedGives:
    """A line worked: which arm, which row, and the compiled formula for working it again."""

    line: PlannedGives
    arm: int
    key: Key
    #: rows open while it was worked: (set, row)
    open: tuple[tuple[int, int], ...]
    work: Work


@dataclass(frozen=True, slots=True)
class WorkedText:
    """Words with values in them."""

    line: PlannedText
    open: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class WorkedBranches:
    """A block of which one arm was worked."""

    line: PlannedBranches
    arm: int
    lines: tuple[WorkedLine, ...]
    open: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class WorkedRows:
    """A set made."""

    line: PlannedRows
    names: tuple[str, ...]
    #: entry each row came from, and the set's rows its pairing took
    entries: tuple[tuple[int, tuple[tuple[str, str], ...]], ...]
    open: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class WorkedEach:
    """Lines worked for every row."""

    line: PlannedEach
    names: tuple[str, ...]
    rows: tuple[tuple[WorkedLine, ...], ...]
    open: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class WorkedUnknown:
    """A value found so that both sides agree, with its lines at the root and the two sides there."""

    line: PlannedUnknown
    key: Key
    lines: tuple[WorkedLine, ...]
    #: both sides at the root, base units
    left: float
    right: float
    open: tuple[tuple[int, int], ...]
    #: the formula that gave it, as a line; None where the root was bracketed
    closed: WorkedGives | None = None


@dataclass(frozen=True, slots=True)
class WorkedPart:
    """A part's lines worked."""

    line: PlannedPart
    lines: tuple[WorkedLine, ...]


@dataclass(frozen=True, slots=True)
class Comparison:
    """The two sides a check was judged by, base units."""

    test: Compare
    left: float
    right: float
    work_left: Work
    work_right: Work


@dataclass(frozen=True, slots=True)
class WorkedCheck:
    """A check judged from unrounded values."""

    line: PlannedCheck
    verdict: Verdict
    #: the comparison that decides; None for a condition without one, or a check not worked
    by: Comparison | None
    #: demand over capacity, or None where there is no division to show
    ratio: float | None
    kind: Kind
    #: why it is not applicable or not evaluated, or NG without a ratio
    reason: str
    #: condition whose failure made it not applicable
    excluded_by: Condition | None
    open: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class WorkedRequire:
    """A requirement that was met."""

    line: PlannedRequire
    sides: tuple[Comparison, ...]
    open: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class WorkedFigure:
    """A figure whose inputs have values now."""

    line: PlannedFigure
    open: tuple[tuple[int, int], ...]


@dataclass(frozen=True, slots=True)
class WorkedMethod:
    """A method worked, with its outputs and the sums that prove them."""

    line: PlannedMethod
    result: Result
    open: tuple[tuple[int, int], ...]

    def places(self, values: Values) -> tuple[tuple[int, Key], ...]:
        """Return slot and key of every value taken here, rows of the sets made included."""
        rows = dict(self.open)
        found: list[tuple[int, Key]] = []
        for slot, _ in self.line.outputs:
            if not values.sets[slot]:
                found.append((slot, ()))
                continue
            for key in values.rows[slot]:
                if all(rows.get(index, row) == row for index, row in zip(values.sets[slot], key, strict=True)):
                    found.append((slot, key))
        return tuple(found)


WorkedLine: TypeAlias = (
    WorkedGives
    | WorkedText
    | WorkedBranches
    | WorkedRows
    | WorkedEach
    | WorkedUnknown
    | WorkedPart
    | WorkedCheck
    | WorkedRequire
    | WorkedFigure
    | WorkedMethod
)


@dataclass(frozen=True, slots=True)
class Stop:
    """Where and why a calculation went no further."""

    span: Span
    #: 'requirement not met', 'division by zero' and the like, in words for the sheet
    words: str
    cite: str
    #: the rows open there: 'member B9', '' for none
    where: str = ""

    @property
    def told(self) -> str:
        """The words with the rows they are of: 'member B9: division by zero'."""
        return f"{self.where}: {self.words}" if self.where else self.words


def _verdict(checks: tuple[WorkedCheck, ...], stopped: bool) -> Verdict:
    verdicts = {check.verdict for check in checks}
    if "NG" in verdicts:
        return "NG"
    return "not evaluated" if stopped or "not evaluated" in verdicts else "OK"


@dataclass(frozen=True, slots=True)
class Worked:
    """One calculation, worked."""

    calculation: Calculation
    plan: Plan
    values: Values
    lines: tuple[WorkedLine, ...]
    #: every check in page order, those of a stopped calculation as not evaluated
    checks: tuple[WorkedCheck, ...]
    stop: Stop | None
    #: sixteen hexadecimal digits over inputs and template text
    fingerprint: str
    #: returns the callable of a planned formula
    compiled: Callable[[Expression], Work]
    #: returns the test of a planned condition
    tested: Callable[[Condition], Test]
    #: how its candidate was taken; None where nothing was to choose
    selection: Selection | None = None
    #: blocks that a stop left unfinished, outermost first
    broken_off: tuple[PlannedLine, ...] = ()
    #: limit states left out: by the template always, or by a caution that was reached
    left_out: tuple[str, ...] = ()

    def place(self, path: str) -> tuple[int, Key]:
        """Return slot and key of a value by a path that was found good: `combination[4 W+].P_u`."""
        steps, symbol = split_path(path)
        slot = self.plan.by_path[symbol]
        key: list[int] = []
        for index, (_, row) in zip(self.values.sets[slot], steps, strict=True):
            key.append(self.values.names[index][tuple(key[: len(self.values.outer[index])])].index(row))
        return slot, tuple(key)

    @property
    def stopped_unseen(self) -> bool:
        """Whether it stopped without a check that could say so, as one that only gives values to others."""
        return self.stop is not None and not any(check.verdict == "not evaluated" for check in self.checks)

    @property
    def members(self) -> tuple[Member, ...]:
        """The members it stands for: itself, or the rows that like members share it by."""
        marks = self.calculation.members
        if not marks:
            return (Member(self.calculation.mark, self, (-1, -1), self.checks),)
        index = next(given.rows for given in self.plan.givens if given.given.name == MEMBER)
        by_row: dict[int, list[WorkedCheck]] = {row: [] for row in range(len(marks))}
        for check in self.checks:
            row = dict(check.open).get(index, -1)
            for own in by_row if row < 0 else (row,):
                by_row[own].append(check)
        return tuple(Member(mark, self, (index, row), tuple(by_row[row])) for row, mark in enumerate(marks))

    @property
    def verdict(self) -> Verdict:
        """NG if any check is, else not evaluated if any is, else OK."""
        return _verdict(self.checks, self.stop is not None)


@dataclass(frozen=True, slots=True)
class Tried:
    """One candidate, worked in full."""

    #: its place among the candidates
    place: int
    worked: Worked


@dataclass(frozen=True, slots=True)
class Selection:
    """How a candidate was taken."""

    candidates: tuple[Candidate, ...]
    #: those worked, in the engineer's order
    tried: tuple[Tried, ...]
    #: place of the one the sheets show
    used: int
    #: place of the one to take, which meets every check and stops nowhere; -1 for none
    first: int
    #: the engineer has pinned the one used
    pinned: bool
    #: slot of the value that is to be least among candidates of one preference, -1 for none
    least: int = -1

    @property
    def has_groups(self) -> bool:
        """Tell whether any preference is shared by several candidates."""
        return len({one.preference for one in self.candidates}) < len(self.candidates)

    @property
    def has_moved(self) -> bool:
        """Tell whether the pinned candidate is no longer the one that would be taken."""
        return self.pinned and self.used != self.first


@dataclass(frozen=True, slots=True)
class Margin:
    """The nearest values at which a check's verdict flips; None where it does not within the search."""

    check: str
    slot: int
    #: value at hand and flipping values, base units
    value: float
    lower: float | None
    upper: float | None
    #: the row of a value in rows
    key: Key = ()

    @property
    def share(self) -> float:
        """The smaller of the two ways, as a share of the value."""
        return abs(self.nearest - self.value) / abs(self.value) if self.nearest is not None else float("inf")

    @property
    def nearest(self) -> float | None:
        """The flipping value on the smaller of the two ways."""
        ways = [found for found in (self.lower, self.upper) if found is not None]
        return min(ways, key=lambda found: abs(found - self.value), default=None)


@dataclass(frozen=True, slots=True)
class Member:
    """One member of a building: a calculation of its own, or a row of one that like members share."""

    mark: str
    worked: Worked
    #: the shared set and its row; (-1, -1) for a calculation of its own
    place: tuple[int, int]
    #: every check of this member, in page order
    checks: tuple[WorkedCheck, ...]

    @property
    def verdict(self) -> Verdict:
        """NG if any check is, else not evaluated if any is, else OK."""
        alone = self.place[0] < 0
        return _verdict(self.checks, alone and self.worked.stop is not None)

    def owns(self, opened: tuple[tuple[int, int], ...]) -> bool:
        """Tell whether what was worked in these open rows is of this member, or of all of them."""
        return all(index != self.place[0] or row == self.place[1] for index, row in opened)


@dataclass(frozen=True, slots=True)
class WorkedProject:
    """All calculations, in the project's order, with the order they were worked in."""

    project: Project
    calculations: tuple[Worked, ...]
    order: tuple[int, ...]
    fingerprint: str

    @property
    def members(self) -> tuple[Member, ...]:
        """Every member, in order."""
        return tuple(member for worked in self.calculations for member in worked.members)

    @property
    def left_open(self) -> dict[str, tuple[str, ...]]:
        """Limit states that no calculation of a member decides and on which the engineer has no word, by member."""
        said = {d.limit_state for d in self.project.dispositions if d.limit_state}
        found: dict[str, tuple[str, ...]] = {}
        together: dict[str, list[Worked]] = {}
        for worked in self.calculations:
            together.setdefault(worked.calculation.member, []).append(worked)
        for name, own in together.items():
            decided = {state for worked in own for state in worked.plan.covers}
            left = dict.fromkeys(
                state
                for worked in own
                for state in worked.left_out
                if not said & {state, f"{name} {state}", f"{worked.calculation.mark} {state}"}
            )
            if open_states := tuple(state for state in left if state not in decided):
                found[name] = open_states
        return found


__all__ = [
    "MEMBER",
    "BarCallout",
    "BoundInput",
    "Calculation",
    "Candidate",
    "Case",
    "Comparison",
    "Expected",
    "GivenPairs",
    "GivenRows",
    "GivenValue",
    "Inputs",
    "Key",
    "LinkedRows",
    "LinkedValue",
    "Margin",
    "Member",
    "NoValue",
    "Plan",
    "PlannedArm",
    "PlannedBranches",
    "PlannedCheck",
    "PlannedEach",
    "PlannedFigure",
    "PlannedGiven",
    "PlannedGives",
    "PlannedLine",
    "PlannedMethod",
    "PlannedPart",
    "PlannedRequire",
    "PlannedRows",
    "PlannedText",
    "PlannedUnknown",
    "Project",
    "Reason",
    "RowSet",
    "Selection",
    "Slot",
    "Stop",
    "Symbol",
    "Test",
    "Tried",
    "Value",
    "ValueOrigin",
    "Values",
    "Verdict",
    "Work",
    "Worked",
    "WorkedBranches",
    "WorkedCheck",
    "WorkedEach",
    "WorkedFigure",
    "WorkedGives",
    "WorkedLine",
    "WorkedMethod",
    "WorkedPart",
    "WorkedProject",
    "WorkedRequire",
    "WorkedRows",
    "WorkedText",
    "WorkedUnknown",
    "row_cells",
    "singles",
    "split_path",
]
