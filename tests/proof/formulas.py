"""Printed mathematics as tokens, by geometry: fractions, radicals, scripts, braces, labels below sums.

In: the glyphs and rules of one piece of work. Out: a row of `Token`; fractions, radicals, braced lists and labels hold
rows of their own. ValueError where the ink fits no known form. Knows shapes, not meaning: `expressions` reads on.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from .glyphs import Glyph
from .pieces import AXIS, RELATIONS, Rule, find_labels, find_pieces, find_runs, main_baseline
from .units import unit

_DIGITS = "0123456789"
_SIGNS = {"+": "+", "−": "-", "×": "*", "·": "·", "/": "/", "±": "±"}
#: gaps, in type sizes: letters of one word; number and unit against a product by juxtaposition
_NAME_GAP = 0.14
_WORD_GAP, _UNIT_GAP, _UNIT_FAR = 0.07, 0.183, 0.36
_PRIME = "′"


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


def read_tokens(glyphs: Iterable[Glyph], rules: Iterable[Rule]) -> list[Token]:
    """Read one row of mathematics from left to right."""
    rest = [g for g in glyphs if g.text != " "]
    left = list(rules)
    if not rest:
        return []
    base = main_baseline(rest, left)
    tokens: list[Token] = []
    rest, left, made = _take_stacks(rest, left, base)
    tokens += made
    rest, left, made = _take_rules(rest, left)
    tokens += made
    rest, made = _take_labels(rest, base)
    tokens += made
    if left:
        raise ValueError("a rule belongs to nothing")
    return _row([g for g in rest if g.text != "\u200b"], tokens, base)


def _between(items: Iterable[Glyph], x0: float, x1: float) -> list[Glyph]:
    return [g for g in items if x0 - 0.6 <= (g.left + g.right) / 2 <= x1 + 0.6]


def _take_stacks(rest: list[Glyph], rules: list[Rule], base: float) -> tuple[list[Glyph], list[Rule], list[Token]]:
    """Take lists after a brace: the brace, and its rows up to the next thing on the main row."""
    made: list[Token] = []
    for brace in sorted((g for g in rest if g.text == "{"), key=lambda g: g.left):
        if brace not in rest or any(not r.radical and r.x0 < brace.left < r.x1 for r in rules):
            continue
        whole = [g for g in rest if g.text in "{\u200b" and abs(g.left - brace.left) < 1.0]
        low, high = min(g.y0 for g in whole), max(g.y1 for g in whole)
        edge = max(g.right for g in whole)
        ends = [g.left for g in rest if g.left > edge + 3 and abs(g.y - base) < 0.05 and g.text in RELATIONS + "+−×"]
        end = min(ends, default=float("inf"))
        inner = [g for g in rest if edge - 0.5 <= g.left < end and g not in whole and low - 3 < (g.y0 + g.y1) / 2 < high + 3]
        inner_rules = [r for r in rules if edge - 0.5 <= r.x0 < end and low - 1 < r.y < high + 1]
        rows = find_pieces(inner, inner_rules)
        rows.sort(key=lambda piece: -piece.baseline)
        if len(rows) < 2:
            raise ValueError("a brace before fewer than two rows")
        parts = tuple(read_tokens(row.glyphs, row.rules) for row in rows)
        right = max(row.right for row in rows)
        made.append(Token("stack", "{", brace.left, right, brace.size, parts))
        taken = {id(g) for g in (*whole, *inner)}
        rest = [g for g in rest if id(g) not in taken]
        rules = [r for r in rules if r not in inner_rules]
    return rest, rules, made


def _take_rules(rest: list[Glyph], rules: list[Rule]) -> tuple[list[Glyph], list[Rule], list[Token]]:
    """Take fractions and radicals, the widest first."""
    made: list[Token] = []
    waiting = sorted(rules, key=lambda r: r.x0 - r.x1)
    while waiting:
        rule = waiting.pop(0)
        inside = _between(rest, rule.x0, rule.x1)
        within = [r for r in waiting if rule.x0 - 0.6 <= r.x0 and r.x1 <= rule.x1 + 0.6]
        if rule.radical:
            sign = min((g for g in rest if g.text == "√"), key=lambda g: abs(g.x1 - rule.x0) + abs(g.y1 - rule.y))
            body = [g for g in inside if g is not sign and g.y < rule.y]
            within = [r for r in within if r.y < rule.y]
            made.append(Token("root", "√", sign.left, rule.x1, sign.size, (read_tokens(body, within),)))
            taken = {id(sign), *map(id, body)}
        else:
            above = [g for g in inside if (g.y0 + g.y1) / 2 > rule.y]
            below = [g for g in inside if (g.y0 + g.y1) / 2 <= rule.y]
            if not above or not below:
                raise ValueError("a fraction without numerator or denominator")
            parts = (
                read_tokens(above, [r for r in within if r.y > rule.y]),
                read_tokens(below, [r for r in within if r.y < rule.y]),
            )
            made.append(Token("fraction", "/", rule.x0, rule.x1, max(g.size for g in above), parts))
            taken = set(map(id, inside))
        rest = [g for g in rest if id(g) not in taken]
        waiting = [r for r in waiting if r not in within]
    return rest, [], made


def _take_labels(rest: list[Glyph], base: float) -> tuple[list[Glyph], list[Token]]:
    """Take sums and extremes with what stands below them."""
    made: list[Token] = []
    for runs, sign in find_labels(find_runs(rest)):
        if abs(sign[0].y - base) > 0.6:
            continue
        label = [g for run in runs for g in run]
        left, right = min(g.left for g in (*sign, *label)), max(g.right for g in (*sign, *label))
        text = "".join(g.text for g in sign)
        made.append(Token("over", text, left, right, sign[0].size, (read_tokens(label, []),)))
        gone = {id(g) for g in (*sign, *label)}
        rest = [g for g in rest if id(g) not in gone]
    return rest, made


@dataclass(slots=True)
class _Spot:
    """A glyph or a finished token on the main row, with what is raised and lowered after it."""

    left: float
    right: float
    size: float
    glyph: Glyph | None
    token: Token | None
    raised: list[Glyph] = field(default_factory=list)
    lowered: list[Glyph] = field(default_factory=list)


def _row(rest: Sequence[Glyph], tokens: Sequence[Token], base: float) -> list[Token]:
    """Join glyphs of the main row, their scripts and finished tokens, from left to right."""
    size = max([g.size for g in rest] + [t.size for t in tokens])
    spots = [_Spot(t.left, t.right, t.size, None, t) for t in tokens]
    scripts: list[Glyph] = []
    for glyph in rest:
        tall = glyph.text in "()[]|"
        if abs(glyph.y - base) < 0.6 or (tall and glyph.size > 0.8 * size):
            spots.append(_Spot(glyph.left, glyph.right, glyph.size, glyph, None))
        else:
            scripts.append(glyph)
    spots.sort(key=lambda s: s.left)
    for glyph in sorted(scripts, key=lambda g: g.left):
        before = [s for s in spots if s.left < glyph.left - 0.2 and s.right < glyph.left + 5.5]
        if not before:
            raise ValueError(f"{glyph.text!r} stands off the main row")
        (before[-1].raised if glyph.y > base else before[-1].lowered).append(glyph)
    return _join(spots)


def _join(spots: list[_Spot]) -> list[Token]:
    row: list[Token] = []
    at = 0
    while at < len(spots):
        spot = spots[at]
        glyph = spot.glyph
        if spot.token is not None:
            spot.token.raised = _raised(spot)
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


def _digit(spot: _Spot) -> bool:
    return spot.glyph is not None and spot.glyph.text in _DIGITS


def _wordlike(text: str) -> bool:
    return text[0].isalpha() or text in "#%_′–" or (len(text) > 1 and text.isalpha())


def _close(one: _Spot, other: _Spot) -> bool:
    return other.left - one.right <= _WORD_GAP * one.size


def _number(spots: list[_Spot], at: int, row: list[Token]) -> int:
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
        if spot.raised or spot.lowered:
            break
    last = spots[at - 1]
    glyph = first.glyph
    assert glyph is not None
    row.append(
        Token("number", text, first.left, _end(last), first.size, raised=_raised(last), words="Math" not in glyph.font)
    )
    if last.lowered:
        raise ValueError(f"a number with a subscript: {text}")
    return at


def _thousands(spots: list[_Spot], at: int) -> bool:
    """Tell whether a comma parts thousands: three digits follow, close."""
    following = spots[at : at + 5]
    digits = 0
    for one, other in zip(following, following[1:], strict=False):
        if not _digit(other) or not _close(one, other):
            break
        digits += 1
    return digits == 3


def _follows_number(row: list[Token], spot: _Spot) -> bool:
    """Tell whether a letter begins a unit: it stands a unit's space after a number."""
    if not row or row[-1].kind != "number" or row[-1].words:
        return False
    gap = (spot.left - row[-1].right) / spot.size
    return _UNIT_GAP <= gap <= _UNIT_FAR


