"""A project as read: given values with their types, calculations, and what stands on the front sheets.

Kept in one: records that are read together.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

from calcreport.core.expression import Name
from calcreport.core.quantity import Amount
from calcreport.core.source import Source, Span
from calcreport.read.template_model import Given, System, Template

#: the set whose rows are like members that share one calculation
MEMBER = "member"


@dataclass(frozen=True, slots=True)
class ValueOrigin:
    """Where a given value was taken from, as the sheet prints it."""

    kind: Literal["project file", "criteria", "material", "schedule", "table", "line", "source", "none", "candidate"]
    #: material mark, stated source, schedule row, file and rows, line such as 'FL2.M_u', or candidate such as '2 of 5'
    words: str


@dataclass(frozen=True, slots=True)
class BarGroup:
    """Like bars of a callout: count, size name, area and diameter of one bar."""

    count: int
    size: str
    area: Amount
    diameter: Amount


@dataclass(frozen=True, slots=True)
class BarCallout:
    """`4-#8`, `2#8 + 1#7`, `#4 @ 12 in`, `2 legs #4 @ 8 in`."""

    groups: tuple[BarGroup, ...]
    spacing: Amount | None
    text: str


@dataclass(frozen=True, slots=True)
class LinkedValue:
    """`{from: FL2.M_u}`: another calculation's line."""

    mark: str
    path: str
    span: Span
    #: (set, row) under `at`; in the path too once the link is bound
    at: tuple[tuple[Name, Name], ...] = ()


@dataclass(frozen=True, slots=True)
class LinkedRows:
    """`{from: LC1.combination, at: {section: C3 foot}, columns: {P_u: P_u}}`: the rows of another calculation's set."""

    mark: str
    rows: Name
    #: (set, row) for the other sets the values vary over
    at: tuple[tuple[Name, Name], ...]
    #: (column of ours, value of theirs)
    columns: tuple[tuple[Given, Name], ...]
    #: columns that hold the same in every row: `none`, or a material's property
    same: tuple[GivenValue, ...]
    span: Span


#: what a single given value may be; None stands for `none` where the template lets it be absent
Handed: TypeAlias = Amount | str | BarCallout | LinkedValue | None


@dataclass(frozen=True, slots=True)
class GivenValue:
    """A given value with its type settled by the template's declaration."""

    given: Given
    value: Handed
    origin: ValueOrigin
    span: Span


@dataclass(frozen=True, slots=True)
class GivenRows:
    """Rows for a set: names, and a value for every column of every row."""

    given: Given
    names: tuple[str, ...]
    #: one tuple a row, in the order of the given's columns; a set of its own in a row of like members
    cells: tuple[tuple[GivenValue | GivenRows, ...], ...]
    origin: ValueOrigin
    span: Span
    #: another calculation's rows: names and cells are empty until that one is worked
    linked: LinkedRows | None = None


@dataclass(frozen=True, slots=True)
class GivenPairs:
    """A value for pairs of rows of two sets; pairs not named take the given's `if none`."""

    given: Given
    cells: tuple[tuple[tuple[str, ...], GivenValue], ...]
    origin: ValueOrigin
    span: Span


def singles(values: Iterable[GivenValue | GivenRows | GivenPairs]) -> Iterator[GivenValue]:
    """Return every single value, those in rows and pairs too."""
    for value in values:
        match value:
            case GivenValue():
                yield value
            case GivenRows():
                for row in value.cells:
                    yield from singles(row)
            case GivenPairs():
                yield from (cell for _, cell in value.cells)


@dataclass(frozen=True, slots=True)
class Candidate:
    """One joint choice of given values."""

    values: tuple[GivenValue | GivenRows | GivenPairs, ...]
    #: what it chooses by name, a given value or a cell of a set ('group A steel'), each as it was typed
    named: tuple[tuple[str, str], ...]
    #: number of its preference from 0
    preference: int
    span: Span


