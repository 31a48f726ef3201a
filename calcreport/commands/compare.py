"""`calcreport compare`: two issues, projects or packages held against each other; what differs, and what does not."""

from __future__ import annotations

import json
import os
from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import ProgressLine, one_problem, open_project, say_problems
from calcreport.core.problems import Problem
from calcreport.filesystem import Disk, begins_with
from calcreport.history.comparison import compare_issues
from calcreport.history.frozen import VALUES
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
    data: bytes | str
    if begins_with(Path(name), b"%PDF-"):
        data = _attached(Path(name))
    elif os.path.isfile(os.path.join(name, VALUES)):
        data = _bytes(Path(name, VALUES))
    else:
        return _worked(name)
    found = read_values(data) if isinstance(data, bytes) else data
    side = issued(found) if isinstance(found, dict) else found
    return side if isinstance(side, Issued) else _unreadable(name, side)


def _attached(path: Path) -> bytes | str:
    """Return the values inside a PDF, or why there are none."""
    data = _bytes(path)
    found = read_package(data) if isinstance(data, bytes) else data
    if isinstance(found, str):
        return found
    return found.files.get(VALUES, f"a PDF that carries no {VALUES}")


def _bytes(path: Path) -> bytes | str:
    return Disk(path.parent, path.parent).project_bytes(path.name)


def _worked(name: str) -> Issued | tuple[Problem, ...]:
    opened = open_project(name)
    if isinstance(opened, tuple):
        return opened
    progress = ProgressLine()
    package = build(opened.world, opened.source, progress)
    progress.clear()
    if package.problems:
        return package.problems
    values = read_values(package.files[VALUES])
    assert isinstance(values, dict)
    side = issued(values)
    assert isinstance(side, Issued)
    return side


def _unreadable(name: str, why: str) -> tuple[Problem, ...]:
    expected = "an issue, a project or a package with its values"
    hint = "an issue is a folder of `issues/` with values.json; a package carries it"
    return one_problem("no-values", f"{name[:200]} cannot be compared", expected, why, hint)
