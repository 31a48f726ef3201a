"""What may be wrong with figures that come with a given value: a bar of a table, what `none` is worth.

Cases in, mutants out: a given value is altered where a case hands it over, since no line of a template holds it.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from fractions import Fraction
from typing import Any

from calcreport.calculate.model import BarCallout, Calculation, GivenPairs, GivenRows, GivenValue
from calcreport.core.quantity import Amount
from calcreport.core.record import replace
from calcreport.read.bars import BarSize
from calcreport.read.model import Given

from .formulas import FACTOR
from .shelf import Shelf
from .trial import Mutant

#: what stands in for the worth of `none`, in the unit it is written in
_SOMETHING = Fraction(1)


def bar_mutants(shelf: Shelf) -> Iterator[Mutant]:
    """Yield the slips of every bar table: a figure off by a hundredth, a figure of the neighbour's row."""
    for file, table in shelf.bars:
        for number, size in enumerate(table.sizes):
            near = [table.sizes[n] for n in (number - 1, number + 1) if 0 <= n < len(table.sizes)]
            for field in ("area", "diameter"):
                says = f"1.01 × {getattr(size, field).text}"
                yield _bar(file, size, field, says, replace(getattr(size, field), value=_larger(size, field)))
                for other in near:
                    yield _bar(file, size, field, f"that of {other.name}", getattr(other, field))


def _larger(size: BarSize, field: str) -> Fraction:
    amount: Amount = getattr(size, field)
    return amount.value * FACTOR


def _bar(file: str, size: BarSize, field: str, says: str, amount: Amount) -> Mutant:
    def change(value: GivenValue) -> GivenValue:
        if not isinstance(value.value, BarCallout):
            return value
        groups = tuple(replace(g, **{field: amount}) if g.size == size.name else g for g in value.value.groups)
        return value if groups == value.value.groups else replace(value, value=replace(value.value, groups=groups))

    return Mutant(file, (file, 0, 0, "", ()), f"bar {size.name}", field, says, _through(change), handed=True)


def worth_mutants(name: str, shelf: Shelf) -> Iterator[Mutant]:
    """Yield a slip for every given value of a template that may be none and is worth a quantity then."""
    seen: set[str] = set()
    for variant in shelf.of(name):
        for given in _all_given(variant.template.body.given):
            if isinstance(given.if_none, Amount) and given.name not in seen:
                seen.add(given.name)
                yield _worth(name, given, variant.template.source.name)


def _all_given(givens: tuple[Given, ...]) -> Iterator[Given]:
    for given in givens:
        yield given
        yield from _all_given(given.columns)


def _worth(name: str, given: Given, source: str) -> Mutant:
    wanted = given.name

    def change(value: GivenValue) -> GivenValue:
        none = value.given.name == wanted and value.origin.kind == "none" and isinstance(value.value, Amount)
        return replace(value, value=_some(value.value)) if none else value

    key = (source, given.span.start, given.span.end, "Given", ())
    return Mutant(name, key, f"given {wanted}", "if none", "0 → 1 of its unit", _through(change, wanted), handed=True)


def _some(amount: Any) -> Amount:
    new: Amount = replace(amount, value=amount.value + _SOMETHING * amount.unit.scale)
    return new


def _through(change: Callable[[GivenValue], GivenValue], pairs: str = "") -> Callable[[Calculation], Calculation]:
    """Return a change of a calculation that passes every given value through `change`, and the worth of `pairs`."""

    def apply(calculation: Calculation) -> Calculation:
        found: list[GivenValue | GivenRows | GivenPairs] = []
        for value in calculation.given:
            match value:
                case GivenRows():
                    cells = tuple(tuple(change(cell) for cell in row) for row in value.cells)
                    found.append(replace(value, cells=cells))
                case GivenPairs(given):
                    named = tuple((names, change(cell)) for names, cell in value.cells)
                    worth = _some(given.if_none) if pairs == given.name else given.if_none
                    found.append(replace(value, cells=named, given=replace(given, if_none=worth)))
                case _:
                    found.append(change(value))
        return replace(calculation, given=tuple(found)) if tuple(found) != calculation.given else calculation

    return apply
