"""What a closure is handed of the first path, and how it holds a sum against nothing."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

#: residuals beyond this share of their largest term do not close
WITHIN = 1e-9


class NotClosed(Exception):
    """What the first path found does not satisfy its own equations; the words say which."""


@dataclass(frozen=True, slots=True)
class Found:
    """What a method of the first path came to, base units: outputs, row names by set, outputs over rows."""

    outputs: dict[str, float]
    sets: dict[str, dict[tuple[int, ...], tuple[str, ...]]]
    by_row: dict[str, dict[tuple[int, ...], float]]


def close(what: str, terms: list[Any]) -> None:
    """Hold a sum of terms against nothing."""
    gap, largest = abs(sum(terms)), max(abs(term) for term in terms)
    if gap > WITHIN * largest:
        raise NotClosed(f"{what} is out by {float(gap / largest):.1e}")
