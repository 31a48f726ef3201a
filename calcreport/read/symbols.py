"""Symbol tables: the notation of a folder, of one template, and of a line's own keys, in that order.

Mapping nodes in, `Symbol` records out.
"""

from __future__ import annotations

import re
from dataclasses import replace
from fractions import Fraction
from typing import TypeAlias

from calcreport.core.expression import FUNCTIONS, OVER_FUNCTIONS
from calcreport.core.problems import Problems
from calcreport.core.shows import ACCENTS, read_shown
from calcreport.core.source import Span
from calcreport.core.tokens import KEYWORDS
from calcreport.core.units import LENGTH, ONE, Unit, dimension_words, read_unit
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import Symbol
from calcreport.read.nodes import Mapping, Scalar

#: keys that tell of a symbol, at its own entry or on the line that gives it
OWN_KEYS = ("unit", "one of", "kind", "says", "shows", "places", "feet and inches")
KEYS = (*OWN_KEYS, "only")
#: a yes/no value is a word with this list
YES_NO = ("yes", "no")
#: parts of an inch that feet and inches may be rounded to
INCHES = {"1 in": Fraction(1), **{f"1/{n} in": Fraction(1, n) for n in (2, 4, 8, 16, 32)}}
KINDS = ("count", "yes/no", "quantity")
NAME = re.compile(r"[A-Za-z][A-Za-z0-9_]{0,39}")
_TAKEN = KEYWORDS | FUNCTIONS.keys() | OVER_FUNCTIONS | {"num", "qty"}


#: symbols by name; None for an entry about which a problem was told
Table: TypeAlias = dict[str, Symbol | None]


def read_symbols(node: Mapping, problems: Problems) -> Table:
    """Read a mapping of symbol entries."""
    table: Table = {}
    for key, value in node.entries:
        entry = as_mapping(value, f"the symbol `{key.text[:40]}`", problems)
        named = hold_name(key, problems)
        fields = Fields(entry, KEYS, f"the symbol `{key.text}`", problems) if entry and named else None
        table[key.text] = read_symbol(key, fields, None, problems) if fields else None
    return table


def hold_name(scalar: Scalar, problems: Problems) -> bool:
    """Hold a name of a symbol, set or stem against the grammar of formulas; adds `bad-name`."""
    name = scalar.text
    if NAME.fullmatch(name) and name not in _TAKEN:
        return True
    problems.add(
        "bad-name",
        scalar.span,
        f"`{name[:40]}` cannot be a name",
        expected="a letter, then letters, digits and _",
        found="a word of the formula language" if name in _TAKEN else name[:40] or "nothing",
        hint="write it in ASCII, and give its printed form under `shows`"
        if name not in _TAKEN
        else "take another name",
    )
    return False


def read_symbol(key: Scalar, fields: Fields, base: Symbol | None, problems: Problems) -> Symbol | None:
    """Read symbol keys out of an entry, on top of `base`; adds `no-unit` where neither unit nor words are known."""
    name = key.text
    says = fields.text("says") or (base.says if base else "")
    shows = _shows(fields, problems) or (base.shows if base else "")
    places = fields.whole("places", low=0, high=8)
    if places is None and base:
        places = base.places
    words = tuple(scalar.text for scalar in fields.texts("one of"))
    unit = _unit(fields, problems)
    kind = fields.choice("kind", KINDS)
    if not says and base is None and not fields.has("says"):
        fields.say_missing("says")
    if kind == "yes/no":
        words = YES_NO
    if words:
        return Symbol(name, shows, says, "word", None, words, None)
    if kind == "count":
        return Symbol(name, shows, says, "count", ONE, (), 0)
    if unit is not None:
        return Symbol(name, shows, says, "quantity", unit, (), places, _inches(fields, unit, base, problems))
    if base is not None:
        inches = _inches(fields, base.unit, base, problems)
        return replace(base, says=says, shows=shows, places=places, inches=inches)
    if not any(fields.node_of(told) or told in fields.mistaken for told in ("unit", "one of", "kind")):
        problems.add(
            "no-unit",
            key.span,
            f"`{name}` has no unit",
            expected="`unit: …`, `one of: […]`, or `kind: count` or yes/no",
            found="none of them",
            hint="a pure number says so: unit: '1'",
        )
    return None


def find_symbol(name: str, span: Span, table: Table, problems: Problems) -> Symbol | None:
    """Return a symbol of the table, or add `unknown-name`."""
    symbol = table.get(name)
    if name not in table:
        problems.add(
            "unknown-name", span, f"`{name[:40]}` has no entry among the symbols",
            expected="a symbol with its meaning and unit", found=name[:40],
            hint=problems.near(name, table) or "add it under `symbols:` with `says` and `unit`",
        )  # fmt: skip
    return symbol


def _shows(fields: Fields, problems: Problems) -> str:
    """Return the display of a symbol, or ''; adds `bad-shows`."""
    scalar = fields.scalar("shows")
    if scalar is None or not scalar.text or read_shown(scalar.text) is not None:
        return scalar.text if scalar else ""
    problems.add(
        "bad-shows",
        scalar.span,
        f"`{scalar.text[:40]}` cannot be printed as a symbol",
        expected="a letter or a word, with its mark, primes and one subscript",
        found=scalar.text[:40],
        hint=f"such as f_c', A_{{s,min}}, phiM_n or bar(y)_t; marks are {', '.join(ACCENTS)}",
    )
    return ""


def _inches(fields: Fields, unit: Unit | None, base: Symbol | None, problems: Problems) -> Fraction | None:
    """Return the part of an inch that feet and inches are rounded to, or None; only a length has them."""
    text = fields.choice("feet and inches", tuple(INCHES))
    if not text:
        return base.inches if base and not fields.has("feet and inches") else None
    if unit is None or unit.dimension != LENGTH:
        scalar = fields.scalar("feet and inches")
        assert scalar is not None
        problems.add(
            "unit-mismatch", scalar.span, "only a length has feet and inches",
            expected="a symbol in ft, in or another unit of length",
            found=dimension_words(unit.dimension) if unit else "a word",
        )  # fmt: skip
        return None
    return INCHES[text]


def _unit(fields: Fields, problems: Problems) -> Unit | None:
    scalar = fields.scalar("unit")
    return None if scalar is None else read_unit(scalar.text, scalar.span, problems)
