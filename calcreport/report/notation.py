"""Expressions as formula trees with symbols, as the trade sets them.

Planned trees in, `report.model` formulas out. `report.substitution` prints the same trees with numbers.
Kept in one though long: one printer, a method for each node.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction as F

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
from calcreport.report.chains import Chain, Side, find_chain
from calcreport.report.digits import Figure, number_text
from calcreport.report.display import Slots, show_symbol, show_unit
from calcreport.report.model import Big, Fence, Formula, Fraction, Letters, Operator, Root, Row, Script, Space, Stack

_SIGNS = {"+": "+", "-": "−", "*": "×", "<=": "≤", ">=": "≥", "!=": "≠", "<": "<", ">": ">", "=": "="}
_REVERSED = {"<": ">=", "<=": ">", ">": "<=", ">=": "<", "=": "!=", "!=": "="}
#: binding strength: sum, sign, product, power, atom
SUM, SIGN, PRODUCT, POWER, ATOM = range(5)
_THIN = Space("thin")


@dataclass(frozen=True, slots=True)
class Piece:
    """A formula with what its neighbours must know of it."""

    formula: Formula
    strength: int
    #: begins (ends) with a digit, so that a number beside it needs parentheses
    starts_digit: bool = False
    ends_digit: bool = False
    #: is a lone number
    number: bool = False
    #: stands in parentheses only for its unit factor, which a place that encloses it does not need
    factored: bool = False

    @property
    def bare(self) -> Formula:
        """The formula for a place that encloses it: under a root, over a rule, between a function's commas."""
        return self.formula.body if self.factored and isinstance(self.formula, Fence) else self.formula


def relation(sign: str) -> Operator:
    """Return a relation sign."""
    return Operator(_SIGNS.get(sign, sign), "relation")


def number(text: str) -> Formula:
    """Return a number as printed."""
    return Letters(text)


def show_figure(figure: Figure, unit: Unit | None, *, unsigned: bool = False) -> Formula:
    """Return a printed number with its power of ten and its unit."""
    return with_unit(with_power(figure, unsigned), unit)


