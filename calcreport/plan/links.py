"""Links between calculations bound against the plans of both: values, sets, rows named under `at`, dimensions.

Inputs and plans by template in, inputs with whole paths out; what names nothing, or another kind of thing, is a
problem and poisons the calculation that says it. Row names that only working makes are held there.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.core.expression import Name
from calcreport.core.problems import Problems, listed
from calcreport.core.rows import fits
from calcreport.core.source import Span
from calcreport.core.units import dimension_words
from calcreport.plan.model import (
    MEMBER,
    Calculation,
    Given,
    GivenPairs,
    GivenRows,
    GivenValue,
    Inputs,
    LinkedRows,
    LinkedValue,
    Plan,
    RowSet,
    Slot,
)

#: how a path begins that was asked for by a member's mark
_OF_MEMBER = f"{MEMBER}["


def bind_links(inputs: Inputs, plans: dict[int, Plan], problems: Problems) -> Inputs:
    """Return inputs in which every link that could be bound is a whole path."""
    by_mark = {c.mark: plans.get(id(c.template)) for c in inputs.calculations}
    kept: list[Calculation] = []
    poisoned = set(inputs.poisoned)
    for calculation in inputs.calculations:
        if not any(_is_open(value) for value in calculation.handed):
            kept.append(calculation)
            continue
        before = problems.met
        binder = _Binder(by_mark, problems)
        bound = calculation.changed(binder.given)
        if problems.met == before:
            kept.append(bound)
        else:
            poisoned.add(calculation.mark)
    return Inputs(inputs.project, tuple(kept), frozenset(poisoned))


def _is_open(value: GivenValue | GivenRows | GivenPairs) -> bool:
    """Tell whether a given value holds a link that is not bound by its own words."""
    match value:
        case GivenValue(_, handed):
            return isinstance(handed, LinkedValue) and (bool(handed.at) or handed.path.startswith(_OF_MEMBER))
        case GivenRows():
            return value.linked is not None or any(_is_open(cell) for row in value.cells for cell in row)
        case GivenPairs(_, cells):
            return any(_is_open(cell) for _, cell in cells)


class _Binder:
    def __init__(self, by_mark: dict[str, Plan | None], problems: Problems) -> None:
        self.by_mark, self.problems = by_mark, problems

    def given(self, value: GivenValue | GivenRows | GivenPairs) -> GivenValue | GivenRows | GivenPairs:
        match value:
            case GivenValue():
                return self.value(value)
            case GivenRows():
                cells = tuple(tuple(self.cell(cell) for cell in row) for row in value.cells)
                return replace(value, cells=cells, linked=self.rows(value.linked) if value.linked else None)
            case GivenPairs():
                return replace(value, cells=tuple((names, self.value(cell)) for names, cell in value.cells))

    def cell(self, cell: GivenValue | GivenRows) -> GivenValue | GivenRows:
        if isinstance(cell, GivenValue):
            return self.value(cell)
        return replace(cell, cells=tuple(tuple(self.cell(inner) for inner in row) for row in cell.cells))

    def value(self, value: GivenValue) -> GivenValue:
        """Put the rows named under `at` into the path of a link, in the order of the sets."""
        link = value.value
        if not isinstance(link, LinkedValue) or not _is_open(value):
            return value
        plan = self.by_mark.get(link.mark)
        if plan is not None and not link.at:
            # what like members have in common has no rows, though it is asked for by a member's mark
            symbol = link.path.rpartition("].")[2]
            index = plan.by_path.get(symbol)
            common = index is not None and not plan.slots[index].sets
            return replace(value, value=replace(link, path=symbol)) if common else value
        slot = self.slot(link.mark, Name(link.path, link.span), plan, "") if plan is not None else None
        if plan is None or slot is None:
            return value
        rows = self.at(link.mark, link.at, plan, (slot,), "", link.span)
        path = "".join(f"{plan.sets[s].name}[{rows.get(plan.sets[s].name, '')}]." for s in slot.sets)
        return replace(value, value=replace(link, path=path + link.path))

    def rows(self, linked: LinkedRows) -> LinkedRows:
        """Hold the set and every column of rows taken from another calculation."""
        plan = self.by_mark.get(linked.mark)
        if plan is None:
            return linked
        wanted = linked.rows.name
        if not any(rows.name == wanted for rows in plan.sets):
            known = tuple(dict.fromkeys(rows.name for rows in plan.sets))
            self.problems.add("unknown-name", linked.rows.span, f"{linked.mark} has no set `{wanted[:40]}`",
                              expected=listed(known) if known else "a calculation with rows", found=wanted[:40],
                              hint=self.problems.near(wanted, known))  # fmt: skip
            return linked
        before = self.problems.met
        slots: list[Slot] = []
        for column, name in linked.columns:
            slot = self.slot(linked.mark, name, plan, wanted)
            if slot is not None:
                self.hold_kind(linked.mark, column, name, slot)
                slots.append(slot)
        rows = {i for slot in slots for i in slot.sets if plan.sets[i].name == wanted}
        if self.problems.met == before and len(rows) > 1:
            self.problems.add("row-leak", linked.rows.span, f"the columns are of two sets `{wanted[:40]}`",
                              expected="values for the rows of one set", found="values of two parts")  # fmt: skip
        if self.problems.met == before:
            # the columns of one set vary over much the same sets: what is wrong with `at` is told once
            self.at(linked.mark, linked.at, plan, tuple(slots), wanted, linked.span)
        return linked

    def slot(self, mark: str, name: Name, plan: Plan, rows: str) -> Slot | None:
        """Return the slot a name means; one with a value for every row of a set, where a set is named."""
        index = plan.by_path.get(name.name)
        if index is None:
            fits = [s.path for s in plan.slots if not rows or rows in self.names(plan, s)]
            self.problems.add("unknown-name", name.span, f"{mark} gives no `{name.name[:40]}`",
                              expected=f"a value for every row of `{rows}`" if rows else "a symbol of that calculation",
                              found=name.name[:40], hint=self.problems.near(name.name, fits))  # fmt: skip
            return None
        slot = plan.slots[index]
        if rows and rows not in self.names(plan, slot):
            over = ", ".join(self.names(plan, slot))
            self.problems.add("row-leak", name.span, f"`{name.name}` of {mark} has no value for the rows of `{rows}`",
                              expected=f"a value for every row of `{rows}`",
                              found=f"a value for every row of {over}" if over else "one value")  # fmt: skip
            return None
        return slot

    def names(self, plan: Plan, slot: Slot) -> list[str]:
        return [plan.sets[index].name for index in slot.sets]

    def at(
        self, mark: str, at: tuple[tuple[Name, Name], ...], plan: Plan, slots: tuple[Slot, ...], rows: str, span: Span
    ) -> dict[str, str]:
        """Hold the rows named under `at` against the sets that values vary over; return them by set."""
        sets = {plan.sets[index].name: plan.sets[index] for slot in slots for index in slot.sets}
        wanted = [key for key in sets if key != rows]
        found: dict[str, str] = {}
        for name, row in at:
            if name.name not in wanted:
                what = f"`{slots[0].path}` of {mark}" if slots else mark
                self.problems.add("unknown-name", name.span, f"{what} takes no row of `{name.name[:40]}`",
                                  expected=listed(wanted) if wanted else "no `at`", found=name.name[:40],
                                  hint=self.problems.near(name.name, wanted))  # fmt: skip
                return found
            self.hold_row(mark, row, sets[name.name])
            found[name.name] = row.name
        slot = next((slot for slot in slots if not {*self.names(plan, slot)} <= {*found, rows}), None)
        if slot is not None:
            missing = [key for key in self.names(plan, slot) if key not in found and key != rows]
            self.problems.add("row-leak", span, f"`{slot.path}` of {mark} has a value for every row of `{missing[0]}`",
                              expected="the row, as in at: {" + ", ".join(f"{key}: ROW" for key in missing) + "}",
                              found="no row named")  # fmt: skip
        return found

    def hold_row(self, mark: str, row: Name, owner: RowSet) -> None:
        """Hold a row's name against the names its set can have, where they are known beforehand."""
        known = owner.row_names
        if known and not fits(row.name, known, known):
            self.problems.add("not-a-row", row.span, f"{mark} has no row `{row.name[:40]}` in `{owner.name}`",
                              expected=listed(known), found=row.name[:40],
                              hint=self.problems.near(row.name, known))  # fmt: skip

    def hold_kind(self, mark: str, column: Given, name: Name, slot: Slot) -> None:
        """Hold a column's dimension, or its words, against those of the value it takes."""
        wanted, found = column.symbol, slot.symbol
        assert wanted is not None
        if wanted.unit is None or found.unit is None:
            if wanted.unit is None and found.unit is None and found.words and set(found.words) <= set(wanted.words):
                return
            given = dimension_words(found.unit.dimension) if found.unit else listed(found.words) if found.words else ""
            expected = dimension_words(wanted.unit.dimension) if wanted.unit else listed(wanted.words)
            self.problems.add("unit-mismatch", name.span, f"`{name.name}` of {mark} is not what `{column.name}` takes",
                              expected=f"{expected} for {column.name}", found=given or "a bar callout")  # fmt: skip
        elif wanted.unit.dimension != found.unit.dimension:
            self.problems.add("unit-mismatch", name.span, f"`{name.name}` of {mark} is not what `{column.name}` takes",
                              expected=f"{dimension_words(wanted.unit.dimension)} for {column.name}",
                              found=dimension_words(found.unit.dimension))  # fmt: skip
