"""What a question from the site comes to: as designed against as built, which lines follow, and which do not.

Both runs and their differences in; what sheet and terminal say of them out. Nothing here judges what was built.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from calcreport.calculate.model import Calculation, GivenValue, LinkedValue, Symbol, WorkedCheck, singles
from calcreport.core.quantity import Amount
from calcreport.history.model import Change, Difference, Entry
from calcreport.report.compared import Compared, printed_value
from calcreport.report.digits import number_text
from calcreport.report.fronts import counted

DESIGNED, BUILT = "as designed", "as built"
NO_VERDICT = (
    "This sheet is no verdict on acceptance: that is the engineer of record's. It sets computed demand against "
    "computed capacity for the checks listed, from what the site reports, which the program does not verify. What was "
    "built may bear on limit states, details and members that no calculation of this package holds."
)
UNTOUCHED = "The issued package and the project file are as they were; this sheet is no revision of them."


@dataclass(frozen=True, slots=True)
class Answer:
    """Both runs, held against each other."""

    compared: Compared
    #: what it replies to, such as 'RFI-031'
    reply: str
    #: the calculation or member asked about, and its title
    mark: str
    title: str
    #: where a value built otherwise says it was taken from
    source: str

    @property
    def affected(self) -> tuple[Difference, ...]:
        """Calculations in which anything moved, in the project's order."""
        return tuple(d for d in self.compared.differences if any(moved(d)) or _ends_otherwise(d))

    @property
    def unaffected(self) -> tuple[Difference, ...]:
        """Calculations equal to the last bit."""
        affected = {d.mark for d in self.affected}
        return tuple(d for d in self.compared.differences if d.mark not in affected)

    def changed(self) -> Iterator[tuple[str, Change]]:
        """Yield what was built otherwise, with its calculation."""
        for difference in self.affected:
            for change in moved(difference):
                if change.entry.kind == "given" and self.source in (change.second.cite if change.second else ""):
                    yield difference.mark, change

    def checks(self) -> Iterator[tuple[str, Change]]:
        """Yield the checks that moved, with their calculation."""
        for difference in self.affected:
            yield from ((difference.mark, change) for change in moved(difference) if change.entry.kind == "check")

    def values(self) -> Iterator[tuple[str, Change]]:
        """Yield the values that follow: worked ones, and given ones that another calculation hands over."""
        direct = {(mark, change.entry.identity) for mark, change in self.changed()}
        for difference in self.affected:
            for change in moved(difference):
                if change.entry.kind != "check" and (difference.mark, change.entry.identity) not in direct:
                    yield difference.mark, change

    @property
    def not_met(self) -> tuple[tuple[str, str, str], ...]:
        """Checks of affected calculations that are not OK as built: mark, name with rows, verdict."""
        found = []
        for difference in self.affected:
            after = difference.second
            for entry in after.entries if after is not None else ():
                if entry.kind == "check" and entry.verdict not in ("OK", "not applicable"):
                    found.append((difference.mark, entry.path, entry.verdict))
        return tuple(found)

    @property
    def stopped(self) -> tuple[tuple[str, str], ...]:
        """Calculations that cannot be worked to their end as built: mark and why."""
        return tuple((d.mark, d.second.stopped) for d in self.affected if d.second is not None and d.second.stopped)


def moved(difference: Difference) -> Iterator[Change]:
    """Yield the lines that differ in more than where a given value was taken from."""
    return (change for change in difference.changes if set(change.differs) != {"citation"})


def equal(difference: Difference) -> int:
    """Return how many lines are equal."""
    return difference.equal + len(difference.changes) - sum(1 for _ in moved(difference))


def _ends_otherwise(difference: Difference) -> bool:
    first, second = difference.first, difference.second
    return difference.verdict_flipped or first is None or second is None or first.stopped != second.stopped


