"""The source lane of a line: the numbers of the lines that it takes values from.

In: `NumberedLine` records. Out: line numbers of the same calculation.
"""

from __future__ import annotations

import re

from .equations import printed_of
from .expressions import split
from .statements import NumberedLine

#: a line of another calculation: CB1.24
_ELSEWHERE = re.compile(r"\S+\.\d+\b.*")


def source_numbers(line: NumberedLine) -> list[int]:
    """Return the line numbers that stand in the source lane after the citation; a given value has none."""
    formulas = [split(s.tokens, "relation")[0] for s in line.statements if s.kind == "formula"]
    if formulas and all(len(p) < 2 or (len(p) == 2 and printed_of(p[1]) is not None) for p in formulas):
        return []
    found = []
    if re.search(r"\brows? \d", " ".join(line.source)):
        return []  # rows of a table, which is no sheet
    for text, below in zip(line.source, [*line.source[1:], ""], strict=False):
        numbers = re.search(r"((?:(?<=\s)|^)\d{1,3}(?:\s+\d{1,3})*)$", text)
        if numbers and not re.search(r"line \d+$", text) and not re.search(r"(material|row|of) \S*$", text):
            # a row of another calculation may end in a number: CB1 station, 1 to 2
            found += [int(word) for word in numbers[1].split()] if not _handed(below) else []
    return found


def _handed(text: str) -> bool:
    return _ELSEWHERE.fullmatch(text) is not None and text[0].isalpha()
