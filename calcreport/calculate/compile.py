"""Formulas and conditions as Python closures over `Values`: built once a plan, run once a calculation.

Planned trees in, callables out. No author text is ever handed to the interpreter.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from itertools import pairwise

from calcreport.calculate.exact import holds_exactly
from calcreport.calculate.model import NoValue, Test, Values, Work
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

#: two sides closer than this (relative) are compared exactly
TIE = 1e-9


def formula(node: Expression, sets: tuple[tuple[int, ...], ...]) -> Work:
    """Return a callable that works a formula; `sets` are the sets of every slot."""
    match node:
        case Number(value, _, unit):
            constant = float(value * unit.scale) if unit else float(value)
            return lambda values: constant
        case Name():
            return _name(node, sets)
        case Negate(body):
            inner = formula(body, sets)
            return lambda values: -inner(values)
        case Binary(op, left, right):
            return _binary(op, formula(left, sets), formula(right, sets))
        case Call(function, arguments):
            return _call(function, [formula(argument, sets) for argument in arguments])
        case Strip(body, unit):
            inner, size = formula(body, sets), unit.size
            return lambda values: inner(values) / size
        case Attach(body, unit):
            inner, size = formula(body, sets), unit.size
            return lambda values: inner(values) * size
        case Over():
            return _over(node, sets)


def _name(node: Name, sets: tuple[tuple[int, ...], ...]) -> Work:
    slot, owns = node.slot, sets[node.slot]
    if not owns:
        return lambda values: values.plain[slot]  # type: ignore[return-value]
    if len(owns) == 1:
        only = owns[0]
        return lambda values: values.rows[slot][(values.open[only],)]  # type: ignore[return-value]
    if len(owns) == 2:
        # a factor by combination and load, an effect by section and load: most of the work of long tables
        first, second = owns
        return lambda values: values.rows[slot][values.open[first], values.open[second]]  # type: ignore[return-value]
    return lambda values: values.rows[slot][tuple([values.open[s] for s in owns])]  # type: ignore[return-value]


def _binary(op: str, left: Work, right: Work) -> Work:
    if op == "+":
        return lambda values: left(values) + right(values)
    if op == "-":
        return lambda values: left(values) - right(values)
    if op == "*":
        return lambda values: left(values) * right(values)
    if op == "/":
        return lambda values: _divide(left(values), right(values))
    return lambda values: _power(left(values), right(values))


def _divide(above: float, below: float) -> float:
    if below == 0:
        raise NoValue("division by zero")
    return above / below


def _power(base: float, exponent: float) -> float:
    if base < 0 and exponent != int(exponent):
        raise NoValue("root of a negative value")
    if base == 0 and exponent < 0:
        raise NoValue("division by zero")
    return float(base**exponent)


def _sqrt(value: float) -> float:
    if value < 0:
        raise NoValue("root of a negative value")
    return math.sqrt(value)


def _ln(value: float) -> float:
    if value <= 0:
        raise NoValue("logarithm of a value that is not positive")
    return math.log(value)


_PLAIN: dict[str, Callable[[float], float]] = {
    "abs": abs,
    "sqrt": _sqrt,
    "exp": math.exp,
    "ln": _ln,
    "sin": math.sin,
    "cos": math.cos,
    "tan": math.tan,
    "atan": math.atan,
}


def _call(function: str, inner: list[Work]) -> Work:
    if function in _PLAIN:
        plain, only = _PLAIN[function], inner[0]
        return lambda values: plain(only(values))
    if function == "min":
        return lambda values: min([work(values) for work in inner])
    if function == "max":
        return lambda values: max([work(values) for work in inner])
    value, step = inner
    up = function == "roundup"
    return lambda values: _round(value(values), step(values), up)


def _round(value: float, step: float, up: bool) -> float:
    """Round to a multiple of a step; a value within the tie of a multiple is that multiple."""
    if step <= 0:
        raise NoValue("rounding to a step that is not positive")
    steps = value / step
    near = round(steps)
    if abs(steps - near) <= TIE * max(abs(steps), 1.0):
        return near * step
    return (math.ceil(steps) if up else math.floor(steps)) * step


# ---------------------------------------------------------------- over a set


def _over(node: Over, sets: tuple[tuple[int, ...], ...]) -> Work:
    body = formula(node.body, sets)
    where = condition(node.where, sets) if node.where is not None else None
    otherwise = formula(node.otherwise, sets) if node.otherwise is not None else None
    index, function = node.bound, node.function

    def found(values: Values) -> list[float]:
        before, judge = values.open[index], values.judge or values
        kept: list[float] = []
        rows = len(values.row_names(index))
        values.spend(rows)
        for row in range(rows):
            values.open[index] = row
            if where is None or where(judge):
                kept.append(body(values))
                if function == "pick":
                    break
        values.open[index] = before
        return kept

    def work(values: Values) -> float:
        kept = found(values)
        if function == "sum":
            return math.fsum(kept)
        if not kept:
            if otherwise is None:
                raise NoValue(f"no row of `{node.rows}` fits")
            return otherwise(values)
        return kept[0] if function == "pick" else max(kept) if function == "max" else min(kept)

    if function == "linear":
        assert isinstance(node.where, Compare)
        return _linear(node, node.where, body, otherwise, sets)
    return work


def _linear(node: Over, where: Compare, body: Work, otherwise: Work | None, sets: tuple[tuple[int, ...], ...]) -> Work:
    """Read y on the straight lines between rows, in rising order of x; outside them is no value.

    Rows at one x are a step, in the order they are given: up to it the first holds, past it the last.
    """
    x, at, index = formula(where.left, sets), formula(where.right, sets), node.bound

    def work(values: Values) -> float:
        before, judge = values.open[index], values.judge or values
        place = at(judge)
        points: list[tuple[float, float, float]] = []
        rows = len(values.row_names(index))
        values.spend(rows)
        for row in range(rows):
            values.open[index] = row
            points.append((x(judge), x(values), body(values)))
        values.open[index] = before
        points.sort(key=lambda point: point[0])
        slack = TIE * abs(place)
        for (here, x1, y1), (there, x2, y2) in pairwise(points):
            if abs(here - place) <= slack:
                return y1
            if here < place <= there + slack:
                return y2 if abs(there - place) <= slack or x2 == x1 else y1 + (y2 - y1) * (at(values) - x1) / (x2 - x1)
        if otherwise is None:
            raise NoValue(f"outside the rows of `{node.rows}`")
        return otherwise(values)

    return work


# ---------------------------------------------------------------- conditions


def condition(node: Condition, sets: tuple[tuple[int, ...], ...]) -> Test:
    """Return a callable that tells whether a condition holds, ties decided exactly."""
    match node:
        case Compare():
            return _compare(node, formula(node.left, sets), formula(node.right, sets))
        case Logic("and", left, right):
            one, other = condition(left, sets), condition(right, sets)
            return lambda values: one(values) and other(values)
        case Logic(_, left, right):
            one, other = condition(left, sets), condition(right, sets)
            return lambda values: one(values) or other(values)
        case Not(body):
            inner = condition(body, sets)
            return lambda values: not inner(values)
        case Is(name, word, _, bound):
            if bound >= 0:
                return lambda values: values.row_names(bound)[values.open[bound]] == word
            slot = name.slot
            return lambda values: values.get(slot, values.key(slot)) == word
        case IsGiven(name):
            slot = name.slot
            return lambda values: values.get(slot, values.key(slot)) is not None


def _compare(node: Compare, left: Work, right: Work) -> Test:
    def test(values: Values) -> bool:
        return holds(node, left(values), right(values), values)

    return test


def holds(node: Compare, left: float, right: float, values: Values) -> bool:
    """Compare two worked sides; within a tie the two are worked again exactly."""
    if abs(left - right) <= TIE * max(abs(left), abs(right)):
        return holds_exactly(node, values)
    match node.op:
        case "<" | "<=":
            return left < right
        case ">" | ">=":
            return left > right
        case "=":
            return False
        case "!=":
            return True
