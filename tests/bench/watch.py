"""Times a project kept open: `python -m tests.bench.watch [--calculations 100]`.

One given value of a project of simple beams with their sections is changed, and the package is built in a session that
has built it before; in turn with it the same files are built afresh, in the same warm process. The time to the last
problem is that of a save that holds one mistake. Prints medians, their ratio and what the design asks for; no test.
"""

from __future__ import annotations

import argparse
import gc
import os
import re
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path
from statistics import median

from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder
from calcreport.publish import build
from calcreport.session import Reading, Session
from tests.bench.project import beams

_STRIP = re.compile(r"b_t: ([0-9]+) ft")


class _Bench:
    """A project file with a value that changes from turn to turn."""

    def __init__(self, folder: Path, count: int) -> None:
        self.path, self.text = folder / "project.yaml", beams(count // 2, 2)
        self.disk = Disk(folder, library_folder())
        self.session = Session()

    def write(self, turn: int) -> None:
        """Save with the strip of one beam, a different one each turn, a foot wider."""
        found = list(_STRIP.finditer(self.text))
        one = found[turn * 7 % len(found)]
        self.text = f"{self.text[: one.start(1)]}{int(one[1]) % 9 + 2}{self.text[one.end(1) :]}"
        self.path.write_text(self.text, "utf-8")

    def write_mistake(self, turn: int) -> None:
        """Save with the unit of one value left out."""
        found = list(_STRIP.finditer(self.text))
        one = found[turn * 7 % len(found)]
        self.path.write_text(f"{self.text[: one.end(1)]}{self.text[one.end() :]}", "utf-8")

    def kept(self) -> bytes:
        """Build in the session; returns the bytes, none where there are problems."""
        reading = Reading(self.path, self.disk)
        source = reading.project()
        assert isinstance(source, Source)
        return self.session.build(reading, source).data

    def fresh(self) -> bytes:
        """Build anew."""
        source = Reading(self.path, self.disk).project()
        assert isinstance(source, Source)
        return build(self.disk, source).data


@dataclass
class _Times:
    """What one kind of build took, turn by turn."""

    seconds: list[float] = field(default_factory=list)
    processor: list[float] = field(default_factory=list)

    def time(self, work: Callable[[], bytes]) -> bytes:
        """Run once; returns what it made."""
        began, used = time.perf_counter(), time.process_time()
        data = work()
        self.seconds.append(time.perf_counter() - began)
        self.processor.append(time.process_time() - used)
        return data

    def words(self) -> str:
        """Return medians, and the slowest turn."""
        return (
            f"{median(self.seconds):.3f} s, slowest {max(self.seconds):.3f} s; processor {median(self.processor):.3f} s"
        )


def run(arguments: list[str] | None = None) -> int:
    """Measure and print."""
    parser = argparse.ArgumentParser(prog="python -m tests.bench.watch", description=__doc__)
    parser.add_argument("--calculations", type=int, default=100)
    parser.add_argument("--turns", type=int, default=9)
    parsed = parser.parse_args(arguments)
    first, kept, fresh, told = _Times(), _Times(), _Times(), _Times()
    # as the command line does
    gc.disable()
    with tempfile.TemporaryDirectory() as folder:
        bench = _Bench(Path(folder), parsed.calculations)
        bench.write(0)
        size = len(first.time(bench.kept))
        for turn in range(1, parsed.turns + 1):
            bench.write_mistake(turn)
            assert not told.time(bench.kept), "a mistake was passed over"
            bench.write(turn)
            data = kept.time(bench.kept)
            gc.collect()
            assert data == fresh.time(bench.fresh), "a session and a fresh build differ"
            gc.collect()
    print(f"{parsed.calculations} calculations, {size / 1e6:.1f} MB, {parsed.turns} turns, {os.cpu_count()} cores")
    print(f"first build in the session: {first.words()}")
    print(f"one input changed:          {kept.words()} (to reach: under 1 s)")
    print(f"built afresh, warm:         {fresh.words()}")
    print(f"ratio: {median(fresh.processor) / median(kept.processor):.2f} × the processor time of a change")
    print(f"its problem:                {told.words()} (to reach: under 0.1 s)")
    return 0


if __name__ == "__main__":
    sys.exit(run())
