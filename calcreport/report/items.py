"""What a calculation tells, item by item: records of given values, lines, tables, checks, figures, with their numbers.

Made by `report.script`; turned into blocks by `report.calculation`, into values by `report.valuesfile`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

from calcreport.calculate.model import (
    Key,
    PlannedGiven,
    Selection,
    Stop,
    Values,
    Worked,
    WorkedBranches,
    WorkedCheck,
    WorkedEach,
    WorkedFigure,
    WorkedGives,
    WorkedMethod,
    WorkedRequire,
    WorkedRows,
    WorkedText,
    WorkedUnknown,
)


@dataclass(frozen=True, slots=True)
class SayGivens:
    """The given values that have no rows, a line number each."""

    rows: tuple[tuple[int, PlannedGiven], ...]


@dataclass(frozen=True, slots=True)
class SayAlike:
    """Given values to which the project says one word, in one line: those it has none of, those that are not so."""

    number: int
    word: Literal["none", "no"]
    givens: tuple[PlannedGiven, ...]


@dataclass(frozen=True, slots=True)
class SayRows:
    """A set of given rows as a table; `within` is the set of members each of which has such a set for itself."""

    number: int
    given: PlannedGiven
    within: PlannedGiven | None = None


@dataclass(frozen=True, slots=True)
class SayChoice:
    """The candidates of the engineer, and which one is used."""

    number: int
    selection: Selection


@dataclass(frozen=True, slots=True)
class SayText:
    """Words."""

    worked: WorkedText


@dataclass(frozen=True, slots=True)
class SayHeading:
    """A heading the program itself sets: a part's title, a row's name."""

    text: str
    level: int


@dataclass(frozen=True, slots=True)
class SayLine:
    """A line in full."""

    number: int
    worked: WorkedGives


@dataclass(frozen=True, slots=True)
class SayFormula:
    """A formula once, for rows that follow in a table; one worked line for each arm taken."""

    number: int
    arms: tuple[WorkedGives, ...]


@dataclass(frozen=True, slots=True)
class SayMade:
    """A set made here, as a table."""

    number: int
    worked: WorkedRows


@dataclass(frozen=True, slots=True)
class SayTable:
    """Results of rows of a set; `governing` is the row told in full, or -1."""

    number: int
    worked: WorkedEach
    columns: tuple[int, ...]
    checks: tuple[str, ...]
    governing: int
    #: the rows that stand in the table, all of them or those that tell what governs
    rows: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class SayUnseen:
    """Lines of which only figures stand on the sheets; their values are in the values file."""

    worked: WorkedEach


@dataclass(frozen=True, slots=True)
class SayUnknown:
    """A value found so that both sides of an equation agree: the equation, then the value."""

    #: line number of the equation
    equation: int
    number: int
    worked: WorkedUnknown


@dataclass(frozen=True, slots=True)
class SayEquation:
    """A side of the equation at the value found, with its number."""

    number: int
    worked: WorkedUnknown
    side: Literal["left", "right"]


@dataclass(frozen=True, slots=True)
class SayBranch:
    """The condition that chose a block."""

    worked: WorkedBranches


@dataclass(frozen=True, slots=True)
class SayCheck:
    """A check in full."""

    number: int
    worked: WorkedCheck


@dataclass(frozen=True, slots=True)
class SayRequire:
    """A requirement that was met."""

    number: int
    worked: WorkedRequire


@dataclass(frozen=True, slots=True)
class SayFigure:
    """A figure."""

    worked: WorkedFigure


@dataclass(frozen=True, slots=True)
class SayMethod:
    """A method with what it is handed."""

    number: int
    worked: WorkedMethod


@dataclass(frozen=True, slots=True)
class SayOutput:
    """A value a method gives; `of` is the line of the method."""

    number: int
    of: int
    slot: int
    key: Key


@dataclass(frozen=True, slots=True)
class SayOutputs:
    """What a method gives over the same rows, as a table: of a set, or of all groups of rows of several sets."""

    number: int
    of: int
    worked: WorkedMethod
    sets: tuple[int, ...]
    columns: tuple[int, ...]

    def keys(self, values: Values) -> tuple[Key, ...]:
        """Return the rows of the table, each by its rows in `sets`."""
        rows = dict(self.worked.open)
        found: list[Key] = [()]
        for place, index in enumerate(self.sets):
            keys: list[Key] = []
            for key in found:
                opened = {**rows, **dict(zip(self.sets[:place], key, strict=True))}
                outer = tuple(opened[other] for other in values.outer[index])
                keys += [(*key, row) for row in range(len(values.names[index].get(outer, ())))]
            found = keys
        return tuple(found)


@dataclass(frozen=True, slots=True)
class SayProof:
    """A sum that proves a method's result, with its number."""

    number: int
    of: int
    worked: WorkedMethod
    place: int


@dataclass(frozen=True, slots=True)
class SayStop:
    """Where the calculation stopped, and the checks it did not reach, each with its line number and its rows."""

    stop: Stop
    left: tuple[tuple[int, tuple[WorkedCheck, ...]], ...]


Item: TypeAlias = (
    SayGivens
    | SayAlike
    | SayRows
    | SayChoice
    | SayText
    | SayHeading
    | SayLine
    | SayFormula
    | SayMade
    | SayTable
    | SayUnknown
    | SayUnseen
    | SayEquation
    | SayBranch
    | SayCheck
    | SayRequire
    | SayFigure
    | SayMethod
    | SayOutput
    | SayOutputs
    | SayProof
    | SayStop
)


@dataclass(frozen=True, slots=True)
class Script:
    """One calculation's items, and the line number that tells each value and each check."""

    worked: Worked
    items: tuple[Item, ...]
    #: line number by (slot, key); rows told only in a table have the table's formula line
    line_of: dict[tuple[int, Key], int]
    #: line number by the identity of a worked check
    check_line: dict[int, int]
