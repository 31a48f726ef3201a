"""Given declarations of a template: what a project must hand over, in which kind and range.

Mapping nodes in, `Given` records out.
"""

from __future__ import annotations

import re
from fractions import Fraction
from typing import Literal

from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount, read_amount
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import Given, Range, Symbol
from calcreport.read.nodes import Mapping, Node, Scalar
from calcreport.read.symbols import KEYS as SYMBOL_KEYS
from calcreport.read.symbols import find_symbol, read_symbol

_KEYS = (*SYMBOL_KEYS, "range", "if none", "material", "property", "rows", "names", "least", "most", "over", "gives")
_BAR_OUTPUTS = ("area", "diameter", "count", "spacing")
MOST_ROWS = 1000
_ONE_SIDED = re.compile(r"(>=|<=|>|<)\s*(.+)")
_INTERVAL = re.compile(r"([\[(])\s*([^,]+),\s*([^,]+?)\s*([\])])")


def read_givens(node: Mapping, table: dict[str, Symbol], problems: Problems) -> tuple[Given, ...]:
    """Read the `given` mapping of a template or part."""
    found = (_read_given(key, value, table, problems) for key, value in node.entries)
    return tuple(given for given in found if given is not None)


def _read_given(key: Scalar, node: Node, table: dict[str, Symbol], problems: Problems) -> Given | None:
    empty = isinstance(node, Scalar) and not node.text
    entry = Mapping((), key.span) if empty else as_mapping(node, f"the given `{key.text}`", problems)
    if entry is None:
        return None
    fields = Fields(entry, _KEYS, f"the given `{key.text}`", problems)
    kind = fields.text("kind")
    columns: tuple[Given, ...] = ()
    symbol: Symbol | None
    what: Literal["value", "bars", "spaced bars", "rows", "pairs"]
    if fields.has("rows"):
        rows = fields.mapping("rows")
        columns = read_givens(rows, table, problems) if rows else ()
        symbol, what = None, "rows"
    elif kind == "bars" or kind == "spaced bars":
        says = fields.text("says") or (table[key.text].says if key.text in table else "")
        symbol, what = Symbol(key.text, fields.text("shows"), says, "word", None, (), None), kind
    else:
        symbol = _value_symbol(key, fields, table, problems)
        what = "pairs" if fields.has("over") else "value"
        if symbol is None:
            return None
    return Given(
        name=key.text,
        kind=what,
        symbol=symbol,
        says=fields.text("says") or (symbol.says if symbol else ""),
        range=_range(fields, symbol, problems),
        if_none=_if_none(fields, symbol, problems),
        material=fields.text("material"),
        property=fields.text("property") or key.text,
        columns=columns,
        row_names=tuple(scalar.text for scalar in fields.texts("names")),
        least=fields.whole("least", low=0, high=MOST_ROWS) or 1,
        most=fields.whole("most", low=1, high=MOST_ROWS) or MOST_ROWS,
        over=tuple(scalar.text for scalar in fields.texts("over")),
        gives=_gives(fields, table, problems),
        span=key.span,
    )


def _value_symbol(key: Scalar, fields: Fields, table: dict[str, Symbol], problems: Problems) -> Symbol | None:
    base = table.get(key.text)
    if base is None and not (fields.has("unit") or fields.has("one of") or fields.has("kind")):
        return find_symbol(key.text, key.span, table, problems)
    return read_symbol(key.text, fields, base, problems)


def _gives(fields: Fields, table: dict[str, Symbol], problems: Problems) -> tuple[tuple[Symbol, str], ...]:
    mapping = fields.mapping("gives")
    pairs: list[tuple[Symbol, str]] = []
    for key, value in mapping.entries if mapping else ():
        symbol = find_symbol(key.text, key.span, table, problems)
        if not isinstance(value, Scalar) or value.text not in _BAR_OUTPUTS:
            problems.add("not-a-word", value.span, "a callout gives no such value",
                         expected="one of " + ", ".join(_BAR_OUTPUTS), found="something else")  # fmt: skip
        elif symbol is not None:
            pairs.append((symbol, value.text))
    return tuple(pairs)


def _if_none(fields: Fields, symbol: Symbol | None, problems: Problems) -> Amount | str | None:
    scalar = fields.scalar("if none")
    if scalar is None:
        return None
    if scalar.text == "absent" or symbol is None or symbol.unit is None:
        return scalar.text
    return _bound(scalar.text, scalar, symbol, problems)


def _range(fields: Fields, symbol: Symbol | None, problems: Problems) -> Range | None:
    scalar = fields.scalar("range")
    if scalar is None:
        return None
    if symbol is None or symbol.unit is None:
        problems.add("bad-range", scalar.span, "only a quantity has a range", expected="no range", found=scalar.text)
        return None
    one = _ONE_SIDED.fullmatch(scalar.text.strip())
    if one:
        amount = _bound(one[2], scalar, symbol, problems)
        low = one[1].startswith(">")
        is_open = len(one[1]) == 1
        return Range(amount if low else None, None if low else amount, is_open, is_open, scalar.text, scalar.span)
    both = _INTERVAL.fullmatch(scalar.text.strip())
    if both:
        low_end = _bound(both[2], scalar, symbol, problems)
        high_end = _bound(both[3], scalar, symbol, problems)
        return Range(low_end, high_end, both[1] == "(", both[4] == ")", scalar.text, scalar.span)
    problems.add("bad-range", scalar.span, "this is not a range", expected="'> 0', '[0.5, 1.0]' or '(0, 8 in]'",
                 found=scalar.text[:40])  # fmt: skip
    return None


def _bound(text: str, scalar: Scalar, symbol: Symbol, problems: Problems) -> Amount | None:
    """Read a bound; a bare 0 has every dimension."""
    assert symbol.unit is not None
    if text.strip() == "0":
        return Amount(Fraction(0), symbol.unit, f"0 {symbol.unit.text}")
    return read_amount(text.strip(), scalar.span, problems, symbol.unit.dimension)
