"""`calcreport schedule`: a row a member, for the schedule on the drawings, as CSV or XLSX."""

from __future__ import annotations

import os
import sys
from argparse import Namespace
from pathlib import Path

from calcreport.calculate.release import hold_release
from calcreport.commands.desk import UNWRITTEN, ProgressLine, one_problem, open_project, say_problems
from calcreport.core.problems import Problem, Problems
from calcreport.driver import work
from calcreport.filesystem import begins_with, replace_file
from calcreport.output.spreadsheet import CSV_MARK, XLSX_MARK, csv_bytes, xlsx_bytes
from calcreport.report.confirmations import find_forms
from calcreport.report.members import HEADINGS, members

_ENDINGS = (".csv", ".xlsx")


def run(arguments: Namespace) -> int:
    """Write the schedule; one that stands there stays whole unless the new one is finished."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, tail=UNWRITTEN)
    target = Path(arguments.output) if arguments.output else None
    if target is not None and target.suffix.lower() not in _ENDINGS:
        return say_problems(
            one_problem("cannot-write", f"{str(target)[:200]} is no name for a schedule",
                        "a name ending in " + " or ".join(_ENDINGS), target.suffix or "no ending"),
            tail=UNWRITTEN,
        )  # fmt: skip
    progress = ProgressLine()
    result = work(opened.world, opened.source, progress)
    progress.clear()
    problems = Problems()
    if result.worked is not None and not result.problems:
        hold_release(result.worked, problems)
    if result.worked is None or result.problems or problems:
        return say_problems(result.problems or problems.sorted(), tail=UNWRITTEN)
    rows = (HEADINGS, *members(result.worked, find_forms(result.worked)))
    failure = _put(rows, target)
    if failure:
        return say_problems(failure, tail=UNWRITTEN)
    return 1 if any(w.verdict != "OK" for w in result.worked.calculations) else 0


def _put(rows: tuple[tuple[str, ...], ...], target: Path | None) -> tuple[Problem, ...]:
    if target is None:
        print(csv_bytes(rows).decode("utf-8-sig").replace("\r\n", "\n"), end="")
        return ()
    book = target.suffix.lower() == ".xlsx"
    mark = XLSX_MARK if book else CSV_MARK + ",".join(HEADINGS).encode()
    if os.path.isfile(target) and os.path.getsize(target) and not begins_with(target, mark):
        return one_problem("cannot-write", f"{target} is kept as it is", "a new name, or a schedule of this program",
                           "a file that is no such schedule", "name the schedule after -o")  # fmt: skip
    failure = replace_file(target, xlsx_bytes(rows, "Schedule") if book else csv_bytes(rows))
    if failure:
        return one_problem("cannot-write", f"{target} cannot be written", "a folder that can be written to", failure)
    print(f"{target}: {len(rows) - 1} members", file=sys.stderr)
    return ()
