"""Loads of a floor to a beam, its reactions to a girder with area and unreduced live load, the girder: sums by hand."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from calcreport.calculate.model import Worked
from tests.calculate.shelter import write
from tests.printed import printed
from tests.small import number

# 6 in. of concrete and 25 psf of finishes; a beam every 10 ft, on both sides of the girder at its midspan. The girder
# carries 1,350 ft^2 by beams that stand on it elsewhere in the floor, so that its share is the least one.
FLOOR = """\
  - mark: LD1
    title: floor loads
    template: asce7/floor-loads
    concrete: C4
    given: {member: interior beam, l: 45 ft, b_t: 10 ft, b_s: none, h_f: 6 in, b_w: 12 in, h: 24 in, layer: [],
      superimposed: [{name: finishes, q_i: 25 psf}], wall: [], occupancy: office, L_o: 50 psf, partitions: yes,
      q_p: 15 psf, reduced: yes, n_f: 1}
  - mark: FL1
    title: beam
    template: statics/simple-beam
    concrete: C4
    given: {l: 45 ft, b: 12 in, h: 18 in, b_t: 10 ft, q_D: {from: LD1.q_D}, q_L: {from: LD1.q_L}, w_Da: none,
      w_La: none, P_D: none, P_L: none, x_P: none}
  - mark: HD1
    title: handed down
    template: asce7/handed-loads
    given:
      member: interior beam
      occupancy: office
      L_o: {from: LD1.L_o}
      q_p: {from: LD1.q_p}
      n_f: 1
      A_0: 1350 ft^2
      point:
        - {name: left, x_P: 15 ft, P_D: {from: 'FL1.load[D].R_2'}, P_L: {from: 'FL1.load[L].R_2'},
           q_Lb: {from: LD1.q_L}, A_h: {from: LD1.A_h}}
        - {name: right, x_P: 15 ft, P_D: {from: 'FL1.load[D].R_1'}, P_L: {from: 'FL1.load[L].R_1'},
           q_Lb: {from: LD1.q_L}, A_h: {from: LD1.A_h}}
  - mark: FL2
    title: girder
    template: statics/simple-beam
    concrete: C4
    given: {l: 30 ft, b: 18 in, h: 30 in, b_t: none, q_D: none, q_L: none, w_Da: none, w_La: none,
      P_D: {from: HD1.P_Dsum}, P_L: {from: HD1.P_Lsum}, x_P: 15 ft}
materials: {C4: {f_c: 4000 psi, w_c: 150 pcf}}
"""
# beam: K_LL A_T = 2(450) = 900, 0.25 + 15/30 = 0.75, so 0.75(50) + 15 = 52.5 psf and 0.525(45)/2 = 11.8125 kip a support;
# dead 100 psf and a stem of 0.225 kip/ft: 1.225(45)/2 = 27.5625 kip
# girder: 1350 + 225 + 225 = 1800, twice that 3600, 0.25 + 15/60 = 0.5; 25 + 15 = 40 psf, 11.8125(40)/52.5 = 9 kip
# its moment: 1.2(0.5625(30)(30)/8 + 55.125(30)/4) + 1.6(18)(30)/4 = 572.0625 + 216
BY_HAND = {
    "LD1": {"A_T": 450, "R_L": 0.75, "q_L": 52.5, "w_D": 1.225, "w_r": 0.5},
    "HD1": {"A_T": 1800, "R_L": 0.5, "q_L": 40, "P_Dsum": 55.125, "P_Lsum": 18},
    "FL2": {"M_u": 788.0625},
}


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("floor")


@pytest.fixture(scope="module")
def worked(folder: Path) -> dict[str, Worked]:
    return write(folder, FLOOR)


@pytest.mark.parametrize(("mark", "path"), [(mark, path) for mark, paths in BY_HAND.items() for path in paths])
def test_a_floor_down_to_its_girder(worked: dict[str, Worked], mark: str, path: str) -> None:
    assert number(worked[mark], path) == pytest.approx(BY_HAND[mark][path], rel=1e-12)


def test_the_sheet_names_the_lines_that_single_cells_came_from(worked: dict[str, Worked], folder: Path) -> None:
    # given values of LD1 are lines 1 to 17, then q_D 18, w_sw 19, w_w 20, w_D 21, A_T 22, A_h 23, L_min 24, two checks, K_LL
    # 27, A_I 28, R_L 29, L 30, q_L 31; of FL1 the reactions by load case are lines 19 and 20
    assert worked
    found = re.search(r"reactions handed down.{0,200}?project file ((?:\w+\.\d+ ?)+)", printed(folder))
    assert found is not None
    assert sorted(found[1].split()) == ["FL1.19", "FL1.20", "LD1.23", "LD1.31"]
