"""A worked calculation as an account: every given value, line, requirement and check with what it came to.

`Worked` in, `Account` out. Beside it stands where each value is in that run, for whoever prints it.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from calcreport.calculate.model import (
    GivenPairs,
    GivenRows,
    GivenValue,
    Key,
    PlannedGiven,
    Worked,
    WorkedBranches,
    WorkedCheck,
    WorkedEach,
    WorkedGives,
    WorkedLine,
    WorkedMethod,
    WorkedPart,
    WorkedRequire,
    WorkedRows,
    WorkedUnknown,
)
from calcreport.core.expression import Condition
from calcreport.core.units import ONE
from calcreport.history.model import Account, Entry, Kind, Place


def account(worked: Worked, governing: str = "") -> Account:
    """Return the account of a calculation; `governing` names the check that governs it."""
    calculation = worked.calculation
    template = calculation.template
    return Account(
        calculation.mark, calculation.title, template.name, template.code if template.year else "", worked.verdict,
        governing, worked.stop.told if worked.stop else "", tuple(entry for entry, _ in placed_entries(worked)),
    )  # fmt: skip


def placed_entries(worked: Worked) -> Iterator[tuple[Entry, Place]]:
    """Yield every entry in page order with where it stands in this run."""
    seen: Counter[tuple[Kind, str]] = Counter()
    for entry, place in _Entries(worked).all():
        seen[entry.kind, entry.path] += 1
        again = seen[entry.kind, entry.path]
        yield (_again(entry, again) if again > 1 else entry), place


def _again(entry: Entry, again: int) -> Entry:
    return Entry(entry.kind, entry.path, again, entry.value, entry.unit, entry.size, entry.formula, entry.case,
                 entry.cite, entry.verdict)  # fmt: skip


class _Entries:
    """Walks one worked calculation."""

    def __init__(self, worked: Worked) -> None:
        self.worked, self.slots, self.values = worked, worked.plan.slots, worked.values
        #: identities of the checks told so far
        self.judged: set[int] = set()

    def all(self) -> Iterator[tuple[Entry, Place]]:
        for planned in self.worked.plan.givens:
            origins = dict(_origins(self.worked, planned.given.name))
            for given in (planned, *planned.columns):
                yield from self.given(given, origins)
        yield from self.lines(self.worked.lines)
        # a check that a branch passed over has a verdict too: not applicable; one beyond a stop is not evaluated
        for check in self.worked.checks:
            if id(check) not in self.judged:
                yield self.check(check)

    def check(self, check: WorkedCheck) -> tuple[Entry, Place]:
        self.judged.add(id(check))
        by = check.by.test if check.by is not None else check.line.holds
        path = self.rows(dict(check.open), tuple(index for index, _ in check.open)) + check.line.name
        cite = check.line.cite.printed
        return Entry("check", path, 1, check.ratio, "1", 1.0, _text(by), "", cite, check.verdict), check

    def given(self, given: PlannedGiven, origins: dict[str, str]) -> Iterator[tuple[Entry, Place]]:
        for slot in (given.slot, *given.outputs):
            if slot < 0:
                continue
            for key in self.values.rows[slot] if self.values.sets[slot] else ((),):
                row = self.rows(dict(zip(self.values.sets[slot], key, strict=True)), self.values.sets[slot])
                cite = origins.get(row) or origins.get("", "")
                yield self.value("given", slot, key, "", "", cite), (slot, key)

    def lines(self, lines: tuple[WorkedLine, ...]) -> Iterator[tuple[Entry, Place]]:
        for line in lines:
            match line:
                case WorkedGives():
                    arms = line.line.arms
                    when = arms[line.arm].when
                    case = "" if len(arms) == 1 else _text(when) if when is not None else "otherwise"
                    text = _plain(arms[line.arm].formula.span.text)
                    yield self.value("value", line.line.slot, line.key, text, case, line.line.cite.printed), line
                case WorkedRequire():
                    path = self.rows(dict(line.open), tuple(index for index, _ in line.open)) + line.line.says
                    yield Entry("requirement", path, 1, None, "1", 1.0, _text(line.line.condition), "",
                                line.line.cite.printed, ""), line  # fmt: skip
                case WorkedCheck():
                    yield self.check(line)
                case WorkedUnknown():
                    text = f"{_plain(line.line.left.span.text)} = {_plain(line.line.right.span.text)}"
                    yield self.value("value", line.line.slot, line.key, text, "", ""), (line.line.slot, line.key)
                    yield from self.lines(line.lines)
                case WorkedRows():
                    yield from self.made(line)
                case WorkedMethod():
                    text, cite = f"method: {line.line.kind}", line.line.cite.printed
                    for slot, key in line.places(self.values):
                        yield self.value("value", slot, key, text, "", cite), (slot, key)
                case WorkedBranches() | WorkedPart():
                    yield from self.lines(line.lines)
                case WorkedEach():
                    for row in line.rows:
                        yield from self.lines(row)
                case _:
                    pass

    def made(self, made: WorkedRows) -> Iterator[tuple[Entry, Place]]:
        """Yield the cells of a set made here, those of the rows that are open."""
        rows = dict(made.open)
        for column in made.line.columns:
            sets = self.values.sets[column.slot]
            for key in self.values.rows[column.slot]:
                if all(rows.get(index, row) == row for index, row in zip(sets, key, strict=True)):
                    formula = self.values.worked.get((column.slot, key))
                    text = _plain(formula.span.text) if formula is not None else ""
                    yield self.value("value", column.slot, key, text, "", made.line.cite.printed), (column.slot, key)

    def value(self, kind: Kind, slot: int, key: Key, formula: str, case: str, cite: str) -> Entry:
        symbol = self.slots[slot].symbol
        unit = symbol.unit or ONE
        sets = self.values.sets[slot]
        path = self.rows(dict(zip(sets, key, strict=True)), sets) + self.slots[slot].path
        return Entry(kind, path, 1, self.values.get(slot, key), unit.text, unit.size, formula, case, cite, "")

    def rows(self, open_rows: dict[int, int], sets: tuple[int, ...]) -> str:
        """Return `section[face of 1].combination[4 W+].` for rows of sets."""
        found = ""
        for index in sets:
            planned = self.worked.plan.sets[index]
            names = self.values.names[index].get(tuple(open_rows.get(o, -1) for o in planned.outer), ())
            row = open_rows[index]
            found += f"{planned.name}[{names[row] if row < len(names) else row}]."
        return found


def _origins(worked: Worked, name: str) -> Iterator[tuple[str, str]]:
    """Yield where a given value was taken from: '' for the whole of it, then its rows."""
    for value in worked.calculation.given:
        if value.given.name != name:
            continue
        yield "", _origin(value)
        if isinstance(value, GivenRows):
            for row, cells in zip(value.names, value.cells, strict=True):
                yield f"{name}[{row}].", " ".join(dict.fromkeys(_origin(cell) for cell in cells))


def _origin(value: GivenValue | GivenRows | GivenPairs) -> str:
    origin = value.origin
    return f"{origin.kind}: {origin.words}" if origin.words else origin.kind


def _text(condition: Condition) -> str:
    return _plain(condition.span.text)


def _plain(text: str) -> str:
    return " ".join(text.split())
