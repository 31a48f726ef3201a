"""What a package says, in order: blocks of words, lines, tables and figures; formulas as trees.

Nothing here knows pages, fonts or points. Made by `report.compose`, laid out by `layout`.
Kept in one: records that are read together.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

from calcreport.report.formula_model import (
    Accent as Accent,
)
from calcreport.report.formula_model import (
    Big as Big,
)
from calcreport.report.formula_model import (
    Fence as Fence,
)
from calcreport.report.formula_model import (
    Formula as Formula,
)
from calcreport.report.formula_model import (
    Fraction as Fraction,
)
from calcreport.report.formula_model import (
    Letters as Letters,
)
from calcreport.report.formula_model import (
    Operator as Operator,
)
from calcreport.report.formula_model import (
    Reference as Reference,
)
from calcreport.report.formula_model import (
    Root as Root,
)
from calcreport.report.formula_model import (
    Row as Row,
)
from calcreport.report.formula_model import (
    Script as Script,
)
from calcreport.report.formula_model import (
    Space as Space,
)
from calcreport.report.formula_model import (
    Stack as Stack,
)
from calcreport.report.formula_model import (
    Strong as Strong,
)
from calcreport.report.formula_model import (
    Words as Words,
)

# ---------------------------------------------------------------- blocks


@dataclass(frozen=True, slots=True)
class SourceLane:
    """What stands right of a line: where it comes from."""

    #: citation such as '22.2.2.4.1', 'statics', 'project file', or '' for none
    citation: str
    #: lines each value came from, as references; printed on the second row
    comes_from: tuple[Reference, ...] = ()


@dataclass(frozen=True, slots=True)
class Heading:
    """A title inside a calculation or a front sheet; level 1 is the larger."""

    text: str
    level: int = 2
    #: headings that follow it at once, in its row where the lane holds them
    then: tuple[str, ...] = ()
    #: the condition the lines below it go by, in the same row
    since: Words = ()


@dataclass(frozen=True, slots=True)
class Paragraph:
    """Running text; a caution is set off, a note is quiet."""

    words: Words
    kind: Literal["plain", "note", "caution", "assumption"] = "plain"
    source: SourceLane = SourceLane("")


@dataclass(frozen=True, slots=True)
class GivenRow:
    """One given value: line number, symbol, meaning, value with unit, where it came from."""

    number: int
    anchor: str
    #: an empty Row where the value has no letters
    symbol: Formula
    says: Words
    value: Formula
    source: Words
    #: changed since the last issue: the revision to print in the margin, or ''
    delta: str = ""


@dataclass(frozen=True, slots=True)
class Givens:
    """The table of given values at the start of a calculation, a tick ring each."""

    rows: tuple[GivenRow, ...]


@dataclass(frozen=True, slots=True)
class Line:
    """One numbered line: words, then symbol = formula = substitution = result.

    `formula`, `substitution` and `coherent` are right-hand sides without their equals sign; any may
    be None when it would repeat its neighbour. `result` is set right-aligned at the result edge.
    """

    number: int
    anchor: str
    says: Words
    symbol: Formula
    formula: Formula | None
    substitution: Formula | None
    #: result in the units of the substituted values, where the declared unit differs
    coherent: Formula | None
    result: Formula
    source: SourceLane
    #: the condition that chose this form, with numbers, printed above the formula; or None
    because: Formula | None = None
    delta: str = ""


@dataclass(frozen=True, slots=True)
class Lines:
    """Short lines of one number that follow one another: values handed on, words, constants."""

    number: int
    anchor: str
    lines: tuple[Line, ...]
    source: SourceLane
    delta: str = ""


@dataclass(frozen=True, slots=True)
class Statement:
    """A numbered condition or requirement that gives no value: `f_y <= 80 ksi: 60 <= 80`."""

    number: int
    anchor: str
    says: Words
    formula: Formula
    source: SourceLane
    delta: str = ""
    #: further forms of a formula stated once for many rows: `otherwise  b = b_w`
    others: tuple[Statement, ...] = ()


@dataclass(frozen=True, slots=True)
class CheckLine:
    """One check: `|M_u| / phi M_n = 512.6 / 562`, ratio and verdict."""

    number: int
    anchor: str
    name: str
    formula: Formula
    substitution: Formula | None
    #: '0.912', or '' where the check is a bare condition or not evaluated
    ratio: str
    verdict: Literal["OK", "NG", "not evaluated", "not applicable"]
    #: a reason in words: why not applicable, why NG without a division; or ()
    reason: Words
    source: SourceLane
    delta: str = ""


@dataclass(frozen=True, slots=True)
class ResultBox:
    """The result to use, ruled round: `use` lines."""

    number: int
    anchor: str
    words: Words
    source: SourceLane
    delta: str = ""


@dataclass(frozen=True, slots=True)
class Column:
    """One column of a table."""

    heading: Words
    align: Literal["left", "right", "centre"] = "left"
    #: share of the width left over after natural widths; 0 keeps the natural width
    stretch: float = 0.0


#: how a row stands out: the governing one, or one that needs eyes
Emphasis: TypeAlias = Literal["", "governing", "loud"]


@dataclass(frozen=True, slots=True)
class TableRow:
    """Cells of one row; a governing row is set in the heavier face, a loud one is an NG."""

    cells: tuple[Words, ...]
    emphasis: Emphasis = ""
    anchor: str = ""
    delta: str = ""
    #: words set under the heading row where the row runs on from another sheet: '4, continued'. Such a row is long,
    #: may part between its lines, and keeps the line ends of its texts; '' for a row that stays whole
    over: str = ""


@dataclass(frozen=True, slots=True)
class Table:
    """A table; its heading row repeats on every sheet it runs over."""

    columns: tuple[Column, ...]
    rows: tuple[TableRow, ...]
    title: Words = ()
    #: line number in the number lane, 0 for none
    number: int = 0
    anchor: str = ""
    source: SourceLane = SourceLane("")


@dataclass(frozen=True, slots=True)
class Listing:
    """Lines of a text file as read, numbered, small and close; a line's leading spaces are kept."""

    lines: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Bar:
    """A group of like bars in one layer of a section, lengths in millimetres."""

    count: int
    diameter: float
    #: from the face named top to the bar centres
    depth: float
    callout: str


