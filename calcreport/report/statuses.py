"""What each status of a package says: in the title block, on the cover, and across every sheet of what is withdrawn.

Status words in, texts out. A status changes title blocks and cover, never the body of a calculation's sheets.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class StatusTexts:
    """The texts of one status."""

    #: under the status in the title block and on the cover; short enough for one line there
    note: str
    #: first among the cautions of the cover
    caution: str
    #: under the empty seal area
    seal_words: str
    #: over the frame of every sheet, with as many strokes across it; '' and 0 for a package that is in force
    banner: str = ""
    strokes: int = 0


_SEAL = "seal, signature and date of the engineer in responsible charge"
_NO_SEAL = "left clear: a preliminary issue is sealed, or carries a statement instead, as the licensing board asks"
STATUS_TEXTS = {
    "preliminary": StatusTexts(
        "not for permit, not for construction",
        "Preliminary: given values, members and results may still change. Not for permit, not for construction, until "
        "the status changes. Purpose: ______________________________",
        _NO_SEAL,
    ),
    "for review": StatusTexts(
        "not for permit, not for construction",
        "For review: issued for comment. Not for permit, not for construction, until the status changes.",
        _SEAL,
    ),
    "for permit": StatusTexts(
        "not for construction",
        "For permit: submitted to the authority having jurisdiction. Not for construction, until the status changes.",
        _SEAL,
    ),
    "issued for construction": StatusTexts(
        "only as sealed, signed and dated",
        "Issued for construction: the drawings govern. What differs from them on site goes to the engineer before the "
        "work goes on.",
        _SEAL,
    ),
    "superseded": StatusTexts(
        "replaced by a later issue, not for use",
        "Superseded: a later issue has replaced this one. Kept for the record; not for permit, not for construction.",
        "left clear: a superseded issue is not sealed again",
        "SUPERSEDED: REPLACED BY A LATER ISSUE, NOT FOR USE",
        1,
    ),
    "void": StatusTexts(
        "withdrawn, not for use",
        "Void: withdrawn, and replaced by nothing that is named here. Kept for the record; not for permit, not for "
        "construction.",
        "left clear: a void issue is not sealed",
        "VOID: WITHDRAWN, NOT FOR USE",
        2,
    ),
}  # fmt: skip
