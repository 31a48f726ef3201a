"""Proves that a rearranged formula satisfies the equation its line cites, by SymPy, on request.

A plan in, problems `not-as-cited` out. SymPy sees trees built node by node, never author text.
"""

from __future__ import annotations

from typing import Any

from calcreport.core.expression import Attach, Binary, Call, Expression, Name, Negate, Number, Over, Strip
from calcreport.core.late import load
from calcreport.core.problems import Problems
from calcreport.core.units import NONE
from calcreport.plan.model import Plan, PlannedBranches, PlannedEach, PlannedGives, PlannedLine, PlannedPart


def prove_cited(plan: Plan, problems: Problems) -> None:
    """Hold every line with `as cited` against its equation."""
    for line in plan.lines:
        _prove(line, plan, problems)


def _prove(line: PlannedLine, plan: Plan, problems: Problems) -> None:
    match line:
        case PlannedGives(_, _, _, (left, right)):
            for arm in line.arms:
                if not _satisfies(line.slot, arm.formula, left, right, plan):
                    problems.add(
                        "not-as-cited", arm.formula.span, "the formula does not satisfy the equation it cites",
                        expected=f"{left.span.text.strip()} = {right.span.text.strip()}", found="they differ",
                        related=((left.span, "the cited equation"),),
                    )  # fmt: skip
        case PlannedBranches(arms):
            for one in arms:
                for inner in one.lines:
                    _prove(inner, plan, problems)
        case PlannedEach(_, lines) | PlannedPart(_, _, lines):
            for inner in lines:
                _prove(inner, plan, problems)


def _satisfies(slot: int, formula: Expression, left: Expression, right: Expression, plan: Plan) -> bool:
    """Put the formula into the equation for its symbol and simplify the difference to zero."""
    sympy = load("sympy")
    builder = _Builder(sympy, plan)
    found = builder.tree(formula)
    difference = builder.tree(left) - builder.tree(right)
    difference = difference.subs(builder.symbol(slot), found)
    return bool(sympy.simplify(difference) == 0)


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
