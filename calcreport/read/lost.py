"""Names that lines and declarations would have given, had they been read: they count as given, of unknown dimension.

Nodes and what was read of them in, names out. Keeps one mistake from being told again at every use of a name.
"""

from __future__ import annotations

import re
from collections.abc import Iterator

from calcreport.core.methods import AGAIN, APART
from calcreport.read.model import (
    EVERY,
    Branches,
    Broken,
    Each,
    Given,
    Gives,
    Line,
    Method,
    PartUse,
    Rows,
    Twin,
    Unknown,
)
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told

_NAME = re.compile(r"[A-Za-z]\w*")
#: keys of a line under which a name stands that the line gives
_GIVING = ("gives", "unknown", "rows")
#: keys of lines that give nothing
_MUTE = ("heading", "note", "caution", "assume", "use", "check", "require", "figure")
#: keys of a line that uses a part
_OF_PARTS = ("part", "same", "as")


def lost_names(node: Node, line: Line | None) -> tuple[str, ...]:
    """Return the names a line was to give, at any depth, and does not as it was read."""
    named = dict.fromkeys(_named(node))
    if line is None:
        named |= dict.fromkeys(_guessed(node))
    for name in _given(line) if line is not None else ():
        named.pop(name, None)
    return tuple(named)


def lost_givens(node: Node | None, givens: tuple[Given, ...]) -> frozenset[str]:
    """Return the names a `given` mapping declares, columns and bar values included, that were not read."""
    if node is None:
        return frozenset()
    if not isinstance(node, Mapping):
        return frozenset({EVERY})
    return frozenset(_declared(node)) - frozenset(name for given in givens for name in given.names())


def _declared(node: Mapping) -> Iterator[str]:
    """Yield the keys of declarations and of all mappings in them: columns may stand under a key misspelt."""
    for key, value in node.entries:
        yield key.text
        if isinstance(value, Mapping):
            yield from _declared(value)


def _named(node: Node) -> Iterator[str]:
    if isinstance(node, Sequence):
        for item in node.items:
            yield from _named(item)
    if not isinstance(node, Mapping):
        return
    for key, value in node.entries:
        if key.text in _GIVING and isinstance(value, Scalar):
            yield value.text
        elif key.text == "gives" and isinstance(value, Mapping):
            stem = node.get("as")
            mark = f"{stem.text}." if isinstance(stem, Scalar) else ""
            yield from (mark + ours.text for ours, _ in value.entries)
        elif key.text == "by another method" and isinstance(value, Scalar):
            yield from (f"{value.text}.{word}" for word in (AGAIN, APART))
        elif key.text == "columns" and isinstance(value, Mapping):
            yield from (column.text for column, _ in value.entries)
        elif key.text == "spaced" and isinstance(value, Mapping):
            yield from (
                symbol.text for name, symbol in value.entries if name.text == "symbol" and isinstance(symbol, Scalar)
            )
        elif key.text != "with":
            yield from _named(value)


def _guessed(node: Node) -> Iterator[str]:
    """Yield what may be a name given by a line that was not read."""
    if isinstance(node, Told):
        yield EVERY
    if isinstance(node, Scalar):
        yield from _NAME.findall(node.text)
    if not isinstance(node, Mapping) or any(node.get(key) is not None for key in _MUTE):
        return
    for key, value in node.entries:
        if key.text in _OF_PARTS or isinstance(value, Told):
            yield EVERY
        elif isinstance(value, Scalar) and _NAME.fullmatch(value.text):
            yield value.text


def _given(line: Line) -> Iterator[str]:
    match line:
        case Gives(symbol):
            yield symbol.name
        case Unknown(symbol):
            yield symbol.name
            for inner in line.lines:
                yield from _given(inner)
        case Broken(names, lines):
            yield from names
            for inner in lines:
                yield from _given(inner)
        case Branches(arms):
            for arm in arms:
                for inner in arm.lines:
                    yield from _given(inner)
        case Each(_, lines):
            for inner in lines:
                yield from _given(inner)
        case Rows(name, columns):
            yield name
            yield from (column.symbol.name for column in columns)
        case Method() | Twin():
            yield from line.names()
        case PartUse():
            pass
