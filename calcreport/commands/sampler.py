"""`calcreport sampler`: the reviewer's sampler of a package as one sheet."""

from __future__ import annotations

import json
from argparse import Namespace
from pathlib import Path

from calcreport.commands.build import put_package
from calcreport.commands.desk import UNWRITTEN, ProgressLine, open_project, say_problems
from calcreport.publish import build
from calcreport.report.sampler import MARK


def run(arguments: Namespace) -> int:
    """Write the sheet; an earlier PDF stays whole unless the new one is finished."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json, tail=UNWRITTEN)
    progress = ProgressLine()
    package = build(opened.world, opened.source, progress, sampled="alone")
    progress.clear()
    if package.problems or package.composed is None:
        return say_problems(package.problems, arguments.json, tail=UNWRITTEN)
    target = Path(arguments.output) if arguments.output else opened.beside(f".{MARK.lower()}.pdf")
    failure = put_package(target, package.data)
    if failure:
        return say_problems(failure, arguments.json, tail=UNWRITTEN)
    print(json.dumps({"sampler": str(target)}) if arguments.json else f"{target}: 1 sheet")
    return 1 if package.composed.summary.failed or package.composed.summary.not_evaluated else 0
