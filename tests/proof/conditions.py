"""Printed comparisons and conditions, judged with what the sheet prints.

In: tokens such as `f_y = 60 ksi ≤ 100 ksi` or `layer is first or M_u ≥ 0`. Out: whether they hold. Each number of a
chain is also held against the symbol or formula before its equals sign.
"""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal, localcontext
from typing import Protocol

from .arithmetic import NONE, PRECISE, Mixed, Sheet, Unknown, Value, valued, with_unit
from .expressions import Node, Unread, as_printed, parse, split
from .letters import Token, plain
from .units import Printed, rounds_to, unit


class Ground(Sheet, Protocol):
    """A sheet that also knows what words stand for."""

    def word(self, name: str) -> str | None: ...


def judge(tokens: Sequence[Token], ground: Ground) -> bool:
    """Tell whether a condition holds; Unknown or Unread where it cannot be told."""
    return any(all(_atom(part, ground) for part in _split(arm, "and")) for arm in _split(tokens, "or"))


def _split(tokens: Sequence[Token], word: str) -> list[list[Token]]:
    parts: list[list[Token]] = [[]]
    depth = 0
    for token in tokens:
        depth += (token.kind == "open") - (token.kind == "close")
        if token.kind == "word" and token.text == word and not depth:
            parts.append([])
        else:
            parts[-1].append(token)
    return parts


def _atom(tokens: list[Token], ground: Ground) -> bool:
    if tokens and tokens[0].text == "not":
        return not _atom(tokens[1:], ground)
    texts = [token.text for token in tokens]
    if tokens and tokens[0].kind == "open" and tokens[-1].kind == "close" and {"or", "and"} & set(texts):
        return judge(tokens[1:-1], ground)
    if "is" in texts:
        at = texts.index("is")
        rest = texts[at + 1 :]
        wanted = rest[0] != "not"
        found = ground.word(plain(tokens[:at]))
        if found is None:
            raise Unknown(plain(tokens[:at]))
        if rest[-1] == "given":
            return (found != "none") is wanted
        return (found == " ".join(rest if wanted else rest[1:])) is wanted
    return all(holds for holds, _ in chain(tokens, ground))


def chain(tokens: Sequence[Token], ground: Ground) -> list[tuple[bool, str]]:
    """Judge every link of a chain of comparisons; each with its text."""
    parts, relations = split(tokens, "relation")
    if not relations:
        raise Unread(f"no comparison in {plain(tokens)}")
    nodes = [parse(part) for part in parts]
    found = []
    for left, relation, right, one, other in zip(nodes, relations, nodes[1:], parts, parts[1:], strict=False):
        text = f"{plain(one)} {relation} {plain(other)}"
        found.append((_link(left, relation, right, ground), text))
    return found


def _link(left: Node, relation: str, right: Node, ground: Ground) -> bool:
    shown = as_printed(right)
    if relation == "=" and shown is not None and as_printed(left) is None:
        return matches(valued(left, ground), shown)
    a, b = valued(left, ground), valued(right, ground)
    if a.number != 0 and b.number != 0 and a.dimension != b.dimension:
        raise Mixed(f"{a.dimension} {relation} {b.dimension}")
    return compare(a.number, relation, b.number)


def compare(a: Decimal, relation: str, b: Decimal) -> bool:
    """Tell whether a comparison of two numbers is true; units are exact, so equal prints are equal."""
    with localcontext(PRECISE):
        same = abs(a - b) <= max(abs(a), abs(b)) * Decimal("1e-40")
    return {
        "=": same,
        "≠": not same,
        "≤": same or a < b,
        "≥": same or a > b,
        "<": not same and a < b,
        ">": not same and a > b,
    }[relation]


def matches(value: Value, shown: Printed) -> bool:
    """Tell whether a value rounds to a printed number in its unit."""
    return rounds_to(in_unit(value, shown.unit), shown)


def in_unit(value: Value, text: str) -> Decimal:
    """Return a value as a number of a printed unit; Mixed where the dimensions differ."""
    if not text:
        if value.dimension != NONE and value.number != 0:
            raise Mixed("a number without unit")
        return value.number
    found = unit(text)
    if found is None:
        raise Unread(f"{text!r} is no unit")
    scale, dimension = found
    if value.dimension != dimension and value.number != 0:
        raise Mixed(text)
    with localcontext(PRECISE):
        return value.number * scale.denominator / scale.numerator


__all__ = ["Mixed", "chain", "compare", "in_unit", "judge", "matches", "with_unit"]
