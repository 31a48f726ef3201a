"""Times the program against two typesetters on the same content: `python -m tests.bench [--quick]`.

A package of 100 calculations is built and its content is typeset by each, interleaved, several times over; medians and
ratios are printed, beside what the design asks for. No test: a busy machine prints other numbers.
"""

from __future__ import annotations

import argparse
import os
import re
import sys
import tempfile
from collections.abc import Callable
from pathlib import Path
from statistics import median

from tests.bench import contestants
from tests.bench.contestants import Run
from tests.bench.project import beams, combinations, section

#: calculations of the package, and of the one its growth is measured to
PACKAGE, LONG = 100, 400
ROWS = 500


def interleaved(contenders: dict[str, Callable[[], Run]], times: int) -> dict[str, Run]:
    """Run every contender in turn, several times over, and return medians; one round before does not count."""
    runs: dict[str, list[Run]] = {name: [] for name in contenders}
    for turn in range(times + 1):
        for name, run in contenders.items():
            one = run()
            if turn:
                runs[name].append(one)
    return {name: _median(found) for name, found in runs.items()}


def _median(runs: list[Run]) -> Run:
    return Run(
        median(run.seconds for run in runs),
        median(run.processor for run in runs),
        round(median(run.memory for run in runs)),
        median(run.inside for run in runs),
    )


