"""Letters, digits and signs of one row joined into tokens: numbers, symbols with their scripts, units, signs.

In: `Spot` records from left to right, each a glyph or a finished token, with what is raised and lowered after it.
Out: a row of `Token`. Gaps tell a unit after its number from a symbol beside a factor, and one name from two.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import pairwise

from .glyphs import Glyph
from .pieces import RELATIONS
from .units import unit

_DIGITS = "0123456789"
_SIGNS = {"+": "+", "−": "-", "×": "*", "·": "·", "/": "/", "±": "±"}
#: gaps, in type sizes: letters of one word; number and unit against a product by juxtaposition
_NAME_GAP = 0.14
_WORD_GAP, _UNIT_GAP, _UNIT_FAR = 0.07, 0.183, 0.36
PRIME = "′"


@dataclass(slots=True)
class Token:
    """One thing on a row."""

    #: number word unit sign relation open close bar brace comma colon fraction root stack over
    kind: str
    text: str
    left: float
    right: float
    size: float
    parts: tuple[list[Token], ...] = ()
    #: what is raised
    raised: list[Token] = field(default_factory=list)
    #: set in a face for words, not in the formula face
    words: bool = False
    #: power of ten printed after a number
    power: int = 0


@dataclass(slots=True)
class Spot:
    """A glyph or a finished token on the main row, with its scripts."""

    left: float
    right: float
    size: float
    glyph: Glyph | None
    token: Token | None
    #: what is raised but primes; how many primes; what is lowered; where the scripts end
    raised: list[Token] = field(default_factory=list)
    primes: int = 0
    below: str = ""
    end: float = 0.0


def join(spots: list[Spot]) -> list[Token]:
    row: list[Token] = []
    at = 0
    while at < len(spots):
        spot = spots[at]
        glyph = spot.glyph
        if spot.token is not None:
            spot.token.raised = spot.raised
            row.append(spot.token)
            at += 1
        elif glyph is None:
            raise ValueError("an empty place")
        elif glyph.text in _DIGITS or (glyph.text == "." and at + 1 < len(spots) and _digit(spots[at + 1])):
            at = _number(spots, at, row)
        elif _wordlike(glyph.text):
            at = _unit(spots, at, row) if _follows_number(row, spot) else _word(spots, at, row)
        else:
            row.append(_sign(spot, glyph))
            at += 1
    return _scaled(row)


def _scaled(row: list[Token]) -> list[Token]:
    """Join a number, a cross and a power of ten into one number."""
    found: list[Token] = []
    for token in row:
        power = _whole(token.raised) if token.kind == "number" and token.text == "10" and token.raised else None
        if power is not None and len(found) > 1 and found[-1].text == "*" and found[-2].kind == "number":
            found.pop()
            found[-1].power, found[-1].right = power, token.right
        else:
            found.append(token)
    return found


def _whole(row: Sequence[Token]) -> int | None:
    text = "".join(token.text for token in row)
    return int(text) if text.lstrip("-").isdigit() else None


def _digit(spot: Spot) -> bool:
    return spot.glyph is not None and spot.glyph.text in _DIGITS


def _wordlike(text: str) -> bool:
    return text[0].isalpha() or text in "#%_′–" or (len(text) > 1 and text.isalpha())


def _close(one: Spot, other: Spot) -> bool:
    return other.left - one.right <= _WORD_GAP * one.size


def _number(spots: list[Spot], at: int, row: list[Token]) -> int:
    """Read digits, decimal point and thousands commas."""
    first, text = spots[at], ""
    while at < len(spots):
        spot = spots[at]
        if spot.glyph is None or spot.glyph.text not in "0123456789.," or (text and not _close(spots[at - 1], spot)):
            break
        if spot.glyph.text == "," and not _thousands(spots, at):
            break
        if spot.glyph.text == "." and not (at + 1 < len(spots) and _digit(spots[at + 1])):
            break
        text += spot.glyph.text
        at += 1
        if spot.raised or spot.below or spot.primes:
            break
    last = spots[at - 1]
    glyph = first.glyph
    assert glyph is not None
    row.append(
        Token(
            "number",
            text,
            first.left,
            last.end,
            first.size,
            raised=last.raised,
            words="Math" not in glyph.font,
        )
    )
    if last.below:
        raise ValueError(f"a number with a subscript: {text}")
    return at


def _thousands(spots: list[Spot], at: int) -> bool:
    """Tell whether a comma parts thousands: three digits follow, close."""
    following = spots[at : at + 5]
    digits = 0
    for one, other in pairwise(following):
        if not _digit(other) or not _close(one, other):
            break
        digits += 1
    return digits == 3


def _follows_number(row: list[Token], spot: Spot) -> bool:
    """Tell whether a letter begins a unit: it stands a unit's space after a number."""
    if not row or row[-1].kind != "number" or row[-1].words:
        return False
    gap = (spot.left - row[-1].right) / spot.size
    return _UNIT_GAP <= gap <= _UNIT_FAR


