"""Two editions of a code held against each other: both runs with their forms, and what sheet and terminal say of them.

Differences and calculations as they are told in, words out.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.calculate.model import WorkedCheck, WorkedGives, WorkedProject, WorkedRequire
from calcreport.core.units import ONE
from calcreport.history.model import Account, Change, Difference, Entry, Identity, Place
from calcreport.report.digits import Figure, number_text, rounded
from calcreport.report.display import unit_text
from calcreport.report.fronts import counted
from calcreport.report.items import SayRequire
from calcreport.report.model import Strong, Words
from calcreport.report.told import Told

#: a change smaller than this share is not put in a number
LEAST = 0.001


@dataclass(frozen=True, slots=True)
class Side:
    """One edition: what it is called, and its calculations as they are told."""

    code: str
    told: dict[str, Told]
    #: where the lines of a calculation stand in this run
    places: dict[str, dict[Identity, Place]]

    def place(self, mark: str, entry: Entry) -> Place:
        """Return where a line stands."""
        return self.places[mark][entry.identity]

    def line(self, mark: str, entry: Entry) -> int:
        """Return the number of a line on the sheets of this edition, 0 for none."""
        place, script = self.place(mark, entry), self.told[mark].script
        match place:
            case WorkedGives():
                return script.line_of.get((place.line.slot, place.key), 0)
            case WorkedCheck():
                return script.check_line.get(id(place), 0)
            case WorkedRequire():
                said = (item for item in script.items if isinstance(item, SayRequire))
                return next((item.number for item in said if item.worked is place), 0)
            case _:
                return script.line_of.get(place, 0)

    def figure(self, mark: str, entry: Entry) -> Figure | None:
        """Return the printed figure of a line, None for a word or a line without a number."""
        place, forms = self.place(mark, entry), self.told[mark].forms
        if isinstance(place, WorkedRequire) or not isinstance(entry.value, float):
            return None
        if isinstance(place, WorkedCheck):
            return forms.ratio(place)
        return forms.figure(*((place.line.slot, place.key) if isinstance(place, WorkedGives) else place))


@dataclass(frozen=True, slots=True)
class Compared:
    """Two editions held against each other: the design's first."""

    project: WorkedProject
    design: Side
    other: Side
    differences: tuple[Difference, ...]
    #: (mark, why) of calculations that cannot be worked to the other edition
    apart: tuple[tuple[str, str], ...]
    #: words where the adopted code does not refer to the other edition, or ''
    foreign: str

    @property
    def differ(self) -> bool:
        """Whether anything differs, or could not be compared."""
        return bool(self.apart) or any(difference.differs for difference in self.differences)


def headline(compared: Compared) -> str:
    """Return which calculations come to another verdict, in one line."""
    design, other = compared.design.code, compared.other.code
    flipped = [
        f"{d.mark} ({_verdict(d.first)} to {design}, {_verdict(d.second)} to {other})"
        for d in compared.differences
        if d.verdict_flipped and d.first is not None and d.second is not None
    ]
    changed = sum(d.differs for d in compared.differences)
    calculations = counted(len(compared.differences), "calculation")
    words = f"{changed} of {calculations} compared {'differs' if changed == 1 else 'differ'}"
    return f"{words}; another verdict: {', '.join(flipped) or 'none'}."


def _verdict(account: Account) -> str:
    if any(entry.kind == "check" for entry in account.entries):
        return account.verdict
    return "stopped" if account.stopped else "no check of its own"


def unchanged(compared: Compared) -> list[tuple[str, str]]:
    """Return the calculations in which nothing differs, those of other codes or none apart."""
    code = compared.design.code
    same = [d for d in compared.differences if not d.differs]
    groups = (
        ("Nothing differs", [d for d in same if d.first is not None and d.first.code == code]),
        (f"Nothing differs, and not written to {code}", [d for d in same if d.first is None or d.first.code != code]),
    )
    return [(title, ", ".join(f"{d.mark} ({counted(d.equal, 'line')})" for d in found) + ".")
            for title, found in groups if found]  # fmt: skip


def listed(difference: Difference) -> tuple[Change, ...]:
    """Return the changes worth a row: the lines that one edition did not reach are counted, not listed."""
    first, second = difference.first, difference.second
    assert first is not None and second is not None
    return tuple(
        change for change in difference.changes
        if not (change.second is None and second.stopped) and not (change.first is None and first.stopped)
    )  # fmt: skip


def verdict_words(compared: Compared, difference: Difference) -> Words:
    """Say verdict, governing check and stop of both editions, and how many lines differ."""
    first, second = difference.first, difference.second
    assert first is not None and second is not None
    design, other = compared.design.code, compared.other.code
    found: list[str | Strong] = []
    judged = any(entry.kind == "check" for account in (first, second) for entry in account.entries)
    found += [] if judged else ["Without checks of its own; "]
    for what, one, two in (("Verdict", first.verdict, second.verdict),
                           ("governing check", first.governing, second.governing)) if judged else ():  # fmt: skip
        if one == two:
            found.append(f"{what} {one} in both; " if one else "")
        else:
            found += [Strong(f"{what} {one or 'none'} to {design}, {two or 'none'} to {other}"), "; "]
    for account, code in ((first, design), (second, other)):
        found += [Strong(f"to {code} stopped: {account.stopped}"), "; "] if account.stopped else []
    unreached = len(difference.changes) - len(listed(difference))
    found.append(f"{counted(unreached, 'line')} not reached there; " if unreached else "")
    rows = len(listed(difference))
    found.append(f"{counted(rows, 'line')} {'differs' if rows == 1 else 'differ'}, {difference.equal} equal.")
    return tuple(word for word in found if word)


def change_words(compared: Compared, mark: str, change: Change) -> str:
    """Return how far a number moved, from the numbers as printed; words where there is no such number."""
    first, second = change.first, change.second
    if first is None or second is None or not isinstance(first.value, float):
        return ""
    if "value" not in change.differs:
        return "same value"
    one, two = compared.design.figure(mark, first), compared.other.figure(mark, second)
    if one is None or two is None or not one.printed:
        return ""
    assert isinstance(second.value, float)
    true, shown = (second.value - first.value) / abs(first.value or 1.0), (two.printed - one.printed) / abs(one.printed)
    if abs(true) < LEAST:
        return "under 0.1 %"
    if not rounded(100 * shown, 1):
        return "alike in print"
    return f"{rounded(100 * shown, 1):+.1f} %".replace("-", "−")


def printed_value(side: Side, mark: str, entry: Entry) -> str:
    """Return a line's value as plain text, as its sheet prints it."""
    place, told = side.place(mark, entry), side.told[mark]
    figure = side.figure(mark, entry)
    if isinstance(place, WorkedCheck):
        return f"{number_text(figure)} {place.verdict}" if figure else place.verdict
    if isinstance(place, WorkedRequire):
        return "met"
    if figure is None:
        return "none" if entry.value is None else str(entry.value)
    slot = place.line.slot if isinstance(place, WorkedGives) else place[0]
    power = f" × 10^{figure.exponent}" if figure.exponent else ""
    return f"{number_text(figure)}{power} {unit_text(told.slots[slot].symbol.unit or ONE)}".rstrip()
