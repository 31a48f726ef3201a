"""Holds the dimension of every node of a plan, in every branch, before any value is known.

`Plan` in, problems out. Knows the units of symbols and the rules of the functions; knows no value.
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
from calcreport.core.figures import FIGURES
from calcreport.core.problems import Problems, listed
from calcreport.core.units import NONE, ONE, Dimension, dimension_words, divide, multiply, raised
from calcreport.plan.model import (
    Plan,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedFigure,
    PlannedGives,
    PlannedLine,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    Slot,
)


class _Any:
    """The dimension of a bare 0: whatever stands beside it."""


_ANY = _Any()
_Found: TypeAlias = Dimension | _Any | None
LARGEST_EXPONENT = 12


def hold_dimensions(plan: Plan, problems: Problems) -> None:
    """Add `unit-mismatch` and its kin for every formula of a plan."""
    holder = _Holder(plan.slots, problems)
    for line in plan.lines:
        holder.line(line)


class _Holder:
    def __init__(self, slots: tuple[Slot, ...], problems: Problems) -> None:
        self.slots, self.problems = slots, problems

    # -------------------------------------------------------- lines

    def line(self, line: PlannedLine) -> None:
        match line:
            case PlannedGives(slot, arms):
                for arm in arms:
                    if arm.when is not None:
                        self.condition(arm.when)
                    self.result(arm.formula, self.slots[slot])
                if line.as_cited is not None:
                    self.same(line.as_cited[0], line.as_cited[1], "the two sides of the cited equation")
            case PlannedBranches(block):
                for one in block:
                    if one.when is not None:
                        self.condition(one.when)
                    for inner in one.lines:
                        self.line(inner)
            case PlannedEach(_, lines) | PlannedPart(_, _, lines):
                for inner in lines:
                    self.line(inner)
            case PlannedRows():
                self.rows(line)
            case PlannedCheck(_, holds):
                self.condition(holds)
            case PlannedRequire(condition):
                self.condition(condition)
            case PlannedFigure():
                self.figure(line)

    def rows(self, line: PlannedRows) -> None:
        for column in line.columns:
            if column.other is not None:
                self.result(column.other, self.slots[column.slot])
        for entry in line.entries:
            if entry.when is not None:
                self.condition(entry.when)
            for column, cell in zip(line.columns, entry.cells, strict=False):
                formulas = tuple(f for _, f in cell) if isinstance(cell, tuple) else (cell,)
                for formula in formulas:
                    self.result(formula, self.slots[column.slot])

    def result(self, formula: Expression, slot: Slot) -> None:
        """Hold a formula against the unit its symbol is declared in; words are held where names are bound."""
        unit = slot.symbol.unit
        if unit is None:
            return
        found = self.expression(formula)
        if found is None or isinstance(found, _Any) or found == unit.dimension:
            return
        hint = self.root_hint(formula)
        if isinstance(formula, Number):
            hint = f"write the unit: {formula.text} {unit.text}, if that is the unit meant"
        self.problems.add(
            "unit-mismatch", formula.span, f"the formula does not give {dimension_words(unit.dimension)}",
            expected=f"{dimension_words(unit.dimension)}, because {slot.symbol.name} is declared "
            + ("so" if unit == ONE else f"in `{unit.text}`"),
            found=self.told(formula, found), hint=hint,
        )  # fmt: skip

    def root_hint(self, formula: Expression) -> str:
        """Return how to write the root of a stress that a clause takes by its number."""
        roots = [n.arguments[0] for n in walk(formula) if isinstance(n, Call) and n.function == "sqrt"]
        named = [n for n in roots if isinstance(n, Name) and n.slot >= 0]
        unit = self.slots[named[0].slot].symbol.unit if named else None
        if unit is None:
            return ""
        name = named[0].name
        return f"where the clause takes {name} by its number in {unit.text}, write qty(sqrt(num({name}, {unit.text})), {unit.text})"

    def figure(self, line: PlannedFigure) -> None:
        """Hold the numbers handed to a figure against what it takes."""
        takes = FIGURES.get(line.kind, {})
        for given in line.inputs:
            wanted = takes[given.name].dimension
            slot = self.slots[given.slot] if given.slot >= 0 else None
            if given.formula is not None:
                self.need(given.formula, wanted, f"the figure takes another quantity for `{given.name}`")
            elif slot is not None and takes[given.name].shape in ("number", "row number"):
                unit = slot.symbol.unit
                if unit is None or unit.dimension != wanted:
                    self.problems.add(
                        "unit-mismatch", given.span or line.span, f"the figure takes another quantity for `{given.name}`",
                        expected=dimension_words(wanted), found=dimension_words(unit.dimension) if unit else "a word",
                    )  # fmt: skip

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

    def expression(self, node: Expression) -> _Found:
        """Return the dimension of a formula; None where a problem was added below."""
        match node:
            case Number(value, _, unit):
                return _ANY if value == 0 and unit is None else unit.dimension if unit else NONE
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

    def name(self, node: Name) -> _Found:
        if node.slot < 0:
            return None
        symbol = self.slots[node.slot].symbol
        if symbol.unit is None:
            self.problems.add("unit-mismatch", node.span, f"`{node.name}` is a word, not a number",
                              expected="a quantity", found=listed(symbol.words) if symbol.words else "a bar callout",
                              hint=f"ask `{node.name} is …` in a condition")  # fmt: skip
            return None
        return symbol.unit.dimension

    def binary(self, node: Binary) -> _Found:
        if node.op in "+-":
            what = f"the two sides of `{node.op}`"
            return self.same(node.left, node.right, what)
        if node.op == "^":
            return self.power(node)
        left, right = self.expression(node.left), self.expression(node.right)
        if left is None or right is None:
            return None
        if isinstance(left, _Any):
            return _ANY
        if isinstance(right, _Any):
            if node.op == "/":
                self.problems.add("bad-formula", node.right.span, "this divides by 0", expected="a value", found="0")
                return None
            return _ANY
        return multiply(left, right) if node.op == "*" else divide(left, right)

    def power(self, node: Binary) -> _Found:
        base = self.expression(node.left)
        self.need(node.right, NONE, "an exponent is a bare number")
        exponent = literal(node.right)
        bare = not any(isinstance(n, Name) for n in walk(node.right))
        if (exponent is not None and abs(exponent) > LARGEST_EXPONENT) or (bare and exponent is None):
            self.problems.add("bad-formula", node.right.span, "the exponent is out of bounds",
                              expected=f"a number such as 2 or (1/3), {LARGEST_EXPONENT} at most",
                              found=node.right.span.text[:40])  # fmt: skip
            return None
        if base is None or isinstance(base, _Any) or base == NONE:
            return base
        if exponent is None:
            self.problems.add("unit-mismatch", node.right.span, "a value with a unit needs a literal exponent",
                              expected="a number such as 2 or (1/3)", found=node.right.span.text[:40])  # fmt: skip
            return None
        return raised(base, exponent)

    def call(self, node: Call) -> _Found:
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
            return inner if inner is None or isinstance(inner, _Any) else raised(inner, Fraction(1, 2))
        self.need(arguments[0], NONE, f"{function} takes a bare number")
        return NONE

    def over(self, node: Over) -> _Found:
        found = self.expression(node.body)
        if node.where is not None:
            self.condition(node.where)
        if node.otherwise is not None:
            found = self.agree(node.body, found, node.otherwise, self.expression(node.otherwise), "the two values")
        return found

    def need(self, node: Expression, wanted: Dimension, why: str) -> None:
        found = self.expression(node)
        if found is not None and not isinstance(found, _Any) and found != wanted:
            hint = ""
            if wanted == NONE and why.startswith(("exp", "ln", "sin", "cos", "tan", "atan", "qty")):
                hint = "num(x, UNIT) takes the number of a quantity in a unit"
            self.problems.add("unit-mismatch", node.span, why, expected=dimension_words(wanted),
                              found=self.told(node, found), hint=hint)  # fmt: skip

    def same(self, left: Expression, right: Expression, what: str) -> _Found:
        return self.agree(left, self.expression(left), right, self.expression(right), what)

    def agree(self, left: Expression, one: _Found, right: Expression, other: _Found, what: str) -> _Found:
        """Return the common dimension of two values, or add `unit-mismatch` with both places."""
        if one is None or other is None:
            return None
        if isinstance(one, _Any):
            return other
        if isinstance(other, _Any) or one == other:
            return one
        bare = next((side for side in (left, right) if isinstance(side, Number) and side.unit is None), None)
        self.problems.add(
            "unit-mismatch", right.span, f"{what} are not of one kind",
            expected=f"{dimension_words(one)}, as `{left.span.text[:40]}` is", found=self.told(right, other),
            hint=f"write the unit after {bare.text}" if bare else "", related=((left.span, f"this is {dimension_words(one)}"),),
        )  # fmt: skip
        return None
