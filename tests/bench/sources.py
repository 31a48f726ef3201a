"""Writes what the other typesetters are given, from a project: `python -m tests.bench.sources PROJECT`.

In: a project file. Out: `.tex` and `.typ` beside it, and on stdout the count of lines of the report.
"""

from __future__ import annotations

import sys
from pathlib import Path

from tests.bench.content import count_lines, report_of
from tests.bench.latex import latex
from tests.bench.typst import typst


def write_sources(project: Path) -> int:
    """Write both sources; return the count of lines."""
    report = report_of(project)
    project.with_suffix(".tex").write_text(latex(report), "utf-8")
    project.with_suffix(".typ").write_text(typst(report), "utf-8")
    return count_lines(report)


if __name__ == "__main__":
    print(write_sources(Path(sys.argv[1])))
