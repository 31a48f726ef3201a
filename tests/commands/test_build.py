"""Writing the package: whole or not at all, over nothing but an earlier package, also when killed."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
from pathlib import Path

import pytest

from calcreport.filesystem import replace_file
from tests.commands.desk import EARLIER, PROJECT, make, names, run

_KILLED = """
import os, signal
real = os.{call}
def die(*arguments, **options):
    os.kill(os.getpid(), signal.SIGKILL)
os.{call} = die
from calcreport.__main__ import main
main(["build", {folder!r}])
"""


def _die_at(call: str, folder: Path) -> None:
    script = _KILLED.format(call=call, folder=str(folder))
    root = Path(__file__).parents[2]
    ran = subprocess.run([sys.executable, "-c", script], cwd=root, capture_output=True, check=False)
    assert ran.returncode == -signal.SIGKILL, ran.stderr


@pytest.mark.parametrize("call", ["fsync", "replace"])
def test_a_killed_build_leaves_the_earlier_package_whole(tmp_path: Path, call: str) -> None:
    make(tmp_path)
    _die_at(call, tmp_path)
    assert (tmp_path / "project.pdf").read_bytes() == EARLIER
    left = [name for name in names(tmp_path) if name.endswith(".part")]
    # a file without a name vanishes with the process; one that has its name already is whole, and swept later
    if call == "fsync" and hasattr(os, "O_TMPFILE"):
        assert left == []
    assert all((tmp_path / name).read_bytes().startswith(b"%PDF-") for name in left)
    assert run("build", str(tmp_path)).code == 0
    assert (tmp_path / "project.pdf").read_bytes().rstrip().endswith(b"%%EOF")


def test_what_killed_builds_left_is_swept(tmp_path: Path) -> None:
    make(tmp_path)
    old, young = tmp_path / ".project.pdf.1.part", tmp_path / ".project.pdf.2.part"
    for path in (old, young):
        path.write_bytes(b"%PDF-")
    os.utime(old, (0, 0))
    assert run("build", str(tmp_path)).code == 0
    assert not old.exists() and young.exists()


def test_without_nameless_files(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delattr(os, "O_TMPFILE", raising=False)
    assert replace_file(tmp_path / "a.pdf", b"%PDF-") == ""
    assert names(tmp_path) == ["a.pdf"]


@pytest.mark.parametrize(
    ("output", "words"),
    [
        ("project.yaml", "a file that is no PDF"), ("folder", "not a file stands there"),
        ("none/a.pdf", "no such file or directory"), ("x" * 300 + ".pdf", "too long"),
    ],
)  # fmt: skip
def test_what_is_not_a_package_is_kept(tmp_path: Path, output: str, words: str) -> None:
    make(tmp_path)
    (tmp_path / "folder").mkdir()
    ran = run("build", str(tmp_path), "-o", str(tmp_path / output))
    assert ran.code == 2 and "error[cannot-write]" in ran.err and words in ran.err
    assert (tmp_path / "project.yaml").read_text() == PROJECT
    assert names(tmp_path) == ["folder", "project.pdf", "project.yaml", "trial.yaml"]


def test_devices_are_kept() -> None:
    assert replace_file(Path("/dev/null"), b"") == "something that is not a file stands there"


def test_the_package_says_nothing_of_the_machine(tmp_path: Path) -> None:
    make(tmp_path)
    other = tmp_path / "elsewhere"
    other.mkdir()
    make(other)
    assert run("build", str(tmp_path)).code == run("build", str(other)).code == 0
    assert (tmp_path / "project.pdf").read_bytes() == (other / "project.pdf").read_bytes()
    assert str(tmp_path).encode() not in (tmp_path / "project.pdf").read_bytes()


def test_a_ratio_beyond_one_is_exit_code_1(tmp_path: Path) -> None:
    make(tmp_path, PROJECT.replace("3 in", "4 in"))
    ran = run("build", str(tmp_path))
    assert ran.code == 1 and "NG" in ran.out
