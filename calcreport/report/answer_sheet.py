"""The sheet that answers a question from the site: old and new values side by side, ratio and verdict of each check.

An answer in, a report of one part out. Boxes for the engineer of record and for pens are ruled and left blank.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.calculate.model import WorkedCheck, WorkedGives, WorkedRequire
from calcreport.history.model import Change, Entry
from calcreport.report.answer import (
    BUILT,
    DESIGNED,
    NO_VERDICT,
    UNTOUCHED,
    Answer,
    beside,
    headline,
    missing_words,
    ratio_words,
    unaffected_words,
)
from calcreport.report.compared import Side, change_words
from calcreport.report.compose import title_facts
from calcreport.report.display import show_symbol
from calcreport.report.editions import what_differs
from calcreport.report.fronts import counted, date_words, grouped
from calcreport.report.model import (
    Block,
    Column,
    Formula,
    Heading,
    Paragraph,
    Part,
    Report,
    Strong,
    Table,
    TableRow,
    Words,
)

MARK = "FIELD"
#: rows of values that follow, from the fullest down; the first that keeps to one sheet is taken
SIZES = (*range(60, 12, -4), *range(12, -1, -1))


def answer_report(answer: Answer, size: int) -> Report:
    """Return the sheet with at most `size` values that follow; checks are never left out."""
    facts = answer.compared.project.project
    title = f"Reply to {answer.reply}"
    issue = facts.issues[-1].number if facts.issues else "1"
    head = replace(
        title_facts(answer.compared.project, f"{title}: {answer.mark}  {answer.title}"),
        # the day of the answer is no one's to fill in but the engineer's
        status="FIELD QUESTION", status_note="no revision of the package", revision=f"to rev {issue}", date="",
    )  # fmt: skip
    strip = f"AS BUILT AGAINST AS DESIGNED, REPLY TO {answer.reply}"
    part = Part(MARK, title, "appendix", head, tuple(_blocks(answer, size)), strip=strip)
    subject = f"Reply to {answer.reply}, {facts.number}"
    return Report(f"{facts.title}: {title}", facts.office, subject, "en-US", facts.date, facts.paper, (part,))


def _blocks(answer: Answer, size: int) -> list[Block]:
    project = answer.compared.project
    facts = project.project
    issue = facts.issues[-1] if facts.issues else None
    at = f"issue {issue.number} of {date_words(issue.date)}" if issue else date_words(facts.date)
    words: Words = (
        "Question about ", Strong(f"{answer.mark}, {answer.title}"), f". As designed is the project file at {at}, "
        f"input fingerprint {grouped(project.fingerprint)}; as built is the same with what stands next, and nothing "
        "else, taken otherwise. Values that calculations hand on are followed. Lines are numbered as on the sheets of "
        "the design.",
    )  # fmt: skip
    blocks: list[Block] = [Paragraph(words, "plain"), Heading("Built otherwise", 2)]
    blocks.append(_values(answer, list(answer.changed())))
    blocks += [Paragraph((show_symbol(symbol), line), "caution") for symbol, line in beside(answer)]
    blocks += [Heading("Checks affected", 2), Paragraph((Strong(headline(answer)),), "plain")]
    for mark, why in answer.stopped:
        blocks.append(Paragraph((Strong(f"{mark} as built stopped: "), f"{why}."), "caution"))
    checks = list(answer.checks())
    if checks:
        blocks.append(_checks(answer, checks))
    blocks += _following(answer, size)
    blocks += [Heading("Not affected", 2), Paragraph((unaffected_words(answer),), "plain")]
    blocks += [Heading("Acceptance", 2), Paragraph((NO_VERDICT, " ", UNTOUCHED), "caution"), _boxes()]
    return blocks


def _following(answer: Answer, size: int) -> list[Block]:
    found = list(answer.values())
    if not found:
        return []
    blocks: list[Block] = [Heading("Values that follow", 2)]
    if size:
        # values without rows tell more than those of single rows
        taken = sorted(range(len(found)), key=lambda place: "[" in found[place][1].entry.path)[:size]
        blocks.append(_values(answer, [found[place] for place in sorted(taken)]))
    left = len(found) - size
    if left > 0:
        words = f"{counted(left, 'further value' if size else 'value')} not listed here, for room."
        blocks.append(Paragraph((words,), "note"))
    return blocks


def _checks(answer: Answer, checks: list[tuple[str, Change]]) -> Table:
    columns = (
        Column(("Line",)), Column(("Check",)),
        Column(("As designed",), stretch=1.0), Column(("",)),
        Column(("As built",), stretch=1.0), Column(("",)),
    )  # fmt: skip
    rows = []
    for mark, change in checks:
        side = answer.compared.other if change.first is None else answer.compared.design
        cells: tuple[Words, ...] = (
            (_line(answer, mark, change),),
            what_differs(side.told[mark], change.entry, side.place(mark, change.entry)),
            _sides(answer.compared.design, mark, change.first),
            (Strong(ratio_words(answer, mark, change.first, False)),),
            _sides(answer.compared.other, mark, change.second),
            (Strong(ratio_words(answer, mark, change.second, True)),),
        )
        failed = change.second is not None and change.second.verdict == "NG"
        rows.append(TableRow(cells, "loud" if failed else ""))
    return Table(columns, tuple(rows))


def _sides(side: Side, mark: str, entry: Entry | None) -> Words:
    """Return the comparison of a check in numbers."""
    if entry is None:
        return ("–",)
    place, told = side.place(mark, entry), side.told[mark]
    assert isinstance(place, WorkedCheck)
    numbers: Formula | None = told.numbers(place.by.test, place.open) if place.by is not None else None
    if numbers is None:
        return (place.reason or "–",)
    # a comparison that does not hold is not printed as if it did
    return (numbers, " not met") if place.verdict == "NG" else (numbers,)


def _values(answer: Answer, changes: list[tuple[str, Change]]) -> Table:
    columns = (
        Column(("Line",)), Column(("",)), Column(("",), stretch=1.0),
        Column((DESIGNED.capitalize(),), "right"), Column((BUILT.capitalize(),), "right"), Column(("Change",), "right"),
    )  # fmt: skip
    rows = []
    for mark, change in changes:
        side = answer.compared.other if change.first is None else answer.compared.design
        cells: tuple[Words, ...] = (
            (_line(answer, mark, change),),
            what_differs(side.told[mark], change.entry, side.place(mark, change.entry)),
            (_says(side, mark, change.entry),),
            _value(answer.compared.design, mark, change.first) or (missing_words(answer, mark, change),),
            _value(answer.compared.other, mark, change.second) or (missing_words(answer, mark, change),),
            (change_words(answer.compared, mark, change),),
        )
        rows.append(TableRow(cells))
    return Table(columns, tuple(rows))


def _value(side: Side, mark: str, entry: Entry | None) -> Words:
    if entry is None:
        return ()
    place = side.place(mark, entry)
    if isinstance(place, WorkedCheck | WorkedRequire):
        return ("met",)
    return (side.told[mark].value(*((place.line.slot, place.key) if isinstance(place, WorkedGives) else place)),)


def _says(side: Side, mark: str, entry: Entry) -> str:
    place = side.place(mark, entry)
    if isinstance(place, WorkedCheck | WorkedRequire):
        return entry.path.rpartition("].")[2]
    slot = place.line.slot if isinstance(place, WorkedGives) else place[0]
    return side.told[mark].slots[slot].symbol.says


def _line(answer: Answer, mark: str, change: Change) -> str:
    number = answer.compared.design.line(mark, change.first) if change.first is not None else 0
    return f"{mark} {number}" if number else mark


def _boxes() -> Table:
    """Return boxes for the engineer of record, left blank."""
    columns = (Column(("Disposition of the engineer of record",), stretch=3.0), Column(("By",), stretch=1.0),
               Column(("Date",), stretch=1.0))  # fmt: skip
    return Table(columns, (TableRow((("\N{NO-BREAK SPACE}",),) * 3),) * 2)
