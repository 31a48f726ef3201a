"""`calcreport new`: a small project that builds, or a small template with its cases."""

from __future__ import annotations

import re
from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import UNWRITTEN, one_problem, say_problems
from calcreport.core.source import Source
from calcreport.filesystem import library_folder, make_files, make_folder, read_text, replace_file

#: a name that a project can write under `template`
_NAME = re.compile(r"[A-Za-z][A-Za-z0-9_-]*")


def run(arguments: Namespace) -> int:
    """Write the starter project into a new or empty folder, or the starter template where no file stands."""
    return _project(Path(arguments.folder)) if arguments.template is None else _template(Path(arguments.template))


def _project(folder: Path) -> int:
    failure = make_folder(folder) or replace_file(folder / "project.yaml", _starter("project.yaml").encode())
    if failure:
        return say_problems(
            one_problem("cannot-write", f"{folder} cannot take a new project", "a new or empty folder", failure),
            tail=UNWRITTEN,
        )
    print(f"{folder / 'project.yaml'} is ready: edit it, then run  calcreport build {folder}")
    return 0


def _template(path: Path) -> int:
    name = path.name.removesuffix(".yaml")
    if path.suffix != ".yaml" or not _NAME.fullmatch(name):
        problem = one_problem(
            "cannot-write",
            f"{str(path)[:200]} cannot be a template",
            "a file name of letters, digits and hyphens that ends in .yaml",
            path.name[:80] or "nothing",
            "such as footing.yaml",
        )
        return say_problems(problem, tail=UNWRITTEN)
    cases = path.with_name(f"{name}.cases.yaml")
    text = re.sub(r"(?m)^template: [\w-]+", f"template: {name}", _starter("template.yaml"), count=1)
    failure = make_files({path: text.encode(), cases: _starter("template.cases.yaml").encode()})
    if failure:
        problem = one_problem(
            "cannot-write",
            f"{str(path)[:200]} cannot be started",
            f"a folder that is there, without {path.name[:80]} and {cases.name[:80]}",
            failure,
            "make the folder first, or give another name: nothing is overwritten",
        )
        return say_problems(problem, tail=UNWRITTEN)
    print(f"{path} and {cases.name} are ready: edit both, then run  calcreport lint {path}")
    return 0


def _starter(name: str) -> str:
    found = read_text(library_folder(), f"starter/{name}")
    assert isinstance(found, Source)
    return found.text
