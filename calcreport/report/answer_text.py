"""The answer to a question from the site, as a terminal shows it and as an object for machines."""

from __future__ import annotations

from typing import Any

from calcreport.core.version import PROGRAM
from calcreport.history.model import Change, Entry
from calcreport.report.answer import (
    BUILT,
    DESIGNED,
    NO_VERDICT,
    UNTOUCHED,
    Answer,
    beside,
    headline,
    missing_words,
    unaffected_words,
)
from calcreport.report.compared import Side, change_words, printed_value

FORMAT = 1


def answer_lines(answer: Answer) -> list[str]:
    """Return what differs, each side below its name, then what does not and what the answer is not."""
    found = [f"{answer.reply}: {answer.mark}  {answer.title}", headline(answer)]
    for title, changes in (("built otherwise", answer.changed()), ("checks affected", answer.checks()),
                           ("values that follow", answer.values())):  # fmt: skip
        rows = [row for mark, change in changes for row in _rows(answer, mark, change)]
        found += ["", f"{title}:", *rows] if rows else []
    found += [f"{mark} as built stopped: {why}" for mark, why in answer.stopped]
    return [*found, "", *not_reached(answer), unaffected_words(answer), NO_VERDICT, UNTOUCHED]


def not_reached(answer: Answer) -> list[str]:
    """Return what the change does not reach, as plain text."""
    return [symbol.name + words for symbol, words in beside(answer)]


def _rows(answer: Answer, mark: str, change: Change) -> list[str]:
    compared = answer.compared
    number = compared.design.line(mark, change.first) if change.first is not None else 0
    change_said = change_words(compared, mark, change)
    head = (
        f"  {f'{mark}.{number}' if number else mark:<8}{change.entry.path}{f'  {change_said}' if change_said else ''}"
    )
    rows = [head]
    for name, side, entry in ((DESIGNED, compared.design, change.first), (BUILT, compared.other, change.second)):
        rows.append(
            f"          {name:<{len(DESIGNED)}}  {_shown(side, mark, entry) or missing_words(answer, mark, change)}"
        )
    return rows


def _shown(side: Side, mark: str, entry: Entry | None) -> str:
    return printed_value(side, mark, entry) if entry is not None else ""


def answer_object(answer: Answer, sheet: str) -> dict[str, Any]:
    """Return the answer for machines, values unrounded in the unit each line declares."""
    return {
        "program": PROGRAM,
        "format": FORMAT,
        "reply": answer.reply,
        "mark": answer.mark,
        "sheet": sheet,
        "as_designed": answer.compared.project.fingerprint,
        "changed": [_object(answer, mark, change) for mark, change in answer.changed()],
        "checks": [_object(answer, mark, change) for mark, change in answer.checks()],
        "values": [_object(answer, mark, change) for mark, change in answer.values()],
        "not_ok": [list(one) for one in answer.not_met],
        "stopped": dict(answer.stopped),
        "unaffected": [d.mark for d in answer.unaffected],
        "not_reached": not_reached(answer),
        "note": NO_VERDICT,
    }


def _object(answer: Answer, mark: str, change: Change) -> dict[str, Any]:
    sides = ((DESIGNED, answer.compared.design, change.first), (BUILT, answer.compared.other, change.second))
    found: dict[str, Any] = {"mark": mark, "path": change.entry.path, "kind": change.entry.kind}
    return found | {name.replace(" ", "_"): _entry(side, mark, entry) for name, side, entry in sides}


def _entry(side: Side, mark: str, entry: Entry | None) -> dict[str, Any] | None:
    if entry is None:
        return None
    value = entry.value / entry.size if isinstance(entry.value, float) else entry.value
    return {"line": side.line(mark, entry), "value": value, "unit": entry.unit,
            "shown": printed_value(side, mark, entry), "verdict": entry.verdict or None}  # fmt: skip
