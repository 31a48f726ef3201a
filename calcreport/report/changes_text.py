"""Two issues compared, for the terminal and for machines.

A comparison in, lines of text or one JSON-ready object out.
"""

from __future__ import annotations

from typing import Any

from calcreport.core.version import PROGRAM
from calcreport.history.model import Account, Change, Comparison, Difference, Entry, Issued
from calcreport.report.fronts import counted
from calcreport.report.moved import (
    count_words,
    dated,
    flip_words,
    headline,
    kind_words,
    listed,
    move_words,
    package_words,
    sheet_words,
    value_words,
)

FORMAT = 1
#: sheets of every package that say what the whole came to, and so change with any calculation
FRONTS = ("COVER", "INDEX", "SUMMARY")


def changes_lines(comparison: Comparison) -> list[str]:
    """Return the comparison as lines of text."""
    one, two = dated(comparison)
    found = [f"{comparison.second.title}: {one}, against {two}", headline(comparison)]
    found += [f"package: {words}" for words in package_words(comparison)]
    for difference in (*comparison.changed, *comparison.added):
        found += ["", *_calculation(difference)]
    found += [f"\nremoved: {d.first.mark}  {d.first.title}" for d in comparison.removed if d.first]
    found += ["", *_extent(comparison)]
    return found


def _calculation(difference: Difference) -> list[str]:
    second = difference.second
    assert second is not None
    if difference.first is None:
        lines = counted(len(second.entries), "line")
        return [f"{second.mark}  {second.title}", f"  added: {lines}, {second.verdict}"]
    found = [f"{second.mark}  {second.title}"]
    found += [f"  {words}" for words in flip_words(difference)]
    found.append(f"  {count_words(difference)}")
    rows = listed(difference)
    groups = (
        ("inputs", [c for c in rows if c.entry.kind == "given"]),
        ("results", [c for c in rows if c.entry.kind in ("value", "requirement")]),
        ("checks", [c for c in rows if c.entry.kind == "check"]),
    )
    for title, changes in groups:
        found += [f"  {title}"] if changes else []
        for change in changes:
            found.append(_change(second.mark, change))
    return found


def _change(mark: str, change: Change) -> str:
    first, second = change.first, change.second
    line = f"{mark}.{second.line}" if second is not None and second.line else ""
    alone = first is None or second is None
    same = not alone and value_words(first) == value_words(second)
    values = value_words(second or first) if alone or same else f"{value_words(first)}, now {value_words(second)}"
    moved = move_words(change)
    words = f"    {line:<9} {kind_words(change.entry)}  {values}" + (f"  ({moved})" if moved else "")
    if first is not None and second is not None:
        if "formula" in change.differs:
            words += f"\n{'':<16}{first.formula}, now {second.formula}"
        if "citation" in change.differs:
            words += f"\n{'':<16}{first.cite or 'no source'}, now {second.cite or 'no source'}"
    return words


def _extent(comparison: Comparison) -> list[str]:
    """Say which sheets are affected, and of which that was found not to be so."""
    affected = [d.second for d in (*comparison.changed, *comparison.added) if d.second is not None]
    found = []
    if affected:
        found.append(f"sheets affected: {', '.join(map(sheet_words, affected))}, and {', '.join(FRONTS)}")
    same = comparison.unchanged
    lines = sum(d.equal for d in same)
    if same:
        found.append(f"not affected, every printed value of {counted(lines, 'line')} compared and equal: "
                     + ", ".join(f"{d.mark} ({d.equal})" for d in same))  # fmt: skip
    back = [d.mark for d in comparison.returned]
    if back:
        found.append(f"changed in between and changed back: {', '.join(back)}")
    return found


def changes_object(comparison: Comparison) -> dict[str, Any]:
    """Return the comparison for machines, values unrounded in the unit of each line."""
    affected = [d.second for d in (*comparison.changed, *comparison.added) if d.second is not None]
    return {
        "program": PROGRAM,
        "format": FORMAT,
        "first": _side(comparison.first),
        "second": _side(comparison.second),
        "differs": comparison.differs,
        "facts": [{"group": c.fact.group, "name": c.fact.name, "first": c.first.text if c.first else None,
                   "second": c.second.text if c.second else None} for c in comparison.facts],
        "changed": {d.mark: _difference(d) for d in comparison.changed},
        "added": [d.mark for d in comparison.added],
        "removed": [d.mark for d in comparison.removed],
        "not_affected": {d.mark: d.equal for d in comparison.unchanged},
        "changed_back": [d.mark for d in comparison.returned],
        "sheets": {account.mark: account.sheets for account in affected},
    }  # fmt: skip


def _side(side: Issued) -> dict[str, str]:
    return {"title": side.title, "revision": side.revision, "date": side.date, "status": side.status,
            "program": side.program}  # fmt: skip


def _difference(difference: Difference) -> dict[str, Any]:
    first, second = difference.first, difference.second
    assert first is not None and second is not None
    return {
        "was": first.mark if difference.renamed else None,
        "title": _pair(first, second, "title"),
        "template": _pair(first, second, "template"),
        "template_files": list(difference.files),
        "verdict": _pair(first, second, "verdict"),
        "governing": _pair(first, second, "governing"),
        "stopped": _pair(first, second, "stopped"),
        "selection": [account.selection[0] if account.selection else None for account in (first, second)]
        if difference.other("selection") else None,
        "reordered": difference.reordered,
        "equal": difference.equal,
        "changes": [
            {"kind": c.entry.kind, "path": c.entry.path, "again": c.entry.again, "differs": list(c.differs),
             "first": _entry(c.first), "second": _entry(c.second)} for c in difference.changes
        ],
    }  # fmt: skip


def _pair(first: Account, second: Account, field: str) -> list[str] | None:
    """Return a field of both accounts where it differs, else None."""
    one, two = getattr(first, field), getattr(second, field)
    return None if one == two else [one, two]


def _entry(entry: Entry | None) -> dict[str, Any] | None:
    if entry is None:
        return None
    return {"line": entry.line, "value": entry.value, "unit": entry.unit, "shown": entry.shown,
            "formula": entry.formula, "case": entry.case, "cite": entry.cite, "verdict": entry.verdict}  # fmt: skip
