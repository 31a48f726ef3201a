"""What problems of comment logs mean and how to mend them, by slug."""

from __future__ import annotations

REVIEWS: dict[str, str] = {
    "answered-before": """A response letter is dated before the comments it answers.
Both dates are given in the comment log, as no clock is ever read. One of the two is mistyped.

    received: 2026-12-07
    date: 2026-11-18          wrong
    date: 2026-12-18          right""",
    "bad-comment-number": """A comment's number cannot be used.
It is the reviewer's own number and stands in letter and matrix, so it is short: letters, digits and the
signs - . / ( ).

    - {number: see sheet 3, says: …}     wrong
    - {number: S-3, says: …}             right""",
    "not-a-place": """An entry of `answered` names no place in the package.
Places are named by mark, and by mark and symbol or check; sheet and line numbers are found from them at every build, so
that they are right whenever the letter is written. Drawings and other documents have a key of their own.

    answered: [B1-2 line 31]                           wrong
    answered: [B1.flexure, SUMMARY, {drawing: S-301}]  right""",
    "not-answered": """A comment of the review has no response, or does not say where it is answered.
A letter that leaves a comment open, or lets the reviewer search for the change, comes back. Where the letter itself is
the whole answer, it says so.

    - {number: 4, says: …, response: The cover is given with its source., answered: [B5.c_c]}
    - {number: 5, says: …, response: Noted., answered: {document: this letter}}""",
}
