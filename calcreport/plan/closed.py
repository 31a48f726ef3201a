"""The closed form of an `unknown` without lines: the formula that gives it, where its equation is of degree two.

A plan in, the same plan with those formulas out. SymPy's polynomial rings bring the equation to A x^2 + B x + C = 0;
what does not hold the unknown enters as it stands, so that `0.85`, `24 in` and `max(…)` print as written. Trees are
built node by node, never from author text, and every product is held against a bound before it is made.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from math import gcd, lcm
from typing import Any, Literal

from calcreport.core.expression import Binary, Call, Expression, Name, Negate, Number, literal, names
from calcreport.core.late import load
from calcreport.core.source import Source, Span
from calcreport.plan.model import Plan, PlannedBranches, PlannedEach, PlannedLine, PlannedPart, PlannedUnknown
from calcreport.plan.proofs import is_small

#: terms of any polynomial on the way
MOST_TERMS = 60
#: longest formula that is still read with ease: symbols and signs
MOST_PRINTED = 60
_TWO = Fraction(2)


class _NoForm(Exception):
    """The equation has no closed form of the kind looked for."""


def supply_closed(plan: Plan) -> Plan:
    """Return the plan with the closed form of every `unknown` that has one."""
    lines = tuple(_supplied(line) for line in plan.lines)
    return plan if all(new is old for new, old in zip(lines, plan.lines, strict=True)) else replace(plan, lines=lines)


def _supplied(line: PlannedLine) -> PlannedLine:
    match line:
        case PlannedUnknown(lines=()):
            return replace(line, closed=_closed(line)) if is_small(line.left, line.right) else line
        case PlannedEach(lines=inner) | PlannedPart(lines=inner) | PlannedUnknown(lines=inner):
            new = tuple(_supplied(one) for one in inner)
            return line if all(a is b for a, b in zip(new, inner, strict=True)) else replace(line, lines=new)
        case PlannedBranches(arms):
            made = tuple(replace(arm, lines=tuple(_supplied(one) for one in arm.lines)) for arm in arms)
            return line if made == arms else replace(line, arms=made)
        case _:
            return line


def _closed(line: PlannedUnknown) -> tuple[Expression, ...]:
    """Return the formulas of the roots, () where there is no closed form."""
    try:
        equation = _Equation(line)
        return tuple(equation.said(root) for root in equation.roots())
    except _NoForm:
        return ()


@dataclass(frozen=True, slots=True)
class _Ratio:
    """One polynomial over another, of SymPy's ring."""

    above: Any
    below: Any


