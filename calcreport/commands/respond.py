"""`calcreport respond`: the letter and the comment-response matrix that answer a plan review."""

from __future__ import annotations

import json
from argparse import Namespace
from pathlib import Path

from calcreport.commands.build import put_package
from calcreport.commands.desk import UNWRITTEN, ProgressLine, one_problem, open_project, say_problems
from calcreport.commands.responding import Responded, respond
from calcreport.core.source import Source
from calcreport.filesystem import read_text
from calcreport.report.answers import answers_object


def run(arguments: Namespace) -> int:
    """Write letter and matrix; an earlier PDF stays whole unless the new one is finished."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json, tail=UNWRITTEN)
    path = Path(arguments.comments)
    comments = read_text(path.parent, path.name)
    if not isinstance(comments, Source):
        missing = one_problem("no-file", f"{str(path)[:200]} cannot be read", "a comment log", comments)
        return say_problems(missing, arguments.json, tail=UNWRITTEN)
    progress = ProgressLine()
    responded = respond(opened.world, opened.source, comments, progress)
    progress.clear()
    if responded.problems or responded.pages is None:
        return say_problems(responded.problems, arguments.json, tail=UNWRITTEN)
    target = Path(arguments.output) if arguments.output else path.with_suffix(".pdf")
    failure = put_package(target, responded.data)
    if failure:
        return say_problems(failure, arguments.json, tail=UNWRITTEN)
    return _tell(responded, target, arguments.json)


def _tell(responded: Responded, target: Path, as_json: bool) -> int:
    package, log = responded.package, responded.log
    assert package.worked is not None and package.composed is not None and log is not None
    assert responded.pages is not None
    if as_json:
        found = answers_object(package.worked, log, responded.answers) | {"response": str(target)}
        print(json.dumps(found, indent=1, ensure_ascii=False))
    else:
        for answer in responded.answers:
            where = "; ".join(place.text for place in answer.where)
            print(f"{answer.comment.number:>5}  {answer.comment.status:<10} {where}")
        print(f"{target}: {len(responded.pages.pages)} sheets")
    summary = package.composed.summary
    return 1 if summary.failed or summary.not_evaluated else 0
