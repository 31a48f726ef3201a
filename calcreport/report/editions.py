"""One sheet or more on which two editions of a code stand side by side: the lines that differ, each as both print it.

Differences and both runs with their forms in, a report out, for the file that holds nothing else. Its sheets say at
their head, in every table and in the title block which edition is the design and which is not.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from calcreport.calculate.model import WorkedCheck, WorkedGives, WorkedProject, WorkedRequire
from calcreport.core.units import ONE
from calcreport.history.model import Change, Difference, Entry, Identity, Place
from calcreport.report.compose import title_facts
from calcreport.report.digits import Figure, number_text, rounded
from calcreport.report.display import row_words, unit_text
from calcreport.report.forms import joint_comparisons
from calcreport.report.fronts import counted
from calcreport.report.items import SayRequire
from calcreport.report.model import (
    Block,
    Column,
    Formula,
    Heading,
    Letters,
    Paragraph,
    Part,
    Report,
    Row,
    Strong,
    Table,
    TableRow,
    Words,
)
from calcreport.report.notation import relation
from calcreport.report.told import Told

MARK = "EDITIONS"
#: a change smaller than this share is not put in a number
LEAST = 0.001


@dataclass(frozen=True, slots=True)
class Side:
    """One edition: what it is called, and its calculations as they are told."""

    code: str
    told: dict[str, Told]
    #: where the lines of a calculation stand in this run
    places: dict[str, dict[Identity, Place]]

    def place(self, mark: str, entry: Entry) -> Place:
        """Return where a line stands."""
        return self.places[mark][entry.identity]

    def line(self, mark: str, entry: Entry) -> int:
        """Return the number of a line on the sheets of this edition, 0 for none."""
        place, script = self.place(mark, entry), self.told[mark].script
        match place:
            case WorkedGives():
                return script.line_of.get((place.line.slot, place.key), 0)
            case WorkedCheck():
                return script.check_line.get(id(place), 0)
            case WorkedRequire():
                said = (item for item in script.items if isinstance(item, SayRequire))
                return next((item.number for item in said if item.worked is place), 0)
            case _:
                return script.line_of.get(place, 0)

    def figure(self, mark: str, entry: Entry) -> Figure | None:
        """Return the printed figure of a line, None for a word or a line without a number."""
        place, forms = self.place(mark, entry), self.told[mark].forms
        if isinstance(place, WorkedRequire) or not isinstance(entry.value, float):
            return None
        if isinstance(place, WorkedCheck):
            return forms.ratio(place)
        return forms.figure(*((place.line.slot, place.key) if isinstance(place, WorkedGives) else place))


@dataclass(frozen=True, slots=True)
class Compared:
    """Two editions held against each other: the design's first."""

    project: WorkedProject
    design: Side
    other: Side
    differences: tuple[Difference, ...]
    #: (mark, why) of calculations that cannot be worked to the other edition
    apart: tuple[tuple[str, str], ...]
    #: words where the adopted code does not refer to the other edition, or ''
    foreign: str

    @property
    def differ(self) -> bool:
        """Whether anything differs, or could not be compared."""
        return bool(self.apart) or any(difference.differs for difference in self.differences)


def editions_report(compared: Compared) -> Report:
    """Return the sheets."""
    facts = compared.project.project
    design, other = compared.design.code, compared.other.code
    strip = f"NOT THE DESIGN: {design} AGAINST {other}, WORKED FROM THE SAME GIVEN VALUES"
    title = f"{design} against {other}"
    head = replace(
        title_facts(compared.project, title, f"{design}, {other}"), status="COMPARISON", status_note="not the design"
    )
    part = Part(MARK, title, "appendix", head, tuple(_blocks(compared)), strip=strip)
    subject = f"Comparison of editions, {facts.number}"
    return Report(f"{facts.title}: {title}", facts.office, subject, "en-US", facts.date, facts.paper, (part,))


