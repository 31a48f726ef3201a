"""`calcreport lint`: every problem of a project or a template, with its place; a template's cases are run."""

from __future__ import annotations

import json
import os
from argparse import Namespace
from pathlib import Path

from calcreport.calculate.reached import Unreached
from calcreport.commands.desk import one_problem, open_project, say_problems
from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.driver import TemplateReport, lint_template, work
from calcreport.filesystem import Disk, library_folder, read_text
from calcreport.read.nodes import Mapping, read_tree

#: keys that only a template, and only a project, has at its left margin
_HEADER = ("project", "office", "codes", "status", "revisions")
_TEMPLATE, _PROJECT = ("template:", "lines:", "given:"), ("calculations:", "project:", "office:")


def run(arguments: Namespace) -> int:
    """Lint a template by its name or file, or a project."""
    name = _template_name(arguments.file)
    if name is not None:
        return _template(*name, as_json=arguments.json, strict=arguments.strict)
    opened = open_project(arguments.file)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json)
    if not os.path.isdir(arguments.file) and _is_neither(opened.source):
        return say_problems(
            one_problem("wrong-shape", f"{arguments.file} is neither a project nor a template",
                        "a project file, a template file, or a template's name",
                        "neither `project:` nor `template:` at the left margin",
                        "an included file is read with the project that includes it, a comment log by `respond`"),
            arguments.json,
        )  # fmt: skip
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


def _is_neither(source: Source) -> bool:
    """Tell whether a file is well formed and yet has none of a project's own keys: an included file, a notation."""
    tree = read_tree(source, Problems())
    return isinstance(tree, Mapping) and bool(tree.entries) and not any(tree.get(key) for key in _HEADER)


def _template(disk: Disk, name: str, *, as_json: bool, strict: bool) -> int:
    report = lint_template(disk, name)
    if report.problems:
        return say_problems(report.problems, as_json)
    left = [one for one in report.unreached if not one.because]
    if as_json:
        found = {"problems": [], "variants": report.variants, "cases": report.cases or 0}
        print(json.dumps({**found, "unreached": [_unreached(one) for one in report.unreached]}, ensure_ascii=False))
    else:
        for line in _told(name, report, left):
            print(line)
    return 1 if strict and left else 0


def _told(name: str, report: TemplateReport, left: list[Unreached]) -> list[str]:
    """Return what is said of a template without problems."""
    head = f"{name}: no problems in {', '.join(report.variants)}; "
    if report.cases is None:
        file = f"{name.rpartition('/')[2]}.cases.yaml"
        return [f"{head}no cases", f"no case reaches anything: there is no {file} beside the template"]
    cases = "1 case agrees" if report.cases == 1 else f"{report.cases} cases agree"
    rows = [head + cases]
    if left:
        rows.append(f"no case reaches {'this' if len(left) == 1 else f'these {len(left)}'}:")
        rows += [f"  {_place(one)}  {one.thing.says}{_where(one)}" for one in left]
    because = [one for one in report.unreached if one.because]
    if because:
        rows.append(
            f"no case reaches {'this' if len(because) == 1 else f'these {len(because)}'}, for the reason given:"
        )
        rows += [f"  {_place(one)}  {one.thing.says}{_where(one)}: {one.because}" for one in because]
    return rows


def _place(one: Unreached) -> str:
    span = one.thing.span
    return f"{span.source.shown}:{span.source.place(span.start)[0]}"


def _where(one: Unreached) -> str:
    return f" ({', '.join(one.variants)})" if one.variants else ""


def _unreached(one: Unreached) -> dict[str, object]:
    """Return a thing no case reaches for machines."""
    line, column = one.thing.span.source.place(one.thing.span.start)
    return {
        "file": one.thing.span.source.shown,
        "line": line,
        "column": column,
        "kind": one.thing.kind,
        "says": one.thing.says,
        "in": list(one.variants),
        "because": one.because,
    }