def with_power(figure: Figure, unsigned: bool = False) -> Formula:
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

    def name(self, node: Name) -> Piece:
        """Print a symbol, or a word."""
        if node.slot < 0:
            return Piece(Letters(node.name), ATOM)
        return Piece(show_symbol(self.slots[node.slot].symbol), ATOM)

    def literal(self, node: Number) -> Piece:
        """Print a literal with its unit."""
        text = grouped_text(node.text)
        shown = with_unit(number(text), node.unit)
        return Piece(shown, ATOM, True, node.unit is None, node.unit is None)

    def strip(self, node: Strip) -> Piece:
        """Print what stands inside num(…): the formula of the trade drops the unit."""
        return self.piece(node.body)

    def attach(self, node: Attach) -> Piece:
        """Print what stands inside qty(…)."""
        return self.piece(node.body)

    def over(self, node: Over) -> Piece:
        """Print a sum or an extreme with its set below the sign."""
        row = picked_row(node)
        if row:
            return Piece(of_row(self.piece(node.body).formula, row), ATOM)
        below: Formula = Letters(node.rows)
        if node.where is not None:
            below = Row((below, Letters(": "), self.condition(node.where)))
        sign: Formula = Operator("∑", "prefix") if node.function == "sum" else Letters(_OVER_WORDS[node.function])
        body = self.piece(node.body)
        inner = body.formula if body.strength > SUM else Fence("(", body.formula, ")")
        return Piece(Row((Big(sign, below), _THIN, inner)), PRODUCT)

    # -------------------------------------------------------- nodes

    def piece(self, node: Expression) -> Piece:
        """Print one node."""
        match node:
            case Name():
                return self.name(node)
            case Number():
                return self.literal(node)
            case Negate(body):
                inner = self.held(body, PRODUCT)
                return Piece(Row((Operator("−", "prefix"), inner.formula)), SIGN)
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

    def held(self, node: Expression, least: int) -> Piece:
        """Print a node, in parentheses where it binds less than `least`."""
        if isinstance(node, Binary) and node.op == "/" and least >= PRODUCT:
            found = self.fraction(self.piece(node.left), self.piece(node.right))
        else:
            found = self.piece(node)
        return found if found.strength >= least else fenced(found)

    def sum(self, node: Binary) -> Piece:
        left = self.piece(node.left)
        right = self.held(node.right, SUM if node.op == "+" else SIGN)
        if right.strength == SIGN:
            right = fenced(right)
        items = (*items_of(left.formula), Operator(_SIGNS[node.op], "binary"), right.formula)
        return Piece(Row(items), SUM, left.starts_digit, right.ends_digit)

    def product(self, node: Binary) -> Piece:
        """Print factors side by side; a number after another factor stands in parentheses."""
        factors = _factors(node)
        pieces = [self.held(factor, PRODUCT if place == 0 else POWER) for place, factor in enumerate(factors)]
        items: list[Formula] = []
        before: Piece | None = None
        for found in pieces:
            piece = found
            if before is not None:
                if piece.strength < POWER or (piece.starts_digit and not isinstance(piece.formula, Fence)):
                    piece = fenced(piece)
                if not isinstance(piece.formula, Fence) or before.number:
                    items.append(_THIN)
            items.extend(items_of(piece.formula))
            before = piece
        assert before is not None
        return Piece(Row(tuple(items)), PRODUCT, pieces[0].starts_digit, before.ends_digit)

    def quotient(self, node: Binary) -> Piece:
        """Print a/2 on the line where both sides are single, else a fraction."""
        above, below = self.piece(node.left), self.piece(node.right)
        if above.strength == below.strength == ATOM and not (above.factored or below.factored):
            return Piece(
                Row((above.formula, Letters("/"), below.formula)), PRODUCT, above.starts_digit, below.ends_digit
            )
        return self.fraction(above, below)

    def fraction(self, above: Piece, below: Piece) -> Piece:
        """Print one thing over another."""
        return Piece(Fraction(above.bare, below.bare), POWER, above.starts_digit, below.ends_digit)

    def power(self, node: Binary) -> Piece:
        base = self.held(node.left, ATOM)
        if isinstance(base.formula, Script | Fraction | Root):
            plain = isinstance(base.formula, Script) and base.formula.above is None
            base = base if plain else fenced(base)
        exponent = self.exponent(node.right)
        if isinstance(base.formula, Script):
            return Piece(Script(base.formula.base, base.formula.below, exponent), POWER, base.starts_digit)
        return Piece(Script(base.formula, None, exponent), POWER, base.starts_digit)

    def exponent(self, node: Expression) -> Formula:
        """Print an exponent on one line: 1/3, not a fraction."""
        if isinstance(node, Binary) and node.op == "/":
            return Row((self.formula(node.left), Letters("/"), self.formula(node.right)))
        return self.formula(node)

    def call(self, node: Call) -> Piece:
        pieces = [self.piece(argument) for argument in node.arguments]
        arguments = [piece.bare for piece in pieces]
        match node.function:
            case "abs":
                return Piece(Fence("|", arguments[0], "|"), ATOM)
            case "sqrt":
                return Piece(Root(arguments[0]), ATOM)
            case "min" | "max" if _long(pieces):
                return Piece(Row((Letters(node.function), _THIN, Fence("{", Stack(tuple(arguments)), ""))), POWER)
            case _:
                inner: list[Formula] = []
                for place, argument in enumerate(arguments):
                    inner += [Operator(",", "punctuation")] if place else []
                    inner.append(argument)
                words = {"roundup": "round up", "rounddown": "round down"}.get(node.function, node.function)
                return Piece(Row((Letters(words), Fence("(", Row(tuple(inner)), ")"))), POWER)

    # -------------------------------------------------------- conditions

    def chain(self, one: Condition, other: Condition) -> Chain | None:
        """Return two comparisons as low < middle < high, where what is between prints alike."""
        return find_chain(one, other, lambda a, b: self.formula(a) == self.formula(b))

    def condition(self, node: Condition) -> Formula:
        """Print a condition with symbols."""
        match node:
            case Compare(op, left, right):
                return Row((*items_of(self.formula(left)), relation(op), *items_of(self.formula(right))))
            case Logic("and", left, right) if found := self.chain(left, right):
                return chain_row(found, lambda _, __, node: items_of(self.formula(node)))
            case Logic(op, left, right):
                return Row((self.part(op, left), Letters(f" {op} "), self.part(op, right)))
            case Not(body):
                return Row((Letters("not "), self.part("not", body)))
            case Is(name, word, _, bound):
                shown = Letters(name.name) if bound >= 0 else self.name(name).formula
                return Row((shown, Letters(f" is {word}")))
            case IsGiven(name):
                return Row((self.name(name).formula, Letters(" is given")))

    def part(self, op: str, node: Condition) -> Formula:
        """Print a condition within another; in parentheses where it would be read otherwise without them."""
        shown = self.condition(node)
        looser = isinstance(node, Logic) and (op == "not" or (op == "and" and node.op == "or"))
        return Fence("(", shown, ")") if looser else shown


