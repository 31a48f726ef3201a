"""Formulas, conditions and symbols as the lines of one template file hold them.

Nodes in, expression trees and `Symbol` records out; every mistake is a problem.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from calcreport.core.expression import Condition, Expression, IsGiven, Logic, Name
from calcreport.core.grammar import read_condition, read_formula
from calcreport.core.problems import Problems
from calcreport.read.fields import Fields, as_scalar
from calcreport.read.model import Symbol
from calcreport.read.nodes import Mapping, Node, Scalar
from calcreport.read.symbols import OWN_KEYS, Table, find_symbol, hold_name, read_symbol

_GIVEN = re.compile(r"\bgiven\(\s*([A-Za-z]\w*)\s*\)")


@dataclass(frozen=True, slots=True)
class FormulaReader:
    """Reads what stands inside lines of one file, for one system and year."""

    table: Table
    #: which argument `by_units` takes
    place: int
    problems: Problems

    def formula(self, node: Node | None) -> Expression | None:
        """Parse a formula from a text node."""
        scalar = as_scalar(node, "a formula", self.problems) if node is not None else None
        return read_formula(scalar.text, scalar.span, self.problems, self.place) if scalar else None

    def condition(self, node: Node | None) -> Condition | None:
        """Parse a condition from a text node."""
        scalar = as_scalar(node, "a condition", self.problems) if node is not None else None
        return read_condition(scalar.text, scalar.span, self.problems, self.place) if scalar else None

    def case(self, node: Node | None) -> Condition | None:
        """Parse the condition of a case; of one that cannot be read, what it asks by `given(x)` is kept."""
        found = self.condition(node)
        if found is None and isinstance(node, Scalar):
            for match in _GIVEN.finditer(node.text):
                span = node.span.part(match.start(), match.end())
                one = IsGiven(Name(match[1], node.span.part(match.start(1), match.end(1))), span)
                found = one if found is None else Logic("and", found, one, node.span)
        return found

    def symbol(self, name: Scalar, fields: Fields) -> Symbol | None:
        """Return the symbol a line or column gives: the notation's, with what the line says of its own."""
        if not hold_name(name, self.problems):
            return None
        base = self.table.get(name.text)
        told = name.text in self.table and base is None
        if told or (base is None and not any(fields.has(key) for key in ("unit", "one of", "kind", "says"))):
            if base is None and fields.mistaken & {"unit", "one of", "kind", "says"}:
                return None
            return find_symbol(name.text, name.span, self.table, self.problems)
        own = Mapping(tuple(entry for entry in fields.node.entries if entry[0].text in OWN_KEYS), fields.span)
        entry = Fields(own, OWN_KEYS, f"`{name.text}`", self.problems)
        entry.mistaken |= fields.mistaken
        return read_symbol(name, entry, base, self.problems)

    def equation(self, fields: Fields, key: str, *, required: bool = False) -> tuple[Expression, Expression] | None:
        """Parse `left = right` under a key; adds `no-equation`."""
        scalar = fields.scalar(key, required=required)
        if scalar is None:
            return None
        left, sign, right = scalar.text.partition("=")
        if not sign or right.startswith("=") or left[-1:] in ("<", ">", "!"):
            self.problems.add("no-equation", scalar.span, f"`{key}` is not an equation", expected="left = right",
                              found=scalar.text[:60] or "nothing")  # fmt: skip
            return None
        at = len(left) + 1
        one = read_formula(left, scalar.span.part(0, len(left)), self.problems, self.place)
        other = read_formula(right, scalar.span.part(at, len(scalar.text)), self.problems, self.place)
        return (one, other) if one is not None and other is not None else None
