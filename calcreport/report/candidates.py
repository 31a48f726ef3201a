"""The candidates of a calculation as a table: what each chooses, its worst check or why it stopped, which is used.

A calculation as told in, blocks out; and the headline where the pinned candidate is no longer the one to take.
"""

from __future__ import annotations

from calcreport.calculate.model import Candidate, Selection, Tried, Worked
from calcreport.report.digits import make_figure, number_text
from calcreport.report.forms import ratio_figure
from calcreport.report.governing import governing
from calcreport.report.items import SayChoice
from calcreport.report.model import Block, Column, Emphasis, Paragraph, SourceLane, Strong, Table, TableRow, Words
from calcreport.report.told import Told


def candidate_blocks(item: SayChoice, told: Told) -> tuple[Block, ...]:
    """Return the table of those worked, and what the sheet has to say of the one used."""
    selection = item.selection
    columns = [Column(("no.",), "right")]
    columns += [Column(("preference",), "right")] if selection.has_groups else []
    columns += [Column(_heading(name, told)) for name, _ in selection.candidates[0].named]
    columns += [Column(("worst check",), stretch=1.0), Column(("ratio",), "right")]
    columns += [told.column(selection.least)] if selection.has_groups else []
    columns += [Column(("outcome",), "right")]
    rows = tuple(_row(one, selection, told) for one in sorted(selection.tried, key=lambda one: one.place))
    says = f"; of one preference, the least {told.slots[selection.least].symbol.says}" if selection.has_groups else ""
    title: Words = (f"candidates, in the engineer's order of preference{says}",)
    table = Table(tuple(columns), rows, title, item.number, told.anchor(item.number), SourceLane("project file"))
    return (table, *_remarks(selection))


def _heading(name: str, told: Told) -> Words:
    slots = (one.slot for one in told.worked.plan.givens if one.given.name == name)
    slot = next(slots, -1)
    # a cell goes by its row and column: the table is short of room, and the set stands above it
    return (told.shared.symbol(slot),) if slot >= 0 else (name.partition(" ")[2] or name,)


def _row(one: Tried, selection: Selection, told: Told) -> TableRow:
    used, forms, candidate = one.place == selection.used, told.forms, selection.candidates[one.place]
    worked = forms.worked if used else one.worked
    check = governing(worked)
    ratio, words = "", worked.stop.told if worked.stop else ""
    if check is not None and not worked.stop:
        own = ratio_figure(check.ratio, ok=check.verdict == "OK") if check.ratio is not None else None
        figure = forms.ratio(check) if used else own
        ratio, words = number_text(figure) if figure else "", check.line.name
    outcome = "stopped" if worked.stop else worked.verdict
    cells: list[Words] = [(f"{one.place + 1}",)]
    cells += [(f"{candidate.preference + 1}",)] if selection.has_groups else []
    cells += [(text,) for text in (*dict(candidate.named).values(), words, ratio)]
    cells += [_least(one, selection, told)] if selection.has_groups else []
    emphasis: Emphasis = "governing" if used and worked.verdict == "OK" else "loud" if used else ""
    return TableRow((*cells, (outcome,)), emphasis)


def _least(one: Tried, selection: Selection, told: Told) -> Words:
    """Return the value wanted least of a candidate that meets every check; the others have none to compare."""
    if one.worked.verdict != "OK":
        return ("–",)
    if one.place == selection.used:
        return told.cell(selection.least, ())
    value, unit = one.worked.values.get(selection.least), told.slots[selection.least].symbol.unit
    assert isinstance(value, float) and unit is not None
    return (number_text(make_figure(value / unit.size, unit.size)),)


def _remarks(selection: Selection) -> tuple[Block, ...]:
    used, last = selection.used + 1, len(selection.candidates)
    if selection.has_moved:
        return (Paragraph((Strong("Pinned selection: "), moved_words(selection), "."), "caution"),)
    if selection.first < 0:
        words = f"none of the {last} candidates meets every check; number {used} is the nearest, and is worked here."
        return (Paragraph((Strong("No selection: "), words), "caution"),)
    tried = max(one.place for one in selection.tried) + 1
    rest = f"; those after number {tried} are not worked" if tried < last and not selection.pinned else ""
    how = "pinned, and it is" if selection.pinned else "used:"
    of = selection.candidates[selection.used].preference
    shared = sum(
        1 for one in selection.tried if one.worked.verdict == "OK" and selection.candidates[one.place].preference == of
    )
    which = "the least of the first preference with one that" if shared > 1 else "the first that"
    return (Paragraph((f"Number {used} is {how} {which} meets every check and stops nowhere{rest}.",), "note"),)


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
