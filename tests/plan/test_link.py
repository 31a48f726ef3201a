"""Names bound across branches, parts and sets: what is one slot, what each arm's words mean, what is told once."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.core.problems import Problem
from tests.small import number, work_or_problems, work_small

SYMBOLS = """\
symbols:
  x: {unit: in, says: length}
  y: {unit: in, says: length}
  z: {unit: in, says: length}
  side: {one of: [left, right], says: side}
  end: {one of: [left, right, both], says: end}
  r: {unit: '1', says: ratio}
  k: {unit: '1', says: factor}
  v: {unit: in, says: lengths}
"""
PARTS = """\
parts:
  double: {lines: [{gives: y, formula: '2*x', cite: geometry}]}
given: {x: , side: }
lines:
"""


@pytest.mark.parametrize(("x", "y"), [("1 in", 2.0), ("9 in", 18.0)])
def test_a_part_in_both_arms_fills_one_slot(tmp_path: Path, x: str, y: float) -> None:
    lines = """\
  - branches:
      - {when: 'x < 5 in', lines: [{part: double}]}
      - {otherwise: [{part: double}]}
  - {gives: z, formula: 'y', cite: geometry}
"""
    worked = work_small(tmp_path, SYMBOLS + PARTS + lines, f"{{x: {x}, side: left}}")
    # 2(1) = 2 and 2(9) = 18
    assert number(worked, "z") == pytest.approx(y, rel=1e-12)


@pytest.mark.parametrize(("x", "z"), [("1 in", 1.0), ("9 in", 12.0)])
def test_a_set_made_in_both_arms_is_one_set(tmp_path: Path, x: str, z: float) -> None:
    lines = """\
  - branches:
      - {when: 'x < 5 in', lines: [{rows: p, cite: geometry, columns: {v: }, list: [{v: x}]}]}
      - {otherwise: [{rows: p, cite: geometry, columns: {v: }, list: [{v: x}, {v: '3 in'}]}]}
  - {gives: z, formula: 'sum(v over p)', cite: geometry}
"""
    worked = work_small(tmp_path, SYMBOLS + PARTS + lines, f"{{x: {x}, side: left}}")
    # 1, and 9 + 3
    assert number(worked, "z") == pytest.approx(z, rel=1e-12)


@pytest.mark.parametrize("side", ["left", "right"])
def test_words_by_branches_and_from_another_symbol(tmp_path: Path, side: str) -> None:
    lines = """\
  - {gives: end, formula: side, cite: geometry}
  - {gives: r, cite: geometry, branches: [{when: 'end is left', formula: '1'}, {otherwise: '2'}]}
"""
    worked = work_small(tmp_path, SYMBOLS + PARTS + lines, f"{{x: 1 in, side: {side}}}")
    assert number(worked, "r") == (1 if side == "left" else 2)


@pytest.mark.parametrize("side", ["left", "right"])
def test_words_handed_to_a_part(tmp_path: Path, side: str) -> None:
    parts = PARTS.replace(
        "parts:\n",
        "parts:\n  which:\n    given: {end: }\n    lines:\n"
        "      - {gives: r, cite: geometry, branches: [{when: 'end is left', formula: '1'}, {otherwise: '2'}]}\n",
    )
    worked = work_small(
        tmp_path, SYMBOLS + parts + "  - {part: which, with: {end: side}}\n", f"{{x: 1 in, side: {side}}}"
    )
    assert number(worked, "r") == (1 if side == "left" else 2)


@pytest.mark.parametrize(
    ("x", "handed", "found"),
    [
        ("4 in", "with: {y: '2*x'}", "OK"),  # 2(4) = 8: the closed end
        ("4.000004 in", "with: {y: '2*x'}", "not evaluated"),
        ("0 in", "with: {y: '2*x'}", "not evaluated"),  # the open end
        ("8 in", "same: [y]", "OK"),
        ("8.000008 in", "same: [y]", "not evaluated"),
        ("-1 in", "same: [y]", "not evaluated"),
    ],
)
def test_the_range_of_a_part_holds_what_it_is_handed(tmp_path: Path, x: str, handed: str, found: str) -> None:
    parts = """\
parts:
  width:
    given: {y: {range: '(0, 8 in]'}}
    lines: [{check: it, holds: 'y <= 100 in', cite: statics}]
