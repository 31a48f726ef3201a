"""Printed mathematics as tokens, by geometry: fractions, radicals, scripts, braces, labels below sums.

In: the glyphs and rules of one piece of work. Out: a row of `Token`; fractions, radicals, braced lists and labels hold
rows of their own. ValueError where the ink fits no known form. Knows shapes, not meaning: `expressions` reads on.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence

from .glyphs import Glyph
from .letters import PRIME, Spot, Token, join
from .pieces import RELATIONS, find_labels, find_pieces, find_runs, main_baseline
from .rules import Rule


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
        inner = [
            g for g in rest if edge - 0.5 <= g.left < end and g not in whole and low - 3 < (g.y0 + g.y1) / 2 < high + 3
        ]
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


def _row(rest: Sequence[Glyph], tokens: Sequence[Token], base: float) -> list[Token]:
    """Join glyphs of the main row, their scripts and finished tokens, from left to right."""
    size = max([g.size for g in rest] + [t.size for t in tokens])
    spots = [Spot(t.left, t.right, t.size, None, t) for t in tokens]
    scripts: list[Glyph] = []
    for glyph in rest:
        tall = glyph.text in "()[]|"
        if abs(glyph.y - base) < 0.6 or (tall and glyph.size > 0.8 * size):
            spots.append(Spot(glyph.left, glyph.right, glyph.size, glyph, None))
        else:
            scripts.append(glyph)
    spots.sort(key=lambda s: s.left)
    raised: dict[int, list[Glyph]] = defaultdict(list)
    lowered: dict[int, list[Glyph]] = defaultdict(list)
    for glyph in sorted(scripts, key=lambda g: g.left):
        before = [i for i, s in enumerate(spots) if s.left < glyph.left - 0.2 and s.right < glyph.left + 5.5]
        if not before:
            raise ValueError(f"{glyph.text!r} stands off the main row")
        (raised if glyph.y > base else lowered)[before[-1]].append(glyph)
    for place, spot in enumerate(spots):
        powers = [g for g in raised[place] if g.text != PRIME]
        spot.primes = len(raised[place]) - len(powers)
        spot.raised = read_tokens(powers, []) if powers else []
        spot.below = "".join(g.text for g in lowered[place])
        spot.end = max([spot.right, *(g.right for g in (*raised[place], *lowered[place]))])
    return join(spots)
