"""Given values of a project, typed by the template's declarations.

Nodes in, `GivenValue`, `GivenRows`, `GivenPairs` out. What is missing, unknown, bare or out of range is a
problem; nothing is ever assumed.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TypeAlias

from calcreport.core.problems import Problems, listed
from calcreport.core.quantity import Amount, read_in_unit
from calcreport.core.source import Span
from calcreport.read.bars import BarTable, read_callout
from calcreport.read.fields import Fields, as_items, as_mapping, as_scalar, is_empty, say_not_a_word, say_not_yet
from calcreport.read.model import (
    BarCallout,
    Given,
    GivenPairs,
    GivenRows,
    GivenValue,
    Handed,
    LinkedValue,
    ValueOrigin,
)
from calcreport.read.nodes import Mapping, Node, Scalar, Told

#: mark of a material and its properties, None for one about which a problem was told
Material: TypeAlias = tuple[Scalar, dict[str, Scalar | None]]
_LINK = re.compile(r"([A-Za-z][A-Za-z0-9]*)\.([A-Za-z][\w.\[\]+ /-]*)")
_ROW_NAME = re.compile(r"\w[\w .+/-]{0,39}")
#: ways to give rows that the language has and this version does not read
_ROWS_LATER = ("file", "from", "columns", "where", "at")
FILE = ValueOrigin("project file", "")
NONE = ValueOrigin("none", "")


@dataclass(frozen=True, slots=True)
class ValueReader:
    """Reads the given values of one calculation."""

    #: (mark of the material, its properties) by role: concrete -> ('C5', {...}); None where it could not be read
    materials: dict[str, Material | None]
    bars: BarTable | None
    #: the calculation's own place
    home: Span
    problems: Problems

    def read(
        self, givens: tuple[Given, ...], node: Mapping, what: str
    ) -> tuple[GivenValue | GivenRows | GivenPairs, ...]:
        """Read every given value the template wants out of the `given` mapping."""
        known = {given.name: given for given in givens}
        mistaken: set[str] = set()
        for key, _ in node.entries:
            if key.text not in known:
                self.problems.add(
                    "unknown-given", key.span, f"{what} takes no `{key.text[:40]}`",
                    expected=listed(known), found=key.text[:40], hint=self.problems.near(key.text, known),
                )  # fmt: skip
                mistaken.update(self.problems.close(key.text, known))
        found = [self.one(given, node, what, told=given.name in mistaken) for given in givens]
        return tuple(value for value in found if value is not None)

    def one(
        self, given: Given, node: Mapping, what: str, *, told: bool
    ) -> GivenValue | GivenRows | GivenPairs | None:
        """Read one given value, of whatever kind; `told` where an unknown name seems to mean it."""
        key, value = next(((k, v) for k, v in node.entries if k.text == given.name), (None, None))
        if isinstance(value, Told):
            return None
        if value is None or is_empty(value):
            if given.material and key is None:
                return self.from_material(given, what)
            if not told:
                self.say_missing(given, key.span if key else node.span.part(0, 1), what)
            return None
        if given.kind == "rows":
            return self.rows(given, value)
        if given.kind == "pairs":
            return self.pairs(given, value)
        return self.value(given, value)

    def say_missing(self, given: Given, at: Span, what: str) -> None:
        """Add `missing-value`."""
        words = f": {listed(given.symbol.words)}" if given.symbol and given.symbol.words else ""
        self.problems.add(
            "missing-value", at, f"{what} needs `{given.name}`",
            expected=f"{_wanted(given)}{words}", found="no value",
            hint="it may be `none`" if given.if_none is not None else "",
        )  # fmt: skip

    # -------------------------------------------------------- single values

    def value(self, given: Given, node: Node) -> GivenValue | None:
        """Read a value: text, `{value, source}` or `{from: MARK.symbol}`."""
        origin = FILE
        if isinstance(node, Mapping):
            fields = Fields(node, ("value", "source", "from"), f"the value of `{given.name}`", self.problems, ("at",))
            if fields.has("from"):
                linked = fields.scalar("from", required=True)
                return self.link(given, linked) if linked else None
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
        if scalar.text == "none" and not (given.symbol and "none" in given.symbol.words):
            return self.none(given, scalar)
        value = self.typed(given, scalar)
        return None if value is None else GivenValue(given, value, origin, scalar.span)

    def link(self, given: Given, scalar: Scalar) -> GivenValue | None:
        """Read the name of another calculation's line."""
        match = _LINK.fullmatch(scalar.text)
        if match is None or given.kind not in ("value", "pairs"):
            bars = given.kind in ("bars", "spaced bars")
            self.problems.add("not-a-link", scalar.span, f"`{scalar.text[:40]}` cannot be linked here",
                              expected="bars written out" if bars else "mark and symbol, such as FL2.M_u",
                              found="a link" if bars else scalar.text[:40] or "nothing")  # fmt: skip
            return None
        value = LinkedValue(match[1], match[2], scalar.span)
        return GivenValue(given, value, ValueOrigin("line", scalar.text), scalar.span)

    def none(self, given: Given, scalar: Scalar) -> GivenValue | None:
        """Take the word `none`, where the template allows it."""
        if not self.may_be_none(given, scalar):
            return None
        worth = None if given.if_none == "absent" else given.if_none
        return GivenValue(given, worth, NONE, scalar.span)

    def may_be_none(self, given: Given, scalar: Scalar) -> bool:
        """Hold the word `none` against the declaration; adds `not-none`."""
        if given.if_none is None:
            self.problems.add("not-none", scalar.span, f"`{given.name}` may not be none",
                              expected=_wanted(given), found="none")  # fmt: skip
        return given.if_none is not None

    def typed(self, given: Given, scalar: Scalar) -> Handed:
        """Type a text by the declaration; None after adding a problem."""
        if given.kind in ("bars", "spaced bars"):
            return self.callout(given, scalar)
        symbol = given.symbol
        assert symbol is not None
        if symbol.kind == "word":
            if scalar.text not in symbol.words:
                say_not_a_word(scalar, symbol.words, f"`{given.name}`", self.problems)
                return None
            return scalar.text
        assert symbol.unit is not None
        amount = read_in_unit(scalar.text, scalar.span, self.problems, symbol.unit)
        if amount is not None and symbol.kind == "count" and (amount.value < 0 or amount.value.denominator != 1):
            self.problems.add("not-a-number", scalar.span, f"`{given.name}` is a count",
                              expected="a whole number, 0 or more", found=scalar.text[:40])  # fmt: skip
            return None
        return amount if amount is not None and self.in_range(given, amount, scalar.span) else None

    def callout(self, given: Given, scalar: Scalar) -> BarCallout | None:
        """Read bars; bars of two sizes have no one diameter."""
        if self.bars is None:
            self.problems.add("unknown-bar", scalar.span, "there is no bar table for this unit system",
                              expected="bars-us.yaml or bars-si.yaml beside the template", found="none")  # fmt: skip
            return None
        spaced = given.kind == "spaced bars"
        found = read_callout(scalar.text, scalar.span, self.bars, spaced=spaced, problems=self.problems)
        sizes = {group.size: None for group in found.groups} if found else {}
        reader = next((symbol.name for symbol, output in given.gives if output == "diameter"), "")
        if reader and len(sizes) > 1:
            self.problems.add(
                "mixed-bars", scalar.span, f"`{given.name}` mixes bar sizes, and the template reads one diameter off it",
                expected=f"bars of one size, for {reader}", found=" and ".join(sizes),
                hint="where the template takes rows of bars, give each size a row of its own",
            )  # fmt: skip
            return None
        return found

    def in_range(self, given: Given, amount: Amount, span: Span) -> bool:
        """Hold an amount against the declared range."""
        limits = given.range
        if limits is None or limits.holds(amount.value):
            return True
        self.problems.add(
            "out-of-range", span, f"`{given.name}` is outside what the template covers",
            expected=limits.words(given.name), found=amount.text,
            related=((limits.span, "the template states the range"),),
        )  # fmt: skip
        return False

    def from_material(self, given: Given, what: str) -> GivenValue | None:
        """Read a property of the material a calculation names for a role."""
        if given.material not in self.materials:
            self.problems.add(
                "missing-value", self.home.part(0, 1), f"{what} needs the material `{given.material}`",
                expected=f"`{given.material}: MARK` beside `template:`", found="no such key",
            )  # fmt: skip
            return None
        material = self.materials[given.material]
        if material is None:
            return None
        mark, properties = material
        scalar = properties.get(given.property)
        if given.property in properties and scalar is None:
            return None
        if scalar is None:
            near = self.problems.close(given.property, properties)
            self.problems.add(
                "missing-value", mark.span, f"the material `{mark.text[:40]}` has no `{given.property}`",
                expected=_wanted(given), found=", ".join(properties) or "no properties",
                hint=f"write {given.property} for {near[0]}, if that is meant" if near else "",
                related=((self.home.part(0, 1), f"{what} needs it"),),
            )  # fmt: skip
            return None
        if scalar.text == "none":
            return self.none(given, scalar)
        value = self.typed(given, scalar)
        return None if value is None else GivenValue(given, value, ValueOrigin("material", mark.text), scalar.span)

    # -------------------------------------------------------- rows and pairs

    def rows(self, given: Given, node: Node) -> GivenRows | None:
        """Read a list of rows, each a mapping of the set's columns and an optional `name`."""
        if isinstance(node, Scalar) and node.text == "none":
            return GivenRows(given, (), (), NONE, node.span) if self.may_be_none(given, node) else None
        later = [key for key, _ in node.entries if key.text in _ROWS_LATER] if isinstance(node, Mapping) else []
        if later:
            say_not_yet(later[0], self.problems)
            return None
        before = self.problems.met
        items = as_items(node, f"`{given.name}`", self.problems)
        if self.problems.met > before:
            return None
        if not given.least <= len(items) <= given.most:
            most = "" if given.most >= 1000 else f" to {given.most}"
            wanted = f"{given.least}{most} rows" if most else f"{given.least} or more rows"
            self.problems.add("row-count", node.span.part(0, 1), f"`{given.name}` has {len(items)} rows",
                              expected=wanted, found=f"{len(items)}")  # fmt: skip
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
        if given.row_names and not any(fits(name, pattern, given.row_names) for pattern in given.row_names):
            self.problems.add("not-a-row", span, f"`{given.name}` has no row named `{name[:40]}`",
                              expected=listed(given.row_names) + (" (* stands for any ending)" if "*" in "".join(given.row_names) else ""),
                              found=name[:40], hint=self.problems.near(name, given.row_names))  # fmt: skip
        elif not _ROW_NAME.fullmatch(name):
            self.problems.add("not-a-row", span, f"`{name[:40]}` cannot be a row name",
                              expected="up to 40 letters, digits, spaces and . + - /", found=name[:40] or "nothing")  # fmt: skip
        elif name in names:
            self.problems.add("given-twice", span, f"the row `{name}` of `{given.name}` stands twice",
                              expected="every name once", found=name)  # fmt: skip
        names.append(name)

    def pairs(self, given: Given, node: Node) -> GivenPairs | None:
        """Read values for pairs of rows: `{C3 foot: {D: 150 kip, L: 90 kip}}`, as deep as there are sets."""
        if isinstance(node, Scalar) and node.text == "none":
            return GivenPairs(given, (), NONE, node.span) if self.may_be_none(given, node) else None
        if isinstance(node, Mapping) and node.get("file") is not None:
            say_not_yet(node.entries[0][0], self.problems)
            return None
        mapping = as_mapping(node, f"`{given.name}`", self.problems)
        if mapping is None:
            return None
        cells: list[tuple[tuple[str, ...], GivenValue]] = []
        self.pair_level(given, mapping, (), cells)
        return GivenPairs(given, tuple(cells), FILE, node.span)

    def pair_level(
        self, given: Given, node: Mapping, key: tuple[str, ...], cells: list[tuple[tuple[str, ...], GivenValue]]
    ) -> None:
        """Read one level of pairs."""
        for name, value in node.entries:
            inner = (*key, name.text)
            if len(inner) == len(given.over):
                found = self.value(given, value)
                if found is not None:
                    cells.append((inner, found))
            else:
                deeper = as_mapping(value, f"`{name.text[:40]}` of `{given.name}`", self.problems)
                if deeper is not None:
                    self.pair_level(given, deeper, inner, cells)


def is_complete(values: tuple[GivenValue | GivenRows | GivenPairs, ...], givens: tuple[Given, ...]) -> bool:
    """Tell whether every given value was read, and every cell of its rows."""
    rows = [value for value in values if isinstance(value, GivenRows)]
    whole = all(len(cells) == len(value.given.columns) for value in rows for cells in value.cells)
    return whole and len(values) == len(givens) and all(len(r.names) == len(r.cells) for r in rows)


def _wanted(given: Given) -> str:
    """Return what a given is, with a unit it may be written in."""
    unit = given.symbol.unit.text if given.symbol and given.symbol.unit else "1"
    return (given.says or given.name) + (f" ({unit})" if unit != "1" else "")


def fits(name: str, pattern: str, row_names: tuple[str, ...]) -> bool:
    """Tell whether a name is the listed one, or ends a stem that takes no name listed in full."""
    if pattern.endswith("*"):
        return name.startswith(pattern[:-1]) and name not in row_names
    return name == pattern


