"""Test over predicted, beside what the tables of tests state: `python -m tests.databases FOLDER`."""

from __future__ import annotations

import sys
from argparse import ArgumentParser
from collections import Counter
from pathlib import Path

from calcreport.filesystem import Disk, library_folder

from .specimens import DATABASES
from .tables import read_table, statistic
from .work import Bench, Refused


def main(arguments: list[str] | None = None) -> int:
    """Print a row a statistic, and the reasons of tests that a template refuses; 2 if a table is not there."""
    parser = ArgumentParser(prog="tests.databases", description="Tests of beams over what the templates predict.")
    parser.add_argument("folder", type=Path, help="where the tables of tests stand")
    folder: Path = parser.parse_args(arguments).folder
    bench = Bench(Disk(Path.cwd(), library_folder()))
    print(f"{'test over predicted':64}{'':>4}   n    mean     cov{'stated:':>10}   n    mean     cov")
    for file, asked in DATABASES:
        path = folder / file
        if not path.is_file():
            print(f"there is no {file} in {folder}")
            return 2
        table = read_table(path.read_text(encoding="utf-8"))
        for name, note, serves, ratio in asked:
            ratios: list[float] = []
            refused: Counter[str] = Counter()
            for row in filter(serves, table.rows):
                try:
                    ratios.append(ratio(bench, row))
                except Refused as stop:
                    refused[str(stop)] += 1
            words = ", ".join(part for part in (file.removesuffix(".csv"), name, note) if part)
            stated = table.stated[name].words if name in table.stated else "none"
            print(f"{words:68}{statistic(ratios).words}{'':10}{stated}")
            for reason, times in refused.items():
                print(f"    {times} refused: {reason}")
    return 0


if __name__ == "__main__":
    sys.exit(main())
