"""What a comparison of two issues says of one calculation and of one line, in words shared by sheet and terminal.

Differences in, words out. A move in per cent is taken from the numbers as printed, so that a reader can confirm it.
"""

from __future__ import annotations

from functools import cache

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.core.units import read_unit
from calcreport.history.model import Account, Change, Comparison, Difference, Entry, FactChange
from calcreport.report.digits import rounded
from calcreport.report.display import unit_text
from calcreport.report.fronts import counted, short_date

#: a change smaller than this share is not put in a number
LEAST = 0.001
#: facts of an account that differ by themselves, and what is said of them
_OTHER = (
    ("template", "another template"),
    ("dispositions", "the engineer's disposition"),
    ("closures", "sums that prove a method"),
)


def issue_words(comparison: Comparison) -> tuple[str, str]:
    """Return what both sides are called: 'issue 1', 'issue 2'; 'former' and 'present' where both are one number."""
    first, second = comparison.first.revision, comparison.second.revision
    return ("former", "present") if first == second else (f"issue {first}", f"issue {second}")


def dated(comparison: Comparison) -> tuple[str, str]:
    """Return both sides with their dates and statuses."""
    sides = zip(issue_words(comparison), (comparison.first, comparison.second), strict=True)
    one, two = (f"{words} of {short_date(side.revision_date)}, {side.status}" for words, side in sides)
    return one, two


def package_words(comparison: Comparison) -> list[str]:
    """Say what of the package as a whole differs."""
    first, second = comparison.first, comparison.second
    found = []
    if comparison.status_changed:
        alone = "" if comparison.calculations_differ or comparison.facts else "; nothing else differs"
        found.append(f"status {first.status}, now {second.status}{alone}")
    if first.program != second.program:
        found.append(f"made by {first.program}, now by {second.program}: wording and layout are not compared")
    return found + [fact_words(change) for change in comparison.facts]


def listed(difference: Difference) -> tuple[Change, ...]:
    """Return the changes worth a row: lines that take other values and come to the same are counted only."""
    return tuple(change for change in difference.changes if not change.quiet)


def kind_words(entry: Entry) -> str:
    """Return what a line is called."""
    if entry.kind == "requirement":
        return f"required: {entry.path}"
    return f"check {entry.path}" if entry.kind == "check" else entry.path


def value_words(entry: Entry | None) -> str:
    """Return a line's value as its sheet prints it."""
    if entry is None:
        return "no such line"
    if entry.kind == "check":
        return f"{entry.shown} {entry.verdict}".strip()
    if entry.unit == "1" or not isinstance(entry.value, float):
        return entry.shown or "none"
    return entry.shown.replace(f" {entry.unit}", f" {_unit_words(entry.unit)}", 1)


@cache
def _unit_words(text: str) -> str:
    """Return a unit as the trade writes it; one that is not in the table stays as it is."""
    unit = read_unit(text, Span(Source("unit", text), 0, len(text)), Problems())
    return unit_text(unit) if unit is not None else text


def move_words(change: Change) -> str:
    """Return how far a number moved, or what of the line differs where it is not the number."""
    first, second = change.first, change.second
    if first is None or second is None:
        return "inserted" if first is None else "removed"
    if "value" in change.differs:
        return _move(first, second)
    told = {"verdict": "verdict", "formula": "formula", "case": "another case", "citation": "source",
            "print": "same value, other digits", "link": "from another line"}  # fmt: skip
    return ", ".join(words for kind, words in told.items() if kind in change.differs)


def _move(first: Entry, second: Entry) -> str:
    one, two = _printed(first.shown), _printed(second.shown)
    if not isinstance(first.value, float) or not isinstance(second.value, float) or one is None or two is None:
        return ""
    if first.unit != second.unit:
        return "another unit"
    if first.shown == second.shown:
        return "alike in print"
    if one * two <= 0:
        return "another sign" if one * two < 0 else ""
    if abs(second.value - first.value) < LEAST * abs(first.value):
        return "under 0.1 %"
    # of its size: a hogging moment that grows is told as one that grows
    return f"{rounded(100 * (abs(two) - abs(one)) / abs(one), 1):+.1f} %".replace("-", "−")


