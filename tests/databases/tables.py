"""A table of tests: the statistics its head states, and its rows.

Comma-separated text in, with `# statistic open [name]: n = 73, mean = 1.108, cov = 0.138` among the lines of its head.
"""

from __future__ import annotations

import csv
import re
from dataclasses import dataclass
from statistics import mean, stdev
from typing import TypeAlias

#: one test: what was measured and what of, by the heading of its column
Row: TypeAlias = dict[str, str]

_STATED = re.compile(
    r"#\s*statistic open \[(?P<name>[^\]]+)\]: n = (?P<n>\d+), mean = (?P<mean>[\d.]+), cov = (?P<cov>[\d.]+)"
)


@dataclass(frozen=True, slots=True)
class Statistic:
    """Test over predicted: how many tests, their mean, their standard deviation over it."""

    n: int
    mean: float
    cov: float

    @property
    def words(self) -> str:
        """The three in columns."""
        return f"{self.n:>4}{self.mean:>8.3f}{self.cov:>8.3f}"


@dataclass(frozen=True, slots=True)
class Table:
    """A file of tests."""

    stated: dict[str, Statistic]
    rows: tuple[Row, ...]


def read_table(text: str) -> Table:
    """Read a table with its head."""
    lines = text.splitlines()
    found = (_STATED.match(line) for line in lines)
    stated = {m["name"]: Statistic(int(m["n"]), float(m["mean"]), float(m["cov"])) for m in found if m}
    return Table(stated, tuple(csv.DictReader(line for line in lines if not line.startswith("#"))))


def statistic(ratios: list[float]) -> Statistic:
    """Return the statistic of at least two ratios; the deviation is that of a sample."""
    middle = mean(ratios)
    return Statistic(len(ratios), middle, stdev(ratios) / middle)


def number(row: Row, heading: str) -> float:
    """Return a measured number; an empty cell is none, so 0."""
    return float(row[heading] or 0)
