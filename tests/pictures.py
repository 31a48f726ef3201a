"""Draws the sheets of a project as PNG: `python -m tests.pictures PROJECT [-o FOLDER] [--only B1-1 …] [--dpi 110]`."""

from __future__ import annotations

import argparse
import sys
import tempfile
from pathlib import Path

import pypdfium2

from calcreport.__main__ import main as calcreport


def draw(pdf: Path, folder: Path, only: tuple[str, ...], dpi: int) -> list[Path]:
    """Write one PNG a sheet, named by its sheet number."""
    document = pypdfium2.PdfDocument(pdf)
    folder.mkdir(parents=True, exist_ok=True)
    written = []
    for place in range(len(document)):
        label = document.get_page_label(place)
        if only and label not in only:
            continue
        target = folder / f"{label}.png"
        image = document[place].render(scale=dpi / 72).to_pil().convert("L")
        image.quantize(16).save(target, optimize=True)
        written.append(target)
    return written


def run(arguments: list[str] | None = None) -> int:
    """Build a project and draw its sheets."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("project")
    parser.add_argument("-o", "--output", default="pictures")
    parser.add_argument("--only", nargs="*", default=[], metavar="SHEET")
    parser.add_argument("--dpi", type=int, default=110)
    parsed = parser.parse_args(arguments)
    with tempfile.TemporaryDirectory() as folder:
        pdf = Path(folder) / "package.pdf"
        if calcreport(["build", parsed.project, "-o", str(pdf)]) == 2:
            return 2
        for path in draw(pdf, Path(parsed.output), tuple(parsed.only), parsed.dpi):
            print(path)
    return 0


if __name__ == "__main__":
    sys.exit(run())
