"""Rows as blocks: a formula stated once, a table of results, a set made on the sheet.

A calculation as told in, blocks out.
"""

from __future__ import annotations

from calcreport.calculate.model import (
    PlannedGives,
    WorkedCheck,
    WorkedGives,
)
from calcreport.core.expression import Expression, Name, Negate, Number
from calcreport.report.below import arms_below, below
from calcreport.report.digits import number_text
from calcreport.report.display import row_words, show_row
from calcreport.report.governing import rank
from calcreport.report.items import SayFormula, SayMade, SayTable
from calcreport.report.model import (
    Block,
    Column,
    Emphasis,
    Formula,
    Letters,
    Line,
    Operator,
    Paragraph,
    Row,
    SourceLane,
    Space,
    Statement,
    Table,
    TableRow,
    Words,
)
from calcreport.report.notation import (
    relation,
)
from calcreport.report.spaced import is_printed
from calcreport.report.told import Told


class RowBlocks:
    """Composes what is told once for many rows."""

    def __init__(self, told: Told) -> None:
        self.told = told
        self.worked, self.forms, self.shared = told.worked, told.forms, told.shared
        self.values, self.slots = told.values, told.slots

    def formulas(self, item: SayFormula) -> tuple[Block, ...]:
        """Return a formula once, for the table that follows; one statement for each arm taken."""
        found: list[Block] = []
        first = item.arms[0].line
        taken = [first.arms[gives.arm] for gives in item.arms]
        nodes = tuple(node for arm in taken for node in (arm.formula, arm.when) if node is not None)
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
            lane = self.told.source(line.cite.printed, nodes, (), item.number) if place == 0 else SourceLane("")
            number = item.number if place == 0 else 0
            found.append(Statement(number, self.told.anchor(number) if number else "", words, Row(tuple(shown)), lane))
        return tuple(found)

    def table(self, item: SayTable) -> Block:
        """Return the results of every row as a table, a ratio column for each check."""
        each = item.worked
        name = self.worked.plan.sets[each.line.rows].name
        columns = [Column((name,)), *(self.told.column(slot) for slot in item.columns)]
        columns += [Column((check,), "right") for check in item.checks]
        rows = []
        for place in item.rows:
            opened = (*each.open, (each.line.rows, place))
            cells: list[Words] = [(row_words(each.names[place]),)]
            for slot in item.columns:
                cells.append(self.told.cell(slot, self.told.key(slot, opened)))
            # a check may stand in rows of its own inside this one: the worst of them is this row's
            by_name: dict[str, WorkedCheck] = {}
            for check in sorted(below(each.rows[place], WorkedCheck), key=rank):
                by_name[check.line.name] = check
            failed = False
            for check_name in item.checks:
                worst = by_name.get(check_name)
                ratio = self.forms.ratio(worst) if worst else None
                failed = failed or (worst is not None and worst.verdict == "NG")
                text = number_text(ratio) if ratio else worst.verdict if worst else "–"
                cells.append((f"{text} NG" if worst and worst.verdict == "NG" and ratio else text,))
            emphasis: Emphasis = "loud" if failed else "governing" if place == item.governing else ""
            rows.append(TableRow(tuple(cells), emphasis))
        return Table(tuple(columns), tuple(rows), (), item.number, self.told.anchor(item.number))

    def rows_left(self, item: SayTable) -> tuple[Block, ...]:
        """Count the rows that are not told, none of which has a larger ratio of any check."""
        left = len(item.worked.rows) - len(item.rows)
        if not left:
            return ()
        name = self.worked.plan.sets[item.worked.line.rows].name
        rows = f"{left} other rows of {name} have" if left > 1 else f"One other row of {name} has"
        return (Paragraph((f"{rows} no larger ratio of any check.",), "note"),)

    def other_branches(self, item: SayTable) -> tuple[Block, ...]:
        """Name the rows that go by other branches than the one set out in full: their lines are not printed."""
        if item.governing < 0:
            return ()
        each = item.worked
        path = arms_below(each.rows[item.governing])
        others = [each.names[row] for row in item.rows if arms_below(each.rows[row]) != path]
        if not others:
            return ()
        listed = ", ".join(row_words(name) for name in others)
        words = f"By other branches than {row_words(each.names[item.governing])} above: {listed}."
        return (Paragraph((words,), "note"),)

    def made(self, item: SayMade) -> tuple[Block, ...]:
        """Return a set made here: a table of its rows, formulas shown where a cell holds one."""
        worked, plan = item.worked, self.worked.plan
        line = worked.line
        if line.spaced is not None:
            return self.spaced(item, line.spaced)
        simple = all(_plain(cell) for e in line.entries for cell in e.cells)
        found: list[Block] = []
        if simple or any(column.over >= 0 for column in line.columns):
            columns = [Column((plan.sets[line.rows].name,))]
            columns += [self.made_column(column.slot, column.over) for column in line.columns]
            rows = tuple(
                TableRow(((row_words(name),), *self.made_cells(item, row))) for row, name in enumerate(worked.names)
            )
            words: Words = (line.says,) if line.says else ()
            lane = SourceLane(line.cite.printed)
            found.append(Table(tuple(columns), rows, words, item.number, self.told.anchor(item.number), lane))
        for row, name in enumerate(worked.names if not simple else ()):
            for place, column in enumerate(line.columns):
                if column.over < 0:
                    found.append(self.made_line(item, row, name, column.slot, place, not found))
        return tuple(found)

    def spaced(self, item: SayMade, bounds: tuple[Expression, Expression]) -> tuple[Block, ...]:
        """Return `c_i from 0.05 h = 1.2 in. to 3 h = 72 in. in 40 equal steps`, and its table where lines use it."""
        worked, line = item.worked, item.worked.line
        slot, last = line.columns[0].slot, len(worked.names) - 1
        symbol = self.slots[slot].symbol
        items: list[Formula] = [self.shared.symbol(slot)]
        for word, node, row in (("from", bounds[0], 0), ("to", bounds[1], last)):
            opened = (*worked.open, (line.rows, row))
            items.append(Letters(f"  {word}  "))
            if not isinstance(node, Number):
                items += [self.shared.formula(node), relation("=")]
            items.append(self.told.value(slot, self.told.key(slot, opened)))
        lane = self.told.source(line.cite.printed, bounds, worked.open, item.number)
        anchor = self.told.anchor(item.number)
        says: Words = (f"{line.says or symbol.says}, {last + 1} values in equal steps",)
        sentence = Statement(item.number, anchor, says, Row(tuple(items)), lane)
        if not is_printed(self.worked.plan, slot):
            return (sentence,)
        name = self.worked.plan.sets[line.rows].name
        rows = tuple(TableRow(((row_words(one),), *self.made_cells(item, row))) for row, one in enumerate(worked.names))
        return (sentence, Table((Column((name,)), self.told.column(slot)), rows, (), 0, ""))

    def made_column(self, slot: int, over: int) -> Column:
        return self.told.column(slot) if over < 0 else Column((self.shared.symbol(slot), " (factors)"), "left")

    def made_cells(self, item: SayMade, row: int) -> tuple[Words, ...]:
        """Return the cells of a made row; a mapped cell prints as a sum: 1.2 D + 1.6 L."""
        line = item.worked.line
        opened = (*item.worked.open, (line.rows, row))
        found: list[Words] = []
        for column in line.columns:
            if column.over < 0:
                found.append(self.told.cell(column.slot, self.told.key(column.slot, opened)))
                continue
            terms: list[Formula] = []
            for other, name in enumerate(self.values.names[column.over].get((), ())):
                key = self.told.key(column.slot, (*opened, (column.over, other)))
                if self.values.get(column.slot, key):
                    figure = self.forms.figure(column.slot, key)
                    sign = "−" if figure.mantissa < 0 else "+"
                    terms += [Operator(sign, "binary")] if terms else [Operator(sign, "prefix")] if sign == "−" else []
                    terms += [Letters(number_text(figure, unsigned=True)), Space("thin"), show_row(name)]
            found.append((Row(tuple(terms)),) if terms else ("–",))
        return tuple(found)

    def made_line(self, item: SayMade, row: int, name: str, slot: int, place: int, first: bool) -> Block:
        """Return one cell of a made row as a line with its formula."""
        line = item.worked.line
        opened = (*item.worked.open, (line.rows, row))
        node = line.entries[item.worked.entries[row][0]].cells[place]
        assert not isinstance(node, tuple)
        gives = WorkedGives(
            PlannedGives(slot, (), line.cite, None, False, line.span), 0, self.told.key(slot, opened), opened, _never
        )
        shown, substituted = self.told.steps(node, gives)
        number = item.number if first else 0
        symbol = self.slots[slot].symbol
        says: Words = (f"{self.worked.plan.sets[line.rows].name} {name}: {symbol.says}",)
        return Line(
            number,
            self.told.anchor(number) if number else "",
            says,
            self.shared.symbol(slot),
            shown,
            substituted,
            self.told.coherent(gives, node),
            self.told.value(slot, gives.key),
            self.told.source(line.cite.printed, (node,), opened, item.number),
        )


def _plain(cell: Expression | tuple[tuple[str, Expression], ...]) -> bool:
    """Tell whether a cell says all by its value: a mapping, a number of either sign, a name."""
    return isinstance(cell.body if isinstance(cell, Negate) else cell, tuple | Number | Name)


def _never(values: object) -> float:
    raise AssertionError
