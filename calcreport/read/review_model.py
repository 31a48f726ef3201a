"""A comment log as read: what a plan reviewer wrote, what is answered, and where."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

from calcreport.core.source import Span


@dataclass(frozen=True, slots=True)
class Pointer:
    """Where in the package a comment is answered: `B1.phiM_n`, `B1.flexure`, `B1`, `SUMMARY`."""

    #: mark of a calculation, a member, a front sheet or an appendix
    mark: str
    #: value or check behind the mark, with its rows; '' for all its sheets
    path: str
    span: Span


@dataclass(frozen=True, slots=True)
class OtherPlace:
    """Where outside the package a comment is answered."""

    #: 'drawing' or 'document'
    kind: str
    says: str


AnsweredAt: TypeAlias = Pointer | OtherPlace


@dataclass(frozen=True, slots=True)
class Comment:
    """One comment with its answer; every text as it was written, its line ends kept."""

    #: the reviewer's own number: '4', 'S-12'
    number: str
    discipline: str
    #: sheet or drawing the reviewer names, '' for none
    reference: str
    says: str
    response: str
    #: one of the words of the reader's list
    status: str
    answered: tuple[AnsweredAt, ...]
    #: the reviewer's text in the file
    span: Span


@dataclass(frozen=True, slots=True)
class CommentLog:
    """The comments of one review cycle with their answers."""

    cycle: int
    #: ISO dates: of the comments, and of the letter that answers them
    received: str
    date: str
    #: office and role, a line each; no person
    reviewer: tuple[str, ...]
    #: permit or application number, '' for none
    application: str
    comments: tuple[Comment, ...]