@dataclass(frozen=True, slots=True)
class SectionFigure:
    """A rectangular section with its bars, strain and stress diagrams; all lengths in millimetres.

    Depths run from the compression face. Labels are printed as given (same figures as the lines).
    """

    width: float
    depth: float
    cover: float
    stirrup_diameter: float
    bars: tuple[Bar, ...]
    #: 'top' or 'bottom': the face that is in tension
    tension_face: Literal["top", "bottom"]
    neutral_axis: float | None
    block_depth: float | None
    #: printed labels by name: 'b', 'h', 'd', 'c', 'a', 'strain_top', 'strain_steel', 'stress', 'steel'
    labels: tuple[tuple[str, Formula], ...]
    alternative: str  # a sentence for readers who cannot see it


@dataclass(frozen=True, slots=True)
class BeamLoad:
    """A load on a span figure: uniform from `start` to `end`, or a point load (start == end)."""

    start: float
    end: float
    #: intensity relative to the largest of its kind, 0..1, for the height of the arrows
    size: float
    label: Formula


@dataclass(frozen=True, slots=True)
class SpanFigure:
    """A line member with supports and loads and its moment diagram, to scale along the span.

    `span` and positions are in metres; `moments` are (position, moment) in any one unit, sagging
    positive, drawn on the tension side.
    """

    span: float
    #: (position, 'pinned' | 'roller' | 'fixed')
    supports: tuple[tuple[float, str], ...]
    loads: tuple[BeamLoad, ...]
    moments: tuple[tuple[float, float], ...]
    #: (position, label) printed at the diagram
    moment_labels: tuple[tuple[float, Formula], ...]
    span_label: Formula
    alternative: str


#: (position in metres, value in any one unit)
Curve: TypeAlias = tuple[tuple[float, float], ...]


@dataclass(frozen=True, slots=True)
class StrengthFigure:
    """Demand against strength along a member, both to one scale."""

    #: ends of the base line, metres
    start: float
    end: float
    demands: tuple[Curve, ...]
    strengths: tuple[Curve, ...]
    #: (position, value it stands at, label)
    demand_labels: tuple[tuple[float, float, Formula], ...]
    strength_labels: tuple[tuple[float, float, Formula], ...]
    #: (position, label) under the drawing
    ticks: tuple[tuple[float, Formula], ...]
    #: positive values stand below the base line, as moments on the tension side
    down: bool
    alternative: str


@dataclass(frozen=True, slots=True)
class EnvelopeDiagram:
    """Greatest and least of a force along a member."""

    #: greatest, least
    curves: tuple[Curve, Curve]
    #: (position, value it stands at, label, share of its width left of there: a label stays within its span)
    labels: tuple[tuple[float, float, Formula, float], ...]
    #: what it shows, with its unit
    title: Formula
    #: positive values stand below the base line
    down: bool


