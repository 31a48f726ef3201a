"""A single given value, typed by the template's declaration: a quantity, a word, bars, a link, a material's property.

Text nodes in, `GivenValue` out. What is missing, bare or out of range is a problem; nothing is ever assumed.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TypeAlias

from calcreport.core.expression import Name
from calcreport.core.problems import Problems, listed
from calcreport.core.quantity import Amount, read_in_unit
from calcreport.core.source import Span, TableSource
from calcreport.read.bars import BarTable, read_callout
from calcreport.read.criteria import Criteria
from calcreport.read.fields import Fields, as_scalar, say_not_a_word
from calcreport.read.links import read_at, read_link
from calcreport.read.model import BarCallout, Given, GivenValue, Handed, ValueOrigin
from calcreport.read.nodes import Mapping, Node, Scalar, written

#: mark of a material and its properties, None for one about which a problem was told
Material: TypeAlias = tuple[Scalar, dict[str, Scalar | None]]
VALUE_KEYS = ("value", "source", "from", "at")
#: characters of a symbol in which one letter more or less makes another symbol
_SHORT = 4
FILE = ValueOrigin("project file", "")
NONE = ValueOrigin("none", "")


@dataclass(frozen=True, slots=True)
class SingleReader:
    """Reads single values of one calculation."""

    #: (mark of the material, its properties) by role; None where it could not be read
    materials: dict[str, Material | None]
    bars: BarTable | None
    #: the calculation's own place
    home: Span
    problems: Problems
    #: calculation that a member's mark stands on, for members that share one
    shared: dict[str, str] = field(default_factory=dict)
    #: what the project states for all of it; None for a case beside a template, which gives it like any other value
    criteria: Criteria | None = None

    def value(self, given: Given, node: Node) -> GivenValue | None:
        """Read a value: text, `{value, source}` or `{from: MARK.symbol}`."""
        origin = FILE
        if isinstance(node, Mapping):
            fields = Fields(node, VALUE_KEYS, f"the value of `{given.name}`", self.problems)
            if fields.has("from"):
                linked, at = fields.scalar("from", required=True), read_at(fields)
                return self.link(given, linked, at) if linked else None
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
        origin = origin_at(scalar.span) if origin is FILE else origin
        return None if value is None else GivenValue(given, value, origin, scalar.span)

    def link(self, given: Given, scalar: Scalar, at: tuple[tuple[Name, Name], ...]) -> GivenValue | None:
        """Read the name of another calculation's line."""
        value = read_link(given, scalar, at, self.problems, self.shared)
        return GivenValue(given, value, ValueOrigin("line", scalar.text), scalar.span) if value is not None else None

    def none(self, given: Given, scalar: Scalar) -> GivenValue | None:
        """Take the word `none`, where the template allows it."""
        if not self.may_be_none(given, scalar):
            return None
        worth = None if given.if_none == "absent" else given.if_none
        row = origin_at(scalar.span)
        origin = NONE if row is FILE else ValueOrigin("none", f"schedule {row.words}")
        return GivenValue(given, worth, origin, scalar.span)

    def may_be_none(self, given: Given, scalar: Scalar) -> bool:
        """Hold the word `none` against the declaration; adds `not-none`."""
        if given.if_none is None:
            self.problems.add("not-none", scalar.span, f"`{given.name}` may not be none",
                              expected=wanted(given), found="none")  # fmt: skip
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
                "mixed-bars",
                scalar.span,
                f"`{given.name}` mixes bar sizes, and the template reads one diameter off it",
                expected=f"bars of one size, for {reader}",
                found=" and ".join(sizes),
                hint="where the template takes rows of bars, give each size a row of its own",
            )
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
            near = _misspelt(given.property, self.problems.close(given.property, properties))
            self.problems.add(
                "missing-value", mark.span, f"the material `{mark.text[:40]}` has no `{given.property}`",
                expected=wanted(given) + (f", {given.range.words(given.property)}" if given.range else ""),
                found=", ".join(properties) or "no properties",
                hint=f"write {given.property} for {near[0]}, if that is meant" if near else _added(given, material),
                related=((self.home.part(0, 1), f"{what} needs it"),),
            )  # fmt: skip
            return None
        if scalar.text == "none":
            return self.none(given, scalar)
        value = self.typed(given, scalar)
        return None if value is None else GivenValue(given, value, ValueOrigin("material", mark.text), scalar.span)

    def from_criterion(self, given: Given, key: Scalar | None, what: str) -> GivenValue | None:
        """Read what the project states once for all its calculations; `key` where this one states it too."""
        assert self.criteria is not None and given.criterion is not None
        name, stated = given.criterion.name, self.criteria.stated
        scalar = stated.get(name)
        if key is not None:
            self.problems.add(
                "given-twice", key.span, f"`{given.name}` is a criterion of the whole project",
                expected=f"`{name}` under `criteria:` alone", found=f"a value for {what}",
                related=((scalar.span, "the criterion"),) if scalar is not None else (),
            )  # fmt: skip
            return None
        if name not in stated and self.criteria.span is not None:
            words = f": {listed(given.symbol.words)}" if given.symbol and given.symbol.words else ""
            self.problems.add(
                "missing-value", self.criteria.span.part(0, 1), f"the criteria do not state `{name[:40]}`",
                expected=f"{wanted(given)}{words}", found="no such criterion",
                hint=f"write `{name[:40]}: …` under `criteria:`",
                related=((self.home.part(0, 1), f"{what} needs it"),),
            )  # fmt: skip
        if scalar is None:
            return None
        value = self.typed(given, scalar)
        return None if value is None else GivenValue(given, value, ValueOrigin("criteria", ""), scalar.span)


def origin_at(span: Span) -> ValueOrigin:
    """Return the origin of a value by the file it stands in: the project's, or a row of a schedule."""
    source = span.source
    return ValueOrigin("schedule", source.row_words(span.start)) if isinstance(source, TableSource) else FILE


def _misspelt(name: str, close: list[str]) -> list[str]:
    """Return the spellings that are no symbols of their own: `fc` is a slip for `f_c`, but `w_c` is another symbol."""
    return [one for one in close if len(name) > _SHORT or _letters(one) == _letters(name)]


def _letters(name: str) -> str:
    return "".join(filter(str.isalnum, name)).lower()


def _added(given: Given, material: Material) -> str:
    """Return how a material is written with a property it lacks; what the value is nobody can guess."""
    mark, properties = material
    unit = given.symbol.unit.text if given.symbol and given.symbol.unit else "1"
    kept = [f"{name[:20]}: {written(value.text)[:20]}" for name, value in properties.items() if value is not None]
    entry = f"{given.property}: …" + (f" {unit}" if unit != "1" else "")
    words = "a number without unit" if unit == "1" else "the number"
    none = ", or write none" if given.if_none is not None else ""
    return (
        f"add it to the material, as in {mark.text[:40]}: {{{', '.join([*kept[:3], entry])}}}, where … is {words}{none}"
    )


def wanted(given: Given) -> str:
    """Return what a given is, with a unit it may be written in."""
    unit = given.symbol.unit.text if given.symbol and given.symbol.unit else "1"
    return (given.says or given.name) + (f" ({unit})" if unit != "1" else "")
