"""Exact amounts as people type them: `4500 psi`, `-120 kip*ft`, `18 ft 6 in`, `18'-6 1/2"`.

Text in, exact amount out. Knows nothing of rounding or printing.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction

from calcreport.core.problems import Problems
from calcreport.core.source import Span
from calcreport.core.units import LENGTH, NONE, ONE, Dimension, Unit, make_unit, name_dimension, read_unit


@dataclass(frozen=True, slots=True)
class Amount:
    """An exact number in base units with the unit and text it was typed in."""

    value: Fraction
    unit: Unit
    text: str

    @property
    def dimension(self) -> Dimension:
        """The dimension of the typed unit."""
        return self.unit.dimension


_NUMBER = r"[+-]?(?:\d{1,3}(?:,\d{3})+(?:\.\d*)?|\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d{1,2})?"
_PLAIN = re.compile(rf"\s*({_NUMBER})(.*)", re.DOTALL)
_INCHES = r"(?:(?P<whole>\d+(?:\.\d+)?)(?:[ -]+(?P<top>\d+)/(?P<under>\d+))?|(?P<top2>\d+)/(?P<under2>\d+))"
_FEET = re.compile(
    rf"\s*(?P<sign>[+-]?)(?P<feet>\d+(?:\.\d+)?)\s*(?:ft|')\s*(?:[- ]\s*)?(?:{_INCHES}\s*(?:in|\"))?\s*"
)
_INCH_FRACTION = re.compile(rf"\s*(?P<sign>[+-]?){_INCHES}\s*(?:in|\")\s*")
_FOOT, _INCH = make_unit((("ft", 1),)), make_unit((("in", 1),))


def read_amount(text: str, span: Span, problems: Problems, dimension: Dimension | None) -> Amount | None:
    """Read an amount; `dimension`, if told, must be met.

    Adds `not-a-quantity`, `bare-number`, `unknown-unit` or `unit-mismatch` and returns None.
    """
    if len(text) > 60 or sum(c.isdigit() for c in text) > 18:
        problems.add("not-a-quantity", span, "the number is too long", expected="18 digits at most", found=text[:40])
        return None
    amount = _read_feet(text)
    if amount is None:
        match = _PLAIN.fullmatch(text)
        if match is None:
            problems.add(
                "not-a-quantity", span, f"`{text[:40]}` is not a quantity",
                expected="a number and its unit, such as 4500 psi or 18 ft 6 in", found=text[:40] or "nothing",
            )  # fmt: skip
            return None
        unit: Unit | None = ONE
        if match[2].strip():
            lead = len(match[2]) - len(match[2].lstrip())
            unit = read_unit(match[2].strip(), span.part(match.start(2) + lead, len(text)), problems)
        if unit is None:
            return None
        amount = Amount(Fraction(match[1].replace(",", "")) * unit.scale, unit, " ".join(text.split()))
    if dimension is not None and amount.dimension != dimension:
        _say_mismatch(amount, dimension, span, problems)
        return None
    return amount


def _read_feet(text: str) -> Amount | None:
    """Read feet and inches, or inches with a fraction; None where the text is neither."""
    match = _FEET.fullmatch(text)
    feet = match is not None
    if match is None:
        match = _INCH_FRACTION.fullmatch(text)
    if match is None:
        return None
    inches = Fraction(match["whole"] or 0)
    top, under = match["top"] or match["top2"], match["under"] or match["under2"]
    if top:
        if int(under) == 0:
            return None
        inches += Fraction(int(top), int(under))
    if feet:
        inches += 12 * Fraction(match["feet"])
    sign = -1 if match["sign"] == "-" else 1
    typed = _FOOT if feet else _INCH
    return Amount(sign * inches * _INCH.scale, typed, " ".join(text.split()))


def _say_mismatch(amount: Amount, dimension: Dimension, span: Span, problems: Problems) -> None:
    from_words = _dimension_words(dimension)
    if amount.dimension == NONE:
        problems.add(
            "bare-number", span, f"`{amount.text}` has no unit",
            expected=f"{from_words} with its unit", found="a bare number",
            hint=f"write the unit, such as {amount.text} {_EXAMPLE.get(dimension, 'in')}",
        )  # fmt: skip
    else:
        problems.add(
            "unit-mismatch", span, f"`{amount.text}` is not {from_words}",
            expected=from_words, found=_dimension_words(amount.dimension),
        )  # fmt: skip


_EXAMPLE = {LENGTH: "in or mm", (Fraction(0), Fraction(1), Fraction(0)): "kip or kN",
            (Fraction(-2), Fraction(1), Fraction(0)): "psi or MPa",
            (Fraction(1), Fraction(1), Fraction(0)): "kip*ft or kN*m"}  # fmt: skip


def _dimension_words(dimension: Dimension) -> str:
    name = name_dimension(dimension)
    if name.startswith("a ") or name in ("stress", "length", "force", "mass", "time"):
        return name
    return ("an " if name[0] in "aeiou" else "a ") + name
