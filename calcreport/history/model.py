"""What a calculation came to, line by line, and how two such accounts differ. Frozen; numbers are unrounded.

An account names lines by path and rows, never by number, so that it means the same in another issue, in another
edition of a code, and in a file. Nothing here knows pages; printed digits are texts beside the numbers. Kept in one:
records that are read together.
"""

from __future__ import annotations

from typing import Literal, TypeAlias

from calcreport.calculate.model import Key, WorkedCheck, WorkedGives, WorkedRequire
from calcreport.core.record import record

Kind: TypeAlias = Literal["given", "value", "check", "requirement"]
#: what of a line differs: `print` where the value is the same and its digits, or others printed beside it, are not;
#: `link` where it comes from another line of another calculation; `inputs` where it takes other values and comes to
#: the same; the last two stand alone
Differs: TypeAlias = Literal[
    "value", "formula", "case", "citation", "verdict", "print", "link", "inputs", "only in first", "only in second"
]
#: what the same line is known by in another account: kind, path, and which of several alike
Identity: TypeAlias = tuple[Kind, str, int]
#: a line in the run it was worked in: its record, or slot and key of a value that has none of its own
Place: TypeAlias = WorkedGives | WorkedCheck | WorkedRequire | tuple[int, Key]


@record
class Entry:
    """One line as it was finished: a given value, a worked value, a check or a requirement."""

    kind: Kind
    #: path with its rows: 'M_u', 'zone[middle].stem.phiV_n'; a check's name; what a requirement says
    path: str
    #: 2 and up where earlier lines have the same kind and path
    again: int
    #: number in base units, word, or None; of a check its ratio
    value: float | str | None
    #: unit the value is declared in and its size in base units
    unit: str
    size: float
    #: template text of the formula or condition worked; '' for a given value
    formula: str
    #: template text of the condition that chose the formula, 'otherwise', or '' where there is one formula only
    case: str
    #: citation; of a given value where it was taken from
    cite: str
    #: of a check, else ''
    verdict: str
    #: value as printed, with its unit and spelling as typed; '' in an account made without print
    shown: str = ""
    #: other numbers printed on the line: sides of a comparison, the result in other units
    beside: tuple[str, ...] = ()
    #: values it takes, as printed in its substitution
    taken: tuple[str, ...] = ()
    #: the line of another calculation a given value comes from, such as 'FL2.14', or ''
    linked: str = ""
    #: number of the line on its sheets; no part of a comparison, since an insertion moves it
    line: int = 0
    #: revision the line last changed in, '' where it stands as first issued
    changed: str = ""

    @property
    def identity(self) -> Identity:
        """What the same line is known by in another account."""
        return self.kind, self.path, self.again


@record
class Account:
    """One calculation, finished."""

    mark: str
    title: str
    template: str
    #: code with edition, '' for a template of no code
    code: str
    verdict: str
    #: name of the check of the highest rank, '' for none
    governing: str
    #: words of the stop, '' where it ran to its end
    stopped: str
    entries: tuple[Entry, ...]
    #: over given values and template text; '' in an account made without it, as are the fields below
    fingerprint: str = ""
    #: (file, digest) of the template's files
    files: tuple[tuple[str, str], ...] = ()
    #: what the candidates came to, one text a row of their table, and before them the one used
    selection: tuple[str, ...] = ()
    #: the engineer's words on its checks
    dispositions: tuple[str, ...] = ()
    #: the sums that prove the results of methods
    closures: tuple[str, ...] = ()
    #: headings of the rows and parts told in full
    headings: tuple[str, ...] = ()
    sheets: int = 0
    #: revision it last changed in, and the date of that revision
    revision: str = ""
    date: str = ""


@record
class Change:
    """A line that differs; `first` or `second` is None where the line is only in the other."""

    first: Entry | None
    second: Entry | None
    differs: tuple[Differs, ...]

    @property
    def quiet(self) -> bool:
        """Whether the line takes other values and comes to the same: printed otherwise, but no row of a report."""
        return self.differs == ("inputs",)

    @property
    def entry(self) -> Entry:
        """The line on the side it is on, the first before the second."""
        found = self.first or self.second
        assert found is not None
        return found


