"""`calcreport watch` in a process of its own: saves of every manner, mistakes and their mending, and its end.

Nothing is timed: each step waits for the words it must lead to.
"""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import threading
from collections.abc import Iterator
from pathlib import Path
from queue import Empty, Queue

import pytest

from tests.commands.desk import PROJECT, make, names, run

ROOT = Path(__file__).parents[2]
#: seconds after which a step has failed, however busy the machine
PATIENCE = 120.0


def _hear_interrupts() -> None:
    signal.signal(signal.SIGINT, signal.SIG_DFL)


class _Watch:
    """A running `watch`, with what it prints line by line."""

    def __init__(self, folder: Path, *more: str) -> None:
        self.folder = folder
        self.process = subprocess.Popen(
            [sys.executable, "-m", "calcreport", "watch", str(folder), *more],
            cwd=ROOT,
            stdout=subprocess.PIPE,
            stderr=subprocess.STDOUT,
            text=True,
            # a shell starts what it puts in the background deaf to interrupts, and that is handed on
            preexec_fn=_hear_interrupts,
        )
        self.lines: Queue[str] = Queue()
        self.said: list[str] = []
        threading.Thread(target=self._listen, daemon=True).start()

    def _listen(self) -> None:
        assert self.process.stdout is not None
        for line in self.process.stdout:
            self.lines.put(line)

    def until(self, words: str) -> str:
        """Wait for a line with these words; return all lines up to it."""
        found: list[str] = []
        while True:
            try:
                found.append(self.lines.get(timeout=PATIENCE))
            except Empty:
                raise AssertionError(f"{words!r} was not said after: {''.join(self.said + found)}") from None
            if words in found[-1]:
                self.said += found
                return "".join(found)

    def end(self) -> int:
        """Interrupt as a person does; return the exit code."""
        self.process.send_signal(signal.SIGINT)
        return self.process.wait(PATIENCE)


@pytest.fixture
def watch(tmp_path: Path) -> Iterator[_Watch]:
    make(tmp_path)
    running = _Watch(tmp_path)
    running.until("watching ")
    yield running
    if running.process.poll() is None:
        running.process.kill()
    running.process.wait(PATIENCE)


def _fresh(folder: Path) -> bytes:
    """Return the package that a build of its own makes of a folder."""
    target = folder.parent / "fresh.pdf"
    assert run("build", str(folder), "-o", str(target)).code in (0, 1)
    return target.read_bytes()


def test_saves_mistakes_and_mending(watch: _Watch) -> None:
    folder = watch.folder
    project, package = folder / "project.yaml", folder / "project.pdf"
    first = package.read_bytes()
    assert first == _fresh(folder)

    project.write_text(PROJECT.replace("b: 3 in", "b: 4 in"), encoding="utf-8")
    said = watch.until("NG: T1 ratio")
    assert "project.yaml changed" in said and "worked: T1" in said
    second = package.read_bytes()
    assert second == _fresh(folder) != first

    # a mistake is told with its place, and the last good package stays
    project.write_text(PROJECT.replace("b: 3 in", "b: 4"), encoding="utf-8")
    said = watch.until("is kept as it was")
    assert "project.yaml:10:58: error[bare-number]" in said
    assert package.read_bytes() == second

    # half a save, as a reader may find it
    project.write_text(PROJECT[:200], encoding="utf-8")
    watch.until("is kept as it was")
    assert package.read_bytes() == second

    # an editor that writes beside and moves into place
    (folder / "project.yaml~").write_text(PROJECT, encoding="utf-8")
    os.replace(folder / "project.yaml~", project)
    watch.until("no check is NG")
    assert package.read_bytes() == first

    # a template deleted, and put back under its name from another
    os.rename(folder / "trial.yaml", folder / "away.yaml")
    said = watch.until("is kept as it was")
    assert "error[no-template]" in said
    os.rename(folder / "away.yaml", folder / "trial.yaml")
    watch.until("no check is NG")

    # the project file itself
    project.unlink()
    assert "error[no-file]" in watch.until("is kept as it was")
    project.write_text(PROJECT.replace("T1, address", "T2, address"), encoding="utf-8")
    watch.until("no check is NG")
    assert package.read_bytes() == _fresh(folder) != first

    assert watch.end() == 0
    assert watch.until("no longer watching")
    assert names(folder) == ["project.pdf", "project.yaml", "trial.yaml"]


def test_a_save_with_nothing_changed_is_passed_over(watch: _Watch) -> None:
    project = watch.folder / "project.yaml"
    before = (watch.folder / "project.pdf").stat().st_mtime_ns
    project.touch()
    project.write_text(PROJECT, encoding="utf-8")
    # the next change is the first that is told
    project.write_text(PROJECT + "# a remark\n", encoding="utf-8")
    said = watch.until("project.yaml changed")
    assert said.count("\n") == 1 and "worked" not in said
    assert (watch.folder / "project.pdf").stat().st_mtime_ns > before, "the echo of the inputs has the remark"
    assert watch.end() == 0


def test_a_project_that_is_not_there_is_told_at_once(tmp_path: Path) -> None:
    ran = run("watch", str(tmp_path / "none"))
    assert ran.code == 2 and "error[no-file]" in ran.err


def test_only_an_earlier_package_is_replaced(tmp_path: Path) -> None:
    make(tmp_path)
    watch = _Watch(tmp_path, "-o", str(tmp_path / "trial.yaml"))
    assert "error[cannot-write]" in watch.until("watching ")
    assert watch.end() == 0
    assert (tmp_path / "trial.yaml").read_text("utf-8").startswith("template: trial")
