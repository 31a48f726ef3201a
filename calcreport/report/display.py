"""Names and units as the trade writes them: f_c' with its prime, phiM_n as two letters, kip·ft, in.^2.

Symbols and units in, formula trees out. Knows no value.
"""

from __future__ import annotations

import math
import re
from fractions import Fraction
from typing import TypeAlias

from calcreport.calculate.model import Slot, Symbol
from calcreport.core.shows import GREEK, read_shown
from calcreport.core.units import Unit
from calcreport.report.model import Accent, Formula, Letters, Operator, Root, Row, Script, Space

Slots: TypeAlias = tuple[Slot, ...]

PRIME, DOUBLE_PRIME = "′", "″"


def show_symbol(symbol: Symbol) -> Formula:
    """Return a symbol's display form: its `shows`, else derived from its name."""
    return show_name(symbol.shows or symbol.name)


def show_name(text: str) -> Formula:
    """Return the display of `f_c'`, `phiM_n`, `A_s,min`, `bar(y)_t`, `√f_c'`."""
    stem, _, rest = text.rpartition(".") if " " not in text else ("", "", "")
    shown = read_shown(rest if stem else text)
    if shown is None or shown.words:
        return Letters(text)
    base = Accent(_letters(shown.base), shown.accent) if shown.accent else _letters(shown.base)
    below = _subscript(shown.below) if shown.below else None
    above = Letters(PRIME * shown.primes) if shown.primes else None
    found: Formula = base if below is None and above is None else Script(base, below, above)
    if shown.heads:
        found = Row((*(Letters(head, "italic") for head in shown.heads), found))
    return Root(found) if shown.rooted else found


def show_row(name: str) -> Formula:
    """Return a row's name: E_v with its subscript, W- with a true minus, other names as they are."""
    signed = re.fullmatch(r"([A-Z](?:_[A-Za-z0-9]+)?)([+-]?)", name)
    if signed is None:
        return Letters(name)
    shown = show_name(signed[1]) if "_" in signed[1] else Letters(signed[1], "italic")
    return Row((shown, Letters(signed[2].replace("-", "−")))) if signed[2] else shown


def row_words(name: str) -> str:
    """Return a row's name as words: a sign that ends a word is a true minus."""
    return re.sub(r"(?<=\w)-(?= |$)", "−", name)


def _letters(text: str) -> Letters:
    """Return base letters: one letter italic, a word upright, digits after a letter as they are."""
    if len(text) == 1 or (len(text) == 2 and text[0].isalpha() and text[1].isupper()):
        return Letters(text, "italic")
    return Letters(text, "upright")


def _subscript(parts: tuple[str, ...]) -> Formula:
    pieces: list[Formula] = []
    for place, piece in enumerate(parts):
        if place:
            pieces.append(Letters(","))
        letters = re.fullmatch(r"([A-Za-z])(\d*)", piece)
        if piece in GREEK:
            pieces.append(Letters(GREEK[piece], "italic"))
        elif letters:
            pieces.append(Letters(letters[1], "italic"))
            if letters[2]:
                pieces.append(Letters(letters[2]))
        else:
            pieces.append(Letters(piece))
    return pieces[0] if len(pieces) == 1 else Row(tuple(pieces))


def show_feet(length: float, step: Fraction) -> tuple[Formula, ...]:
    """Return a length in inches as `= 18′-6 1/2″`, or `≈ 18′-6 7/16″ (to 1/16″)` where it is rounded to a step.

    Half a step is rounded up; what lies within the last bits of a step is that step.
    """
    steps = math.floor(abs(length) / step + 0.5 + 1e-9)
    exact = abs(steps * step - abs(length)) <= 1e-9 * abs(length)
    whole, part = divmod(steps * step, 1)
    feet, inches = divmod(int(whole), 12)
    sign = "−" if length < 0 and steps else ""
    text = f"{sign}{feet:,}{PRIME}-" if feet else sign
    if inches or feet or not part:
        text += f"{inches}"
    items: list[Formula] = [Operator("=" if exact else "≈", "relation"), Letters(text)]
    if part:
        items += [Space("thin")] if inches or feet else []
        items.append(Letters(f"{part.numerator}/{part.denominator}"))
    items.append(Letters(DOUBLE_PRIME))
    return tuple(items) if exact else (*items, Space("unit"), Letters(f"(to {step}{DOUBLE_PRIME})"))


def trade_marks(text: str) -> str:
    """Return typed feet and inches with the marks of the trade: 18′-6 1/2″."""
    return text.replace("'", PRIME).replace('"', DOUBLE_PRIME)


_POWERS = {2: "²", 3: "³", 4: "⁴"}


def unit_text(unit: Unit) -> str:
    """Return a unit as words print it: 'kip·ft', 'in.²', 'lb/ft³'; '' for a pure number."""
    above, below = "", ""
    for name, power in unit.factors:
        shown = "in." if name == "in" else "percent" if name == "%" else name
        size = abs(power)
        piece = shown + (_POWERS.get(size, f"^{size}") if size != 1 else "")
        if power > 0:
            above += ("·" if above else "") + piece
        else:
            below += ("·" if below else "") + piece
    above = above.replace("in.·", "in·") if above.count("·") and not above.endswith("in.") else above
    if below:
        below = f"({below})" if "·" in below else below
        return f"{above or '1'}/{below}"
    return above


def show_unit(unit: Unit) -> Formula | None:
    """Return a unit as a formula, or None for a pure number."""
    text = unit_text(unit)
    return Letters(text) if text else None
