"""Proves that a rearranged formula satisfies the equation its line cites, by SymPy, on request.

A plan in, problems `not-as-cited` out. SymPy sees trees built node by node, never author text, and only trees small
enough that a hostile template cannot keep it busy.
"""

from __future__ import annotations

from typing import Any

from calcreport.core.expression import (
    Attach,
    Binary,
    Call,
    Expression,
    Name,
    Negate,
    Number,
    Over,
    Strip,
    literal,
    walk,
)
from calcreport.core.late import load
from calcreport.core.problems import Problems
from calcreport.core.units import NONE
from calcreport.plan.model import (
    Plan,
    PlannedBranches,
    PlannedEach,
    PlannedGives,
    PlannedLine,
    PlannedPart,
    PlannedUnknown,
)

#: nodes of formula and equation together, and the sum of their powers, that are put to SymPy
MOST_NODES, MOST_POWERS = 80, 8


def prove_cited(plan: Plan, problems: Problems) -> None:
    """Hold every line with `as cited` against its equation."""
    for line in plan.lines:
        _prove(line, plan, problems)


def _prove(line: PlannedLine, plan: Plan, problems: Problems) -> None:
    match line:
        case PlannedGives(_, _, _, (left, right)):
            for arm in line.arms:
                if not is_small(arm.formula, left, right):
                    problems.add(
                        "not-as-cited",
                        left.span,
                        "the cited equation is too long to be proved",
                        expected=f"{MOST_NODES} symbols and signs with the formula, powers of {MOST_POWERS} in all",
                        found="more",
                        hint="give parts of it lines of their own, or leave `as cited` out",
                    )
                elif not _satisfies(line.slot, arm.formula, left, right, plan):
                    problems.add(
                        "not-as-cited", arm.formula.span, "the formula does not satisfy the equation it cites",
                        expected=f"{left.span.text.strip()} = {right.span.text.strip()}", found="they differ",
                        related=((left.span, "the cited equation"),),
                    )  # fmt: skip
        case PlannedBranches(arms):
            for one in arms:
                for inner in one.lines:
                    _prove(inner, plan, problems)
        case PlannedEach(_, lines) | PlannedPart(_, _, lines) | PlannedUnknown(lines=lines):
            for inner in lines:
                _prove(inner, plan, problems)


def is_small(*formulas: Expression) -> bool:
    """Tell whether formulas are small enough to be put to SymPy: few nodes, literal powers, small in all."""
    nodes = [node for formula in formulas for node in walk(formula)]
    powers = [literal(node.right) for node in nodes if isinstance(node, Binary) and node.op == "^"]
    known = [abs(power) for power in powers if power is not None]
    return len(nodes) <= MOST_NODES and len(known) == len(powers) and sum(known) <= MOST_POWERS


def _satisfies(slot: int, formula: Expression, left: Expression, right: Expression, plan: Plan) -> bool:
    """Put the formula into the equation for its symbol and simplify the difference to zero."""
    sympy = load("sympy")
    builder = _Builder(sympy, plan)
    found = builder.tree(formula)
    sides = [builder.tree(side).subs(builder.symbol(slot), found) for side in (left, right)]
    return _agree(sympy, *sides) and bool(sympy.simplify(sides[0] - sides[1]) == 0)


def _agree(sympy: Any, left: Any, right: Any) -> bool:
    """Tell whether two sides agree in numbers at some places: what differs there need not be simplified at length."""
    symbols = sorted(left.free_symbols | right.free_symbols, key=str)
    for shift in range(3):
        place = {symbol: sympy.Rational(7 * n + 11 + 5 * shift, 3 * n + 8) for n, symbol in enumerate(symbols)}
        one, other = left.subs(place).evalf(40), right.subs(place).evalf(40)
        apart, size = abs(one - other), abs(one) + abs(other)
        if apart.is_number and size.is_number and apart.is_finite and size.is_finite and apart > size * 10**-25:
            return False
    return True


class _Builder:
    """Builds SymPy trees; symbols are positive, as quantities of a formula are."""

    def __init__(self, sympy: Any, plan: Plan) -> None:
        self.sympy, self.plan = sympy, plan

    def symbol(self, slot: int) -> Any:
        """Return the SymPy symbol of a slot."""
        return self.sympy.Symbol(f"x{slot}", positive=True)

    def tree(self, node: Expression) -> Any:
        """Return a formula as SymPy's; unit factors enter as exact numbers."""
        rational = self.sympy.Rational
        match node:
            case Number(value, _, unit):
                exact = value * unit.scale if unit is not None and unit.dimension != NONE else value
                return rational(exact.numerator, exact.denominator)
            case Name(_, _, slot):
                return self.symbol(slot)
            case Negate(body):
                return -self.tree(body)
            case Binary(op, one, other):
                return self.binary(op, self.tree(one), self.tree(other))
            case Call(function, arguments):
                return self.call(function, [self.tree(argument) for argument in arguments])
            case Strip(body, unit):
                return self.tree(body) / rational(unit.scale.numerator, unit.scale.denominator)
            case Attach(body, unit):
                return self.tree(body) * rational(unit.scale.numerator, unit.scale.denominator)
            case Over():
                return self.sympy.Symbol(f"over_{node.span.start}", positive=True)

    def binary(self, op: str, one: Any, other: Any) -> Any:
        match op:
            case "+":
                return one + other
            case "-":
                return one - other
            case "*":
                return one * other
            case "/":
                return one / other
            case _:
                return one**other

    def call(self, function: str, arguments: list[Any]) -> Any:
        names = {"min": "Min", "max": "Max", "abs": "Abs", "ln": "log"}
        if function in ("roundup", "rounddown"):
            return self.sympy.Function(function)(*arguments)
        return getattr(self.sympy, names.get(function, function))(*arguments)
