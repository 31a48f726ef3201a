"""Alter every rule of the templates and hold that a case notices: `python -m tests.mutation [TEMPLATE …] [--list]`."""

from __future__ import annotations

import sys
from argparse import ArgumentParser
from os import cpu_count
from pathlib import Path

from calcreport.filesystem import Disk, library_folder

from .equivalents import read_equivalents
from .run import run, sources, table
from .shelf import Unsound, read_shelf

LIST = Path(__file__).parent / "equivalents.yaml"


def main() -> int:
    """Print a table, what is left open, and stale entries; 1 if there is either, 2 if a template is wrong already."""
    parser = ArgumentParser(prog="tests.mutation", description="Alter every rule of the templates; hold it is noticed.")
    parser.add_argument("template", nargs="*", help="a template or bar table, as aci318/beta-1; none: all")
    parser.add_argument("--list", action="store_true", help="list every mutant with what became of it")
    parser.add_argument("--sources", action="store_true", help="tell what the expectations rest on")
    parser.add_argument("--jobs", type=int, default=cpu_count() or 1, help="processes that share the work")
    asked = parser.parse_args()
    try:
        shelf = read_shelf(Disk(Path.cwd(), library_folder()))
    except Unsound as error:
        print(error)
        return 2
    known = {*shelf.names, *(file for file, _ in shelf.bars)}
    unknown = [name for name in asked.template if name not in known]
    if unknown:
        print(f"there is no {unknown[0]}; there are: {', '.join(sorted(known))}")
        return 2
    report = run(shelf, read_equivalents(LIST.read_text(encoding="utf-8")), tuple(asked.template), asked.jobs)
    told = [t for sheet in report.sheets for t in sheet.told if asked.list or t.open]
    rows = [*(t.row for t in told), *(f"stale | {words}" for words in report.stale), *table(report)]
    print("\n".join([*rows, *(sources(shelf) if asked.sources else ())]))
    return 0 if report.sound else 1


if __name__ == "__main__":
    sys.exit(main())
