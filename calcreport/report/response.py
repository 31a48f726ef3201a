"""The response to plan-review comments: a letter, and a matrix of every comment with its answer.

Answers with their sheets in, a report of two parts out, for the file that holds nothing else. It is addressed to roles
and signed by nobody: the line for the signature stays blank.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.calculate.model import WorkedProject
from calcreport.core.version import PROGRAM
from calcreport.read.review_model import CommentLog
from calcreport.report.answers import Answer, Sheets, Where, as_written
from calcreport.report.compose import title_facts
from calcreport.report.fronts import counted, date_words, grouped, short_date
from calcreport.report.model import (
    Block,
    Column,
    Heading,
    Paragraph,
    Part,
    Report,
    Strong,
    Table,
    TableRow,
    TitleFacts,
    Words,
)

LETTER, MATRIX = "LETTER", "MATRIX"
BLANK = "____________________"


def response_report(
    project: WorkedProject, sheets: Sheets, log: CommentLog, answers: tuple[Answer, ...], meanings: dict[str, str]
) -> Report:
    """Return letter and matrix; `meanings` says what each word for an answer means."""
    facts = project.project
    subject = f"Response to plan-review comments, cycle {log.cycle}"
    letter = Part(
        LETTER, subject, "front", _title(project, log, subject), _letter(project, sheets, log, answers, meanings)
    )
    title = f"Comment-response matrix, cycle {log.cycle}"
    matrix = Part(MATRIX, title, "front", _title(project, log, title), _matrix(answers))
    named = f"{subject}, {facts.number}"
    return Report(f"{facts.title}: {subject}", facts.office, named, "en-US", log.date, facts.paper, (letter, matrix))


def _title(project: WorkedProject, log: CommentLog, subject: str) -> TitleFacts:
    """Return the title block: cycle and date are the letter's, status and issue the package's."""
    return replace(title_facts(project, subject), revision=f"cycle {log.cycle}", date=short_date(log.date))


def _letter(
    project: WorkedProject, sheets: Sheets, log: CommentLog, answers: tuple[Answer, ...], meanings: dict[str, str]
) -> tuple[Block, ...]:
    facts = project.project
    many = counted(len(answers), "comment")
    head: list[tuple[str, Words]] = [
        ("To", (", ".join(log.reviewer),)),
        ("From", (", ".join(line for line in (facts.office, facts.contact) if line),)),
        ("Date", (date_words(log.date),)),
        ("Project", (f"{facts.title}, {facts.number}, {facts.address}",)),
        ("Application", (log.application or facts.permit or BLANK,)),
        ("Subject", (Strong(f"Response to the {many} of review cycle {log.cycle}, received "
                            f"{date_words(log.received)}"),)),
        ("Package", (f"Structural calculations, issue {facts.last_issue.number} of {date_words(facts.date)}, "
                     f"status {facts.status}, fingerprint {grouped(project.fingerprint)}",)),
    ]  # fmt: skip
    blocks: list[Block] = [Heading("Response to plan-review comments", 1), _pairs(head)]
    opening = (
        f"This letter answers the {many} of review cycle {log.cycle}. The comment-response matrix that follows gives "
        "each in the reviewer's own words, with its response and the place of the answer. Sheet and line numbers are "
        f"those of the package named above; they were found in it by {PROGRAM}."
    )
    blocks.append(Paragraph((opening,), "plain"))
    summary = sheets.composed.summary
    if summary.failed or summary.not_evaluated:
        failed = ", ".join(f"{mark} {name}" for mark, name in summary.failed)
        words = f"The package holds {len(summary.failed)} NG{f' ({failed})' if failed else ''}, "
        blocks.append(
            Paragraph((Strong(f"{words}{summary.not_evaluated} not evaluated: see its check summary."),), "caution")
        )
    blocks.append(Heading("How the comments are answered", 2))
    blocks.append(_by_status(answers, meanings))
    blocks.append(Heading("Where to look", 2))
    blocks.append(_by_place(answers, tuple(label for labels in sheets.parts.values() for label in labels)))
    blocks.append(Heading("Signature", 2))
    columns = tuple(
        Column((words,), stretch=share)
        for words, share in (
            ("Engineer in responsible charge", 2.0),
            ("Licence no.", 1.0),
            ("Signature", 2.0),
            ("Date", 1.0),
        )
    )
    blocks.append(Table(columns, (TableRow((("\n\n",), (), (), ()), over="signature"),)))
    return tuple(blocks)


def _pairs(rows: list[tuple[str, Words]]) -> Table:
    columns = (Column(("",)), Column(("",), stretch=1.0))
    return Table(columns, tuple(TableRow(((name,), words)) for name, words in rows))


def _by_status(answers: tuple[Answer, ...], meanings: dict[str, str]) -> Table:
    """Say which comments were answered in which way."""
    columns = (
        Column(("Answer",)),
        Column(("Meaning",)),
        Column(("Count",), "right"),
        Column(("Comments",), stretch=1.0),
    )
    rows: list[TableRow] = []
    for status, meaning in meanings.items():
        numbers = [answer.comment.number for answer in answers if answer.comment.status == status]
        if numbers:
            rows.append(TableRow(((status,), (meaning,), (str(len(numbers)),), (", ".join(numbers),))))
    return Table(columns, tuple(rows))


def _by_place(answers: tuple[Answer, ...], order: tuple[str, ...]) -> Table:
    """Name the comments every sheet and document answers: sheets in the order of the package, then the others."""
    sheets: dict[str, list[str]] = {}
    others: dict[str, list[str]] = {}
    for answer in answers:
        for where in answer.where:
            for name, found in [(sheet, sheets) for sheet, _ in where.sheets] or [(where.text, others)]:
                numbers = found.setdefault(name, [])
                numbers += [answer.comment.number] if answer.comment.number not in numbers else []
    listed = [(sheet, sheets[sheet]) for sheet in order if sheet in sheets] + sorted(others.items())
    rows = [TableRow(((name,), (", ".join(numbers),))) for name, numbers in listed]
    return Table((Column(("Sheet or document",)), Column(("Comments",), stretch=1.0)), tuple(rows))


def _matrix(answers: tuple[Answer, ...]) -> tuple[Block, ...]:
    columns = (
        Column(("No.",)),
        Column(("Comment as received",), stretch=3.0),
        Column(("Response",), stretch=3.0),
        Column(("Where answered",)),
        Column(("Answer",)),
        Column(("Reviewer's use",)),
    )
    note = "Comments stand in the reviewer's own words. The last column is left for the reviewer."
    return Heading("Comment-response matrix", 1), Paragraph((note,), "note"), Table(columns, tuple(map(_row, answers)))


def _row(answer: Answer) -> TableRow:
    comment = answer.comment
    about = (comment.number, comment.discipline, comment.reference)
    where: list[Words] = [_where(one) for one in answer.where]
    cells: tuple[Words, ...] = (
        (Strong(about[0]), *(f"\n{words}" for words in about[1:] if words)),
        (as_written(comment.says),),
        (as_written(comment.response),),
        tuple(word for place, words in enumerate(where) for word in ((("\n",) if place else ()) + words)),
        (comment.status,),
        (),
    )
    return TableRow(cells, over=f"{comment.number}, continued")


def _where(where: Where) -> Words:
    return (where.text, ": ", *where.what) if where.what else (where.text,)
