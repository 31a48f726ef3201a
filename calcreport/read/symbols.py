"""Symbol tables: the notation of a folder, of one template, and of a line's own keys, in that order.

Mapping nodes in, `Symbol` records out.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.core.problems import Problems, nearest
from calcreport.core.source import Span
from calcreport.core.units import ONE, Unit, read_unit
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import Symbol
from calcreport.read.nodes import Mapping

KEYS = ("unit", "one of", "kind", "says", "shows", "places", "only")
#: a yes/no value is a word with this list
YES_NO = ("yes", "no")


def read_symbols(node: Mapping, problems: Problems) -> dict[str, Symbol]:
    """Read a mapping of symbol entries."""
    table: dict[str, Symbol] = {}
    for key, value in node.entries:
        entry = as_mapping(value, f"the symbol `{key.text}`", problems)
        if entry is None:
            continue
        fields = Fields(entry, KEYS, f"the symbol `{key.text}`", problems)
        symbol = read_symbol(key.text, fields, None, problems)
        if symbol is not None:
            if not symbol.says:
                fields.say_missing("says")
            table[key.text] = symbol
    return table


def read_symbol(name: str, fields: Fields, base: Symbol | None, problems: Problems) -> Symbol | None:
    """Read symbol keys out of an entry, on top of `base`; None where no unit or list is known."""
    says = fields.text("says") or (base.says if base else "")
    shows = fields.text("shows") or (base.shows if base else "")
    places = fields.whole("places", low=0, high=8)
    if places is None and base:
        places = base.places
    words = tuple(scalar.text for scalar in fields.texts("one of"))
    unit = _unit(fields, problems)
    count = fields.choice("kind", ("count", "yes/no", "quantity")) if fields.has("kind") else ""
    if count == "yes/no":
        words = YES_NO
    if words:
        return Symbol(name, shows, says, "word", None, words, None)
    if count == "count":
        return Symbol(name, shows, says, "count", ONE, (), 0)
    if unit is not None:
        return Symbol(name, shows, says, "quantity", unit, (), places)
    if base is not None:
        return replace(base, says=says, shows=shows, places=places)
    if fields.node_of("unit") is None:
        fields.say_missing("unit")
    return None


def find_symbol(name: str, span: Span, table: dict[str, Symbol], problems: Problems) -> Symbol | None:
    """Return a symbol of the table, or add `unknown-name`."""
    symbol = table.get(name)
    if symbol is None:
        problems.add(
            "unknown-name", span, f"`{name[:40]}` has no entry among the symbols",
            expected="a symbol with its meaning and unit", found=name[:40],
            hint=nearest(name, table) or "add it under `symbols:` with `says` and `unit`",
        )  # fmt: skip
    return symbol


def _unit(fields: Fields, problems: Problems) -> Unit | None:
    scalar = fields.scalar("unit")
    return None if scalar is None else read_unit(scalar.text, scalar.span, problems)
