"""Which printed lines carry a delta: changed lines found again in the blocks that tell them.

The revision each line last changed in and where the lines stand, items with their blocks in; the same blocks out, those
of changed lines marked with the number of the revision.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from typing import Literal, TypeAlias

from calcreport.calculate.model import Key, PlannedGiven, WorkedCheck, WorkedGives, WorkedRequire
from calcreport.core.expression import names
from calcreport.core.record import record
from calcreport.history.model import Identity, Place
from calcreport.report.below import below
from calcreport.report.items import (
    Item,
    SayAlike,
    SayCheck,
    SayChoice,
    SayEquation,
    SayFormula,
    SayGivens,
    SayLine,
    SayMade,
    SayMethod,
    SayOutput,
    SayOutputs,
    SayProof,
    SayRequire,
    SayRows,
    SayStop,
    SayTable,
    SayText,
    SayUnknown,
)
from calcreport.report.model import Block, CheckLine, Givens, Line, ResultBox, Statement, Table
from calcreport.report.told import Told

#: marks of the last revision alone, of every revision a line last changed in, or none
Shown: TypeAlias = Literal["last", "all", "none"]
Slots: TypeAlias = Iterable[tuple[int, Key]]


@record
class Deltas:
    """The changed lines of one calculation."""

    #: the revision being made, whose lines are clouded; '' where nothing is marked
    now: str
    #: revision numbers, earlier ones first
    order: tuple[str, ...]
    #: revision by slot and key, and by the identity of a worked check or requirement
    values: dict[tuple[int, Key], str]
    others: dict[int, str]
    #: values whose formula, case or source differs now
    formulas: frozenset[tuple[int, Key]]
    #: rows of the table of candidates that differ now; the sums that prove a method differ
    candidates: tuple[int, ...]
    closures: bool
    #: all of this in plain values, by which two of them are told apart
    plain: tuple[object, ...] = ()

    def of(self, slots: Slots, checks: Iterable[object] = ()) -> str:
        """Return the latest revision any of these changed in, '' for none."""
        found = {self.values[place] for place in slots if place in self.values}
        found |= {self.others[id(check)] for check in checks if id(check) in self.others}
        return max(found, key=self.order.index) if found else ""


NO_DELTAS = Deltas("", (), {}, {}, frozenset(), (), False)


def deltas(
    since: dict[Identity, str],
    places: dict[Identity, Place],
    formulas: frozenset[Identity],
    now: str,
    order: tuple[str, ...],
    candidates: tuple[int, ...],
    closures: bool,
) -> Deltas:
    """Return the changed lines of a calculation; rows of candidates and closures are those that differ now."""
    values: dict[tuple[int, Key], str] = {}
    others: dict[int, str] = {}
    for identity, number in since.items():
        place = places.get(identity)
        if isinstance(place, WorkedCheck | WorkedRequire):
            others[id(place)] = number
        elif place is not None:
            values[_slot(place)] = number
    changed = frozenset(_slot(places[one]) for one in formulas if one[0] in ("given", "value"))
    plain = (now, order, tuple(sorted(since.items())), tuple(sorted(formulas)), candidates, closures)
    return Deltas(now, order, values, others, changed, candidates, closures, plain)


def _slot(place: Place) -> tuple[int, Key]:
    if isinstance(place, WorkedGives):
        return place.line.slot, place.key
    assert isinstance(place, tuple)
    return place


def marked(item: Item, blocks: tuple[Block, ...], told: Told, found: Deltas) -> tuple[Block, ...]:
    """Return the blocks of one item with deltas beside what has changed."""
    if not found.now or not blocks:
        return blocks
    first, rest = blocks[0], blocks[1:]
    match item:
        case SayGivens():
            assert isinstance(first, Givens)
            rows = zip(first.rows, item.rows, strict=True)
            whole = (replace(row, delta=found.of(_single(given))) for row, (_, given) in rows)
            return (Givens(tuple(whole)), *rest)
        case SayAlike():
            return (_with(first, found.of((given.slot, ()) for given in item.givens)), *rest)
        case SayRows():
            return (_set(first, item, told, found), *rest)
        case SayChoice():
            return (_table(first, dict.fromkeys(found.candidates, found.now)), *rest)
        case SayLine():
            return (_with(first, found.of([(item.worked.line.slot, item.worked.key)])), *rest)
        case SayFormula():
            changed = [(gives.line.slot, gives.key) in found.formulas for gives in item.arms]
            return tuple(_with(one, found.now if new else "") for one, new in zip(blocks, changed, strict=True))
        case SayMade():
            return _made(blocks, item, told, found)
        case SayTable():
            return (_rows(first, item, told, found), *rest)
        case SayUnknown():
            return (first, *(_with(one, found.of([(item.worked.line.slot, item.worked.key)])) for one in rest))
        case SayEquation():
            return (_with(first, found.of([(item.worked.line.slot, item.worked.key)])), *rest)
        case SayOutput():
            return (_with(first, found.of([(item.slot, item.key)])), *rest)
        case SayOutputs():
            return (_outputs(first, item, told, found), *rest)
        case SayProof():
            return (_with(first, found.now if found.closures else ""), *rest)
        case SayMethod():
            slots = [place for given in item.worked.line.inputs for place in _taken(given.formula, told)]
            return tuple(_with(one, found.of(slots)) for one in blocks)
        case SayCheck() | SayRequire():
            return (_with(first, found.of((), [item.worked])), *rest)
        case SayText():
            slots = [(p, told.key(p, item.worked.open)) for p in item.worked.line.pieces if isinstance(p, int)]
            return tuple(_with(one, found.of(slots)) for one in blocks)
        case SayStop():
            checks = iter([(), *(checks for _, checks in item.left)])
            return tuple(_with(one, found.of((), next(checks))) for one in blocks)
        case _:
            return blocks


def _with(block: Block, delta: str) -> Block:
    """Return a block with a delta, where it is one that can carry it."""
    if delta and isinstance(block, Line | Statement | CheckLine | ResultBox):
        return replace(block, delta=delta)
    return block


def _table(block: Block, rows: dict[int, str]) -> Block:
    """Return a table with deltas beside rows; a block of one line that stands for it takes the latest."""
    if not isinstance(block, Table):
        return _with(block, next((delta for delta in rows.values() if delta), ""))
    return replace(block, rows=tuple(
        replace(row, delta=rows[place]) if rows.get(place) else row for place, row in enumerate(block.rows)
    ))  # fmt: skip


def _single(given: PlannedGiven) -> list[tuple[int, Key]]:
    return [(slot, ()) for slot in (given.slot, *given.outputs)]


def _set(block: Block, item: SayRows, told: Told, found: Deltas) -> Block:
    """Mark rows of a set given, or of the sets its members have for themselves."""
    columns = item.given.columns if item.given.rows >= 0 else (item.given,)
    slots = {slot for column in columns for slot in _slots(column)}
    if not isinstance(block, Table):
        return _with(block, found.of(place for place in found.values if place[0] in slots))
    if item.within is None:
        return _table(block, _by_row(found, slots))
    inner = told.values.names[item.given.rows]
    order = [(member, row) for (member,), rows in sorted(inner.items()) for row in range(len(rows))]
    keys = {key: place for place, key in enumerate(order)}
    return _table(block, {keys[key]: found.of((slot, key) for slot in slots) for key in keys})


def _slots(column: PlannedGiven) -> list[int]:
    """Return all slots of a column, those of a set of its own in each row too."""
    own = [slot for slot in (column.slot, *column.outputs) if slot >= 0]
    return own + [slot for inner in column.columns for slot in _slots(inner)]


def _by_row(found: Deltas, slots: set[int]) -> dict[int, str]:
    rows = {key[0] for slot, key in found.values if slot in slots and key}
    return {row: found.of(place for place in found.values if place[0] in slots and place[1][0] == row) for row in rows}


def _made(blocks: tuple[Block, ...], item: SayMade, told: Told, found: Deltas) -> tuple[Block, ...]:
    """Mark rows of a set made on the sheet; where it is told line by line, each line."""
    line = item.worked.line
    cells: dict[int, list[tuple[int, Key]]] = {}
    for column in line.columns:
        sets = told.values.sets[column.slot]
        for key in told.values.rows[column.slot]:
            rows = dict(zip(sets, key, strict=True))
            if all(rows.get(index, row) == row for index, row in item.worked.open):
                cells.setdefault(rows[line.rows], []).append((column.slot, key))
    by_row = {row: found.of(places) for row, places in cells.items()}
    if all(isinstance(block, Line) for block in blocks):
        each = [found.of([place]) for row in sorted(cells) for place in cells[row]]
        return tuple(_with(one, delta) for one, delta in zip(blocks, each, strict=False))
    return tuple(_table(block, by_row) for block in blocks)


def _rows(block: Block, item: SayTable, told: Told, found: Deltas) -> Block:
    """Mark rows of a table of results."""
    each = item.worked
    rows: dict[int, str] = {}
    for place, row in enumerate(item.rows):
        opened = (*each.open, (each.line.rows, row))
        slots = [(slot, told.key(slot, opened)) for slot in item.columns]
        rows[place] = found.of(slots, below(each.rows[row], WorkedCheck))
    return _table(block, rows)


def _outputs(block: Block, item: SayOutputs, told: Told, found: Deltas) -> Block:
    """Mark rows of a table of what a method gives."""
    rows: dict[int, str] = {}
    for row, key in enumerate(item.keys(told.values)):
        opened = (*item.worked.open, *zip(item.sets, key, strict=True))
        rows[row] = found.of([(slot, told.key(slot, opened)) for slot in item.columns])
    return _table(block, rows)


def _taken(formula: object, told: Told) -> list[tuple[int, Key]]:
    """Return the values a formula may take, in any row."""
    slots = {name.slot for name in names(formula) if name.slot >= 0}  # type: ignore[arg-type]
    return [(slot, key) for slot in slots for key in (told.values.rows[slot] if told.values.sets[slot] else ((),))]
