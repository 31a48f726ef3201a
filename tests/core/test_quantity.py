"""Amounts as people type them, against sums by hand."""

from __future__ import annotations

from fractions import Fraction as F

import pytest

from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount, read_amount, read_in_unit
from calcreport.core.source import Source, Span
from calcreport.core.units import make_unit

INCH, POUND = F(254, 10_000), F(45_359_237, 10**8) * F(980_665, 10**5)


def _read(text: str, unit: str = "") -> tuple[Amount | None, Problems]:
    problems = Problems()
    span = Span(Source("amount", text), 0, len(text))
    if not unit:
        return read_amount(text, span, problems), problems
    return read_in_unit(text, span, problems, make_unit(((unit, 1),))), problems


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("12 in", 12 * INCH), ("4500 psi", 4500 * POUND / INCH**2), ("4,500 psi", 4500 * POUND / INCH**2),
        ("-120 kip*ft", -120_000 * POUND * 12 * INCH), ("+3 in", 3 * INCH), (".5 in", INCH / 2), ("5. in", 5 * INCH),
        ("1.5e3 lb", 1500 * POUND), ("1e-3 m", F(1, 1000)), ("12in", 12 * INCH), ("7", F(7)), ("5 %", F(1, 20)),
        # feet and inches
        ("18 ft 6 in", 222 * INCH), ("18'-6 1/2\"", F(445, 2) * INCH), ("18' 6\"", 222 * INCH), ("5'", 60 * INCH),
        ("18 ft 6 1/2 in", F(445, 2) * INCH), ("3/4 in", F(3, 4) * INCH), ("6 1/2 in", F(13, 2) * INCH),
        ("6-1/2 in", F(13, 2) * INCH), ("-5 ft 3 in", -63 * INCH), ("2 1/in", 2 / INCH),
    ],
)  # fmt: skip
def test_read(text: str, value: F) -> None:
    amount, problems = _read(text)
    assert not problems and amount is not None and amount.value == value


@pytest.mark.parametrize(
    ("text", "slug"),
    [
        ("", "not-a-quantity"),
        ("twelve", "not-a-quantity"),
        ("1/2 ft", "not-a-quantity"),
        ("1/0 in", "not-a-quantity"),
        ("10^3 psi", "not-a-quantity"),
        ("4 500 psi", "not-a-quantity"),
        ("\u221212 in", "not-a-quantity"),
        ("4.500,5 in", "unknown-unit"),
        ("1" * 19, "not-a-quantity"),
        ("12 inn", "unknown-unit"),
        ("1e999 in", "unknown-unit"),
        ("\u0661 in", "not-a-quantity"),
        ("nan", "not-a-quantity"),
        ("inf in", "not-a-quantity"),
        ("0x10 in", "unknown-unit"),
    ],
)
def test_refused(text: str, slug: str) -> None:
    amount, problems = _read(text)
    assert amount is None
    assert [problem.slug for problem in problems.sorted()] == [slug]


def test_zero_alone_needs_no_unit() -> None:
    amount, problems = _read("0", "kip")
    assert not problems and amount is not None
    assert (amount.value, amount.unit.text, amount.text) == (0, "kip", "0 kip")


@pytest.mark.parametrize("text", ["12", "0.0001", "0 in"])
def test_every_other_number_does(text: str) -> None:
    amount, problems = _read(text, "kip")
    assert amount is None
    assert problems.sorted()[0].slug == ("unit-mismatch" if "in" in text else "bare-number")


@pytest.mark.parametrize("text", ["24 ft 13 in", "24 ft 12 in", "24 ft -6 in", "24' -6\""])
def test_feet_with_a_foot_of_inches_or_less_than_none_are_refused(text: str) -> None:
    problems = Problems()
    source = Source("x", text)
    assert read_amount(text, Span(source, 0, len(text)), problems) is None
    assert [problem.slug for problem in problems.sorted()] != []
