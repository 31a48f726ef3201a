"""The command on invented tests whose ratios are sums by hand; no table of real tests stands in the repository."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.databases.__main__ import main

# a = 400(510)/(0.85(30)(200)) = 40 mm; 204 kN (350 - 20) mm = 67.32 kN·m, times 1.1 and 0.9; the third is left out
FLEXURE = """\
# Ratio: M_test / Mn
# statistic open [used]: n = 2, mean = 1.000, cov = 0.141
b_mm,h_mm,cover_to_bar_centre_mm,rho_t_pct,fy_MPa,fc_MPa,M_test_kNm,use
200,400,50,0.5,510,30,74.052,1
200,400,50,0.5,510,30,60.588,1
200,400,50,0.5,510,30,200,0
"""
# d = 250 mm: no size effect; rho^(1/3) = 0.2: 0.66(0.2)(6)(300)(250) = 59.4 kN; 0.17(6)(75 000) = 76.5 kN
SHEAR = """\
specimen,bw_mm,d_mm,rho_pct,fc_MPa,V_test_kN
A,300,250,0.8,36,59.4
B,300,250,0.8,36,118.8
"""
# uncracked: 4700(5) = 23 500 MPa, I = 200(300^3)/12 = 4.5e8; 5 kN·m, a quarter at midspan, over 3 m:
# (3.75(5/48) + 1.25/12)e6(9e6)/(23 500(4.5e8)) = 0.421 099 mm; after 60 months three times that
DEFLECTION = """\
author,b_mm,h_mm,As_mm2,d_mm,Asp_mm2,fc_MPa,L_mm,M1_Nm,K1,M2_Nm,K2,defl_initial_mm,t_days,defl_total_mm,use
X,200,300,400,250,,25,3000,3750,0.1041666667,1250,0.0833333333,0.421099,1824,1.263298,1
X,200,300,400,250,,25,3000,3750,0.1041666667,1250,0.0833333333,0.842199,1824,2.526596,1
X,200,300,400,250,,16,3000,3750,0.1041666667,1250,0.0833333333,0.9,1824,2.526596,1
"""


def test_ratios_are_those_of_sums_by_hand(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Means 1, 1.5 and the refusal of concrete below 17 MPa."""
    for name, text in (("beam-flexure", FLEXURE), ("oneway-shear", SHEAR), ("beam-deflection", DEFLECTION)):
        (tmp_path / f"tests-{name}.csv").write_text(text, encoding="utf-8")
    assert main([str(tmp_path)]) == 0
    told = [" ".join(line.split()) for line in capsys.readouterr().out.splitlines()]
    assert "tests-beam-flexure, used, steel yields 2 1.000 0.141 2 1.000 0.141" in told
    assert "tests-oneway-shear, 318-19 2 1.500 0.471 none" in told
    assert "tests-oneway-shear, 318-14 2 1.165 0.471 none" in told  # (59.4 + 118.8)/2/76.5
    for when in ("initial", "total"):
        assert f"tests-beam-deflection, {when} 318-19, moduli of the template 2 1.500 0.471 none" in told
    assert told.count("1 refused: requirement not met: concrete weaker than structural concrete may be") == 4


def test_a_folder_without_the_tables_is_told(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Exit code 2 and the file that is not there."""
    assert main([str(tmp_path)]) == 2
    assert "there is no tests-beam-flexure.csv" in capsys.readouterr().out
