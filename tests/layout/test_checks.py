"""Check lines: quiet OK, loud NG, reasons, long names."""

from __future__ import annotations

from typing import Literal

import pytest
from inked import clashes, inked, letters, texts
from specimen import check, lane, m, over

from calcreport.layout.checks import set_check
from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Stroke
from calcreport.layout.pieces import flat
from calcreport.layout.sheet import HEAVY, Lane

OK = check(20, "flexure", over("M_u", "φM_n"), over("356", "423"), "0.842", "OK", lane("9.5.1.1", 9, 18))
NG = check(31, "shear", over("V_u", "φV_n"), over("118.4", "116.3"), "1.018", "NG", lane("9.5.1.1", 10), ("Why.",))


def heavy(check_piece: object) -> list[Stroke]:
    items = flat(check_piece.items)  # type: ignore[attr-defined]
    return [item for item in items if isinstance(item, Stroke) and item.width == HEAVY]


def test_ok_is_quiet(kit: Kit) -> None:
    piece = set_check(kit, OK, kit.sheet.text)
    assert heavy(piece) == []
    assert "OK" in texts(piece.items)
    assert piece.opening and not piece.ruled


def test_ng_is_loud_without_tone(kit: Kit) -> None:
    piece = set_check(kit, NG, kit.sheet.text)
    rules = heavy(piece)
    assert len(rules) == 2  # above and below
    for rule in rules:
        assert (rule.points[0][0], rule.points[1][0]) == (kit.sheet.left, kit.sheet.right)
    bars = [i for i in flat(piece.items) if isinstance(i, Stroke) and i.fill == 0.0 and i.closed]
    assert any(min(x for x, _ in bar.points) == kit.sheet.left for bar in bars)  # solid bar at the frame
    boxes = [i for i in flat(piece.items) if isinstance(i, Stroke) and i.width == 1.2 and i.closed]
    assert len(boxes) == 1  # NG in a box of 1.2 pt
    assert all(item.fill in (None, 0.0) for item in flat(piece.items) if isinstance(item, Stroke))


def test_ratio_and_verdict_stand_at_the_result_edge(kit: Kit, fonts: Fonts) -> None:
    inks = letters(set_check(kit, OK, kit.sheet.text), fonts)
    verdict = next(ink for ink in inks if ink.text == "OK")
    ratio = next(ink for ink in inks if ink.text == "0.842")
    assert verdict.right == pytest.approx(kit.sheet.text.right, abs=0.2)
    assert ratio.right < verdict.left
    assert ratio.foot == pytest.approx(verdict.foot)


def test_a_condition_is_joined_by_a_colon_and_a_ratio_by_an_equals_sign(kit: Kit) -> None:
    condition = check(22, "spacing", m("s ≤ d/2"), m("9 ≤ 13.7"), "", "OK", lane("9.7"))
    assert ":" in texts(set_check(kit, condition, kit.sheet.text).items)
    assert "=" not in texts(set_check(kit, condition, kit.sheet.text).items)
    assert "=" in texts(set_check(kit, OK, kit.sheet.text).items)


@pytest.mark.parametrize("verdict", ["OK", "NG", "not evaluated", "not applicable"])
def test_nothing_overlaps_in_any_lane(
    kit: Kit, fonts: Fonts, verdict: Literal["OK", "NG", "not evaluated", "not applicable"]
) -> None:
    name = "minimum shear reinforcement over the whole length of the clear span"
    for words in ("shear", name):
        one = check(15, words, over("A_{v,min}", "A_v"), over("0.113", "0.40"), "0.282", verdict, lane("9.6.3.4", 5),
                    ("A reason in words that is long enough to need a second line in a narrow lane.",))  # fmt: skip
        for width in (kit.sheet.text.width, 240.0, 175.0):
            piece = set_check(kit, one, Lane(kit.sheet.text.left, kit.sheet.text.left + width))
            assert clashes(letters(piece, fonts)) == []
            for ink in inked(piece.items, fonts):
                assert ink.top >= -2.0 and ink.foot <= piece.height + 2.0
