"""`calcreport build`: the package as PDF, with a short check summary on the terminal."""

from __future__ import annotations

import json
import os
from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import UNWRITTEN, ProgressLine, one_problem, open_project, say_problems
from calcreport.commands.since import Since
from calcreport.core.problems import Problem
from calcreport.filesystem import begins_with, replace_file
from calcreport.history.frozen import Frozen, marks_of
from calcreport.publish import Package, Sampling, build
from calcreport.report.summary import summary_lines


def run(arguments: Namespace) -> int:
    """Build; an earlier PDF stays whole unless the new one is finished."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json, tail=UNWRITTEN)
    if arguments.superseded and opened.issue is None:
        wrong = one_problem("not-an-issue", f"{opened.path} is a project, not an issue", "a folder of `issues`",
                            "a project file", "a project says `status: superseded` itself")  # fmt: skip
        return say_problems(wrong, arguments.json, tail=UNWRITTEN)
    progress = ProgressLine()
    sampled: Sampling = "added" if arguments.sampler else "no"
    made = marks_of(opened.world.files) if isinstance(opened.world, Frozen) else "last"
    marks = arguments.marks or made
    attached = not arguments.no_attachments
    package = build(opened.world, opened.source, progress, arguments.second_path, sampled=sampled,
                    status="superseded" if arguments.superseded else "", attached=attached, marks=marks)  # fmt: skip
    progress.clear()
    if package.problems:
        return say_problems(package.problems, arguments.json, tail=UNWRITTEN)
    ending = "-superseded.pdf" if arguments.superseded else ".pdf"
    target = Path(arguments.output) if arguments.output else opened.beside(ending)
    failure = put_package(target, package.data)
    if failure:
        return say_problems(failure, arguments.json, tail=UNWRITTEN)
    plain = attached and marks == made and not (arguments.second_path or arguments.sampler or arguments.superseded)
    return _tell(package, target, arguments.json, Since(opened, package, plain))


def put_package(target: Path, data: bytes) -> tuple[Problem, ...]:
    """Put the PDF in its place; only an earlier PDF may be replaced, never a project file given by mistake."""
    if os.path.isfile(target) and os.path.getsize(target) and not begins_with(target, b"%PDF-"):
        return one_problem("cannot-write", f"{target} is kept as it is", "a new name, or an earlier PDF",
                           "a file that is no PDF", "name the PDF after -o")  # fmt: skip
    failure = replace_file(target, data)
    if not failure:
        return ()
    return one_problem("cannot-write", f"{target} cannot be written", "a folder that can be written to", failure)


def _tell(package: Package, target: Path, as_json: bool, since: Since) -> int:
    assert package.worked is not None and package.composed is not None and package.pages is not None
    summary = package.composed.summary
    sheets = len(package.pages.pages)
    if as_json:
        found = {"package": str(target), "sheets": sheets, "failed": [list(pair) for pair in summary.failed],
                 "not_evaluated": summary.not_evaluated}  # fmt: skip
        print(json.dumps(found | since.facts()))
    else:
        for line in summary_lines(package.worked, package.composed.forms, summary):
            print(line)
        for words in package.agreement.words if package.agreement else ():
            print(f"second path: {words}")
        for words in since.words():
            print(words)
        print(f"{target}: {sheets} sheets")
    parted = package.agreement is not None and bool(package.agreement.differences)
    return 1 if summary.failed or summary.not_evaluated or parted or since.differs else 0