@dataclass(frozen=True, slots=True)
class EnvelopeFigure:
    """A member on supports with its envelopes, to scale along it; positions in metres from its left end."""

    #: (position, 'pinned' | 'fixed' | 'spring' | 'free')
    supports: tuple[tuple[float, str], ...]
    #: (start, end, length as printed)
    spans: tuple[tuple[float, float, Formula], ...]
    length_unit: Formula
    shears: EnvelopeDiagram
    moments: EnvelopeDiagram
    alternative: str


Figure: TypeAlias = SectionFigure | SpanFigure | StrengthFigure | EnvelopeFigure


@dataclass(frozen=True, slots=True)
class FigureBlock:
    """A figure; `beside` sets it right in the work lane with the following lines left of it."""

    figure: Figure
    beside: bool = True
    caption: Words = ()


Block: TypeAlias = (
    Heading | Paragraph | Givens | Line | Lines | Statement | CheckLine | ResultBox | Table | Listing | FigureBlock
)


# ---------------------------------------------------------------- parts


@dataclass(frozen=True, slots=True)
class TitleFacts:
    """What the title block at the foot of a part's sheets says besides the sheet number."""

    project: str
    project_number: str
    #: 'B12  Level 2 beam, grid B, 2 to 5' or 'CHECK SUMMARY'
    subject: str
    #: 'ACI 318-19 (in.-lb)' or ''
    code: str
    #: 'FOR REVIEW'
    status: str
    #: 'not for construction' or ''
    status_note: str
    #: 'rev 1'
    revision: str
    #: last changed, such as '2 Nov 2026'
    date: str
    #: 'input 3fa2 81c0' for a calculation, '' on the fronts
    fingerprint: str
    #: 'calcreport 0.1.0'
    program: str
    #: words over the frame of a sheet that is out of use, and how many strokes cross it
    banner: str = ""
    strokes: int = 0


@dataclass(frozen=True, slots=True)
class CoverFacts:
    """Everything the cover says; laid out as ruled cells by `layout.cover`."""

    title: str
    #: lines of the project header: address, number, client, permit no. (blank)
    header: tuple[str, ...]
    issue: str
    date: str
    status: str
    status_note: str
    #: (marks, words): what this package holds
    scope: tuple[tuple[str, str], ...]
    #: (what, where it is): what this package leaves to others
    elsewhere: tuple[tuple[str, str], ...]
    #: lines of the basis: adopted code, material code, loads, criteria
    basis: tuple[str, ...]
    #: the result in one line, and further lines (open assumptions, changes)
    result: tuple[Words, ...]
    result_is_loud: bool
    cautions: tuple[str, ...]
    #: words inside the empty seal area's foot, outside the clear square
    seal_words: str
    office: tuple[str, ...]
    fingerprint: str
    #: framed heavily: the package is out of use
    status_is_loud: bool = False


@dataclass(frozen=True, slots=True)
class IndexEntry:
    """One row of the index; sheets are found by the layout."""

    mark: str
    title: str
    part: str  # Part.mark it leads to
    #: 'NG' marks a part that holds a failing check; '' otherwise
    flag: str
    revision: str
    date: str


@dataclass(frozen=True, slots=True)
class Index:
    """The index of sheets: the layout fills in sheet numbers."""

    entries: tuple[IndexEntry, ...]


@dataclass(frozen=True, slots=True)
class Part:
    """Sheets numbered together: a calculation, or one of the fronts and appendices."""

    #: 'B12', 'SUMMARY', 'A'; printed as 'B12-2' of 5
    mark: str
    title: str
    kind: Literal["cover", "index", "front", "calculation", "appendix"]
    facts: TitleFacts
    blocks: tuple[Block, ...] = ()
    cover: CoverFacts | None = None
    index: Index | None = None
    #: words of the strip under the top frame edge: '1 CHECK NG IN THIS CALCULATION: LINE 31, SHEAR'
    strip: str = ""
    #: revision whose changed lines are clouded; '' clouds every line with a delta
    clouded: str = ""


@dataclass(frozen=True, slots=True)
class Report:
    """The whole package in order, before any page exists."""

    title: str
    author: str  # office name for the document information
    subject: str
    language: str  # 'en-US'
    date: str  # ISO date of the issue, for document information
    paper: Literal["letter", "a4"]
    parts: tuple[Part, ...]
