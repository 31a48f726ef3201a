"""`calcreport lint`: every problem of a project or a template, with its place; a template's cases are run."""

from __future__ import annotations

import json
import os
from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import open_project, say_problems
from calcreport.core.source import Source
from calcreport.driver import lint_template, work
from calcreport.filesystem import Disk, library_folder, read_text

#: keys that only a template, and only a project, has at its left margin
_TEMPLATE, _PROJECT = ("template:", "lines:", "given:"), ("calculations:", "project:", "office:")


def run(arguments: Namespace) -> int:
    """Lint a template by its name or file, or a project."""
    name = _template_name(arguments.file)
    if name is not None:
        return _template(*name, as_json=arguments.json)
    opened = open_project(arguments.file)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json)
    result = work(opened.world, opened.source)
    if result.problems:
        return say_problems(result.problems, arguments.json)
    assert result.worked is not None
    verdicts = [worked.verdict for worked in result.worked.calculations]
    failed = sum(verdict != "OK" for verdict in verdicts)
    if arguments.json:
        print(json.dumps({"problems": [], "calculations": len(verdicts), "not OK": failed}))
    else:
        print(f"no problems: {len(verdicts)} calculations, {failed} with a check NG or not evaluated")
    return 1 if failed else 0


def _template_name(file: str) -> tuple[Disk, str] | None:
    """Return a template's name and world where the argument is one: a library name, or a template's file."""
    library = library_folder()
    if not os.path.exists(file) and isinstance(read_text(library, f"{file}.yaml"), Source):
        return Disk(Path("."), library), file
    # a case file stands for the template it belongs to
    path = Path(file.removesuffix(".cases.yaml") + ".yaml") if file.endswith(".cases.yaml") else Path(file)
    if path.suffix != ".yaml":
        return None
    found = read_text(path.parent, path.name)
    if not isinstance(found, Source) or not _is_template(found.text):
        return None
    real = path.resolve()
    if library.resolve() in real.parents:
        return Disk(Path("."), library), real.relative_to(library.resolve()).with_suffix("").as_posix()
    return Disk(path.parent, library), path.stem


def _is_template(text: str) -> bool:
    lines = text.split("\n")
    return any(line.startswith(_TEMPLATE) for line in lines) and not any(line.startswith(_PROJECT) for line in lines)


def _template(disk: Disk, name: str, *, as_json: bool) -> int:
    report = lint_template(disk, name)
    if report.problems:
        return say_problems(report.problems, as_json)
    if as_json:
        print(json.dumps({"problems": [], "variants": report.variants, "cases": report.cases}))
    else:
        print(f"{name}: no problems in {', '.join(report.variants)}; {report.cases} cases agree")
    return 0
