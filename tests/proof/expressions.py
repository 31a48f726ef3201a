"""Token rows as expressions: sums, products by juxtaposition, fractions, roots, functions, sums over rows.

In: rows of `letters.Token`. Out: trees. `Unread` where a row follows no known grammar. Works nothing out.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import TypeAlias

from .letters import Token, plain
from .units import Printed, is_number


class Unread(Exception):
    """The ink follows no grammar this reader knows."""


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
