"""Rows of sets: how many there may be, and their names against those a set lists, `W*` for any that begins so.

Names and counts in, verdicts and words out.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable

#: rows of one set at most
MOST_ROWS = 1000


def fits(name: str, patterns: Iterable[str], listed: Collection[str]) -> bool:
    """Tell whether a name is one of the patterns, or ends a stem among them; a stem takes no name `listed` in full."""
    return any(
        name.startswith(pattern[:-1]) and name not in listed if pattern.endswith("*") else name == pattern
        for pattern in patterns
    )


def wanted(least: int, most: int) -> str:
    """Return how many rows a set takes, in words: '1 or more rows', '2 to 4 rows'."""
    return f"{least} or more rows" if most >= MOST_ROWS else f"{least} to {most} rows"
