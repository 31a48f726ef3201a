"""The closed list of unit spellings, with exact factors, and the algebra of dimensions.

A unit is an exact factor to base units (metre, newton, second) and a dimension. Reads unit text such as
`kip*ft`, `lb/ft^3`; refuses every spelling that is not listed. Knows nothing of numbers to be printed.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction as F
from functools import lru_cache
from typing import TypeAlias

from calcreport.core.problems import Problems
from calcreport.core.source import Span

#: exponents of length, force and time
Dimension: TypeAlias = tuple[F, F, F]

NONE: Dimension = (F(0), F(0), F(0))


def _dimension(length: int = 0, force: int = 0, time: int = 0) -> Dimension:
    return F(length), F(force), F(time)


LENGTH, FORCE, TIME = _dimension(1), _dimension(0, 1), _dimension(0, 0, 1)
STRESS, MASS = _dimension(-2, 1), _dimension(-1, 1, 2)

#: inch and pound are defined exactly in metres and kilograms; standard gravity is 9.80665 m/s^2
_INCH, _POUND = F(254, 10000), F(45359237, 100000000) * F(980665, 100000)
_FOOT = 12 * _INCH

#: spelling: (factor to base units, dimension)
_TABLE: dict[str, tuple[F, Dimension]] = {
    "1": (F(1), NONE),
    "%": (F(1, 100), NONE),
    "rad": (F(1), NONE),
    "in": (_INCH, LENGTH),
    "ft": (_FOOT, LENGTH),
    "yd": (3 * _FOOT, LENGTH),
    "mi": (5280 * _FOOT, LENGTH),
    "mm": (F(1, 1000), LENGTH),
    "cm": (F(1, 100), LENGTH),
    "m": (F(1), LENGTH),
    "km": (F(1000), LENGTH),
    "lb": (_POUND, FORCE),
    "lbf": (_POUND, FORCE),
    "kip": (1000 * _POUND, FORCE),
    "kips": (1000 * _POUND, FORCE),
    "ton": (2000 * _POUND, FORCE),
    "N": (F(1), FORCE),
    "kN": (F(1000), FORCE),
    "MN": (F(10**6), FORCE),
    "psi": (_POUND / _INCH**2, STRESS),
    "ksi": (1000 * _POUND / _INCH**2, STRESS),
    "psf": (_POUND / _FOOT**2, STRESS),
    "ksf": (1000 * _POUND / _FOOT**2, STRESS),
    "tsf": (2000 * _POUND / _FOOT**2, STRESS),
    "Pa": (F(1), STRESS),
    "kPa": (F(1000), STRESS),
    "MPa": (F(10**6), STRESS),
    "GPa": (F(10**9), STRESS),
    "plf": (_POUND / _FOOT, _dimension(-1, 1)),
    "klf": (1000 * _POUND / _FOOT, _dimension(-1, 1)),
    "pcf": (_POUND / _FOOT**3, _dimension(-3, 1)),
    "kcf": (1000 * _POUND / _FOOT**3, _dimension(-3, 1)),
    "pci": (_POUND / _INCH**3, _dimension(-3, 1)),
    "kg": (F(1), MASS),
    "g": (F(1, 1000), MASS),
    "t": (F(1000), MASS),
    "s": (F(1), TIME),
    "min": (F(60), TIME),
    "h": (F(3600), TIME),
    "mph": (5280 * _FOOT / 3600, _dimension(1, 0, -1)),
    "Hz": (F(1), _dimension(0, 0, -1)),
}
SPELLINGS = frozenset(_TABLE)

#: spellings people write for listed ones
_MEANT = {
    "inch": "in", "inches": "in", '"': "in", "foot": "ft", "feet": "ft", "'": "ft", "pound": "lb", "lbs": "lb",
    "k": "kip", "K": "kip", "kn": "kN", "KN": "kN", "Kn": "kN", "n": "N", "Mpa": "MPa", "mpa": "MPa", "MPA": "MPa",
    "KPa": "kPa", "kpa": "kPa", "Gpa": "GPa", "Nm": "N*m", "kNm": "kN*m", "kft": "kip*ft", "kipft": "kip*ft",
    "ftk": "kip*ft", "PSI": "psi", "KSI": "ksi", "PSF": "psf", "PLF": "plf", "PCF": "pcf", "IN": "in", "FT": "ft",
    "MM": "mm", "sf": "ft^2", "sqft": "ft^2", "sqin": "in^2", "cf": "ft^3", "cy": "yd^3",
    "meter": "m", "metre": "m", "sec": "s", "hr": "h",
}  # fmt: skip
_ANGLES = frozenset({"deg", "degree", "degrees", "°"})

_DIMENSION_NAMES: dict[Dimension, str] = {
    NONE: "a pure number",
    LENGTH: "length",
    _dimension(2): "area",
    _dimension(3): "length^3",
    _dimension(4): "length^4",
    FORCE: "force",
    STRESS: "stress",
    _dimension(1, 1): "moment",
    _dimension(-1, 1): "force per length",
    _dimension(-3, 1): "force per volume",
    TIME: "time",
    MASS: "mass",
    _dimension(-4, 1, 2): "density",
    _dimension(1, 0, -1): "speed",
    (F(-1), F(1, 2), F(0)): "stress^(1/2)",
}


@dataclass(frozen=True, slots=True)
class Unit:
    """A product of listed units: `kip*ft`, `in^2`, `lb/ft^3`."""

    #: ((spelling, exponent), …) as written
    factors: tuple[tuple[str, int], ...]
    #: exact factor to base units
    scale: F
    dimension: Dimension
    #: the same as a float, for the hot path
    size: float

    @property
    def text(self) -> str:
        """The unit as a file would write it."""
        return _spell(self.factors)


def _spell(factors: tuple[tuple[str, int], ...]) -> str:
    words = ""
    for name, power in factors:
        sign = "/" if power < 0 else "*" if words else ""
        if power < 0 and not words:
            words = "1"
        words += sign + name + (f"^{abs(power)}" if abs(power) != 1 else "")
    return words or "1"


@lru_cache(maxsize=4096)
def make_unit(factors: tuple[tuple[str, int], ...]) -> Unit:
    """Return the unit of listed factors; an unlisted spelling is an error of ours, not the author's."""
    scale, dimension = F(1), NONE
    for name, power in factors:
        factor, base = _TABLE[name]
        scale *= factor**power
        dimension = multiply(dimension, raised(base, F(power)))
    return Unit(factors, scale, dimension, float(scale))