def _unit(spots: list[Spot], at: int, row: list[Token]) -> int:
    """Read the longest unit that begins here; a word where there is none."""
    first, text, found, start = spots[at], "", 0, at
    best = ""
    while at < len(spots):
        spot = spots[at]
        if spot.glyph is None or (text and spot.left - spots[at - 1].right > _WORD_GAP * spot.size):
            break
        text += spot.glyph.text + plain(spot.raised).translate(_POWERS)
        at += 1
        if unit(text) is not None and not spot.below:
            best, found = text, at
    if not best or (found < len(spots) and _letter_follows(spots, found)):
        return _word(spots, start, row)
    row.append(Token("unit", best, first.left, spots[found - 1].right, first.size))
    return found


def _letter_follows(spots: list[Spot], at: int) -> bool:
    glyph = spots[at].glyph
    return glyph is not None and glyph.text.isalpha() and _close(spots[at - 1], spots[at])


_POWERS = str.maketrans("23", "²³")


def _word(spots: list[Spot], at: int, row: list[Token]) -> int:
    """Read letters that touch, with the scripts of the last."""
    first, text = spots[at], ""
    assert first.glyph is not None
    face = "Math" in first.glyph.font
    while at < len(spots):
        spot = spots[at]
        if spot.glyph is None or (text and not _close(spots[at - 1], spot)) or ("Math" in spot.glyph.font) != face:
            break
        inner = text and spot.glyph.text in _DIGITS + "-./"
        if not _wordlike(spot.glyph.text) and not (inner and not face):
            break
        text += spot.glyph.text
        at += 1
        if spot.raised or spot.below or spot.primes:
            break
    last = spots[at - 1]
    tail = ""
    if face and at < len(spots) and _direction(spots, at):
        glyph = spots[at].glyph
        tail = glyph.text if glyph is not None else ""
        at += 1
    text += PRIME * last.primes
    if last.below:
        text += "_" + last.below
    text += tail
    row.append(Token("word", text, first.left, last.end, first.size, raised=last.raised, words=not face))
    return at


def _direction(spots: list[Spot], at: int) -> bool:
    """Tell whether a sign belongs to the name before it, W+: nothing stands between, and nothing touches it after."""
    glyph = spots[at].glyph
    if glyph is None or glyph.text not in "+−" or spots[at].left - spots[at - 1].right > _NAME_GAP * glyph.size:
        return False
    return at + 1 == len(spots) or not _close(spots[at], spots[at + 1])


def _sign(spot: Spot, glyph: Glyph) -> Token:
    text = glyph.text
    if text in RELATIONS:
        kind = "relation"
    elif text in "([":
        kind = "open"
    elif text in ")]":
        kind = "close"
    elif text in _SIGNS:
        kind, text = "sign", _SIGNS[text]
    elif text in "|,:;.":
        kind = {"|": "bar", ",": "comma", ";": "comma", ":": "colon", ".": "point"}[text]
    else:
        kind = "word"
    if spot.below:
        raise ValueError(f"{glyph.text!r} with a subscript")
    return Token(kind, text, spot.left, spot.right, spot.size, raised=spot.raised, words="Math" not in glyph.font)


def plain(row: Sequence[Token]) -> str:
    """Return a row as one line of text, for reports."""
    found = ""
    for token in row:
        if token.kind == "fraction":
            piece = f"({plain(token.parts[0])})/({plain(token.parts[1])})"
        elif token.kind == "root":
            piece = f"√({plain(token.parts[0])})"
        elif token.kind == "stack":
            piece = "{" + "; ".join(plain(part) for part in token.parts) + "}"
        elif token.kind == "over":
            piece = f"{token.text}[{plain(token.parts[0])}]"
        else:
            piece = token.text + (f" × 10^{token.power}" if token.power else "")
        if token.raised:
            piece += f"^({plain(token.raised)})"
        found += (" " if found and token.kind not in ("close", "comma") and not found.endswith("(") else "") + piece
    return found
