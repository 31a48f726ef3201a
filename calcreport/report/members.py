"""Members as a schedule on a drawing lists them: mark, size, bars, governing check, result.

Worked calculations with their forms in, rows of text out. A calculation is a member when it is given bars, or when a
length it is given stands in its result line; those lengths, in that order, are its size.
"""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction

from calcreport.calculate.model import (
    BarCallout,
    GivenPairs,
    GivenRows,
    GivenValue,
    Key,
    Member,
    PlannedGiven,
    Worked,
    WorkedBranches,
    WorkedEach,
    WorkedLine,
    WorkedProject,
    WorkedText,
)
from calcreport.core.quantity import Amount
from calcreport.core.record import record
from calcreport.core.units import LENGTH, ONE, Unit
from calcreport.report.digits import number_text
from calcreport.report.display import unit_text
from calcreport.report.forms import CalculationForms
from calcreport.report.governing import governing

HEADINGS = ("Mark", "Title", "Size", "Bars", "Governing check", "Ratio", "Verdict", "Result")


@record
class Taken:
    """A given value of a member that a drawing shows."""

    #: given name, with row and column where it stands in rows: 'b', 'layer.first.steel'
    path: str
    slot: int
    key: Key
    value: GivenValue


def taken(member: Member) -> Iterator[Taken]:
    """Return every single value given to a member, those in rows too."""
    worked = member.worked
    for planned in worked.plan.givens:
        value = next(v for v in worked.calculation.given if v.given.name == planned.given.name)
        if planned.rows >= 0 and planned.rows == member.place[0] and isinstance(value, GivenRows):
            row = member.place[1]
            for column, cell in zip(planned.columns, value.cells[row], strict=True):
                yield from _taken(column, cell, (row,), "")
        elif not isinstance(value, GivenPairs):
            yield from _taken(planned, value, (), "")


def _taken(planned: PlannedGiven, value: GivenValue | GivenRows, key: Key, path: str) -> Iterator[Taken]:
    here = f"{path}.{value.given.name}".lstrip(".")
    if isinstance(value, GivenValue):
        yield Taken(here, planned.slot, key, value)
        return
    for row, (name, cells) in enumerate(zip(value.names, value.cells, strict=True)):
        for column, cell in zip(planned.columns, cells, strict=True):
            yield from _taken(column, cell, (*key, row), f"{here}.{name}")


def callouts(member: Member) -> tuple[tuple[str, BarCallout], ...]:
    """Return the bars of a member, each with what it is called."""
    found = [(one.path, one.value.value) for one in taken(member)]
    bars = [(path, value) for path, value in found if isinstance(value, BarCallout)]
    return tuple((_label(path, [other for other, _ in bars]), value) for path, value in bars)


def _label(path: str, paths: list[str]) -> str:
    """Return `layer first` for `layer.first.steel`, unless the row has bars of two kinds."""
    stem, _, column = path.rpartition(".")
    alone = sum(other.rpartition(".")[0] == stem for other in paths) == 1
    return (stem if stem and alone else path).replace(".", " ") if column else path


def sizes(member: Member) -> tuple[Taken, ...]:
    """Return the lengths given that stand in the result line, in its order."""
    lengths = {
        one.slot: one
        for one in taken(member)
        if "." not in one.path and one.value.given.symbol and one.value.given.symbol.unit
        and one.value.given.symbol.unit.dimension == LENGTH and one.value.origin.kind != "none"
    }  # fmt: skip
    pieces = [piece for line in result_lines(member) for piece in line.line.pieces if isinstance(piece, int)]
    return tuple(lengths[slot] for slot in dict.fromkeys(pieces) if slot in lengths)


def result_lines(member: Member) -> Iterator[WorkedText]:
    """Return the result lines that a member reached, those of parts left aside."""
    return (line for line in _result_lines(member.worked.lines) if member.owns(line.open))


def _result_lines(lines: tuple[WorkedLine, ...]) -> Iterator[WorkedText]:
    for line in lines:
        match line:
            case WorkedText() if line.line.kind == "use":
                yield line
            case WorkedBranches():
                yield from _result_lines(line.lines)
            case WorkedEach():
                for row in line.rows:
                    yield from _result_lines(row)
            case _:
                pass


def exact(one: Taken, worked: Worked) -> Fraction | None:
    """Return a quantity exactly, in base units; None for a word or where there is none."""
    return worked.values.given.get((one.slot, one.key))


def typed(one: Taken, worked: Worked) -> str:
    """Return a length as it was typed, or as a plain number where it comes from another line."""
    if isinstance(one.value.value, Amount):
        return one.value.value.text
    amount, symbol = exact(one, worked), worked.plan.slots[one.slot].symbol
    unit = symbol.unit or ONE
    return f"{float(amount / unit.scale):.10g} {unit.text}" if amount is not None else ""


def members(project: WorkedProject, forms: dict[str, CalculationForms]) -> tuple[tuple[str, ...], ...]:
    """Return a row a member under `HEADINGS`."""
    return tuple(_row(m, forms[m.worked.calculation.mark]) for m in project.members if callouts(m) or sizes(m))


def _row(member: Member, forms: CalculationForms) -> tuple[str, ...]:
    worked, check = member.worked, governing(member)
    figure = forms.ratio(check) if check is not None else None
    return (
        member.mark,
        worked.calculation.title,
        " × ".join(typed(one, worked) for one in sizes(member)),
        "; ".join(f"{label}: {callout.text}" for label, callout in callouts(member)),
        check.line.name if check is not None else "",
        number_text(figure) if figure is not None else "",
        member.verdict,
        " ".join(_words(line, worked, forms) for line in result_lines(member))
        or (f"stopped: {worked.stop.told}" if worked.stop else ""),
    )


def _words(text: WorkedText, worked: Worked, forms: CalculationForms) -> str:
    """Return a result line as plain text, its values as printed on the sheets."""
    rows = dict(text.open)
    found = ""
    for piece in text.line.pieces:
        if isinstance(piece, str):
            found += piece
            continue
        key = tuple(rows[index] for index in worked.values.sets[piece])
        value = worked.values.get(piece, key)
        if isinstance(value, float):
            found += _printed(forms, piece, key, worked.plan.slots[piece].symbol.unit or ONE)
        else:
            found += "none" if value is None else value
    return found


def _printed(forms: CalculationForms, slot: int, key: Key, unit: Unit) -> str:
    figure = forms.figure(slot, key)
    power = f" × 10^{figure.exponent}" if figure.exponent else ""
    return f"{number_text(figure)}{power} {unit_text(unit)}".rstrip()
