"""Times schedules without paper: `python -m tests.bench.rows [--rows 10000]`.

A schedule of beam sections is linted and its values are printed, each by a process of its own, everything included:
reading, planning, working, printing. Beside it the same kind of lines is worked by SymPy's `subs` with pint's
quantities, formulas parsed before the clock starts. Prints seconds and ratios; no test.
"""

from __future__ import annotations

import argparse
import csv
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path
from random import Random

import pint
import sympy

from calcreport.calculate.model import WorkedBranches, WorkedCheck, WorkedEach, WorkedGives, WorkedLine, WorkedPart
from calcreport.core.source import Source
from calcreport.driver import work
from calcreport.filesystem import Disk, library_folder, read_text
from tests.bench import contestants
from tests.bench.project import _HEAD, _sizes

_SCHEDULE = """schedules:
  - file: beams.csv
    template: aci318/beam-flexure
    mark: Mark
    title: Beam {Mark}
    concrete: {column: Concrete}
    bars: G60
    columns: {b: Width, h: Depth, M_u: Moment, third_more: Third}
    given:
      c_c: 1.5 in
      stirrup: '#4'
      face: bottom
      layer: [{name: first, steel: {column: Bottom}}]
      c_l: none
      d_agg: 3/4 in
      rounded_eps_ty: no
      in_sfrs: no
"""
_HEADINGS = ("Mark", "Concrete", "Width (in)", "Depth (in)", "Bottom", "Moment (kip-ft)", "Third")
#: lines of a section as one would type them for SymPy, with the unit of each result
_LINES = (
    ("a", "A_s*f_y/(0.85*f_c*b)", "inch"),
    ("c", "a/0.85", "inch"),
    ("d", "h - c_c - d_s - d_b/2", "inch"),
    ("eps_t", "0.003*(d - c)/c", "dimensionless"),
    ("M_n", "A_s*f_y*(d - a/2)", "kip*foot"),
    ("phiM_n", "0.9*M_n", "kip*foot"),
    ("s_clear", "(b - 2*(c_c + d_s + r_s))/(n - 1) - d_b", "inch"),
    ("ratio", "M_u/phiM_n", "dimensionless"),
)
_GIVEN = {
    "b": "inch", "h": "inch", "c_c": "inch", "d_s": "inch", "d_b": "inch", "r_s": "inch", "A_s": "inch**2",
    "f_c": "psi", "f_y": "psi", "M_u": "kip*foot", "n": "dimensionless",
}  # fmt: skip


def write(folder: Path, rows: int) -> Path:
    """Write a project whose one schedule has so many rows."""
    folder.mkdir()
    draw = Random(rows)
    with (folder / "beams.csv").open("w", newline="", encoding="utf-8") as file:
        out = csv.writer(file)
        out.writerow(_HEADINGS)
        for place in range(1, rows + 1):
            one = _sizes(draw, place)
            bars = f"{one['count']}-#{one['bar']}"
            moment = draw.randint(60, 400)
            out.writerow(
                (f"B{place}", one["concrete"], one["width"], one["depth"], bars, moment, one["third"])
            )  # fmt: skip
    head = _HEAD.format(title="Timed schedule", seed=rows).replace("calculations:\n", "")
    (folder / "project.yaml").write_text(head + _SCHEDULE, "utf-8")
    return folder / "project.yaml"


def lines_of(lines: tuple[WorkedLine, ...]) -> Iterator[WorkedLine]:
    """Return the values and checks worked."""
    for line in lines:
        match line:
            case WorkedGives() | WorkedCheck():
                yield line
            case WorkedBranches() | WorkedPart():
                yield from lines_of(line.lines)
            case WorkedEach():
                for row in line.rows:
                    yield from lines_of(row)
            case _:
                pass


def lines_a_row(project: Path) -> float:
    """Return how many values and checks are worked for a row, the mean of a project."""
    source = read_text(project.parent, project.name)
    assert isinstance(source, Source)
    found = work(Disk(project.parent, library_folder()), source)
    assert found.worked is not None and not found.problems
    counts = [sum(1 for _ in lines_of(one.lines)) for one in found.worked.calculations]
    return sum(counts) / len(counts)


def by_substitution(rows: int) -> float:
    """Return the seconds a line takes by SymPy's `subs` with pint's quantities."""
    units = pint.UnitRegistry()
    # the text is this module's own, above: nothing of an author's is evaluated
    formulas = [(name, sympy.sympify(text, locals=dict(_symbols())), unit) for name, text, unit in _LINES]
    draw = Random(rows)
    given = [
        {name: units.Quantity(draw.uniform(2, 4), unit) for name, unit in _GIVEN.items()} for _ in range(rows)
    ]  # fmt: skip
    start = time.process_time()
    for values in given:
        for name, formula, unit in formulas:
            numbers = {symbol: values[symbol.name].to_base_units().magnitude for symbol in formula.free_symbols}
            base = units.Quantity(1, unit).to_base_units().units
            values[name] = units.Quantity(float(formula.subs(numbers)), base).to(unit)
    return (time.process_time() - start) / rows / len(formulas)


def _symbols() -> Iterator[tuple[str, sympy.Symbol]]:
    for name in (*_GIVEN, *(name for name, _, _ in _LINES)):
        yield name, sympy.Symbol(name)


def run(arguments: list[str] | None = None) -> int:
    """Measure and print."""
    parser = argparse.ArgumentParser(prog="python -m tests.bench.rows", description=__doc__)
    parser.add_argument("--rows", type=int, default=10_000)
    parsed = parser.parse_args(arguments)
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        lines = lines_a_row(write(folder / "few", 200))
        other = by_substitution(100)
        print(f"{lines:.1f} values and checks a row; SymPy subs with pint: {1e3 * other:.3f} ms a line")
        for rows in (parsed.rows // 4, parsed.rows // 2, parsed.rows):
            project = write(folder / f"rows-{rows}", rows)
            for command in ("lint", "values"):
                one = min((contestants.command(folder / "cache", command, str(project)) for _ in range(2)),
                          key=lambda found: found.seconds)  # fmt: skip
                own = one.processor / rows / lines
                print(
                    f"{rows:>6,} rows  {command:<6} {one.seconds:6.2f} s wall, {one.processor:6.2f} s processor, "
                    f"{one.memory / 1e6:5.0f} MB; {1e3 * own:.4f} ms a line, SymPy with pint {other / own:.0f} × that"
                )
    return 0


if __name__ == "__main__":
    raise SystemExit(run())
