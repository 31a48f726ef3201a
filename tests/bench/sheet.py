"""The sheet both typesetters draw: frame, lanes and title block, at the places of the program's own letter sheet.

Lengths in points from the upper left corner of the frame, y upwards; the frame begins at (57, 30) of the page.
"""

from __future__ import annotations

from calcreport.report.model import TitleFacts

#: width inside the frame, and of the lane of words and formulas
ROOM, LANE = 526.0, 392.0

#: rules as boxes (x, y, width, height): frame, lanes, title block and its blank boxes
FRAME: tuple[tuple[float, float, float, float], ...] = (
    (0, 0, 526, 1), (0, -736, 526, 1), (0, -736, 1, 736), (525, -736, 1, 736),
    (28, -643, 0.35, 643), (431, -643, 0.35, 643), (0, -643, 526, 1),
    (130, -736, 0.35, 93), (304, -736, 0.35, 93), (431, -736, 0.35, 93), (478, -673, 0.35, 30),
    (304, -674, 222, 0.35), (304, -705, 127, 0.35), (0, -705, 304, 0.35), (379, -736, 0.35, 93),
)  # fmt: skip

#: place, size and weight of the words of the title block, in the order of `title_words`
TITLES: tuple[tuple[int, int, str, bool], ...] = (
    (4, -651, "tiny", False), (4, -661, "small", True), (4, -672, "small", False), (4, -720, "normalsize", True),
    (4, -731, "scriptsize", False), (134, -651, "tiny", False), (134, -661, "small", True),
    (134, -714, "scriptsize", False), (134, -723, "scriptsize", False), (134, -732, "scriptsize", False),
    (308, -651, "tiny", False), (308, -682, "tiny", False), (308, -713, "tiny", False), (383, -651, "tiny", False),
    (383, -682, "tiny", False), (383, -713, "tiny", False), (435, -651, "tiny", False), (435, -661, "small", False),
    (482, -651, "tiny", False), (482, -661, "tiny", False), (435, -682, "tiny", False),
)  # fmt: skip


def title_words(facts: TitleFacts) -> tuple[str, ...]:
    """Return the words of a part's title block."""
    return (
        "PROJECT", facts.project, facts.project_number, facts.status,
        facts.status_note, "SUBJECT", facts.subject, facts.code,
        facts.fingerprint, facts.program, "ORIGINATOR", "CHECKER",
        "BACK-CHECKER", "DATE", "DATE", "DATE",
        "REVISION", facts.revision, "DATE", facts.date,
        "SHEET",
    )  # fmt: skip
