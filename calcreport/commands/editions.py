"""`calcreport editions`: the same given values worked to another edition of a code, and what differs."""

from __future__ import annotations

import json
import os
from argparse import Namespace
from pathlib import Path

from calcreport.calculate.model import Worked, WorkedProject
from calcreport.commands.desk import UNWRITTEN, Opened, ProgressLine, one_problem, open_project, say_problems
from calcreport.commands.sides import accounted, make_side
from calcreport.core.problems import Problem, nearest
from calcreport.driver import Instead, Result, work
from calcreport.filesystem import begins_with, replace_file
from calcreport.history.differences import differ
from calcreport.layout.fonts import installed_fonts
from calcreport.layout.paginate import lay_out
from calcreport.output.pdf import write_pdf
from calcreport.report.compared import Compared
from calcreport.report.editions import editions_report
from calcreport.report.editions_text import editions_lines, editions_object

#: in place of a mark: every calculation
ALL = "all"


def run(arguments: Namespace) -> int:
    """Compare; 0 where nothing differs, 1 where something does or cannot be compared, 2 for problems."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json, tail=UNWRITTEN)
    field, edition = ("concrete", arguments.concrete) if arguments.concrete else ("loads", arguments.loads)
    progress = ProgressLine()
    compared = compare(opened, field, edition, arguments.mark, progress)
    progress.clear()
    if isinstance(compared, tuple):
        return say_problems(compared, arguments.json, tail=UNWRITTEN)
    if arguments.output:
        failure = _write(compared, Path(arguments.output))
        if failure:
            return say_problems(failure, arguments.json, tail=UNWRITTEN)
    if arguments.json:
        print(json.dumps(editions_object(compared), indent=1, ensure_ascii=False))
    else:
        for line in editions_lines(compared):
            print(line)
    return 1 if compared.differ else 0


def compare(
    opened: Opened, field: str, edition: str, mark: str, progress: ProgressLine
) -> Compared | tuple[Problem, ...]:
    """Work a project to its own editions and to another one; returns the problems where that cannot be."""
    first = work(opened.world, opened.source, progress)
    if first.problems or first.worked is None:
        return first.problems
    taken = {w.calculation.mark: w.selection.used for w in first.worked.calculations if w.selection is not None}
    second = work(opened.world, opened.source, progress, Instead(field, edition, taken))
    if second.worked is None or _taken(second.worked, field) in (_taken(first.worked, field), ""):
        return second.problems
    marks = [w.calculation.mark for w in first.worked.calculations if mark in (ALL, w.calculation.mark)]
    if not marks:
        known = [ALL, *(w.calculation.mark for w in first.worked.calculations)]
        return one_problem("unknown-name", f"there is no calculation `{mark[:40]}`", "a mark of this project, or all",
                           mark[:40], nearest(mark, known))  # fmt: skip
    there = {w.calculation.mark: w for w in second.worked.calculations}
    chosen = [w for w in first.worked.calculations if w.calculation.mark in marks]
    pairs = [(w, there[w.calculation.mark]) for w in chosen if w.calculation.mark in there]
    if not pairs:
        return tuple(p for w in chosen for p in _own(second, w)) or second.problems
    design, other = (
        make_side(first.worked, _taken(first.worked, field)),
        make_side(second.worked, _taken(second.worked, field)),
    )
    differences = tuple(differ(accounted(one), accounted(two)) for one, two in pairs)
    apart = tuple((w.calculation.mark, _why(second, w)) for w in chosen if w.calculation.mark not in there)
    return Compared(first.worked, design, other, differences, apart, _foreign(second.worked, other.code))


def _taken(project: WorkedProject, field: str) -> str:
    """Return the edition a run took."""
    return dict(project.project.codes).get(field, "")


def _why(second: Result, worked: Worked) -> str:
    """Return why a calculation could not be worked to the other edition."""
    problems = _own(second, worked)
    if not problems:
        return "it takes values from a calculation that cannot be worked to that edition"
    return ". ".join(f"{p.message}: {p.expected}" if p.expected else p.message for p in problems[:2])


def _own(second: Result, worked: Worked) -> tuple[Problem, ...]:
    """Return the problems of one calculation: of its template, else of what stands after its mark in its file."""
    calculation = worked.calculation
    named = [p for p in second.problems if p.span is not None and p.span.text.strip("'\"") == calculation.template.name]
    if named:
        return tuple(named[:1])
    at = calculation.span
    end = at.start + len(calculation.input_text)
    there = [p for p in second.problems if p.span is not None and p.span.source.shown == at.source.shown]
    return tuple(p for p in there if p.span is not None and at.start <= p.span.start < end)


def _foreign(project: WorkedProject, code: str) -> str:
    """Say so where the adopted code does not refer to the other edition."""
    facts = project.project
    if not facts.foreign:
        return ""
    return f"{facts.codes[0][1]}, the adopted code, does not refer to {code} but to {facts.foreign}."


def _write(compared: Compared, target: Path) -> tuple[Problem, ...]:
    """Put the sheets in their place; only an earlier PDF may be replaced."""
    if os.path.isfile(target) and os.path.getsize(target) and not begins_with(target, b"%PDF-"):
        return one_problem("cannot-write", f"{target} is kept as it is", "a new name, or an earlier PDF",
                           "a file that is no PDF", "name the PDF after -o")  # fmt: skip
    fonts = installed_fonts()
    failure = replace_file(target, write_pdf(lay_out(editions_report(compared), fonts), fonts.files))
    if not failure:
        return ()
    return one_problem("cannot-write", f"{target} cannot be written", "a folder that can be written to", failure)
