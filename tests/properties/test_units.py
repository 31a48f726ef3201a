"""Equal quantities in other units give the same package: every value, ratio and verdict to the last bit."""

from __future__ import annotations

import random
from pathlib import Path

from calcreport.calculate.model import Worked
from calcreport.core.source import Source
from calcreport.driver import work
from calcreport.filesystem import Disk, library_folder

HEAD = """\
project: {title: Units, number: T-1, address: none}
office: {name: (office)}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: IBC, year: 2024, amendments: none}, concrete: ACI 318-19, loads: ASCE/SEI 7-22}
criteria: {risk category: II, seismic design category: A}
revisions: [{number: 1, date: 2026-11-16, why: first}]
"""
#: spellings of one amount each; equal by hand: 1 ft = 12 in = 304.8 mm, 1 kip = 1000 lb, 1 ksi = 1000 psi = 144 ksf
SAME = {
    "b": ("15 in", "1.25 ft", "1 ft 3 in", "1'-3\"", "381 mm", "0.381 m", "38.1 cm"),
    "h": ("27 in", "2.25 ft", "2 ft 3 in", "0.75 yd", "685.8 mm"),
    "c_c": ("1.5 in", "1 1/2 in", "0.125 ft", "38.1 mm", "3.81 cm"),
    "c_l": ("1 in", "25.4 mm", "0.0254 m", '1"'),
    "M_u": (
        "264 kip*ft",
        "3168 kip*in",
        "264000 lb*ft",
        "3,168,000 lb*in",
        "3.168e6 lb*in",
        "264 ft*kip",
        "132 ton*ft",
    ),
    "d_agg": ("3/4 in", "0.75 in", "0.0625 ft", "19.05 mm"),
    "f_c": ("4500 psi", "4.5 ksi", "648 ksf", "648000 psf", "324 tsf", "4,500 lb/in^2"),
    "f_y": ("60 ksi", "60000 psi", "8640 ksf", "60 kip/in^2"),
    "E_s": ("29000 ksi", "2.9e7 psi", "29e6 psi", "4176000 ksf"),
}


FIRST = {name: spellings[0] for name, spellings in SAME.items()}
_GIVEN = ("b", "h", "c_c", "c_l", "M_u", "d_agg")
_REST = (
    "stirrup: '#4', face: bottom, layer: [{name: first, steel: 3-#9}, {name: second, steel: 2-#8}], "
    "rounded_eps_ty: no, third_more: no, in_sfrs: no"
)


def _variants() -> list[dict[str, str]]:
    """Return the first spellings, then each other spelling alone, then mixtures of all."""
    alone = [{**FIRST, name: typed} for name, spellings in SAME.items() for typed in spellings[1:]]
    dice = random.Random(1)
    mixed = [{name: dice.choice(spellings) for name, spellings in SAME.items()} for _ in range(30)]
    return [FIRST, *alone, *mixed]


def _quoted(text: str) -> str:
    return "'" + text.replace("'", "''") + "'"


def _work(variants: list[dict[str, str]]) -> tuple[Worked, ...]:
    materials, calculations = "materials:\n", "calculations:\n"
    for number, typed in enumerate(variants):
        materials += f"  C{number}: {{f_c: {_quoted(typed['f_c'])}}}\n"
        materials += f"  G{number}: {{f_y: {typed['f_y']}, E_s: {typed['E_s']}}}\n"
        given = ", ".join(f"{name}: {_quoted(typed[name])}" for name in _GIVEN)
        calculations += f"  - {{mark: U{number}, title: Beam, template: aci318/beam-flexure, concrete: C{number}, "
        calculations += f"bars: G{number}, given: {{{given}, {_REST}}}}}\n"
    source = Source("project.yaml", HEAD + materials + calculations)
    result = work(Disk(Path("."), library_folder()), source)
    assert not result.problems and result.worked is not None, result.problems
    return result.worked.calculations


def _told(worked: Worked) -> object:
    checks = [(check.line.name, check.verdict, check.ratio, check.open) for check in worked.checks]
    return worked.values.plain, worked.values.rows, checks, worked.fingerprint


def test_other_units_change_nothing() -> None:
    variants = _variants()
    first, *others = _work(variants)
    assert len(others) > 60 and first.checks
    for typed, other in zip(variants[1:], others, strict=True):
        assert _told(other) == _told(first), typed


def test_another_amount_does_change_something() -> None:
    first, other = _work([FIRST, {**FIRST, "b": "15.0001 in"}])
    assert _told(other) != _told(first)
