"""What the figure of demand against strength is handed by a template: curves, signs, labels of level pieces."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.commands.desk import Opened, open_project
from calcreport.publish import report
from calcreport.report.model import Figure, FigureBlock, StrengthFigure
from tests.small import write_small

FOOT, KIP_FOOT, KIP = 0.3048, 1355.8179483314004, 4448.2216152605
SYMBOLS = """\
symbols:
  x: {unit: ft, says: place}
  V: {unit: kip, says: shear}
  M: {unit: kip*ft, says: least moment}
  N: {unit: kip*ft, says: greatest moment}
  a: {unit: ft, says: from}
  b: {unit: ft, says: to}
  R: {unit: kip, says: strength}
  P: {unit: kip*ft, says: strength at the beginning}
  Q: {unit: kip*ft, says: strength at the end}
  S: {unit: kip*ft, says: strength against the other sign}
"""
SHEAR = (
    SYMBOLS
    + """\
given: {station: {rows: {x: , V: }, says: stations}, piece: {rows: {a: , b: , R: }, says: pieces}}
lines:
  - {check: shear, holds: 'max(V over station) <= max(R over piece)', cite: statics}
  - {figure: shear strength along span, with: {stations: station, x: x, demand: V, pieces: piece, from: a, to: b, strength: R}}
"""
)
MOMENT = (
    SYMBOLS
    + """\
given: {station: {rows: {x: , M: , N: }, says: stations}, piece: {rows: {a: , b: , P: , Q: , S: }, says: pieces}}
lines:
  - {check: flexure, holds: 'max(N over station) <= max(P over piece)', cite: statics}
  - figure: moment strength along span
    with: {stations: station, x: x, demand: M, least_demand: N, pieces: piece, from: a, to: b, strength: P, strength_to: Q, against: S}
"""
)


def figures_of(folder: Path, template: str, given: str) -> list[Figure]:
    opened = open_project(str(write_small(folder, template, given)))
    assert isinstance(opened, Opened)
    package = report(opened.world, opened.source)
    assert package.composed is not None, package.problems
    return [b.figure for part in package.composed.report.parts for b in part.blocks if isinstance(b, FigureBlock)]


def figure_of(folder: Path, template: str, given: str) -> StrengthFigure:
    found = figures_of(folder, template, given)
    assert len(found) == 1
    assert isinstance(found[0], StrengthFigure)
    return found[0]


def approx(curve: tuple[tuple[float, float], ...], unit: float) -> list[tuple[float, float]]:
    return [(round(x / FOOT, 9), round(value / unit, 9)) for x, value in curve]


def test_strength_holds_for_both_signs_where_no_other_is_given(tmp_path: Path) -> None:
    given = (
        "{station: [{x: 0 ft, V: 30 kip}, {x: 10 ft, V: -20 kip}],"
        " piece: [{a: 6 ft, b: 10 ft, R: 40 kip}, {a: 0 ft, b: 6 ft, R: 50 kip}]}"
    )
    figure = figure_of(tmp_path, SHEAR, given)
    steps = [(0.0, 50.0), (6.0, 50.0), (6.0, 40.0), (10.0, 40.0)]
    assert approx(figure.demands[0], KIP) == [(0.0, 30.0), (10.0, -20.0)]
    assert [approx(curve, KIP) for curve in figure.strengths] == [steps, [(x, -v) for x, v in steps]]
    assert [round(x / FOOT, 9) for x, _ in figure.ticks] == [0.0, 6.0, 10.0]
    assert not figure.down


def test_moments_have_a_strength_for_each_sign_and_slope_within_a_piece(tmp_path: Path) -> None:
    given = (
        "{station: [{x: 0 ft, M: -90 kip*ft, N: -40 kip*ft}, {x: 10 ft, M: 10 kip*ft, N: 60 kip*ft}],"
        " piece: [{a: 0 ft, b: 4 ft, P: 20 kip*ft, Q: 70 kip*ft, S: 100 kip*ft},"
        " {a: 4 ft, b: 10 ft, P: 70 kip*ft, Q: 70 kip*ft, S: 30 kip*ft}]}"
    )
    figure = figure_of(tmp_path, MOMENT, given)
    assert [approx(curve, KIP_FOOT) for curve in figure.demands] == [
        [(0.0, -90.0), (10.0, 10.0)],
        [(0.0, -40.0), (10.0, 60.0)],
    ]
    sagging, hogging = [approx(curve, KIP_FOOT) for curve in figure.strengths]
    assert sagging == [(0.0, 20.0), (4.0, 70.0), (4.0, 70.0), (10.0, 70.0)]
    assert hogging == [(0.0, -100.0), (4.0, -100.0), (4.0, -30.0), (10.0, -30.0)]
    # the sloping piece has no label; against hogging both pieces are level
    places = [(round(x / FOOT, 9), round(v / KIP_FOOT, 9)) for x, v, _ in figure.strength_labels]
    assert places == [(7.0, 70.0), (2.0, -100.0), (7.0, -30.0)]
    assert figure.demand_labels[0][:2] == pytest.approx((0.0, -90.0 * KIP_FOOT))
    assert figure.down


@pytest.mark.parametrize("station", ["[]", "[{x: 0 ft, V: 30 kip}]"])
def test_nothing_to_draw_is_no_figure(tmp_path: Path, station: str) -> None:
    template = SHEAR.replace("{station: {rows", "{station: {least: 0, rows").replace(
        "max(V over station)", "max(V over station otherwise 0)"
    )
    given = "{station: " + station + ", piece: [{a: 0 ft, b: 0 ft, R: 40 kip}]}"
    assert figures_of(tmp_path, template, given) == []
