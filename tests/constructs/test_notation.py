"""Symbols as the trade writes them, on the finished sheet: marks, primes, subscripts, ranges, feet and inches.

Expected text is written by hand; places come from the MATH table of the face (read by fontTools in `tests.layout`)
and from The TeXbook, appendix G.
"""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import pytest

from tests.constructs.finished import Sheet, finish
from tests.proof.feet import Feet, agrees
from tests.proof.prove import prove
from tests.proof.units import Printed
from tests.small import write_small

TEMPLATE = """\
symbols:
  l: {unit: ft, says: clear span, shows: 'ℓ_{n,max}', feet and inches: 1/16 in}
  h: {unit: in, says: depth}
  y: {unit: in, says: centroid of the tension side, shows: 'bar(y)_t'}
  e: {unit: '1', says: strain of compression steel, shows: "eps'_s"}
  f: {unit: psi, says: strength of concrete, shows: "f_c'"}
  f_ct: {unit: psi, says: splitting strength}
  A_smin: {unit: in^2, says: least steel, shows: 'A_{s,min}'}
  lambda: {unit: '1', says: lightweight factor}
  r: {unit: ft, says: a third of the span, feet and inches: 1/16 in}
given: {l: , h: , y: , e: , f: , f_ct: , A_smin: , lambda: }
lines:
  - {require: 'lambda >= 0.75 and lambda <= 1', says: factor within its table, cite: '1.1'}
  - {gives: r, formula: 'l/3', cite: geometry}
  - {use: 'Span {l}.', cite: geometry}
"""
GIVEN = (
    "{l: 18'-6 1/2\", h: 1 ft 6 1/2 in, y: 3.25 in, e: 0.002, f: 4000 psi, f_ct: 423 psi, "
    "A_smin: 1.37 in^2, lambda: 0.85}"
)
TEXT = {
    # 222.5/12 = 18.5417
    1: "ℓn,max = 18.54 ft = 18′-6 1/2″ clear span project file",
    2: "h = 18.5 in. (1 ft 6 1/2 in) depth project file",
    3: "ȳt = 3.25 in. centroid of the tension side project file",
    4: "ε ′ s = 0.002 strain of compression steel project file",
    5: "f ′ c = 4,000 psi strength of concrete project file",
    6: "fct = 423 psi splitting strength project file",
    7: "As,min = 1.37 in.² least steel project file",
    8: "λ = 0.85 lightweight factor project file",
    9: "Required 0.75 ≤ λ = 0.85 ≤ 1 1.1 8",
    # 18.5417/3 = 6.1806, of which 18.54/3 confirms three digits; 74.1667 in. is 6 ft 2 in. and 2.67 sixteenths
    10: "a third of the span r = ℓn,max/3 = 18.54/3 = 6.18 ft ≈ 6′-2 3/16″ (to 1/16″) geometry 1 "
    "Span 18.54 ft = 18′-6 1/2″. geometry",
}


@pytest.fixture(scope="module")
def sheet(tmp_path_factory: pytest.TempPathFactory) -> Sheet:
    return finish(tmp_path_factory.mktemp("notation"), TEMPLATE, GIVEN)


@pytest.mark.parametrize("number", sorted(TEXT))
def test_text_in_reading_order(sheet: Sheet, number: int) -> None:
    shown, wanted = sheet.lines[number], TEXT[number]
    assert shown.replace("\u0304", "").replace("ȳ", "y") == wanted.replace("ȳ", "y")
    if "ȳ" in wanted:
        assert "ȳ" in shown or "y\u0304" in shown


def test_the_bar_lies_over_its_letter(sheet: Sheet) -> None:
    (bar,) = [g for g in sheet.ink.glyphs if "\u0304" in g.text]
    (letter,) = [g for g in sheet.row("centroid") if g.text == "y" and "Math" in g.font]
    # the letters of y reach 482 up, AccentBaseHeight is 480: the bar is raised by 2 thousandths
    assert (bar.y - letter.y) / letter.size == pytest.approx(0.002, abs=0.002)
    assert bar.y0 > letter.y1
    # MathTopAccentAttachment: 330 of the letter under -230 of the mark, whose ink runs from -375 to -85
    assert (bar.x0 - letter.left) / letter.size == pytest.approx((330 + 230 - 375) / 1000, abs=0.01)
    assert (bar.x1 - letter.left) / letter.size == pytest.approx((330 + 230 - 85) / 1000, abs=0.01)


def test_a_prime_stands_above_the_subscript(sheet: Sheet) -> None:
    row = sheet.row("strength of concrete")
    letter = next(g for g in row if g.text == "f" and "Math" in g.font)
    near = [g for g in sheet.ink.glyphs if letter.left < g.left < letter.right + 8 and abs(g.y - letter.y) < 8]
    (prime,) = [g for g in near if g.text == "′"]
    (below,) = [g for g in near if g.text == "c" and g.size < letter.size]
    assert prime.y > letter.y > below.y
    assert prime.y0 > below.y1
    assert prime.x0 < below.x1 and below.x0 < prime.x1


def test_feet_and_inches_that_are_not_worth_the_decimals_are_seen() -> None:
    # 6.18 ft is 74.16 in., half a hundredth of a foot is 0.06 in.: one sixteenth more than 74 3/16 in. is too much
    sixteenth = Fraction(1, 16)
    assert agrees(Feet(Fraction(1187, 16), sixteenth), Printed("6.18", 0, "ft"), Fraction(12))
    assert not agrees(Feet(Fraction(1190, 16), sixteenth), Printed("6.18", 0, "ft"), Fraction(12))
    assert not agrees(Feet(Fraction(75), Fraction(0)), Printed("6.18", 0, "ft"), Fraction(12))


def test_the_sheet_can_be_worked_again(tmp_path: Path) -> None:
    proof = prove("notation", write_small(tmp_path, TEMPLATE, GIVEN), tmp_path / "notation.pdf", 100)
    assert proof.code == 0, proof.said
    assert not proof.account.findings and not proof.account.unread and not proof.overlaps
    assert proof.account.counts["feet and inches"] == 2
    assert proof.order == {"pypdf": [], "pdfium": []}
