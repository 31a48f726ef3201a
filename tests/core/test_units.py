"""The unit table against pint's default registry, and unit text that is or is not read."""

from __future__ import annotations

from fractions import Fraction

import pint
import pytest

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.core.units import (
    SPELLINGS,
    Unit,
    dimension_words,
    divide,
    make_unit,
    multiply,
    name_dimension,
    raised,
    read_unit,
)

REGISTRY = pint.UnitRegistry()

#: our spelling: the same in pint's; pound, kip, ton and what is made of them are forces here (common practice)
IN_PINT = {
    "1": "dimensionless", "%": "percent", "rad": "radian", "in": "inch", "ft": "foot", "yd": "yard", "mi": "mile",
    "mm": "mm", "cm": "cm", "m": "m", "km": "km", "lb": "lbf", "lbf": "lbf", "kip": "kip", "kips": "kip",
    "ton": "2000 lbf", "N": "N", "kN": "kN", "MN": "MN", "psi": "psi", "ksi": "ksi", "psf": "lbf/foot**2",
    "ksf": "kip/foot**2", "tsf": "2000 lbf/foot**2", "Pa": "Pa", "kPa": "kPa", "MPa": "MPa", "GPa": "GPa",
    "plf": "lbf/foot", "klf": "kip/foot", "pcf": "lbf/foot**3", "kcf": "kip/foot**3", "pci": "lbf/inch**3",
    "kg": "kg", "g": "g", "t": "metric_ton", "s": "s", "min": "minute", "h": "hour", "mph": "mph", "Hz": "1/s",
}  # fmt: skip
_BASE = {"[length]": (1, 0, 0), "[mass]": (-1, 1, 2), "[time]": (0, 0, 1)}


def _read(text: str) -> tuple[Unit | None, Problems]:
    problems = Problems()
    return read_unit(text, Span(Source("unit", text), 0, len(text)), problems), problems


def test_every_spelling_is_held_against_pint() -> None:
    assert IN_PINT.keys() == SPELLINGS


@pytest.mark.parametrize("spelling", sorted(SPELLINGS))
def test_factor_and_dimension(spelling: str) -> None:
    unit, problems = _read(spelling)
    assert unit is not None and not problems
    theirs = REGISTRY(IN_PINT[spelling])
    quantity = theirs if isinstance(theirs, REGISTRY.Quantity) else REGISTRY.Quantity(theirs, "dimensionless")
    expected = quantity.to_base_units().magnitude
    assert float(unit.scale) == pytest.approx(expected, rel=1e-12, abs=0)
    dimension = [Fraction(0)] * 3
    for name, power in quantity.dimensionality.items():
        dimension = [d + Fraction(power).limit_denominator() * b for d, b in zip(dimension, _BASE[name], strict=True)]
    assert unit.dimension == tuple(dimension)


@pytest.mark.parametrize(
    ("spelling", "factor"),
    [
        # exact by definition: inch 25.4 mm, pound 0.45359237 kg, standard gravity 9.80665 m/s^2 (NIST SP 811, App. B)
        ("in", Fraction(254, 10_000)), ("ft", Fraction(3048, 10_000)), ("yd", Fraction(9144, 10_000)),
        ("mi", Fraction(1_609_344, 1000)),
        ("lb", Fraction(45_359_237, 10**8) * Fraction(980_665, 10**5)),
        ("kip", 1000 * Fraction(45_359_237, 10**8) * Fraction(980_665, 10**5)),
        ("psi", Fraction(45_359_237, 10**8) * Fraction(980_665, 10**5) / Fraction(254, 10_000) ** 2),
        ("psf", Fraction(45_359_237, 10**8) * Fraction(980_665, 10**5) / Fraction(3048, 10_000) ** 2),
        ("pcf", Fraction(45_359_237, 10**8) * Fraction(980_665, 10**5) / Fraction(3048, 10_000) ** 3),
        ("mph", Fraction(44_704, 100_000)), ("%", Fraction(1, 100)), ("min", Fraction(60)), ("h", Fraction(3600)),
    ],
)  # fmt: skip
def test_exact_factors(spelling: str, factor: Fraction) -> None:
    unit, _ = _read(spelling)
    assert unit is not None and unit.scale == factor


@pytest.mark.parametrize(
    ("text", "theirs"),
    [
        ("kip*ft", "kip*foot"), ("lb/ft^3", "lbf/foot**3"), ("kN*m", "kN*m"), ("1/in", "1/inch"), ("in^4", "inch**4"),
        ("kN/m^2", "kN/m**2"), ("kip*in^2/ft", "kip*inch**2/foot"), ("m/s^2", "m/s**2"), ("kip / ft", "kip/foot"),
        ("lb*s^2/in", "lbf*s**2/inch"), ("in^-1", "1/inch"),
    ],
)  # fmt: skip
def test_products(text: str, theirs: str) -> None:
    unit, problems = _read(text)
    assert unit is not None and not problems
    assert float(unit.scale) == pytest.approx(REGISTRY(theirs).to_base_units().magnitude, rel=1e-12, abs=0)


@pytest.mark.parametrize("text", ["kip*ft", "lb/ft^3", "1/in", "in^4", "kip*in^2/ft", "%"])
def test_written_again_as_read(text: str) -> None:
    unit, _ = _read(text)
    assert unit is not None
    again, _ = _read(unit.text)
    assert again == unit


@pytest.mark.parametrize(
    ("text", "hint"),
    [
        ("kn", "write kN"),
        ("Nm", "write N*m"),
        ("kNm", "write kN*m"),
        ("Mpa", "write MPa"),
        ("k", "write kip"),
        ("lbs", "write lb"),
        ("kip-ft", "write kip*ft"),
        ("kip ft", "write kip*ft"),
        ("in2", "write in^2"),
        ("ft³", "write ft^3"),
        ("PSI", "write psi"),
        ("deg", "angles are read in rad: one degree is 0.0174533 rad"),
        ("", ""),
        ("*ft", ""),
        ("kip*", ""),
        ("kip**ft", ""),
        ("in^2.5", ""),
        ("in^0", ""),
        ("in^13", ""),
        ("ft*ft*ft*ft*ft*ft*ft*ft*ft", ""),
        ("3 in", ""),
        ("m\u00b7s", "write m*s"),
        ("в", ""),
        ("__import__('os')", ""),
    ],
)
def test_refused(text: str, hint: str) -> None:
    unit, problems = _read(text)
    assert unit is None
    (problem,) = problems.sorted()
    assert problem.slug == "unknown-unit"
    assert not hint or problem.hint == hint


def test_a_knot_is_no_unit_of_force() -> None:
    # pint reads kn as a knot: a mistyped kN would pass as a speed
    assert REGISTRY("kn").dimensionality == REGISTRY("m/s").dimensionality
    assert "kn" not in SPELLINGS


def test_algebra() -> None:
    length, force = make_unit((("in", 1),)).dimension, make_unit((("kip", 1),)).dimension
    assert name_dimension(multiply(length, force)) == "moment"
    assert name_dimension(divide(force, raised(length, Fraction(2)))) == "stress"
    assert name_dimension(raised(divide(force, raised(length, Fraction(2))), Fraction(1, 2))) == "stress^(1/2)"
    assert dimension_words(raised(length, Fraction(2))) == "an area"
    assert dimension_words(multiply(raised(length, Fraction(5)), force)) == "a length^5*force"
