"""Two accounts of one calculation held against each other: what differs, and how many lines do not.

A pure function of finished values. Lines are matched by kind and path, never by number; numbers are compared to the
last bit, before any rounding, and beside them what is printed where the accounts hold it. Whether the accounts come
from two editions of a code or from two issues makes no difference here.
"""

from __future__ import annotations

from calcreport.history.model import Account, Change, Difference, Differs, Entry, Identity


def differ(first: Account | None, second: Account | None) -> Difference:
    """Return how two accounts differ; None stands for a calculation that is not there."""
    before = first.entries if first is not None else ()
    after = second.entries if second is not None else ()
    there = {entry.identity: entry for entry in after}
    new = _new_after(before, after)
    changes = [_alone(entry) for entry in new.get(None, ())]
    equal = 0
    for entry in before:
        other = there.get(entry.identity)
        differs = _differs(entry, other) if other is not None else ("only in first",)
        if differs:
            changes.append(Change(entry, other, differs))
        else:
            equal += 1
        changes += [_alone(inserted) for inserted in new.get(entry.identity, ())]
    return Difference(first, second, tuple(changes), equal, _reordered(before, after))


def _reordered(before: tuple[Entry, ...], after: tuple[Entry, ...]) -> bool:
    """Tell whether the lines that both have stand in another order."""
    one, two = [entry.identity for entry in before], [entry.identity for entry in after]
    both = set(one) & set(two)
    return [identity for identity in one if identity in both] != [identity for identity in two if identity in both]


def _alone(entry: Entry) -> Change:
    return Change(None, entry, ("only in second",))


def _new_after(before: tuple[Entry, ...], after: tuple[Entry, ...]) -> dict[Identity | None, list[Entry]]:
    """Return the entries only in the second by the last common line before them, None for none."""
    known = {entry.identity for entry in before}
    found: dict[Identity | None, list[Entry]] = {}
    last: Identity | None = None
    for entry in after:
        if entry.identity in known:
            last = entry.identity
        else:
            found.setdefault(last, []).append(entry)
    return found


def _differs(first: Entry, second: Entry) -> tuple[Differs, ...]:
    found: list[Differs] = []
    if type(first.value) is not type(second.value) or first.value != second.value:
        found.append("value")
    if first.formula != second.formula:
        found.append("formula")
    if first.case != second.case:
        found.append("case")
    if first.cite != second.cite:
        found.append("citation")
    if first.verdict != second.verdict:
        found.append("verdict")
    printed = (first.unit, first.shown, first.beside) != (second.unit, second.shown, second.beside)
    if printed and "value" not in found:
        found.append("print")
    if first.linked != second.linked:
        found.append("link")
    if first.taken != second.taken and not found:
        found.append("inputs")
    return tuple(found)
