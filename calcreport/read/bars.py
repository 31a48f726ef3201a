"""Bar tables and bar callouts: `4#8`, `3-#5`, `4 No. 8`, `2#8 + 1#7`, `#4 @ 12 in`, `2 legs #4 @ 8 in`.

A table file in, sizes out; callout text in, groups of bars out. Sizes themselves are data.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from calcreport.core.problems import Problems, listed
from calcreport.core.quantity import Amount, read_in_unit
from calcreport.core.source import Span
from calcreport.core.units import Unit, make_unit
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import BarCallout, BarGroup
from calcreport.read.nodes import Mapping

_GROUP = re.compile(
    r"(?:([0-9]{1,4})\s*(?:-\s*|legs\s+|x\s*)?)?(#\s*[0-9]+|No\.?\s*[0-9]+[A-Za-z]?|[0-9]+M|[DH][0-9]+)"
)
_SPACED = re.compile(r"(.*?)\s*@\s*(.+)")
_LENGTHS = {"us": "in", "si": "mm"}
MOST_GROUPS = 20


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
        """Return the size a callout names: in an inch-pound table `#8` and `No. 8` are one size.

        `#` never names a metric size: #10 and metric No. 10 are different bars.
        """
        wanted, sign = _number(spelling), spelling.startswith("#")
        fits = (s for s in self.sizes if _number(s.name) == wanted and (s.name.startswith("#") or not sign))
        return next(fits, None)


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
        length = _LENGTHS.get(system, "mm")
        area = _amount(entry, "area", make_unit(((length, 2),)), problems)
        diameter = _amount(entry, "diameter", make_unit(((length, 1),)), problems)
        if name and area and diameter:
            sizes.append(BarSize(name, area, diameter))
    return BarTable(system, source, tuple(sizes)) if system else None


def _amount(fields: Fields, key: str, unit: Unit, problems: Problems) -> Amount | None:
    scalar = fields.scalar(key, required=True)
    return read_in_unit(scalar.text, scalar.span, problems, unit) if scalar else None


def read_callout(text: str, span: Span, table: BarTable, *, spaced: bool, problems: Problems) -> BarCallout | None:
    """Read a callout against a table; adds `not-a-callout` or `unknown-bar`."""
    spacing: Amount | None = None
    bars = text
    at = _SPACED.fullmatch(text)
    if spaced and at is None:
        _say_not(text, span, "bars at a spacing, such as '#4 @ 12 in' or '2 legs #4 @ 8 in'", problems)
        return None
    if spaced and at is not None:
        bars = at[1]
        unit = make_unit(((_LENGTHS[table.system], 1),))
        spacing = read_in_unit(at[2], span.part(at.start(2), at.end(2)), problems, unit)
        if spacing is None:
            return None
        if spacing.value <= 0:
            _say_not(text, span.part(at.start(2), at.end(2)), "a spacing above zero", problems)
            return None
    groups: list[BarGroup] = []
    place = 0
    for piece in bars.split("+"):
        inner = span.part(place + len(piece) - len(piece.lstrip()), place + max(len(piece.rstrip()), 1))
        place += len(piece) + 1
        group = _read_group(piece.strip(), inner, table, problems) if len(groups) < MOST_GROUPS else None
        if group is None:
            if len(groups) >= MOST_GROUPS:
                _say_not(text, span, f"{MOST_GROUPS} kinds of bars at most", problems)
            return None
        groups.append(group)
    return BarCallout(tuple(groups), spacing, " ".join(text.split()))


def _read_group(text: str, span: Span, table: BarTable, problems: Problems) -> BarGroup | None:
    match = _GROUP.fullmatch(text)
    if match is None or (match[1] is not None and int(match[1]) == 0):
        example = "4-#8 or 2#8 + 1#7" if table.system == "us" else "4 No. 25 or 2 No. 25 + 1 No. 22"
        _say_not(text, span, f"a count and a size, such as {example}", problems)
        return None
    size = table.find(match[2])
    if size is None:
        sizes = [s.name for s in table.sizes]
        problems.add(
            "unknown-bar", span.part(match.start(2), match.end(2)), f"`{match[2]}` is not a bar of this table",
            expected=listed(sizes) + f" ({table.source})", found=match[2], hint=problems.near(match[2], sizes),
        )  # fmt: skip
        return None
    return BarGroup(int(match[1] or 1), size.name, size.area, size.diameter)


def _say_not(text: str, span: Span, expected: str, problems: Problems) -> None:
    problems.add("not-a-callout", span, f"`{text[:40]}` is not a bar callout", expected=expected,
                 found=text[:40] or "nothing")  # fmt: skip
