"""A continuous beam handing down what it comes to: stations of a span, reactions by case, service moments by case."""

from __future__ import annotations

from contextlib import redirect_stdout
from io import StringIO
from pathlib import Path

import pytest
from pypdf import PdfReader

from calcreport.__main__ import main
from calcreport.commands.desk import Opened, open_project
from calcreport.driver import work
from calcreport.second.agreement import compare_paths
from tests.small import HEAD, TEMPLATE_HEAD, number

#: two spans of 20 ft under 1 kip/ft of dead load (0.15 of it the beam's own) and 1 kip/ft of live load on any spans
BEAM = """\
  - mark: CB1
    title: Beam of two spans
    template: statics/continuous-beam
    concrete: C4
    given:
      span:
        - {name: AB, l: 20 ft, b: 12 in, h: 12 in, d: 18 in, I: 4000 in^4, end_1: compressed, end_2: compressed}
        - {name: BC, l: 20 ft, b: 12 in, h: 12 in, d: 18 in, I: 4000 in^4, end_1: compressed, end_2: compressed}
      support: [{name: A, hold: pinned, c: 12 in, K_r: none}, {name: B, hold: pinned, c: 12 in, K_r: none}, {name: C, hold: pinned, c: 12 in, K_r: none}]
      column: []
      I_c: none
      l_c: none
      E_c: 3600 ksi
      load: [{name: D, placing: everywhere}, {name: L, placing: patterned}]
      w: {AB: {D: 0.85 kip/ft, L: 1 kip/ft}, BC: {D: 0.85 kip/ft, L: 1 kip/ft}}
      patch: []
      w_1: none
      w_2: none
      point: []
      P: none
      b_t: 10 ft
      top: yes
      k_L: 1
"""
TAKER = """\
  - mark: T1
    title: Takes
    template: small
    given:
      station: {from: CB1.station, at: {span: AB}, columns: {x: x, V_u: V_u, M_max: M_max, M_min: M_min}}
      load: {from: CB1.load, at: {support: B}, columns: {R: R, R_max: R_max}}
      A_T: {from: CB1.A_T, at: {support: B}}
      M_a: {from: CB1.M_m, at: {span: AB, load: D}}
"""
TEMPLATE = """\
symbols:
  x: {unit: ft, says: place}
  V_u: {unit: kip, says: shear}
  M_max: {unit: kip*ft, says: greatest moment}
  M_min: {unit: kip*ft, says: least moment}
  R: {unit: kip, says: reaction}
  R_max: {unit: kip, says: greatest reaction}
  A_T: {unit: ft^2, says: area}
  M_a: {unit: kip*ft, says: moment}
  V_m: {unit: kip, says: greatest shear}
  M_m: {unit: kip*ft, says: least of all}
  R_t: {unit: kip, says: dead and live}
given: {station: {rows: {x: , V_u: , M_max: , M_min: }, says: stations}, load: {rows: {R: , R_max: }, says: load cases}, A_T: , M_a: }
lines:
  - {gives: V_m, formula: 'max(V_u over station)', cite: statics}
  - {gives: M_m, formula: 'min(M_min over station)', cite: statics}
  - {gives: R_t, formula: 'sum(R_max over load)', cite: statics}
"""


@pytest.fixture
def project(tmp_path: Path) -> Path:
    (tmp_path / "small.yaml").write_text(TEMPLATE_HEAD + TEMPLATE, encoding="utf-8")
    head = HEAD.replace("calculations:", "materials: {C4: {f_c: 4000 psi, w_c: 150 pcf}}\ncalculations:")
    (tmp_path / "project.yaml").write_text(head + BEAM + TAKER, encoding="utf-8")
    return tmp_path / "project.yaml"


def test_what_is_handed_down(project: Path) -> None:
    opened = open_project(str(project))
    assert isinstance(opened, Opened)
    result = work(opened.world, opened.source)
    assert not result.problems and result.worked is not None
    taker = result.worked.calculations[1]
    # 1.2 + 1.6 = 2.8 kip/ft on both spans: 0.625(2.8)(20) = 35 kip and -2.8(400)/8 = -140 kip-ft over B (common practice)
    assert number(taker, "V_m") == pytest.approx(35)
    assert number(taker, "M_m") == pytest.approx(-140)
    # 1.25 w l from both spans: 25 kip dead and 25 kip live
    assert number(taker, "R_t") == pytest.approx(50)
    # ten feet from either side, ten feet wide
    assert number(taker, "A_T") == pytest.approx(200)
    # 7.5(10) - 10(5) = 25 kip-ft, with 0.375 w l = 7.5 kip at A
    assert number(taker, "M_a") == pytest.approx(25)
    assert compare_paths(result.worked).differences == ()


def test_the_sheet(project: Path) -> None:
    pdf = project.with_name("x.pdf")
    with redirect_stdout(StringIO()):
        assert main(["build", str(project), "-o", str(pdf)]) == 0
    flat = "".join("".join(page.extract_text() for page in PdfReader(pdf).pages).split())
    # ten feet of member from either side of B, ten feet wide
    # 2 ft from A, with live load on AB alone: 2.8(10) - (1.2(50) + 1.6(25))/20 - 2.8(2) = 17.4; 2 ft from B 35 - 2.8(2) = 29.4
    for line in ("AB 0 2 17.4 0 18 29.4", "B, D 25 25 25 0 0 0", "B 20 200 70 30 0 0", "V kip", "M kip·ft"):
        assert "".join(line.split()) in flat, line
