"""Where things come from: a place in a file, a place in a design code.

Text in, places out. Knows nothing of YAML, formulas or problems.
"""

from __future__ import annotations

import re
from bisect import bisect_right
from dataclasses import dataclass, field


@dataclass(frozen=True, eq=False)
class Source:
    """A text with the name it is known by; two sources are the same only if they are one object."""

    #: path inside its own folder: what a sheet prints, the same wherever the folder lies
    name: str
    text: str
    #: folder as the user typed it, '' for the working folder and for the template library
    folder: str = ""
    #: offsets at which lines begin; filled when a place is first asked for
    _starts: list[int] = field(default_factory=list, repr=False)

    @property
    def shown(self) -> str:
        """The path as the user would type it, for problems."""
        return f"{self.folder}/{self.name}" if self.folder else self.name

    def place(self, offset: int) -> tuple[int, int]:
        """Return line and column, both counted from 1, of a character offset."""
        starts = self._line_starts()
        line = bisect_right(starts, offset)
        return line, offset - starts[line - 1] + 1

    def line_start(self, line: int) -> int:
        """Return the offset at which a line counted from 1 begins; the end of the text beyond the last."""
        starts = self._line_starts()
        return starts[line - 1] if line <= len(starts) else len(self.text)

    def _line_starts(self) -> list[int]:
        if not self._starts:
            self._starts.append(0)
            self._starts.extend(match.end() for match in re.finditer("\n", self.text))
        return self._starts

    def line_text(self, line: int) -> str:
        """Return the text of a line counted from 1, without its end."""
        starts = self._line_starts()
        if not 0 < line <= len(starts):
            return ""
        end = starts[line] - 1 if line < len(starts) else len(self.text)
        return self.text[starts[line - 1] : end]


@dataclass(frozen=True, slots=True)
class Span:
    """A stretch of a source, from `start` up to but not including `end` (character offsets)."""

    source: Source
    start: int
    end: int
    #: the text read differs from the text in the file (folded lines, doubled quotes): no part of it has a place
    whole: bool = False

    @property
    def place(self) -> str:
        """The place as 'file:line:column'."""
        line, column = self.source.place(self.start)
        return f"{self.source.shown}:{line}:{column}"

    @property
    def text(self) -> str:
        """The characters covered."""
        return self.source.text[self.start : self.end]

    def part(self, start: int, end: int) -> Span:
        """Return the stretch from `start` to `end`, counted from this span's own start."""
        if self.whole:
            return self
        return Span(self.source, self.start + start, self.start + end)


@dataclass(frozen=True, slots=True)
class Citation:
    """A place in a design code, or plain geometry or statics."""

    #: document as printed when it is not the calculation's own code; '' for its own code or no code
    document: str
    #: clause, equation or table as printed: '22.2.2.4.1', 'Table 21.2.2', 'geometry', 'statics'
    clause: str

    @property
    def printed(self) -> str:
        """The citation as a sheet shows it."""
        return f"{self.document} {self.clause}".strip()