@dataclass(frozen=True, slots=True)
class Calculation:
    """One calculation of a project with its template and its given values."""

    mark: str
    title: str
    template: Template
    #: what is given, in the template's order; what a candidate chooses is not among it before one is taken
    given: tuple[GivenValue | GivenRows | GivenPairs, ...]
    #: files this calculation's inputs stand in are fingerprinted through this text
    input_text: str
    span: Span
    #: the engineer's candidates in order of preference, and the place of the pinned one (-1: none)
    candidates: tuple[Candidate, ...] = ()
    pinned: int = -1
    #: marks of the like members it stands for, rows of the set `member`; () for one member
    members: tuple[str, ...] = ()
    #: the member it is one of several calculations of, '' where it is the only one
    part_of: str = ""

    @property
    def member(self) -> str:
        """The member it is of: the one it names, or its own mark."""
        return self.part_of or self.mark

    @property
    def handed(self) -> tuple[GivenValue | GivenRows | GivenPairs, ...]:
        """Everything handed over, by whatever candidate."""
        return (*self.given, *(value for candidate in self.candidates for value in candidate.values))

    def changed(
        self, change: Callable[[GivenValue | GivenRows | GivenPairs], GivenValue | GivenRows | GivenPairs]
    ) -> Calculation:
        """Return the calculation with everything handed over changed."""
        chosen = (replace(one, values=tuple(map(change, one.values))) for one in self.candidates)
        return replace(self, given=tuple(map(change, self.given)), candidates=tuple(chosen))

    def taking(self, place: int) -> Calculation:
        """Return the calculation with what one candidate chooses among its given values."""
        origin = ValueOrigin("candidate", f"{place + 1} of {len(self.candidates)}")
        own = ("project file", "schedule")
        values = (replace(v, origin=origin) if v.origin.kind in own else v for v in self.candidates[place].values)
        chosen = {value.given.name: value for value in values}
        known = {value.given.name: value for value in self.given} | chosen
        given = tuple(known[one.name] for one in self.template.body.given)
        return replace(self, given=given, candidates=(), pinned=-1)


@dataclass(frozen=True, slots=True)
class Assumption:
    """An entry of the project's assumption register."""

    says: str
    to_be_verified: bool
    by: str
    span: Span


@dataclass(frozen=True, slots=True)
class Disposition:
    """The engineer's word on a check or limit state."""

    #: 'B14.shear' or '' ; limit state 'S2 vibration' or ''
    check: str
    limit_state: str
    says: str
    #: place of the check or limit state named
    span: Span


@dataclass(frozen=True, slots=True)
class Issue:
    """A row of the revision record."""

    number: str
    date: str
    why: str


@dataclass(frozen=True, slots=True)
class Project:
    """The header, criteria and calculations of a package."""

    title: str
    number: str
    address: str
    client: str
    permit: str
    office: str
    contact: str
    status: str
    date: str  # ISO
    paper: Literal["letter", "a4"]
    system: System
    #: ('adopted code', 'IBC 2024, no local amendments listed') and the like, in order
    codes: tuple[tuple[str, str], ...]
    amendments: str
    #: code name: year, for choosing editions
    editions: tuple[tuple[str, str], ...]
    criteria: tuple[tuple[str, str], ...]
    #: (mark, ((property, amount text), …))
    materials: tuple[tuple[str, tuple[tuple[str, str], ...]], ...]
    assumptions: tuple[Assumption, ...]
    elsewhere: tuple[tuple[str, str], ...]
    dispositions: tuple[Disposition, ...]
    issues: tuple[Issue, ...]
    #: files read, in order, for the input echo
    files: tuple[Source, ...]
    #: where another edition was asked for to compare with: what the adopted code refers to instead of it, or ''
    foreign: str = ""

    @property
    def last_issue(self) -> Issue:
        """The last row of the revision record; 1 of the project's date where it has none."""
        return self.issues[-1] if self.issues else Issue("1", self.date, "")


@dataclass(frozen=True, slots=True)
class Inputs:
    """Everything a run is given, parsed and typed."""

    project: Project
    #: calculations that were read without a problem
    calculations: tuple[Calculation, ...]
    #: marks of the others; a link to one of them is no further problem
    poisoned: frozenset[str]


@dataclass(frozen=True, slots=True)
class Expected:
    """One expectation of a case: a value within a tolerance, a word, or the outcome of a check."""

    #: symbol path or check name
    name: str
    value: Amount | str | None
    tolerance: Amount | None
    #: 'OK', 'NG', 'not applicable', 'not evaluated' for a check; '' for a value
    outcome: str
    source: str
    span: Span


@dataclass(frozen=True, slots=True)
class Case:
    """Given values with what an outside source says of them."""

    name: str
    calculation: Calculation
    expected: tuple[Expected, ...]
    #: words of the requirement it must stop at, '' for none
    stops: str
    span: Span


@dataclass(frozen=True, slots=True)
class Reason:
    """Why no case reaches something of a template, in its author's words."""

    #: the name of the thing, as `lint` tells it
    what: str
    because: str
    span: Span


@dataclass(frozen=True, slots=True)
class CaseFile:
    """The cases beside a template, and the reasons for what they leave out."""

    cases: tuple[Case, ...]
    reasons: tuple[Reason, ...]
