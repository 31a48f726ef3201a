"""Lines that choose: requirements met and not, arms of a block, parts, words, checks of every kind.

Expected text is written by hand, with the sums beside it.
"""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.constructs.finished import finish

SYMBOLS = """\
symbols:
  b: {unit: in, says: width}
  h: {unit: in, says: depth}
  k: {unit: '1', says: factor}
  v: {unit: psi, says: stress}
  x: {unit: in, says: distance}
  w: {one of: [left, right], says: side}
"""
GIVEN = {1: "b = 12 in. width project file", 2: "h = 18 in. depth project file"}
HEAD = "given: {b: , h: }\nlines:\n"
TWICE = "parts:\n  twice: {title: Twice, given: {x: }, lines: [{gives: k, formula: 'x/b', cite: geometry}]}\n"

CONSTRUCTS: dict[str, tuple[str, dict[int, str], int]] = {
    "require met": (
        HEAD + "  - {require: 'h >= b', says: upright sections only, cite: '1.1'}\n",
        {3: "Required h = 18 in. ≥ b = 12 in. 1.1 1 2"},
        0,
    ),
    "require met within a range": (
        HEAD + "  - {require: 'b <= h and h < 40 in', says: upright sections only, cite: '1.1'}\n",
        {3: "Required b = 12 in. ≤ h = 18 in. < 40 in. 1.1 1 2"},
        0,
    ),
    "require of two things": (
        HEAD + "  - {require: 'b >= 10 in and h >= 10 in', says: no slender parts, cite: '1.1'}\n",
        {3: "Required b = 12 in. ≥ 10 in. and h = 18 in. ≥ 10 in. 1.1 1 2"},
        0,
    ),
    "require shown where it is not met": (
        HEAD
        + "  - {require: 'h >= b', says: upright sections only, cite: '1.1', show: unmet}\n"
        + "  - {gives: x, formula: 'h - b', cite: geometry}\n",
        # 18 - 12 = 6
        {3: "distance x = h − b = 18 − 12 = 6 in. geometry 1 2"},
        0,
    ),
    "require shown, as it is not met": (
        HEAD + "  - {require: 'h <= b', says: flat sections only, cite: '1.1', show: unmet}\n",
        {
            0: "NOT EVALUATED TO THE END: requirement not met: flat sections only",
            2: GIVEN[2] + " Stopped: requirement not met: flat sections only. "
            "Checks below this line are not evaluated.",
        },
        1,
    ),
    "require not met": (
        HEAD
        + "  - {require: 'h <= b', says: flat sections only, cite: '1.1'}\n"
        + "  - {check: depth, holds: 'h >= 12 in', cite: '5.2'}\n",
        {
            0: "NOT EVALUATED TO THE END: requirement not met: flat sections only",
            2: GIVEN[2] + " Stopped: requirement not met: flat sections only. "
            "Checks below this line are not evaluated.",
            3: "CHECK depth h ≥ 12 in. not evaluated 5.2",
        },
        1,
    ),
    "the arm of a block in its own words": (
        HEAD
        + "  - branches:\n"
        + "      - {when: 'h < b', says: flat sections, lines: [{check: flat, holds: 'h <= 6 in', cite: '5.1'}]}\n"
        + "      - {otherwise: [{gives: x, formula: 'h - b', cite: geometry}], says: upright sections}\n",
        # 18 - 12 = 6
        {2: GIVEN[2] + " Upright sections:", 3: "distance x = h − b = 18 − 12 = 6 in. geometry 1 2"},
        0,
    ),
    "the arm of a block by its comparison": (
        HEAD
        + "  - branches:\n"
        + "      - {when: 'h > b', lines: [{gives: x, formula: 'h - b', cite: geometry}]}\n"
        + "      - {otherwise: [{gives: x, formula: 'b - h', cite: geometry}]}\n",
        {2: GIVEN[2] + " Since h = 18 in. > b = 12 in.:", 3: "distance x = h − b = 18 − 12 = 6 in. geometry 1 2"},
        0,
    ),
    "a part with a value handed": (
        TWICE + HEAD + "  - {part: twice, as: upper, with: {x: 'h - 3 in'}}\n",
        {
            2: GIVEN[2] + " Twice: upper",
            # 18 - 3 = 15, 15/12 = 1.25
            3: "distance x = h − 3 in. = 18 − 3 = 15 in. geometry 2",
            4: "factor k = x/b = 15/12 = 1.25 geometry 1 3",
        },
        0,
    ),
    "a word": (
        HEAD + "  - {gives: w, cite: '4.1', branches: [{when: 'h > b', formula: left}, {otherwise: right}]}\n",
        {3: "side since h > b w = left 4.1 1 2"},
        0,
    ),
    "absolute value and a long maximum": (
        HEAD + "  - {gives: k, formula: 'abs(b - h)/max(b, h, 3 in, 10 in)', cite: geometry}\n",
        # 6/18 = 0.3333
        {3: "factor k = |b − h| max { b h 3 in. 10 in. = |12 − 18| max { 12 18 3 10 = 0.3333 geometry 1 2"},
        0,
    ),
    "a check of demand over capacity, OK": (
        HEAD + "  - {check: width, holds: 'b <= h', cite: '5.1'}\n",
        # 12/18 = 0.667
        {3: "CHECK width b/h = 12/18 0.667 OK 5.1 1 2"},
        0,
    ),
    "a check of required over provided, NG": (
        HEAD + "  - {check: width, holds: 'b >= 16 in', cite: '5.2'}\n",
        # 16/12 = 1.333
        {0: "1 CHECK NG IN THIS CALCULATION: line 3 width", 3: "CHECK width 16 in./b = 16/12 1.333 NG 5.2 1"},
        1,
    ),
    "a check of two limits shows the nearer": (
        HEAD
        + "  - {gives: k, formula: 'b/h', cite: geometry}\n"
        + "  - {check: range, holds: 'k >= 0.2 and k <= 0.8', cite: '5.2'}\n",
        # 0.6667/0.8 = 0.833, 0.2/0.6667 = 0.3
        {
            3: "factor k = b/h = 12/18 = 0.6667 geometry 1 2",
            4: "CHECK range k/0.8 = 0.6667/0.8 0.833 OK 5.2 3",
        },
        0,
    ),
}


@pytest.mark.parametrize("name", CONSTRUCTS)
def test_text_in_reading_order(tmp_path: Path, name: str) -> None:
    template, lines, code = CONSTRUCTS[name]
    sheet = finish(tmp_path, SYMBOLS + template, "{b: 12 in, h: 18 in}")
    assert sheet.lines == {0: "", **GIVEN, **lines}
    assert sheet.code == code
