"""The printed form of every value of a project: which figures exist, and which lines must confirm them.

`WorkedProject` in, `Forms` out: a figure for every value, for coherent results, for the sides of printed
comparisons and for ratios. Solved by `report.digits`.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import TypeGuard

from calcreport.calculate.model import (
    GivenPairs,
    GivenRows,
    GivenValue,
    Key,
    LinkedValue,
    PlannedBranches,
    PlannedGives,
    PlannedUnknown,
    Values,
    Worked,
    WorkedCheck,
    WorkedGives,
    WorkedMethod,
    WorkedUnknown,
    row_cells,
)
from calcreport.core.expression import Binary, Call, Compare, Condition, Expression, Logic, Name, Node, Number
from calcreport.core.methods import METHODS
from calcreport.core.units import NONE, ONE, Unit
from calcreport.report.digits import Digits, Figure, Id, rounded
from calcreport.report.families import Family, choose_family, dimension_of, factor_to, usual_family
from calcreport.report.notation import reversed_condition

Opened = tuple[tuple[int, int], ...]


@dataclass(slots=True)
class PlanForms:
    """What rests on a plan's formulas alone, found once for all its calculations; by identity of nodes and units.

    Each entry holds what its key is the identity of, so that nothing else takes that identity.
    """

    #: the family a formula is worked in
    families: dict[int, tuple[Expression, Family]] = field(default_factory=dict)
    #: the comparisons that chose an arm of a line
    chosen: dict[tuple[int, int], tuple[PlannedGives | PlannedBranches, tuple[Compare, ...]]] = field(
        default_factory=dict
    )
    #: the factor that takes a unit of the plan to a family
    factors: dict[tuple[int, Family], tuple[Unit, Fraction]] = field(default_factory=dict)
    #: the numbers a formula takes; None where rows decide that
    names: dict[int, tuple[Node, tuple[Name, ...] | None]] = field(default_factory=dict)


@dataclass(slots=True)
class CalculationForms:
    """Figures of one calculation."""

    worked: Worked
    digits: Digits
    #: values the printed figures are written into while a line is confirmed
    shadow: Values
    shared: PlanForms
    #: values that are another one, chosen or copied
    copied: set[Id] = field(default_factory=set)

    @property
    def mark(self) -> str:
        """The calculation's mark, first part of every id."""
        return self.worked.calculation.mark

    def id(self, slot: int, key: Key) -> Id:
        """Return the id of a value."""
        return (self.mark, slot, key)

    def figure(self, slot: int, key: Key = ()) -> Figure:
        """Return the printed figure of a value."""
        return self.digits.figure(self.id(slot, key))

    def coherent(self, gives: WorkedGives) -> Figure | None:
        """Return the figure of a line's result in the units of its substitution, where they differ."""
        name = ("coherent", self.mark, gives.line.slot, gives.key)
        return self.digits.figures.get(name)

    def copies(self, gives: WorkedGives) -> bool:
        """Tell whether a line only chooses or copies a value, so that a substitution says nothing new."""
        return self.id(gives.line.slot, gives.key) in self.copied

    def side(self, test: Compare, opened: Opened, side: str) -> Figure | None:
        """Return the figure of a side of a printed comparison."""
        name = ("side", self.mark, id(test), opened, side)
        return self.digits.figure(name) if self.digits.root(name) in self.digits.figures else None

    def equation(self, worked: WorkedUnknown, side: str) -> Figure:
        """Return the figure of a side of an equation at its root."""
        return self.digits.figure(("equation", self.mark, id(worked.line), worked.open, side))

    def proof(self, worked: WorkedMethod, place: int, part: str) -> Figure:
        """Return the figure of a sum that proves a method's result (`residual`), or of its largest term (`of`)."""
        return self.digits.figure(("proof", self.mark, id(worked.line), worked.open, place, part))

    def ratio(self, check: WorkedCheck) -> Figure | None:
        """Return the figure of a check's ratio."""
        return self.digits.figures.get(("ratio", self.mark, id(check)))

    def because(self, line: PlannedGives | PlannedBranches, chosen: int) -> tuple[Compare, ...]:
        """Return the comparisons that chose an arm of a line, the same objects every time."""
        key = id(line), chosen
        found = self.shared.chosen.get(key)
        if found is None:
            found = self.shared.chosen[key] = (line, _turned(tuple(arm.when for arm in line.arms), chosen))
        return found[1]

    def family(self, formula: Expression, result: Unit | None) -> Family:
        """Return the family a formula is worked in."""
        families = self.shared.families
        found = families.get(id(formula))
        if found is None:
            plan = self.worked.plan
            family = choose_family(formula, result, plan.slots, plan.template.system)
            found = families[id(formula)] = (formula, family)
        return found[1]

    def factor(self, unit: Unit, family: Family) -> Fraction:
        """Return the factor that takes a number in a unit of the plan to the family's coherent unit."""
        factors, key = self.shared.factors, (id(unit), family)
        found = factors.get(key)
        if found is None:
            found = factors[key] = (unit, factor_to(unit, family))
        return found[1]


