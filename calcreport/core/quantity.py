"""Exact amounts as people type them: `4500 psi`, `-120 kip*ft`, `18 ft 6 in`, `18'-6 1/2"`.

Text in, exact amount out. `0` alone is an amount in every unit: nothing times any unit is the same amount, so
no fact is missing. Knows nothing of rounding or printing.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.core.units import NONE, ONE, Dimension, Unit, dimension_words, make_unit, read_unit


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


_NUMBER = r"[+-]?(?:[0-9]{1,3}(?:,[0-9]{3})+(?:\.[0-9]*)?|[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,2})?"
_PLAIN = re.compile(rf"\s*({_NUMBER})(.*)", re.DOTALL)
_INCHES = (
    r"(?:(?P<whole>[0-9]+(?:\.[0-9]+)?)(?:[ -]+(?P<top>[0-9]+)/(?P<under>[0-9]+))?"
    r"|(?P<top2>[0-9]+)/(?P<under2>[0-9]+))"
)
_FEET = re.compile(
    rf"\s*(?P<sign>[+-]?)(?P<feet>[0-9]+(?:\.[0-9]+)?)\s*(?:ft|')\s*(?:[- ]\s*)?(?:{_INCHES}\s*(?:in|\"))?\s*"
)
_INCH_FRACTION = re.compile(rf"\s*(?P<sign>[+-]?){_INCHES}\s*(?:in|\")\s*")
_FOOT, _INCH = make_unit((("ft", 1),)), make_unit((("in", 1),))
LONGEST, MOST_DIGITS = 60, 18


def read_amount(text: str, span: Span, problems: Problems) -> Amount | None:
    """Read an amount of any dimension; a number alone is a pure number.

    Adds `not-a-quantity` or `unknown-unit` and returns None.
    """
    if len(text) > LONGEST or sum(c.isdigit() for c in text) > MOST_DIGITS:
        problems.add(
            "not-a-quantity",
            span,
            "the number is too long",
            expected=f"{LONGEST} characters and {MOST_DIGITS} digits at most",
            found=text[:LONGEST],
        )
        return None
    amount = _known(text)
    if amount is not None:
        return amount
    match = _PLAIN.fullmatch(text)
    if match is None or _FRACTION.match(match[2]):
        hint = "write the fraction as a decimal, or in inches: 1/2 in" if match else _number_hint(text)
        problems.add(
            "not-a-quantity", span, f"`{text[:40]}` is not a quantity" if text.strip() else "the quantity is missing",
            expected="a number and its unit, such as 4500 psi or 18 ft 6 in", found=text[:40] or "nothing", hint=hint,
        )  # fmt: skip
        return None
    lead = len(match[2]) - len(match[2].lstrip())
    read_unit(match[2].strip(), span.part(match.start(2) + lead, len(text)), problems)
    return None


@lru_cache(maxsize=4096)
def _known(text: str) -> Amount | None:
    """Read an amount, or return None: the same texts stand in thousands of rows."""
    amount = _read_feet(text)
    if amount is not None:
        return amount
    match = _PLAIN.fullmatch(text)
    if match is None or _FRACTION.match(match[2]):
        return None
    unit: Unit | None = ONE
    if match[2].strip():
        unit = read_unit(match[2].strip(), Span(Source("", text), 0, len(text)), Problems())
    if unit is None:
        return None
    return Amount(Fraction(match[1].replace(",", "")) * unit.scale, unit, " ".join(text.split()))


def read_in_unit(text: str, span: Span, problems: Problems, unit: Unit) -> Amount | None:
    """Read an amount that must have the dimension of `unit`; `0` alone takes that unit.

    Adds `bare-number` or `unit-mismatch`, beside what `read_amount` adds.
    """
    amount = read_amount(text, span, problems)
    if amount is None or amount.dimension == unit.dimension:
        return amount
    if amount.dimension == NONE and amount.value == 0 and amount.unit == ONE:
        return Amount(Fraction(0), unit, f"0 {unit.text}")
    words = dimension_words(unit.dimension)
    if amount.dimension == NONE:
        problems.add(
            "bare-number", span, f"`{amount.text}` has no unit", expected=f"{words} with its unit",
            found="a bare number", hint=f"write {amount.text} {unit.text}, if that is the unit meant",
        )  # fmt: skip
    else:
        problems.add(
            "unit-mismatch", span, f"`{amount.text}` is not {words}",
            expected=words + (f" ({unit.text})" if unit != ONE else ""), found=dimension_words(amount.dimension),
        )  # fmt: skip
    return None


#: what follows a number and is no unit: `1/2`, `10^3`, `4 500`; `2 1/in` is a number and a unit
_FRACTION = re.compile(r"\s*/\s*[0-9]|\s*\^|\s+(?!1\s*/\s*[A-Za-z])[0-9]")


def _number_hint(text: str) -> str:
    """Return what to write for a number in a foreign form, or ''."""
    if "−" in text or "–" in text:
        return "write the minus sign as -"
    if re.fullmatch(r"\s*[+-]?[0-9]+(,[0-9]+)+.*", text):
        return "a comma parts thousands; write decimals with a point"
    return ""


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
        # 24 ft 13 in is a slip, and so is 24 ft -6 in, which might mean either way
        if inches >= 12 or re.search(r"\s-\d", text.lstrip(" +-")):
            return None
        inches += 12 * Fraction(match["feet"])
    sign = -1 if match["sign"] == "-" else 1
    typed = _FOOT if feet else _INCH
    return Amount(sign * inches * _INCH.scale, typed, " ".join(text.split()))
