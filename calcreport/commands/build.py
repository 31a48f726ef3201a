"""`calcreport build`: the package as PDF, with a short check summary on the terminal."""

from __future__ import annotations

import json
from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import ProgressLine, open_project, say_problems
from calcreport.core.problems import Problems
from calcreport.filesystem import replace_file
from calcreport.publish import Package, build
from calcreport.report.summary import summary_lines


def run(arguments: Namespace) -> int:
    """Build; an earlier PDF stays whole unless the new one is finished."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json)
    progress = ProgressLine()
    package = build(opened.world, opened.source, progress)
    progress.clear()
    if package.problems:
        return say_problems(package.problems, arguments.json)
    target = Path(arguments.output) if arguments.output else opened.path.with_suffix(".pdf")
    failure = replace_file(target, package.data)
    if failure:
        problems = Problems()
        problems.add("cannot-write", None, f"{target} cannot be written", expected="a folder that can be written to",
                     found=failure)  # fmt: skip
        return say_problems(problems.sorted(), arguments.json)
    return _tell(package, target, arguments.json)


def _tell(package: Package, target: Path, as_json: bool) -> int:
    assert package.worked is not None and package.composed is not None and package.pages is not None
    summary = package.composed.summary
    sheets = len(package.pages.pages)
    if as_json:
        print(json.dumps({"package": str(target), "sheets": sheets, "failed": [list(pair) for pair in summary.failed],
                          "not_evaluated": summary.not_evaluated}))  # fmt: skip
    else:
        for line in summary_lines(package.worked, package.composed.forms, summary):
            print(line)
        print(f"{target}: {sheets} sheets")
    return 1 if summary.failed or summary.not_evaluated else 0
