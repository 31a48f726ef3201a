"""Comments and their answers with the sheet and line of each: what the letter, the matrix and machines are told.

A comment log, what its answers point at, the composed package and the sheet of every line in; answers out. A line
that stands on no sheet is a problem.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache

from calcreport.calculate.answer_model import AnswerPlace
from calcreport.calculate.model import WorkedCheck, WorkedGives, WorkedProject, split_path
from calcreport.core.problems import Problems
from calcreport.read.review_model import Comment, CommentLog, OtherPlace, Pointer
from calcreport.report.below import below
from calcreport.report.compose import Composed
from calcreport.report.display import show_symbol
from calcreport.report.items import SayTable, Script
from calcreport.report.model import Formula, Words

_RUN = re.compile("  +")


@dataclass(frozen=True, slots=True)
class Sheets:
    """A composed package with the sheets its lines stand on."""

    composed: Composed
    #: sheet by the anchor of a line
    sheets: Mapping[str, str]
    #: sheets of every part, in order
    parts: Mapping[str, tuple[str, ...]]


@dataclass(frozen=True, slots=True)
class Where:
    """One place at which a comment is answered."""

    #: as the log names it
    pointer: str
    #: '' for a drawing or document
    mark: str
    #: sheets concerned, each with the lines on it; no lines for all of a sheet
    sheets: tuple[tuple[str, tuple[int, ...]], ...]
    #: 'B1-2, line 31', 'B1-1 to B1-3', 'drawing S-301'
    text: str
    #: what stands there: a symbol or the name of a check
    what: Words = ()


@dataclass(frozen=True, slots=True)
class Answer:
    """A comment, and where it is answered."""

    comment: Comment
    where: tuple[Where, ...]


def resolve(
    log: CommentLog, places: Mapping[Pointer, AnswerPlace], package: Sheets, problems: Problems
) -> tuple[Answer, ...]:
    """Return every comment with its answer; `places` holds every pointer of the log."""
    answers: list[Answer] = []
    lines = cache(lambda mark: _Lines(package.composed.scripts[mark]))
    for comment in log.comments:
        found: dict[str, Where] = {}
        for one in comment.answered:
            where = (
                _outside(one) if isinstance(one, OtherPlace) else _inside(one, places[one], package, lines, problems)
            )
            if where is not None:
                found.setdefault(where.pointer, where)
        answers.append(Answer(comment, tuple(found.values())))
    return tuple(answers)


def _outside(other: OtherPlace) -> Where:
    # 'drawing S-301' is a drawing by its own words
    begins = other.says.lower().startswith(other.kind)
    text = other.says if other.kind == "document" or begins else f"drawing {other.says}"
    return Where(text, "", (), text)


def _inside(
    pointer: Pointer, place: AnswerPlace, package: Sheets, lines: Callable[[str], _Lines], problems: Problems
) -> Where | None:
    written = f"{pointer.mark}.{pointer.path}" if pointer.path else pointer.mark
    if place.value is None and not place.checks:
        sheets = package.parts[place.mark]
        text = sheets[0] if len(sheets) == 1 else f"{sheets[0]} to {sheets[-1]}"
        return Where(written, place.mark, tuple((sheet, ()) for sheet in sheets), text)
    told = [lines(place.mark).checks.get(id(check), 0) for check in place.checks]
    told += [lines(place.mark).values.get(place.value, 0)] if place.value is not None else []
    numbers = sorted({number for number in told if number})
    if not numbers:
        verdicts = ", ".join(dict.fromkeys(check.verdict for check in place.checks))
        problems.add("unknown-name", pointer.span, f"`{written[:60]}` stands on no sheet",
                     expected="a line of its sheets",
                     found=f"{verdicts}, and so without a line" if verdicts else "a value without a line")  # fmt: skip
        return None
    by_sheet: dict[str, list[int]] = {}
    for number in numbers:
        by_sheet.setdefault(package.sheets[f"{place.mark}.{number}"], []).append(number)
    text = "; ".join(f"{sheet}, {lines_words(some)}" for sheet, some in by_sheet.items())
    found = tuple((sheet, tuple(some)) for sheet, some in by_sheet.items())
    return Where(written, place.mark, found, text, _what(pointer, place, package))


class _Lines:
    """The line every value and check of a calculation is told on: of rows not set out in full, their table's."""

    def __init__(self, script: Script) -> None:
        self.checks, self.values = dict(script.check_line), dict(script.line_of)
        for table in script.items:
            if not isinstance(table, SayTable):
                continue
            for place, row in enumerate(table.worked.rows):
                if place == table.governing:
                    continue
                self.checks |= {
                    id(one): table.number for one in below(row, WorkedCheck) if one.line.name in table.checks
                }
                given = [(one.line.slot, one.key) for one in below(row, WorkedGives)]
                self.values |= {value: table.number for value in given if value[0] in table.columns}


def lines_words(numbers: list[int]) -> str:
    """Return 'line 3', 'lines 3 and 5', 'lines 3, 5 and 9'."""
    *most, last = map(str, numbers)
    return f"lines {', '.join(most)} and {last}" if most else f"line {last}"


def _what(pointer: Pointer, place: AnswerPlace, package: Sheets) -> Words:
    """Return what stands on the line: a symbol or the name of a check, with the member and the rows it is of."""
    words: list[Formula | str] = []
    if place.value is None:
        words.append(place.checks[0].line.name)
    else:
        slot = package.composed.scripts[place.mark].worked.plan.slots[place.value[0]]
        words.append(show_symbol(slot.symbol))
    words += [f" of {pointer.mark}"] if pointer.mark != place.mark else []
    rows = ", ".join(f"{name} {row}" for name, row in split_path(pointer.path)[0])
    return (*words, f" ({rows})") if rows else tuple(words)


def as_written(text: str) -> str:
    """Keep spaces side by side from being set as one; the letters stay what they are."""
    wide = text.expandtabs(4)
    return _RUN.sub(lambda run: " " + "\N{NO-BREAK SPACE}" * (len(run[0]) - 1), wide)


def answers_object(project: WorkedProject, log: CommentLog, answers: tuple[Answer, ...]) -> dict[str, object]:
    """Return the resolved table for machines."""
    facts = project.project
    return {
        "cycle": log.cycle,
        "received": log.received,
        "date": log.date,
        "reviewer": list(log.reviewer),
        "application": log.application,
        "package": {"issue": facts.last_issue.number, "status": facts.status, "fingerprint": project.fingerprint},
        "comments": [
            {
                "number": a.comment.number,
                "discipline": a.comment.discipline,
                "reference": a.comment.reference,
                "says": a.comment.says,
                "response": a.comment.response,
                "status": a.comment.status,
                "answered": [
                    {
                        "at": where.pointer,
                        "mark": where.mark,
                        "sheets": [{"sheet": sheet, "lines": list(lines)} for sheet, lines in where.sheets],
                        "text": where.text,
                    }
                    for where in a.where
                ],
            }
            for a in answers
        ],
    }
