"""Two comparisons of one thing as the trade writes them: 0.75 <= lambda <= 1.0.

Comparisons in, chains out. Knows no formula trees.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal, TypeAlias

from calcreport.core.expression import Compare, Condition, Expression, Number

#: the name a side has in its comparison
Side: TypeAlias = Literal["left", "right"]


@dataclass(frozen=True, slots=True)
class Rising:
    """A comparison read from its lesser side."""

    test: Compare
    small: tuple[Side, Expression]
    sign: str
    large: tuple[Side, Expression]


@dataclass(frozen=True, slots=True)
class Chain:
    """low < middle < high: the middle is the large side of one comparison and the small side of the other."""

    lower: Rising
    upper: Rising


def find_chain(one: Condition, other: Condition, alike: Callable[[Expression, Expression], bool]) -> Chain | None:
    """Return two comparisons as a chain, where they share what is between; a number between would say nothing."""
    lower, upper = _rising(one), _rising(other)
    if lower is None or upper is None:
        return None
    for first, second in ((lower, upper), (upper, lower)):
        if not isinstance(first.large[1], Number) and alike(first.large[1], second.small[1]):
            return Chain(first, second)
    return None


def _rising(test: Condition) -> Rising | None:
    if not isinstance(test, Compare):
        return None
    if test.op in ("<", "<="):
        return Rising(test, ("left", test.left), test.op, ("right", test.right))
    if test.op in (">", ">="):
        return Rising(test, ("right", test.right), test.op.replace(">", "<"), ("left", test.left))
    return None
