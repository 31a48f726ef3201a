"""Formulas worked again in exact fractions, back to the given values, where two sides tie.

Roots and transcendental functions are carried to sixty digits; two sides that agree to forty are equal.
"""

from __future__ import annotations

import math
from fractions import Fraction
from itertools import pairwise

from calcreport.calculate.model import Key, NoValue, Values
from calcreport.core.expression import (
    Attach,
    Binary,
    Call,
    Compare,
    Condition,
    Expression,
    Is,
    IsGiven,
    Logic,
    Name,
    Negate,
    Not,
    Number,
    Over,
    Strip,
)
from calcreport.core.late import load

DIGITS = 60
_SCALE = 10**DIGITS
_EQUAL, _EQUAL_TO_ROOT = Fraction(1, 10**40), Fraction(1, 10**12)
#: transcendental values below two to minus this are carried as if they were that small, not smaller
_SMALLEST_BITS = 20_000
#: fractions longer than this many bits are cut to 120 digits, far beyond what a comparison looks at
_LONGEST_BITS = 4000


def holds_exactly(node: Compare, values: Values) -> bool:
    """Tell whether a comparison holds with both sides worked exactly in the open rows."""
    left, right = work(node.left, values), work(node.right, values)
    difference = left - right
    equal = _EQUAL_TO_ROOT if values.rough else _EQUAL
    if abs(difference) <= equal * max(abs(left), abs(right)):
        return node.op in ("<=", ">=", "=")
    match node.op:
        case "<" | "<=":
            return difference < 0
        case ">" | ">=":
            return difference > 0
        case "=":
            return False
        case "!=":
            return True


def work(node: Expression, values: Values) -> Fraction:
    """Return the exact value of a formula in base units."""
    match node:
        case Number(value, _, unit):
            return value * unit.scale if unit else value
        case Name(_, _, slot):
            return worked_slot(slot, values.key(slot), values)
        case Negate(body):
            return -work(body, values)
        case Binary(op, left, right):
            return _short(_binary(op, work(left, values), work(right, values)))
        case Call(function, arguments):
            return _short(_call(function, [work(argument, values) for argument in arguments]))
        case Strip(body, unit):
            return work(body, values) / unit.scale
        case Attach(body, unit):
            return work(body, values) * unit.scale
        case Over():
            return _over(node, values)


def worked_slot(slot: int, key: Key, values: Values) -> Fraction:
    """Return the exact value of a slot: as given, or its line worked again."""
    place = slot, key
    known = values.given.get(place)
    if known is None:
        known = values.exact.get(place)
    if known is None:
        expression = values.worked.get(place)
        if expression is None:
            # a root is known to the last bits only; what is compared with it is compared to twelve digits
            values.rough = True
            return Fraction(values.number(slot, key))
        before = list(values.open)
        for index, row in zip(values.sets[slot], key, strict=True):
            values.open[index] = row
        known = work(expression, values)
        values.open[:] = before
        values.exact[place] = known
    return known


def exact_or_float(slot: int, key: Key, values: Values) -> Fraction:
    """Return the exact value of a slot that holds a number, or its binary form where the exact one does not exist."""
    try:
        return worked_slot(slot, key, values)
    except NoValue:
        return Fraction(values.number(slot, key))


def _binary(op: str, left: Fraction, right: Fraction) -> Fraction:
    match op:
        case "+":
            return left + right
        case "-":
            return left - right
        case "*":
            return left * right
        case "/":
            if right == 0:
                raise NoValue("division by zero")
            return left / right
        case _:
            return _power(left, right)


def _power(base: Fraction, exponent: Fraction) -> Fraction:
    if base == 0 and exponent < 0:
        raise NoValue("division by zero")
    if exponent.denominator == 1 and abs(exponent) <= 64:
        return base ** int(exponent)
    if exponent.denominator == 2 and abs(exponent) <= 64:
        return _root(base) ** int(2 * exponent)
    return _irrational("power", base, exponent)


