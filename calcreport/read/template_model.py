"""Templates as read: symbols, given declarations and lines with parsed formulas, settled for one system and year.

Every leaf has its place. Names inside formulas are not bound yet; that is the plan's work.
Kept in one: records that are read together.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal, TypeAlias

from calcreport.core.expression import Condition, Expression, Name
from calcreport.core.methods import AGAIN, APART
from calcreport.core.quantity import Amount
from calcreport.core.source import Citation, Source, Span
from calcreport.core.units import Unit

System: TypeAlias = Literal["us", "si"]
SYSTEMS: tuple[System, ...] = ("us", "si")


@dataclass(frozen=True, slots=True)
class Symbol:
    """The notation of one value: its meaning, unit and display."""

    name: str
    #: display form as written under `shows`, '' to derive it from the name
    shows: str
    says: str
    kind: Literal["quantity", "count", "word"]
    #: unit of a quantity; None for a word
    unit: Unit | None
    #: the closed list of a word value
    words: tuple[str, ...]
    #: fewest decimals printed, or None
    places: int | None
    #: part of an inch to which a length is printed in feet and inches too, or None
    inches: Fraction | None = None
    #: `places` decimals and no more: what lies beyond them says nothing
    fixed: bool = False


@dataclass(frozen=True, slots=True)
class Range:
    """Permitted values: `> 0`, `[0.5, 1.0]`, `(0, 8 in]`."""

    low: Amount | None
    high: Amount | None
    low_open: bool
    high_open: bool
    text: str
    span: Span

    def words(self, name: str) -> str:
        """Return the range as a statement about a symbol: 'b > 0', 'b in (0, 8 in]'."""
        return f"{name} {self.text}" if self.text[0] in "<>" else f"{name} in {self.text}"

    def holds(self, value: Fraction) -> bool:
        """Tell whether an exact value in base units lies inside."""
        if self.low is not None and (value < self.low.value or (value == self.low.value and self.low_open)):
            return False
        return self.high is None or value < self.high.value or (value == self.high.value and not self.high_open)


@dataclass(frozen=True, slots=True)
class Given:
    """A value or set the project must hand to a template."""

    name: str
    kind: Literal["value", "bars", "spaced bars", "rows", "pairs"]
    #: None for rows; for bars a symbol of the callout itself
    symbol: Symbol | None
    says: str
    range: Range | None
    #: worth of `none`: an amount or word; 'absent' where the symbol may be missing; None where not allowed
    if_none: Amount | str | None
    #: material role it is read from, '' for none, and the property's name there
    material: str
    property: str
    #: criterion of the project it is read from
    criterion: Name | None
    #: columns of rows
    columns: tuple[Given, ...]
    #: permitted row names, stems end in `*`; () for any
    row_names: tuple[str, ...]
    least: int
    most: int
    #: sets a value is given over
    over: tuple[Name, ...]
    #: values read off a bar callout: (symbol, 'area' | 'diameter' | 'count' | 'spacing')
    gives: tuple[tuple[Symbol, str], ...]
    span: Span

    def elsewhere(self) -> bool:
        """Whether a project need not state it beside the template."""
        return bool(self.material) or self.criterion is not None

    def names(self) -> tuple[str, ...]:
        """Return the names it brings along: its own, its columns', and those read off callouts."""
        columns = tuple(name for column in self.columns for name in column.names())
        return (self.name, *(symbol.name for symbol, _ in self.gives), *columns)


@dataclass(frozen=True, slots=True)
class Text:
    """A heading, note, caution, assumption or result box; names show values."""

    kind: Literal["heading", "note", "caution", "assume", "use"]
    pieces: tuple[str | Name, ...]
    cite: Citation | None
    span: Span
    #: limit states that a caution says are left out where it is reached
    leaves: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Arm:
    """One case of a formula: the condition (None: otherwise) and the formula."""

    when: Condition | None
    #: None where it could not be read
    formula: Expression | None


@dataclass(frozen=True, slots=True)
class Gives:
    """A line that gives one value."""

    symbol: Symbol
    #: those that could be read
    arms: tuple[Arm, ...]
    cite: Citation
    #: the equation as the code states it, left and right, where the formula rearranges it
    as_cited: tuple[Expression, Expression] | None
    span: Span
    name_span: Span


@dataclass(frozen=True, slots=True)
class BranchArm:
    """One arm of a block of lines."""

    when: Condition | None
    lines: tuple[Line, ...]
    #: what the arm is for, in words; where one arm of a block has them, also '', they stand in place of its conditions
    says: str | None
    span: Span


@dataclass(frozen=True, slots=True)
class Branches:
    """Lines of the first arm that holds."""

    arms: tuple[BranchArm, ...]
    span: Span


@dataclass(frozen=True, slots=True)
class MadeColumn:
    """A column of a set made here; `over` names the set its cells map, `other` is their `else`."""

    symbol: Symbol
    over: Name | None
    other: Expression | None
    span: Span


@dataclass(frozen=True, slots=True)
class Cell:
    """A cell of a made row: one formula, or one for each named row of the set it maps."""

    formula: Expression | None
    mapped: tuple[tuple[Name, Expression], ...]
    span: Span


