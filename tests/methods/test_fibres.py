"""Sections by fibres against strain compatibility worked another way: forces in closed form, thirty-digit bisection."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import mpmath
import pytest

from calcreport.methods.fibres import section_by_fibres, section_in_bands_by_fibres
from calcreport.methods.results import Handed, NoResult

MP = mpmath.mp.clone()
MP.dps = 30

#: kip and in.; two layers, the upper one in the compressed concrete and below its yield strain
DOUBLE: Handed = {
    "b": 14.0, "h": 24.0, "layers": 2.0, "y": (2.5, 21.5), "A_s": (2.0, 5.0), "P": 0.0, "stress": "uniform",
    "f": 3.4, "share": 0.85, "eps_cu": 0.003, "f_y": 60.0, "E_s": 29000.0, "displaced": "deducted", "fibres": 200.0,
}  # fmt: skip
LEVEL: Handed = {**{name: value for name, value in DOUBLE.items() if name != "share"}, "stress": "parabola",
                 "eps_0": 0.002}  # fmt: skip


def quiet(work: int) -> None:
    """Take all work as free."""


def block(handed: Handed, c: Any) -> tuple[Any, Any]:
    """Return force and moment about mid-depth of a uniform stress: 0.85 f a b at (h - a)/2."""
    a = min(MP.mpf(handed["share"]) * c, MP.mpf(handed["h"]))
    force = MP.mpf(handed["f"]) * a * MP.mpf(handed["b"])
    return force, force * (MP.mpf(handed["h"]) - a) / 2


def parabola(handed: Handed, c: Any) -> tuple[Any, Any]:
    """Return the same of a parabola up to a level, integrated over the depth by the library's quadrature."""
    h, eps_cu, eps_0 = (MP.mpf(handed[name]) for name in ("h", "eps_cu", "eps_0"))

    def stress(y: Any) -> Any:
        part = max(MP.mpf(0), min(MP.mpf(1), eps_cu * (c - y) / c / eps_0))
        return MP.mpf(handed["f"]) * MP.mpf(handed["b"]) * (2 * part - part**2)

    knots = sorted({MP.mpf(0), min(c * (1 - eps_0 / eps_cu), h), min(c, h)})
    return MP.quad(stress, knots), MP.quad(lambda y: stress(y) * (h / 2 - y), knots)


def strength(handed: Handed, concrete: Callable[[Handed, Any], tuple[Any, Any]]) -> tuple[Any, Any]:
    """Return neutral axis and moment by bisection in thirty digits."""

    def sums(c: Any) -> tuple[Any, Any]:
        force, moment = concrete(handed, c)
        for y, area in zip(map(MP.mpf, handed["y"]), map(MP.mpf, handed["A_s"]), strict=True):
            strain = MP.mpf(handed["eps_cu"]) * (c - y) / c
            f = max(-MP.mpf(handed["f_y"]), min(MP.mpf(handed["f_y"]), MP.mpf(handed["E_s"]) * strain))
            if handed["displaced"] == "deducted" and handed["stress"] == "uniform":
                f -= MP.mpf(handed["f"]) if y < MP.mpf(handed["share"]) * c else 0
            elif handed["displaced"] == "deducted":
                part = max(MP.mpf(0), min(MP.mpf(1), strain / MP.mpf(handed["eps_0"])))
                f -= MP.mpf(handed["f"]) * (2 * part - part**2)
            force, moment = force + area * f, moment + area * f * (MP.mpf(handed["h"]) / 2 - y)
        return force - MP.mpf(handed["P"]), moment

    low, high = MP.mpf("0.01"), MP.mpf(200)
    for _ in range(90):
        middle = (low + high) / 2
        low, high = (middle, high) if sums(middle)[0] < 0 else (low, middle)
    return low, sums(low)[1]


@pytest.mark.parametrize(
    "change",
    [{}, {"displaced": "kept"}, {"P": 300.0}, {"P": -120.0}, {"P": 900.0, "A_s": (4.0, 4.0)}, {"fibres": 37.0},
     {"f_y": 75.0, "share": 0.8}],
)  # fmt: skip
def test_a_uniform_stress_is_worked_to_the_last_bits(change: dict[str, Any]) -> None:
    handed = {**DOUBLE, **change}
    result = section_by_fibres(handed, quiet)
    c, moment = strength(handed, block)
    assert result.outputs["c"] == pytest.approx(float(c), rel=1e-12)
    assert result.outputs["M"] == pytest.approx(float(moment), rel=1e-12)
    (proof,) = result.proofs
    assert abs(proof.residual) <= 1e-12 * proof.of


def test_one_layer_by_hand() -> None:
    # a = 3(60)/(0.85(4)(14)) = 3.78151 in.; M = 180(21.5 - 3.78151/2) = 3529.664 kip-in; c = a/0.85 = 4.448837
    result = section_by_fibres({**DOUBLE, "y": (21.5,), "A_s": (3.0,), "layers": 1.0}, quiet)
    assert result.outputs["M"] == pytest.approx(3529.664, abs=0.001)
    assert result.outputs["c"] == pytest.approx(4.448838, abs=1e-6)
    assert (result.outputs["C"], result.outputs["F"]) == pytest.approx((180.0, -180.0))
    assert result.outputs["eps_t"] == pytest.approx(0.003 * (21.5 - 4.448838) / 4.448838)  # 0.011498


