"""What may be wrong with a formula or a condition: every single slip, as a change of one node.

A node in, changes out: words that tell the slip, and the node that stands in its place. A symbol taken for another is
the business of `symbols`, since only the template knows what is visible.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from fractions import Fraction
from typing import Any, TypeAlias

from calcreport.core.expression import (
    Attach,
    Binary,
    Call,
    Compare,
    IsGiven,
    Logic,
    Name,
    Negate,
    Not,
    Number,
    Over,
    Strip,
)
from calcreport.core.record import replace

#: a constant off by one part in a hundred; nothing where something should be
FACTOR, LITTLE = Fraction(101, 100), Fraction(1, 100)

_SIGNS = {"+": "-", "-": "+", "*": "/", "/": "*"}
_CALLS = {"min": "max", "max": "min", "roundup": "rounddown", "rounddown": "roundup", "sin": "cos", "cos": "sin"}
_OVERS = {"min": ("max",), "max": ("min", "sum"), "sum": ("max",), "pick": ("max", "min")}
#: a limit moved off its tie, turned round, and denied
_COMPARES = {
    "<": ("<=", ">", ">="),
    "<=": ("<", ">=", ">"),
    ">": (">=", "<", "<="),
    ">=": (">", "<=", "<"),
    "=": ("!=", "<=", ">="),
    "!=": ("=", "<", ">"),
}

Apply: TypeAlias = Callable[[Any], Any]


@dataclass(frozen=True, slots=True)
class Change:
    """One slip: words for it, and what it makes of the node or record at its place."""

    says: str
    apply: Apply


def formula_changes(node: Any, *, whole: bool, use: str) -> Iterator[Change]:
    """Yield the slips of one node; `use` is what its formula stands for, `whole` that the node is all of it."""
    if use == "word":
        return
    if whole and use == "value":
        yield Change("sign flipped", lambda found: Negate(found, found.span))
    match node:
        case Number():
            yield _number(node)
        case Negate(body):
            yield Change(f"minus of {_text(body)} dropped", lambda found: found.body)
        case Binary():
            yield from _binary(node)
        case Call(function, arguments):
            if function in _CALLS:
                yield Change(f"{function} → {_CALLS[function]}", altered_field("function", _CALLS[function]))
            if function in ("min", "max"):
                for number, argument in enumerate(arguments):
                    yield Change(f"{function} without {_text(argument)}", _without(number))
            if function in ("abs", "sqrt"):
                yield Change(f"{function} dropped", lambda found: found.arguments[0])
        case Strip() | Attach():
            yield Change(f"1.01 × {_text(node)}", _enlarged)
        case Over():
            yield from _over(node)
        case _:
            yield from _condition(node)


def _enlarged(found: Any) -> Binary:
    return Binary("*", Number(FACTOR, "1.01", None, found.span), found, found.span)


def _number(node: Number) -> Change:
    if node.value == 0:
        return Change("0 → 0.01", lambda found: replace(found, value=LITTLE, text="0.01"))
    return Change(f"1.01 × {_text(node)}", lambda found: replace(found, value=found.value * FACTOR))


def _binary(node: Binary) -> Iterator[Change]:
    if node.op == "^":
        yield Change(f"exponent of {_text(node.left)} and 1", lambda f: replace(f, right=_more(f.right)))
        return
    sign = _SIGNS[node.op]
    yield Change(f"{node.op} → {sign} before {_text(node.right)}", altered_field("op", sign))


def _more(exponent: Any) -> Binary:
    return Binary("+", exponent, Number(Fraction(1), "1", None, exponent.span), exponent.span)


def _over(node: Over) -> Iterator[Change]:
    for function in _OVERS.get(node.function, ()):
        yield Change(f"{node.function} → {function} over {node.rows}", altered_field("function", function))
    if node.where is not None and node.function != "linear":
        yield Change(f"where {_text(node.where)} dropped", altered_field("where", None))


def _condition(node: Any) -> Iterator[Change]:
    match node:
        case Compare(op):
            for other in _COMPARES[op]:
                yield Change(f"{op} → {other} in {_text(node)}", altered_field("op", other))
        case Logic(op):
            other = "or" if op == "and" else "and"
            yield Change(f"{op} → {other} before {_text(node.right)}", altered_field("op", other))
            yield Change(f"{_text(node.right)} dropped", lambda found: found.left)
            yield Change(f"{_text(node.left)} dropped", lambda found: found.right)
        case Not(body):
            yield Change(f"not before {_text(body)} dropped", lambda found: found.body)
        case IsGiven(Name(name)):
            yield Change(f"given({name}) denied", lambda found: Not(found, found.span))
        case _:
            pass


def altered_field(field: str, value: object) -> Apply:
    """Return a change of one field."""
    return lambda found: replace(found, **{field: value})


def _without(number: int) -> Apply:
    def apply(found: Call) -> Any:
        kept = (*found.arguments[:number], *found.arguments[number + 1 :])
        return kept[0] if len(kept) == 1 else replace(found, arguments=kept)

    return apply


def _text(node: Any) -> str:
    return " ".join(node.span.text.split())
