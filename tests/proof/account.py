"""What a reader found: findings, lines that could not be read, counts of what was confirmed.

`Desk` is what the examiners of lines, rows and printed forms share while they work one calculation.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field

from .calculations import Calculation


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing wrong in print, or one line that could not be read."""

    claim: str
    sheet: str
    line: int
    text: str

    def __str__(self) -> str:
        return f"{self.sheet}{f' line {self.line}' if self.line else ''}: {self.claim}: {self.text}"


@dataclass(slots=True)
class Account:
    """What the reader saw of calculations."""

    #: numbered lines; those with something to work; those worked without finding
    lines: int = 0
    worked: int = 0
    confirmed: int = 0
    #: lines not read in full, and why
    unread: list[Finding] = field(default_factory=list)
    findings: list[Finding] = field(default_factory=list)
    #: substitutions, comparisons, ratios, table cells worked
    counts: Counter[str] = field(default_factory=Counter)
    #: computed values by significant digits, each value once
    digits: Counter[int] = field(default_factory=Counter)
    #: values printed with seven digits or more
    long: list[str] = field(default_factory=list)

    @property
    def unread_lines(self) -> int:
        """Numbered lines not read in full."""
        return len({(finding.sheet, finding.line) for finding in self.unread})

    def add(self, other: Account) -> None:
        """Take in another account."""
        self.lines += other.lines
        self.worked += other.worked
        self.confirmed += other.confirmed
        self.unread += other.unread
        self.findings += other.findings
        self.counts.update(other.counts)
        self.digits.update(other.digits)
        self.long += other.long


@dataclass(slots=True)
class Desk:
    """A calculation being examined, and the sheet and line in hand."""

    calculation: Calculation
    account: Account = field(default_factory=Account)
    sheet: str = ""
    line: int = 0

    def found(self, claim: str, text: str) -> None:
        """Report something wrong."""
        self.account.findings.append(Finding(claim, self.sheet, self.line, text))

    def unread(self, text: str) -> None:
        """Report ink that could not be read or worked."""
        self.account.unread.append(Finding("unread", self.sheet, self.line, text))

    def count(self, what: str) -> None:
        """Count something worked."""
        self.account.counts[what] += 1