def _blocks(compared: Compared) -> list[Block]:
    design, other = compared.design.code, compared.other.code
    words: Words = (
        f"The design is to {design}. The same given values were worked to ",
        Strong(f"{other}, for comparison only"),
        "; values one calculation hands to another follow their edition, candidates are those of the design. A line "
        "is called equal where unrounded value, formula, case, citation and verdict are. Lines are matched by their "
        "path, and numbered as on the sheets of "
        "the design.",
    )
    blocks: list[Block] = [Paragraph(words, "plain")]
    if compared.foreign:
        blocks.append(Paragraph((compared.foreign,), "caution"))
    for difference in compared.differences:
        if difference.differs:
            blocks += _calculation(compared, difference)
    for title, lines in unchanged(compared):
        blocks += [Heading(title, 2), Paragraph((lines,), "plain")]
    if compared.apart:
        blocks.append(Heading(f"Not compared: cannot be worked to {other}", 2))
        rows = tuple(TableRow(((mark,), (why,))) for mark, why in compared.apart)
        blocks.append(Table((Column(("Mark",)), Column(("Why",), stretch=1.0)), rows))
    return blocks


def unchanged(compared: Compared) -> list[tuple[str, str]]:
    """Return the calculations in which nothing differs, those of other codes or none apart."""
    code = compared.design.code
    same = [d for d in compared.differences if not d.differs]
    groups = (
        ("Nothing differs", [d for d in same if d.first is not None and d.first.code == code]),
        (f"Nothing differs, and not written to {code}", [d for d in same if d.first is None or d.first.code != code]),
    )
    return [(title, ", ".join(f"{d.mark} ({counted(d.equal, 'line')})" for d in found) + ".")
            for title, found in groups if found]  # fmt: skip


def _calculation(compared: Compared, difference: Difference) -> list[Block]:
    assert difference.first is not None
    mark = difference.mark
    columns = (
        Column(("Line",)),
        Column(("What",)),
        Column((f"{compared.design.code}, the design",), stretch=1.0),
        Column((f"{compared.other.code}, not the design",), stretch=1.0),
        Column(("Change",), "right"),
    )
    rows = tuple(_row(compared, mark, change) for change in listed(difference))
    blocks: list[Block] = [Heading(f"{mark}  {difference.first.title}", 2)]
    blocks.append(Paragraph(verdict_words(compared, difference), "plain"))
    return [*blocks, Table(columns, rows)] if rows else blocks


def listed(difference: Difference) -> tuple[Change, ...]:
    """Return the changes worth a row: the lines that one edition did not reach are counted, not listed."""
    first, second = difference.first, difference.second
    assert first is not None and second is not None
    return tuple(
        change for change in difference.changes
        if not (change.second is None and second.stopped) and not (change.first is None and first.stopped)
    )  # fmt: skip


def verdict_words(compared: Compared, difference: Difference) -> Words:
    """Say verdict, governing check and stop of both editions, and how many lines differ."""
    first, second = difference.first, difference.second
    assert first is not None and second is not None
    design, other = compared.design.code, compared.other.code
    found: list[str | Strong] = []
    judged = any(entry.kind == "check" for account in (first, second) for entry in account.entries)
    found += [] if judged else ["Without checks of its own; "]
    for what, one, two in (("Verdict", first.verdict, second.verdict),
                           ("governing check", first.governing, second.governing)) if judged else ():  # fmt: skip
        if one == two:
            found.append(f"{what} {one} in both; " if one else "")
        else:
            found += [Strong(f"{what} {one or 'none'} to {design}, {two or 'none'} to {other}"), "; "]
    for account, code in ((first, design), (second, other)):
        found += [Strong(f"to {code} stopped: {account.stopped}"), "; "] if account.stopped else []
    unreached = len(difference.changes) - len(listed(difference))
    found.append(f"{counted(unreached, 'line')} not reached there; " if unreached else "")
    rows = len(listed(difference))
    found.append(f"{counted(rows, 'line')} {'differs' if rows == 1 else 'differ'}, {difference.equal} equal.")
    return tuple(word for word in found if word)


def _row(compared: Compared, mark: str, change: Change) -> TableRow:
    first, second = change.first, change.second
    number = compared.design.line(mark, first) if first is not None else 0
    side = compared.design if first is not None else compared.other
    cells: tuple[Words, ...] = (
        (str(number) if number else "–",),
        _what(side.told[mark], change.entry, side.place(mark, change.entry)),
        _cell(compared.design, mark, first, change),
        _cell(compared.other, mark, second, change),
        (change_words(compared, mark, change),),
    )
    return TableRow(cells, "governing" if "verdict" in change.differs else "")


