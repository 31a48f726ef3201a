"""Two editions held against each other, as a terminal shows it and as an object for machines.

The terminal reads as the sheets do; the object keeps formulas as the templates spell them, for who looks them up.
"""

from __future__ import annotations

from typing import Any

from calcreport.core.version import PROGRAM
from calcreport.history.model import Change, Difference, Entry
from calcreport.report.compared import (
    Compared,
    Side,
    change_words,
    headline,
    listed,
    printed_value,
    unchanged,
    verdict_words,
)
from calcreport.report.editions import side_words, what_differs
from calcreport.report.fronts import counted
from calcreport.report.model import Strong
from calcreport.report.plain import plain_words

FORMAT = 1


def editions_lines(compared: Compared) -> list[str]:
    """Return what differs, a line of a calculation at a time, each edition below its name."""
    design, other = compared.design.code, compared.other.code
    found = [f"{design} is the design; {other} is worked from the same given values, for comparison only."]
    if compared.foreign:
        found.append(compared.foreign)
    found.append(headline(compared))
    for difference in compared.differences:
        if difference.first is None or not difference.differs:
            continue
        found.append("")
        found.append(f"{difference.mark}  {difference.first.title}")
        words = verdict_words(compared, difference)
        found.append("  " + "".join(w.text if isinstance(w, Strong) else str(w) for w in words))
        for change in listed(difference):
            found += _change(compared, difference.mark, change)
    for title, lines in unchanged(compared):
        found += ["", f"{title}: {lines}"]
    if compared.apart:
        found += ["", f"not compared, since they cannot be worked to {other}:"]
        found += [f"  {mark}  {why}" for mark, why in compared.apart]
    rows, equal = sum(len(d.changes) for d in compared.differences), sum(d.equal for d in compared.differences)
    differing = f"{counted(rows, 'line')} {'differs' if rows == 1 else 'differ'}, {equal} equal"
    calculations = counted(len(compared.differences), "calculation")
    found += ["", f"{calculations} compared: {differing}; {len(compared.apart)} not compared."]
    return found


def _change(compared: Compared, mark: str, change: Change) -> list[str]:
    number = compared.design.line(mark, change.first) if change.first is not None else 0
    moved = change_words(compared, mark, change)
    side = compared.design if change.first is not None else compared.other
    name = plain_words(what_differs(side.told[mark], change.entry, side.place(mark, change.entry)))
    head = f"  {f'{mark}.{number}' if number else '':<8}{name}{f'  {moved}' if moved else ''}"
    width = max(len(compared.design.code), len(compared.other.code))
    return [head, *(f"          {side.code:<{width}}  {plain_words(side_words(side, mark, entry, change))}"
                    for side, entry in ((compared.design, change.first), (compared.other, change.second)))]  # fmt: skip


def editions_object(compared: Compared) -> dict[str, Any]:
    """Return the comparison for machines, values unrounded in the unit each line declares."""
    return {
        "program": PROGRAM,
        "format": FORMAT,
        "design": compared.design.code,
        "compared": compared.other.code,
        "note": compared.foreign,
        "calculations": {d.mark: _difference(compared, d) for d in compared.differences},
        "not_compared": dict(compared.apart),
    }


def _difference(compared: Compared, difference: Difference) -> dict[str, Any]:
    first, second = difference.first, difference.second
    assert first is not None and second is not None
    return {
        "title": first.title,
        "template": first.template,
        "verdicts": [first.verdict, second.verdict],
        "governing": [first.governing, second.governing],
        "stopped": [first.stopped or None, second.stopped or None],
        "equal": difference.equal,
        "changes": [
            {"path": change.entry.path, "kind": change.entry.kind, "again": change.entry.again,
             "differs": list(change.differs), "design": _entry(compared.design, difference.mark, change.first),
             "compared": _entry(compared.other, difference.mark, change.second)}
            for change in difference.changes
        ],
    }  # fmt: skip


def _entry(side: Side, mark: str, entry: Entry | None) -> dict[str, Any] | None:
    if entry is None:
        return None
    value = entry.value / entry.size if isinstance(entry.value, float) else entry.value
    return {"line": side.line(mark, entry), "value": value, "unit": entry.unit,
            "shown": printed_value(side, mark, entry), "formula": entry.formula, "case": entry.case,
            "cite": entry.cite, "verdict": entry.verdict}  # fmt: skip
