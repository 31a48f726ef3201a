"""Formulas of the report on one row of plain text; the expected texts are written by hand from the notation."""

from __future__ import annotations

import pytest

from calcreport.report.formula_model import (
    Accent,
    Big,
    Fence,
    Formula,
    Fraction,
    Letters,
    Operator,
    Reference,
    Root,
    Row,
    Script,
    Space,
    Stack,
    Strong,
)
from calcreport.report.plain import plain_formula, plain_words

A, B = Letters("a", "italic"), Letters("b", "italic")
M_N = Row((Letters("φ", "italic"), Script(Letters("M", "italic"), Letters("n"))))
PLUS, GE = Operator("+", "binary"), Operator("≥", "relation")


@pytest.mark.parametrize(
    ("formula", "text"),
    [
        (M_N, "φM_n"),
        (Row((A, PLUS, B)), "a + b"),
        (Row((A, GE, Letters("4,000"), Space("unit"), Letters("psi"))), "a ≥ 4,000 psi"),
        (Fraction(Row((A, PLUS, B)), A), "(a + b)/a"),
        (Fraction(A, Fraction(A, B)), "a/(a/b)"),
        (Fraction(A, Fence("(", Row((A, PLUS, B)), ")")), "a/(a + b)"),
        (Root(Script(Letters("f", "italic"), Letters("c"), Letters("′"))), "√(f_c′)"),
        (Root(A, Letters("3")), "3√(a)"),
        (Script(A, None, Letters("2")), "a^2"),
        (Script(A, None, Fraction(Letters("1"), Letters("2"))), "a^(1/2)"),
        (Script(A, Row((Letters("s"), Operator(",", "punctuation"), Letters("min")))), "a_(s, min)"),
        (Accent(A, "\u0304"), "a\u0304"),
        (Stack((A, B)), "a; b"),
        (Row((Big(Letters("Σ"), Letters("layer")), A)), "Σ_layer a"),
        (Row((Big(Letters("max")), A)), "max a"),
    ],
)  # fmt: skip
def test_a_formula_on_one_row(formula: Formula, text: str) -> None:
    assert plain_formula(formula) == text


def test_words_with_what_stands_among_them() -> None:
    assert plain_words(("shear: ", Strong("0.42 OK"), "  see ", Reference("14", "B1.14"), " ", M_N)) == (
        "shear: 0.42 OK see 14 φM_n"
    )
