"""Words and formulas of a report as one row of plain text, for a terminal.

Symbols, signs and numbers as the sheets have them; a fraction is `(above)/(below)`, a subscript follows `_`, a power
`^`. Every formula has its text: nothing is left out.
"""

from __future__ import annotations

from typing import assert_never

from calcreport.report.formula_model import (
    Accent,
    Big,
    Fence,
    Formula,
    Fraction,
    Letters,
    Operator,
    Reference,
    Root,
    Row,
    Script,
    Space,
    Stack,
    Strong,
    Words,
)

_PRIMES = ("′", "″", "'")


def plain_words(words: Words) -> str:
    """Return running text with its formulas on one row, blanks never doubled."""
    found = "".join(
        one if isinstance(one, str) else one.text if isinstance(one, Strong | Reference) else plain_formula(one)
        for one in words
    )
    return " ".join(found.split())


def plain_formula(formula: Formula) -> str:
    """Return a formula on one row."""
    match formula:
        case Letters(text):
            return text
        case Operator(sign, kind):
            return f" {sign} " if kind in ("binary", "relation") else f"{sign} " if kind == "punctuation" else sign
        case Space():
            return " "
        case Row(items):
            return "".join(plain_formula(item) for item in items)
        case Fraction(above, below):
            return f"{_whole(above)}/{_whole(below)}"
        case Root(body, index):
            return f"{plain_formula(index) if index else ''}√{_whole(body, always=True)}"
        case Script(base, below, above):
            raised = plain_formula(above) if above is not None else ""
            power = raised if raised in _PRIMES else f"^{_joined(raised)}" if raised else ""
            return plain_formula(base) + (f"_{_joined(plain_formula(below))}" if below is not None else "") + power
        case Accent(base, mark):
            return base.text + mark
        case Fence(opening, body, closing):
            return f"{opening}{plain_formula(body)}{closing}"
        case Stack(rows):
            return "; ".join(plain_formula(row) for row in rows)
        case Big(sign, below, above):
            limits = (("_", below), ("^", above))
            return plain_formula(sign) + "".join(
                f"{mark}{_joined(plain_formula(limit))}" for mark, limit in limits if limit is not None
            ) + " "  # fmt: skip
        case _:
            assert_never(formula)


def _whole(formula: Formula, always: bool = False) -> str:
    """Return one side of a rule, in brackets unless it is one thing."""
    text = plain_formula(formula)
    fenced = isinstance(formula, Fence)
    return f"({text})" if not fenced and (always or " " in text or "/" in text) else text


def _joined(text: str) -> str:
    """Return a script that could be taken for more than itself in brackets."""
    return f"({text})" if " " in text or "/" in text else text