def link_place(link: LinkedValue, worked: Worked) -> tuple[int, Key]:
    """Return slot and key of the line a link names; the link was found good when it was worked."""
    return worked.place(link.path)


def linked_values(worked: Worked) -> dict[tuple[int, Key], LinkedValue]:
    """Return the values a calculation takes from others, by slot and key."""
    found: dict[tuple[int, Key], LinkedValue] = {}
    planned = {given.given.name: given for given in worked.plan.givens}
    for value in worked.calculation.given:
        owner = planned[value.given.name]
        match value:
            case GivenValue(_, LinkedValue() as link):
                found[owner.slot, ()] = link
            case GivenRows():
                for column, key, cell in row_cells(owner, value):
                    if isinstance(cell.value, LinkedValue):
                        found[column.slot, key] = cell.value
            case GivenPairs():
                names = [worked.values.names[index].get((), ()) for index in owner.over]
                for row_names, cell in value.cells:
                    if isinstance(cell.value, LinkedValue):
                        key = tuple(n.index(r) for n, r in zip(names, row_names, strict=True))
                        found[owner.slot, key] = cell.value
            case GivenValue():
                pass
    return found


def reversed_sign(test: Compare) -> str:
    """Return the sign that holds where a comparison failed."""
    found = reversed_condition(test)
    assert isinstance(found, Compare)
    return found.op


def ratio_figure(ratio: float, *, ok: bool = False) -> Figure:
    """Return a ratio with three decimals, more where it would read 1.000 without being 1.

    A limit met to the last bits was decided exactly: where it is OK, it reads 1.000.
    """
    ratio = 1.0 if ok and abs(ratio - 1.0) <= 1e-9 else ratio
    places = 3
    while places < 12 and rounded(ratio, places) == 1.0 and ratio != 1.0:
        places += 1
    exact = rounded(ratio, places) == ratio
    return Figure(ratio, 0, places, exact, 1.0, dropped=True)


def fixed_figure(number: float, size: float, places: int) -> Figure:
    """Return a form of so many decimals: more would print noise."""
    return Figure(number, 0, places, rounded(number, places) == number, size, dropped=True)


def holds(test: Compare, left: float, right: float) -> bool:
    """Tell whether two worked sides stand as a comparison says, ties included: what may be printed as true."""
    near = abs(left - right) <= 1e-9 * max(abs(left), abs(right))
    match test.op:
        case "<" | "<=":
            return near or left < right
        case ">" | ">=":
            return near or left > right
        case "=":
            return near
        case _:
            return not near


def is_size(node: Expression) -> TypeGuard[Call]:
    """Tell whether a side is the size of one symbol: |M_u|."""
    return isinstance(node, Call) and node.function == "abs" and isinstance(node.arguments[0], Name)


def proof_unit(worked: WorkedMethod, place: int, system: str) -> Unit:
    """Return the unit a sum that proves a method's result is printed in."""
    dimension = METHODS[worked.line.kind].proves[place].dimension
    return (usual_family(system).unit(dimension) if dimension != NONE else ONE) or ONE


def equation_unit(line: PlannedUnknown, forms: CalculationForms) -> Unit:
    """Return the unit both sides of an equation are printed in; both are worked in one family."""
    slots = forms.worked.plan.slots
    dimension = next((d for node in (line.left, line.right) if (d := dimension_of(node, slots)) != NONE), NONE)
    both = Binary("-", line.left, line.right, line.span)
    family = choose_family(both, None, slots, forms.worked.plan.template.system)
    for node in (line.left, line.right):
        family = forms.shared.families.setdefault(id(node), (node, family))[1]
    return family.unit(dimension) or ONE if dimension != NONE else ONE


def side_unit(test: Compare, forms: CalculationForms) -> Unit:
    """Return the unit of a comparison's sides: that of a symbol standing alone, else the family's."""
    slots = forms.worked.plan.slots
    for side in (test.left, test.right):
        node = side.arguments[0] if is_size(side) else side
        if isinstance(node, Name) and node.slot >= 0 and slots[node.slot].symbol.unit is not None:
            return slots[node.slot].symbol.unit or ONE
        if isinstance(node, Number) and node.unit is not None:
            return node.unit
    dimension = dimension_of(test.left, slots)
    return (forms.family(test.left, None).unit(dimension) if dimension != NONE else ONE) or ONE


def _turned(whens: tuple[Condition | None, ...], chosen: int) -> tuple[Compare, ...]:
    """Return the comparisons that chose an arm: its own, or for `otherwise` the failed ones reversed."""
    own = whens[chosen]
    if own is not None:
        return joint_comparisons(own)
    found = []
    for when in whens[:chosen]:
        if isinstance(when, Compare):
            turned = reversed_condition(when)
            assert isinstance(turned, Compare)
            found.append(turned)
    return tuple(found)


def joint_comparisons(node: Condition) -> tuple[Compare, ...]:
    """Return the comparisons that must all hold for a condition to; () where it is made otherwise."""
    match node:
        case Compare():
            return (node,)
        case Logic("and", left, right):
            one, other = joint_comparisons(left), joint_comparisons(right)
            return one + other if one and other else ()
        case _:
            return ()