ONE = make_unit(())

_UNIT = re.compile(r"\s*([*/])?\s*([A-Za-z%'\"°]+|1)\s*(?:\^\s*(-?[0-9]{1,2}))?")
_LOOSE = re.compile(r"[A-Za-z]+(?:[- .·⋅]+[A-Za-z]+)+")
_POWERED = re.compile(r"([A-Za-z]+)([2-4²³⁴])")
_RAISED = str.maketrans("²³⁴", "234")
LARGEST_POWER, MOST_FACTORS = 12, 8


def read_unit(text: str, span: Span, problems: Problems) -> Unit | None:
    """Read unit text such as `kip*ft` or `1/in`; adds `unknown-unit` and returns None where it cannot."""
    factors: list[tuple[str, int]] = []
    at = 0
    stripped = text.rstrip()
    while at < len(stripped) or not at:
        match = _UNIT.match(stripped, at)
        if match is None or (match[1] is None) != (at == 0) or len(factors) >= MOST_FACTORS:
            _say_no_unit(stripped, at, span, problems)
            return None
        name, power = match[2], int(match[3] or 1)
        if name not in _TABLE:
            say_unknown_unit(name, span.part(match.start(2), match.end(2)), problems)
            return None
        if not 0 < abs(power) <= LARGEST_POWER:
            problems.add(
                "unknown-unit", span.part(match.start(2), match.end()), f"the exponent {power} is out of bounds",
                expected=f"a whole number up to {LARGEST_POWER}", found=str(power),
            )  # fmt: skip
            return None
        if name != "1":
            factors.append((name, -power if match[1] == "/" else power))
        at = match.end()
    return make_unit(tuple(factors))


def _say_no_unit(text: str, at: int, span: Span, problems: Problems) -> None:
    """Add `unknown-unit` for text that is no product of spellings, with the form meant where it is plain."""
    shown, hint = text.strip()[:60], ""
    if _LOOSE.fullmatch(shown):
        hint = "write " + "*".join(_MEANT.get(word, word) for word in re.findall("[A-Za-z]+", shown))
    elif powered := _POWERED.fullmatch(shown):
        hint = f"write {powered[1]}^{powered[2].translate(_RAISED)}"
    problems.add(
        "unknown-unit", span.part(0, max(len(text), 1)), f"`{shown}` is not a unit" if shown else "the unit is missing",
        expected="listed units joined by * and /, such as kip*ft or lb/ft^3", found=text[at : at + 60] or "nothing",
        hint=hint,
    )  # fmt: skip


def say_unknown_unit(name: str, span: Span, problems: Problems) -> None:
    """Add `unknown-unit` for one spelling, with the listed spelling meant where it is plain."""
    meant = _MEANT.get(name)
    hint = f"write {meant}" if meant else problems.near(name, sorted(SPELLINGS))
    if name in _ANGLES:
        hint = "angles are read in rad: one degree is 0.0174533 rad"
    problems.add(
        "unknown-unit", span, f"`{name[:40]}` is not a listed unit",
        expected="one of the listed spellings (case matters)", found=name[:40], hint=hint,
    )  # fmt: skip


def is_misspelled(name: str) -> bool:
    """Tell whether a word is a known misspelling of a listed unit, such as `kn`."""
    return name in _MEANT or name in _ANGLES


# ---------------------------------------------------------------- algebra


def multiply(one: Dimension, other: Dimension) -> Dimension:
    """Return the dimension of a product."""
    return one[0] + other[0], one[1] + other[1], one[2] + other[2]


def divide(one: Dimension, other: Dimension) -> Dimension:
    """Return the dimension of a quotient."""
    return one[0] - other[0], one[1] - other[1], one[2] - other[2]


def raised(one: Dimension, power: F) -> Dimension:
    """Return the dimension of a power."""
    return one[0] * power, one[1] * power, one[2] * power


def name_dimension(dimension: Dimension) -> str:
    """Return a dimension in words: 'stress', 'length^2*time^-1'."""
    known = _DIMENSION_NAMES.get(dimension)
    if known:
        return known
    pieces = []
    for name, power in zip(("length", "force", "time"), dimension, strict=True):
        if power:
            pieces.append(name if power == 1 else f"{name}^{power}" if power.denominator == 1 else f"{name}^({power})")
    return "*".join(pieces)


def dimension_words(dimension: Dimension) -> str:
    """Return a dimension with its article: 'a force', 'an area', 'a pure number'."""
    name = name_dimension(dimension)
    return name if name.startswith("a ") else f"{'an' if name[0] in 'aeiou' else 'a'} {name}"
