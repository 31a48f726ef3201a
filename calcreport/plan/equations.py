"""Equations as they are told: with something on both sides.

Two sides in, two out. `left = 0` leaves nothing but rounding to print at a root; what is subtracted goes to the other
side, so that two numbers can be held against one another.
"""

from __future__ import annotations

from calcreport.core.expression import Binary, Expression, Negate, Number


def balanced(left: Expression, right: Expression) -> tuple[Expression, Expression]:
    """Return the two sides of an equation; where one is zero, the terms added and the terms subtracted."""
    if _is_zero(left):
        added, taken = _parted(right)
        return (taken, added) if added is not None and taken is not None else (left, right)
    if _is_zero(right):
        added, taken = _parted(left)
        return (added, taken) if added is not None and taken is not None else (left, right)
    return left, right


def _is_zero(node: Expression) -> bool:
    return isinstance(node, Number) and node.value == 0


def _parted(node: Expression) -> tuple[Expression | None, Expression | None]:
    """Return the sum of the terms added and that of the terms subtracted, each None where there is none."""
    match node:
        case Binary("+" | "-", left, right):
            one, other = _parted(left), _parted(right)
            if node.op == "-":
                other = other[1], other[0]
            return _summed(one[0], other[0]), _summed(one[1], other[1])
        case Negate(body):
            added, taken = _parted(body)
            return taken, added
        case _:
            return node, None


def _summed(one: Expression | None, other: Expression | None) -> Expression | None:
    if one is None or other is None:
        return one or other
    return Binary("+", one, other, one.span)
