"""`calcreport new`: a small project that builds."""

from __future__ import annotations

from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import say_problems
from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.filesystem import library_folder, read_text, replace_file


def run(arguments: Namespace) -> int:
    """Write the starter project into a new or empty folder."""
    folder = Path(arguments.folder)
    problems = Problems()
    if folder.exists() and (not folder.is_dir() or any(folder.iterdir())):
        problems.add("cannot-write", None, f"{folder} is not empty", expected="a new or empty folder", found="files in it")
        return say_problems(problems.sorted())
    starter = read_text(library_folder(), "starter/project.yaml")
    assert isinstance(starter, Source)
    failure = ""
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        failure = error.strerror or "it cannot be made"
    failure = failure or replace_file(folder / "project.yaml", starter.text.encode())
    if failure:
        problems.add("cannot-write", None, f"{folder} cannot be written", expected="a folder that can be made", found=failure)
        return say_problems(problems.sorted())
    print(f"{folder / 'project.yaml'} is ready: edit it, then run  calcreport build {folder}")
    return 0
