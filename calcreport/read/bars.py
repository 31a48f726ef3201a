"""Bar tables and bar callouts: `4#8`, `3-#5`, `4 No. 8`, `2#8 + 1#7`, `#4 @ 12 in`, `2 legs #4 @ 8 in`.

A table file in, sizes out; callout text in, groups of bars out. Sizes themselves are data.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from calcreport.core.problems import Problems, nearest
from calcreport.core.quantity import Amount, read_amount
from calcreport.core.source import Span
from calcreport.core.units import LENGTH, Dimension, multiply
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import BarCallout, BarGroup
from calcreport.read.nodes import Mapping

_AREA = multiply(LENGTH, LENGTH)
_GROUP = re.compile(r"(?:(\d{1,4})\s*(?:-\s*|legs\s+|x\s*)?)?(#\s*\d+|No\.?\s*\d+[A-Za-z]?|\d+M|[DH]\d+)")
_SPACED = re.compile(r"(.*?)\s*@\s*(.+)")


@dataclass(frozen=True, slots=True)
class BarSize:
    """One bar size of a table."""

    name: str
    area: Amount
    diameter: Amount


@dataclass(frozen=True, slots=True)
class BarTable:
    """The sizes of one unit system with the source they are taken from."""

    system: str
    source: str
    sizes: tuple[BarSize, ...]

    def find(self, spelling: str) -> BarSize | None:
        """Return the size a callout names: `#8` and `No. 8` are one size, by number."""
        wanted = _number(spelling)
        return next((size for size in self.sizes if _number(size.name) == wanted), None)


def _number(name: str) -> str:
    return re.sub(r"^(#|No\.?)\s*", "", name.strip())


def read_bar_table(node: Mapping, problems: Problems) -> BarTable | None:
    """Read a bar table file: `bars`, `source`, `sizes: [{name, area, diameter, weight}]`."""
    fields = Fields(node, ("bars", "source", "sizes"), "a bar table", problems)
    system = fields.choice("bars", ("us", "si"), required=True)
    source = fields.text("source", required=True)
    sizes: list[BarSize] = []
    for item in fields.items("sizes", required=True):
        row = as_mapping(item, "a bar size", problems)
        if row is None:
            continue
        entry = Fields(row, ("name", "area", "diameter", "weight", "mass"), "a bar size", problems)
        name = entry.text("name", required=True)
        area = _amount(entry, "area", _AREA, problems)
        diameter = _amount(entry, "diameter", LENGTH, problems)
        if name and area and diameter:
            sizes.append(BarSize(name, area, diameter))
    return BarTable(system, source, tuple(sizes)) if system else None


def _amount(fields: Fields, key: str, dimension: Dimension, problems: Problems) -> Amount | None:
    scalar = fields.scalar(key, required=True)
    return read_amount(scalar.text, scalar.span, problems, dimension) if scalar else None


def read_callout(text: str, span: Span, table: BarTable, *, spaced: bool, problems: Problems) -> BarCallout | None:
    """Read a callout against a table; adds `not-a-callout` or `unknown-bar`."""
    spacing: Amount | None = None
    bars = text
    at = _SPACED.fullmatch(text) if spaced else None
    if spaced:
        if at is None:
            _say_not(text, span, "bars at a spacing, such as '#4 @ 12 in' or '2 legs #4 @ 8 in'", problems)
            return None
        bars = at[1]
        spacing = read_amount(at[2], span.part(at.start(2), at.end(2)), problems, LENGTH)
        if spacing is None:
            return None
        if spacing.value <= 0:
            _say_not(text, span, "a spacing above zero", problems)
            return None
    groups: list[BarGroup] = []
    for piece in bars.split("+"):
        match = _GROUP.fullmatch(piece.strip())
        if match is None or len(groups) > 20 or match[1] == "0":
            _say_not(text, span, "a count and a size, such as 4-#8, 4 No. 25 or 2#8 + 1#7", problems)
            return None
        size = table.find(match[2])
        if size is None:
            sizes = [s.name for s in table.sizes]
            problems.add(
                "unknown-bar", span, f"`{match[2]}` is not a bar of this table",
                expected="one of " + ", ".join(sizes) + f" ({table.source})", found=match[2],
                hint=nearest(match[2], sizes),
            )  # fmt: skip
            return None
        groups.append(BarGroup(int(match[1] or 1), size.name, size.area, size.diameter))
    return BarCallout(tuple(groups), spacing, " ".join(text.split()))


def _say_not(text: str, span: Span, expected: str, problems: Problems) -> None:
    problems.add("not-a-callout", span, f"`{text[:40]}` is not a bar callout", expected=expected,
                 found=text[:40] or "nothing")  # fmt: skip
