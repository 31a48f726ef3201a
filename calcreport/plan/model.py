"""What planning hands on: a template with every name bound to a slot, in page order, dimensions held. No values.

A plan belongs to a template settled for one system and year, and serves every calculation made by it. What reading
made and planning leaves as it is goes on through here.
Kept in one: records that are read together.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

from calcreport.core.expression import Condition, Expression
from calcreport.core.source import Citation, Span
from calcreport.read.model import (
    MEMBER,
    BarCallout,
    Calculation,
    Candidate,
    Case,
    Expected,
    Given,
    GivenPairs,
    GivenRows,
    GivenValue,
    Handed,
    Inputs,
    LinkedRows,
    LinkedValue,
    Project,
    Reason,
    Symbol,
    Template,
    ValueOrigin,
    singles,
)


@dataclass(frozen=True, slots=True)
class Slot:
    """A place for one value, or for one value a row where `sets` are not empty."""

    index: int
    symbol: Symbol
    #: the name a project and `trace` use: 'phiM_n', 'curve.M_n'
    path: str
    #: numbers of the sets the value varies over, outer first
    sets: tuple[int, ...]
    #: the project may leave it out
    may_be_absent: bool
    span: Span


@dataclass(frozen=True, slots=True)
class RowSet:
    """A set of rows; its rows may differ for each row of the `outer` sets it was made inside."""

    index: int
    name: str
    outer: tuple[int, ...]
    #: permitted row names, () for any
    row_names: tuple[str, ...]
    span: Span


@dataclass(frozen=True, slots=True)
class PlannedGiven:
    """A given with the slots it fills."""

    given: Given
    #: slot of a value; -1 for rows
    slot: int
    #: set of rows; -1 for a value
    rows: int
    #: slots of a row's columns, in the given's order (each with its own callout outputs)
    columns: tuple[PlannedGiven, ...]
    #: slots of the values read off a callout, in the order of `given.gives`
    outputs: tuple[int, ...]
    #: sets of a value given for pairs, in order
    over: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class PlannedText:
    """Words; a piece that is a number is the slot whose value is shown there."""

    kind: Literal["heading", "note", "caution", "assume", "use"]
    pieces: tuple[str | int, ...]
    cite: Citation | None
    span: Span
    #: limit states left out where it is reached
    leaves: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class PlannedArm:
    """One case of a line."""

    when: Condition | None
    formula: Expression


@dataclass(frozen=True, slots=True)
class PlannedGives:
    """A line that fills one slot."""

    slot: int
    arms: tuple[PlannedArm, ...]
    cite: Citation
    as_cited: tuple[Expression, Expression] | None
    #: a value handed to a part: 'd = h - 3 in'
    handed: bool
    span: Span


@dataclass(frozen=True, slots=True)
class PlannedBranchArm:
    """One arm of a block."""

    when: Condition | None
    lines: tuple[PlannedLine, ...]
    says: str | None


@dataclass(frozen=True, slots=True)
class PlannedBranches:
    """A block of lines by cases."""

    arms: tuple[PlannedBranchArm, ...]
    span: Span


@dataclass(frozen=True, slots=True)
class PlannedColumn:
    """A column made here; `over` is -1, or the set its cells map."""

    slot: int
    over: int
    other: Expression | None


@dataclass(frozen=True, slots=True)
class PlannedEntry:
    """A listed row."""

    name: str
    pairing: tuple[tuple[str, tuple[str, ...]], ...]
    #: a formula, or formulas by row name, for each column in order
    cells: tuple[Expression | tuple[tuple[str, Expression], ...], ...]
    when: Condition | None
    span: Span


@dataclass(frozen=True, slots=True)
class PlannedRows:
    """A set made here; of one spaced between two bounds, its entries are the points."""

    rows: int
    columns: tuple[PlannedColumn, ...]
    entries: tuple[PlannedEntry, ...]
    says: str
    cite: Citation
    span: Span
    #: the bounds the rows are spaced between
    spaced: tuple[Expression, Expression] | None = None


@dataclass(frozen=True, slots=True)
class PlannedEach:
    """Lines once a row."""

    rows: int
    lines: tuple[PlannedLine, ...]
    table: tuple[int, ...]
    show: Literal["", "every", "first", "governing", "figure"]
    span: Span


@dataclass(frozen=True, slots=True)
class PlannedUnknown:
    """A value found between bounds so that both sides agree, with the lines that depend on it."""

    slot: int
    low: Expression
    high: Expression
    left: Expression
    right: Expression
    lines: tuple[PlannedLine, ...]
    span: Span
    #: formulas of the roots, where the equation has them and nothing else depends on the value
    closed: tuple[Expression, ...] = ()


@dataclass(frozen=True, slots=True)
class PlannedPart:
    """A part's lines in place."""

    title: str
    stem: str
    lines: tuple[PlannedLine, ...]
    span: Span


