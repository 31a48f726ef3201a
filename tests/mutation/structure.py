"""What may be wrong with a line, a row or a cell as a whole: arms exchanged, a row its neighbour's, a factor left out.

A record of a template in, changes out. Knows nothing of formulas.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from calcreport.core.expression import Name
from calcreport.core.methods import METHODS
from calcreport.core.record import replace
from calcreport.read.model import Branches, Cell, Check, Entry, Gives, Method, Require, Rows, Text, Twin

from .formulas import Change


def record_changes(record: Any) -> Iterator[Change]:
    """Yield the slips of one record."""
    match record:
        case Gives(arms=arms):
            yield from _arms(arms, "formula")
        case Branches(arms):
            yield from _arms(arms, "lines")
        case Rows():
            yield from _rows(record)
        case Entry():
            yield from _entry(record)
        case Cell():
            yield from _cell(record)
        case Method():
            yield from _outputs(record)
            yield from _words(record)
        case Check() | Require() | Twin():
            yield Change("line left out", lambda found: Text("note", (" ",), None, found.span))
            if isinstance(record, Twin):
                yield from _words(record)
        case _:
            pass


def _outputs(record: Method) -> Iterator[Change]:
    """Yield outputs of one dimension exchanged."""
    gives = METHODS[record.method.name].gives if record.method.name in METHODS else {}
    for number, one in enumerate(record.gives):
        for other in (name for name in gives if name != one.output.name and gives[name] == gives.get(one.output.name)):
            yield Change(f"{one.name.name} is {other}", _output(number, other))


def _words(record: Method | Twin) -> Iterator[Change]:
    """Yield other words for inputs that choose one, unless other inputs go with the word."""
    takes = METHODS[record.method.name].takes if record.method.name in METHODS else {}
    ties = {wanted.where[0] for wanted in takes.values() if wanted.where is not None}
    for number, (given, formula) in enumerate(record.inputs):
        words = takes[given.name].words if given.name in takes and given.name not in ties else ()
        for other in (word for word in words if isinstance(formula, Name) and word != formula.name):
            yield Change(f"{given.name} is {other}", _handed(number, replace(formula, name=other)))


def _handed(number: int, formula: Any) -> Any:
    def apply(found: Any) -> Any:
        new = (found.inputs[number][0], formula)
        return replace(found, inputs=(*found.inputs[:number], new, *found.inputs[number + 1 :]))

    return apply


def _output(number: int, other: str) -> Any:
    def apply(found: Method) -> Method:
        one = found.gives[number]
        new = replace(one, output=replace(one.output, name=other))
        return replace(found, gives=(*found.gives[:number], new, *found.gives[number + 1 :]))

    return apply


def _arms(arms: tuple[Any, ...], field: str) -> Iterator[Change]:
    for number, arm in enumerate(arms[:-1]):
        names = f"arms {number + 1} and {number + 2}"
        yield Change(f"{names} exchange what they give", _exchanged(number, field))
        if arm.when is not None and arms[number + 1].when is not None:
            yield Change(f"{names} in the other order", _reordered(number))
        yield Change(f"arm {number + 1} left out", _left_out("arms", number))


def _exchanged(number: int, field: str) -> Any:
    def apply(found: Any) -> Any:
        one, other = found.arms[number], found.arms[number + 1]
        new = (replace(one, **{field: getattr(other, field)}), replace(other, **{field: getattr(one, field)}))
        return replace(found, arms=(*found.arms[:number], *new, *found.arms[number + 2 :]))

    return apply


def _reordered(number: int) -> Any:
    def apply(found: Any) -> Any:
        arms = found.arms
        return replace(found, arms=(*arms[:number], arms[number + 1], arms[number], *arms[number + 2 :]))

    return apply


def _left_out(field: str, number: int) -> Any:
    def apply(found: Any) -> Any:
        items = getattr(found, field)
        return replace(found, **{field: (*items[:number], *items[number + 1 :])})

    return apply


def _rows(record: Rows) -> Iterator[Change]:
    if record.spaced is not None:
        yield Change("one row more", _denser)
    for number, entry in enumerate(record.entries):
        name = entry.name.name or str(number + 1)
        yield Change(f"row {number + 1}, {name}, left out", _left_out("entries", number))
        for other in (number - 1, number + 1):
            if 0 <= other < len(record.entries) and _cells(record.entries[other]) != _cells(entry):
                yield Change(f"row {number + 1}, {name}, with the cells of row {other + 1}", _neighbour(number, other))


def _denser(found: Rows) -> Rows:
    assert found.spaced is not None
    return replace(found, spaced=replace(found.spaced, count=found.spaced.count + 1))


def _cells(entry: Entry) -> tuple[str, ...]:
    return tuple(cell.span.text for _, cell in entry.cells)


def _neighbour(number: int, other: int) -> Any:
    def apply(found: Rows) -> Rows:
        new = replace(found.entries[number], cells=found.entries[other].cells)
        return replace(found, entries=(*found.entries[:number], new, *found.entries[number + 1 :]))

    return apply


def _entry(record: Entry) -> Iterator[Change]:
    if record.when is not None:
        yield Change("condition left out", lambda found: replace(found, when=None))
    for number, (variable, fits) in enumerate(record.pairing):
        for item, name in enumerate(fits if len(fits) > 1 else ()):
            yield Change(f"{name.name} left out of {variable.name}", _unpaired(number, item))


def _unpaired(number: int, item: int) -> Any:
    def apply(found: Entry) -> Entry:
        variable, fits = found.pairing[number]
        new = (variable, (*fits[:item], *fits[item + 1 :]))
        return replace(found, pairing=(*found.pairing[:number], new, *found.pairing[number + 1 :]))

    return apply


def _cell(record: Cell) -> Iterator[Change]:
    for number, (row, formula) in enumerate(record.mapped):
        if len(record.mapped) > 1:
            yield Change(f"{row.name} left out", _left_out("mapped", number))
        if number and formula.span.text != record.mapped[number - 1][1].span.text:
            yield Change(f"{record.mapped[number - 1][0].name} and {row.name} exchanged", _swapped(number))


def _swapped(number: int) -> Any:
    def apply(found: Cell) -> Cell:
        (row, formula), (other, another) = found.mapped[number - 1], found.mapped[number]
        new = ((row, another), (other, formula))
        return replace(found, mapped=(*found.mapped[: number - 1], *new, *found.mapped[number + 1 :]))

    return apply
