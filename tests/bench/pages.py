"""Counts sheets of PDF files: `python -m tests.bench.pages FILE…`, a count a line."""

from __future__ import annotations

import sys

import pypdfium2


def count_sheets(path: str) -> int:
    """Return the count of sheets of a file."""
    return len(pypdfium2.PdfDocument(path))


if __name__ == "__main__":
    for name in sys.argv[1:]:
        print(count_sheets(name))