given: {x: , side: }
lines:
"""
    if handed.startswith("same"):
        parts += "  - {gives: y, formula: x, cite: geometry}\n"
    worked = work_small(tmp_path, SYMBOLS + parts + f"  - {{part: width, {handed}}}\n", f"{{x: {x}, side: left}}")
    assert [check.verdict for check in worked.checks] == [found]
    if found != "OK":
        assert worked.stop is not None
        assert worked.stop.words == "requirement not met: width covers y in (0, 8 in]"


def _problems(folder: Path, lines: str) -> tuple[Problem, ...]:
    return work_or_problems(folder, SYMBOLS + PARTS + lines, "{x: 1 in, side: left}")[1]


def test_a_word_that_does_not_fit_every_list(tmp_path: Path) -> None:
    # `both` is among the words of `end`, and not among those of the second symbol
    lines = """\
  - {gives: end, formula: left, cite: geometry}
  - {gives: hand, one of: [left, right], says: hand, formula: end, cite: geometry}
"""
    assert [problem.slug for problem in _problems(tmp_path, lines)] == ["not-a-word"]


BRANCH = "  - branches:\n      - {when: 'x > 1 in', lines: [{part: double}]}\n"
Z = "  - {gives: z, formula: 'FORMULA', cite: geometry}\n"


@pytest.mark.parametrize(
    ("lines", "slugs"),
    [
        # a name given in one branch only is not known after the block, nor in the other branch
        (BRANCH + "      - {otherwise: []}\n" + Z.replace("FORMULA", "y"), ["arms-differ"]),
        (BRANCH + "      - {otherwise: [{gives: z, formula: 'y', cite: geometry}]}\n", ["arms-differ"]),
        # what an unknown set hides is not told of again
        (
            "  - {each: nowhere, lines: [{gives: z, formula: 'x', cite: geometry}]}\n"
            "  - {gives: r, formula: 'z/x', cite: geometry}\n",
            ["unknown-name"],
        ),
        (Z.replace("FORMULA", "sum(q over nowhere)"), ["unknown-name"]),
        # what is not known over an unknown set may be a column of it; a name that stands nowhere is told of once,
        # one that may be misspelt wherever it is
        ("  - {check: one, holds: 'sum(x*q over nowhere) > q', cite: geometry}\n", ["unknown-name", "unknown-name"]),
        ("  - {check: one, holds: 'q > 2*q', cite: geometry}\n", ["unknown-name"]),
        ("  - {check: one, holds: 'xx > 2*xx', cite: geometry}\n", ["unknown-name", "unknown-name"]),
        # an entry of `parts` gives its names where it is used: twice is too often, under two stems it is not
        ("  - {part: double}\n  - {part: double}\n", ["part-clash"]),
        ("  - {part: double, as: one}\n  - {part: double, as: two}\n" + Z.replace("FORMULA", "one.y + two.y"), []),
        # names of a part with a stem are known by it alone, and below it
        ("  - {part: double, as: one}\n" + Z.replace("FORMULA", "y"), ["unknown-name"]),
        (Z.replace("FORMULA", "one.y") + "  - {part: double, as: one}\n", ["used-before-given"]),
    ],
)
def test_told_once(tmp_path: Path, lines: str, slugs: list[str]) -> None:
    assert [problem.slug for problem in _problems(tmp_path, lines)] == slugs


def test_a_name_of_a_template_goes_before_a_like_one_inside_a_part_of_it(tmp_path: Path) -> None:
    inner = (
        "template: inner\ntitle: Inner\ncode: {name: ACI 318, years: ['2019']}\nunits: [us]\ncovers: []\nexcludes: []\n"
        "gives: [z]\nsymbols:\n  x: {unit: in, says: length}\n  z: {unit: in, says: length}\ngiven: {x: }\n"
        "lines: [{gives: z, formula: '3*x', cite: geometry}]\n"
    )
    (tmp_path / "inner.yaml").write_text(inner, encoding="utf-8")
    lines = (
        "symbols:\n  x: {unit: in, says: length}\ngiven: {x: }\nlines:\n  - {part: inner, with: {x: '2*x'}}\n"
        "  - {check: room, holds: 'z <= 100 in', cite: geometry}\n"
    )
    worked = work_small(tmp_path, lines, "{x: 1 in}")
    # x is 1 in here and 2 in inside, whose z is 3 times 2: links, cases and questions mean the one here
    assert number(worked, "x") == pytest.approx(1.0)
    assert number(worked, "z") == pytest.approx(6.0)