@dataclass(frozen=True, slots=True)
class Entry:
    """One listed row, or one for each pairing of rows under `for`."""

    #: row name with {variable} parts
    name: Name
    #: (variable, names that fit): `for: {r: L_r|R}`
    pairing: tuple[tuple[Name, tuple[Name, ...]], ...]
    cells: tuple[tuple[str, Cell], ...]
    when: Condition | None
    span: Span


@dataclass(frozen=True, slots=True)
class Spaced:
    """Rows at equal distances between two bounds, both among them."""

    low: Expression
    high: Expression
    count: int


@dataclass(frozen=True, slots=True)
class Rows:
    """A set made here: rows listed, read from a table beside the template, or spaced between two bounds."""

    name: str
    columns: tuple[MadeColumn, ...]
    entries: tuple[Entry, ...]
    says: str
    cite: Citation
    span: Span
    spaced: Spaced | None = None


@dataclass(frozen=True, slots=True)
class Each:
    """Lines once for every row of a set."""

    rows: Name
    lines: tuple[Line, ...]
    table: tuple[Name, ...]
    show: Literal["", "every", "first", "figure"]
    span: Span


@dataclass(frozen=True, slots=True)
class Unknown:
    """The value between two bounds for which both sides of an equation agree; the lines may depend on it."""

    symbol: Symbol
    low: Expression
    high: Expression
    left: Expression
    right: Expression
    lines: tuple[Line, ...]
    span: Span
    name_span: Span


@dataclass(frozen=True, slots=True)
class PartUse:
    """Another template's lines, or those of an entry of `parts`."""

    #: read for this system and year; None where it could not be read
    body: PartBody | None
    name: Name
    stem: str
    same: tuple[Name, ...]
    #: (its given, formula or word handed to it; None where not read)
    handed: tuple[tuple[Name, Expression | None], ...]
    span: Span


@dataclass(frozen=True, slots=True)
class Check:
    """Demand against capacity, or a condition."""

    name: str
    holds: Condition
    says: str
    cite: Citation
    span: Span


@dataclass(frozen=True, slots=True)
class Require:
    """A condition without which the calculation stops, no verdict given."""

    condition: Condition
    says: str
    cite: Citation
    #: printed only where it is not met
    quiet: bool
    span: Span


@dataclass(frozen=True, slots=True)
class Drawing:
    """A figure with what it is handed, by its own input names."""

    kind: Name
    #: None where a formula could not be read
    inputs: tuple[tuple[Name, Expression | None], ...]
    span: Span


@dataclass(frozen=True, slots=True)
class Broken:
    """Stands for what could not be read of a line: names it would give, and lines inside it that are whole."""

    #: `EVERY` among them where nobody can tell the names
    names: tuple[str, ...]
    lines: tuple[Line, ...]
    span: Span


#: stands for all names where it is not known which a part or line would have given
EVERY = "*"


@dataclass(frozen=True, slots=True)
class Output:
    """One of a method's outputs under our name: a value, a set, or a column of a set it makes."""

    name: Name
    output: Name
    #: None for a set, and where the method or the output is unknown
    symbol: Symbol | None


@dataclass(frozen=True, slots=True)
class Method:
    """Numerical analysis: its inputs by its own names, and the outputs taken."""

    method: Name
    #: None where a formula could not be read
    inputs: tuple[tuple[Name, Expression | None], ...]
    gives: tuple[Output, ...]
    stem: str
    cite: Citation
    span: Span
    #: our names of the outputs that are printed; None for all
    table: tuple[Name, ...] | None = None

    def names(self) -> tuple[str, ...]:
        """Return the names the line gives."""
        return tuple(f"{self.stem}.{one.name.name}" if self.stem else one.name.name for one in self.gives)


@dataclass(frozen=True, slots=True)
class Twin:
    """A value found once more by a method, and how far the two may be apart, relative."""

    name: Name
    method: Name
    #: None where a formula could not be read
    inputs: tuple[tuple[Name, Expression | None], ...]
    #: the method's output, where more than one could be meant
    output: Name | None
    within: Expression
    cite: Citation
    span: Span

    def names(self) -> tuple[str, ...]:
        """Return the names the line gives: the second value and the difference."""
        return f"{self.name.name}.{AGAIN}", f"{self.name.name}.{APART}"


Line: TypeAlias = (
    Text | Gives | Branches | Rows | Each | Unknown | PartUse | Check | Require | Drawing | Method | Twin | Broken
)


@dataclass(frozen=True, slots=True)
class PartBody:
    """A block of lines with a name space: a template file, or an entry of `parts`."""

    title: str
    given: tuple[Given, ...]
    lines: tuple[Line, ...]
    #: names a user may use; () for all
    gives: tuple[Name, ...]
    #: an entry of `parts` sees what is visible where it is used
    sees_user: bool
    covers: tuple[str, ...]
    span: Span
    #: names of givens that could not be read
    told: frozenset[str] = frozenset()
    #: the value that is to be least among candidates of one preference
    least: Name | None = None


@dataclass(frozen=True, slots=True)
class Template:
    """A template file settled for one unit system and one edition year."""

    #: path without ending: 'aci318/beam-flexure'
    name: str
    title: str
    code: str
    year: str
    system: System
    excludes: tuple[str, ...]
    body: PartBody
    source: Source
    #: every file it was read from: itself, parts, notation, bar tables
    files: tuple[Source, ...]
