"""`calcreport watch`: the package built again after every save, until the person at the keyboard ends it.

An earlier PDF stays as it is while a save holds problems. Files are looked at rather than announced: modification
times are on every file system, also on those shared over a network, and need no library.
"""

from __future__ import annotations

import gc
import sys
from argparse import Namespace
from pathlib import Path
from time import monotonic, sleep

from calcreport.commands.build import put_package
from calcreport.commands.desk import UNWRITTEN, ProgressLine, one_problem, open_project, say_problems
from calcreport.core.problems import Problem
from calcreport.core.source import Source
from calcreport.history.frozen import Frozen
from calcreport.publish import Package
from calcreport.session import Reading, Session

#: seconds between two looks at the files, and between the looks by which a save is found to be finished
PAUSE, SETTLING = 0.15, 0.03
#: looks after which a file that never rests is read all the same
_RESTLESS = 30
#: names listed in a line
_LISTED = 6


def run(arguments: Namespace) -> int:
    """Build after every save; ends with 0 when it is interrupted."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened)
    if isinstance(opened.world, Frozen):
        return say_problems(one_problem("not-an-issue", f"{opened.path} is a frozen issue", "a project somebody edits",
                                        "files that are kept as they are"))  # fmt: skip
    target = Path(arguments.output) if arguments.output else opened.path.with_suffix(".pdf")
    watch = _Watch(Reading(opened.path, opened.world), target)
    try:
        watch.begin()
        while True:
            sleep(PAUSE)
            if watch.look():
                # the command line has switched the search for circles off: right for one build, not for many
                gc.collect()
    except KeyboardInterrupt:
        print(f"\nno longer watching {opened.path}", flush=True)
        return 0


class _Watch:
    """One project under watch."""

    def __init__(self, reading: Reading, target: Path) -> None:
        self.reading, self.target = reading, target
        self.session = Session()
        self.written = b""

    def begin(self) -> None:
        """Build for the first time."""
        self.build("")
        others = len([path for path, looked in self.reading.stamps.items() if looked is not None]) - 1
        print(f"watching {self.reading.path} and {others} other files; Ctrl-C ends it", flush=True)

    def look(self) -> bool:
        """Build again if a file is not what it was; tells whether it has."""
        touched = self.reading.touched()
        if not touched:
            return False
        self.settle()
        read = self.reading.again()
        if self.reading.agrees(read):
            # saved with nothing changed, or moved away and back
            self.reading.stamps = read.stamps
            return False
        self.build(_list(sorted(path.name for path in touched)) + " changed: ")
        return True

    def settle(self) -> None:
        """Wait until a save is finished: files that look the same twice."""
        before = self.reading.stamps_now()
        for _ in range(_RESTLESS):
            sleep(SETTLING)
            now = self.reading.stamps_now()
            if now == before:
                return
            before = now

    def build(self, why: str) -> None:
        """Build, write, and say in one line what came of it."""
        began = monotonic()
        self.reading = Reading(self.reading.path, self.reading.disk)
        source = self.reading.project()
        if not isinstance(source, Source):
            gone = one_problem("no-file", f"{self.reading.path} cannot be read", "the project file watched", source)
            self.say(why, gone)
            return
        progress = ProgressLine()
        package = self.session.build(self.reading, source, progress)
        progress.clear()
        if package.problems:
            self.say(why, package.problems)
            return
        if package.data != self.written or not self.target.is_file():
            failure = put_package(self.target, package.data)
            if failure:
                self.say(why, failure)
                return
            self.written = package.data
        print(f"{why}{self.words(package)} ({monotonic() - began:.2f} s)", flush=True)

    def words(self, package: Package) -> str:
        """Return what a build came to."""
        assert package.composed is not None and package.pages is not None
        summary = package.composed.summary
        found = [f"{mark} {check}" for mark, check in summary.failed]
        verdict = f"NG: {_list(found)}" if found else "no check is NG"
        if summary.not_evaluated:
            verdict += f"; {summary.not_evaluated} not evaluated"
        worked = f"; worked: {_list(list(self.session.worked))}" if self.session.worked else ""
        return f"{self.target}, {len(package.pages.pages)} sheets; {verdict}{worked}"

    def say(self, why: str, problems: tuple[Problem, ...]) -> None:
        """Print problems, and what became of the PDF."""
        if why:
            print(f"\n{why.rstrip()}", file=sys.stderr)
        kept = f"; {self.target} is kept as it was" if self.target.is_file() else UNWRITTEN
        say_problems(problems, tail=kept)


def _list(names: list[str]) -> str:
    more = f" and {len(names) - _LISTED} more" if len(names) > _LISTED else ""
    return ", ".join(names[:_LISTED]) + more
