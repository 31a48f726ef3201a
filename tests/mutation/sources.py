"""What kind of source an expectation names: only those from outside the program may tell a wrong rule from a right one.

The words beside an expected value in, its kind out. Judges the words alone, never the value.
"""

from __future__ import annotations

import re
from typing import Literal, TypeAlias

#: 'own' is a computation of this project's authors that works by the same statics; 'unstated' names no source at all
SourceKind: TypeAlias = Literal["publication", "hand", "exact", "own", "unstated"]
#: kinds that count: a publication, a sum written out, a solution that is exact by geometry or statics
OUTSIDE: frozenset[SourceKind] = frozenset({"publication", "hand", "exact"})

_OWN = re.compile(r"\b(?:own|independent) (?:computation|calculation)", re.IGNORECASE)
_HAND = re.compile(r"hand\b")
_EXACT = re.compile(r"(?:geometry|statics|exact|closed form|sign convention|definition)\b")
#: '1020 is below 1500', '0.005 against 0.002 + 0.003', '568, the area of 2 No. 19'
_COMPARED = re.compile(r"[-+]?[0-9.]+\b.* (?:is above|is below|against|the area of) .*[0-9]")
#: 'ABC 123-19 Table 4', 'ABC/DE 7-22', 'ABCD X615', a book with its edition, a table or example by number
_PUBLISHED = re.compile(
    r"\b[A-Z]{3,}(?:/[A-Z]+)*[ -][A-Z]?[0-9]|\bed\.,|\b(?:Example|Table|Appendix) [A-Z0-9]|\b(?:Handbook|Manual)\b"
)


def kind_of(source: str) -> SourceKind:
    """Return the kind of a source by its words; a sum that starts as `hand` is one though it cites its factors."""
    words = source.strip()
    if _OWN.search(words):
        return "own"
    if _HAND.match(words) or _COMPARED.match(words):
        return "hand"
    if _EXACT.match(words):
        return "exact"
    return "publication" if _PUBLISHED.search(words) else "unstated"
