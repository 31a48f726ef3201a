"""Loads of one span and what they do inside it, by statics.

Places from the left of the span, loads down; base units. Loads are point forces and lines of load between two places,
growing evenly. Method: an integral of a polynomial of degree five or less by three points of Gauss is exact (common
practice), and sums only terms of one sign where the load has one.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

#: places and weights of three Gauss points on a length of one
_GAUSS = tuple((0.5 + half * math.sqrt(0.15), weight) for half, weight in ((-1, 5 / 18), (0, 8 / 18), (1, 5 / 18)))


@dataclass(frozen=True, slots=True)
class Spread:
    """A load from one place to another, force a length at both."""

    start: float
    end: float
    first: float
    last: float


@dataclass(frozen=True, slots=True)
class Loads:
    """The loads of one span."""

    spread: tuple[Spread, ...] = ()
    #: (place, force)
    points: tuple[tuple[float, float], ...] = ()

    def weighed(self, weight: Callable[[float], float], before: float = math.inf, *, past: bool = True) -> float:
        """Return the sum of forces left of a place, each times a polynomial of its own place, cubic at most."""
        found = sum(p * weight(s) for s, p in self.points if s < before or (past and s == before))
        for one in self.spread:
            length, whole = min(one.end, before) - one.start, one.end - one.start
            if length <= 0:
                continue
            for share, part in _GAUSS:
                s = share * length
                found += part * length * (one.first + (one.last - one.first) * s / whole) * weight(one.start + s)
        return found

    def effect(self, x: float, order: int, *, past: bool = True) -> float:
        """Return what the loads left of a place take from shear (order 0), moment (1), slope (2), deflection (3)."""
        divisor = math.factorial(order)
        return self.weighed(lambda s: (x - s) ** order / divisor, x, past=past)

    def breaks(self) -> tuple[float, ...]:
        """Return the places between which the loads have one formula."""
        return (*(s for s, _ in self.points), *(place for one in self.spread for place in (one.start, one.end)))

    def fixed(self, length: float) -> tuple[float, float]:
        """Return the sizes of the moments at fixed ends, left and right."""
        left = self.weighed(lambda s: s * (length - s) ** 2 / length**2)
        return left, self.weighed(lambda s: s**2 * (length - s) / length**2)


def turning_places(shears: tuple[float, float, float], start: float, end: float) -> list[float]:
    """Return where a shear that is quadratic between two places is nothing, from it there and midway."""
    first, middle, last = shears
    # first + b t + a t^2 with t from 0 to 1
    a, b = 2 * (first - 2 * middle + last), 4 * middle - 3 * first - last
    scale = max(abs(first), abs(middle), abs(last))
    if abs(a) <= 1e-12 * scale:
        roots = [-first / b] if b else []
    else:
        inside = b * b - 4 * a * first
        if inside < 0:
            return []
        # the form without cancellation (common practice)
        q = -(b + math.copysign(math.sqrt(inside), b)) / 2
        roots = [q / a, *([first / q] if q else [])]
    return [start + t * (end - start) for t in roots if 0 <= t <= 1]
