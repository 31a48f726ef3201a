"""One calculation's script as blocks: given values, lines with formula and numbers, tables, checks, figures.

`Script` and forms in, blocks out. Wording is the program's own; clauses stand in the source lane.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcreport.calculate.model import (
    GivenPairs,
    GivenRows,
    GivenValue,
    Key,
    LinkedValue,
    PlannedBranches,
    PlannedGiven,
    PlannedGives,
    ValueOrigin,
    Worked,
    WorkedGives,
)
from calcreport.core.expression import Binary, Compare, Condition, Expression, Is, Name, Number, names
from calcreport.core.quantity import Amount
from calcreport.core.units import NONE, ONE, Unit
from calcreport.report.digits import Figure, number_text
from calcreport.report.display import show_symbol, unit_text
from calcreport.report.drawings import draw
from calcreport.report.forms import CalculationForms, Opened, is_size, link_place, side_unit
from calcreport.report.model import (
    Block,
    CheckLine,
    Column,
    FigureBlock,
    Formula,
    GivenRow,
    Givens,
    Heading,
    Letters,
    Line,
    Paragraph,
    Reference,
    ResultBox,
    Row,
    SourceLane,
    Statement,
    Strong,
    Table,
    TableRow,
    Words,
)
from calcreport.report.notation import (
    Notation,
    Printed,
    Substitution,
    has_values,
    relation,
    show_figure,
)
from calcreport.report.script import (
    Item,
    SayBranch,
    SayCheck,
    SayFigure,
    SayFormula,
    SayGivens,
    SayHeading,
    SayLine,
    SayMade,
    SayRequire,
    SayRows,
    SayStop,
    SayTable,
    SayText,
    Script,
    checks_below,
)

_TEXT_KINDS = {"note": "note", "caution": "caution", "assume": "assumption"}


@dataclass(slots=True)
class SymbolForms:
    """Formulas with symbols, made once a plan and shared by all its calculations."""

    notation: Notation
    formulas: dict[int, Formula] = field(default_factory=dict)
    symbols: dict[int, Formula] = field(default_factory=dict)
    ratios: dict[int, Binary] = field(default_factory=dict)

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

    def symbol(self, slot: int) -> Formula:
        """Return a symbol."""
        found = self.symbols.get(slot)
        if found is None:
            found = self.symbols[slot] = show_symbol(self.notation.slots[slot].symbol)
        return found


class Composer:
    """Composes one calculation."""

    def __init__(self, script: Script, forms: dict[str, CalculationForms], scripts: dict[str, Script], shared: SymbolForms) -> None:
        self.script, self.forms, self.all_forms = script, forms[script.worked.calculation.mark], forms
        self.scripts, self.shared = scripts, shared
        self.worked: Worked = script.worked
        self.values, self.slots = self.worked.values, self.worked.plan.slots
        self.mark = self.worked.calculation.mark
        self.given = {value.given.name: value for value in self.worked.calculation.given}

    def blocks(self) -> tuple[Block, ...]:
        """Return all blocks in order."""
        found: list[Block] = [self.opening()]
        for item in self.script.items:
            found.extend(self.item(item))
        return tuple(found)

    def opening(self) -> Block:
        """Say what is decided here and what is not."""
        covers, excludes = self.worked.plan.covers, self.worked.plan.template.excludes
        words: list[str | Strong] = []
        if covers:
            words += [Strong("Decided here: "), ", ".join(covers) + ". "]
        if excludes:
            words += [Strong("Not here: "), ", ".join(excludes) + "."]
        return Paragraph(tuple(words), "note")

    def item(self, item: Item) -> tuple[Block, ...]:
        """Return the blocks of one item."""
        match item:
            case SayGivens():
                return (Givens(tuple(self.given_row(number, given) for number, given in item.rows)),)
            case SayRows():
                return (self.given_table(item),)
            case SayText():
                return self.text(item)
            case SayHeading(text, level):
                return (Heading(text, level),)
            case SayLine():
                return (self.line(item),)
            case SayFormula():
                return self.formulas(item)
            case SayMade():
                return self.made(item)
            case SayTable():
                return (self.table(item),)
            case SayBranch():
                return self.branch(item)
            case SayCheck():
                return (self.check(item),)
            case SayRequire():
                return (self.require(item),)
            case SayFigure():
                figure = draw(item.worked, self.forms)
                return (FigureBlock(figure),) if figure is not None else ()
            case SayStop():
                return self.stopped(item)

    # -------------------------------------------------------- values

    def value(self, slot: int, key: Key) -> Formula:
        """Return a value as printed, with its unit."""
        value = self.values.get(slot, key)
        if not isinstance(value, float):
            return Letters("none" if value is None else value)
        symbol = self.slots[slot].symbol
        return show_figure(self.forms.figure(slot, key), symbol.unit)

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
        printed = Printed(self.values, self.open_figure, self.values.row_names)
        return Substitution(self.slots, printed, self.forms.family(node, result)).formula(node)

    def open_figure(self, slot: int) -> Figure:
        """Return the figure of a slot in the rows open in the values."""
        return self.forms.figure(slot, self.values.key(slot))

    def anchor(self, number: int) -> str:
        """Return the anchor of a line."""
        return f"{self.mark}.{number}"

    def source(self, cite: str, node: Expression | Condition | None, opened: Opened, own: int) -> SourceLane:
        """Return the source lane: citation, then the lines the values of a formula come from."""
        numbers: dict[int, None] = {}
        for name in _names(node):
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

    # -------------------------------------------------------- given values

    def given_row(self, number: int, planned: PlannedGiven) -> GivenRow:
        """Return the row of one given value."""
        value = self.given[planned.given.name]
        assert isinstance(value, GivenValue)
        shown = self.value(planned.slot, ())
        if planned.outputs:
            shown = self.with_outputs(shown, planned, ())
        if value.origin.kind == "none":
            worth = self.values.get(planned.slot)
            shown = Letters("none") if worth is None else Row((Letters("none ("), shown, Letters(")")))
        shown = self.as_typed(shown, value, planned.slot)
        symbol = self.slots[planned.slot].symbol
        return GivenRow(number, self.anchor(number), show_symbol(symbol), (planned.given.says,), shown,
                        self.origin(value.origin, value.value))  # fmt: skip

    def as_typed(self, shown: Formula, value: GivenValue, slot: int) -> Formula:
        """Add the typed spelling where it is in another unit than the one used."""
        handed, unit = value.value, self.slots[slot].symbol.unit
        if not isinstance(handed, Amount) or unit is None or value.origin.kind == "none":
            return shown
        feet = "'" in handed.text or '"' in handed.text or len(handed.text.split()) > 2
        if handed.unit.scale == unit.scale and not feet:
            return shown
        return Row((shown, Letters(f"  ({handed.text})")))

    def with_outputs(self, shown: Formula, planned: PlannedGiven, key: Key) -> Formula:
        """Add what a callout gives: its area, diameter, count."""
        items: list[Formula] = [shown]
        for place, slot in enumerate(planned.outputs):
            items += [Letters(",  " if place else ":  "), self.shared.symbol(slot), relation("="), self.value(slot, key)]
        return Row(tuple(items))

    def origin(self, origin: ValueOrigin, handed: object) -> Words:
        """Say where a given value came from."""
        if isinstance(handed, LinkedValue):
            script = self.scripts[handed.mark]
            place = link_place(handed, script.worked)
            number = script.line_of.get(place)
            target = f"{handed.mark}.{number}"
            return (Reference(f"{handed.mark} line {number}", target),)
        match origin.kind:
            case "material":
                return (f"material {origin.words}",)
            case "source":
                return (origin.words,)
            case "schedule":
                return (f"schedule {origin.words}",)
            case _:
                return ("project file",)

    def given_table(self, item: SayRows) -> Block:
        """Return a set of given rows, or a value over pairs, as a table."""
        planned, value = item.given, self.given[item.given.given.name]
        if isinstance(value, GivenPairs):
            return self.pair_table(item, planned)
        assert isinstance(value, GivenRows)
        columns = [Column((planned.given.name,))]
        slots: list[int] = []
        for column in planned.columns:
            slots += [column.slot, *column.outputs]
        columns += [self.column(slot) for slot in slots]
        rows = tuple(
            TableRow((((name,),) + tuple(self.cell(slot, (row,)) for slot in slots)))
            for row, name in enumerate(value.names)
        )
        words = (planned.given.says or planned.given.name,)
        return Table(tuple(columns), rows, words, item.number, self.anchor(item.number), SourceLane("project file"))

    def pair_table(self, item: SayRows, planned: PlannedGiven) -> Block:
        """Return a value over pairs of rows: one set down, one across."""
        names = [self.values.names[index].get((), ()) for index in planned.over]
        sets = [self.worked.plan.sets[index].name for index in planned.over]
        if len(names) != 2:
            cells = tuple(TableRow(((name,), self.cell(planned.slot, (row,)))) for row, name in enumerate(names[0]))
            columns: tuple[Column, ...] = (Column((sets[0],)), self.column(planned.slot))
        else:
            columns = (Column((f"{sets[0]} / {sets[1]}",)), *(Column((name,), "right") for name in names[1]))
            cells = tuple(
                TableRow(((name,), *(self.cell(planned.slot, (row, other)) for other in range(len(names[1])))))
                for row, name in enumerate(names[0])
            )
        symbol = self.slots[planned.slot].symbol
        unit = f", {unit_text(symbol.unit)}" if symbol.unit and symbol.unit.dimension != NONE else ""
        words: Words = (self.shared.symbol(planned.slot), f"  {planned.given.says}{unit}")
        return Table(columns, cells, words, item.number, self.anchor(item.number), SourceLane("project file"))

    def column(self, slot: int) -> Column:
        """Return a table column headed by symbol and unit."""
        symbol = self.slots[slot].symbol
        unit = unit_text(symbol.unit) if symbol.unit is not None else ""
        words: Words = (self.shared.symbol(slot), f"  {unit}" if unit else "")
        return Column(words, "left" if symbol.unit is None else "right")

    # -------------------------------------------------------- lines

    def line(self, item: SayLine) -> Block:
        """Return a line in full."""
        gives = item.worked
        line, formula = gives.line, gives.line.arms[gives.arm].formula
        slot = self.slots[line.slot]
        result = self.value(line.slot, gives.key)
        because = self.because(line, gives.arm, gives.open)
        lane = self.source(line.cite.printed, formula, gives.open, item.number)
        if slot.symbol.kind == "word":
            return Line(item.number, self.anchor(item.number), (slot.symbol.says,), self.shared.symbol(line.slot), None,
                        None, None, result, lane, because)  # fmt: skip
        shown, substituted = self.steps(formula, gives)
        coherent = self.coherent(gives, formula)
        return Line(item.number, self.anchor(item.number), (slot.symbol.says,), self.shared.symbol(line.slot), shown,
                    substituted, coherent, result, lane, because)  # fmt: skip

    def steps(self, formula: Expression, gives: WorkedGives) -> tuple[Formula | None, Formula | None]:
        """Return formula and substitution, a step that repeats its neighbour dropped."""
        unit = self.slots[gives.line.slot].symbol.unit
        if isinstance(formula, Number):
            return None, None
        shown = self.shared.formula(formula)
        if isinstance(formula, Name) or not has_values(formula):
            return shown, None
        substituted = self.substitution(formula, gives.open, unit)
        if substituted == shown:
            return shown, None
        if isinstance(substituted, Letters) and self.coherent(gives, formula) is None:
            return shown, None
        return shown, substituted

    def coherent(self, gives: WorkedGives, formula: Expression) -> Formula | None:
        """Return the result in the units of its substitution, where the declared unit differs."""
        figure = self.forms.coherent(gives)
        unit = self.slots[gives.line.slot].symbol.unit
        if figure is None or unit is None:
            return None
        return show_figure(figure, self.forms.family(formula, unit).unit(unit.dimension))

    def because(self, line: PlannedGives | PlannedBranches, arm: int, opened: Opened) -> Formula | None:
        """Return the comparison that chose an arm, with its numbers."""
        if len(line.arms) == 1:
            return None
        tests = self.forms.because(line, arm)
        if not tests:
            return self.word_because(line, arm)
        items: list[Formula] = []
        for place, test in enumerate(tests):
            if place:
                items.append(Letters(" and "))
            items.append(self.compared(test, opened))
        return Row(tuple(items))

    def word_because(self, line: PlannedGives | PlannedBranches, arm: int) -> Formula | None:
        """Say which word chose an arm."""
        whens = [a.when for a in line.arms if a.when is not None]
        when = line.arms[arm].when
        if when is not None:
            return self.shared.condition(when)
        first = whens[0] if whens else None
        if isinstance(first, Is) and first.bound < 0:
            value = self.values.get(first.name.slot, ())
            return Row((self.shared.symbol(first.name.slot), Letters(f" is {value}")))
        return None

    def compared(self, test: Compare, opened: Opened) -> Formula:
        """Return `eps_t = 0.01085 >= eps_ty + 0.003 = 0.00507`: each side with its number."""
        left = self.sided(test, test.left, opened, "left")
        right = self.sided(test, test.right, opened, "right")
        return Row((*left, relation(test.op), *right))

    def sided(self, test: Compare, node: Expression, opened: Opened, side: str) -> tuple[Formula, ...]:
        """Return one side of a comparison with its number."""
        shown = self.shared.formula(node)
        figure = self.forms.side(test, opened, side)
        if isinstance(node, Number) or figure is None:
            return (shown,)
        unit = side_unit(test, self.forms)
        return shown, relation("="), show_figure(figure, None if unit is ONE else unit, unsigned=is_size(node))

    def formulas(self, item: SayFormula) -> tuple[Block, ...]:
        """Return a formula once, for the table that follows; one statement for each arm taken."""
        found: list[Block] = []
        for place, gives in enumerate(item.arms):
            line = gives.line
            formula = line.arms[gives.arm].formula
            symbol = self.slots[line.slot].symbol
            shown: list[Formula] = [self.shared.symbol(line.slot), relation("="), self.shared.formula(formula)]
            when = line.arms[gives.arm].when
            words: Words = (symbol.says,) if place == 0 else ()
            if when is not None:
                words = (*words, " where " if place == 0 else "where ", self.shared.condition(when))
            elif place:
                words = ("otherwise",)
            lane = self.source(line.cite.printed, formula, (), item.number) if place == 0 else SourceLane("")
            number = item.number if place == 0 else 0
            found.append(Statement(number, self.anchor(number) if number else "", words, Row(tuple(shown)), lane))
        return tuple(found)

    def table(self, item: SayTable) -> Block:
        """Return the results of every row as a table, a ratio column for each check."""
        each = item.worked
        name = self.worked.plan.sets[each.line.rows].name
        columns = [Column((name,)), *(self.column(slot) for slot in item.columns)]
        columns += [Column((check,), "right") for check in item.checks]
        rows = []
        for place, row_name in enumerate(each.names):
            opened = (*each.open, (each.line.rows, place))
            cells: list[Words] = [(row_name,)]
            for slot in item.columns:
                cells.append(self.cell(slot, self.key(slot, opened)))
            by_name = {check.line.name: check for check in checks_below(each.rows[place])}
            failed = False
            for check_name in item.checks:
                check = by_name.get(check_name)
                ratio = self.forms.ratio(check) if check else None
                failed = failed or (check is not None and check.verdict == "NG")
                text = number_text(ratio) if ratio else check.verdict if check else "–"
                cells.append((f"{text} NG" if check and check.verdict == "NG" and ratio else text,))
            emphasis = "loud" if failed else "governing" if place == item.governing else ""
            rows.append(TableRow(tuple(cells), emphasis))  # type: ignore[arg-type]
        return Table(tuple(columns), tuple(rows), (), item.number, self.anchor(item.number))

    def made(self, item: SayMade) -> tuple[Block, ...]:
        """Return a set made here: a table of its rows, formulas shown where a cell holds one."""
        worked, plan = item.worked, self.worked.plan
        line = worked.line
        simple = all(isinstance(cell, tuple | Number | Name) for e in line.entries for cell in e.cells)
        columns = [Column((plan.sets[line.rows].name,))]
        if simple:
            columns += [self.made_column(column.slot, column.over) for column in line.columns]
            rows = tuple(TableRow(((name,), *self.made_cells(item, row))) for row, name in enumerate(worked.names))
            words: Words = (line.says,) if line.says else ()
            return (Table(tuple(columns), rows, words, item.number, self.anchor(item.number), SourceLane(line.cite.printed)),)
        found: list[Block] = []
        for row, name in enumerate(worked.names):
            for place, column in enumerate(line.columns):
                found.append(self.made_line(item, row, name, column.slot, place, not found))
        return tuple(found)

    def made_column(self, slot: int, over: int) -> Column:
        return self.column(slot) if over < 0 else Column((self.shared.symbol(slot), " (factors)"), "left")

    def made_cells(self, item: SayMade, row: int) -> tuple[Words, ...]:
        """Return the cells of a made row; a mapped cell prints as a sum: 1.2 D + 1.6 L."""
        line = item.worked.line
        opened = (*item.worked.open, (line.rows, row))
        found: list[Words] = []
        for column in line.columns:
            if column.over < 0:
                found.append(self.cell(column.slot, self.key(column.slot, opened)))
                continue
            terms: list[str] = []
            for other, name in enumerate(self.values.names[column.over].get((), ())):
                key = self.key(column.slot, (*opened, (column.over, other)))
                if self.values.get(column.slot, key):
                    figure = self.forms.figure(column.slot, key)
                    terms.append(f"{number_text(figure)} {name}")
            found.append((" + ".join(terms).replace("+ −", "− "),))
        return tuple(found)

    def made_line(self, item: SayMade, row: int, name: str, slot: int, place: int, first: bool) -> Block:
        """Return one cell of a made row as a line with its formula."""
        line = item.worked.line
        opened = (*item.worked.open, (line.rows, row))
        node = line.entries[item.worked.entries[row][0]].cells[place]
        assert not isinstance(node, tuple)
        gives = WorkedGives(PlannedGives(slot, (), line.cite, None, False, line.span), 0, self.key(slot, opened), opened,
                            _never)  # fmt: skip
        shown, substituted = self.steps(node, gives)
        number = item.number if first else 0
        symbol = self.slots[slot].symbol
        says: Words = (f"{self.worked.plan.sets[line.rows].name} {name}: {symbol.says}",)
        return Line(number, self.anchor(number) if number else "", says, self.shared.symbol(slot), shown, substituted,
                    self.coherent(gives, node), self.value(slot, gives.key),
                    self.source(line.cite.printed, node, opened, item.number))  # fmt: skip

    # -------------------------------------------------------- judging

    def branch(self, item: SayBranch) -> tuple[Block, ...]:
        """Say which comparison chose a block."""
        shown = self.because(item.worked.line, item.worked.arm, item.worked.open)
        return (Paragraph((shown, ":"), "plain"),) if shown is not None else ()

    def check(self, item: SayCheck) -> Block:
        """Return a check in full."""
        check = item.worked
        opened, by = check.open, check.by
        formula: Formula
        substituted: Formula | None = None
        if by is None:
            formula = self.shared.condition(check.line.holds)
        elif check.ratio is None or check.kind == "condition":
            formula = self.shared.condition(by.test)
            substituted = self.numbers(by.test, opened)
        elif check.kind == "ratio":
            formula = self.shared.formula(by.test.left)
        else:
            formula, substituted = self.ratio_steps(by.test, opened)
        figure = self.forms.ratio(check)
        reason: Words = (check.reason,) if check.reason else ()
        return CheckLine(item.number, self.anchor(item.number), check.line.name, formula, substituted,
                         number_text(figure) if figure else "", check.verdict, reason,
                         self.source(check.line.cite.printed, check.line.holds, opened, item.number))  # fmt: skip

    def ratio_steps(self, test: Compare, opened: Opened) -> tuple[Formula, Formula | None]:
        """Return demand over capacity with symbols and with numbers."""
        demand, capacity = (test.left, test.right) if test.op in ("<", "<=") else (test.right, test.left)
        node = self.shared.ratios.setdefault(id(test), Binary("/", demand, capacity, test.span))
        return self.shared.formula(node), self.substitution(node, opened, ONE)

    def numbers(self, test: Compare, opened: Opened) -> Formula | None:
        """Return both sides of a comparison as numbers in one unit."""
        left, right = self.forms.side(test, opened, "left"), self.forms.side(test, opened, "right")
        if left is None or right is None:
            return None
        unit = side_unit(test, self.forms)
        sizes = show_figure(left, None, unsigned=is_size(test.left)), show_figure(right, unit, unsigned=is_size(test.right))
        return Row((sizes[0], relation(test.op), sizes[1]))

    def require(self, item: SayRequire) -> Block:
        """Return a requirement that was met."""
        worked = item.worked
        condition = worked.line.condition
        shown = self.shared.condition(condition)
        if len(worked.sides) == 1 and isinstance(condition, Compare):
            shown = self.compared(worked.sides[0].test, worked.open)
        lane = self.source(worked.line.cite.printed, condition, worked.open, item.number)
        return Statement(item.number, self.anchor(item.number), ("Required",), shown, lane)

    def stopped(self, item: SayStop) -> tuple[Block, ...]:
        """Say where the calculation stopped and what that leaves undone."""
        words: Words = (Strong("Stopped: "), item.stop.words, ". Checks below this line are not evaluated.")
        blocks: list[Block] = [Paragraph(words, "caution")]
        for check in self.worked.checks:
            if check.verdict == "not evaluated":
                blocks.append(CheckLine(item.number, "", check.line.name, self.shared.condition(check.line.holds), None, "",
                                        "not evaluated", (), SourceLane(check.line.cite.printed)))  # fmt: skip
        return tuple(blocks)

    # -------------------------------------------------------- words

    def text(self, item: SayText) -> tuple[Block, ...]:
        """Return words with their values."""
        line = item.worked.line
        words = self.pieces(line.pieces, item.worked.open)
        if line.kind == "heading":
            return (Heading("".join(str(w) for w in words if isinstance(w, str)), 2),)
        cite = line.cite.printed if line.cite else ""
        if line.kind == "use":
            return (ResultBox(0, "", words, SourceLane(cite)),)
        if cite:
            words = (*words, f"  [{cite}]")
        return (Paragraph(words, _TEXT_KINDS[line.kind]),)  # type: ignore[arg-type]

    def pieces(self, pieces: tuple[str | int, ...], opened: Opened) -> Words:
        """Return words in which each slot shows its value."""
        return tuple(p if isinstance(p, str) else self.value(p, self.key(p, opened)) for p in pieces)


def _never(values: object) -> float:
    raise AssertionError


def _names(node: Expression | Condition | None) -> tuple[Name, ...]:
    return tuple(n for n in names(node) if n.slot >= 0) if node is not None else ()

