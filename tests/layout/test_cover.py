"""The cover: an empty area for the seal, every fact set, long lists on a second sheet."""

from __future__ import annotations

from dataclasses import replace

import pytest
from inked import clashes, inked, texts
from specimen import cover

from calcreport.layout.cover import SEAL, Cover, set_cover
from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.model import Stroke
from calcreport.layout.pieces import flat
from calcreport.layout.sheet import sheet_of
from calcreport.report.model import CoverFacts

FEW, MANY = cover(6), cover(80)
WORDY = replace(FEW, cautions=FEW.cautions * 3, basis=FEW.basis * 3, title="A long title " * 6, header=FEW.header * 2)


def made(kit: Kit, of: CoverFacts, paper: str = "letter") -> Cover:
    return set_cover(sheet_of(paper, lanes=False), kit.lettering, of, "COVER", 31)  # type: ignore[arg-type]


def seal(items: Cover) -> tuple[float, float, float, float]:
    """Return the seal square: the one closed figure of equal sides of `SEAL` points."""
    squares = [
        item.points for item in flat(items.items)
        if isinstance(item, Stroke) and item.closed and item.fill is None
        and item.points[1][0] - item.points[0][0] == pytest.approx(SEAL)
    ]  # fmt: skip
    ((left, top), _, (right, foot), _) = squares[0]
    return left, top, right, foot


@pytest.mark.parametrize("of", [FEW, MANY, WORDY])
@pytest.mark.parametrize("paper", ["letter", "a4"])
def test_the_seal_area_is_a_clear_square_of_at_least_two_and_a_half_inches(
    kit: Kit, fonts: Fonts, of: CoverFacts, paper: str
) -> None:
    one = made(kit, of, paper)
    left, top, right, foot = seal(one)
    assert right - left >= 180.0 and foot - top >= 180.0  # 2.5 in. x 72
    for ink in inked(one.items, fonts):
        inside = ink.left < right - 0.5 and left + 0.5 < ink.right and ink.top < foot - 0.5 and top + 0.5 < ink.foot
        own = ink.left == pytest.approx(left, abs=0.5) and ink.right == pytest.approx(right, abs=0.5)
        assert not inside or (own and not ink.text)


@pytest.mark.parametrize("of", [FEW, MANY, WORDY])
@pytest.mark.parametrize("paper", ["letter", "a4"])
def test_nothing_leaves_the_frame_or_overlaps(kit: Kit, fonts: Fonts, of: CoverFacts, paper: str) -> None:
    sheet = sheet_of(paper, lanes=False)  # type: ignore[arg-type]
    inks = inked(made(kit, of, paper).items, fonts)
    assert all(sheet.left - 1.1 <= ink.left and ink.right <= sheet.right + 1.1 for ink in inks)
    assert all(sheet.top - 1.1 <= ink.top and ink.foot <= sheet.foot + 1.1 for ink in inks)
    assert clashes(inks) == []


def test_every_fact_is_printed(kit: Kit) -> None:
    said = texts(made(kit, FEW).items)
    facts = (FEW.title, *FEW.header, FEW.issue, FEW.date, FEW.status, FEW.status_note, *FEW.basis, *FEW.cautions,
             *FEW.office, FEW.fingerprint, FEW.seal_words)  # fmt: skip
    assert [fact for fact in facts if fact.replace(" ", "") not in said] == []
    assert all((a + b).replace(" ", "") in said for a, b in (*FEW.scope, *FEW.elsewhere))
    assert "SHEETSINPACKAGE31" in said


def test_members_that_find_no_room_go_on_the_next_sheet(kit: Kit) -> None:
    assert made(kit, FEW).rest == ()
    one = made(kit, MANY)
    said = texts(one.items) + "".join(texts(piece.items) for piece in one.rest)
    assert "continuedonthenextsheet" in said
    assert all(marks.replace(" ", "") in said for marks, _ in MANY.scope)


def test_a_failing_check_makes_the_result_loud(kit: Kit) -> None:
    def bars(of: CoverFacts) -> int:
        return sum(isinstance(item, Stroke) and item.fill == 0.0 for item in flat(made(kit, of).items))

    assert bars(FEW) == 1
    assert bars(replace(FEW, result_is_loud=False)) == 0
