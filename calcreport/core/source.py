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
    def titled(self) -> str:
        """The name an echo of the text is headed by."""
        return self.name

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

    def where(self, offset: int) -> str:
        """Return the place of a character offset as its reader would look for it: 'line:column'."""
        line, column = self.place(offset)
        return f"{line}:{column}"


@dataclass(frozen=True, eq=False)
class TableSource(Source):
    """A table as text, a record a row: sheets name the record, problems the line or the cell of a workbook.

    The text of a workbook's sheet is made by its reader: a line a row, cells apart by tabs.
    """

    #: offsets at which records begin; a record of a text table may run over several lines
    records: tuple[int, ...] = ()
    #: sheet of the workbook, '' for a text table
    sheet: str = ""
    #: what parts its rows from those of other tables in print, '' where there is no other
    label: str = ""

    def record(self, offset: int) -> int:
        """Return the number of the record at an offset, counted from 1 as a spreadsheet counts rows."""
        return bisect_right(self.records, offset)

    def row_words(self, offset: int) -> str:
        """Return the row at an offset as print names it: 'row 12', 'columns.csv row 12'."""
        return f"{self.label} row {self.record(offset)}".lstrip()

    def where(self, offset: int) -> str:
        """Return 'line:column' in a text table, 'Sheet!B12' in a workbook."""
        if not self.sheet:
            return Source.where(self, offset)
        row = self.record(offset)
        column = self.text.count("\t", self.records[row - 1], offset) if row else 0
        return f"{self.sheet}!{column_letters(column)}{max(row, 1)}"

    @property
    def titled(self) -> str:
        """The name of the file and of the sheet, as the echo of inputs is headed."""
        return f"{self.name}, sheet {self.sheet}" if self.sheet else self.name


def column_letters(index: int) -> str:
    """Return the letters a spreadsheet gives a column counted from 0: A, B, …, Z, AA."""
    letters = ""
    index += 1
    while index:
        index, rest = divmod(index - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return letters


def column_index(letters: str) -> int:
    """Return the index of a column, counted from 0, by its letters."""
    index = 0
    for letter in letters:
        index = 26 * index + ord(letter) - ord("A") + 1
    return index - 1


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
        """The place as 'file:line:column', in a workbook as 'file:Sheet!B12'."""
        return f"{self.source.shown}:{self.source.where(self.start)}"

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
