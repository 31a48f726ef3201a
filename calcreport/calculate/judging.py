"""What a check comes to: its comparisons, the one that decides, its kind and its ratio.

Worked comparisons in, kind and ratio out. The verdict itself is told by the condition, never by the ratio.
"""

from __future__ import annotations

import math

from calcreport.calculate.compile import holds
from calcreport.calculate.model import Comparison, Kind, Values
from calcreport.core.expression import Compare, Condition, Logic, Name, Not, Number


def comparisons(node: Condition) -> tuple[Compare, ...]:
    match node:
        case Compare():
            return (node,)
        case Logic(_, left, right):
            return comparisons(left) + comparisons(right)
        case Not(body):
            return comparisons(body)
        case _:
            return ()


def kind_of(test: Compare) -> Kind:
    """Name the kind of check a comparison makes."""
    if test.op in ("<", "<="):
        if isinstance(test.right, Number) and test.right.value == 1 and isinstance(test.left, Name):
            return "ratio"
        return "demand / capacity"
    return "required / provided" if test.op in (">", ">=") else "condition"


def ratio_of(side: Comparison) -> float | None:
    """Return demand over capacity; None where there is none to show."""
    if side.test.op in ("<", "<="):
        demand, capacity = side.left, side.right
    elif side.test.op in (">", ">="):
        demand, capacity = side.right, side.left
    else:
        return None
    if capacity > 0:
        return max(demand, 0.0) / capacity
    return 0.0 if demand <= 0 and demand <= capacity else None


def deciding(
    node: Condition, judged: list[tuple[float | None, Comparison]], values: Values
) -> tuple[float | None, Comparison] | None:
    """Return the comparison that decides: of either route the easier, of joint demands the harder."""
    match node:
        case Compare():
            return next(pair for pair in judged if pair[1].test is node)
        case Logic(op, left, right):
            found = [p for p in (deciding(left, judged, values), deciding(right, judged, values)) if p is not None]
            if not found:
                return None

            def rank(pair: tuple[float | None, Comparison]) -> tuple[bool, float]:
                side = pair[1]
                failed = not holds(side.test, side.left, side.right, values)
                return failed, math.inf if pair[0] is None else pair[0]

            return min(found, key=rank) if op == "or" else max(found, key=rank)
        case _:
            return None
