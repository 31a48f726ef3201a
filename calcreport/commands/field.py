"""`calcreport field`: what becomes of a member that was built otherwise, as one sheet. Nothing issued is touched."""

from __future__ import annotations

import json
import re
from argparse import Namespace
from pathlib import Path

from calcreport.calculate.model import Worked, WorkedProject
from calcreport.commands.desk import UNWRITTEN, Opened, ProgressLine, one_problem, open_project, say_problems
from calcreport.commands.sides import accounted, make_side
from calcreport.core.problems import Problem, Problems
from calcreport.driver import work
from calcreport.filesystem import make_files
from calcreport.history.differences import differ
from calcreport.layout.fonts import installed_fonts
from calcreport.layout.paginate import lay_out
from calcreport.output.pdf import write_pdf
from calcreport.read.changes import AsBuilt, read_changes
from calcreport.report.answer import BUILT, DESIGNED, Answer
from calcreport.report.answer_sheet import SIZES, answer_report
from calcreport.report.answer_text import answer_lines, answer_object
from calcreport.report.compared import Compared

_REPLY = re.compile(r"[A-Za-z0-9](?:[A-Za-z0-9 ._-]{0,38}[A-Za-z0-9])?")


def run(arguments: Namespace) -> int:
    """Answer; 0 where no affected check is NG as built, 1 where one is or is not evaluated, 2 for problems."""
    if not _REPLY.fullmatch(arguments.reply):
        return say_problems(one_problem("not-a-change", f"`{arguments.reply[:40]}` cannot be replied to",
                                        "up to 40 letters, digits, spaces and . _ -, such as RFI-031",
                                        arguments.reply[:40] or "nothing"), arguments.json, tail=UNWRITTEN)  # fmt: skip
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json, tail=UNWRITTEN)
    progress = ProgressLine()
    answer = answer_question(opened, arguments.mark, arguments.change, arguments.reply, progress)
    progress.clear()
    if isinstance(answer, tuple):
        return say_problems(answer, arguments.json, tail=UNWRITTEN)
    name = arguments.reply.replace(" ", "-") + ".pdf"
    target = Path(arguments.output) if arguments.output else opened.path.parent / name
    failure = _put(target, draw_answer(answer))
    if failure:
        return say_problems(failure, arguments.json, tail=UNWRITTEN)
    if arguments.json:
        print(json.dumps(answer_object(answer, str(target)), indent=1, ensure_ascii=False))
    else:
        for line in answer_lines(answer):
            print(line)
        print(f"{target}: 1 sheet")
    return 1 if answer.not_met or answer.stopped else 0


def answer_question(
    opened: Opened, mark: str, texts: list[str], reply: str, progress: ProgressLine
) -> Answer | tuple[Problem, ...]:
    """Work a project as designed and as built; returns the problems where that cannot be."""
    designed = work(opened.world, opened.source, progress)
    if designed.problems or designed.worked is None:
        return designed.problems
    problems = Problems()
    changes = read_changes(texts, mark, problems)
    title = _title(designed.worked, mark)
    if not title:
        known = [member.mark for worked in designed.worked.calculations for member in worked.members]
        problems.add("unknown-name", None, f"there is no calculation `{mark[:40]}`",
                     expected="the mark of a calculation or member of this project", found=mark[:40],
                     hint=problems.near(mark, known))  # fmt: skip
    if problems:
        return problems.sorted()
    found = designed.worked.calculations
    taken = {w.calculation.mark: w.selection.used for w in found if w.selection is not None}
    by_line = {w.calculation.mark: _by_line(w) for w in found}
    source = f"as built, {reply}"
    built = work(opened.world, opened.source, progress, built=AsBuilt(changes, taken, by_line, source))
    if built.problems or built.worked is None:
        return built.problems
    pairs = zip(found, built.worked.calculations, strict=True)
    differences = tuple(differ(accounted(one), accounted(two)) for one, two in pairs)
    sides = make_side(designed.worked, DESIGNED), make_side(built.worked, BUILT)
    return Answer(Compared(designed.worked, *sides, differences, (), ""), reply, mark, title, source)


def _by_line(worked: Worked) -> frozenset[str]:
    """Return the symbols that lines give, and not the project."""
    given: set[int] = set()
    left = list(worked.plan.givens)
    for planned in left:
        given |= {planned.slot, *planned.outputs}
        left += planned.columns
    return frozenset(slot.path for slot in worked.plan.slots if slot.index not in given)


def draw_answer(answer: Answer) -> bytes:
    """Return the sheet as PDF: with as many of the values that follow as keep to one sheet."""
    fonts = installed_fonts()
    for size in SIZES:
        pages = lay_out(answer_report(answer, size), fonts)
        if len(pages.pages) == 1:
            break
    return write_pdf(pages, fonts.files)


def _title(project: WorkedProject, mark: str) -> str:
    """Return the title of a calculation, or of the one that a member stands on; '' for none."""
    for worked in project.calculations:
        if mark == worked.calculation.mark or mark in worked.calculation.members:
            return worked.calculation.title
    return ""


def _put(target: Path, data: bytes) -> tuple[Problem, ...]:
    """Put the sheet in its place; nothing that stands there is replaced, neither an issue nor an earlier answer."""
    failure = make_files({target: data})
    if not failure:
        return ()
    return one_problem("cannot-write", f"{str(target)[:200]} cannot be written", "the name of a new file", failure,
                       "name the PDF after -o")  # fmt: skip
