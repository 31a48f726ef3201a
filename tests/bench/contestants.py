"""Who is timed and how: commands run as processes of their own, with their wall time and peak memory.

A command in, one `Run` out. Peak memory is what the kernel counted for the process when it ended, so nothing has to
watch it; the bench itself stays small, for a process begins with the memory of the one that starts it. Knows no
documents.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
import time
from collections.abc import Sequence
from dataclasses import dataclass
from importlib.util import find_spec
from pathlib import Path

ROOT = Path(__file__).parents[2]

#: read the source, compile, write, untagged as the program's own files are; further sources are compiled first
_TYPST = """
import sys, time, typst
for source in sys.argv[2:]:
    typst.compile(source, output="/dev/null", format="pdf", pdf_tags=False)
start = time.perf_counter()
typst.compile(sys.argv[1], output=sys.argv[1].removesuffix(".typ") + "-typst.pdf", pdf_tags=False)
print(time.perf_counter() - start)
"""
_WARM = """
import contextlib, io, sys, time
from calcreport.__main__ import main
with contextlib.redirect_stdout(io.StringIO()):
    for project in sys.argv[3:]:
        main(["build", project, "-o", sys.argv[2]])
    start = time.perf_counter()
    main(["build", sys.argv[1], "-o", sys.argv[2]])
print(time.perf_counter() - start)
"""


@dataclass(frozen=True, slots=True)
class Run:
    """One run: wall and processor seconds of the process, peak memory in bytes, and what it timed itself, if it did."""

    seconds: float
    processor: float
    memory: int
    inside: float = 0.0


def has_typst() -> bool:
    """Tell whether the Typst package is installed."""
    return find_spec("typst") is not None


def has_pdflatex() -> bool:
    """Tell whether pdflatex is installed."""
    return shutil.which("pdflatex") is not None


def command(cache: Path, *arguments: str) -> Run:
    """Run one of the program's commands in a process of its own."""
    return _run([sys.executable, "-m", "calcreport", *arguments], cache)


def warm(cache: Path, first: Path, project: Path, target: Path) -> Run:
    """Build a project in a process that has built another one before."""
    return _run([sys.executable, "-c", _WARM, str(project), str(target), str(first)], cache)


def typst(cache: Path, source: Path, *before: Path) -> Run:
    """Compile a Typst source; in a process that has compiled others before, where there are any."""
    return _run([sys.executable, "-c", _TYPST, str(source), *map(str, before)], cache)


def pdflatex(cache: Path, source: Path) -> Run:
    """Typeset a LaTeX source from nothing, in the two passes its references need."""
    for left in source.parent.glob(source.stem + ".aux"):
        left.unlink()
    passes = [
        _run(["pdflatex", "-interaction=batchmode", "-halt-on-error", source.name], cache, source.parent)
        for _ in range(2)
    ]
    return Run(
        sum(one.seconds for one in passes), sum(one.processor for one in passes), max(one.memory for one in passes)
    )


def script(cache: Path, module: str, *arguments: str) -> str:
    """Run a module of the bench in a process of its own; return what it prints."""
    done = subprocess.run(
        [sys.executable, "-m", module, *arguments],
        env=_environment(cache), cwd=ROOT, check=True, stdout=subprocess.PIPE, text=True,
    )  # fmt: skip
    return done.stdout


def _environment(cache: Path) -> dict[str, str]:
    """Let modules be compiled once and kept, as they are where a program is installed; outside the checkout."""
    kept = {name: value for name, value in os.environ.items() if name != "PYTHONDONTWRITEBYTECODE"}
    return {**kept, "PYTHONPATH": str(ROOT), "PYTHONPYCACHEPREFIX": str(cache)}


def _run(arguments: Sequence[str], cache: Path, folder: Path = ROOT) -> Run:
    """Run a process to its end; RuntimeError when it fails. Exit code 1 of the program says that a check is NG."""
    start = time.perf_counter()
    process = subprocess.Popen(
        arguments, cwd=folder, env=_environment(cache), stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True
    )
    assert process.stdout is not None and process.stderr is not None
    output = process.stdout.read()
    _, status, usage = os.wait4(process.pid, 0)
    seconds = time.perf_counter() - start
    errors = process.stderr.read()
    process.stdout.close()
    process.stderr.close()
    process.returncode = os.waitstatus_to_exitcode(status)
    if process.returncode not in (0, 1) or "Traceback" in errors:
        raise RuntimeError(f"{' '.join(arguments[:4])}: {errors or output}")
    last = output.strip().rsplit("\n", 1)[-1]
    inside = float(last) if last.replace(".", "", 1).replace("e-", "", 1).isdigit() else 0.0
    return Run(seconds, usage.ru_utime + usage.ru_stime, usage.ru_maxrss * 1024, inside)
