"""What a calculation came to, line by line, and how two such accounts differ. Frozen; numbers are unrounded.

An account names lines by path and rows, never by number, so that it means the same in another issue, in another
edition of a code, and in a file. Nothing here knows pages or printed digits.
"""

from __future__ import annotations

from typing import Literal, TypeAlias

from calcreport.calculate.model import Key, WorkedCheck, WorkedGives, WorkedRequire
from calcreport.core.record import record

Kind: TypeAlias = Literal["given", "value", "check", "requirement"]
#: what of a line differs; the last two stand alone
Differs: TypeAlias = Literal["value", "formula", "case", "citation", "verdict", "only in first", "only in second"]
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


@record
class Change:
    """A line that differs; `first` or `second` is None where the line is only in the other."""

    first: Entry | None
    second: Entry | None
    differs: tuple[Differs, ...]

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
    #: lines found equal: value to the last bit, formula, case, citation and verdict
    equal: int

    @property
    def mark(self) -> str:
        """The mark of the calculation."""
        found = self.first or self.second
        assert found is not None
        return found.mark

    @property
    def differs(self) -> bool:
        """Whether anything at all differs."""
        return bool(self.changes) or self.verdict_flipped or self.governing_changed or _stop(self)

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
        return _of(self.first, "verdict") != _of(self.second, "verdict")

    @property
    def governing_changed(self) -> bool:
        """Whether another check governs."""
        return _of(self.first, "governing") != _of(self.second, "governing")


def _stop(difference: Difference) -> bool:
    return _of(difference.first, "stopped") != _of(difference.second, "stopped")


def _of(account: Account | None, field: str) -> object:
    return getattr(account, field) if account is not None else None
