"""Families of coherent units for a substitution: kip and in., lb and ft, N and mm, kN and m.

A formula is worked on paper in one family; values in other units carry a visible factor. Knows units and
formulas, not values.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from calcreport.core.expression import (
    Attach,
    Binary,
    Call,
    Expression,
    Name,
    Negate,
    Node,
    Number,
    Over,
    Strip,
    children,
    literal,
)
from calcreport.core.units import NONE, Dimension, Unit, divide, make_unit, multiply, raised
from calcreport.report.display import Slots


@dataclass(frozen=True, slots=True)
class Family:
    """A force unit and a length unit that go together."""

    force: str
    length: str

    def unit(self, dimension: Dimension) -> Unit | None:
        """Return the coherent unit of a dimension; None where it has time or broken exponents."""
        length, force, time = dimension
        if time or length.denominator != 1 or force.denominator != 1:
            return None
        named = _NAMED.get((self.force, self.length, dimension))
        if named:
            return make_unit(((named, 1),))
        factors = []
        if force:
            factors.append((self.force, int(force)))
        if length:
            factors.append((self.length, int(length)))
        factors.sort(key=lambda factor: factor[1] < 0)
        return make_unit(tuple(factors))


_STRESS: Dimension = (Fraction(-2), Fraction(1), Fraction(0))
_NAMED = {
    ("kip", "in", _STRESS): "ksi",
    ("lb", "in", _STRESS): "psi",
    ("kip", "ft", _STRESS): "ksf",
    ("lb", "ft", _STRESS): "psf",
    ("N", "mm", _STRESS): "MPa",
    ("kN", "m", _STRESS): "kPa",
    ("N", "m", _STRESS): "Pa",
}
US = (Family("kip", "in"), Family("kip", "ft"), Family("lb", "in"), Family("lb", "ft"))
SI = (Family("N", "mm"), Family("kN", "m"), Family("kN", "mm"), Family("N", "m"))

#: cost of a factor beside a value: plain ones read easily, others do not
_EASY = frozenset({Fraction(12), Fraction(144), *(Fraction(10**n) for n in range(1, 10))})
#: cost of a result that must be converted after the line is worked
_RESULT_COST = 0.6


def choose_family(formula: Expression, result: Unit | None, slots: Slots, system: str) -> Family:
    """Return the family in which the fewest values need a factor."""
    units = list(_units(formula, slots))
    candidates = US if system == "us" else SI
    scores = [_score(family, units, result) for family in candidates]
    return candidates[scores.index(min(scores))]


def usual_family(system: str) -> Family:
    """Return the family forces and moments are told in where no formula chooses one."""
    return US[1] if system == "us" else SI[1]


def _score(family: Family, units: list[Unit], result: Unit | None) -> float:
    score = sum(_cost(factor_to(unit, family)) for unit in units)
    if result is not None and factor_to(result, family) != 1:
        score += _RESULT_COST * _cost(factor_to(result, family))
    return score


def _cost(factor: Fraction) -> float:
    if factor == 1:
        return 0.0
    return 1.0 if factor in _EASY or 1 / factor in _EASY else 3.0


def factor_to(unit: Unit, family: Family) -> Fraction:
    """Return the factor that takes a number in `unit` to the family's coherent unit."""
    coherent = family.unit(unit.dimension)
    return unit.scale / coherent.scale if coherent is not None else Fraction(1)


def _units(node: Node, slots: Slots) -> list[Unit]:
    """Return the unit of every value a family matters to; what stands inside num(…) is apart."""
    match node:
        case Name(_, _, slot):
            unit = slots[slot].symbol.unit if slot >= 0 else None
            return [unit] if unit is not None and unit.dimension != NONE else []
        case Number(_, _, unit):
            return [unit] if unit is not None and unit.dimension != NONE else []
        case Strip():
            return []
        case Attach(_, unit):
            return [unit]
        case Over():
            return _units(node.body, slots)
        case Call("roundup" | "rounddown", arguments):
            return _units(arguments[0], slots) + _units(arguments[1], slots)
        case _:
            return [unit for child in children(node) for unit in _units(child, slots)]


def dimension_of(node: Expression, slots: Slots) -> Dimension:
    """Return the dimension of a planned formula, whose dimensions were held before."""
    match node:
        case Name(_, _, slot):
            unit = slots[slot].symbol.unit if slot >= 0 else None
            return unit.dimension if unit else NONE
        case Number(_, _, unit):
            return unit.dimension if unit else NONE
        case Negate(body):
            return dimension_of(body, slots)
        case Binary("*", left, right):
            return multiply(dimension_of(left, slots), dimension_of(right, slots))
        case Binary("/", left, right):
            return divide(dimension_of(left, slots), dimension_of(right, slots))
        case Binary("^", left, right):
            return raised(dimension_of(left, slots), literal(right) or Fraction(1))
        case Binary(_, left, right):
            found = dimension_of(left, slots)
            return found if found != NONE else dimension_of(right, slots)
        case Call("sqrt", arguments):
            return raised(dimension_of(arguments[0], slots), Fraction(1, 2))
        case Call("exp" | "ln" | "sin" | "cos" | "tan" | "atan") | Strip():
            return NONE
        case Call(_, arguments):
            return next((d for a in arguments if (d := dimension_of(a, slots)) != NONE), NONE)
        case Attach(_, unit):
            return unit.dimension
        case Over(_, body):
            return dimension_of(body, slots)
