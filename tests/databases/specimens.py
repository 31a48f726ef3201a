"""What of a test is handed to which template, and what is measured against: one function a kind of test.

Nominal strengths: strength reduction factors and limits are left aside, strengths of materials are as measured.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from math import sqrt

from .tables import Row, number
from .work import Asked, Bench

#: sizes of kN·m, kN, mm, MPa and mm^4 in metre and newton
_KNM, _KN, _MM, _MPA, _MM4 = 1000.0, 1000.0, 0.001, 1e6, 1e-12
#: steel whose modulus no table gives
_STEEL = "bars: {E_s: 200000 MPa}"
#: days of a month, as the tables count
_MONTH = 30.4


def flexure(bench: Bench, row: Row) -> float:
    """Return moment at failure over nominal moment; compression bars are ignored."""
    b, h = number(row, "b_mm"), number(row, "h_mm")
    d = h - number(row, "cover_to_bar_centre_mm")
    given = f"b: {b} mm, d: {d} mm, d_t: {d} mm, d_in: {d} mm, A_s: {number(row, 'rho_t_pct') / 100 * b * h:.12g} mm^2, rounded_eps_ty: no"
    materials = f"concrete: {{f_c: {row['fc_MPa']} MPa}}, bars: {{f_y: {row['fy_MPa']} MPa, E_s: 200000 MPa}}"
    (M_n,) = bench.work(Asked("aci318/flexure-strength", "2019", given, materials, (("M_n", _KNM),)))
    return number(row, "M_test_kNm") / M_n


def layered(bench: Bench, row: Row) -> float:
    """Return moment at failure over nominal moment, the steel yielding or not."""
    b, h = number(row, "b_mm"), number(row, "h_mm")
    layer = f"{{y: {h - number(row, 'cover_to_bar_centre_mm')} mm, A_sl: {number(row, 'rho_t_pct') / 100 * b * h:.12g} mm^2}}"
    given = f"b: {b} mm, b_w: {b} mm, h_f: none, h: {h} mm, layer: [{layer}], M_u: 0 kN*m, rounded_eps_ty: no, sdc: A, in_sfrs: no"
    materials = f"concrete: {{f_c: {row['fc_MPa']} MPa}}, bars: {{f_y: {row['fy_MPa']} MPa, E_s: 200000 MPa}}"
    (M_n,) = bench.work(Asked("aci318/flexure-layers", "2019", given, materials, (("M_n", _KNM),)))
    return number(row, "M_test_kNm") / M_n


def shear(bench: Bench, row: Row, *, year: str) -> float:
    """Return shear at failure over the concrete's share; the members have no stirrups, so 318-19 takes their size in."""
    b, d = number(row, "bw_mm"), number(row, "d_mm")
    steel = f"A_s: {number(row, 'rho_pct') / 100 * b * d:.12g} mm^2, " if year == "2019" else ""
    given = f"b_w: {b} mm, d: {d} mm, {steel}N_u: none, A_g: none"
    materials = f"concrete: {{f_c: {row['fc_MPa']} MPa, lambda: '1'}}"
    template = "aci318/shear-bare" if year == "2019" else "aci318/shear-concrete"
    (V_c,) = bench.work(Asked(template, year, given, materials, (("V_c", _KN),)))
    return number(row, "V_test_kN") / V_c


def deflection(bench: Bench, row: Row, *, year: str, total: bool, ours: bool) -> float:
    """Return measured over computed deflection, immediate or in the end.

    `ours` takes the moduli from the template, which refuses weak concrete; else they are those of the table's head.
    Moments of both loads act as one dead load; the coefficients of their deflections, which the table gives and which
    are not all among those of the template, replace that of the uniform load.
    """
    f_c = number(row, "fc_MPa")
    E_c, f_r = 4700 * sqrt(f_c), 0.62 * sqrt(f_c)
    if ours:
        concrete = f"concrete: {{f_c: {f_c} MPa, density: '2300 kg/m^3', lambda: '1'}}"
        wanted = (("E_c", _MPA), ("f_r", _MPA))
        E_c, f_r = bench.work(Asked("aci318/modulus", year, "E_c_by: normalweight", concrete, wanted))
    b, h, d = (number(row, name) for name in ("b_mm", "h_mm", "d_mm"))
    section = f"[{{name: middle, d: {d} mm, A_s: {row['As_mm2']} mm^2, d_c: none, A_sc: none}}]"
    given = f"b_w: {b} mm, h: {h} mm, b_f: none, h_f: none, section: {section}, f_r: {f_r:.12g} MPa, E_c: {E_c:.12g} MPa, rounded_n: no"
    wanted = (("I_g", _MM4), ("section[middle].I_cr", _MM4), ("section[middle].M_cr", _KNM))
    I_g, I_cr, M_cr = bench.work(Asked("aci318/cracked-section", year, given, _STEEL, wanted))
    moments = [number(row, f"M{load}_Nm") for load in (1, 2)]
    section = f"[{{name: middle, M_D: {sum(moments) / 1000:.12g} kN*m, M_L: 0 kN*m, M_c: none, M_cr: {M_cr:.12g} kN*m, I_cr: {I_cr:.12g} mm^4}}]"
    given = (
        f"span: simple, l: {row['L_mm']} mm, E_c: {E_c:.12g} MPa, I_g: {I_g:.12g} mm^4, section: {section}, D_load: uniform, L_load: uniform, "
        f"I_e_over: midspan, psi: 0, rho_p: {number(row, 'Asp_mm2') / (b * d):.12g}, t_D: {number(row, 't_days') / _MONTH:.12g}, t_S: 0, t_a: 0, "
        "floor_or_roof: floor, attached: tolerant"
    )
    wanted = (("Delta_D", _MM), ("Delta_after", _MM))
    Delta_D, Delta_after = bench.work(Asked("aci318/deflection", year, given, "", wanted))
    share = sum(number(row, f"K{load}") * moment for load, moment in enumerate(moments, 1)) / (5 / 48 * sum(moments))
    if total:
        return number(row, "defl_total_mm") / (share * (Delta_D + Delta_after))
    return number(row, "defl_initial_mm") / (share * Delta_D)


def _used(row: Row) -> bool:
    return row["use"] == "1"


def _every(_: Row) -> bool:
    return True


#: file, and for each statistic: its name in the head of the file, what is said beside it, which rows, how a row is worked
DATABASES: tuple[tuple[str, tuple[tuple[str, str, Callable[[Row], bool], Callable[[Bench, Row], float]], ...]], ...] = (
    (
        "tests-beam-flexure.csv",
        (
            ("used", "steel yields", _used, flexure),
            ("used", "strains of the layers", _used, layered),
            ("all", "steel yields", _every, flexure),
            ("all", "strains of the layers", _every, layered),
        ),
    ),
    (
        "tests-oneway-shear.csv",
        (("318-19", "", _every, partial(shear, year="2019")), ("318-14", "", _every, partial(shear, year="2014"))),
    ),
    (
        "tests-beam-deflection.csv",
        tuple(
            (f"{when} 318-{year[2:]}", note, _used, partial(deflection, year=year, total=when == "total", ours=ours))
            for when in ("initial", "total")
            for year in ("2019", "2014")
            for note, ours in (("moduli of the head", False), ("moduli of the template", True))
        ),
    ),
)