def _printed(shown: str) -> float | None:
    """Return the number a printed value begins with."""
    number, _, rest = shown.partition(" ")
    try:
        found = float(number.replace(",", "").replace("−", "-"))
        return found * 10.0 ** int(rest[4:].split(" ")[0].replace("−", "-")) if rest.startswith("× 10^") else found
    except (ValueError, OverflowError):
        return None


def flip_words(difference: Difference) -> tuple[str, ...]:
    """Say what of a calculation as a whole differs, what needs eyes first."""
    first, second = difference.first, difference.second
    if first is None or second is None:
        return ()
    found = [f"mark {first.mark}, now {second.mark}"] if difference.renamed else []
    for what, field in (("verdict", "verdict"), ("governing check", "governing"), ("title", "title")):
        if difference.other(field):
            found.append(f"{what} {getattr(first, field) or 'none'}, now {getattr(second, field) or 'none'}")
    if difference.other("stopped"):
        found.append(f"stopped: {second.stopped}" if second.stopped else f"no longer stopped: {first.stopped}")
    if difference.other("selection"):
        found.append(_selection(first, second))
    if difference.files:
        found.append(f"template text changed: {', '.join(difference.files)}")
    if difference.other("headings"):
        told = [words for words in second.headings if words not in first.headings]
        found.append(f"told in full now: {', '.join(told)}" if told else "fewer rows told in full")
    found += [words for field, words in _OTHER if difference.other(field)]
    if difference.reordered:
        found.append("lines in another order")
    if not found and not difference.changes and difference.other("fingerprint"):
        found.append("input text changed")
    return tuple(found)


def _selection(first: Account, second: Account) -> str:
    """Say which candidate is used now, or that only what the candidates came to differs."""
    one, two = (account.selection[0] if account.selection else "none" for account in (first, second))
    return f"selection {one}, now {two}" if one != two else f"selection {two} as before, candidates' outcomes changed"


def count_words(difference: Difference) -> str:
    """Count the lines that differ, those that take other values only, and those found equal."""
    rows = len(listed(difference))
    quiet = len(difference.changes) - rows
    found = f"{counted(rows, 'line')} {'differs' if rows == 1 else 'differ'}"
    found += (
        f", {quiet} more {'takes other values and comes' if quiet == 1 else 'take other values and come'} to the same"
        if quiet
        else ""
    )
    return f"{found}, {difference.equal} equal"


def fact_words(change: FactChange) -> str:
    """Say how a fact of the package differs."""
    fact = change.fact
    name = f"{fact.group} {fact.name}".strip()
    if change.first is None or change.second is None:
        how = "added" if change.first is None else "removed"
        return f"{name} {how}: {fact.text}"
    return f"{name} {change.first.text}, now {change.second.text}"


def headline(comparison: Comparison) -> str:
    """Return in one line how many calculations differ, and which come to another verdict."""
    same = len(comparison.unchanged)
    there = len([d for d in comparison.differences if d.second is not None])
    flipped = [f"{d.mark} ({d.first.verdict}, now {d.second.verdict})"
               for d in comparison.changed if d.verdict_flipped and d.first and d.second]  # fmt: skip
    changed = there - same
    words = f"{changed} of {counted(there, 'calculation')} {'differs' if changed == 1 else 'differ'}"
    gone = f"; removed: {', '.join(d.mark for d in comparison.removed)}" if comparison.removed else ""
    return f"{words}{gone}; another verdict: {', '.join(flipped) or 'none'}."


def sheet_words(account: Account) -> str:
    """Return the sheets of a calculation: 'B1-1 to B1-3'."""
    return f"{account.mark}-1" + (f" to {account.mark}-{account.sheets}" if account.sheets > 1 else "")
