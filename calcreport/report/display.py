"""Names and units as the trade writes them: f_c' with its prime, phiM_n as two letters, kip·ft, in.^2.

Symbols and units in, formula trees out. Knows no value.
"""

from __future__ import annotations

import re
from typing import TypeAlias

from calcreport.calculate.model import Slot, Symbol
from calcreport.core.units import Unit
from calcreport.report.model import Formula, Letters, Root, Row, Script

Slots: TypeAlias = tuple[Slot, ...]

_GREEK = {
    "alpha": "α",
    "beta": "β",
    "gamma": "γ",
    "delta": "δ",
    "epsilon": "ε",
    "eps": "ε",
    "zeta": "ζ",
    "eta": "η",
    "theta": "θ",
    "kappa": "κ",
    "lambda": "λ",
    "mu": "μ",
    "nu": "ν",
    "xi": "ξ",
    "pi": "π",
    "rho": "ρ",
    "sigma": "σ",
    "tau": "τ",
    "phi": "φ",
    "chi": "χ",
    "psi": "ψ",
    "omega": "ω",
    "Gamma": "Γ",
    "Delta": "Δ",
    "Theta": "Θ",
    "Lambda": "Λ",
    "Sigma": "Σ",
    "Phi": "Φ",
    "Psi": "Ψ",
    "Omega": "Ω",
}
_GREEK_START = re.compile("(" + "|".join(sorted(_GREEK, key=len, reverse=True)) + r")(?=$|_|'|[A-Z]|\d)")
PRIME = "′"


def show_symbol(symbol: Symbol) -> Formula:
    """Return a symbol's display form: its `shows`, else derived from its name."""
    return show_name(symbol.shows or symbol.name)


def show_name(text: str) -> Formula:
    """Return the display of `f_c'`, `phiM_n`, `A_s,min`, `√f_c'`."""
    if " " in text:
        return Letters(text)
    if text.startswith("√"):
        return Root(show_name(text[1:]))
    stem, _, rest = text.rpartition(".")
    if stem:
        text = rest
    head = _GREEK_START.match(text)
    if head and len(text) > head.end() and text[head.end()].isupper():
        return Row((Letters(_GREEK[head[1]], "italic"), show_name(text[head.end() :])))
    base, mark, below = text.partition("_")
    primes = len(below) - len(below.rstrip("'")) if mark else len(base) - len(base.rstrip("'"))
    above = Letters(PRIME * primes) if primes else None
    shown = _letters(base.rstrip("'"))
    subscript = _subscript(below.rstrip("'")) if below else None
    if subscript is None and above is None:
        return shown
    return Script(shown, subscript, above)


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


def _letters(text: str) -> Formula:
    """Return base letters: one letter italic, a word upright, digits after a letter as they are."""
    if text in _GREEK:
        return Letters(_GREEK[text], "italic")
    if len(text) == 1 or (len(text) == 2 and text[0].isalpha() and text[1].isupper()):
        return Letters(text, "italic")
    return Letters(text, "upright")


def _subscript(text: str) -> Formula:
    pieces: list[Formula] = []
    for place, piece in enumerate(re.split(r"[,_]", text)):
        if place:
            pieces.append(Letters(","))
        letters = re.fullmatch(r"([A-Za-z])(\d*)", piece)
        if piece in _GREEK:
            pieces.append(Letters(_GREEK[piece], "italic"))
        elif letters:
            pieces.append(Letters(letters[1], "italic"))
            if letters[2]:
                pieces.append(Letters(letters[2]))
        else:
            pieces.append(Letters(piece))
    return pieces[0] if len(pieces) == 1 else Row(tuple(pieces))


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
