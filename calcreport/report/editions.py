"""One sheet or more on which two editions of a code stand side by side: the lines that differ, each as both print it.

Differences and both runs with their forms in, a report out, for the file that holds nothing else. Its sheets say at
their head, in every table and in the title block which edition is the design and which is not.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.calculate.model import WorkedCheck, WorkedGives, WorkedRequire
from calcreport.history.model import Change, Difference, Entry, Place
from calcreport.report.compared import Compared, Side, change_words, headline, listed, unchanged, verdict_words
from calcreport.report.compose import title_facts
from calcreport.report.digits import number_text
from calcreport.report.display import row_words
from calcreport.report.forms import joint_comparisons
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
    blocks.append(Paragraph((Strong(headline(compared)),), "plain"))
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


def _calculation(compared: Compared, difference: Difference) -> list[Block]:
    assert difference.first is not None
    mark = difference.mark
    columns = (
        Column((f"{mark} line",)),
        Column(("What",)),
        Column((f"{compared.design.code}, the design",), stretch=1.0),
        Column((f"{compared.other.code}, not the design",), stretch=1.0),
        Column(("Change, as printed",), "right"),
    )
    rows = tuple(_row(compared, mark, change) for change in listed(difference))
    blocks: list[Block] = [Heading(f"{mark}  {difference.first.title}", 2)]
    blocks.append(Paragraph(verdict_words(compared, difference), "plain"))
    return [*blocks, Table(columns, rows)] if rows else blocks


def _row(compared: Compared, mark: str, change: Change) -> TableRow:
    first, second = change.first, change.second
    number = compared.design.line(mark, first) if first is not None else 0
    side = compared.design if first is not None else compared.other
    cells: tuple[Words, ...] = (
        (str(number) if number else "–",),
        what_differs(side.told[mark], change.entry, side.place(mark, change.entry)),
        side_words(compared.design, mark, first, change),
        side_words(compared.other, mark, second, change),
        (change_words(compared, mark, change),),
    )
    return TableRow(cells, "governing" if "verdict" in change.differs else "")


def what_differs(told: Told, entry: Entry, place: Place) -> Words:
    """Return the symbol of a value with its rows, or the words of a check or requirement."""
    *rows, _ = entry.path.split("].") if "]." in entry.path else [""]
    lead = "".join(f"{name} {row_words(row)}: " for name, _, row in (step.partition("[") for step in rows))
    if isinstance(place, WorkedCheck):
        return (lead + place.line.name,)
    if isinstance(place, WorkedRequire):
        return (lead + "required",)
    slot = place.line.slot if isinstance(place, WorkedGives) else place[0]
    return (lead, told.shared.symbol(slot)) if lead else (told.shared.symbol(slot),)


def side_words(side: Side, mark: str, entry: Entry | None, change: Change) -> Words:
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
            if because is not None:
                words += [", since ", because]
            elif alone or "case" in change.differs:
                failed = [arm.when for arm in place.line.arms[: place.arm] if arm.when is not None]
                words += [w for when in failed for w in (", since not ", told.shared.condition(when))]
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