@dataclass(frozen=True, slots=True)
class PlannedCheck:
    """A check; `name` carries the stem of the part it stands in. A `bare` one is a condition without a ratio."""

    name: str
    holds: Condition
    says: str
    cite: Citation
    span: Span
    bare: bool = False


@dataclass(frozen=True, slots=True)
class PlannedRequire:
    """A condition to go on."""

    condition: Condition
    says: str
    cite: Citation
    span: Span
    #: the range of what a part is handed, which no author wrote: printed only where it stops
    silent: bool = False
    #: printed only where it stops, at the wish of its author
    quiet: bool = False

    @property
    def stops_with(self) -> str:
        """The words of the stop where it is not met."""
        return f"requirement not met: {self.says}"


@dataclass(frozen=True, slots=True)
class BoundInput:
    """One input of a figure or a method: a slot, a set, a formula, or a word of its own (each else empty)."""

    name: str
    slot: int = -1
    rows: int = -1
    formula: Expression | None = None
    word: str = ""
    #: place of what was handed
    span: Span | None = None


@dataclass(frozen=True, slots=True)
class PlannedFigure:
    """A figure with its inputs bound."""

    kind: str
    inputs: tuple[BoundInput, ...]
    span: Span


@dataclass(frozen=True, slots=True)
class PlannedMethod:
    """A method with its inputs bound, and the slots and sets its outputs fill."""

    kind: str
    inputs: tuple[BoundInput, ...]
    #: (slot, name of the output or of a set's column)
    outputs: tuple[tuple[int, str], ...]
    #: (set of ours, name of the set it makes)
    sets: tuple[tuple[int, str], ...]
    cite: Citation
    span: Span
    #: slots of the outputs that are printed; None for all
    table: tuple[int, ...] | None = None


PlannedLine: TypeAlias = (
    PlannedText
    | PlannedGives
    | PlannedBranches
    | PlannedRows
    | PlannedEach
    | PlannedUnknown
    | PlannedPart
    | PlannedCheck
    | PlannedRequire
    | PlannedFigure
    | PlannedMethod
)


@dataclass(frozen=True, slots=True)
class Plan:
    """A template ready to be worked."""

    template: Template
    slots: tuple[Slot, ...]
    sets: tuple[RowSet, ...]
    givens: tuple[PlannedGiven, ...]
    lines: tuple[PlannedLine, ...]
    #: limit states decided here, parts included
    covers: tuple[str, ...]
    #: limit states it leaves out, always or where a line says so
    leaves: tuple[str, ...]
    #: slot by path, for links, trace and tests
    by_path: dict[str, int]
    #: the value that is to be least among candidates of one preference, -1 for none
    least: int = -1


__all__ = [
    "MEMBER",
    "BarCallout",
    "BoundInput",
    "Calculation",
    "Candidate",
    "Case",
    "Expected",
    "Given",
    "GivenPairs",
    "GivenRows",
    "GivenValue",
    "Handed",
    "Inputs",
    "LinkedRows",
    "LinkedValue",
    "Plan",
    "PlannedArm",
    "PlannedBranchArm",
    "PlannedBranches",
    "PlannedCheck",
    "PlannedColumn",
    "PlannedEach",
    "PlannedEntry",
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
    "Slot",
    "Symbol",
    "Template",
    "ValueOrigin",
    "singles",
]  # fmt: skip
