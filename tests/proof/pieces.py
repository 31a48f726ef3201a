"""Glyphs that belong together, by geometry alone: runs on a baseline, then pieces of work.

In: glyphs and straight strokes of one lane. Out: `Piece` records: a formula, a run of words or a table cell, with the
fraction rules and radical rules inside it. Pieces of one row stay apart where the gap is wider than `reach` of the
type size. Knows no meaning of symbols.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import NamedTuple

from .glyphs import Glyph
from .rules import RULE_REACH, Rule

#: gap that ends a run, and a piece, in type sizes
RUN_GAP, PIECE_GAP = 0.42, 0.78
RELATIONS = "=≤≥<>≠≈"
#: math axis above the baseline, in type sizes
AXIS = 0.258


@dataclass(slots=True)
class Piece:
    """Glyphs that stand together."""

    glyphs: list[Glyph]
    rules: list[Rule]

    @property
    def left(self) -> float:
        return min(g.left for g in self.glyphs)

    @property
    def right(self) -> float:
        return max(g.right for g in self.glyphs)

    @property
    def top(self) -> float:
        return max(g.y1 for g in self.glyphs)

    @property
    def bottom(self) -> float:
        return min(g.y0 for g in self.glyphs)

    @property
    def size(self) -> float:
        """The largest type in it."""
        return max(g.size for g in self.glyphs)

    @property
    def math(self) -> bool:
        """Tell whether any of it is set in the formula face."""
        return any("Math" in g.font for g in self.glyphs)

    @property
    def words(self) -> bool:
        """Tell whether all of it is set in faces for words."""
        return not self.math

    @property
    def text(self) -> str:
        """The text in order of the page: by baseline, then from left to right, gaps as spaces."""
        rows: dict[float, list[Glyph]] = defaultdict(list)
        for glyph in self.glyphs:
            rows[round(glyph.y, 1)].append(glyph)
        return " ".join(spaced(rows[y]) for y in sorted(rows, reverse=True))

    @property
    def baseline(self) -> float:
        """The baseline of the main row."""
        return main_baseline(self.glyphs, self.rules)


def spaced(glyphs: Iterable[Glyph]) -> str:
    """Return the text of glyphs of a row, a space where they stand apart."""
    found, end, size = "", None, 1.0
    for glyph in sorted(glyphs, key=lambda g: g.left):
        if end is not None and glyph.left - end > 0.12 * max(size, glyph.size):
            found += " "
        found, end, size = found + glyph.text, glyph.right, glyph.size
    return found


def main_baseline(glyphs: Sequence[Glyph], rules: Sequence[Rule]) -> float:
    """Return the baseline of the main row: that of its relations, else of its largest type outside fractions."""
    size = max(g.size for g in glyphs)
    relations = [g for g in glyphs if g.text in RELATIONS and g.size > 0.9 * size]
    fractions = [r for r in rules if not r.radical]
    if relations:
        return min(relations, key=lambda g: g.left).y
    plain = [
        g
        for g in glyphs
        if g.text not in "()[]{}|\u200b∑√"
        and not any(r.x0 - 0.4 <= (g.left + g.right) / 2 <= r.x1 + 0.4 for r in fractions)
    ]
    if plain:
        largest = max(g.size for g in plain)
        return min((g for g in plain if g.size > 0.95 * largest), key=lambda g: g.left).y
    if fractions:
        widest = max(fractions, key=lambda r: r.x1 - r.x0)
        return widest.y - AXIS * size * (10 / 8.5)
    return min(glyphs, key=lambda g: g.left).y


def find_runs(glyphs: Sequence[Glyph], gap: float = RUN_GAP) -> list[list[Glyph]]:
    """Part glyphs into runs on one baseline without wide gaps."""
    rows: dict[float, list[Glyph]] = defaultdict(list)
    for glyph in glyphs:
        rows[round(glyph.y, 1)].append(glyph)
    runs: list[list[Glyph]] = []
    for row in rows.values():
        row.sort(key=lambda g: g.left)
        run = [row[0]]
        for glyph in row[1:]:
            if glyph.left - run[-1].right <= gap * max(glyph.size, run[-1].size):
                run.append(glyph)
            else:
                runs.append(run)
                run = [glyph]
        runs.append(run)
    return runs


def operator_places(run: Sequence[Glyph]) -> list[tuple[int, int]]:
    """Return where signs that carry a label below stand in a run: first and last glyph of each."""
    text = "".join(g.text if len(g.text) == 1 else "?" for g in run)
    return [(m.start(), m.end() - 1) for m in re.finditer("∑|max|min|pick|read", text)]


class _Box(NamedTuple):
    x0: float
    y0: float
    x1: float
    y1: float
    size: float
    run: list[Glyph]
    rule: Rule | None


def find_pieces(glyphs: Sequence[Glyph], rules: Sequence[Rule], reach: float = PIECE_GAP) -> list[Piece]:
    """Part glyphs and rules into pieces; order: from the top down, then from left to right."""
    boxes = [
        _Box(min(g.left for g in run), min(g.y0 for g in run), max(g.right for g in run), max(g.y1 for g in run),
             max(g.size for g in run), run, None)
        for run in find_runs(glyphs)
    ]  # fmt: skip
    boxes = _raise_labels(boxes)
    boxes += [_Box(r.x0, r.y - 2.6, r.x1, r.y + 2.6, 8.5, [], r) for r in rules]
    boxes.sort(key=lambda b: b.x0)
    heads = list(range(len(boxes)))

    def head(place: int) -> int:
        while heads[place] != place:
            heads[place] = heads[heads[place]]
            place = heads[place]
        return place

    live: list[int] = []
    for place, box in enumerate(boxes):
        live = [other for other in live if boxes[other].x1 > box.x0 - 12]
        for other in live:
            if _touch(boxes[other], box, reach):
                heads[head(place)] = head(other)
        live.append(place)
    groups: dict[int, Piece] = {}
    for place, box in enumerate(boxes):
        piece = groups.setdefault(head(place), Piece([], []))
        piece.glyphs += box.run
        if box.rule is not None:
            piece.rules.append(box.rule)
    found = [piece for piece in groups.values() if piece.glyphs]
    return sorted(found, key=lambda p: (-round(p.baseline, 0), p.left))


def _touch(one: _Box, other: _Box, reach: float) -> bool:
    """Tell whether two boxes belong to one piece; `one` begins left of `other`."""
    apart = other.x0 - one.x1
    if one.rule is not None or other.rule is not None:
        rule, run = (one, other) if one.rule is not None else (other, one)
        if rule.rule is not None and run.rule is None and apart < 0:
            shared = min(one.x1, other.x1) - other.x0
            return _near_rule(rule.rule, run) and shared > 0.3 * min(one.x1 - one.x0, other.x1 - other.x0)
    size = max(one.size, other.size) if min(one.size, other.size) > 8 else min(10.0, max(one.size, other.size))
    return apart <= reach * size and one.y0 < other.y1 - 0.1 and other.y0 < one.y1 - 0.1


def _near_rule(rule: Rule, run: _Box) -> bool:
    if rule.radical:
        return (run.y1 <= rule.y + 0.6 and rule.y - run.y1 < 4.5) or run.y0 < rule.y < run.y1
    return -1.0 < run.y0 - rule.y < RULE_REACH or -1.0 < rule.y - run.y1 < RULE_REACH


class Label(NamedTuple):
    """What stands below a sum or an extreme: its runs, and the sign above as glyphs."""

    runs: list[list[Glyph]]
    sign: list[Glyph]


def find_labels(runs: Sequence[list[Glyph]]) -> list[Label]:
    """Find the labels below sums and extremes: small type, scripts and all, whose width the sign above stands over."""
    signs = [run[first : last + 1] for run in runs for first, last in operator_places(run)]
    if not signs:
        return []
    small = sorted((run for run in runs if max(g.size for g in run) < 8.0), key=lambda run: run[0].left)
    clusters: list[list[list[Glyph]]] = []
    for run in small:
        for cluster in clusters:
            if any(_beside(other, run) for other in cluster) and _on_row(cluster, run):
                cluster.append(run)
                break
        else:
            clusters.append([run])
    found = []
    for cluster in clusters:
        glyphs = [g for run in cluster for g in run]
        left, right, top = (
            min(g.left for g in glyphs),
            max(g.right for g in glyphs),
            max(g.y1 for g in glyphs),
        )
        for sign in signs:
            foot, middle = min(g.y0 for g in sign), (sign[0].left + sign[-1].right) / 2
            if (
                -0.5 < foot - top < 4.0
                and abs(middle - (left + right) / 2) < 3.0
                and sign[0].size * 0.85 >= glyphs[0].size
            ):
                found.append(Label(cluster, sign))
                break
    return found


def _beside(one: list[Glyph], other: list[Glyph]) -> bool:
    shared = min(max(g.y1 for g in one), max(g.y1 for g in other)) - max(
        min(g.y0 for g in one), min(g.y0 for g in other)
    )
    within = one[0].left < other[0].left < one[-1].right
    return shared > 0.3 and (within or -1.0 < other[0].left - one[-1].right < 4.0)


def _on_row(cluster: list[list[Glyph]], run: list[Glyph]) -> bool:
    """Tell whether a run is a script in a label or stands on its row: labels side by side have rows of their own."""
    first, edge = cluster[0][0], max(other[-1].right for other in cluster)
    return run[0].size < 0.95 * first.size or abs(run[0].y - first.y) < 0.6 or run[0].left - edge < 1.0


def _raise_labels(boxes: list[_Box]) -> list[_Box]:
    """Let the box of a label below a sign reach up to the sign, so that the row goes on beside it."""
    tops = {
        id(run): max(g.y1 for g in label.sign) for label in find_labels([b.run for b in boxes]) for run in label.runs
    }
    return [box._replace(y1=tops[id(box.run)]) if id(box.run) in tops else box for box in boxes]
