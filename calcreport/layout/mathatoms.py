"""Kinds of the items of a row and the gaps between them, after Knuth, The TeXbook, chapter 18.

In: the items of a row. Out: a kind for each, and a table of gaps by kinds. Knows no sizes.
"""

from __future__ import annotations

from calcreport.layout.mathstyle import MEDIUM, NONE, THICK, THIN, UNIT
from calcreport.report.model import (
    Accent,
    Big,
    Fence,
    Formula,
    Fraction,
    Letters,
    Operator,
    Root,
    Row,
    Script,
    Space,
    Stack,
)

ORD, OP, BIN, REL, OPEN, CLOSE, PUNCT, INNER, SPACE, ROW = range(10)
#: a fence spaces like an ordinary item, so that `max(` and `2(` close up and a sum stands clear of it
_KINDS: dict[type, int] = {
    Letters: ORD,
    Script: ORD,
    Accent: ORD,
    Root: ORD,
    Stack: ORD,
    Fence: ORD,
    Fraction: INNER,
    Big: OP,
    Space: SPACE,
    Row: ROW,
}
_SIGNS = {"binary": BIN, "relation": REL, "open": OPEN, "close": CLOSE, "punctuation": PUNCT, "prefix": ORD}
#: gap by kind before and kind after (The TeXbook, page 170; a comma closes up to a fraction before it);
#: a space after a sign stands for itself
GAPS = (
    # ord   op    bin     rel    open    close  punct inner space
    (NONE, THIN, MEDIUM, THICK, NONE, NONE, NONE, THIN, NONE),  # ord
    (THIN, THIN, NONE, THICK, NONE, NONE, NONE, THIN, NONE),  # op
    (MEDIUM, MEDIUM, NONE, NONE, MEDIUM, NONE, NONE, MEDIUM, NONE),  # bin
    (THICK, THICK, NONE, NONE, THICK, NONE, NONE, THICK, NONE),  # rel
    (NONE, NONE, NONE, NONE, NONE, NONE, NONE, NONE, NONE),  # open
    (NONE, THIN, MEDIUM, THICK, NONE, NONE, NONE, THIN, NONE),  # close
    (THIN, THIN, NONE, THIN, THIN, THIN, THIN, THIN, NONE),  # punct
    (THIN, THIN, MEDIUM, THICK, THIN, NONE, NONE, THIN, NONE),  # inner
)
_BESIDE_OP = (ORD, OP)
#: the same in scripts, where only the gaps beside a large operator remain
GAPS_IN_SCRIPTS = tuple(
    tuple(THIN if OP in (a, b) and a in _BESIDE_OP and b in _BESIDE_OP else NONE for b in range(9)) for a in range(8)
)
#: the gap an author's space asks for
EXPLICIT = {"unit": UNIT, "thin": THIN}
#: after these a binary sign has nothing to join and belongs to what follows
_NO_LEFT = (OP, BIN, REL, OPEN, PUNCT)
_NO_RIGHT = (REL, CLOSE, PUNCT)


def flat(items: tuple[Formula, ...]) -> tuple[Formula, ...]:
    """Take rows inside a row as if their items stood in it."""
    return tuple(part for item in items for part in (flat(item.items) if isinstance(item, Row) else (item,)))


def kinds_of(items: tuple[Formula, ...]) -> list[int]:
    """Give the kind of each item of a row; a binary sign with nothing to join becomes ordinary.

    In a row with rows inside, which is not yet flat, no sign changes.
    """
    kinds = [_SIGNS[item.kind] if type(item) is Operator else _KINDS[type(item)] for item in items]
    if BIN in kinds and ROW not in kinds:
        for i, kind in enumerate(kinds):
            if kind == BIN:
                before = next((k for k in reversed(kinds[:i]) if k != SPACE), OPEN)
                after = next((k for k in kinds[i + 1 :] if k != SPACE), CLOSE)
                if before in _NO_LEFT or after in _NO_RIGHT:
                    kinds[i] = ORD
    return kinds