def _unit(spots: list[_Spot], at: int, row: list[Token]) -> int:
    """Read the longest unit that begins here; a word where there is none."""
    first, text, found, start = spots[at], "", 0, at
    best = ""
    while at < len(spots):
        spot = spots[at]
        if spot.glyph is None or (text and spot.left - spots[at - 1].right > _WORD_GAP * spot.size):
            break
        text += spot.glyph.text + "".join(g.text for g in spot.raised).translate(_POWERS)
        at += 1
        if unit(text) is not None and not spot.lowered:
            best, found = text, at
    if not best or (found < len(spots) and _letter_follows(spots, found)):
        return _word(spots, start, row)
    row.append(Token("unit", best, first.left, spots[found - 1].right, first.size))
    return found


def _letter_follows(spots: list[_Spot], at: int) -> bool:
    glyph = spots[at].glyph
    return glyph is not None and glyph.text.isalpha() and _close(spots[at - 1], spots[at])


_POWERS = str.maketrans("23", "²³")


def _word(spots: list[_Spot], at: int, row: list[Token]) -> int:
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
        if spot.raised or spot.lowered:
            break
    last = spots[at - 1]
    tail = ""
    if face and at < len(spots) and _direction(spots, at):
        glyph = spots[at].glyph
        tail = glyph.text if glyph is not None else ""
        at += 1
    primes = [g for g in last.raised if g.text == _PRIME]
    last.raised = [g for g in last.raised if g.text != _PRIME]
    text += _PRIME * len(primes)
    if last.lowered:
        text += "_" + _below(last.lowered)
    text += tail
    row.append(Token("word", text, first.left, _end(last), first.size, raised=_raised(last), words=not face))
    return at


def _direction(spots: list[_Spot], at: int) -> bool:
    """Tell whether a sign belongs to the name before it, W+: nothing stands between, and nothing touches it after."""
    glyph = spots[at].glyph
    if glyph is None or glyph.text not in "+−" or spots[at].left - spots[at - 1].right > _NAME_GAP * glyph.size:
        return False
    return at + 1 == len(spots) or not _close(spots[at], spots[at + 1])


def _below(glyphs: list[Glyph]) -> str:
    return "".join(g.text for g in sorted(glyphs, key=lambda g: g.left))


def _end(spot: _Spot) -> float:
    return max([spot.right, *(g.right for g in (*spot.raised, *spot.lowered))])


def _raised(spot: _Spot) -> list[Token]:
    return read_tokens(spot.raised, []) if spot.raised else []


def _sign(spot: _Spot, glyph: Glyph) -> Token:
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
    if spot.lowered:
        raise ValueError(f"{glyph.text!r} with a subscript")
    return Token(kind, text, spot.left, spot.right, spot.size, raised=_raised(spot), words="Math" not in glyph.font)


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


__all__ = ["AXIS", "Token", "plain", "read_tokens"]