class _Equation:
    """One equation as a polynomial in its unknown; what else stands in it is an atom, in the author's order."""

    def __init__(self, line: PlannedUnknown) -> None:
        self.slot = line.slot
        self.span = line.left.span
        self.atoms: dict[object, Expression] = {}
        for side in (line.left, line.right):
            self.gather(side)
        # numbers stand before symbols in a product
        self.atoms = dict(sorted(self.atoms.items(), key=lambda item: not isinstance(item[1], Number)))
        self.unknown = next((n for side in (line.left, line.right) for n in names(side) if n.slot == line.slot), None)
        if self.unknown is None or len(self.atoms) > MOST_TERMS:
            raise _NoForm
        sympy = load("sympy")
        self.ring, *symbols = sympy.ring([f"x{n}" for n in range(len(self.atoms) + 1)], sympy.QQ)
        self.x, self.symbols = symbols[0], dict(zip(self.atoms, symbols[1:], strict=True))
        left, right = self.ratio(line.left), self.ratio(line.right)
        self.whole = self.plus(left, right, -1).above

    # -------------------------------------------------------- reading

    def atom(self, node: Expression) -> object | None:
        """Return what an indivisible node is known by; None for a whole number and for a node to be taken apart."""
        match node:
            case Name(_, _, slot):
                return slot
            case Number(value, _, None) if value.denominator in (1, 2, 4):
                return None
            case Number():
                return node.text, node.unit and node.unit.text
            case Negate() | Binary("+" | "-" | "*" | "/"):
                return None
            case Binary("^", _, right) if (literal(right) or Fraction(1, 2)).denominator == 1:
                return None
            case _:
                return id(node) if node.span.whole else node.span.text

    def gather(self, node: Expression) -> None:
        """Gather the atoms in written order; the unknown inside one leaves no closed form."""
        known = self.atom(node)
        if known is not None:
            if known == self.slot:
                return
            if any(name.slot == self.slot for name in names(node)):
                raise _NoForm
            self.atoms.setdefault(known, node)
        elif isinstance(node, Negate):
            self.gather(node.body)
        elif isinstance(node, Binary):
            self.gather(node.left)
            if node.op != "^":
                self.gather(node.right)

    def ratio(self, node: Expression) -> _Ratio:
        """Return a node as one polynomial over another."""
        known = self.atom(node)
        if known is not None:
            return _Ratio(self.x if known == self.slot else self.symbols[known], self.ring.one)
        match node:
            case Number(value):
                return _Ratio(self.ring(value.numerator), self.ring(value.denominator))
            case Negate(body):
                inner = self.ratio(body)
                return _Ratio(-inner.above, inner.below)
            case Binary("^", left, right):
                return self.power(self.ratio(left), literal(right) or Fraction(0))
            case Binary(op, left, right):
                one, other = self.ratio(left), self.ratio(right)
                if op in ("+", "-"):
                    return self.plus(one, other, 1 if op == "+" else -1)
                if op == "/":
                    other = _Ratio(other.below, other.above)
                return _Ratio(self.times(one.above, other.above), self.times(one.below, other.below))
            case _:
                raise _NoForm

    def power(self, base: _Ratio, exponent: Fraction) -> _Ratio:
        found = _Ratio(self.ring.one, self.ring.one)
        for _ in range(abs(int(exponent))):
            found = _Ratio(self.times(found.above, base.above), self.times(found.below, base.below))
        return found if exponent >= 0 else _Ratio(found.below, found.above)

    def plus(self, one: _Ratio, other: _Ratio, sign: int) -> _Ratio:
        if one.below == other.below:
            return _Ratio(one.above + sign * other.above, one.below)
        above = self.times(one.above, other.below) + sign * self.times(other.above, one.below)
        return _Ratio(above, self.times(one.below, other.below))

    def times(self, one: Any, other: Any) -> Any:
        if len(one) * len(other) > MOST_TERMS:
            raise _NoForm
        return one * other

    # -------------------------------------------------------- solving

    def roots(self) -> tuple[Expression, ...]:
        """Return the roots: one of a straight line, two of a parabola."""
        degree = max((powers[0] for powers in self.whole), default=0)
        if degree not in (1, 2):
            raise _NoForm
        first, middle, last = (self.coefficient(power) for power in (2, 1, 0))
        if not first:
            middle, last = self.reduced(middle, last)
            return (self.quotient(self.sum(-last), middle),)
        # x = (-h ± √(h^2 - A C))/A with h = B/2
        first, half, last = self.reduced(first * 2, middle, last * 2)
        if not half:
            root = self.call(self.quotient(self.sum(-last), first))
            return root, Negate(root, self.span)
        square = self.binary("^", self.sum(half if self.leads(half) else -half), self.number(_TWO))
        inner = self.sum(-self.times(first, last), square)
        return tuple(self.quotient(self.binary(sign, self.sum(-half), self.call(inner)), first) for sign in ("+", "-"))

    def coefficient(self, power: int) -> Any:
        """Return the polynomial in the atoms that stands with a power of the unknown."""
        found = {(0, *powers[1:]): value for powers, value in self.whole.items() if powers[0] == power}
        return self.ring.from_dict(found)

    def reduced(self, *parts: Any) -> tuple[Any, ...]:
        """Return polynomials with whole coefficients, what they share taken out, the first one positive."""
        terms = [item for part in parts for item in part.items()]
        shared = tuple(min(powers[n] for powers, _ in terms) for n in range(len(self.atoms) + 1))
        coefficients = [Fraction(int(value.numerator), int(value.denominator)) for _, value in terms]
        scale = self.scale(coefficients)
        sign = 1 if self.leads(parts[0]) else -1
        return tuple(
            self.ring.from_dict(
                {
                    tuple(p - s for p, s in zip(powers, shared, strict=True)): v * scale * sign
                    for powers, v in part.items()
                }
            )
            for part in parts
        )

    def scale(self, coefficients: list[Fraction]) -> Any:
        """Return what makes coefficients whole and without a common divisor."""
        below = lcm(*(value.denominator for value in coefficients))
        return self.ring.domain(below, gcd(*(int(value * below) for value in coefficients)))

    def leads(self, part: Any) -> bool:
        """Tell whether more terms are positive than negative."""
        return sum(1 if value > 0 else -1 for value in part.values()) >= 0

    # -------------------------------------------------------- trees

    def sum(self, part: Any, before: Expression | None = None) -> Expression:
        """Return a polynomial as a tree, positive terms first, behind the tree that stands before it."""
        found = before
        for powers, value in sorted(part.terms(), key=lambda term: term[1] < 0):
            term = self.term(powers, abs(int(value)))
            if found is None:
                found = Negate(term, self.span) if value < 0 else term
            else:
                found = self.binary("-" if value < 0 else "+", found, term)
        return found if found is not None else self.number(Fraction(0))

    def term(self, powers: tuple[int, ...], value: int) -> Expression:
        """Return a coefficient and atoms with their powers as a product."""
        factors: list[Expression] = [] if value == 1 and any(powers) else [self.number(Fraction(value))]
        for atom, power in zip(self.atoms.values(), powers[1:], strict=True):
            if power:
                factors.append(atom if power == 1 else self.binary("^", atom, self.number(Fraction(power))))
        found = factors[0]
        for factor in factors[1:]:
            found = self.binary("*", found, factor)
        return found

    def quotient(self, above: Expression, below: Any) -> Expression:
        return above if below == 1 else self.binary("/", above, self.sum(below))

    def number(self, value: Fraction) -> Number:
        return Number(value, str(value), None, self.span)

    def binary(self, op: Literal["+", "-", "*", "/", "^"], left: Expression, right: Expression) -> Binary:
        return Binary(op, left, right, self.span)

    def call(self, inner: Expression) -> Call:
        return Call("sqrt", (inner,), self.span)

    def said(self, root: Expression) -> Expression:
        """Return a root that says itself, as a formula of the file would, where its own text is asked for."""
        text = _written(root, 0)
        if len(text) > 8 * MOST_PRINTED or sum(1 for _ in _parts(root)) > MOST_PRINTED:
            raise _NoForm
        return replace(root, span=Span(Source(self.span.source.name, text), 0, len(text)))


def _parts(node: Expression) -> list[Expression]:
    """Return the nodes a root is made of, atoms whole."""
    match node:
        case Negate(body):
            return [node, *_parts(body)]
        case Binary(_, left, right):
            return [node, *_parts(left), *_parts(right)]
        case Call("sqrt", (body,)):
            return [node, *_parts(body)]
        case _:
            return [node]


_STRENGTH = {"+": 1, "-": 1, "*": 2, "/": 2, "^": 3}


def _written(node: Expression, least: int) -> str:
    """Return a tree as a template would write it, in parentheses where it binds less than `least`."""
    match node:
        case Name(name):
            return name
        case Number(_, text, unit):
            return text if unit is None else f"{text} {unit.text}"
        case Negate(body):
            text, strength = f"-{_written(body, 2)}", 1
        case Binary(op, left, right):
            strength = _STRENGTH[op]
            inner = strength + (op in "-/^")
            text = f"{_written(left, strength + (op == '^'))}{_spaced(op)}{_written(right, inner)}"
        case Call("sqrt", (body,)):
            return f"sqrt({_written(body, 0)})"
        case _:
            return node.span.text
    return f"({text})" if strength < least else text


def _spaced(op: str) -> str:
    return f" {op} " if op in "+-" else op