def _what(told: Told, entry: Entry, place: Place) -> Words:
    """Return the symbol of a value with its rows, or the words of a check or requirement."""
    *rows, _ = entry.path.split("].") if "]." in entry.path else [""]
    lead = "".join(f"{name} {row_words(row)}: " for name, _, row in (step.partition("[") for step in rows))
    if isinstance(place, WorkedCheck):
        return (lead + place.line.name,)
    if isinstance(place, WorkedRequire):
        return (lead + "required",)
    slot = place.line.slot if isinstance(place, WorkedGives) else place[0]
    return (lead, told.shared.symbol(slot)) if lead else (told.shared.symbol(slot),)


def _cell(side: Side, mark: str, entry: Entry | None, change: Change) -> Words:
    """Return one edition's line: its value, and where they differ its formula, case and citation."""
    if entry is None:
        return ("no such line",)
    place, told = side.place(mark, entry), side.told[mark]
    words: list[str | Strong | Formula] = []
    alone = change.first is None or change.second is None
    match place:
        case WorkedCheck():
            ratio = told.forms.ratio(place)
            words.append(Strong(f"{number_text(ratio)} {place.verdict}" if ratio else place.verdict))
            if place.by is not None and (alone or "formula" in change.differs):
                words += [": ", told.shared.condition(place.by.test)]
        case WorkedRequire():
            words.append(_met(told, place))
        case WorkedGives():
            value = told.value(place.line.slot, place.key)
            shown = because = None
            if alone or {"formula", "case"} & set(change.differs):
                shown, _ = told.steps(place.line.arms[place.arm].formula, place)
                because = told.because(place.line, place.arm, place.open)
            words.append(value if shown is None else Row((value, relation("="), shown)))
            words += [", since ", because] if because is not None else []
        case _:
            words.append(told.value(*place))
    if entry.cite and (alone or "citation" in change.differs):
        words.append(f"  [{entry.cite}]")
    return tuple(words)


def _met(told: Told, place: WorkedRequire) -> Formula:
    tests = joint_comparisons(place.line.condition)
    if not tests or not all(told.forms.side(test, place.open, "left") for test in tests):
        return told.shared.condition(place.line.condition)
    items: list[Formula] = []
    for test in tests:
        items += [Letters(" and ")] if items else []
        items.append(told.compared(test, place.open))
    return Row(tuple(items))


def change_words(compared: Compared, mark: str, change: Change) -> str:
    """Return how far a number moved, from the numbers as printed; words where there is no such number."""
    first, second = change.first, change.second
    if first is None or second is None or not isinstance(first.value, float):
        return ""
    if "value" not in change.differs:
        return "same value"
    one, two = compared.design.figure(mark, first), compared.other.figure(mark, second)
    if one is None or two is None or not one.printed:
        return ""
    assert isinstance(second.value, float)
    true, shown = (second.value - first.value) / abs(first.value or 1.0), (two.printed - one.printed) / abs(one.printed)
    if abs(true) < LEAST:
        return "under 0.1 %"
    for places in (1, 0):
        if rounded(100 * true, places) == rounded(100 * shown, places):
            return f"{rounded(100 * true, places):+.{places}f} %".replace("-", "−")
    return f"{rounded(100 * shown, 0):+.0f} %".replace("-", "−")


def printed_value(side: Side, mark: str, entry: Entry) -> str:
    """Return a line's value as plain text, as its sheet prints it."""
    place, told = side.place(mark, entry), side.told[mark]
    figure = side.figure(mark, entry)
    if isinstance(place, WorkedCheck):
        return f"{number_text(figure)} {place.verdict}" if figure else place.verdict
    if isinstance(place, WorkedRequire):
        return "met"
    if figure is None:
        return "none" if entry.value is None else str(entry.value)
    slot = place.line.slot if isinstance(place, WorkedGives) else place[0]
    power = f" × 10^{figure.exponent}" if figure.exponent else ""
    return f"{number_text(figure)}{power} {unit_text(told.slots[slot].symbol.unit or ONE)}".rstrip()
