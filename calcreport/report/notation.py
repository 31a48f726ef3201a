"""Expressions as formula trees: once with symbols, once with printed numbers and visible unit factors.

Planned trees and printed figures in, `report.model` formulas out. The only place besides `report.digits` where a
number becomes text.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction as F

from calcreport.calculate.model import Values
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
    walk,
)
from calcreport.core.units import Unit
from calcreport.report.digits import Figure, number_text
from calcreport.report.display import Slots, show_symbol, show_unit
from calcreport.report.families import Family, factor_to
from calcreport.report.model import Big, Fence, Formula, Fraction, Letters, Operator, Root, Row, Script, Space, Stack

_SIGNS = {"+": "+", "-": "−", "*": "×", "<=": "≤", ">=": "≥", "!=": "≠", "<": "<", ">": ">", "=": "="}
_REVERSED = {"<": ">=", "<=": ">", ">": "<=", ">=": "<", "=": "!=", "!=": "="}
#: binding strength: sum, sign, product, power, atom
_SUM, _SIGN, _PRODUCT, _POWER, _ATOM = range(5)
_THIN = Space("thin")


@dataclass(frozen=True, slots=True)
class _Piece:
    """A formula with what its neighbours must know of it."""

    formula: Formula
    strength: int
    #: begins (ends) with a digit, so that a number beside it needs parentheses
    starts_digit: bool = False
    ends_digit: bool = False
    #: is a lone number
    number: bool = False


def relation(sign: str) -> Operator:
    """Return a relation sign."""
    return Operator(_SIGNS.get(sign, sign), "relation")


def number(text: str) -> Formula:
    """Return a number as printed."""
    return Letters(text)


def show_figure(figure: Figure, unit: Unit | None, *, unsigned: bool = False) -> Formula:
    """Return a printed number with its power of ten and its unit."""
    return with_unit(_with_power(figure, unsigned), unit)


def _with_power(figure: Figure, unsigned: bool = False) -> Formula:
    digits = number(number_text(figure, unsigned=unsigned))
    if not figure.exponent:
        return digits
    sign = "−" if figure.exponent < 0 else ""
    power = Script(Letters("10"), None, Letters(f"{sign}{abs(figure.exponent)}"))
    return Row((digits, Operator("×", "binary"), power))


def with_unit(shown: Formula, unit: Unit | None) -> Formula:
    """Return a number followed by its unit."""
    words = show_unit(unit) if unit is not None else None
    return shown if words is None else Row((shown, Space("unit"), words))


def show_factor(value: F) -> str:
    """Return a conversion factor as text: 12, 1,000, 0.001."""
    if value.denominator == 1:
        return f"{value.numerator:,}"
    return f"{float(value):.10g}"


class Notation:
    """Prints formulas of one plan; a subclass prints names and literals as numbers."""

    def __init__(self, slots: Slots) -> None:
        self.slots = slots

    def formula(self, node: Expression) -> Formula:
        """Return a formula."""
        return self.piece(node).formula

    # -------------------------------------------------------- leaves

    def name(self, node: Name) -> _Piece:
        """Print a symbol, or a word."""
        if node.slot < 0:
            return _Piece(Letters(node.name), _ATOM)
        return _Piece(show_symbol(self.slots[node.slot].symbol), _ATOM)

    def literal(self, node: Number) -> _Piece:
        """Print a literal with its unit."""
        text = _grouped(node.text)
        shown = with_unit(number(text), node.unit)
        return _Piece(shown, _ATOM, True, node.unit is None, node.unit is None)

    def strip(self, node: Strip) -> _Piece:
        """Print what stands inside num(…): the formula of the trade drops the unit."""
        return self.piece(node.body)

    def attach(self, node: Attach) -> _Piece:
        """Print what stands inside qty(…)."""
        return self.piece(node.body)

    def over(self, node: Over) -> _Piece:
        """Print a sum or an extreme with its set below the sign."""
        below: Formula = Letters(node.rows)
        if node.where is not None:
            below = Row((below, Letters(": "), self.condition(node.where)))
        sign: Formula = Operator("∑", "prefix") if node.function == "sum" else Letters(_OVER_WORDS[node.function])
        body = self.piece(node.body)
        inner = body.formula if body.strength > _SUM else Fence("(", body.formula, ")")
        return _Piece(Row((Big(sign, below), _THIN, inner)), _PRODUCT)

    # -------------------------------------------------------- nodes

    def piece(self, node: Expression) -> _Piece:
        """Print one node."""
        match node:
            case Name():
                return self.name(node)
            case Number():
                return self.literal(node)
            case Negate(body):
                inner = self.held(body, _PRODUCT)
                return _Piece(Row((Operator("−", "prefix"), inner.formula)), _SIGN)
            case Binary("+" | "-"):
                return self.sum(node)
            case Binary("*"):
                return self.product(node)
            case Binary("/"):
                return self.quotient(node)
            case Binary():
                return self.power(node)
            case Call():
                return self.call(node)
            case Strip():
                return self.strip(node)
            case Attach():
                return self.attach(node)
            case Over():
                return self.over(node)

    def held(self, node: Expression, least: int) -> _Piece:
        """Print a node, in parentheses where it binds less than `least`."""
        found = self.piece(node)
        return found if found.strength >= least else _fenced(found)

    def sum(self, node: Binary) -> _Piece:
        left = self.piece(node.left)
        right = self.held(node.right, _SUM if node.op == "+" else _SIGN)
        if right.strength == _SIGN:
            right = _fenced(right)
        items = (*_items(left.formula), Operator(_SIGNS[node.op], "binary"), right.formula)
        return _Piece(Row(items), _SUM, left.starts_digit, right.ends_digit)

    def product(self, node: Binary) -> _Piece:
        """Print factors side by side; a number after another factor stands in parentheses."""
        factors = _factors(node)
        pieces = [self.held(factor, _PRODUCT if place == 0 else _POWER) for place, factor in enumerate(factors)]
        items: list[Formula] = []
        before: _Piece | None = None
        for found in pieces:
            piece = found
            if before is not None:
                if piece.strength < _POWER or (piece.starts_digit and not isinstance(piece.formula, Fence)):
                    piece = _fenced(piece)
                if not isinstance(piece.formula, Fence) or before.number:
                    items.append(_THIN)
            items.extend(_items(piece.formula))
            before = piece
        assert before is not None
        return _Piece(Row(tuple(items)), _PRODUCT, pieces[0].starts_digit, before.ends_digit)

    def quotient(self, node: Binary) -> _Piece:
        above, below = self.piece(node.left), self.piece(node.right)
        return _Piece(Fraction(above.formula, below.formula), _POWER, above.starts_digit, below.ends_digit)

    def power(self, node: Binary) -> _Piece:
        base = self.held(node.left, _ATOM)
        if isinstance(base.formula, Script | Fraction | Root):
            plain = isinstance(base.formula, Script) and base.formula.above is None
            base = base if plain else _fenced(base)
        exponent = self.exponent(node.right)
        if isinstance(base.formula, Script):
            return _Piece(Script(base.formula.base, base.formula.below, exponent), _POWER, base.starts_digit)
        return _Piece(Script(base.formula, None, exponent), _POWER, base.starts_digit)

    def exponent(self, node: Expression) -> Formula:
        """Print an exponent on one line: 1/3, not a fraction."""
        if isinstance(node, Binary) and node.op == "/":
            return Row((self.formula(node.left), Letters("/"), self.formula(node.right)))
        return self.formula(node)

    def call(self, node: Call) -> _Piece:
        arguments = [self.formula(argument) for argument in node.arguments]
        match node.function:
            case "abs":
                return _Piece(Fence("|", arguments[0], "|"), _ATOM)
            case "sqrt":
                return _Piece(Root(arguments[0]), _ATOM)
            case "min" | "max" if len(arguments) >= 3:
                return _Piece(Row((Letters(node.function), _THIN, Fence("{", Stack(tuple(arguments)), ""))), _POWER)
            case _:
                inner: list[Formula] = []
                for place, argument in enumerate(arguments):
                    inner += [Operator(",", "punctuation")] if place else []
                    inner.append(argument)
                words = {"roundup": "round up", "rounddown": "round down"}.get(node.function, node.function)
                return _Piece(Row((Letters(words), Fence("(", Row(tuple(inner)), ")"))), _POWER)

    # -------------------------------------------------------- conditions

    def condition(self, node: Condition) -> Formula:
        """Print a condition with symbols."""
        match node:
            case Compare(op, left, right):
                return Row((*_items(self.formula(left)), relation(op), *_items(self.formula(right))))
            case Logic(op, left, right):
                return Row((self.condition(left), Letters(f" {op} "), self.condition(right)))
            case Not(body):
                return Row((Letters("not "), self.condition(body)))
            case Is(name, word, _, bound):
                shown = Letters(name.name) if bound >= 0 else self.name(name).formula
                return Row((shown, Letters(f" is {word}")))
            case IsGiven(name):
                return Row((self.name(name).formula, Letters(" is given")))


_OVER_WORDS = {"max": "max", "min": "min", "pick": "pick", "linear": "read"}


@dataclass(frozen=True, slots=True)
class Printed:
    """What a substitution needs: values at hand, the figure of each, the words of word values."""

    values: Values
    figure: Callable[[int], Figure]
    #: figure of the result of a whole sub-formula told elsewhere, by row
    row_names: Callable[[int], tuple[str, ...]]


class Substitution(Notation):
    """Prints a formula with the printed figures of the open rows, in one family of units."""

    def __init__(self, slots: Slots, printed: Printed, family: Family) -> None:
        super().__init__(slots)
        self.printed, self.family = printed, family
        #: unit a value inside num(…) is wanted in; None outside
        self.wanted: Unit | None = None

    def name(self, node: Name) -> _Piece:
        """Print a value, with a factor where its unit is not of the family."""
        symbol = self.slots[node.slot].symbol if node.slot >= 0 else None
        if symbol is None or symbol.unit is None:
            value = self.printed.values.get(node.slot, self.printed.values.key(node.slot)) if node.slot >= 0 else node.name
            return _Piece(Letters(str(value)), _ATOM)
        figure = self.printed.figure(node.slot)
        shown: _Piece
        if figure.exponent:
            shown = _Piece(_with_power(figure), _PRODUCT, True, True)
        else:
            shown = _Piece(number(number_text(figure)), _ATOM, True, True, True)
        if figure.mantissa < 0:
            shown = _Piece(shown.formula, _SIGN)
        return self.converted(shown, self.factor(symbol.unit))

    def literal(self, node: Number) -> _Piece:
        """Print a literal as a bare number."""
        shown = _Piece(number(_grouped(node.text)), _ATOM, True, True, True)
        return shown if node.unit is None else self.converted(shown, self.factor(node.unit))

    def strip(self, node: Strip) -> _Piece:
        """Print what stands inside num(…) as numbers in its unit."""
        before, self.wanted = self.wanted, node.unit
        found = self.piece(node.body)
        self.wanted = before
        return found

    def attach(self, node: Attach) -> _Piece:
        """Print what stands inside qty(…), with a factor where its unit is not of the family."""
        return self.converted(self.piece(node.body), factor_to(node.unit, self.family))

    def factor(self, unit: Unit) -> F:
        """Return the factor a value in `unit` needs here."""
        if self.wanted is not None and unit.dimension == self.wanted.dimension:
            return unit.scale / self.wanted.scale
        return factor_to(unit, self.family)

    def converted(self, shown: _Piece, factor: F) -> _Piece:
        """Return a number with its visible unit factor."""
        if factor == 1:
            return shown
        if factor.numerator == 1:
            inner: Formula = Row((*_items(shown.formula), Letters("/"), number(show_factor(1 / factor))))
        else:
            inner = Row((*_items(shown.formula), Operator("×", "binary"), number(show_factor(factor))))
        return _Piece(Fence("(", inner, ")"), _ATOM)

    def over(self, node: Over) -> _Piece:
        """Write a sum out while it has at most six terms that are not zero; else name the row taken."""
        values = self.printed.values
        before = values.open[node.bound]
        names = self.printed.row_names(node.bound)
        terms: list[_Piece] = []
        for row in range(len(names)):
            values.open[node.bound] = row
            if self.is_zero(node.body):
                continue
            terms.append(self.piece(node.body))
        values.open[node.bound] = before
        if node.function != "sum" or not 0 < len(terms) <= 6 or node.where is not None:
            return super().over(node) if terms or node.function != "sum" else _Piece(Letters("0"), _ATOM, True, True, True)
        items: list[Formula] = []
        for place, term in enumerate(terms):
            items += [Operator("+", "binary")] if place else []
            items.extend(_items(_fenced(term).formula if term.strength <= _SIGN and place else term.formula))
        first, last = terms[0], terms[-1]
        if len(terms) == 1:
            return first
        return _Piece(Row(tuple(items)), _SUM, first.starts_digit, last.ends_digit)

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


def reversed_condition(node: Condition) -> Condition:
    """Return what holds where a comparison failed: the comparison the other way round."""
    if isinstance(node, Compare):
        return Compare(_REVERSED[node.op], node.left, node.right, node.span)  # type: ignore[arg-type]
    return Not(node, node.span)


def has_values(node: Expression) -> bool:
    """Tell whether a formula holds any symbol, so that a substitution says something new."""
    return any(isinstance(n, Name) for n in walk(node))


def _factors(node: Expression) -> list[Expression]:
    if isinstance(node, Binary) and node.op == "*":
        return [*_factors(node.left), node.right]
    return [node]


def _fenced(piece: _Piece) -> _Piece:
    if isinstance(piece.formula, Fence):
        return _Piece(piece.formula, _ATOM)
    return _Piece(Fence("(", piece.formula, ")"), _ATOM)


def _items(formula: Formula) -> tuple[Formula, ...]:
    return formula.items if isinstance(formula, Row) else (formula,)


def _grouped(text: str) -> str:
    whole, mark, rest = text.partition(".")
    return (f"{int(whole):,}" if whole.isdigit() and len(whole) > 3 else whole) + mark + rest
