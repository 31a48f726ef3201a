"""`calcreport issue`: freezes a project beside its file, with the package, and enters it in the revision record.

The row of the record: the last one where it has not been issued yet, its date the project's; else a new one after it.
Everything is built before anything is written, the files frozen are built once more, and either all is there in the end
or nothing: the folder is written beside its place, then the row is put into the project file, then the folder is moved.
A run killed between the last two leaves a row that is not issued yet, which the next run takes.
"""

from __future__ import annotations

import json
import os
from argparse import Namespace
from dataclasses import dataclass
from hashlib import sha256
from pathlib import Path

from calcreport.calculate.release import hold_release
from calcreport.commands.desk import UNWRITTEN, Opened, ProgressLine, one_problem, open_project, say_problems
from calcreport.commands.record_row import Row, choose_row
from calcreport.commands.since import other_project, selection_words, selections
from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source
from calcreport.core.version import PROGRAM
from calcreport.driver import work
from calcreport.filesystem import ISSUE_RECORD, ISSUES, Disk, library_folder, put_folder, replace_file, stands
from calcreport.history.frozen import INPUTS, PACKAGE, TEMPLATES, Frozen
from calcreport.publish import Package, build
from calcreport.read.issued import IssueRecord, issue_text
from calcreport.read.revision_record import inserted_raw
from calcreport.report.summary import summary_lines


@dataclass(frozen=True, slots=True)
class _Issue:
    """All that is to be written."""

    folder: Path
    record: IssueRecord
    files: dict[str, bytes]
    package: Package
    #: the project file before, and as it is to stand; the same where the record has its row
    raw: bytes
    edited: bytes


def run(arguments: Namespace) -> int:
    """Issue; an issue that stands there is never written over."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json, tail=UNWRITTEN)
    progress = ProgressLine()
    made = _make(opened, arguments.why, arguments.number, progress)
    progress.clear()
    problems = made if isinstance(made, tuple) else _put(opened.path, made)
    if problems or isinstance(made, tuple):
        return say_problems(problems, arguments.json, tail=UNWRITTEN)
    return _tell(made, arguments.json)


def _make(opened: Opened, why: str | None, number: str | None, progress: ProgressLine) -> _Issue | tuple[Problem, ...]:
    """Build what is to be written, or return why it cannot be issued."""
    if isinstance(opened.world, Frozen):
        return one_problem("not-an-issue", f"{opened.path} is issued already", "a project", "a frozen issue")
    # problems stand where the author's text has them, before a row is put in
    first, problems = work(opened.world, opened.source, progress), Problems()
    if first.worked is not None and not first.problems:
        hold_release(first.worked, problems)
    if first.worked is None or first.problems or problems:
        return first.problems or problems.sorted()
    issues = opened.path.parent / ISSUES
    if os.path.lexists(issues) and Path(os.path.realpath(issues)).parent != Path(os.path.realpath(issues.parent)):
        return one_problem("cannot-write", f"{issues} leads elsewhere", "a folder beside the project file", "a link")
    last = first.worked.project.issues[-1].number if first.worked.project.issues else ""
    if other := other_project(opened, last):
        return one_problem("issue-exists", f"issue {last} beside {opened.path.name} is of another project",
                           "a folder for each project", f"issues of {other}",
                           "move one of the two with all it reads; its issues go with it")  # fmt: skip
    row = choose_row(opened.source, first.worked.project, why, number, lambda name: stands(issues / name), problems)
    raw = opened.world.project_bytes(opened.path.name)
    if row is None or isinstance(raw, str):
        return problems.sorted() or one_problem(
            "no-file", f"{opened.path} cannot be read", "the project file", str(raw)
        )
    return _built(opened, row, raw, progress)


def _built(opened: Opened, row: Row, raw: bytes, progress: ProgressLine) -> _Issue | tuple[Problem, ...]:
    source = Source(opened.source.name, row.text, opened.source.folder)
    package = build(opened.world, source, progress)
    if package.problems or package.worked is None:
        return package.problems
    frozen = Frozen(package.files)
    again = frozen.project()
    if isinstance(again, str) or build(frozen, again, progress).data != package.data:
        return one_problem("issue-altered", "the package does not come out of the files frozen with it",
                           "the same bytes twice", "others the second time",
                           "a file was saved meanwhile, or a link leads to another one: issue again")  # fmt: skip
    files = package.files | {PACKAGE: package.data}
    facts = package.worked.project
    digests = {name: sha256(data).hexdigest() for name, data in files.items()}
    record = IssueRecord(row.issue, facts.status, PROGRAM, selections(package.worked), digests)
    files |= {ISSUE_RECORD: issue_text(record).encode()}
    edited = inserted_raw(raw.decode(), row.insertions).encode() if row.insertions else raw
    return _Issue(opened.path.parent / ISSUES / row.issue.number, record, files, package, raw, edited)


def _put(path: Path, made: _Issue) -> tuple[Problem, ...]:
    """Write the issue and the row, both or neither; returns why not."""
    # a link to the project file stays one
    real = Path(os.path.realpath(path))
    entered = False

    def enter() -> str:
        nonlocal entered
        if Disk(path.parent, path.parent).project_bytes(path.name) != made.raw:
            return f"{path.name} was saved meanwhile"
        if made.edited == made.raw:
            return ""
        if not os.access(real, os.W_OK):
            return f"{path.name} may not be written to, and its revision record needs a row"
        why = replace_file(real, made.edited)
        entered = not why
        return why

    why = put_folder(made.folder, made.files, enter)
    if why and entered:
        lost = replace_file(real, made.raw)
        why += f"; the row of issue {made.record.issue.number} stays in {path.name}: {lost}" if lost else ""
    if not why:
        return ()
    return one_problem("cannot-write", f"{made.folder} cannot be written", "a folder that can be written to", why)


def _tell(made: _Issue, as_json: bool) -> int:
    package, record, issue = made.package, made.record, made.record.issue
    assert package.worked is not None and package.composed is not None and package.pages is not None
    summary, sheets = package.composed.summary, len(package.pages.pages)
    if as_json:
        print(json.dumps({"issue": issue.number, "folder": str(made.folder), "row_added": made.edited != made.raw,
                          "files": sorted(made.files), "selections": record.selections, "sheets": sheets,
                          "failed": [list(pair) for pair in summary.failed],
                          "not_evaluated": summary.not_evaluated}))  # fmt: skip
    else:
        for line in summary_lines(package.worked, package.composed.forms, summary):
            print(line)
        print(f"issue {issue.number} of {issue.date}, {record.status}: {issue.why}")
        print(f"  record      {'a row more in the project file' if made.edited != made.raw else 'the row it had'}")
        inputs, templates = (
            [name.removeprefix(kind) for name in sorted(made.files) if name.startswith(kind)]
            for kind in (INPUTS, TEMPLATES)
        )
        library = library_folder()
        own = [name for name in templates if not stands(library / name)]
        print(f"  inputs      {', '.join(inputs)}")
        print(f"  templates   {len(templates)} files{', of the project: ' + ', '.join(own) if own else ''}")
        for mark, values in record.selections.items():
            print(f"  selection   {mark}: {selection_words(values)}")
        print(f"  values      of {len(package.worked.calculations)} calculations")
        print(f"{made.folder}: {len(made.files)} files, {sheets} sheets")
    return 1 if summary.failed or summary.not_evaluated else 0
