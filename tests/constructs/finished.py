"""The sheet of a small template, built through the command line and read back from the PDF alone.

In: a template and its given values. Out: the text of each numbered line as pdfium takes it out, and the glyphs with
their places as `tests.proof` reads them. Shares no code with the program.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

import pypdfium2
from pypdf import PdfReader

from tests.proof.frames import Frame, find_frame
from tests.proof.glyphs import Glyph, PageInk, Reader
from tests.proof.prove import build
from tests.small import write_small


@dataclass(frozen=True, slots=True)
class Sheet:
    """The first sheet of calculation T1."""

    #: text by line number; words between lines stand with the line before, those before line 1 under 0
    lines: dict[int, str]
    ink: PageInk
    frame: Frame
    #: exit code of the build
    code: int

    def row(self, words: str) -> list[Glyph]:
        """Return the glyphs on the baseline of the row in which these words stand, from left to right."""
        for glyph in self.ink.glyphs:
            row = sorted((g for g in self.ink.glyphs if abs(g.y - glyph.y) < 0.3), key=lambda g: g.left)
            if words.replace(" ", "") in "".join(g.text for g in row).replace(" ", ""):
                return row
        raise AssertionError(f"no row holds {words!r}")

    def find(self, words: str) -> list[Glyph]:
        """Return the glyphs of these words, which stand on one baseline."""
        row = [g for g in self.row(words) if g.text.strip()]
        text, wanted = "".join(g.text for g in row), words.replace(" ", "")
        at = text.index(wanted)
        assert all(len(g.text) == 1 for g in row), "a glyph of several letters"
        return row[at : at + len(wanted)]


def finish(folder: Path, template: str, given: str, system: str = "us") -> Sheet:
    """Build the project in a system of units and read its sheet."""
    project, target = write_small(folder, template, given), folder / "package.pdf"
    if system == "si":
        _replace(folder / "small.yaml", "units: [us]", "units: [us, si]")
        _replace(project, "units: us", "units: si")
    built = build(project, target)
    assert built.returncode in (0, 1), built.stdout + built.stderr
    document = pypdfium2.PdfDocument(target)
    place = next(i for i in range(len(document)) if document.get_page_label(i) == "T1-1")
    text = document[place].get_textpage().get_text_range()
    ink = Reader().read(PdfReader(target).pages[place])
    frame = find_frame(ink)
    assert frame is not None and frame.lanes is not None
    return Sheet(_numbered(text.partition("PROJECT")[0]), ink, frame, built.returncode)


def _replace(file: Path, old: str, new: str) -> None:
    file.write_text(file.read_text(encoding="utf-8").replace(old, new), encoding="utf-8")


def _numbered(text: str) -> dict[int, str]:
    """Part a sheet's text at its line numbers, which run from 1."""
    lines: dict[int, str] = {}
    number, kept = 0, []
    for row in text.splitlines():
        head = re.match(rf"{number + 1} (?!\d+ *$)", row)
        if head and "IN THIS CALCULATION" not in row:
            lines[number] = _plain(kept)
            number, kept = number + 1, [row[head.end() :]]
        else:
            kept.append(row)
    lines[number] = _plain(kept)
    return lines


def _plain(rows: list[str]) -> str:
    """Return rows as one: pdfium ends a row where the baseline moves, before a subscript as before a new line."""
    return " ".join(" ".join(rows).replace("\u200b", "").split())