def _root(value: Fraction) -> Fraction:
    """Return a square root: exact where the value is a square, else to sixty digits and more."""
    if value < 0:
        raise NoValue("root of a negative value")
    above, below = math.isqrt(value.numerator), math.isqrt(value.denominator)
    if above * above == value.numerator and below * below == value.denominator:
        return Fraction(above, below)
    return Fraction(math.isqrt(value.numerator * _SCALE * _SCALE // value.denominator), _SCALE)


def _call(function: str, inner: list[Fraction]) -> Fraction:
    match function:
        case "min":
            return min(inner)
        case "max":
            return max(inner)
        case "abs":
            return abs(inner[0])
        case "sqrt":
            return _root(inner[0])
        case "roundup" | "rounddown" if inner[1] <= 0:
            raise NoValue("rounding to a step that is not positive")
        case "roundup":
            return math.ceil(inner[0] / inner[1]) * inner[1]
        case "rounddown":
            return math.floor(inner[0] / inner[1]) * inner[1]
        case _:
            return _irrational(function, inner[0])


def _irrational(function: str, *inner: Fraction) -> Fraction:
    """Return a transcendental value to sixty digits, by a library of multiple-precision arithmetic."""
    mpmath = load("mpmath")
    with mpmath.workdps(DIGITS + 10):
        numbers = [mpmath.mpf(x.numerator) / x.denominator for x in inner]
        found = getattr(mpmath, function)(*numbers)
        sign, mantissa, exponent, _ = found._mpf_
        # a hostile exponent must not become a fraction of as many bits
        value = Fraction(int(mantissa)) * Fraction(2) ** max(int(exponent), -_SMALLEST_BITS)
        return -value if sign else value


def _over(node: Over, values: Values) -> Fraction:
    index, before = node.bound, values.open[node.bound]
    kept: list[Fraction] = []
    points: list[tuple[Fraction, Fraction]] = []
    at = Fraction(0)
    if node.function == "linear":
        assert isinstance(node.where, Compare)
        at = work(node.where.right, values)
    for row in range(len(values.row_names(index))):
        values.open[index] = row
        if node.function == "linear":
            assert isinstance(node.where, Compare)
            points.append((work(node.where.left, values), work(node.body, values)))
        elif node.where is None or condition_holds(node.where, values):
            kept.append(work(node.body, values))
    values.open[index] = before
    if node.function == "sum":
        return _short(sum(kept, Fraction(0)))
    if node.function == "linear":
        return _between(sorted(points, key=lambda point: point[0]), at, node, values)
    if not kept:
        assert node.otherwise is not None
        return work(node.otherwise, values)
    return kept[0] if node.function == "pick" else max(kept) if node.function == "max" else min(kept)


def _between(points: list[tuple[Fraction, Fraction]], at: Fraction, node: Over, values: Values) -> Fraction:
    for (x1, y1), (x2, y2) in pairwise(points):
        if x1 <= at <= x2:
            return y1 if x1 == x2 else y1 + (y2 - y1) * (at - x1) / (x2 - x1)
    assert node.otherwise is not None
    return work(node.otherwise, values)


def condition_holds(node: Condition, values: Values) -> bool:
    """Tell whether a condition holds, everything worked exactly."""
    match node:
        case Compare():
            return holds_exactly(node, values)
        case Logic("and", left, right):
            return condition_holds(left, values) and condition_holds(right, values)
        case Logic(_, left, right):
            return condition_holds(left, values) or condition_holds(right, values)
        case Not(body):
            return not condition_holds(body, values)
        case Is(name, word, _, bound):
            if bound >= 0:
                return values.row_names(bound)[values.open[bound]] == word
            return values.get(name.slot, values.key(name.slot)) == word
        case IsGiven(name):
            return values.get(name.slot, values.key(name.slot)) is not None


def _short(value: Fraction) -> Fraction:
    if value.numerator.bit_length() + value.denominator.bit_length() <= _LONGEST_BITS:
        return value
    scale = 10 ** (2 * DIGITS)
    shift = max(0, value.denominator.bit_length() - value.numerator.bit_length()) * 302 // 1000
    scale *= 10**shift
    return Fraction(value.numerator * scale // value.denominator, scale)
