"""Holds the dimension of every line of a plan, in every branch, before any value is known.

`Plan` in, problems out. Knows the units of symbols; the rules of formulas stand in `plan.formula_dimensions`.
"""

from __future__ import annotations

from calcreport.core.expression import Call, Expression, Name, Number, walk
from calcreport.core.figures import FIGURES
from calcreport.core.inputs import InputKind
from calcreport.core.methods import METHODS
from calcreport.core.problems import Problems
from calcreport.core.source import Span
from calcreport.core.units import ONE, dimension_words
from calcreport.plan.formula_dimensions import AnyDimension, FormulaHolder
from calcreport.plan.model import (
    BoundInput,
    Plan,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedFigure,
    PlannedGives,
    PlannedLine,
    PlannedMethod,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    PlannedUnknown,
    Slot,
)


def hold_dimensions(plan: Plan, problems: Problems) -> None:
    """Add `unit-mismatch` and its kin for every formula of a plan."""
    holder = _Holder(plan.slots, problems)
    for line in plan.lines:
        holder.line(line)


class _Holder(FormulaHolder):
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
            case PlannedUnknown():
                self.result(line.low, self.slots[line.slot])
                self.result(line.high, self.slots[line.slot])
                for inner in line.lines:
                    self.line(inner)
                self.same(line.left, line.right, "the two sides of the equation")
            case PlannedRows():
                self.rows(line)
            case PlannedCheck(_, holds):
                self.condition(holds)
            case PlannedRequire(condition):
                self.condition(condition)
            case PlannedFigure():
                self.inputs(line.inputs, FIGURES.get(line.kind, {}), "figure", line.span)
            case PlannedMethod():
                self.method(line)

    def rows(self, line: PlannedRows) -> None:
        for column in line.columns:
            if column.other is not None:
                self.result(column.other, self.slots[column.slot])
        if line.spaced is not None:
            for bound in line.spaced:
                self.result(bound, self.slots[line.columns[0].slot])
            return
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
        if found is None or isinstance(found, AnyDimension) or found == unit.dimension:
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
        root = f"qty(sqrt(num({name}, {unit.text})), {unit.text})"
        return f"where the clause takes {name} by its number in {unit.text}, write {root}"

    def method(self, line: PlannedMethod) -> None:
        """Hold what a method is handed, and what it gives against the units of our symbols."""
        kind = METHODS[line.kind]
        self.inputs(line.inputs, kind.takes, "method", line.span)
        for index, output in line.outputs:
            slot, wanted = self.slots[index], kind.gives[output].dimension
            unit = slot.symbol.unit
            if unit is None or unit.dimension != wanted:
                self.problems.add(
                    "unit-mismatch", slot.span, f"the method gives another quantity as `{output}`",
                    expected=f"{dimension_words(wanted)}, which `{output}` is",
                    found=dimension_words(unit.dimension) if unit else "a word",
                )  # fmt: skip

    def inputs(self, inputs: tuple[BoundInput, ...], takes: dict[str, InputKind], what: str, at: Span) -> None:
        """Hold the numbers handed to a figure or a method against what it takes."""
        for given in inputs:
            wanted = takes[given.name].dimension
            slot = self.slots[given.slot] if given.slot >= 0 else None
            if given.formula is not None:
                self.need(given.formula, wanted, f"the {what} takes another quantity for `{given.name}`")
            elif slot is not None and takes[given.name].shape in ("number", "row number"):
                unit = slot.symbol.unit
                if unit is None or unit.dimension != wanted:
                    self.problems.add(
                        "unit-mismatch",
                        given.span or at,
                        f"the {what} takes another quantity for `{given.name}`",
                        expected=dimension_words(wanted),
                        found=dimension_words(unit.dimension) if unit else "a word",
                    )
