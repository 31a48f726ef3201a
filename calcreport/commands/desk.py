"""What commands share: finding the project, saying problems, showing progress. Prints; decides nothing else."""

from __future__ import annotations

import json
import os
import sys
from dataclasses import dataclass
from hashlib import sha256
from pathlib import Path

from calcreport.core.problems import MOST_KEPT, Problem, Problems, render, to_json
from calcreport.core.source import Source
from calcreport.filesystem import ISSUE_RECORD, Disk, library_folder, read_text
from calcreport.history.frozen import Frozen
from calcreport.read.issued import IssueRecord, read_issue


@dataclass(frozen=True, slots=True)
class Opened:
    """A project file with the world it lives in."""

    #: the project file, of an issue its folder
    path: Path
    world: Disk | Frozen
    source: Source
    #: what the record says where a frozen issue was opened
    issue: IssueRecord | None = None

    def beside(self, ending: str) -> Path:
        """Return where a result is written if not told: beside the project file, or beside the folder of an issue."""
        return self.path.with_name(self.path.name + ending) if self.issue else self.path.with_suffix(ending)


def open_project(name: str) -> Opened | tuple[Problem, ...]:
    """Open a project file, the `project.yaml` of a folder, or a folder that holds a frozen issue.

    Returns the problems where it cannot be read, or where an issue is not as it was frozen.
    """
    if os.path.isfile(os.path.join(name, ISSUE_RECORD)):
        return open_issue(Path(name))
    path = Path(name, "project.yaml") if os.path.isdir(name) else Path(name)
    found = read_text(path.parent, path.name)
    if isinstance(found, str):
        return one_problem(
            "no-file", f"{str(path)[:200]} cannot be read", "a project file, or a folder with project.yaml", found
        )
    return Opened(path, Disk(path.parent, library_folder()), found)


def open_issue(folder: Path) -> Opened | tuple[Problem, ...]:
    """Open a frozen issue; every file of it is held against its digest first."""
    folder = folder if folder.name else Path(os.path.abspath(folder))
    problems = Problems()
    record = open_record(folder, problems)
    if record is None:
        return problems.sorted()
    disk = Disk(folder, folder)
    files: dict[str, bytes] = {}
    for name, digest in record.files.items():
        data = disk.project_bytes(name)
        found = sha256(data).hexdigest() if isinstance(data, bytes) else data
        if isinstance(data, bytes) and found == digest:
            files[name] = data
            continue
        problems.add("issue-altered", record.places[name], f"`{name[:80]}` is not the file that was issued",
                     expected="the file with this digest",
                     found=f"one with the digest {found[:16]}…" if isinstance(data, bytes) else found,
                     hint="put the file back as it was issued; what has changed belongs in the next issue")  # fmt: skip
    if problems:
        return problems.sorted()
    world = Frozen(files, folder.as_posix())
    source = world.project()
    if isinstance(source, str):
        return one_problem("no-file", f"{folder} cannot be built", "a frozen project file", source)
    return Opened(folder, world, source, record)


def open_record(folder: Path, problems: Problems) -> IssueRecord | None:
    """Return what the record of an issue says, or None after adding why it cannot be read."""
    found = read_text(folder, ISSUE_RECORD)
    if isinstance(found, str):
        problems.add("no-file", None, f"{folder / ISSUE_RECORD} cannot be read", expected="the record of an issue",
                     found=found)  # fmt: skip
        return None
    return read_issue(found, problems)


def one_problem(slug: str, message: str, expected: str, found: str, hint: str = "") -> tuple[Problem, ...]:
    """Return a problem that has no place in a file."""
    problems = Problems()
    problems.add(slug, None, message, expected=expected, found=found, hint=hint)
    return problems.sorted()


def say_problems(problems: tuple[Problem, ...], as_json: bool = False, *, tail: str = "") -> int:
    """Print problems and return exit code 2; `tail` says what became of the work."""
    if as_json:
        print(json.dumps({"problems": [to_json(problem) for problem in problems]}, indent=1, ensure_ascii=False))
        return 2
    for problem in problems:
        print(render(problem), file=sys.stderr)
    many = f"{len(problems)} or more problems" if len(problems) >= MOST_KEPT else f"{len(problems)} problems"
    count = "1 problem" if len(problems) == 1 else many
    slugs = list(dict.fromkeys(problem.slug for problem in problems))
    print(f"{count}{tail}. `calcreport explain {slugs[0]}` tells more.", file=sys.stderr)
    return 2


UNWRITTEN = "; nothing was written"


class ProgressLine:
    """Shows progress on one terminal line while a person is watching; prints nothing otherwise."""

    def __init__(self) -> None:
        self.watched = sys.stderr.isatty()
        self.shown = ""

    def __call__(self, stage: str, done: int, total: int) -> None:
        """Show how far a stage is; quiet for short work."""
        if not self.watched or (total < 20 and stage in ("working", "composing")):
            return
        if total > 1 and done % max(1, total // 50) and done != total:
            return
        words = f"{stage} {done} of {total}" if total > 1 else stage
        sys.stderr.write("\r" + words.ljust(len(self.shown)))
        sys.stderr.flush()
        self.shown = words

    def clear(self) -> None:
        """Take the line away."""
        if self.shown:
            sys.stderr.write("\r" + " " * len(self.shown) + "\r")
            sys.stderr.flush()
            self.shown = ""
