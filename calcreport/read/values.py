"""Given values of a project, typed by the template's declarations.

Nodes in, `GivenValue`, `GivenRows`, `GivenPairs` out. What is missing, unknown, bare or out of range is a
problem; nothing is ever assumed.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from calcreport.core.problems import Problems, nearest
from calcreport.core.quantity import Amount, read_amount
from calcreport.core.source import Span
from calcreport.read.bars import BarTable, read_callout
from calcreport.read.fields import Fields, as_items, as_mapping, as_scalar, say_not_a_word
from calcreport.read.model import Given, GivenPairs, GivenRows, GivenValue, Handed, LinkedValue, ValueOrigin
from calcreport.read.nodes import Mapping, Node, Scalar

_LINK = re.compile(r"([A-Za-z][\w-]*)\.([A-Za-z][\w.\[\]+ -]*)")
FILE = ValueOrigin("project file", "")


@dataclass(frozen=True, slots=True)
class ValueReader:
    """Reads the given values of one calculation."""

    #: (mark of the material, its properties) by role: concrete -> ('C5', {...})
    materials: dict[str, tuple[str, dict[str, Scalar]]]
    bars: BarTable | None
    problems: Problems

    def read(
        self, givens: tuple[Given, ...], node: Mapping, what: str
    ) -> tuple[GivenValue | GivenRows | GivenPairs, ...]:
        """Read every given value the template wants out of the `given` mapping."""
        known = {given.name for given in givens}
        for key, _ in node.entries:
            if key.text not in known:
                self.problems.add(
                    "unknown-given", key.span, f"{what} takes no `{key.text[:40]}`",
                    expected="one of " + ", ".join(sorted(known)), found=key.text[:40],
                    hint=nearest(key.text, known),
                )  # fmt: skip
        found = [self.one(given, node.get(given.name), node.span, what) for given in givens]
        return tuple(value for value in found if value is not None)

    def one(self, given: Given, node: Node | None, at: Span, what: str) -> GivenValue | GivenRows | GivenPairs | None:
        """Read one given value, of whatever kind."""
        if isinstance(node, Scalar) and not node.text and not node.quoted:
            node = None
        if node is None and given.material:
            return self.from_material(given, at, what)
        if node is None:
            unit = f" in {given.symbol.unit.text}" if given.symbol and given.symbol.unit else ""
            words = f": one of {', '.join(given.symbol.words)}" if given.symbol and given.symbol.words else ""
            hint = "it may be `none`" if given.if_none is not None else ""
            self.problems.add(
                "missing-value", at.part(0, 1), f"{what} needs `{given.name}`",
                expected=f"{given.says or given.name}{unit}{words}", found="no value", hint=hint,
            )  # fmt: skip
            return None
        if given.kind == "rows":
            return self.rows(given, node, what)
        if given.kind == "pairs":
            return self.pairs(given, node)
        return self.value(given, node)

    # -------------------------------------------------------- single values

    def value(self, given: Given, node: Node) -> GivenValue | None:
        """Read a value: text, `{value, source}` or `{from: MARK.symbol}`."""
        origin = FILE
        if isinstance(node, Mapping):
            fields = Fields(node, ("value", "source", "from"), f"the value of `{given.name}`", self.problems)
            linked = fields.scalar("from")
            if linked is not None:
                return self.link(given, linked)
            source = fields.text("source")
            origin = ValueOrigin("source", source) if source else FILE
            inner = fields.node_of("value")
            if inner is None:
                fields.say_missing("value")
                return None
            node = inner
        scalar = as_scalar(node, f"`{given.name}`", self.problems)
        if scalar is None:
            return None
        if scalar.text == "none":
            return self.none(given, scalar)
        value = self.typed(given, scalar)
        return None if value is None else GivenValue(given, value, origin, scalar.span)

    def link(self, given: Given, scalar: Scalar) -> GivenValue | None:
        """Read the name of another calculation's line."""
        match = _LINK.fullmatch(scalar.text)
        if match is None or given.kind != "value":
            self.problems.add("not-a-link", scalar.span, f"`{scalar.text[:40]}` names no line of a calculation",
                              expected="mark and symbol, such as FL2.M_u", found=scalar.text[:40])  # fmt: skip
            return None
        value = LinkedValue(match[1], match[2], scalar.span)
        return GivenValue(given, value, ValueOrigin("line", scalar.text), scalar.span)

    def none(self, given: Given, scalar: Scalar) -> GivenValue | None:
        """Take the word `none`, where the template allows it."""
        if given.if_none is None:
            self.problems.add("not-none", scalar.span, f"`{given.name}` may not be none",
                              expected="a value", found="none")  # fmt: skip
            return None
        worth = None if given.if_none == "absent" else given.if_none
        return GivenValue(given, worth, ValueOrigin("none", ""), scalar.span)

    def typed(self, given: Given, scalar: Scalar) -> Handed:
        """Type a text by the declaration; None after adding a problem."""
        if given.kind in ("bars", "spaced bars"):
            if self.bars is None:
                self.problems.add("unknown-bar", scalar.span, "there is no bar table for this unit system",
                                  expected="a bar table beside the template", found="none")  # fmt: skip
                return None
            spaced = given.kind == "spaced bars"
            return read_callout(scalar.text, scalar.span, self.bars, spaced=spaced, problems=self.problems)
        symbol = given.symbol
        assert symbol is not None
        if symbol.kind == "word":
            if scalar.text not in symbol.words:
                say_not_a_word(scalar, symbol.words, f"`{given.name}`", self.problems)
                return None
            return scalar.text
        assert symbol.unit is not None
        amount = read_amount(scalar.text, scalar.span, self.problems, symbol.unit.dimension)
        if amount is not None and symbol.kind == "count" and (amount.value < 0 or amount.value.denominator != 1):
            self.problems.add("not-a-number", scalar.span, f"`{given.name}` is a count",
                              expected="a whole number, 0 or more", found=scalar.text[:40])  # fmt: skip
            return None
        return amount if amount is not None and self.in_range(given, amount, scalar.span) else None

    def in_range(self, given: Given, amount: Amount, span: Span) -> bool:
        """Hold an amount against the declared range."""
        limits = given.range
        if limits is None:
            return True
        low = limits.low is None or amount.value > limits.low.value or (
            amount.value == limits.low.value and not limits.low_open
        )  # fmt: skip
        high = limits.high is None or amount.value < limits.high.value or (
            amount.value == limits.high.value and not limits.high_open
        )  # fmt: skip
        if not (low and high):
            self.problems.add(
                "out-of-range", span, f"`{given.name}` is outside what the template covers",
                expected=f"{given.name} {limits.text}", found=amount.text, related=((limits.span, "the range"),),
            )  # fmt: skip
        return low and high

    def from_material(self, given: Given, at: Span, what: str) -> GivenValue | None:
        """Read a property of the material a calculation names for a role."""
        if given.material not in self.materials:
            self.problems.add(
                "missing-value", at.part(0, 1), f"{what} needs the material `{given.material}` for `{given.name}`",
                expected=f"`{given.material}: MARK` beside `template:`", found="no such key",
            )  # fmt: skip
            return None
        mark, properties = self.materials[given.material]
        scalar = properties.get(given.property)
        if scalar is None:
            self.problems.add(
                "missing-value", at.part(0, 1), f"the material `{mark}` has no `{given.property}`",
                expected=f"{given.says or given.property}", found=", ".join(properties) or "no properties",
                hint=nearest(given.property, properties),
            )  # fmt: skip
            return None
        if scalar.text == "none":
            return self.none(given, scalar)
        value = self.typed(given, scalar)
        return None if value is None else GivenValue(given, value, ValueOrigin("material", mark), scalar.span)

    # -------------------------------------------------------- rows and pairs

    def rows(self, given: Given, node: Node, what: str) -> GivenRows | None:
        """Read a list of rows, each a mapping of the set's columns and an optional `name`."""
        if isinstance(node, Scalar) and node.text == "none" and given.if_none is not None:
            return GivenRows(given, (), (), ValueOrigin("none", ""), node.span)
        items = as_items(node, f"`{given.name}`", self.problems)
        if not given.least <= len(items) <= given.most:
            self.problems.add("row-count", node.span.part(0, 1), f"`{given.name}` has {len(items)} rows",
                              expected=f"{given.least} to {given.most} rows", found=f"{len(items)}")  # fmt: skip
            return None
        names: list[str] = []
        cells: list[tuple[GivenValue, ...]] = []
        for number, item in enumerate(items, 1):
            row = as_mapping(item, f"a row of `{given.name}`", self.problems)
            if row is None:
                continue
            name = row.get("name")
            label = as_scalar(name, "`name`", self.problems) if name is not None else None
            self.row_name(given, label, item.span, names, number)
            values = Mapping(tuple(e for e in row.entries if e[0].text != "name"), row.span)
            found = self.read(given.columns, values, f"a row of `{given.name}`")
            cells.append(tuple(v for v in found if isinstance(v, GivenValue)))
        return GivenRows(given, tuple(names), tuple(cells), FILE, node.span)

    def row_name(self, given: Given, label: Scalar | None, at: Span, names: list[str], number: int) -> None:
        """Keep a row's name, or its number; a name outside the set's list or twice is a problem."""
        name = label.text if label else str(number)
        span = label.span if label else at.part(0, 1)
        if given.row_names and not any(_fits(name, pattern, given.row_names) for pattern in given.row_names):
            self.problems.add("not-a-row", span, f"`{given.name}` has no row named `{name[:40]}`",
                              expected="one of " + ", ".join(given.row_names) + " (* stands for any ending)",
                              found=name[:40], hint=nearest(name, given.row_names))  # fmt: skip
        if name in names or not re.fullmatch(r"[\w][\w .+/-]{0,39}", name):
            self.problems.add("given-twice" if name in names else "not-a-row", span, f"the row name `{name[:40]}` cannot stand",
                              expected="a short name, every name once", found=name[:40])  # fmt: skip
        names.append(name)

    def pairs(self, given: Given, node: Node) -> GivenPairs | None:
        """Read values for pairs of rows: `{C3 foot: {D: 150 kip, L: 90 kip}}`, as deep as there are sets."""
        mapping = as_mapping(node, f"`{given.name}`", self.problems)
        if mapping is None:
            return None
        cells: list[tuple[tuple[str, ...], GivenValue]] = []
        self.pair_level(given, mapping, (), cells)
        return GivenPairs(given, tuple(cells), FILE, node.span)

    def pair_level(
        self, given: Given, node: Mapping, key: tuple[str, ...], cells: list[tuple[tuple[str, ...], GivenValue]]
    ) -> None:
        for name, value in node.entries:
            inner = (*key, name.text)
            if len(inner) == len(given.over):
                found = self.value(given, value)
                if found is not None:
                    cells.append((inner, found))
            else:
                deeper = as_mapping(value, f"`{name.text}` of `{given.name}`", self.problems)
                if deeper is not None:
                    self.pair_level(given, deeper, inner, cells)


def _fits(name: str, pattern: str, listed: tuple[str, ...]) -> bool:
    """Tell whether a name is the listed one, or ends a stem that takes no name listed in full."""
    if pattern.endswith("*"):
        return name.startswith(pattern[:-1]) and name not in listed
    return name == pattern
