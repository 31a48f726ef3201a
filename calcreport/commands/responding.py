"""From a project and a comment log to letter and matrix: what `calcreport respond` writes. Prints nothing."""

from __future__ import annotations

import re
from dataclasses import dataclass

from calcreport.calculate.answered import find_answers
from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source, Span
from calcreport.core.world import World
from calcreport.driver import Progress, silent
from calcreport.layout.fonts import Fonts, installed_fonts
from calcreport.layout.model import Pages
from calcreport.layout.paginate import lay_out
from calcreport.layout.places import sheets_of
from calcreport.output.pdf import write_pdf
from calcreport.publish import Package, report
from calcreport.read.comments import STATUSES, read_comments
from calcreport.read.review_model import CommentLog
from calcreport.report.answers import Answer, Sheets, resolve
from calcreport.report.response import response_report


@dataclass(frozen=True, slots=True)
class Responded:
    """The answers to a comment log, and the PDF of letter and matrix; `pages` and `data` are empty after a problem."""

    problems: tuple[Problem, ...]
    package: Package
    log: CommentLog | None = None
    answers: tuple[Answer, ...] = ()
    pages: Pages | None = None
    data: bytes = b""


def respond(world: World, source: Source, comments: Source, progress: Progress = silent) -> Responded:
    """Answer a comment log from a project's package as it would be laid out now."""
    problems = Problems()
    log = read_comments(comments, problems)
    told = report(world, source, progress)
    if log is None or told.composed is None or told.worked is None:
        return Responded((*told.problems, *problems.sorted()), told)
    progress("laying out", 0, 1)
    fonts = installed_fonts()
    _hold_letters(log, fonts, problems)
    fronts = [part.mark for part in told.composed.report.parts if part.kind != "calculation"]
    places = find_answers(told.worked, log, fronts, problems)
    if problems:
        return Responded(problems.sorted(), told)
    pages = lay_out(told.composed.report, fonts)
    labels: dict[str, tuple[str, ...]] = {}
    for page in pages.pages:
        labels[page.part] = (*labels.get(page.part, ()), page.label)
    package = Sheets(told.composed, sheets_of(pages), labels)
    answers = resolve(log, places, package, problems)
    if problems:
        return Responded(problems.sorted(), told)
    sheets = lay_out(response_report(told.worked, package, log, answers, STATUSES), fonts)
    return Responded((), told, log, answers, sheets, write_pdf(sheets, fonts.files))


def _hold_letters(log: CommentLog, fonts: Fonts, problems: Problems) -> None:
    """Add a problem for a comment that the sheets cannot quote letter for letter."""
    for comment in log.comments:
        lacking = fonts.missing(re.sub("[ \t\n]", "", comment.says))
        if lacking:
            where = comment.span.source.text.find(lacking[0], comment.span.start)
            problems.add("odd-character", Span(comment.span.source, where, where + 1),
                         f"comment {comment.number} cannot be quoted: the faces of the sheets lack this letter",
                         expected="letters of the Latin and Greek alphabets, and common signs",
                         found=f"{lacking[0]} (U+{ord(lacking[0]):04X})",
                         hint="attach the comment as received, and write the letter's name in brackets")  # fmt: skip