def chain_row(chain: Chain, shown: Callable[[Compare, Side, Expression], tuple[Formula, ...]]) -> Formula:
    """Return a chain as a formula, each side as `shown` prints it."""
    lower, upper = chain.lower, chain.upper
    return Row((
        *shown(lower.test, *lower.small), relation(lower.sign), *shown(lower.test, *lower.large),
        relation(upper.sign), *shown(upper.test, *upper.large),
    ))  # fmt: skip


_OVER_WORDS = {"max": "max", "min": "min", "pick": "pick", "linear": "read"}


def reversed_condition(node: Condition) -> Condition:
    """Return what holds where a comparison failed: the comparison the other way round."""
    if isinstance(node, Compare):
        return Compare(_REVERSED[node.op], node.left, node.right, node.span)  # type: ignore[arg-type]
    return Not(node, node.span)


def _long(pieces: list[Piece]) -> bool:
    """Tell whether the arguments of an extreme read better under one another: many, or three that are not single."""
    return len(pieces) > 3 or (len(pieces) == 3 and any(piece.strength <= SUM for piece in pieces))


def picked_row(node: Over) -> str:
    """Return the row's name where a pick takes one named row, else ''."""
    where = node.where
    named = node.function == "pick" and isinstance(node.body, Name) and isinstance(where, Is)
    return where.word if named and isinstance(where, Is) and where.bound == node.bound else ""


def of_row(symbol: Formula, row: str) -> Formula:
    """Return a symbol with a row's name in its subscript: d_b,first."""
    if isinstance(symbol, Script):
        below = (*items_of(symbol.below), Letters(", ")) if symbol.below is not None else ()
        return Script(symbol.base, Row((*below, Letters(row))), symbol.above)
    return Script(symbol, Letters(row))


def reads_alike(one: Formula, other: Formula) -> bool:
    """Tell whether two formulas are the same but for spaces: phi M_n as a product and as a symbol."""
    return _flat(one) == _flat(other)


def _flat(formula: Formula) -> list[Formula]:
    if isinstance(formula, Row):
        return [item for inner in formula.items for item in _flat(inner)]
    return [] if isinstance(formula, Space) else [formula]


def has_values(node: Expression) -> bool:
    """Tell whether a formula holds any symbol, so that a substitution says something new."""
    return any(isinstance(n, Name) for n in walk(node))


def _factors(node: Expression) -> list[Expression]:
    if isinstance(node, Binary) and node.op == "*":
        return [*_factors(node.left), node.right]
    return [node]


def fenced(piece: Piece) -> Piece:
    if isinstance(piece.formula, Fence):
        return Piece(piece.formula, ATOM)
    return Piece(Fence("(", piece.formula, ")"), ATOM)


def items_of(formula: Formula) -> tuple[Formula, ...]:
    return formula.items if isinstance(formula, Row) else (formula,)


def grouped_text(text: str) -> str:
    whole, mark, rest = text.partition(".")
    return (f"{int(whole):,}" if whole.isdigit() and len(whole) > 3 else whole) + mark + rest
