"""Exact working against the decimal library, to forty digits."""

from __future__ import annotations

from decimal import Decimal, getcontext
from fractions import Fraction

import pytest

from calcreport.calculate import exact
from calcreport.calculate.model import Values
from calcreport.core.grammar import read_formula
from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span

EMPTY = Values([], [], [], [], (), ())


def work(text: str) -> Fraction:
    problems = Problems()
    node = read_formula(text, Span(Source("t", text), 0, len(text)), problems)
    assert node is not None, [p.message for p in problems.sorted()]
    return exact.work(node, EMPTY)


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("0.1 + 0.2", Fraction(3, 10)),
        ("1/3*3", Fraction(1)),
        ("sqrt(2.25)", Fraction(3, 2)),
        ("2^-3", Fraction(1, 8)),
        ("(9/4)^0.5", Fraction(3, 2)),
        ("max(1/3, 0.333)", Fraction(1, 3)),
        ("rounddown(0.3, 0.1)", Fraction(3, 10)),
        ("roundup(0.31, 0.1)", Fraction(4, 10)),
        ("1 in + 1 ft", 13 * Fraction(254, 10000)),
    ],
)
def test_rational_results_are_exact(text: str, value: Fraction) -> None:
    assert work(text) == value


@pytest.mark.parametrize(
    ("text", "reference"),
    [
        ("sqrt(2)", lambda: Decimal(2).sqrt()),
        ("exp(1.5)", lambda: Decimal("1.5").exp()),
        ("ln(7)", lambda: Decimal(7).ln()),
        ("2^(1/3)", lambda: Decimal(2) ** (Decimal(1) / Decimal(3))),
    ],
)
def test_irrational_results_agree_with_decimal_arithmetic(text: str, reference) -> None:  # type: ignore[no-untyped-def]
    getcontext().prec = 55
    found = work(text)
    value = Decimal(found.numerator) / Decimal(found.denominator)
    assert abs(value - reference()) < Decimal(10) ** -45