def headline(answer: Answer) -> str:
    """Return what becomes of the checks, in one line."""
    checks = list(answer.checks())
    flipped = [change for _, change in checks if "verdict" in change.differs]
    words = f"{counted(len(checks), 'check')} {'differs' if len(checks) == 1 else 'differ'} as built"
    words += f", {len(flipped)} with another verdict" if flipped else ", none with another verdict"
    failed = [f"{mark} {path} {verdict}" for mark, path, verdict in answer.not_met]
    found = f"{words}; as built {', '.join(failed[:6])}" if failed else f"{words}; as built no check is NG"
    more = f" and {len(failed) - 6} more" if len(failed) > 6 else ""
    return f"{found}{more}."


def unaffected_words(answer: Answer) -> str:
    """Return which calculations are equal, claimed from every line of them."""
    same = answer.unaffected
    here = sum(equal(d) for d in answer.affected)
    words = f"In the calculations above {counted(here, 'other line')} {'is' if here == 1 else 'are'} equal."
    if not same:
        return words
    marks = [d.mark for d in same]
    named = ", ".join(marks[:60]) + (f" and {len(marks) - 60} more" if len(marks) > 60 else "")
    lines = sum(d.equal for d in same)
    return f"{words} Equal to the last bit in all {counted(lines, 'line')}: {named}."


def beside(answer: Answer) -> list[tuple[Symbol, str]]:
    """Return what the change does not reach though it may: the same material, the same value typed once more.

    Each is the symbol and the words that follow it.
    """
    calculations = {w.calculation.mark: w.calculation for w in answer.compared.project.calculations}
    joined = _joined(calculations)
    changed = list(answer.changed())
    direct = {(mark, change.entry.path) for mark, change in changed}
    found: list[tuple[Symbol, str]] = []
    for mark, change in changed:
        name = change.entry.path.rpartition("].")[2]
        own = next((value for value in singles(calculations[mark].given) if value.given.name == name), None)
        if own is None or own.given.symbol is None or change.first is None or not isinstance(own.value, Amount):
            continue
        others = [(m, v) for m, c in calculations.items() if (m, name) not in direct for v in _singles(c)]
        of = own.origin if own.origin.kind == "material" else None
        if of is not None:
            same = [m for m, v in others if v.origin == of and v.given.property == own.given.property]
        else:
            same = [m for m, v in others if m in joined[mark] and v.given.name == name
                    and isinstance(v.value, Amount) and float(v.value.value) == change.first.value]  # fmt: skip
        if same:
            shown = printed_value(answer.compared.design, mark, change.first)
            material = f" of the material {of.words}" if of is not None else ""
            marks = ", ".join(dict.fromkeys(same))
            words = f"{material} is taken as built in {mark} alone; it is {shown}, as designed, in {marks} too."
            found.append((own.given.symbol, words))
    return found


def _singles(calculation: Calculation) -> Iterator[GivenValue]:
    return (value for value in calculation.given if isinstance(value, GivenValue))


def _joined(calculations: dict[str, Calculation]) -> dict[str, set[str]]:
    """Return for every calculation those that links join it with, in whatever direction and over however many."""
    groups = {mark: {mark} for mark in calculations}
    for mark, calculation in calculations.items():
        for value in singles(calculation.handed):
            if isinstance(value.value, LinkedValue) and value.value.mark in groups:
                one, other = groups[mark], groups[value.value.mark]
                if one is not other:
                    one |= other
                    groups |= dict.fromkeys(other, one)
    return groups


def ratio_words(answer: Answer, mark: str, entry: Entry | None, built: bool) -> str:
    """Return ratio and verdict of a check as its sheet prints them."""
    if entry is None:
        return "no such check"
    side = answer.compared.other if built else answer.compared.design
    place = side.place(mark, entry)
    assert isinstance(place, WorkedCheck)
    ratio = side.told[mark].forms.ratio(place)
    return f"{number_text(ratio)} {place.verdict}" if ratio else place.verdict


def missing_words(answer: Answer, mark: str, change: Change) -> str:
    """Return what stands where one side has no such line: a calculation that stopped did not reach it."""
    account = next(d.first if change.first is None else d.second for d in answer.affected if d.mark == mark)
    if account is None or not account.stopped:
        return "no such line"
    is_stop = change.entry.kind == "requirement" and change.entry.path.rpartition("].")[2] in account.stopped
    return "not met" if is_stop else "not reached"
