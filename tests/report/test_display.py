"""Names and units as the trade writes them; expected trees are written by hand (common practice)."""

from __future__ import annotations

from fractions import Fraction as F

import pytest

from calcreport.core.problems import Problems
from calcreport.core.shows import read_shown
from calcreport.core.source import Source, Span
from calcreport.core.units import read_unit
from calcreport.report.display import PRIME, show_feet, show_name, trade_marks, unit_text
from calcreport.report.model import Accent, Formula, Letters, Operator, Root, Row, Script, Space


def italic(text: str) -> Letters:
    return Letters(text, "italic")


@pytest.mark.parametrize(
    ("name", "shown"),
    [
        ("b", italic("b")),
        ("A_s", Script(italic("A"), italic("s"))),
        ("f_c'", Script(italic("f"), italic("c"), Letters(PRIME))),
        ("beta_1", Script(italic("β"), Letters("1"))),
        ("eps_t", Script(italic("ε"), italic("t"))),
        ("phiM_n", Row((italic("φ"), Script(italic("M"), italic("n"))))),
        ("A_s,min", Script(italic("A"), Row((italic("s"), Letters(","), Letters("min"))))),
        ("√f_c'", Root(Script(italic("f"), italic("c"), Letters(PRIME)))),
        ("f'_c", Script(italic("f"), italic("c"), Letters(PRIME))),
        ("eps_s'", Script(italic("ε"), italic("s"), Letters(PRIME))),
        ("d''", Script(italic("d"), None, Letters(PRIME * 2))),
        ("A_{s,min}", Script(italic("A"), Row((italic("s"), Letters(","), Letters("min"))))),
        ("f_{ct}", Script(italic("f"), Letters("ct"))),
        ("bar(y)", Accent(italic("y"), "\u0304")),
        ("bar(y)_t", Script(Accent(italic("y"), "\u0304"), italic("t"))),
        ("hat(eps)_{cu}'", Script(Accent(italic("ε"), "\u0302"), Letters("cu"), Letters(PRIME))),
        ("√bar(f)_c", Root(Script(Accent(italic("f"), "\u0304"), italic("c")))),
        ("Delta_u", Script(italic("Δ"), italic("u"))),
        ("stem.M_n", Script(italic("M"), italic("n"))),
        ("d_agg", Script(italic("d"), Letters("agg"))),
        ("rounded yield strain", Letters("rounded yield strain")),
    ],
)
def test_symbol(name: str, shown: object) -> None:
    assert show_name(name) == shown


@pytest.mark.parametrize(
    ("unit", "text"),
    [("in", "in."), ("in^2", "in.²"), ("kip*ft", "kip·ft"), ("lb/ft^3", "lb/ft³"), ("kip*in", "kip·in."), ("1", ""),
     ("kN*m", "kN·m"), ("N/mm^2", "N/mm²"), ("psi", "psi")],
)  # fmt: skip
def test_unit(unit: str, text: str) -> None:
    source = Source("t", unit)
    found = read_unit(unit, Span(source, 0, len(unit)), Problems())
    assert found is not None
    assert unit_text(found) == text


@pytest.mark.parametrize(
    "text",
    [
        "bar(y",
        "bar(xy)",
        "box(y)",
        "A_{s,min",
        "A_s}",
        "A_",
        "'",
        "",
        "A^2",
        "f'_c'",
        "A_s,,t",
        "√√f",
        "A__s",
    ],
)
def test_what_is_no_display(text: str) -> None:
    assert read_shown(text) is None


def spelled(items: tuple[Formula, ...]) -> str:
    """Return what is printed, a space where the eye sees one."""
    return "".join(
        " " if isinstance(item, Space) else f"{item.text} " if isinstance(item, Operator) else item.text  # type: ignore[union-attr]
        for item in items
    )


@pytest.mark.parametrize(
    ("inches", "step", "shown"),
    [
        # 18 ft = 216 in.
        (222.5, F(1, 16), "= 18′-6 1/2″"),
        (216.0, F(1, 16), "= 18′-0″"),
        (216.5, F(1, 16), "= 18′-0 1/2″"),
        (6.5, F(1, 4), "= 6 1/2″"),
        (0.75, F(1, 4), "= 3/4″"),
        (0.0, F(1, 4), "= 0″"),
        (7.0, F(1), "= 7″"),
        # 0.30 in. is 4.8 sixteenths; 11.99 in. is 191.84 sixteenths, a foot
        (216.3, F(1, 16), "≈ 18′-0 5/16″ (to 1/16″)"),
        (11.99, F(1, 16), "≈ 1′-0″ (to 1/16″)"),
        # half a step up: 1/32 in. is half of 1/16
        (0.03125, F(1, 16), "≈ 1/16″ (to 1/16″)"),
        (-222.5, F(1, 2), "= −18′-6 1/2″"),
        (14406.0, F(1, 2), "= 1,200′-6″"),
    ],
)
def test_feet_and_inches(inches: float, step: F, shown: str) -> None:
    # common practice: feet and inches joined by a hyphen, a fraction in lowest terms behind a space
    assert spelled(show_feet(inches, step)) == shown


def test_typed_feet_take_the_marks_of_the_trade() -> None:
    assert trade_marks("18'-6 1/2\"") == "18′-6 1/2″"
