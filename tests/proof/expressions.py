"""Token rows as expressions, and their values: by bare numbers as on a pocket calculator, or with symbols and units.

In: rows of `formulas.Token`. Out: trees and their values. `Unread` where a row follows no known grammar. Arithmetic is
decimal with 50 digits. Symbols are looked up in what the sheet itself prints.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from decimal import Context, Decimal, localcontext
from fractions import Fraction as F
from typing import Protocol, TypeAlias

from .formulas import Token, plain
from .units import Dimension, Printed, is_number, unit

NONE: Dimension = (F(0), F(0))
PRECISE = Context(prec=50)


class Unread(Exception):
    """The ink follows no grammar this reader knows."""


class Unknown(Exception):
    """The value of a symbol is not on the sheet."""


@dataclass(frozen=True, slots=True)
class Number:
    printed: Printed


@dataclass(frozen=True, slots=True)
class Symbol:
    name: str


@dataclass(frozen=True, slots=True)
class Work:
    """An operation: + - * / ^ neg abs sqrt min max and functions by name."""

    name: str
    inputs: tuple[Node, ...]


@dataclass(frozen=True, slots=True)
class Over:
    """A sum or extreme over the rows of a set, with a condition on the rows."""

    name: str
    rows: str
    where: tuple[Token, ...]
    body: Node


Node: TypeAlias = Number | Symbol | Work | Over

_FUNCTIONS = {"min", "max", "exp", "ln", "sin", "cos", "tan", "atan", "round up", "round down", "sqrt"}
_BEGINS = {"number", "word", "open", "fraction", "root", "over"}


def parse(row: Sequence[Token]) -> Node:
    """Read a whole row as one expression."""
    reader = _Parser(list(row))
    found = reader.sum()
    if reader.at < len(reader.row):
        raise Unread(f"{reader.row[reader.at].text!r} after {plain(reader.row[: reader.at])}")
    return found


class _Parser:
    def __init__(self, row: list[Token]) -> None:
        self.row, self.at, self.bars = row, 0, 0

    def peek(self) -> Token | None:
        return self.row[self.at] if self.at < len(self.row) else None

    def take(self) -> Token:
        token = self.peek()
        if token is None:
            raise Unread(f"the row ends early: {plain(self.row)}")
        self.at += 1
        return token

    def expect(self, kind: str) -> None:
        token = self.take()
        if token.kind != kind:
            raise Unread(f"{token.text!r} where {kind} should be, in {plain(self.row)}")

    def sum(self) -> Node:
        found = self.term()
        while (token := self.peek()) is not None and token.kind == "sign" and token.text in "+-":
            self.at += 1
            found = Work(token.text, (found, self.term()))
        return found

    def term(self) -> Node:
        token = self.peek()
        if token is not None and token.kind == "sign" and token.text == "-":
            self.at += 1
            return Work("neg", (self.term(),))
        found = self.factor()
        while (token := self.peek()) is not None:
            if token.kind == "sign" and token.text in "*/·":
                self.at += 1
                found = Work("/" if token.text == "/" else "*", (found, self.factor()))
            elif token.kind in _BEGINS or (token.kind == "bar" and not self.bars):
                found = Work("*", (found, self.factor()))
            else:
                break
        return found

    def factor(self) -> Node:
        found = self.primary()
        raised = self.row[self.at - 1].raised
        return Work("^", (found, parse(raised))) if raised else found

    def primary(self) -> Node:
        token = self.take()
        if token.kind == "number":
            if not is_number(token.text):
                raise Unread(f"{token.text!r} is no number")
            following = self.peek()
            if following is not None and following.kind == "unit" and not token.raised:
                self.at += 1
                return Number(Printed(token.text, token.power, following.text))
            return Number(Printed(token.text, token.power))
        if token.kind == "word":
            return self.word(token)
        if token.kind == "open":
            bars, self.bars = self.bars, 0
            found = self.sum()
            self.expect("close")
            self.bars = bars
            return found
        if token.kind == "bar":
            self.bars += 1
            found = self.sum()
            self.expect("bar")
            self.bars -= 1
            return Work("abs", (found,))
        if token.kind == "fraction":
            return Work("/", (parse(token.parts[0]), parse(token.parts[1])))
        if token.kind == "root":
            return Work("sqrt", (parse(token.parts[0]),))
        if token.kind == "over":
            return self.over(token)
        raise Unread(f"{token.text!r} in {plain(self.row)}")

    def word(self, token: Token) -> Node:
        name, following = token.text, self.peek()
        if name == "round" and following is not None and following.text in ("up", "down"):
            self.at += 1
            name, following = f"round {following.text}", self.peek()
        if name in _FUNCTIONS and following is not None:
            if following.kind == "stack":
                self.at += 1
                return Work(name, tuple(parse(part) for part in following.parts))
            if following.kind == "open":
                self.at += 1
                return Work(name, self.arguments())
        return Symbol(name)

    def arguments(self) -> tuple[Node, ...]:
        bars, self.bars = self.bars, 0
        found = [self.sum()]
        while (token := self.take()).kind == "comma":
            found.append(self.sum())
        if token.kind != "close":
            raise Unread(f"{token.text!r} among arguments")
        self.bars = bars
        return tuple(found)

    def over(self, token: Token) -> Node:
        label = token.parts[0]
        if not label or label[0].kind != "word":
            raise Unread(f"the label below {token.text}: {plain(label)}")
        if len(label) > 1 and label[1].kind != "colon":
            raise Unread(f"the label below {token.text}: {plain(label)}")
        return Over(token.text, label[0].text, tuple(label[2:]), self.term())


def walk(node: Node) -> Iterator[Node]:
    """Yield a node and all below it."""
    yield node
    inner = node.inputs if isinstance(node, Work) else (node.body,) if isinstance(node, Over) else ()
    for child in inner:
        yield from walk(child)


def symbols(node: Node) -> set[str]:
    """Return the names of the symbols of an expression."""
    return {n.name for n in walk(node) if isinstance(n, Symbol)}


def numbers(node: Node) -> list[Printed]:
    """Return the numbers of an expression."""
    return [n.printed for n in walk(node) if isinstance(n, Number)]


def as_printed(node: Node) -> Printed | None:
    """Return an expression that is nothing but a printed number, with its sign."""
    if isinstance(node, Work) and node.name == "neg" and isinstance(node.inputs[0], Number):
        inner = node.inputs[0].printed
        return Printed("−" + inner.text, inner.power, inner.unit)
    return node.printed if isinstance(node, Number) else None


@dataclass(frozen=True, slots=True)
class Value:
    """A number in metres and newtons with its dimension."""

    number: Decimal
    dimension: Dimension = NONE


class Sheet(Protocol):
    """Where symbols get their values."""

    def value(self, name: str) -> Value: ...

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
            return sheet.value("√" + node.inputs[0].name)
        except Unknown:
            pass
    return _combine(node.name, [_valued(child, sheet) for child in node.inputs])


def _over(node: Over, sheet: Sheet) -> Value:
    found = [_valued(node.body, row) for row in sheet.rows(node.rows, node.where)]
    if node.name == "∑":
        if not found:
            return Value(Decimal(0))
        total = found[0]
        for other in found[1:]:
            total = _combine("+", [total, other])
        return total
    if not found:
        raise Unknown(f"{node.name} over no rows of {node.rows}")
    if node.name == "pick":
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


def split(row: Sequence[Token], kind: str, texts: str | tuple[str, ...] = ()) -> tuple[list[list[Token]], list[str]]:
    """Part a row at its tokens of a kind; returns the parts and what parted them."""
    parts: list[list[Token]] = [[]]
    marks: list[str] = []
    depth = 0
    for token in row:
        depth += (token.kind == "open") - (token.kind == "close")
        if token.kind == kind and depth == 0 and (not texts or token.text in texts):
            parts.append([])
            marks.append(token.text)
        else:
            parts[-1].append(token)
    return parts, marks
