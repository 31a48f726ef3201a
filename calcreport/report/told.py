"""What every block of a calculation needs: values as printed, substitutions, source lanes, comparisons.

A script with its forms in, pieces of blocks out.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcreport.calculate.model import (
    Key,
    PlannedBranches,
    PlannedGives,
    Worked,
    WorkedGives,
)
from calcreport.core.expression import Binary, Compare, Condition, Expression, Is, Name, Negate, Number, Over, names
from calcreport.core.units import ONE, Unit, make_unit
from calcreport.report.digits import Figure, number_text
from calcreport.report.display import row_words, show_feet, show_symbol, unit_text
from calcreport.report.forms import CalculationForms, Opened, is_size, side_unit
from calcreport.report.items import Script
from calcreport.report.model import (
    Column,
    Formula,
    Letters,
    Reference,
    Row,
    SourceLane,
    Words,
)
from calcreport.report.notation import (
    Notation,
    chain_row,
    has_values,
    reads_alike,
    relation,
    show_figure,
)
from calcreport.report.substitution import Printed, Substitution
from calcreport.report.taken import rows_taken

_INCH = make_unit((("in", 1),))


@dataclass(slots=True)
class SymbolForms:
    """Formulas with symbols, made once a plan and shared by all its calculations."""

    notation: Notation
    formulas: dict[int, Formula] = field(default_factory=dict)
    symbols: dict[int, Formula] = field(default_factory=dict)
    ratios: dict[int, Binary] = field(default_factory=dict)
    #: the symbols of a formula by its identity, with the formula, so that nothing else takes it
    names: dict[int, tuple[Expression | Condition, tuple[Name, ...]]] = field(default_factory=dict)

    def formula(self, node: Expression) -> Formula:
        """Return a formula with symbols."""
        found = self.formulas.get(id(node))
        if found is None:
            found = self.formulas[id(node)] = self.notation.formula(node)
        return found

    def condition(self, node: Condition) -> Formula:
        """Return a condition with symbols."""
        found = self.formulas.get(id(node))
        if found is None:
            found = self.formulas[id(node)] = self.notation.condition(node)
        return found

    def names_of(self, node: Expression | Condition) -> tuple[Name, ...]:
        """Return every use of a symbol in a formula."""
        found = self.names.get(id(node))
        if found is None:
            found = self.names[id(node)] = (node, tuple(n for n in names(node) if n.slot >= 0))
        return found[1]

    def symbol(self, slot: int) -> Formula:
        """Return a symbol."""
        found = self.symbols.get(slot)
        if found is None:
            found = self.symbols[slot] = show_symbol(self.notation.slots[slot].symbol)
        return found


class Told:
    """One calculation's values as they are told."""

    def __init__(
        self, script: Script, forms: dict[str, CalculationForms], scripts: dict[str, Script], shared: SymbolForms
    ) -> None:
        self.script, self.forms = script, forms[script.worked.calculation.mark]
        self.scripts, self.shared = scripts, shared
        self.worked: Worked = script.worked
        self.values, self.slots = self.worked.values, self.worked.plan.slots
        self.mark = self.worked.calculation.mark

    def value(self, slot: int, key: Key) -> Formula:
        """Return a value as printed, with its unit."""
        value = self.values.get(slot, key)
        if not isinstance(value, float):
            return Letters("none" if value is None else value)
        symbol = self.slots[slot].symbol
        shown = show_figure(self.forms.figure(slot, key), symbol.unit)
        if symbol.inches is None:
            return shown
        return Row((shown, *show_feet(value / _INCH.size, symbol.inches)))

    def cell(self, slot: int, key: Key) -> Words:
        """Return a value as a table cell prints it: the unit stands in the heading."""
        value = self.values.get(slot, key)
        if not isinstance(value, float):
            return ("–" if value is None else value,)
        figure = self.forms.figure(slot, key)
        return (show_figure(figure, None),) if figure.exponent else (number_text(figure),)

    def key(self, slot: int, opened: Opened) -> Key:
        """Return a slot's key in open rows."""
        rows = dict(opened)
        return tuple(rows[index] for index in self.values.sets[slot])

    def substitution(self, node: Expression, opened: Opened, result: Unit | None) -> Formula:
        """Return a formula with the printed figures of open rows."""
        for index, row in opened:
            self.values.open[index] = row
        row_names, factor, compiled = self.values.row_names, self.forms.factor, self.worked.compiled
        printed = Printed(self.values, self.open_figure, row_names, factor, compiled, self.taken)
        return Substitution(self.slots, printed, self.forms.family(node, result)).formula(node)

    def taken(self, node: Over) -> tuple[int, ...]:
        """Return the rows of a set that a formula takes its value from, in the rows open in the values."""
        return rows_taken(node, self.values, self.worked.compiled, self.worked.tested)

    def open_figure(self, slot: int) -> Figure:
        """Return the figure of a slot in the rows open in the values."""
        return self.forms.figure(slot, self.values.key(slot))

    def anchor(self, number: int) -> str:
        """Return the anchor of a line."""
        return f"{self.mark}.{number}"

    def source(self, cite: str, nodes: tuple[Expression | Condition, ...], opened: Opened, own: int) -> SourceLane:
        """Return the source lane: citation, then the lines the values of formulas and conditions come from."""
        numbers: dict[int, None] = {}
        for node in nodes:
            for name in self.shared.names_of(node):
                numbers.update(dict.fromkeys(self.origins(name.slot, opened)))
        numbers.pop(own, None)
        references = tuple(Reference(str(n), self.anchor(n)) for n in sorted(numbers))
        return SourceLane(cite, references)

    def origins(self, slot: int, opened: Opened) -> list[int]:
        """Return the line numbers a slot's values come from; rows not open count all."""
        rows = dict(opened)
        owns = self.values.sets[slot]
        if all(index in rows for index in owns):
            number = self.script.line_of.get((slot, tuple(rows[index] for index in owns)))
            return [number] if number else []
        return [n for (s, _), n in self.script.line_of.items() if s == slot]

    def column(self, slot: int) -> Column:
        """Return a table column headed by symbol and unit."""
        symbol = self.slots[slot].symbol
        unit = unit_text(symbol.unit) if symbol.unit is not None else ""
        words: Words = (self.shared.symbol(slot), f"  {unit}" if unit else "")
        return Column(words, "left" if symbol.unit is None else "right")

    def because(self, line: PlannedGives | PlannedBranches, arm: int, opened: Opened) -> Formula | None:
        """Return the comparison that chose an arm, with its numbers."""
        if len(line.arms) == 1:
            return None
        tests = self.forms.because(line, arm)
        if not tests:
            return self.word_because(line, arm, opened)
        return self.all_compared(tests, opened)

    def word_because(self, line: PlannedGives | PlannedBranches, arm: int, opened: Opened) -> Formula | None:
        """Say which word chose an arm."""
        whens = [a.when for a in line.arms if a.when is not None]
        when = line.arms[arm].when
        if when is not None:
            return self.shared.condition(when)
        first = whens[0] if whens else None
        if isinstance(first, Is) and first.bound < 0:
            value = self.values.get(first.name.slot, self.key(first.name.slot, opened))
            return Row((self.shared.symbol(first.name.slot), Letters(f" is {value}")))
        return None

    def compared(self, test: Compare, opened: Opened) -> Formula:
        """Return `eps_t = 0.01085 >= eps_ty + 0.003 = 0.00507`: each side with its number."""
        left = self.sided(test, test.left, opened, "left")
        right = self.sided(test, test.right, opened, "right")
        return Row((*left, relation(test.op), *right))

    def all_compared(self, tests: tuple[Compare, ...], opened: Opened) -> Formula:
        """Return comparisons with their numbers, two of one thing as a chain: 0.75 <= lambda = 0.85 <= 1."""
        items: list[Formula] = []
        waiting = list(tests)
        while waiting:
            test = waiting.pop(0)
            items += [Letters(" and ")] if items else []
            chain = self.shared.notation.chain(test, waiting[0]) if waiting else None
            if chain is None:
                items.append(self.compared(test, opened))
            else:
                del waiting[0]
                items.append(chain_row(chain, lambda test, side, node: self.sided(test, node, opened, side)))
        return Row(tuple(items))

    def sided(self, test: Compare, node: Expression, opened: Opened, side: str) -> tuple[Formula, ...]:
        """Return one side of a comparison with its number."""
        shown = self.shared.formula(node)
        figure = self.forms.side(test, opened, side)
        if isinstance(node, Number) or figure is None:
            return (shown,)
        unit = side_unit(test, self.forms)
        return shown, relation("="), show_figure(figure, None if unit is ONE else unit, unsigned=is_size(node))

    def numbers(self, test: Compare, opened: Opened) -> Formula | None:
        """Return both sides of a comparison as numbers in one unit."""
        left, right = self.forms.side(test, opened, "left"), self.forms.side(test, opened, "right")
        if left is None or right is None:
            return None
        unit = side_unit(test, self.forms)
        sizes = (
            show_figure(left, None, unsigned=is_size(test.left)),
            show_figure(right, unit, unsigned=is_size(test.right)),
        )
        return Row((sizes[0], relation(test.op), sizes[1]))

    def steps(self, formula: Expression, gives: WorkedGives) -> tuple[Formula | None, Formula | None]:
        """Return formula and substitution, a step that repeats its neighbour dropped."""
        unit = self.slots[gives.line.slot].symbol.unit
        if isinstance(formula, Number) or (isinstance(formula, Negate) and isinstance(formula.body, Number)):
            return None, None
        shown: Formula | None = self.shared.formula(formula)
        assert shown is not None
        same = reads_alike(shown, self.shared.symbol(gives.line.slot))
        if isinstance(formula, Name) or not has_values(formula) or self.forms.copies(gives):
            return None if same else shown, None
        shown = None if same else shown
        substituted = self.substitution(formula, gives.open, unit)
        if substituted == shown:
            return shown, None
        if isinstance(substituted, Letters) and self.coherent(gives, formula) is None:
            return shown, None
        return shown, substituted

    def row_taken(self, gives: WorkedGives, formula: Expression) -> str:
        """Return 'combination 2' where a line takes the value of one row of a set; '' otherwise."""
        if not (isinstance(formula, Over) and isinstance(formula.body, Name)) or formula.function == "sum":
            return ""
        wanted, slot = self.values.get(gives.line.slot, gives.key), formula.body.slot
        for index, row in gives.open:
            self.values.open[index] = row
        names = self.values.row_names(formula.bound)
        if len(names) < 2:
            return ""
        fits = self.worked.tested(formula.where) if formula.where is not None else None
        for row, name in enumerate(names):
            self.values.open[formula.bound] = row
            if (fits is None or fits(self.values)) and self.values.get(slot, self.values.key(slot)) == wanted:
                return f"{formula.rows} {row_words(name)}"
        return ""

    def coherent(self, gives: WorkedGives, formula: Expression) -> Formula | None:
        """Return the result in the units of its substitution, where the declared unit differs."""
        figure = self.forms.coherent(gives)
        unit = self.slots[gives.line.slot].symbol.unit
        if figure is None or unit is None:
            return None
        return show_figure(figure, self.forms.family(formula, unit).unit(unit.dimension))
