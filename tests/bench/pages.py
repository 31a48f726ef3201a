"""Lists the sheets of a PDF: `python -m tests.bench.pages FILE`, a line with the page label for each."""

from __future__ import annotations

import sys

import pypdfium2  # type: ignore[import-untyped]


def labels(path: str) -> list[str]:
    """Return the page labels of a file."""
    document = pypdfium2.PdfDocument(path)
    return [document.get_page_label(place) for place in range(len(document))]


if __name__ == "__main__":
    print("\n".join(f"sheet {label}" for label in labels(sys.argv[1])))
