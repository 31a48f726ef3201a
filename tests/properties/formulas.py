"""Formula trees for property tests: a tiny printer, a form without places, and strategies that draw trees."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from hypothesis import strategies as st

from calcreport.core.expression import (
    FUNCTIONS,
    OVER_FUNCTIONS,
    Attach,
    Binary,
    Call,
    Compare,
    Is,
    IsGiven,
    Logic,
    Name,
    Negate,
    Node,
    Not,
    Number,
    Over,
    Strip,
)
from calcreport.core.source import Source, Span
from calcreport.core.units import make_unit

NOWHERE = Span(Source("drawn", ""), 0, 0)
_STRENGTH = {"+": 1, "-": 1, "*": 2, "/": 2, "^": 4}


def written(node: Node, least: int = 0) -> str:
    """Write a tree as its author would, with brackets where `least`, the strength around it, asks for them."""
    text, strength = _written(node)
    return f"({text})" if strength < least else text


def _written(node: Node) -> tuple[str, int]:
    match node:
        case Number(_, text, unit):
            # `2 in^3` is a power of the unit, so a quantity is bracketed under a power
            return (f"{text} {unit.text}", 4) if unit else (text, 5)
        case Name(name):
            return name, 5
        case Negate(body):
            return f"-{written(body, 3)}", 3
        case Binary("^", left, right):
            return f"{written(left, 5)}^{written(right, 3)}", 4
        case Binary(op, left, right):
            own = _STRENGTH[op]
            return f"{written(left, own)} {op} {written(right, own + 1)}", own
        case Call(function, arguments):
            return f"{function}({', '.join(written(a) for a in arguments)})", 5
        case Strip(body, unit):
            return f"num({written(body)}, {unit.text})", 5
        case Attach(body, unit):
            return f"qty({written(body)}, {unit.text})", 5
        case Over():
            where = f" where {written(node.where)}" if node.where else ""
            otherwise = f" otherwise {written(node.otherwise)}" if node.otherwise else ""
            return f"{node.function}({written(node.body)} over {node.rows}{where}{otherwise})", 5
        case Compare(op, left, right):
            return f"{written(left)} {op} {written(right)}", 3
        case Is(name, word):
            return f"{name.name} is {word}", 3
        case IsGiven(name):
            return f"given({name.name})", 3
        case Not(body):
            return f"not {written(body, 3)}", 2
        case Logic(op, left, right):
            own = 1 if op == "and" else 0
            return f"{written(left, own)} {op} {written(right, own + 1)}", own


def shape(node: Any) -> Any:
    """Return a tree without its places, for comparing."""
    if isinstance(node, tuple):
        return tuple(shape(inner) for inner in node)
    names = getattr(type(node), "__match_args__", ())
    if not names or type(node).__module__ != "calcreport.core.expression":
        return node
    skipped = ("span", "rows_span")
    return (type(node).__name__, *(shape(getattr(node, name)) for name in names if name not in skipped))


# ---------------------------------------------------------------- strategies

_NAMES = st.sampled_from(["a", "b", "A_s", "f_c", "phiM_n", "x1", "stem.M_n"])
_SETS = st.sampled_from(["layer", "load"])
_UNITS = st.sampled_from(["in", "ft", "psi", "kip", "mm", "kN"])
_COMPOUND = st.sampled_from([(("kip", 1), ("ft", 1)), (("lb", 1), ("ft", -3)), (("in", -1),), (("in", 2),)])
_TEXTS = st.sampled_from(["0", "1", "2.5", "0.85", ".5", "12", "1e3", "60000"])


def _number(text: str, unit: str | None, power: int) -> Number:
    return Number(Fraction(text), text, make_unit(((unit, power),)) if unit else None, NOWHERE)


def _name(name: str) -> Name:
    return Name(name, NOWHERE)


NUMBERS = st.builds(_number, _TEXTS, st.none() | _UNITS, st.integers(1, 3))
LEAVES = NUMBERS | st.builds(_name, _NAMES)
_PLAIN = sorted(name for name, (_, most) in FUNCTIONS.items() if most == 1)


def _over(function: str, body: Any, rows: str, where: Any, otherwise: Any, at: Any) -> Over:
    if function == "linear":
        where = Compare("=", _name("x1"), at, NOWHERE)
    return Over(function, body, rows, where, otherwise, NOWHERE, NOWHERE)


def _grown(inner: st.SearchStrategy[Any]) -> st.SearchStrategy[Any]:
    return st.one_of(
        st.builds(lambda b: Negate(b, NOWHERE), inner),
        st.builds(lambda o, a, b: Binary(o, a, b, NOWHERE), st.sampled_from("+-*/^"), inner, inner),
        st.builds(lambda f, a: Call(f, (a,), NOWHERE), st.sampled_from(_PLAIN), inner),
        st.builds(
            lambda f, a: Call(f, tuple(a), NOWHERE),
            st.sampled_from(["min", "max"]),
            st.lists(inner, min_size=2, max_size=3),
        ),
        st.builds(lambda b, u: Strip(b, make_unit(u), NOWHERE), inner, _COMPOUND),
        st.builds(lambda b, u: Attach(b, make_unit(u), NOWHERE), inner, _COMPOUND),
        st.builds(
            _over,
            st.sampled_from(sorted(OVER_FUNCTIONS)),
            inner,
            _SETS,
            st.none() | _tests(inner),
            st.none() | inner,
            inner,
        ),
    )


def _tests(inner: st.SearchStrategy[Any]) -> st.SearchStrategy[Any]:
    relations = st.sampled_from(["<", "<=", ">", ">=", "=", "!="])
    return st.one_of(
        st.builds(lambda o, a, b: Compare(o, a, b, NOWHERE), relations, inner, inner),
        st.builds(
            lambda n, w: Is(_name(n), w, NOWHERE), st.just("ties"), st.sampled_from(["spiral", "C3 foot", "4 W"])
        ),
        st.builds(lambda n: IsGiven(_name(n), NOWHERE), _NAMES),
    )


FORMULAS = st.recursive(LEAVES, _grown, max_leaves=8)
CONDITIONS = st.recursive(
    _tests(FORMULAS),
    lambda inner: st.one_of(
        st.builds(lambda b: Not(b, NOWHERE), inner),
        st.builds(lambda o, a, b: Logic(o, a, b, NOWHERE), st.sampled_from(["and", "or"]), inner, inner),
    ),
    max_leaves=4,
)
