"""`calcreport new`: a small project that builds."""

from __future__ import annotations

from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import UNWRITTEN, one_problem, say_problems
from calcreport.core.source import Source
from calcreport.filesystem import library_folder, make_folder, read_text, replace_file


def run(arguments: Namespace) -> int:
    """Write the starter project into a new or empty folder."""
    folder = Path(arguments.folder)
    starter = read_text(library_folder(), "starter/project.yaml")
    assert isinstance(starter, Source)
    failure = make_folder(folder) or replace_file(folder / "project.yaml", starter.text.encode())
    if failure:
        return say_problems(
            one_problem("cannot-write", f"{folder} cannot take a new project", "a new or empty folder", failure),
            tail=UNWRITTEN,
        )
    print(f"{folder / 'project.yaml'} is ready: edit it, then run  calcreport build {folder}")
    return 0
