"""Quantities of thirty digits with pint's own unit factors, read from spellings by a reader of its own.

Text and units of the trade in, pint quantities out. Shares no factor and no parser with `core.units`.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

from calcreport.core.late import load

DIGITS = 30

#: pint's name for each listed spelling; names only, the factors are pint's
_NAMES = {
    "1": "", "%": "percent", "rad": "radian", "in": "inch", "ft": "foot", "yd": "yard", "mi": "mile",
    "mm": "millimeter", "cm": "centimeter", "m": "meter", "km": "kilometer", "lb": "pound_force", "lbf": "pound_force",
    "kip": "kip", "kips": "kip", "ton": "(2000 * pound_force)", "N": "newton", "kN": "kilonewton", "MN": "meganewton",
    "psi": "pound_force_per_square_inch", "ksi": "kip_per_square_inch", "psf": "(pound_force / foot ** 2)",
    "ksf": "(kip / foot ** 2)", "tsf": "(2000 * pound_force / foot ** 2)", "Pa": "pascal", "kPa": "kilopascal",
    "MPa": "megapascal", "GPa": "gigapascal", "plf": "(pound_force / foot)", "klf": "(kip / foot)",
    "pcf": "(pound_force / foot ** 3)", "kcf": "(kip / foot ** 3)", "pci": "(pound_force / inch ** 3)",
    "kg": "kilogram", "g": "gram", "t": "metric_ton", "s": "second", "min": "minute", "h": "hour",
    "mph": "(mile / hour)", "Hz": "hertz",
}  # fmt: skip

_FEET = re.compile(r"(-?)(\d+(?:\.\d+)?) ?(?:ft|')(?:[ -]*(.*?) ?(?:in|\"))?$")
_INCHES = re.compile(r"(-?)(?:(\d+(?:\.\d+)?)[ -]+)?(?:(\d+)/(\d+)) ?(?:in|\")$")
_PLAIN = re.compile(r"([-+]?[\d,]*\.?\d*(?:[eE][-+]?\d+)?)\s*(.*)$")


@dataclass(frozen=True, slots=True)
class Quantities:
    """Makes quantities; holds the two libraries for one run."""

    mp: Any
    registry: Any

    def number(self, text: str) -> Any:
        """Return a decimal text as a thirty-digit number."""
        return self.mp.mpf(text.replace(",", ""))

    def pure(self, value: Any) -> Any:
        """Return a pure number as a quantity."""
        return self.registry.Quantity(self.mp.mpf(value), "")

    def unit(self, factors: tuple[tuple[str, int], ...]) -> Any:
        """Return one of a unit, from its spellings and exponents."""
        found = self.registry.Quantity(self.mp.mpf(1), "")
        for name, power in factors:
            found = found * self._named(name) ** power
        return found

    def base(self, dimension: tuple[Any, ...]) -> Any:
        """Return one of the base unit of a dimension: metre, newton, second."""
        found = self.pure(1)
        for name, power in zip(("meter", "newton", "second"), dimension, strict=True):
            found = found * self.registry.Quantity(self.mp.mpf(1), name) ** int(power)
        return found

    def _named(self, name: str) -> Any:
        """Return one of a listed unit; compounds are built from the names inside, never parsed."""
        known = _NAMES[name].strip("()")
        found = self.registry.Quantity(self.mp.mpf(1), "")
        for sign, word, power in re.findall(r"(^|[*/]) ?([a-z_]+|\d+)(?: \*\* (\d))?", known):
            one = self.pure(word) if word.isdigit() else self.registry.Quantity(self.mp.mpf(1), word)
            one = one ** int(power or 1)
            found = found / one if sign == "/" else found * one
        return found

    def read(self, text: str) -> Any:
        """Return a typed amount: `4500 psi`, `-120 kip*ft`, `18 ft 6 in`, `18'-6 1/2\"`."""
        feet = _FEET.match(text)
        if feet:
            inches = self._inches(feet[3]) if feet[3] else self.mp.mpf(0)
            whole = self._named("ft") * self.number(feet[2]) + self._named("in") * inches
            return -whole if feet[1] else whole
        inch = _INCHES.match(text)
        if inch:
            value = self.number(inch[2] or "0") + self.mp.mpf(inch[3]) / self.mp.mpf(inch[4])
            return self._named("in") * (-value if inch[1] else value)
        plain = _PLAIN.match(text)
        assert plain is not None
        return self._units(plain[2]) * self.number(plain[1])

    def _inches(self, text: str) -> Any:
        whole, _, fraction = text.strip().rpartition(" ")
        if "/" not in fraction:
            return self.number(text)
        above, below = fraction.split("/")
        return (self.number(whole) if whole else self.mp.mpf(0)) + self.mp.mpf(above) / self.mp.mpf(below)

    def _units(self, text: str) -> Any:
        found = self.pure(1)
        for sign, name, power in re.findall(r"([*/]?)\s*([A-Za-z%]+|1)\s*(?:\^\s*(-?\d+))?", text):
            one = self._named(name) ** int(power or 1)
            found = found / one if sign == "/" else found * one
        return found


def make_quantities() -> Quantities:
    """Load the two libraries and return a maker of quantities."""
    mpmath, pint = load("mpmath"), load("pint")
    context = mpmath.mp.clone()
    context.dps = DIGITS
    mpmath.mp.dps = DIGITS
    return Quantities(mpmath.mp, pint.UnitRegistry(non_int_type=mpmath.mpf, cache_folder=None))
