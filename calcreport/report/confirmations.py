"""Which lines must confirm which printed figures: every worked line, comparison and ratio of a project.

`WorkedProject` in, solved `CalculationForms` out by mark.
Kept in one though long: one walk over all worked lines.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import TypeGuard

from calcreport.calculate.model import (
    Comparison,
    GivenRows,
    Key,
    LinkedValue,
    PlannedBranches,
    PlannedGives,
    Values,
    Work,
    Worked,
    WorkedBranches,
    WorkedCheck,
    WorkedEach,
    WorkedGives,
    WorkedLine,
    WorkedMethod,
    WorkedPart,
    WorkedProject,
    WorkedRequire,
    WorkedUnknown,
)
from calcreport.core.expression import Call, Compare, Expression, Name, Node, Over, children, walk
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.units import NONE, ONE, Unit
from calcreport.report.digits import Digits, Id, Order, Sum, make_coarse_figure, make_figure
from calcreport.report.forms import (
    CalculationForms,
    Opened,
    PlanForms,
    equation_unit,
    fixed_figure,
    holds,
    is_size,
    link_place,
    linked_values,
    proof_unit,
    ratio_figure,
    reversed_sign,
    side_unit,
)
from calcreport.report.governing import telling_rows
from calcreport.report.notation import has_values
from calcreport.report.spaced import is_printed
from calcreport.report.taken import rows_taken


def find_forms(project: WorkedProject, kept: Fresh = FRESH) -> dict[str, CalculationForms]:
    """Return the forms of every calculation by mark, solved over all that links bind together."""
    shared: dict[int, PlanForms] = {}
    forms: dict[str, CalculationForms] = {}
    for group in linked_groups(project):
        inputs = tuple(worked.values for worked in group)
        forms |= kept.of("forms", group[0].calculation.mark, inputs, partial(_solved, group, shared))
    return forms


def linked_groups(project: WorkedProject) -> tuple[tuple[Worked, ...], ...]:
    """Return the calculations in groups that no link leaves, each in the order of work."""
    group_of: dict[str, list[Worked]] = {}
    for place in project.order:
        worked = project.calculations[place]
        joined = [worked]
        rows = [value.linked for value in worked.calculation.given if isinstance(value, GivenRows)]
        for mark in {link.mark for link in (*linked_values(worked).values(), *rows) if link is not None}:
            other = group_of[mark]
            if other is not joined:
                other += joined
                joined = other
            for one in joined:
                group_of[one.calculation.mark] = joined
        group_of[worked.calculation.mark] = joined
    found = {id(group): group for group in group_of.values()}
    rank = {id(project.calculations[place]): number for number, place in enumerate(project.order)}
    return tuple(tuple(sorted(group, key=lambda one: rank[id(one)])) for group in found.values())


def _solved(group: tuple[Worked, ...], shared: dict[int, PlanForms]) -> dict[str, CalculationForms]:
    digits = Digits()
    forms: dict[str, CalculationForms] = {}
    for worked in group:
        plan = shared.setdefault(id(worked.plan), PlanForms())
        one = CalculationForms(worked, digits, _copied(worked.values), plan)
        forms[one.mark] = one
        _given_figures(one, forms)
        _Lines(one).lines(worked.lines)
    digits.solve()
    return forms


def _copied(values: Values) -> Values:
    """Return values to write printed figures into; rows are chosen by the values themselves."""
    return Values(
        list(values.plain),
        [dict(rows) for rows in values.rows],
        values.open,
        values.names,
        values.sets,
        values.outer,
        values.given,
        values.worked,
        values.exact,
        judge=values,
    )


# ---------------------------------------------------------------- given values


def _given_figures(forms: CalculationForms, others: dict[str, CalculationForms]) -> None:
    """Add a figure for every value that was handed over."""
    worked = forms.worked
    linked = linked_values(worked)
    for (slot, key), exact in worked.values.given.items():
        symbol = worked.plan.slots[slot].symbol
        unit = symbol.unit or ONE
        number = exact / unit.scale
        least = symbol.places or 0
        places = _decimals(number.denominator)
        name = forms.id(slot, key)
        link = linked.get((slot, key))
        if link is not None:
            _link_figure(forms, others, link, name, float(number), unit, least)
            continue
        forms.digits.add(name, make_figure(float(number), unit.size, least=least, exact_places=places))


def _decimals(denominator: int) -> int | None:
    """Return the decimals of a fraction that ends within six, else None."""
    for places in range(7):
        if 10**places % denominator == 0:
            return places
    return None


def _link_figure(
    forms: CalculationForms,
    others: dict[str, CalculationForms],
    link: LinkedValue,
    name: Id,
    number: float,
    unit: Unit,
    least: int,
) -> None:
    """Let a linked value share the form of the line it comes from, or confirm its conversion."""
    source = others[link.mark]
    slot, key = link_place(link, source.worked)
    other = source.id(slot, key)
    source_unit = source.worked.plan.slots[slot].symbol.unit or ONE
    if source_unit.scale == unit.scale:
        forms.digits.join(name, other)
        return
    forms.digits.add(name, make_figure(number, unit.size, least=least))
    forms.digits.need(Sum(lambda printed: printed(other), (other,), name))


# ---------------------------------------------------------------- lines


class _Lines:
    """Adds the figures and sums of worked lines."""

    def __init__(self, forms: CalculationForms) -> None:
        #: what is worked stands on no sheet: it has figures, and nothing in print must confirm them
        self.unseen = False
        self.forms, self.digits = forms, forms.digits
        self.values, self.slots = forms.worked.values, forms.worked.plan.slots

    def lines(self, lines: tuple[WorkedLine, ...]) -> None:
        for line in lines:
            match line:
                case WorkedGives():
                    self.gives(line)
                case WorkedPart():
                    self.lines(line.lines)
                case WorkedBranches():
                    self.because(line.line, line.arm, line.open)
                    self.lines(line.lines)
                case WorkedEach():
                    before = self.unseen
                    told = telling_rows(line)
                    for place, row in enumerate(line.rows):
                        self.unseen = before or line.line.show == "figure" or place not in told
                        self.lines(row)
                    self.unseen = before
                case WorkedUnknown():
                    self.unknown(line)
                case WorkedMethod():
                    self.method(line)
                case WorkedCheck():
                    self.check(line)
                case WorkedRequire():
                    for side in () if self.unseen else line.sides:
                        if holds(side.test, side.left, side.right):
                            self.comparison(side.test, line.open, side)
                case _:
                    self.made(line)

    def unknown(self, line: WorkedUnknown) -> None:
        """Add the root, its lines, and both sides of the equation at the root."""
        slot, key = line.line.slot, line.key
        symbol = self.slots[slot].symbol
        if line.closed is not None:
            self.gives(line.closed)
        else:
            unit = symbol.unit or ONE
            number = self.values.number(slot, key) / unit.size
            self.digits.add(self.forms.id(slot, key), make_figure(number, unit.size, least=symbol.places or 0))
        self.lines(line.lines)
        if self.unseen:
            return
        shown = equation_unit(line.line, self.forms)
        # the two sides are one number, and print as one
        self.digits.join(self.equation_side(line, "right"), self.equation_side(line, "left"))
        self.digits.add(self.equation_side(line, "left"), make_coarse_figure(line.left / shown.size, shown.size))
        for side, node in (("left", line.line.left), ("right", line.line.right)):
            name = self.equation_side(line, side)
            inputs = self.inputs(node, line.open)
            alone = self.slots[node.slot].symbol.unit if isinstance(node, Name) and inputs else None
            if alone is not None and alone.scale == shown.scale:
                # a symbol by itself has the form it has on its own line; two that are equal have one form
                self.digits.join(self.digits.root(name), inputs[0][2])
            elif inputs:
                confirm = self.confirming(self.forms.worked.compiled(node), inputs, line.open)
                self.digits.need(Sum(confirm, tuple(i for _, _, i in inputs), name))

    def equation_side(self, line: WorkedUnknown, side: str) -> Id:
        return ("equation", self.forms.mark, id(line.line), line.open, side)

    def method(self, line: WorkedMethod) -> None:
        """Add the values a method gave, and the sums that prove them with three decimals more than their terms."""
        for slot, _ in line.line.outputs:
            symbol = self.slots[slot].symbol
            unit = symbol.unit or ONE
            for key in self.values.rows[slot] if self.values.sets[slot] else ((),):
                number = self.values.number(slot, key) / unit.size
                self.digits.add(self.forms.id(slot, key), make_figure(number, unit.size, least=symbol.places or 0))
        for place, proof in enumerate(line.result.proofs):
            unit = proof_unit(line, place, self.forms.worked.plan.template.system)
            largest = make_coarse_figure(proof.of / unit.size, unit.size)
            gap = fixed_figure(proof.residual / unit.size, unit.size, largest.places + 3)
            for part, figure in (("of", largest), ("residual", gap)):
                self.digits.add(("proof", self.forms.mark, id(line.line), line.open, place, part), figure)

    def made(self, line: WorkedLine) -> None:
        """Add figures for the cells of a set made here."""
        columns = getattr(getattr(line, "line", None), "columns", ())
        spaced = getattr(getattr(line, "line", None), "spaced", None) is not None
        for column in columns:
            drawn = spaced and not is_printed(self.forms.worked.plan, column.slot)
            ends = {0, len(getattr(line, "names", ())) - 1}
            for key in self.values.rows[column.slot] if self.slots[column.slot].symbol.unit is not None else ():
                node = self.values.worked.get((column.slot, key))
                if node is not None and self.forms.id(column.slot, key) not in self.digits.figures:
                    before, self.unseen = self.unseen, self.unseen or (drawn and key[-1] not in ends)
                    self.cell(column.slot, key, node)
                    self.unseen = before

    def cell(self, slot: int, key: Key, node: Expression) -> None:
        opened = tuple(zip(self.values.sets[slot], key, strict=True))
        self.value(slot, key, node, opened, None)

    def gives(self, line: WorkedGives) -> None:
        arm = line.line.arms[line.arm]
        if self.slots[line.line.slot].symbol.kind == "word":
            return
        self.because(line.line, line.arm, line.open)
        self.value(line.line.slot, line.key, arm.formula, line.open, line.work)

    def value(self, slot: int, key: Key, node: Expression, opened: Opened, work: Work | None) -> None:
        """Add the figure of a value, joined with the one it copies, or with the sum that confirms it."""
        symbol = self.slots[slot].symbol
        unit = symbol.unit or ONE
        number = self.values.number(slot, key) / unit.size
        name = self.forms.id(slot, key)
        least = symbol.places or 0
        fixed = fixed_figure(number, unit.size, least) if symbol.fixed else None
        self.digits.add(name, fixed or make_figure(number, unit.size, least=least))
        inputs = () if self.unseen else self.inputs(node, opened)
        if not inputs:
            return
        if fixed is not None:
            # what is held against one another stands with as many digits
            for _, _, other in inputs:
                self.digits.figure(other).dropped = True
        copied = self.copied(node, inputs, slot, key, opened)
        if copied is not None:
            self.digits.join(name, copied)
            self.forms.copied.add(name)
            self.order_chosen(node, inputs, copied)
            return
        confirm = self.confirming(work or self.forms.worked.compiled(node), inputs, opened)
        ids = tuple(i for _, _, i in inputs)
        family = self.forms.family(node, unit)
        if has_values(node) and unit.dimension != NONE and self.forms.factor(unit, family) != 1:
            middle = ("coherent", self.forms.mark, slot, key)
            coherent = family.unit(unit.dimension)
            assert coherent is not None
            self.digits.add(middle, make_figure(self.values.number(slot, key) / coherent.size, coherent.size))
            self.digits.need(Sum(confirm, ids, middle))
            self.digits.need(Sum(lambda printed: printed(middle), (middle,), name))
            if opened:
                # a row of a table shows no result between, and is worked without
                self.digits.need(Sum(confirm, ids, name))
        else:
            self.digits.need(Sum(confirm, ids, name))

    def inputs(self, node: Node, opened: Opened) -> list[tuple[int, Key, Id]]:
        """Return every number a formula takes in the open rows: slot, key and id."""
        found: dict[Id, tuple[int, Key, Id]] = {}
        names = self.plain_names(node)
        if names is None:
            self.collect(node, dict(opened), found)
        else:
            rows = dict(opened)
            for name in names:
                self.take(name, rows, found)
        return list(found.values())

    def plain_names(self, node: Node) -> tuple[Name, ...] | None:
        """Return the names of numbers in a formula, in order; None where one stands for many rows."""
        kept = self.forms.shared.names
        found = kept.get(id(node))
        if found is None:
            parts = tuple(walk(node))
            rows = any(isinstance(part, Over) for part in parts)
            names = None if rows else tuple(part for part in parts if self.is_number(part))
            found = kept[id(node)] = (node, names)
        return found[1]

    def is_number(self, node: Node) -> TypeGuard[Name]:
        return isinstance(node, Name) and node.slot >= 0 and self.slots[node.slot].symbol.unit is not None

    def take(self, node: Name, opened: dict[int, int], found: dict[Id, tuple[int, Key, Id]]) -> None:
        key = tuple([opened[s] for s in self.values.sets[node.slot]])
        if isinstance(self.values.get(node.slot, key), float):
            name = self.forms.id(node.slot, key)
            found[name] = node.slot, key, name

    def collect(self, node: Node, opened: dict[int, int], found: dict[Id, tuple[int, Key, Id]]) -> None:
        if isinstance(node, Name):
            if self.is_number(node):
                self.take(node, opened, found)
            return
        if isinstance(node, Over):
            outer = tuple(opened[s] for s in self.values.outer[node.bound])
            for row in range(len(self.values.names[node.bound].get(outer, ()))):
                inner = {**opened, node.bound: row}
                self.collect(node.body, inner, found)
                # rows are chosen by the values themselves; a line read between rows takes their places too
                if node.where is not None and node.function == "linear":
                    self.collect(node.where, inner, found)
            if node.otherwise is not None:
                self.collect(node.otherwise, opened, found)
            return
        for child in children(node):
            self.collect(child, opened, found)

    def copied(
        self, node: Expression, inputs: list[tuple[int, Key, Id]], slot: int, key: Key, opened: Opened
    ) -> Id | None:
        """Return the value a choosing formula copies: a name, or the row or argument that a max, min or pick takes."""
        chooses = isinstance(node, Name) or (
            isinstance(node, Over) and node.function in ("max", "min", "pick") and isinstance(node.body, Name)
        )
        if isinstance(node, Call) and node.function in ("max", "min"):
            chooses = all(isinstance(argument, Name) for argument in node.arguments)
        if not chooses:
            return None
        if isinstance(node, Over):
            inputs = self.row_taken(node, opened) or inputs
        value, unit = self.values.number(slot, key), self.slots[slot].symbol.unit or ONE
        for other, other_key, name in inputs:
            other_unit = self.slots[other].symbol.unit or ONE
            if self.values.number(other, other_key) == value and other_unit.scale == unit.scale:
                return name
        return None

    def row_taken(self, node: Over, opened: Opened) -> list[tuple[int, Key, Id]]:
        """Return the number of the row that an extreme takes: other rows may come to the same."""
        for index, row in opened:
            self.values.open[index] = row
        rows = rows_taken(node, self.values, self.forms.worked.compiled, self.forms.worked.tested)
        found: dict[Id, tuple[int, Key, Id]] = {}
        for row in rows[:1]:
            self.collect(node.body, {**dict(opened), node.bound: row}, found)
        return list(found.values())

    def order_chosen(self, node: Expression, inputs: list[tuple[int, Key, Id]], chosen: Id) -> None:
        """Let the value that a max or min takes be the greatest or least in print too."""
        sign = {"max": ">=", "min": "<="}.get(node.function) if isinstance(node, Call | Over) else None
        if sign is None or (isinstance(node, Over) and node.where is not None):
            return
        for _, _, other in inputs:
            if self.digits.root(other) != self.digits.root(chosen):
                self.digits.need_order(Order(chosen, other, sign))

    def confirming(
        self, work: Work, inputs: list[tuple[int, Key, Id]], opened: Opened
    ) -> Callable[[Callable[[Id], float]], float | None]:
        """Return a callable that works a formula with printed figures."""
        shadow = self.forms.shadow

        def confirm(printed: Callable[[Id], float]) -> float | None:
            for slot, key, name in inputs:
                if shadow.sets[slot]:
                    shadow.rows[slot][key] = printed(name)
                else:
                    shadow.plain[slot] = printed(name)
            for index, row in opened:
                shadow.open[index] = row
            try:
                return work(shadow)
            except ArithmeticError:
                return None

        return confirm

    # -------------------------------------------------------- comparisons

    def because(self, line: PlannedGives | PlannedBranches, chosen: int, opened: Opened) -> None:
        for test in () if self.unseen else self.forms.because(line, chosen):
            self.comparison(test, opened, None)

    def comparison(self, test: Compare, opened: Opened, worked: Comparison | None, sign: str = "") -> None:
        """Add the sides of a comparison that is printed with numbers, and that it must read true.

        `sign` is how the sides must read where that is not the comparison's own sign.
        """
        sign = sign or test.op
        unit = self.side_unit(test)
        names: list[Id] = []
        for side, node, work in (
            ("left", test.left, worked.work_left if worked else None),
            ("right", test.right, worked.work_right if worked else None),
        ):
            name: Id = ("side", self.forms.mark, id(test), opened, side)
            names.append(name)
            inputs = self.inputs(node, opened)
            if is_size(node):
                # |M_u| is read off M_u: its figure without the sign
                node, sign = node.arguments[0], "="
            if isinstance(node, Name) and inputs and (self.slots[node.slot].symbol.unit or ONE).scale == unit.scale:
                self.digits.join(name, inputs[0][2])
                continue
            run = work or self.forms.worked.compiled(node)
            for index, row in opened:
                self.values.open[index] = row
            try:
                value = run(self.values)
            except ArithmeticError:
                return
            self.digits.add(name, make_figure(value / unit.size, unit.size))
            if inputs:
                ids = tuple(i for _, _, i in inputs)
                self.digits.need(Sum(self.confirming(run, inputs, opened), ids, name))
        self.digits.need_order(Order(names[0], names[1], sign))

    def side_unit(self, test: Compare) -> Unit:
        """Return the unit both sides of a comparison are printed in."""
        return side_unit(test, self.forms)

    def check(self, check: WorkedCheck) -> None:
        """Add the ratio of a check, or the sides of one that is a condition."""
        by = check.by
        if by is None:
            return
        sign = by.test.op if check.verdict == "OK" else reversed_sign(by.test)
        self.comparison(by.test, check.open, by, sign)
        if check.ratio is None or check.kind == "condition":
            return
        name: Id = ("ratio", self.forms.mark, id(check))
        self.digits.add(name, ratio_figure(check.ratio, ok=check.verdict == "OK"))
        inputs = self.inputs(by.test, check.open)
        required = by.test.op in (">", ">=")

        def ratio(values: Values) -> float:
            demand, capacity = (by.work_right, by.work_left) if required else (by.work_left, by.work_right)
            asked = demand(values)
            # what asks for nothing is held by any capacity, by none too
            return asked / capacity(values) if asked > 0 else 0.0

        if inputs:
            self.digits.need(Sum(self.confirming(ratio, inputs, check.open), tuple(i for _, _, i in inputs), name))
