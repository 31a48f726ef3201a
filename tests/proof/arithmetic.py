"""Values of expressions: by bare numbers as on a pocket calculator, or with symbols and units.

In: trees of `expressions`, and a `Sheet` that says what symbols are worth in print. Out: decimal numbers of 50 digits
with dimensions. `Unknown` where a symbol is not on the sheet, `Mixed` where dimensions do not fit.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Context, Decimal, localcontext
from fractions import Fraction as F
from typing import Protocol

from .expressions import Node, Number, Over, Symbol, Unread, parse, split
from .letters import Token, plain
from .units import Dimension, Printed, unit

NONE: Dimension = (F(0), F(0))
PRECISE = Context(prec=50)


class Unknown(Exception):
    """The value of a symbol is not on the sheet."""


class NoRows(Unknown):
    """An extreme over rows of which there are none."""


class Drawn(Unknown):
    """The value stands in a figure alone: at a station that a method makes."""


@dataclass(frozen=True, slots=True)
class Value:
    """A number in metres and newtons with its dimension."""

    number: Decimal
    dimension: Dimension = NONE


class Sheet(Protocol):
    """Where symbols get their values."""

    def value(self, name: str) -> Value: ...

    def root(self, name: str) -> Value: ...

    def rows(self, name: str, where: tuple[Token, ...]) -> Sequence[Sheet]: ...


def bare(node: Node) -> Decimal:
    """Work an expression of numbers alone, units unheeded."""
    with localcontext(PRECISE):
        return _bare(node)


def _bare(node: Node) -> Decimal:
    if isinstance(node, Number):
        return node.printed.number
    if isinstance(node, Symbol):
        raise Unknown(node.name)
    if isinstance(node, Over):
        return _bare(node.body)
    return _apply(node.name, [_bare(child) for child in node.inputs])


def _apply(name: str, given: list[Decimal]) -> Decimal:
    first = given[0]
    if name == "neg":
        return -first
    if name == "abs":
        return abs(first)
    if name in ("min", "max"):
        return min(given) if name == "min" else max(given)
    if name == "sqrt":
        return first.sqrt()
    if name == "exp":
        return first.exp()
    if name == "ln":
        return first.ln()
    if name in ("sin", "cos", "tan", "atan"):
        return Decimal(getattr(math, name)(float(first)))
    second = given[1]
    if name in ("round up", "round down"):
        steps = first / second
        whole = steps.to_integral_value(rounding="ROUND_CEILING" if name == "round up" else "ROUND_FLOOR")
        return whole * second
    if name == "+":
        return first + second
    if name == "-":
        return first - second
    if name == "*":
        return first * second
    if name == "/":
        return first / second
    return power(first, second)


def power(base: Decimal, exponent: Decimal) -> Decimal:
    """Raise; whole exponents exactly."""
    if exponent == exponent.to_integral_value():
        return base ** int(exponent)
    return (base.ln() * exponent).exp()


def with_unit(printed: Printed) -> Value:
    """Return a printed number in metres and newtons."""
    if not printed.unit:
        return Value(printed.number)
    found = unit(printed.unit)
    if found is None:
        raise Unread(f"{printed.unit!r} is no unit")
    scale, dimension = found
    with localcontext(PRECISE):
        return Value(printed.number * scale.numerator / scale.denominator, dimension)


class Mixed(Exception):
    """Dimensions that do not fit, as in empirical formulas."""


def valued(node: Node, sheet: Sheet) -> Value:
    """Work an expression with the symbols' values of a sheet, dimensions heeded."""
    with localcontext(PRECISE):
        return _valued(node, sheet)


def _valued(node: Node, sheet: Sheet) -> Value:
    if isinstance(node, Number):
        return with_unit(node.printed)
    if isinstance(node, Symbol):
        return sheet.value(node.name)
    if isinstance(node, Over):
        return _over(node, sheet)
    if node.name == "sqrt" and isinstance(node.inputs[0], Symbol):
        try:
            return sheet.root(node.inputs[0].name)
        except Unknown:
            pass
    return _combine(node.name, [_inner(child, sheet) for child in node.inputs])


def _inner(node: Node, sheet: Sheet) -> Value:
    """Work a part of an expression; an extreme over no rows is substituted as 0."""
    try:
        return _valued(node, sheet)
    except NoRows:
        if not isinstance(node, Over):
            raise
        return Value(Decimal(0))


def _read(node: Over, sheet: Sheet) -> Value:
    """Read a value between two rows on a straight line: `read` over `station: x = x_c`."""
    along, marks = split(node.where, "relation")
    if marks != ["="]:
        raise Unread(f"read over {plain(node.where)}")
    place = _valued(parse(along[1]), sheet)
    rows = [(_valued(parse(along[0]), row), row) for row in sheet.rows(node.rows, ())]
    rows.sort(key=lambda pair: pair[0].number)
    for (x1, one), (x2, other) in itertools.pairwise(rows):
        if x1.number <= place.number <= x2.number:
            first = _valued(node.body, one)
            if x1.number == place.number:
                return first
            second = _valued(node.body, other)
            if x2.number == place.number:
                return second
            share = (place.number - x1.number) / (x2.number - x1.number)
            rise = _combine("*", [_combine("-", [second, first]), Value(share)])
            return _combine("+", [first, rise])
    raise Unknown(f"{plain(node.where)} lies outside the rows of {node.rows}")


def _over(node: Over, sheet: Sheet) -> Value:
    if node.name == "read":
        return _read(node, sheet)
    found = [_valued(node.body, row) for row in sheet.rows(node.rows, node.where)]
    if node.name == "∑":
        if not found:
            return Value(Decimal(0))
        total = found[0]
        for other in found[1:]:
            total = _combine("+", [total, other])
        return total
    if not found:
        raise NoRows(f"{node.name} over no rows of {node.rows}")
    if node.name == "pick" or len(found) == 1:
        return found[0]
    return _combine(node.name, found)


def _combine(name: str, given: list[Value]) -> Value:
    numbers_ = [value.number for value in given]
    first = given[0]
    if name in ("+", "-", "min", "max", "round up", "round down"):
        kinds = {value.dimension for value in given if value.number != 0}
        if len(kinds) > 1:
            raise Mixed(name)
        return Value(_apply(name, numbers_), next(iter(kinds), first.dimension))
    if name in ("neg", "abs"):
        return Value(_apply(name, numbers_), first.dimension)
    length, force = first.dimension
    if name == "sqrt":
        return Value(first.number.sqrt(), (length / 2, force / 2))
    if name == "^":
        by = F(given[1].number)
        if by.denominator > 100:
            by = by.limit_denominator(12)
        return Value(power(first.number, given[1].number), (length * by, force * by))
    if name in ("*", "/"):
        other = given[1].dimension
        sign = 1 if name == "*" else -1
        return Value(_apply(name, numbers_), (length + sign * other[0], force + sign * other[1]))
    if any(value.dimension != NONE for value in given):
        raise Mixed(name)
    return Value(_apply(name, numbers_))
