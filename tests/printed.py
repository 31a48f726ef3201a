"""The finished package of a folder as text: what a reader sees on each calculation's sheets."""

from __future__ import annotations

import re
from pathlib import Path

from pypdf import PdfReader

from calcreport.commands.desk import Opened, open_project
from calcreport.publish import build


def printed(folder: Path) -> str:
    """Return the text of all sheets, blanks made single, in the order of reading."""
    opened = open_project(str(folder))
    assert isinstance(opened, Opened), opened
    result = build(opened.world, opened.source)
    assert result.data is not None, result.problems
    out = folder / "printed.pdf"
    out.write_bytes(result.data)
    return re.sub(r"\s+", " ", " ".join(page.extract_text() for page in PdfReader(out).pages))
