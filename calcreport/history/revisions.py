"""Which revision a calculation and each of its lines last changed in, from the comparison with the issue before.

A comparison and the number of the present revision in, revisions out; a pure function. What has not changed keeps the
revision it had in the issue before, so one issue is all that need be kept of the past.
"""

from __future__ import annotations

from calcreport.history.model import Comparison, Difference, Identity, Revised, Revisions


def revise(comparison: Comparison, now: Revised) -> Revisions:
    """Return the revisions of the second issue of a comparison, which is being made as revision `now`."""
    revised: dict[str, Revised] = {}
    since: dict[str, dict[Identity, str]] = {}
    for difference in comparison.differences:
        first, second = difference.first, difference.second
        if second is None:
            continue
        same = first is not None and not difference.differs and not difference.renamed
        revised[second.mark] = Revised(first.revision, first.date) if first is not None and same else now
        since[second.mark] = _lines(difference, now.number)
    return Revisions(comparison.first.revision, now, revised, since)


def _lines(difference: Difference, number: str) -> dict[Identity, str]:
    """Return the revision of each line that ever changed; on a calculation that is new no line has changed."""
    if difference.first is None:
        return {}
    found = {entry.identity: entry.changed for entry in difference.first.entries if entry.changed}
    found |= {change.second.identity: number for change in difference.changes if change.second is not None}
    return found
