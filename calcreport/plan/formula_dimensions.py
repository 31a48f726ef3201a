"""The dimension of every node of a formula or condition, by the units of its symbols and the rules of the functions.

Bound trees in, dimensions and problems out. What a problem was told about has no dimension, and no further problem.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TypeAlias

from calcreport.core.expression import (
    Attach,
    Binary,
    Call,
    Compare,
    Condition,
    Expression,
    Is,
    IsGiven,
    Logic,
    Name,
    Negate,
    Not,
    Number,
    Over,
    Strip,
    literal,
    walk,
)
from calcreport.core.problems import Problems, listed
from calcreport.core.units import NONE, Dimension, dimension_words, divide, multiply, raised
from calcreport.plan.model import Slot


class AnyDimension:
    """The dimension of a bare 0: whatever stands beside it."""


ANY = AnyDimension()
#: None where a problem was told about
Found: TypeAlias = Dimension | AnyDimension | None
LARGEST_EXPONENT = 12


class FormulaHolder:
    """Holds formulas and conditions."""

    def __init__(self, slots: tuple[Slot, ...], problems: Problems) -> None:
        self.slots, self.problems = slots, problems

    def told(self, formula: Expression, found: Dimension) -> str:
        """Return a dimension in words, with the symbols it comes from where they are few."""
        slots = {n.name: self.slots[n.slot] for n in walk(formula) if isinstance(n, Name) and n.slot >= 0}
        units = [f"{name} ({s.symbol.unit.text})" for name, s in slots.items() if s.symbol.unit is not None]
        return dimension_words(found) + (f", from {', '.join(units)}" if 0 < len(units) <= 4 else "")

    # -------------------------------------------------------- conditions

    def condition(self, node: Condition) -> None:
        match node:
            case Compare(_, left, right):
                self.same(left, right, "the two sides of a comparison")
            case Logic(_, one, other):
                self.condition(one)
                self.condition(other)
            case Not(body):
                self.condition(body)
            case Is() | IsGiven():
                pass

    # -------------------------------------------------------- expressions

    def expression(self, node: Expression) -> Found:
        """Return the dimension of a formula; None where a problem was added below."""
        match node:
            case Number(value, _, unit):
                return ANY if value == 0 and unit is None else unit.dimension if unit else NONE
            case Name():
                return self.name(node)
            case Negate(body):
                return self.expression(body)
            case Binary():
                return self.binary(node)
            case Call():
                return self.call(node)
            case Strip(body, unit):
                self.need(body, unit.dimension, f"num(…, {unit.text}) takes {dimension_words(unit.dimension)}")
                return NONE
            case Attach(body, unit):
                self.need(body, NONE, f"qty(…, {unit.text}) takes a bare number")
                return unit.dimension
            case Over():
                return self.over(node)

    def name(self, node: Name) -> Found:
        if node.slot < 0:
            return None
        symbol = self.slots[node.slot].symbol
        if symbol.unit is None:
            self.problems.add("unit-mismatch", node.span, f"`{node.name}` is a word, not a number",
                              expected="a quantity", found=listed(symbol.words) if symbol.words else "a bar callout",
                              hint=f"ask `{node.name} is …` in a condition")  # fmt: skip
            return None
        return symbol.unit.dimension

    def binary(self, node: Binary) -> Found:
        if node.op in "+-":
            what = f"the two sides of `{node.op}`"
            return self.same(node.left, node.right, what)
        if node.op == "^":
            return self.power(node)
        left, right = self.expression(node.left), self.expression(node.right)
        if left is None or right is None:
            return None
        if isinstance(left, AnyDimension):
            return ANY
        if isinstance(right, AnyDimension):
            if node.op == "/":
                self.problems.add("bad-formula", node.right.span, "this divides by 0", expected="a value", found="0")
                return None
            return ANY
        return multiply(left, right) if node.op == "*" else divide(left, right)

    def power(self, node: Binary) -> Found:
        base = self.expression(node.left)
        self.need(node.right, NONE, "an exponent is a bare number")
        exponent = literal(node.right)
        bare = not any(isinstance(n, Name) for n in walk(node.right))
        if (exponent is not None and abs(exponent) > LARGEST_EXPONENT) or (bare and exponent is None):
            self.problems.add("bad-formula", node.right.span, "the exponent is out of bounds",
                              expected=f"a number such as 2 or (1/3), {LARGEST_EXPONENT} at most",
                              found=node.right.span.text[:40])  # fmt: skip
            return None
        if base is None or isinstance(base, AnyDimension) or base == NONE:
            return base
        if exponent is None:
            self.problems.add("unit-mismatch", node.right.span, "a value with a unit needs a literal exponent",
                              expected="a number such as 2 or (1/3)", found=node.right.span.text[:40])  # fmt: skip
            return None
        return raised(base, exponent)

    def call(self, node: Call) -> Found:
        function, arguments = node.function, node.arguments
        if function in ("min", "max", "roundup", "rounddown"):
            found = self.expression(arguments[0])
            for other in arguments[1:]:
                found = self.agree(arguments[0], found, other, self.expression(other), f"the arguments of {function}")
            return found
        if function == "abs":
            return self.expression(arguments[0])
        if function == "sqrt":
            inner = self.expression(arguments[0])
            return inner if inner is None or isinstance(inner, AnyDimension) else raised(inner, Fraction(1, 2))
        self.need(arguments[0], NONE, f"{function} takes a bare number")
        return NONE

    def over(self, node: Over) -> Found:
        found = self.expression(node.body)
        if node.where is not None:
            self.condition(node.where)
        if node.otherwise is not None:
            found = self.agree(node.body, found, node.otherwise, self.expression(node.otherwise), "the two values")
        return found

    def need(self, node: Expression, wanted: Dimension, why: str) -> None:
        found = self.expression(node)
        if found is not None and not isinstance(found, AnyDimension) and found != wanted:
            hint = ""
            if wanted == NONE and why.startswith(("exp", "ln", "sin", "cos", "tan", "atan", "qty")):
                hint = "num(x, UNIT) takes the number of a quantity in a unit"
            self.problems.add("unit-mismatch", node.span, why, expected=dimension_words(wanted),
                              found=self.told(node, found), hint=hint)  # fmt: skip

    def same(self, left: Expression, right: Expression, what: str) -> Found:
        return self.agree(left, self.expression(left), right, self.expression(right), what)

    def agree(self, left: Expression, one: Found, right: Expression, other: Found, what: str) -> Found:
        """Return the common dimension of two values, or add `unit-mismatch` with both places."""
        if one is None or other is None:
            return None
        if isinstance(one, AnyDimension):
            return other
        if isinstance(other, AnyDimension) or one == other:
            return one
        bare = next((side for side in (left, right) if isinstance(side, Number) and side.unit is None), None)
        self.problems.add(
            "unit-mismatch",
            right.span,
            f"{what} are not of one kind",
            expected=f"{dimension_words(one)}, as `{left.span.text[:40]}` is",
            found=self.told(right, other),
            hint=f"write the unit after {bare.text}" if bare else "",
            related=((left.span, f"this is {dimension_words(one)}"),),
        )
        return None