def test_the_error_of_a_parabola_falls_with_the_square_of_the_fibres() -> None:
    _, exact = strength(LEVEL, parabola)
    errors = []
    for fibres in (50.0, 200.0, 800.0):
        result = section_by_fibres({**LEVEL, "fibres": fibres}, quiet)
        errors.append(abs(result.outputs["M"] - float(exact)) / float(exact))
    assert errors[0] < 2e-4 and errors[1] < errors[0] / 4 and errors[2] < errors[1] / 4


#: a flange 30 in. wide and 4 in. thick on a web of 14 in., kip and in.
FLANGED: Handed = {**{name: value for name, value in DOUBLE.items() if name not in ("b", "h")}, "bands": 2.0,
                   "b": (30.0, 14.0), "to": (4.0, 24.0)}  # fmt: skip


def under_flange(handed: Handed, c: Any) -> tuple[Any, Any]:
    """Return force and moment about mid-depth of a uniform stress: a web of full depth, and what the flange adds."""
    (wide, web), (thick, h) = handed["b"], handed["to"]
    a = min(MP.mpf(handed["share"]) * c, MP.mpf(h))
    stem = MP.mpf(handed["f"]) * web * a
    sides = MP.mpf(handed["f"]) * (wide - web) * min(a, thick)
    return stem + sides, stem * (h - a) / 2 + sides * (h - min(a, thick)) / 2


def strength_of(handed: Handed, concrete: Callable[[Handed, Any], tuple[Any, Any]]) -> tuple[Any, Any]:
    """Return the same of a section in bands, whose depth is where the last one ends."""
    (*_, h), found = handed["to"], concrete
    return strength({**handed, "h": h}, lambda _, c: found(handed, c))


@pytest.mark.parametrize(
    "change",
    [{}, {"displaced": "kept"}, {"P": 300.0}, {"A_s": (0.5, 2.0)}, {"fibres": 37.0}, {"fibres": 24.0},
     {"to": (4.03, 24.0)}, {"b": (14.0, 30.0)}],
)  # fmt: skip
def test_a_flange_is_worked_to_the_last_bits(change: dict[str, Any]) -> None:
    handed = {**FLANGED, **change}
    result = section_in_bands_by_fibres(handed, quiet)
    c, moment = strength_of(handed, under_flange)
    assert result.outputs["c"] == pytest.approx(float(c), rel=1e-12)
    assert result.outputs["M"] == pytest.approx(float(moment), rel=1e-12)
    (proof,) = result.proofs
    assert abs(proof.residual) <= 1e-12 * proof.of


def test_a_flange_by_hand() -> None:
    # steel 8(60) = 480; flange 3.4(16)(4) = 217.6; web 262.4 = 3.4(14)a, a = 5.512605 in., c = 6.485418 in.
    # M = 217.6(21.5 - 2) + 262.4(21.5 - 2.756303) = 9161.546 kip-in
    result = section_in_bands_by_fibres({**FLANGED, "y": (21.5,), "A_s": (8.0,), "layers": 1.0}, quiet)
    assert result.outputs["c"] == pytest.approx(6.485418, abs=1e-6)
    assert result.outputs["M"] == pytest.approx(9161.546, abs=0.001)


def test_the_parabola_under_a_flange() -> None:
    def sides(handed: Handed, c: Any) -> tuple[Any, Any]:
        plain = {**LEVEL, "h": 24.0, "b": 14.0}
        force, moment = parabola(plain, c)
        eps_cu, eps_0 = MP.mpf("0.003"), MP.mpf("0.002")
        knots = sorted({MP.mpf(0), min(c / 3, MP.mpf(4)), min(c, MP.mpf(4))})

        def stress(y: Any) -> Any:
            part = max(MP.mpf(0), min(MP.mpf(1), eps_cu * (c - y) / c / eps_0))
            return MP.mpf("3.4") * 16 * (2 * part - part**2)

        return force + MP.quad(stress, knots), moment + MP.quad(lambda y: stress(y) * (12 - y), knots)

    handed = {**{name: value for name, value in LEVEL.items() if name not in ("b", "h")}, "bands": 2.0,
              "b": (30.0, 14.0), "to": (4.0, 24.0), "fibres": 800.0}  # fmt: skip
    result = section_in_bands_by_fibres(handed, quiet)
    c, moment = strength_of(handed, sides)
    assert result.outputs["c"] == pytest.approx(float(c), rel=1e-5)
    assert result.outputs["M"] == pytest.approx(float(moment), rel=1e-5)


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"to": (24.0, 4.0)}, "below that of the band before"),
        ({"to": (4.0, 4.0)}, "below that of the band before"),
        ({"b": (30.0, 0.0)}, "needs a width"),
        ({"b": (), "to": (), "bands": 0.0}, "needs h above zero"),
        ({"y": (2.5, 24.5)}, "stands outside"),
    ],
)
def test_no_bands_that_are_none(change: dict[str, Any], words: str) -> None:
    with pytest.raises(NoResult, match=words):
        section_in_bands_by_fibres({**FLANGED, **change}, quiet)


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"P": 5000.0}, "beyond what the section bears"),
        ({"P": -5000.0}, "beyond what the section bears"),
        ({"y": (2.5, 24.5)}, "stands outside"),
        ({"share": 1.2}, "stressed depth"),
        ({"b": 0.0}, "needs b above zero"),
        ({"y": (), "A_s": (), "layers": 0.0}, "a layer of steel"),
    ],
)
def test_no_result_where_there_is_none(change: dict[str, Any], words: str) -> None:
    with pytest.raises(NoResult, match=words):
        section_by_fibres({**DOUBLE, **change}, quiet)
