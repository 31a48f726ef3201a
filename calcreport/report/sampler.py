"""The reviewer's sampler: on one sheet the lines of a package that tell most, each as it stands on its own sheet.

A composed package, its margins and the sheet of every line in; one part out. What is taken is decided by a rule that
the sheet prints; how many lines, by what fits. Lines repeat those of the calculations block for block.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from calcreport.calculate.model import Margin, WorkedCheck, WorkedGives, WorkedProject
from calcreport.core.expression import names
from calcreport.core.units import ONE
from calcreport.report.below import severity
from calcreport.report.calculation import Composer
from calcreport.report.compose import Composed, title_facts
from calcreport.report.digits import Figure, make_figure, rounded
from calcreport.report.fronts import counted
from calcreport.report.governing import worst_checks
from calcreport.report.items import SayCheck, SayLine
from calcreport.report.model import (
    Block,
    CheckLine,
    Column,
    Heading,
    Index,
    IndexEntry,
    Line,
    Paragraph,
    Part,
    Reference,
    Report,
    SourceLane,
    Strong,
    Table,
    TableRow,
    Words,
)
from calcreport.report.notation import Notation, show_figure
from calcreport.report.premises import Premises
from calcreport.report.told import SymbolForms, Told

MARK, TITLE = "SAMPLER", "Reviewer's sampler"
#: lines before each check that give what it compares
LEADING = 2
#: most significant digits a value is printed with at which a verdict changes
MOST = 8


@dataclass(frozen=True, slots=True)
class Size:
    """How much the sheet holds: checks by ratio, checks by margin, premises."""

    checks: int
    margins: int
    premises: int


#: from the fullest down; the first that keeps to one sheet is taken
SIZES = (
    *(Size(most, most, 60) for most in range(9, 3, -1)),
    *(Size(4, 4, premises) for premises in (30, 20, 12, 8)),
    Size(3, 3, 6), Size(2, 2, 4), Size(1, 1, 2), Size(1, 1, 0), Size(0, 0, 0),
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class Sampled:
    """What a sampler is made of."""

    project: WorkedProject
    composed: Composed
    #: the narrowest margin of each check with its mark, the narrowest first
    margins: tuple[tuple[str, Margin], ...]
    #: calculations whose values were not moved
    unmoved: tuple[str, ...]
    #: sheet by the anchor of a line
    sheets: dict[str, str]
    #: lines and sheets are linked; not where the sheet stands alone in a file
    linked: bool


def sampler(sampled: Sampled, size: Size) -> Part:
    """Return the part, as full as the size says."""
    writer = _Sampler(sampled)
    words: Words = (
        "Lines of this package taken by rule, each as it stands on its own sheet, with that sheet's line numbers: its "
        "printed inputs, put into its printed formula, give its printed result. The rule says nothing of the lines "
        "left out.",
    )
    blocks = [Paragraph(words, "note"), *writer.checks(size.checks), *writer.narrow(size.margins)]
    premises = Premises(sampled.project, sampled.composed, writer.reference, writer.sheet)
    blocks += premises.blocks(size.premises)
    return Part(MARK, TITLE, "front", title_facts(sampled.project, TITLE), tuple(blocks))


def sampler_alone(sampled: Sampled, part: Part) -> Report:
    """Return a report of the sampler and nothing else."""
    whole = sampled.composed.report
    return replace(whole, title=f"{whole.title}: {TITLE}", subject=f"{TITLE}, {sampled.project.project.number}",
                   parts=(part,))  # fmt: skip


def with_sampler(report: Report, part: Part) -> Report:
    """Return a package with the sampler after its check summary, and in its index."""
    entry = IndexEntry(part.mark, part.title, part.mark, "", part.facts.revision, part.facts.date)
    parts: list[Part] = []
    for one in report.parts:
        if one.index is not None:
            one = replace(one, index=Index(_after_summary(one.index.entries, entry)))
        parts += [one, part] if one.mark == "SUMMARY" else [one]
    return replace(report, parts=tuple(parts))


def _after_summary(entries: tuple[IndexEntry, ...], entry: IndexEntry) -> tuple[IndexEntry, ...]:
    place = next(place for place, one in enumerate(entries, 1) if one.part == "SUMMARY")
    return (*entries[:place], entry, *entries[place:])


class _Sampler:
    """Writes one sampler."""

    def __init__(self, sampled: Sampled) -> None:
        self.sampled, self.composed, self.project = sampled, sampled.composed, sampled.project
        self.worked = {worked.calculation.mark: worked for worked in sampled.project.calculations}
        self._composers: dict[str, Composer] = {}

    def composer(self, mark: str) -> Composer:
        """Return what composes lines of a calculation."""
        if mark not in self._composers:
            script = self.composed.scripts[mark]
            shared = SymbolForms(Notation(script.worked.plan.slots))
            self._composers[mark] = Composer(Told(script, self.composed.forms, self.composed.scripts, shared), {})
        return self._composers[mark]

    def reference(self, mark: str, number: int) -> str | Reference:
        """Return `B1-2, line 31`."""
        anchor = f"{mark}.{number}"
        words = f"{self.sampled.sheets.get(anchor, mark)}, line {number}"
        return Reference(words, anchor) if self.sampled.linked else words

    def sheet(self, mark: str) -> str | Reference:
        """Return a front sheet by its mark."""
        return Reference(mark, f"{mark}-1") if self.sampled.linked else mark

    def lead(self, mark: str, number: int, check: str) -> Paragraph:
        """Return the words over an excerpt: calculation, check, where it stands."""
        title = f"  {self.worked[mark].calculation.title}: {check}.  "
        return Paragraph((Strong(mark), title, self.reference(mark, number), ":"), "plain")

    def own(self, block: Block) -> Block:
        """Return a line of a calculation for this sheet: nothing leads to it here, and it leads on only if linked."""
        if not isinstance(block, Line | CheckLine):
            return block
        lane = block.source
        if not self.sampled.linked:
            lane = SourceLane(lane.citation, tuple(Reference(one.text, "") for one in lane.comes_from))
        return replace(block, anchor="", source=lane)

    # -------------------------------------------------------- highest ratios

    def checks(self, most: int) -> list[Block]:
        """Return the checks of the highest ratios, each with the lines that give what it compares."""
        told = [
            (mark, item)
            for mark, script in self.composed.scripts.items()
            for item in script.items
            if isinstance(item, SayCheck) and item.worked.verdict in ("OK", "NG")
        ]
        ranked = sorted(told, key=lambda pair: _rank(pair[1].worked), reverse=True)
        taken = ranked[:most]
        if not taken:
            return []
        many = "The highest ratio" if len(taken) == 1 else f"The {len(taken)} highest ratios"
        words = f"{many} among {counted(len(told), 'check')} set out in full on their sheets; NG before any other."
        found: list[Block] = [Heading("Highest ratios", 2), Paragraph((words,), "note")]
        for mark, item in taken:
            found.append(self.lead(mark, item.number, item.worked.line.name))
            composer = self.composer(mark)
            found += [self.own(composer.line(line)) for line in self.leading(mark, item)]
            found.append(self.own(composer.checks.check(item)))
        return found

    def leading(self, mark: str, item: SayCheck) -> list[SayLine]:
        """Return the lines told in full that give the two sides of a check."""
        by = item.worked.by
        if by is None:
            return []
        values, rows = self.worked[mark].values, dict(item.worked.open)
        wanted = {
            (name.slot, tuple(rows[index] for index in values.sets[name.slot]))
            for side in (by.test.left, by.test.right)
            for name in names(side)
            if name.slot >= 0 and all(index in rows for index in values.sets[name.slot])
        }
        lines = [
            line for line in self.composed.scripts[mark].items
            if isinstance(line, SayLine) and _place(line.worked) in wanted
        ]  # fmt: skip
        return lines[-LEADING:]

    # -------------------------------------------------------- least margins

    def narrow(self, most: int) -> list[Block]:
        """Return the checks whose verdict a given value flips soonest."""
        taken = self.sampled.margins[:most]
        if not taken:
            return []
        many = "The check" if len(taken) == 1 else f"The {len(taken)} checks"
        words = (
            f"{many} of the least margin among {counted(len(self.sampled.margins), 'check')} that one given value "
            "flips: the value is moved alone, everything else as given, until the verdict changes; of each check its "
            f"narrowest value.{self.unmoved()}"
        )
        columns = (
            Column(("Where",)),
            Column(("Check",), stretch=1.0),
            Column(("Given",)),
            Column(("As given",), "right"),
            Column(("Changes at",), "right"),
            Column(("Moved by, %",), "right"),
        )
        rows = tuple(self.margin(mark, margin) for mark, margin in taken)
        return [Heading("Least margin", 2), Paragraph((words,), "note"), Table(columns, rows)]

    def unmoved(self) -> str:
        """Return a sentence on the calculations in which no value was moved, or ''."""
        marks = ", ".join(self.sampled.unmoved)
        return f" Not moved, for their many lines or members: the values of {marks}." if marks else ""

    def margin(self, mark: str, margin: Margin) -> TableRow:
        """Return one margin; how far the value moves follows from the two numbers printed."""
        told = self.composer(mark).told
        unit = told.slots[margin.slot].symbol.unit or ONE
        given = told.forms.figure(margin.slot, ())
        assert margin.nearest is not None
        flips = flipping_figure(given, margin.nearest / unit.size, margin.value / unit.size)
        check = next(c for c in worst_checks(self.worked[mark]) if c.line.name == margin.check)
        number = self.composed.scripts[mark].check_line[id(check)]
        name = margin.check + (" NG" if check.verdict == "NG" else "")
        cells: tuple[Words, ...] = (
            (self.reference(mark, number),),
            (name,),
            (told.shared.symbol(margin.slot),),
            (told.value(margin.slot, ()),),
            (show_figure(flips, unit),),
            (share_words(margin, given, flips),),
        )
        return TableRow(cells)


def _rank(check: WorkedCheck) -> tuple[bool, float]:
    return check.verdict == "NG", severity(check)


def _place(worked: WorkedGives) -> tuple[int, tuple[int, ...]]:
    return worked.line.slot, worked.key


def flipping_figure(given: Figure, nearest: float, value: float) -> Figure:
    """Return the printed form of the value at which a verdict changes.

    It has digits enough that the share printed beside it, taken from the two printed numbers, is the true one.
    """
    figure = make_figure(nearest, given.size / 10.0**given.exponent)
    true = 100 * (nearest - value) / abs(value)
    places = _places(true)
    while len(str(abs(figure.mantissa))) < MOST and rounded(_moved(given, figure), places) != rounded(true, places):
        figure = replace(figure, places=figure.places + 1)
    return figure


def _moved(given: Figure, flips: Figure) -> float:
    """Return how far a value moves in percent, from printed numbers."""
    return 100 * (flips.printed - given.printed) / abs(given.printed)


def _places(share: float) -> int:
    """Return the decimals that show a share of percent: one, more where it would read as nothing."""
    return next((places for places in range(1, 5) if rounded(share, places) != 0.0), 1)


def share_words(margin: Margin, given: Figure, flips: Figure) -> str:
    """Return how far a value moves in percent; in words where it stands at the very limit."""
    assert margin.nearest is not None
    share = _moved(given, flips)
    places = _places(share)
    if rounded(share, places) == 0.0:
        return "any more" if margin.nearest > margin.value else "any less"
    return f"{rounded(share, places):+.{places}f}".replace("-", "−")
