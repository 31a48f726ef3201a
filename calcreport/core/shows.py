"""The display of a symbol as people type it: `f_c'`, `phiM_n`, `A_{s,min}`, `bar(y)_t`, `√f_c'`.

Text in, its parts out. Knows neither formula trees nor fonts.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

#: names of Greek letters, with the letters
GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "eps": "ε", "zeta": "ζ", "eta": "η",
    "theta": "θ", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν", "xi": "ξ", "pi": "π", "rho": "ρ", "sigma": "σ",
    "tau": "τ", "phi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω", "Gamma": "Γ", "Delta": "Δ", "Theta": "Θ",
    "Lambda": "Λ", "Sigma": "Σ", "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω",
}  # fmt: skip
#: marks over a letter by the word for them, as the combining characters of Unicode
ACCENTS = {"bar": "\u0304", "hat": "\u0302", "tilde": "\u0303", "dot": "\u0307"}
_HEAD = re.compile("(" + "|".join(sorted(GREEK, key=len, reverse=True)) + r")(?=[A-Z])")
_FORM = re.compile(
    r"(?:(?P<accent>[a-z]+)\((?P<under>[^()\s]+)\)|(?P<base>[^\s_'′{}()^√]+))(?P<primes>['′]*)"
    r"(?:_(?:\{(?P<braced>[^{}]+)\}|(?P<below>[^\s'′{}()^]+)))?(?P<after>['′]*)"
)


@dataclass(frozen=True, slots=True)
class Shown:
    """A symbol taken apart; where `words` are not empty, nothing else is."""

    #: words that stand as they are
    words: str = ""
    #: under a root
    rooted: bool = False
    #: Greek letters that stand before the symbol: φ of φM_n
    heads: tuple[str, ...] = ()
    base: str = ""
    #: the combining character over the base, or ''
    accent: str = ""
    primes: int = 0
    #: pieces of the subscript, which commas part
    below: tuple[str, ...] = ()


def read_shown(text: str) -> Shown | None:
    """Take a display apart; None where it is none."""
    if " " in text:
        return Shown(words=text)
    if text.startswith("√"):
        inner = read_shown(text[1:])
        if inner is None or inner.words or inner.rooted:
            return None
        return Shown("", True, inner.heads, inner.base, inner.accent, inner.primes, inner.below)
    heads: list[str] = []
    while head := _HEAD.match(text):
        heads.append(GREEK[head[1]])
        text = text[head.end() :]
    match = _FORM.fullmatch(text)
    if match is None or (match["primes"] and match["after"]):
        return None
    accent, base = match["accent"] or "", match["base"] or GREEK.get(match["under"], match["under"])
    if accent and (accent not in ACCENTS or len(base) != 1):
        return None
    below = match["braced"] or match["below"]
    pieces = tuple(piece.strip() for piece in re.split("[,_]", below)) if below else ()
    if not all(pieces):
        return None
    primes = len(match["primes"] + match["after"])
    return Shown("", False, tuple(heads), GREEK.get(base, base), ACCENTS.get(accent, ""), primes, pieces)
