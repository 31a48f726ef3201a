"""Formulas and conditions as trees in the author's own order, each node with its place in the file.

The tree is the truth: printed as written, evaluated by `calculate`, handed to SymPy only on request.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Literal, TypeAlias

from calcreport.core.source import Span
from calcreport.core.units import Unit

#: function name: (fewest, most) arguments
FUNCTIONS: dict[str, tuple[int, int]] = {
    "min": (2, 12), "max": (2, 12), "abs": (1, 1), "sqrt": (1, 1), "exp": (1, 1), "ln": (1, 1), "sin": (1, 1),
    "cos": (1, 1), "tan": (1, 1), "atan": (1, 1), "roundup": (2, 2), "rounddown": (2, 2), "by_units": (2, 2),
}  # fmt: skip
OVER_FUNCTIONS = frozenset({"sum", "max", "min", "pick", "linear"})


@dataclass(frozen=True, slots=True)
class Number:
    """A literal, exact, with the unit written right after it or None."""

    value: Fraction
    text: str
    unit: Unit | None
    span: Span


@dataclass(frozen=True, slots=True)
class Name:
    """A symbol; `slot` is -1 until the plan has bound it."""

    name: str
    span: Span
    slot: int = -1


@dataclass(frozen=True, slots=True)
class Negate:
    """Minus in front."""

    body: Expression
    span: Span


@dataclass(frozen=True, slots=True)
class Binary:
    """Two sides of + - * / or ^."""

    op: Literal["+", "-", "*", "/", "^"]
    left: Expression
    right: Expression
    span: Span


@dataclass(frozen=True, slots=True)
class Call:
    """A function from the fixed list."""

    function: str
    arguments: tuple[Expression, ...]
    span: Span


@dataclass(frozen=True, slots=True)
class Strip:
    """`num(e, unit)`: the bare number of e in that unit."""

    body: Expression
    unit: Unit
    span: Span


@dataclass(frozen=True, slots=True)
class Attach:
    """`qty(e, unit)`: a bare number given that unit."""

    body: Expression
    unit: Unit
    span: Span


@dataclass(frozen=True, slots=True)
class Over:
    """`sum(e over S where c otherwise o)` and its kin; `bound` is the set's number once planned."""

    function: str
    body: Expression
    rows: str
    where: Condition | None
    otherwise: Expression | None
    span: Span
    #: place of the set's name
    rows_span: Span
    bound: int = -1


@dataclass(frozen=True, slots=True)
class Compare:
    """left <= right, and so on."""

    op: Literal["<", "<=", ">", ">=", "=", "!="]
    left: Expression
    right: Expression
    span: Span


@dataclass(frozen=True, slots=True)
class Logic:
    """Conditions joined by `and` or `or`."""

    op: Literal["and", "or"]
    left: Condition
    right: Condition
    span: Span


@dataclass(frozen=True, slots=True)
class Not:
    """The contrary of a condition."""

    body: Condition
    span: Span


@dataclass(frozen=True, slots=True)
class Is:
    """`ties is spiral`: a word value, or the name of an open set's row (then `bound` is the set)."""

    name: Name
    word: str
    span: Span
    bound: int = -1


@dataclass(frozen=True, slots=True)
class IsGiven:
    """`given(x)`: the project gave a value, not `none`."""

    name: Name
    span: Span


Expression: TypeAlias = Number | Name | Negate | Binary | Call | Strip | Attach | Over
Condition: TypeAlias = Compare | Logic | Not | Is | IsGiven
Node: TypeAlias = Expression | Condition


def children(node: Node) -> tuple[Node, ...]:
    """Return the nodes right below a node, in written order."""
    match node:
        case Number() | Name():
            return ()
        case Negate(body) | Strip(body) | Attach(body) | Not(body):
            return (body,)
        case Binary(_, left, right) | Compare(_, left, right) | Logic(_, left, right):
            return left, right
        case Call(_, arguments):
            return arguments
        case Over():
            return tuple(n for n in (node.body, node.where, node.otherwise) if n is not None)
        case Is(name) | IsGiven(name):
            return (name,)


def walk(node: Node) -> Iterator[Node]:
    """Yield a node and all below it, in written order."""
    yield node
    for child in children(node):
        yield from walk(child)


def names(node: Node) -> tuple[Name, ...]:
    """Return every use of a symbol in written order."""
    return tuple(n for n in walk(node) if isinstance(n, Name))


def literal(node: Expression) -> Fraction | None:
    """Return the value of a literal rational such as 2, -1 or (1/3); None for anything else."""
    match node:
        case Number(value, _, None):
            return value
        case Negate(body):
            inner = literal(body)
            return None if inner is None else -inner
        case Binary("/", left, right):
            above, under = literal(left), literal(right)
            return above / under if above is not None and under else None
        case _:
            return None


def rebuilt(node: Node, change: Callable[[Node], Node]) -> Node:
    """Return a copy in which every node, from the leaves up, has passed through `change`."""
    match node:
        case Number() | Name():
            return change(node)
        case Negate(body) | Strip(body) | Attach(body):
            return change(replace(node, body=rebuilt_expression(body, change)))
        case Not(body):
            return change(replace(node, body=rebuilt_condition(body, change)))
        case Is(name) | IsGiven(name):
            new = change(name)
            return change(replace(node, name=new if isinstance(new, Name) else name))
        case Binary(_, left, right) | Compare(_, left, right):
            sides = rebuilt_expression(left, change), rebuilt_expression(right, change)
            return change(replace(node, left=sides[0], right=sides[1]))
        case Logic(_, left, right):
            parts = rebuilt_condition(left, change), rebuilt_condition(right, change)
            return change(replace(node, left=parts[0], right=parts[1]))
        case Call(_, arguments):
            return change(replace(node, arguments=tuple(rebuilt_expression(a, change) for a in arguments)))
        case Over(_, body, _, where, otherwise):
            return change(
                replace(
                    node,
                    body=rebuilt_expression(body, change),
                    where=None if where is None else rebuilt_condition(where, change),
                    otherwise=None if otherwise is None else rebuilt_expression(otherwise, change),
                )
            )


def rebuilt_expression(node: Expression, change: Callable[[Node], Node]) -> Expression:
    """Return `rebuilt` of an expression, which stays one."""
    new = rebuilt(node, change)
    assert not isinstance(new, Compare | Logic | Not | Is | IsGiven)
    return new


def rebuilt_condition(node: Condition, change: Callable[[Node], Node]) -> Condition:
    """Return `rebuilt` of a condition, which stays one."""
    new = rebuilt(node, change)
    assert isinstance(new, Compare | Logic | Not | Is | IsGiven)
    return new