class Bench:
    """The measurements, in a folder of their own."""

    def __init__(self, folder: Path, times: int) -> None:
        self.folder, self.times, self.cache = folder, times, folder / "cache"

    def project(self, name: str, text: str) -> Path:
        """Write a project into a folder of its own name."""
        path = self.folder / f"{name}.yaml"
        path.write_text(text, "utf-8")
        return path

    def sources(self, project: Path) -> int:
        """Write the typesetters' sources of a project; return its count of lines."""
        return int(contestants.script(self.cache, "tests.bench.sources", str(project)))

    def sheets(self, path: Path) -> int:
        """Count the sheets of a PDF."""
        return len(self.labels(path))

    def labels(self, path: Path) -> list[str]:
        """Return the labels of the sheets of a PDF."""
        listed = contestants.script(self.cache, "tests.bench.pages", str(path))
        return [line.removeprefix("sheet ") for line in listed.splitlines()]

    def build(self, project: Path) -> Callable[[], Run]:
        """Return a build of a project by the program."""
        target = str(project.with_suffix(".pdf"))
        return lambda: contestants.command(self.cache, "build", str(project), "-o", target)

    def rivals(self, project: Path) -> dict[str, Callable[[], Run]]:
        """Return the typesetters that are installed, on the content of a project."""
        found: dict[str, Callable[[], Run]] = {}
        if contestants.has_pdflatex():
            found["pdflatex"] = lambda: contestants.pdflatex(self.cache, project.with_suffix(".tex"))
        if contestants.has_typst():
            found["Typst"] = lambda: contestants.typst(self.cache, project.with_suffix(".typ"))
        return found

    # ------------------------------------------------------------ what is measured

    def package(self) -> None:
        """Time the whole package, and the same in processes that have built another one before."""
        first, project = (self.project(f"package-{seed}", beams(PACKAGE // 2, seed)) for seed in (1, 2))
        lines = self.sources(project)
        self.sources(first)
        contenders = {"calcreport": self.build(project), **self.rivals(project)}
        target = project.with_name("warm.pdf")
        contenders["calcreport, warm"] = lambda: contestants.warm(self.cache, first, project, target)
        if "Typst" in contenders:
            sources = project.with_suffix(".typ"), first.with_suffix(".typ")
            contenders["Typst, warm"] = lambda: contestants.typst(self.cache, *sources)
        found = interleaved(contenders, self.times)
        sheets = self.counted(project, contenders)
        print(f"{PACKAGE} calculations, {lines:,} lines of content, medians of {self.times}, {os.cpu_count()} cores\n")
        print(
            f"{'':18}{'s':>7}{'cpu s':>7}{'sheets':>8}{'lines/s':>9}{'sheets/s':>9}{'peak MB':>9}   calcreport's rates"
        )
        for name, one in found.items():
            base, _, warm = name.partition(", ")
            own = found["calcreport, warm" if warm else "calcreport"]
            seconds, mine = (one.inside, own.inside) if warm else (one.seconds, own.seconds)
            by_lines = seconds / mine
            by_sheets = by_lines * sheets["calcreport"] / sheets[base]
            print(
                f"{name:18}{seconds:7.2f}{one.processor:7.2f}{sheets[base]:8}{lines / seconds:9,.0f}"
                f"{sheets[base] / seconds:9.0f}{one.memory / 1e6:9.0f}"
                + ("" if base == "calcreport" else f"   {by_lines:.2f} × its lines/s, {by_sheets:.2f} × its sheets/s")
            )
        for name in ("pdflatex", "Typst"):
            if name not in found:
                print(f"{name:18}not installed")
        print("to reach: 1.5 × pdflatex, 3 × Typst")
        if "Typst" in found:
            share = found["calcreport"].memory / found["Typst"].memory
            print(f"peak memory: {share:.3f} of Typst's (to reach: under 0.1)")

    def counted(self, project: Path, contenders: dict[str, Callable[[], Run]]) -> dict[str, int]:
        """Count the sheets each has made of a project; two of them write to the same name, and are run again."""
        counts: dict[str, int] = {}
        for name in ("pdflatex", "calcreport", "Typst"):
            if name in contenders:
                contenders[name]()
                written = (
                    project.with_name(f"{project.stem}-typst.pdf") if name == "Typst" else project.with_suffix(".pdf")
                )
                counts[name] = self.sheets(written)
        return counts

    def growth(self) -> None:
        """Print what a sheet more costs in memory."""
        peaks: list[tuple[int, float]] = []
        for count in (PACKAGE, LONG):
            project = self.project(f"growth-{count}", beams(count // 2, 3))
            run = self.build(project)()
            peaks.append((self.sheets(project.with_suffix(".pdf")), run.memory))
        (few, low), (many, high) = peaks
        print(
            f"growth: {(high - low) / (many - few) / 1000:.0f} KB a sheet, {few} to {many} sheets (to reach: under 60)"
        )

    def cold(self) -> None:
        """Time one calculation from a cold start, and the lint of one template."""
        project = self.project("one", section(1))
        self.sources(project)
        contenders = {"build": self.build(project), **self.rivals(project)}
        contenders["lint"] = lambda: contestants.command(self.cache, "lint", "aci318/beta-1")
        found = interleaved(contenders, 2 * self.times + 1)
        line = f"one calculation, cold: {found['build'].seconds:.3f} s"
        if "Typst" in found:
            ratio = found["build"].seconds / found["Typst"].seconds
            line += f"; Typst {found['Typst'].seconds:.3f} s, {ratio:.2f} of it (to reach: under 1.5)"
        if "pdflatex" in found:
            line += f"; pdflatex {found['pdflatex'].seconds:.3f} s"
        print(line)
        print(f"lint of one template: {found['lint'].seconds:.3f} s (to reach: under 0.15)")

    def rows(self) -> None:
        """Time values without paper, of many rows."""
        counts = (ROWS, 2 * ROWS)
        seconds = []
        for count in counts:
            project = self.project(f"rows-{count}", combinations(count, 4))
            runs = [contestants.command(self.cache, "values", str(project)) for _ in range(2)]
            seconds.append(min(run.seconds for run in runs))
        print(
            f"values of {counts[0]:,} and {counts[1]:,} sections with their combinations: "
            f"{seconds[0]:.2f} s, {seconds[1]:.2f} s; twice the rows take {seconds[1] / seconds[0]:.2f} × as long"
        )

    def paper(self) -> None:
        """Print how many sheets a member takes, the fronts and appendices left out."""
        count = 20
        project = self.project("paper", beams(count, 5))
        self.build(project)()
        labels = self.labels(project.with_suffix(".pdf"))
        loads, sections = (sum(re.match(mark + r"\d+-", label) is not None for label in labels) for mark in ("FL", "B"))
        print(
            f"paper: {loads / count:.2f} sheets for loads and moments of a beam, {sections / count:.2f} for a section"
        )


def run(arguments: list[str] | None = None) -> int:
    """Measure and print."""
    parser = argparse.ArgumentParser(prog="python -m tests.bench", description=__doc__)
    parser.add_argument("--quick", action="store_true", help="one run each, no growth and no rows")
    parsed = parser.parse_args(arguments)
    with tempfile.TemporaryDirectory() as folder:
        bench = Bench(Path(folder), 1 if parsed.quick else 5)
        bench.package()
        bench.cold()
        if not parsed.quick:
            bench.growth()
            bench.rows()
        bench.paper()
    return 0


if __name__ == "__main__":
    sys.exit(run())
