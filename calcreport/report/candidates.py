"""The candidates of a calculation as a table: what each chooses, its worst check or why it stopped, which is used.

A calculation as told in, blocks out; and the headline where the pinned candidate is no longer the one to take.
"""

from __future__ import annotations

from calcreport.calculate.model import Candidate, GivenPairs, GivenRows, GivenValue, Selection, Tried, Worked
from calcreport.report.digits import number_text
from calcreport.report.forms import CalculationForms, ratio_figure
from calcreport.report.governing import governing
from calcreport.report.items import SayChoice
from calcreport.report.model import Block, Column, Emphasis, Paragraph, SourceLane, Strong, Table, TableRow, Words
from calcreport.report.told import Told


def candidate_blocks(item: SayChoice, told: Told) -> tuple[Block, ...]:
    """Return the table of those worked, and what the sheet has to say of the one used."""
    selection = item.selection
    chosen = selection.candidates[0].values
    columns = [Column(("no.",), "right"), *(Column(_heading(value, told)) for value in chosen)]
    columns += [Column(("worst check",), stretch=1.0), Column(("ratio",), "right"), Column(("outcome",), "right")]
    rows = tuple(_row(one, selection, told.forms) for one in sorted(selection.tried, key=lambda one: one.place))
    title: Words = ("candidates, in the engineer's order of preference",)
    table = Table(tuple(columns), rows, title, item.number, told.anchor(item.number), SourceLane("project file"))
    return (table, *_remarks(selection))


def _heading(value: GivenValue | GivenRows | GivenPairs, told: Told) -> Words:
    planned = next(one for one in told.worked.plan.givens if one.given.name == value.given.name)
    return (told.shared.symbol(planned.slot),) if planned.slot >= 0 else (value.given.name,)


def _row(one: Tried, selection: Selection, forms: CalculationForms) -> TableRow:
    used = one.place == selection.used
    worked = forms.worked if used else one.worked
    check = governing(worked)
    ratio, words = "", worked.stop.told if worked.stop else ""
    if check is not None and not worked.stop:
        own = ratio_figure(check.ratio, ok=check.verdict == "OK") if check.ratio is not None else None
        figure = forms.ratio(check) if used else own
        ratio, words = number_text(figure) if figure else "", check.line.name
    outcome = "stopped" if worked.stop else worked.verdict
    cells = (f"{one.place + 1}", *selection.candidates[one.place].texts, words, ratio, outcome)
    emphasis: Emphasis = "governing" if used and worked.verdict == "OK" else "loud" if used else ""
    return TableRow(tuple((cell,) for cell in cells), emphasis)


def _remarks(selection: Selection) -> tuple[Block, ...]:
    used, last = selection.used + 1, len(selection.candidates)
    if selection.has_moved:
        return (Paragraph((Strong("Pinned selection: "), moved_words(selection), "."), "caution"),)
    if selection.first < 0:
        words = f"none of the {last} candidates meets every check; number {used} is the nearest, and is worked here."
        return (Paragraph((Strong("No selection: "), words), "caution"),)
    rest = f"; those after number {used} are not worked" if used < last and not selection.pinned else ""
    how = "pinned, and it is" if selection.pinned else "used:"
    return (Paragraph((f"Number {used} is {how} the first that meets every check and stops nowhere{rest}.",), "note"),)


def moved_words(selection: Selection) -> str:
    """Return what a pinned candidate is, and which would be taken now: '3#8 is pinned; first to serve is now 4#8'."""
    pinned = _words(selection.candidates[selection.used])
    if selection.first < 0:
        return f"{pinned} is pinned, and no candidate meets every check now"
    first = _words(selection.candidates[selection.first])
    return f"{pinned} is pinned, and the first to meet every check is now {first}"


def _words(candidate: Candidate) -> str:
    return ", ".join(f"{name} {text}" for name, text in candidate.named)


def headlines(calculations: tuple[Worked, ...]) -> tuple[tuple[str, str], ...]:
    """Return (mark, words) for every pinned candidate that is no longer the one to take."""
    found = []
    for worked in calculations:
        if worked.selection is not None and worked.selection.has_moved:
            found.append((worked.calculation.mark, moved_words(worked.selection)))
    return tuple(found)
