"""A length printed in feet and inches behind its decimals: 4.190 ft ≈ 4′-2 5/16″ (to 1/16″).

In: the tokens of a statement. Out: the tokens without it, and what it says in inches.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from .letters import Token
from .units import Printed

_BETWEEN = ("number", "sign")


@dataclass(frozen=True, slots=True)
class Feet:
    """What is printed in feet and inches, in inches, and the part of an inch it is rounded to; 0 where it is not."""

    inches: Fraction
    step: Fraction


def part_feet(tokens: Sequence[Token]) -> tuple[list[Token], Feet | None]:
    """Part feet and inches behind a relation from the rest."""
    for start, token in enumerate(tokens):
        if token.kind != "relation" or token.text not in "=≈":
            continue
        end = next((i for i in range(start + 1, len(tokens)) if tokens[i].text == "″"), 0)
        inner = tokens[start + 1 : end]
        if not end or not all(t.kind in _BETWEEN or t.text in ("′", "-") for t in inner):
            continue
        step, behind = Fraction(0), end + 1
        if token.text == "≈":
            # (to 1/16″)
            step = _worth(tokens[end + 3 : end + 6])
            behind = end + 8
        return [*tokens[:start], *tokens[behind:]], Feet(_worth(inner), step)
    return list(tokens), None


def _worth(tokens: Sequence[Token]) -> Fraction:
    """Return inches: 12 times what stands before the prime, and a whole number with its fraction."""
    texts = [token.text for token in tokens]
    sign = -1 if texts[0] in ("-", "−") else 1
    total, number = Fraction(0), Fraction(0)
    place = 0
    while place < len(texts):
        text = texts[place]
        if text == "′":
            total, number = total + 12 * number, Fraction(0)
        elif text.replace(",", "").isdigit():
            amount = Fraction(text.replace(",", ""))
            if texts[place + 1 : place + 2] == ["/"]:
                amount /= Fraction(texts[place + 2])
                place += 2
            number += amount
        place += 1
    return sign * (total + number)


def agrees(feet: Feet, printed: Printed, inches: Fraction) -> bool:
    """Tell whether a printed value, each of its units so many inches, may be what the feet and inches say."""
    half = Fraction(1, 2) * Fraction(10) ** (printed.power - printed.places)
    return abs(Fraction(printed.number) * inches - feet.inches) <= half * inches + feet.step / 2