@record
class Difference:
    """How two accounts of one calculation differ; a calculation on one side only has None on the other."""

    first: Account | None
    second: Account | None
    #: in the order of the first, lines only in the second after the line they follow there
    changes: tuple[Change, ...]
    #: lines found equal: value to the last bit, formula, case, citation, verdict, and all that is printed
    equal: int
    #: the lines on both sides stand in another order
    reordered: bool = False

    @property
    def mark(self) -> str:
        """The mark of the calculation."""
        found = self.first or self.second
        assert found is not None
        return found.mark

    @property
    def differs(self) -> bool:
        """Whether anything at all differs, the mark apart."""
        if self.changes or self.reordered or self.verdict_flipped or self.governing_changed:
            return True
        of = ("stopped", "title", "template", "fingerprint", "selection", "dispositions", "closures", "headings")
        return any(self.other(field) for field in of)

    def other(self, field: str) -> bool:
        """Whether a field of the accounts differs."""
        return _of(self.first, field) != _of(self.second, field)

    @property
    def renamed(self) -> bool:
        """Whether the calculation stands on both sides, under another mark."""
        return self.first is not None and self.second is not None and self.first.mark != self.second.mark

    @property
    def files(self) -> tuple[str, ...]:
        """Files of the template that differ, or are on one side only."""
        if self.first is None or self.second is None:
            return ()
        return tuple(dict.fromkeys(name for name, _ in sorted(set(self.first.files) ^ set(self.second.files))))

    @property
    def inputs(self) -> tuple[Change, ...]:
        """Given values that differ."""
        return tuple(change for change in self.changes if change.entry.kind == "given")

    @property
    def results(self) -> tuple[Change, ...]:
        """Worked values that stand on both sides and are not equal."""
        return tuple(c for c in self.changes if c.entry.kind == "value" and "value" in c.differs)

    @property
    def verdicts(self) -> tuple[Change, ...]:
        """Checks that stand on both sides and are judged otherwise."""
        return tuple(c for c in self.changes if "verdict" in c.differs)

    @property
    def inserted(self) -> tuple[Change, ...]:
        """Lines only in the second."""
        return tuple(c for c in self.changes if c.first is None)

    @property
    def removed(self) -> tuple[Change, ...]:
        """Lines only in the first."""
        return tuple(c for c in self.changes if c.second is None)

    @property
    def verdict_flipped(self) -> bool:
        """Whether the verdict of the calculation differs."""
        return self.other("verdict")

    @property
    def governing_changed(self) -> bool:
        """Whether another check governs."""
        return self.other("governing")


def _of(account: Account | None, field: str) -> object:
    return getattr(account, field) if account is not None else None


@record
class Revised:
    """The revision something last changed in."""

    number: str
    #: ISO date
    date: str


@record
class Revisions:
    """What each calculation and line of an issue says of its last change."""

    #: number of the issue they follow from
    before: str
    #: the revision being made
    now: Revised
    #: by mark
    revised: dict[str, Revised]
    #: by mark, then the lines that have changed since they were first issued
    since: dict[str, dict[Identity, str]]


@record
class Fact:
    """A fact of the package that is printed on its first sheets: a criterion, an assumption, a code."""

    #: 'criteria', 'assumption'
    group: str
    name: str
    text: str


@record
class FactChange:
    """A fact that differs; None where it is only on the other side."""

    first: Fact | None
    second: Fact | None

    @property
    def fact(self) -> Fact:
        """The fact on the side it is on, the second before the first."""
        found = self.second or self.first
        assert found is not None
        return found


@record
class Issued:
    """A package as its values file tells it: what two issues are compared by."""

    program: str
    title: str
    #: project number
    number: str
    #: last row of the revision record, and its date
    revision: str
    revision_date: str
    date: str
    status: str
    facts: tuple[Fact, ...]
    #: in the order of the package
    accounts: tuple[Account, ...]
    #: the issue its revisions follow from, '' where it was held against none
    since: str = ""


@record
class Comparison:
    """Two issues held against each other."""

    first: Issued
    second: Issued
    #: of every calculation, in the order of the second; those only in the first at the end
    differences: tuple[Difference, ...]
    facts: tuple[FactChange, ...]

    @property
    def changed(self) -> tuple[Difference, ...]:
        """Calculations on both sides that differ, also in their mark alone."""
        return tuple(d for d in self.differences if d.first and d.second and (d.differs or d.renamed))

    @property
    def unchanged(self) -> tuple[Difference, ...]:
        """Calculations in which nothing differs: every line was compared."""
        return tuple(d for d in self.differences if not d.differs and not d.renamed)

    @property
    def returned(self) -> tuple[Difference, ...]:
        """Calculations in which nothing differs although they changed in an issue between: they were changed back."""
        if self.second.since in ("", self.first.revision):
            return ()
        return tuple(d for d in self.unchanged if d.other("revision"))

    @property
    def added(self) -> tuple[Difference, ...]:
        """Calculations only in the second."""
        return tuple(d for d in self.differences if d.first is None)

    @property
    def removed(self) -> tuple[Difference, ...]:
        """Calculations only in the first."""
        return tuple(d for d in self.differences if d.second is None)

    @property
    def calculations_differ(self) -> bool:
        """Whether any calculation changed, came or went."""
        return len(self.unchanged) < len(self.differences)

    @property
    def status_changed(self) -> bool:
        """Whether the status differs."""
        return self.first.status != self.second.status

    @property
    def differs(self) -> bool:
        """Whether anything that is printed differs, the number and date of the issue apart."""
        other_program = self.first.program != self.second.program
        return self.calculations_differ or self.status_changed or bool(self.facts) or other_program
