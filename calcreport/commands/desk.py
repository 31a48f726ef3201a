"""What commands share: finding the project, saying problems, showing progress. Prints; decides nothing else."""

from __future__ import annotations

import json
import os
import sys
from dataclasses import dataclass
from pathlib import Path

from calcreport.core.problems import MOST_KEPT, Problem, Problems, render, to_json
from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder, read_text


@dataclass(frozen=True, slots=True)
class Opened:
    """A project file with the world it lives in."""

    path: Path
    world: Disk
    source: Source


def open_project(name: str) -> Opened | tuple[Problem, ...]:
    """Open a project file, or the `project.yaml` of a folder; returns the problem where it cannot be read."""
    path = Path(name, "project.yaml") if os.path.isdir(name) else Path(name)
    found = read_text(path.parent, path.name)
    if isinstance(found, str):
        return one_problem(
            "no-file", f"{str(path)[:200]} cannot be read", "a project file, or a folder with project.yaml", found
        )
    return Opened(path, Disk(path.parent, library_folder()), found)


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
