"""Times the program against two typesetters on the same content: `python -m tests.bench [--quick]`.

A package of 100 calculations is built and its content is typeset by each, interleaved, several times over; medians and
ratios are printed, beside what the design asks for. No test: a busy machine prints other numbers.
"""

from __future__ import annotations

import argparse
import sys
import tempfile
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from statistics import median

from tests.bench import contestants
from tests.bench.contestants import Run
from tests.bench.project import beams, combinations, section

#: calculations of the package, and of the one its growth is measured to
PACKAGE, LONG = 100, 400
ROWS = 500


@dataclass(frozen=True, slots=True)
class Median:
    """The middle of several runs."""

    seconds: float
    memory: float
    inside: float


def interleaved(contenders: dict[str, Callable[[], Run]], times: int) -> dict[str, Median]:
    """Run every contender in turn, several times over; one round before does not count."""
    runs: dict[str, list[Run]] = {name: [] for name in contenders}
    for turn in range(times + 1):
        for name, run in contenders.items():
            one = run()
            if turn:
                runs[name].append(one)
    return {
        name: Median(median(r.seconds for r in found), median(r.memory for r in found), median(r.inside for r in found))
        for name, found in runs.items()
    }


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
        return int(contestants.script(self.cache, "tests.bench.pages", str(path)))

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
        written = {
            "calcreport": project.with_suffix(".pdf"),
            "pdflatex": project.with_name("package-2-tex.pdf"),
            "Typst": project.with_name("package-2-typst.pdf"),
        }
        if "pdflatex" in contenders:
            # both write to the name of their source: the program's file is made again for counting
            project.with_suffix(".pdf").rename(written["pdflatex"])
            contenders["calcreport"]()
        own = found["calcreport"]
        print(f"{PACKAGE} calculations, {lines:,} lines of content, {self.times} runs each, medians\n")
        print(
            f"{'':18}{'s':>8}{'sheets':>8}{'lines/s':>10}{'sheets/s':>10}{'peak MB':>9}   lines/s, sheets/s against it"
        )
        for name, one in found.items():
            sheets = self.sheets(written[name.removesuffix(", warm")])
            seconds = one.inside if name.endswith("warm") else one.seconds
            mine = (found["calcreport, warm"].inside if name.endswith("warm") else own.seconds) or own.seconds
            sheets_own = self.sheets(written["calcreport"])
            ratios = f"{seconds / mine:6.2f} ×{sheets_own / mine / (sheets / seconds):8.2f} ×"
            print(
                f"{name:18}{seconds:8.2f}{sheets:8}{lines / seconds:10,.0f}{sheets / seconds:10.0f}"
                f"{one.memory / 1e6:9.0f}   {'' if name.startswith('calcreport') else ratios}"
            )
        for name in ("pdflatex", "Typst"):
            if name not in found:
                print(f"{name:18} not installed")
        if "Typst" in found:
            print(f"\npeak memory: {own.memory / found['Typst'].memory:.3f} of Typst's (to reach: under 0.1)")

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
        """Print how many sheets a member takes."""
        few, many = (self.project(f"paper-{count}", beams(count, 5)) for count in (1, 21))
        for project in (few, many):
            self.build(project)()
        sheets = [self.sheets(project.with_suffix(".pdf")) for project in (few, many)]
        print(
            f"paper: {(sheets[1] - sheets[0]) / 20:.2f} sheets a beam, its loads and its section at one place together"
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
