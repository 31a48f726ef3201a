"""Units as sheets print them, with exact factors, and numbers as sheets print them.

In: printed text. Out: exact factors and dimensions; `Printed` numbers with their last printed digit. The international
foot and pound are exact (Federal Register 24 FR 5348, 1959: 1 ft = 0.3048 m, 1 lb = 0.45359237 kg); standard gravity
9.80665 m/s^2 (3rd General Conference on Weights and Measures, 1901).
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from decimal import ROUND_HALF_UP, Context, Decimal, localcontext
from fractions import Fraction as F
from functools import cache

#: powers of length and force
Dimension = tuple[F, F]

_INCH, _POUND = F(254, 10000), F(45359237, 10**8) * F(980665, 10**5)
_FOOT = 12 * _INCH
_LENGTH, _FORCE = (F(1), F(0)), (F(0), F(1))
_STRESS, _SPREAD, _WEIGHT = (F(-2), F(1)), (F(-1), F(1)), (F(-3), F(1))
_UNITS: dict[str, tuple[F, Dimension]] = {
    "in.": (_INCH, _LENGTH), "in": (_INCH, _LENGTH), "ft": (_FOOT, _LENGTH),
    "mm": (F(1, 1000), _LENGTH), "cm": (F(1, 100), _LENGTH), "m": (F(1), _LENGTH),
    "lb": (_POUND, _FORCE), "kip": (1000 * _POUND, _FORCE), "N": (F(1), _FORCE), "kN": (F(1000), _FORCE),
    "MN": (F(10**6), _FORCE),
    "psi": (_POUND / _INCH**2, _STRESS), "ksi": (1000 * _POUND / _INCH**2, _STRESS),
    "psf": (_POUND / _FOOT**2, _STRESS), "ksf": (1000 * _POUND / _FOOT**2, _STRESS),
    "Pa": (F(1), _STRESS), "kPa": (F(1000), _STRESS), "MPa": (F(10**6), _STRESS), "GPa": (F(10**9), _STRESS),
    "plf": (_POUND / _FOOT, _SPREAD), "klf": (1000 * _POUND / _FOOT, _SPREAD),
    "pcf": (_POUND / _FOOT**3, _WEIGHT), "kcf": (1000 * _POUND / _FOOT**3, _WEIGHT), 
    "pci": (_POUND / _INCH**3, _WEIGHT),
    "%": (F(1, 100), (F(0), F(0))), "rad": (F(1), (F(0), F(0))),
}  # fmt: skip
_POWER = {"²": 2, "³": 3, "⁴": 4, "": 1}
_FACTOR = re.compile(r"([A-Za-z%]+\.?)([²³⁴]?)")


@cache
def unit(text: str) -> tuple[F, Dimension] | None:
    """Return the exact factor to metres and newtons, and the dimension; None where it is no unit."""
    scale, length, force = F(1), F(0), F(0)
    for place, part in enumerate(re.split(r"([·/])", text.replace(" ", ""))):
        if place % 2:
            continue
        match = _FACTOR.fullmatch(part)
        if match is None or match[1] not in _UNITS:
            return None
        sign = -1 if place and re.split(r"([·/])", text.replace(" ", ""))[place - 1] == "/" else 1
        size, (along, strong) = _UNITS[match[1]]
        power = sign * _POWER[match[2]]
        scale, length, force = scale * size**power, length + power * along, force + power * strong
    return scale, (length, force)


_NUMBER = re.compile(r"[−-]?(?:\d{1,3}(?:,\d{3})+|\d+)(?:\.\d+)?")


@dataclass(frozen=True, slots=True)
class Printed:
    """A number as printed: its text without power of ten, the power, its unit."""

    text: str
    power: int = 0
    unit: str = ""

    @property
    def number(self) -> Decimal:
        """The number, in its unit."""
        return Decimal(self.text.replace(",", "").replace("−", "-")) * Decimal(10) ** self.power

    @property
    def places(self) -> int:
        """Decimals printed."""
        return len(self.text.partition(".")[2])

    @property
    def digits(self) -> int:
        """Significant digits printed; zeros before the decimal point of a whole number count."""
        return len(self.text.replace(",", "").replace("−", "").replace(".", "").lstrip("0")) or 1

    def __str__(self) -> str:
        power = f" × 10^{self.power}" if self.power else ""
        return f"{self.text}{power}{' ' + self.unit if self.unit else ''}"


def is_number(text: str) -> bool:
    """Tell whether text is a number as sheets print them, thousands parted by commas."""
    return _NUMBER.fullmatch(text) is not None


def rounds_to(value: Decimal, printed: Printed, context: Context | None = None) -> bool:
    """Tell whether a value in the printed unit rounds, half up, to the printed number."""
    with localcontext(context or Context(prec=60)):
        # what exact arithmetic would give as a half may carry an error in the 50th digit
        exact = Context(prec=40).plus(value / Decimal(10) ** printed.power)
        shown = Decimal(printed.text.replace(",", "").replace("−", "-"))
        step = Decimal(1).scaleb(-printed.places)
        return exact.quantize(step, rounding=ROUND_HALF_UP) == shown
