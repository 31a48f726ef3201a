"""Names and units as the trade writes them; expected trees are written by hand (common practice)."""

from __future__ import annotations

import pytest

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.core.units import read_unit
from calcreport.report.display import PRIME, show_name, unit_text
from calcreport.report.model import Letters, Root, Row, Script


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
