"""What an answer to a review comment points at, before any sheet is known."""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.calculate.model import Key, WorkedCheck


@dataclass(frozen=True, slots=True)
class AnswerPlace:
    """A value, checks, or neither: then all sheets of the mark."""

    #: the calculation, front sheet or appendix that tells it
    mark: str
    #: slot and key of a value
    value: tuple[int, Key] | None = None
    #: checks of one name, a row each
    checks: tuple[WorkedCheck, ...] = ()
