"""Formulas with the printed figures of the open rows, in one family of units, each unit factor visible.

Planned trees and figures in, `report.model` formulas out.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction as F
from itertools import pairwise

from calcreport.calculate.model import Values, Work
from calcreport.core.expression import Attach, Binary, Compare, Expression, Name, Number, Over, Strip
from calcreport.core.units import Unit
from calcreport.report.digits import Figure, number_text
from calcreport.report.display import Slots
from calcreport.report.families import Family
from calcreport.report.model import Fence, Formula, Fraction, Letters, Operator, Row
from calcreport.report.notation import (
    ATOM,
    PRODUCT,
    SIGN,
    SUM,
    Notation,
    Piece,
    fenced,
    grouped_text,
    items_of,
    number,
    picked_row,
    show_factor,
    with_power,
)

#: a place this close to a row of a table (relative) is at that row
_TIE = 1e-9


@dataclass(frozen=True, slots=True)
class Printed:
    """What a substitution needs: values at hand, the figure of each, the words of word values, factors of units."""

    values: Values
    figure: Callable[[int], Figure]
    #: figure of the result of a whole sub-formula told elsewhere, by row
    row_names: Callable[[int], tuple[str, ...]]
    #: factor that takes a unit to a family
    factor: Callable[[Unit, Family], F]
    #: works a formula in the open rows
    work: Callable[[Expression], Work]
    #: rows a formula over a set takes its value from
    taken: Callable[[Over], tuple[int, ...]]


class Substitution(Notation):
    """Prints a formula with the printed figures of the open rows, in one family of units."""

    def __init__(self, slots: Slots, printed: Printed, family: Family) -> None:
        super().__init__(slots)
        self.printed, self.family = printed, family
        #: unit a value inside num(…) is wanted in; None outside
        self.wanted: Unit | None = None

    def name(self, node: Name) -> Piece:
        """Print a value, with a factor where its unit is not of the family."""
        symbol = self.slots[node.slot].symbol if node.slot >= 0 else None
        if symbol is None or symbol.unit is None:
            value = (
                self.printed.values.get(node.slot, self.printed.values.key(node.slot)) if node.slot >= 0 else node.name
            )
            return Piece(Letters(str(value)), ATOM)
        figure = self.printed.figure(node.slot)
        shown: Piece
        if figure.exponent:
            shown = Piece(with_power(figure), PRODUCT, True, True)
        else:
            shown = Piece(number(number_text(figure)), ATOM, True, True, True)
        if figure.mantissa < 0:
            shown = Piece(shown.formula, SIGN)
        return self.converted(shown, self.factor(symbol.unit))

    def literal(self, node: Number) -> Piece:
        """Print a literal as a bare number."""
        shown = Piece(number(grouped_text(node.text)), ATOM, True, True, True)
        return shown if node.unit is None else self.converted(shown, self.factor(node.unit))

    def strip(self, node: Strip) -> Piece:
        """Print what stands inside num(…) as numbers in its unit."""
        before, self.wanted = self.wanted, node.unit
        found = self.piece(node.body)
        self.wanted = before
        return found

    def attach(self, node: Attach) -> Piece:
        """Print what stands inside qty(…), with a factor where its unit is not of the family."""
        return self.converted(self.piece(node.body), self.printed.factor(node.unit, self.family))

    def factor(self, unit: Unit) -> F:
        """Return the factor a value in `unit` needs here."""
        if self.wanted is not None and unit.dimension == self.wanted.dimension:
            return unit.scale / self.wanted.scale
        return self.printed.factor(unit, self.family)

    def converted(self, shown: Piece, factor: F) -> Piece:
        """Return a number with its visible unit factor."""
        if factor == 1:
            return shown
        if factor.numerator == 1:
            inner: Formula = Row((*items_of(shown.formula), Letters("/"), number(show_factor(1 / factor))))
        else:
            inner = Row((*items_of(shown.formula), Operator("×", "binary"), number(show_factor(factor))))
        return Piece(Fence("(", inner, ")"), ATOM, factored=True)

    def over(self, node: Over) -> Piece:
        """Write a sum out while it has at most six terms that are not zero; else name the row taken."""
        values = self.printed.values
        before = values.open[node.bound]
        names = self.printed.row_names(node.bound)
        if node.function == "linear" and isinstance(node.where, Compare):
            return self.interpolated(node, node.where, len(names))
        taken = self.row_taken(node, names)
        if taken >= 0:
            values.open[node.bound] = taken
            found = self.piece(node.body)
            values.open[node.bound] = before
            return found
        if node.function != "sum":
            return self.chosen(node)
        terms: list[Piece] = []
        for row in range(len(names)) if node.where is None else self.printed.taken(node):
            values.open[node.bound] = row
            if self.is_zero(node.body):
                continue
            terms.append(self.piece(node.body))
        values.open[node.bound] = before
        if not terms:
            return Piece(Letters("0"), ATOM, True, True, True)
        if len(terms) > 6:
            # the rows are told by their table: symbols say what is added up, one row's figures would not
            return Notation(self.slots).over(node)
        items: list[Formula] = []
        for place, term in enumerate(terms):
            items += [Operator("+", "binary")] if place else []
            items.extend(items_of(fenced(term).formula if term.strength <= SIGN and place else term.formula))
        first, last = terms[0], terms[-1]
        if len(terms) == 1:
            return first
        return Piece(Row(tuple(items)), SUM, first.starts_digit, last.ends_digit)

    def interpolated(self, node: Over, where: Compare, rows: int) -> Piece:
        """Write out the straight line between the two rows a value is read from; at a row, that row's value."""
        values, left = self.printed.values, self.printed.work(where.left)
        before, place = values.open[node.bound], self.printed.work(where.right)(values)
        at = self.piece(where.right)
        found: list[tuple[float, Piece, Piece]] = []
        for row in range(rows):
            values.open[node.bound] = row
            found.append((left(values), self.piece(where.left), self.piece(node.body)))
        values.open[node.bound] = before
        found.sort(key=lambda one: one[0])
        slack = _TIE * abs(place)
        for x, _, y in found:
            if abs(x - place) <= slack:
                return y
        for (x1, from_x, from_y), (x2, to_x, to_y) in pairwise(found):
            if x1 < place < x2:
                share = Fraction(_minus(at, from_x), _minus(to_x, from_x))
                items = (
                    *items_of(from_y.formula),
                    Operator("+", "binary"),
                    Fence("(", _minus(to_y, from_y), ")"),
                    share,
                )
                return Piece(Row(items), SUM, from_y.starts_digit)
        return self.piece(node.otherwise) if node.otherwise is not None else super().over(node)

    def chosen(self, node: Over) -> Piece:
        """Print the row a value is taken from, or what stands where none fits."""
        rows = self.printed.taken(node)
        if not rows:
            return self.piece(node.otherwise) if node.otherwise is not None else super().over(node)
        before = self.printed.values.open[node.bound]
        self.printed.values.open[node.bound] = rows[0]
        found = self.piece(node.body)
        self.printed.values.open[node.bound] = before
        return found

    def row_taken(self, node: Over, names: tuple[str, ...]) -> int:
        """Return the row an extreme or a pick takes its single value from; -1 where that cannot be told."""
        row = picked_row(node)
        if row:
            return names.index(row) if row in names else -1
        if node.function not in ("max", "min") or node.where is not None or not isinstance(node.body, Name):
            return -1
        values, slot = self.printed.values, node.body.slot
        before = values.open[node.bound]
        found = []
        for place in range(len(names)):
            values.open[node.bound] = place
            found.append(values.number(slot, values.key(slot)))
        values.open[node.bound] = before
        return found.index(max(found) if node.function == "max" else min(found)) if found else -1

    def is_zero(self, node: Expression) -> bool:
        """Tell whether a term of a sum vanishes: a factor of it is zero."""
        match node:
            case Binary("*", left, right):
                return self.is_zero(left) or self.is_zero(right)
            case Name(_, _, slot) if slot >= 0:
                return self.printed.values.get(slot, self.printed.values.key(slot)) == 0
            case Number(value):
                return value == 0
            case _:
                return False


def _minus(one: Piece, other: Piece) -> Formula:
    taken = fenced(other).formula if other.strength <= SIGN else other.formula
    return Row((*items_of(one.formula), Operator("−", "binary"), *items_of(taken)))
