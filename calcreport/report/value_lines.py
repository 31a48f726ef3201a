"""The lines of a values file: each given value, worked value, requirement and check as one JSON-ready object.

A worked calculation with its forms and script in, objects out: number, printed form, citation, and all else that its
line prints.
"""

from __future__ import annotations

from typing import Any

from calcreport.calculate.model import (
    GivenValue,
    Key,
    Worked,
    WorkedCheck,
    WorkedGives,
    WorkedProject,
    WorkedRequire,
    WorkedUnknown,
)
from calcreport.core.expression import Compare, names
from calcreport.core.record import record
from calcreport.core.units import ONE
from calcreport.history.model import Entry, Place
from calcreport.report.below import below
from calcreport.report.digits import Figure, number_text
from calcreport.report.forms import (
    CalculationForms,
    Opened,
    is_size,
    joint_comparisons,
    link_place,
    linked_values,
    side_unit,
)
from calcreport.report.given_blocks import typed_beside
from calcreport.report.items import SayOutput, SayOutputs, SayRequire, Script


@record
class Finished:
    """A project worked and ready to be told."""

    project: WorkedProject
    forms: dict[str, CalculationForms]
    scripts: dict[str, Script]
    #: the lines of every account with where they stand
    lines: dict[str, tuple[tuple[Entry, Place], ...]]


