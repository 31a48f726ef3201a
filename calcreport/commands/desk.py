"""What commands share: finding the project, saying problems, showing progress. Prints; decides nothing else."""

from __future__ import annotations

import json
import sys
from dataclasses import dataclass
from pathlib import Path

from calcreport.core.problems import Problem, Problems, render, to_json
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
    path = Path(name)
    if path.is_dir():
        path = path / "project.yaml"
    found = read_text(path.parent, path.name)
    if isinstance(found, str):
        problems = Problems()
        problems.add("no-file", None, f"{path} cannot be read", expected="a project file, or a folder with project.yaml",
                     found=found)  # fmt: skip
        return problems.sorted()
    shown = Source(str(path), found.text)
    return Opened(path, Disk(path.parent, library_folder()), shown)


def say_problems(problems: tuple[Problem, ...], as_json: bool = False) -> int:
    """Print problems and return exit code 2."""
    if as_json:
        print(json.dumps({"problems": [to_json(problem) for problem in problems]}, indent=1, ensure_ascii=False))
        return 2
    for problem in problems:
        print(render(problem), file=sys.stderr)
    count = len(problems)
    slugs = sorted({problem.slug for problem in problems})
    print(f"{count} problem{'s' if count != 1 else ''}; nothing was written. "
          f"`calcreport explain {slugs[0]}` tells more.", file=sys.stderr)  # fmt: skip
    return 2


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
