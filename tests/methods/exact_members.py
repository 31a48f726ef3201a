"""Members on supports in exact fractions, written apart from the program: slope deflection, loads as polynomials.

A load is (start, end, first, last) along a span, or (place, force). Slopes are anticlockwise, moments sagging.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction as F
from itertools import product


def integral(coefficients: list[F], low: F, high: F) -> F:
    """Integrate a polynomial, coefficients from the constant up."""
    return sum(c * (high ** (n + 1) - low ** (n + 1)) / (n + 1) for n, c in enumerate(coefficients))  # type: ignore[return-value]


def times(one: list[F], other: list[F]) -> list[F]:
    found = [F(0)] * (len(one) + len(other) - 1)
    for (i, a), (j, b) in product(enumerate(one), enumerate(other)):
        found[i + j] += a * b
    return found


def value(coefficients: list[F], x: F) -> F:
    return sum((c * x**n for n, c in enumerate(coefficients)), F(0))


@dataclass
class Span:
    """A span with the loads that act together on it."""

    length: F
    stiffness: F
    lines: list[tuple[F, F, F, F]] = field(default_factory=list)
    points: list[tuple[F, F]] = field(default_factory=list)

    def weighed(self, weight: list[F], before: F, past: bool = True) -> F:
        """Return the sum of the forces left of a place, each times a polynomial of its own place."""
        found = F(0)
        for start, end, first, last in self.lines:
            grown = (last - first) / (end - start)
            if before > start:
                found += integral(times([first - grown * start, grown], weight), start, min(end, before))
        for place, force in self.points:
            if place < before or (past and place == before):
                found += force * value(weight, place)
        return found


@dataclass
class Exact:
    """A solved member: moments at the ends of every span, shear at its left end."""

    spans: list[Span]
    hold: list[str]
    springs: list[F]

    def __post_init__(self) -> None:
        count = len(self.spans)
        free = [n for n, word in enumerate(self.hold) if word in ("pinned", "spring")]
        rows = [[F(0)] * (len(free) + 1) for _ in free]
        at = {node: place for place, node in enumerate(free)}
        for node in free:
            if self.hold[node] == "spring":
                rows[at[node]][at[node]] += self.springs[node]
        for number, span in enumerate(self.spans):
            near, far = self.turned(number)
            for node, held in ((number, near), (number + 1, far)):
                if node in at:
                    rows[at[node]][-1] -= held
            if "free" in self.hold[number : number + 2]:
                continue
            unit = 2 * span.stiffness / span.length
            for node, other in ((number, number + 1), (number + 1, number)):
                if node in at:
                    rows[at[node]][at[node]] += 2 * unit
                    if other in at:
                        rows[at[node]][at[other]] += unit
        slopes = dict(zip(free, solved(rows), strict=True))
        self.left, self.right, self.shear = [], [], []
        for number, span in enumerate(self.spans):
            near, far = self.turned(number)
            if "free" not in self.hold[number : number + 2]:
                one, other = slopes.get(number, F(0)), slopes.get(number + 1, F(0))
                unit = 2 * span.stiffness / span.length
                near, far = near + unit * (2 * one + other), far + unit * (one + 2 * other)
            # anticlockwise at the left end is hogging, at the right end sagging
            self.left.append(-near)
            self.right.append(far)
            about_right = span.weighed([span.length, F(-1)], span.length)
            self.shear.append((far + near + about_right) / span.length)
        self.reactions = [F(0)] * (count + 1)
        self.taken = [F(0)] * (count + 1)
        for number, span in enumerate(self.spans):
            self.reactions[number] += self.shear[number]
            self.reactions[number + 1] += span.weighed([F(1)], span.length) - self.shear[number]
            self.taken[number] += self.left[number]
            self.taken[number + 1] -= self.right[number]

    def turned(self, number: int) -> tuple[F, F]:
        """Return the anticlockwise moments on the ends of a span that does not turn, or of an overhang at its root."""
        span, length = self.spans[number], self.spans[number].length
        if self.hold[number] == "free":
            return F(0), -span.weighed([length, F(-1)], length)
        if self.hold[number + 1] == "free":
            return span.weighed([F(0), F(1)], length), F(0)
        # for a force P at s: P s (l - s)^2/l^2 and -P s^2 (l - s)/l^2 (common practice)
        near = [F(0), F(1), F(-2) / length, 1 / length**2]
        far = [F(0), F(0), F(-1) / length, 1 / length**2]
        return span.weighed(near, length), span.weighed(far, length)

    def at(self, number: int, x: F, past: bool) -> tuple[F, F]:
        """Return shear and moment at a place."""
        span = self.spans[number]
        taken = span.weighed([x, F(-1)], x)
        return self.shear[number] - span.weighed([F(1)], x, past), self.left[number] + self.shear[number] * x - taken


def solved(rows: list[list[F]]) -> list[F]:
    """Solve by elimination in fractions."""
    for place in range(len(rows)):
        pivot = next(n for n in range(place, len(rows)) if rows[n][place])
        rows[place], rows[pivot] = rows[pivot], rows[place]
        rows[place] = [entry / rows[place][place] for entry in rows[place]]
        for other in range(len(rows)):
            if other != place:
                factor = rows[other][place]
                rows[other] = [a - factor * b for a, b in zip(rows[other], rows[place], strict=True)]
    return [row[-1] for row in rows]