class LineWriter:
    """Writes the lines of one calculation."""

    def __init__(self, worked: Worked, finished: Finished) -> None:
        mark = worked.calculation.mark
        self.worked, self.values, self.slots = worked, worked.values, worked.plan.slots
        self.script, self.forms, self.scripts = finished.scripts[mark], finished.forms[mark], finished.scripts
        self.made: dict[tuple[int, Key], dict[str, Any]] = {}
        self.linked = linked_values(worked)
        self.required = {id(i.worked): i.number for i in self.script.items if isinstance(i, SayRequire)}
        self.unknowns = {(one.line.slot, one.key): one for one in below(worked.lines, WorkedUnknown)}
        self.plain = {planned.slot: planned.given.name for planned in worked.plan.givens}
        self.given = {one.given.name: one for one in worked.calculation.given}

    def line(self, entry: Entry, place: Place) -> dict[str, Any]:
        """Return a given value, a worked one or a requirement."""
        assert not isinstance(place, WorkedCheck)
        found: dict[str, Any]
        match place:
            case WorkedRequire():
                found = {"line": self.required.get(id(place), 0), "gives": place.line.says}
                found |= {"value": None, "unit": None, "shown": "met", "formula": entry.formula}
                sides = joint_comparisons(place.line.condition)
                beside = [self.side(test, place.open, side) for test in sides for side in ("left", "right")]
            case WorkedGives():
                found = self.value(place.line.slot, place.key) | {"formula": entry.formula}
                beside = self.beside(place)
            case slot, key:
                found = self.value(slot, key) | ({"formula": entry.formula} if entry.formula else {})
                unknown = self.unknowns.get((slot, key))
                beside = self.roots(unknown) if unknown is not None else []
        found = {"line": found.pop("line"), "kind": entry.kind, "path": entry.path, **found, **self.more(entry, beside)}
        if isinstance(place, WorkedGives):
            found |= self.inputs(place)
        elif isinstance(place, tuple) and place in self.values.by_method:
            said = (item for item in self.script.items if isinstance(item, SayOutput | SayOutputs))
            # what is not printed has the number of the method already
            method = next((item.of for item in said if item.number == found["line"]), found["line"])
            found |= {"method": self.values.by_method[place].kind, "from": [f"{self.forms.mark}.{method}"]}
        elif isinstance(place, tuple) and place in self.linked:
            link = self.linked[place]
            theirs = self.scripts[link.mark]
            found["from"] = [f"{link.mark}.{theirs.line_of.get(link_place(link, theirs.worked), 0)}"]
        return found

    def more(self, entry: Entry, beside: list[str]) -> dict[str, Any]:
        """Return what only some lines have."""
        found: dict[str, Any] = {"cite": entry.cite}
        if entry.case:
            found["case"] = entry.case
        if entry.again > 1:
            found["again"] = entry.again
        printed = [text for text in beside if text]
        if printed:
            found["beside"] = printed
        return found

    def beside(self, gives: WorkedGives) -> list[str]:
        """Return the other numbers of a line: sides of what chose its form; its result in other units."""
        found = []
        if len(gives.line.arms) > 1:
            tests = self.forms.because(gives.line, gives.arm)
            found += [self.side(test, gives.open, side) for test in tests for side in ("left", "right")]
        coherent = self.forms.coherent(gives)
        return [*found, figure_text(coherent)] if coherent is not None else found

    def roots(self, unknown: WorkedUnknown) -> list[str]:
        """Return both sides of an equation at its root, as printed."""
        found = [figure_text(self.forms.equation(unknown, side)) for side in ("left", "right")]
        return [*found, *self.beside(unknown.closed)] if unknown.closed is not None else found

    def side(self, test: Compare, opened: Opened, side: str) -> str:
        """Return a side of a comparison as printed, '' where it has no number."""
        figure = self.forms.side(test, opened, side)
        return figure_text(figure) if figure is not None else ""

    def value(self, slot: int, key: Key) -> dict[str, Any]:
        """Return a value with its number, printed form and rows; made once, as many formulas take it."""
        found = self.made.get((slot, key))
        if found is None:
            found = self.made[slot, key] = self._value(slot, key)
        return found

    def _value(self, slot: int, key: Key) -> dict[str, Any]:
        symbol = self.slots[slot]
        unit = symbol.symbol.unit or ONE
        value = self.values.get(slot, key)
        entry: dict[str, Any] = {"line": self.script.line_of.get((slot, key), 0), "gives": symbol.path}
        if symbol.sets:
            entry["rows"] = _row_names(symbol.sets, key, self.script)
        if isinstance(value, float):
            entry |= {"value": value / unit.size, "unit": unit.text, "shown": figure_text(self.forms.figure(slot, key))}
        else:
            entry |= {"value": value, "unit": None, "shown": value}
        given = self.given.get(self.plain.get(slot, "")) if not key else None
        typed = typed_beside(given, symbol.symbol) if isinstance(given, GivenValue) else ""
        return entry | ({"typed": typed} if typed else {})

    def inputs(self, gives: WorkedGives) -> dict[str, Any]:
        """Return the values a formula takes in open rows, as printed, and the lines they stand on."""
        rows = dict(gives.open)
        shown: dict[str, str] = {}
        origins: list[str] = []
        for name in names(gives.line.arms[gives.arm].formula):
            sets = self.values.sets[name.slot] if name.slot >= 0 else ()
            if name.slot < 0 or any(index not in rows for index in sets):
                continue
            value = self.value(name.slot, tuple(rows[index] for index in sets))
            shown[name.name] = with_unit(value["shown"], value["unit"])
            origins.append(f"{self.forms.mark}.{value['line']}")
        return {"shown_inputs": shown, "from": list(dict.fromkeys(origins))}

    def check(self, entry: Entry, check: WorkedCheck) -> dict[str, Any]:
        """Return a check with its sides."""
        number = self.script.check_line.get(id(check), 0)
        found: dict[str, Any] = {"name": check.line.name, "path": entry.path, "line": number, "kind": check.kind}
        by, beside = check.by, [check.reason]
        if by is not None:
            unit = side_unit(by.test, self.forms)
            left, right = by.left / unit.size, by.right / unit.size
            if check.kind in ("demand / capacity", "ratio"):
                found |= {"demand": left, "capacity": right}
            elif check.kind == "required / provided":
                found |= {"required": right, "provided": left}
            else:
                found |= {"left": left, "right": right}
            found["unit"] = unit.text
            if is_size(by.test.left):
                found["of"] = "size"
            beside += [self.side(by.test, check.open, side) for side in ("left", "right")]
        figure = self.forms.ratio(check)
        found |= {"ratio": check.ratio, "shown": number_text(figure) if figure else "", "verdict": check.verdict}
        found |= {"formula": entry.formula, **self.more(entry, beside)}
        if check.reason:
            found["reason"] = check.reason
        if check.open:
            sets = tuple(index for index, _ in check.open)
            rows = _row_names(sets, tuple(row for _, row in check.open), self.script)
            found["rows"] = [f"{self.worked.plan.sets[s].name} {row}" for s, row in zip(sets, rows, strict=True)]
        return found


def with_unit(shown: str | None, unit: str | None) -> str:
    """Return a printed value with its unit."""
    return " ".join(text for text in (shown, "" if unit == "1" else unit) if text)


def figure_text(figure: Figure) -> str:
    """Return a printed figure as plain text."""
    return number_text(figure) + (f" × 10^{figure.exponent}" if figure.exponent else "")


def _row_names(sets: tuple[int, ...], key: Key, script: Script) -> list[str]:
    values, plan = script.worked.values, script.worked.plan
    rows = dict(zip(sets, key, strict=True))
    found = []
    for index in sets:
        outer = tuple(rows[o] for o in plan.sets[index].outer)
        found.append(values.names[index][outer][rows[index]])
    return found
