"""`calcreport compare`: two issues, projects or packages held against each other; what differs, and what does not."""

from __future__ import annotations

import json
from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import ProgressLine, one_problem, open_project, say_problems
from calcreport.core.problems import Problem
from calcreport.filesystem import Disk, begins_with
from calcreport.history.comparison import compare_issues
from calcreport.history.frozen import VALUES, Frozen
from calcreport.history.issued import issued, read_values
from calcreport.history.model import Issued
from calcreport.history.package import read_package
from calcreport.publish import build
from calcreport.report.changes_text import changes_lines, changes_object


def run(arguments: Namespace) -> int:
    """Compare; 0 where nothing differs, 1 where something does, 2 where a side cannot be read."""
    sides: list[Issued] = []
    for name in (arguments.old, arguments.new):
        found = _side(name)
        if isinstance(found, tuple):
            return say_problems(found, arguments.json, tail="; nothing was compared")
        sides.append(found)
    comparison = compare_issues(*sides)
    if arguments.json:
        print(json.dumps(changes_object(comparison), indent=1, ensure_ascii=False))
    else:
        for line in changes_lines(comparison):
            print(line)
    return 1 if comparison.differs else 0


def _side(name: str) -> Issued | tuple[Problem, ...]:
    """Return what a side came to: a package's or an issue's values as frozen, a project's as they are now."""
    if begins_with(Path(name), b"%PDF-"):
        return _told(name, _attached(Path(name)))
    opened = open_project(name)
    if isinstance(opened, tuple):
        return opened
    if isinstance(opened.world, Frozen):
        return _told(name, opened.world.files.get(VALUES, f"an issue without {VALUES}"))
    progress = ProgressLine()
    package = build(opened.world, opened.source, progress)
    progress.clear()
    return package.problems or _told(name, package.files[VALUES])


def _attached(path: Path) -> bytes | str:
    """Return the values inside a PDF, or why there are none."""
    data = Disk(path.parent, path.parent).project_bytes(path.name)
    found = read_package(data) if isinstance(data, bytes) else data
    if isinstance(found, str):
        return found
    return found.files.get(VALUES, f"a PDF that carries no {VALUES}")


def _told(name: str, data: bytes | str) -> Issued | tuple[Problem, ...]:
    """Return what a values file tells, or the problem where it tells nothing."""
    found = read_values(data) if isinstance(data, bytes) else data
    side = issued(found) if isinstance(found, dict) else found
    if isinstance(side, Issued):
        return side
    expected = "an issue, a project or a package with its values"
    hint = "an issue is a folder of `issues/`; a package carries its values unless it was built without attachments"
    return one_problem("no-values", f"{name[:200]} cannot be compared", expected, side, hint)
