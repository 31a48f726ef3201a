"""What symbols are worth on the sheets of a calculation, with rows of sets open.

In: a `Calculation`, and the line whose formula is worked. Out: `Scope`, the ground on which expressions and conditions
are worked. Knows what is printed. Parts of a calculation use one symbol each in its own sense: the line numbers in the
source lane say which is meant, else what was printed last.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from decimal import Decimal

from .arithmetic import Drawn, Unknown, Value, valued, with_unit
from .calculations import Calculation, Key, Place, Rows
from .conditions import judge
from .equations import symbol_of
from .expressions import parse, split
from .letters import Token
from .source_lane import source_numbers
from .statements import NumberedLine
from .units import Printed

_TERM = re.compile(r"([+−-])?\s*([\d.,]+) (.+?)(?=\s+[+−-]\s|$)")


@dataclass(frozen=True, slots=True)
class Scope:
    """What symbols are worth on the sheets of a calculation, with rows of sets open."""

    calculation: Calculation
    open: Rows = ()
    #: the line worked, and those it names; 0 where it is none
    line: int = 0
    named: frozenset[int] = field(default=frozenset())
    #: symbols followed to their formula
    followed: frozenset[str] = field(default=frozenset())
    #: the line of the table whose cells are worked; 0 for none
    beside: int = 0

    def value(self, name: str) -> Value:
        """Return what a symbol is printed as, in base units."""
        factor = self._factor(name)
        if factor is not None:
            return Value(factor)
        printed = self.printed(name)
        if printed is not None:
            return with_unit(printed)
        if self.word(name) == "none":
            return Value(Decimal(0))
        return self._by_formula(name)

    def root(self, name: str) -> Value:
        """Return what the root of a symbol is printed as, unless this line gives it or names the symbol instead."""
        found = [(key, at) for key, _, at in self._fitting("√" + name) if at.line != self.line]
        own = [at.line for _, _, at in self._fitting(name)]
        if not found or (self.line and not {at.line for _, at in found} & self.named and set(own) & self.named):
            raise Unknown("√" + name)
        return self.value("√" + name)

    def printed(self, name: str) -> Printed | None:
        """Return the printed form of a symbol, that of the open rows first, then that of the lines named."""
        found = self._fitting(name)
        if not found:
            # a set of one row is told without a heading: the line named says which
            told = {(form, place.line) for key in self.calculation.keys.get(name, [])
                    for form, place in self.calculation.forms[key] if place.line in self.named}  # fmt: skip
            if len(told) == 1:
                return next(iter(told))[0]
            here = dict(self.open)
            keys = self.calculation.keys.get(name, [])
            alike = [key for key in keys if all(here.get(set_name, row) == row for set_name, row in key.rows)]
            return self.calculation.forms[alike[0]][0][0] if len(alike) == 1 else self._of_row(name)
        cells = [one for one in found if one[2].line == self.beside and one[2].kind == "table"]
        found = cells or [one for one in found if one[2].line in self.named and one[2].line != self.line] or found
        deep = max(len(key.rows) for key, _, _ in found)
        found = [one for one in found if len(one[0].rows) == deep]
        before = [one for one in found if 0 < one[2].line < self.line]
        return (before or found[:1])[-1][1]

    def _fitting(self, name: str) -> list[tuple[Key, Printed, Place]]:
        """Return every printed form of a symbol that holds with the open rows."""
        opened = set(dict(self.open).items())
        keys = [key for key in self.calculation.keys.get(name, []) if key.rows <= opened]
        found = [(key, printed, place) for key in keys for printed, place in self.calculation.forms[key]]
        return sorted(found, key=lambda one: one[2].line)

    def _of_row(self, name: str) -> Printed | None:
        """Return the value of a symbol that names its row: d_b,first, n_first."""
        for mark in ",_":
            base, _, row = name.rpartition(mark)
            opened = set(dict(self.open).items())
            for key in self.calculation.keys.get(base, []):
                if row in {row_name for _, row_name in key.rows} and len(key.rows - opened) == 1:
                    return self.calculation.forms[key][0][0]
        return None

    def _by_formula(self, name: str) -> Value:
        """Work a symbol that no table prints by its formula for all rows; a station that is drawn has no number."""
        for line in self.calculation.lines:
            for statement in line.statements if name not in self.followed else ():
                parts, marks = split(statement.tokens, "relation")
                if statement.kind == "formula" and marks == ["="] and symbol_of(parts[0]) == name:
                    inner = within(replace(self, followed=self.followed | {name}), line)
                    if not statement.condition or judge(statement.condition, inner):
                        return valued(parse(parts[1]), inner)
        if self.calculation.drawn(name):
            raise Drawn(name)
        raise Unknown(name)

    def word(self, name: str) -> str | None:
        """Return the word a symbol or an open set stands for; a number where it has one."""
        opened = dict(self.open)
        pairs = set(opened.items())
        rows = [(len(rows), word) for rows, word in self.calculation.row_words.get(name, []) if rows <= pairs]
        if rows:
            return max(rows, key=lambda one: one[0])[1]
        words = self.calculation.words.get(name)
        if words:
            named = [word for word, place in words if place.line in self.named]
            before = [word for word, place in words if place.line < self.line]
            return (named or before[-1:] or [words[0][0]])[0]
        if name in opened:
            return opened[name]
        printed = self.printed(name)
        return str(printed) if printed is not None else None

    def rows(self, name: str, where: tuple[Token, ...]) -> Sequence[Scope]:
        """Return the scope of every row of a set that meets a condition."""
        rows = self.calculation.set_rows().get(name)
        if rows is None:
            if not self.calculation.empty_sets():
                raise Unknown(f"the rows of {name}")
            rows = []
        rows = [row for row in rows if self._has(name, row)]
        scopes = [replace(self, open=(*self.open, (name, row))) for row in rows]
        return [scope for scope in scopes if not where or judge(list(where), scope)]

    def _has(self, name: str, row: str) -> bool:
        """Tell whether the open member has this row of a set that members have for themselves."""
        inner = [here for here in self.calculation.tables if here.inner == name]
        member = dict(self.open).get("member")
        return not inner or member is None or any([member, row] == cells[:2] for h in inner for cells in h.table.rows)

    def factors(self, name: str) -> list[str]:
        """Return every load factor printed in the column of a symbol."""
        tables = [here.table for here in self.calculation.tables if here.table.column(name) is not None]
        return [term[1] for t in tables for row in t.rows for term in _TERM.findall(row[t.column(name) or 0])]

    def _factor(self, name: str) -> Decimal | None:
        """Return a load factor: its cell is a sum of factors and rows, 1.2 D + 1.6 L."""
        opened = dict(self.open)
        for here in self.calculation.tables:
            place = here.table.column(name)
            if place is None or here.table.set_name not in opened or here.table.columns[place].unit != "(factors)":
                continue
            for row in here.table.rows:
                if row[0] == opened[here.table.set_name]:
                    found = {
                        load: Decimal(f"{'-' if sign in ('−', '-') else ''}{size}")
                        for sign, size, load in _TERM.findall(row[place])
                    }
                    inner = [row_name for set_name, row_name in self.open if set_name != here.table.set_name]
                    return next((found[load] for load in inner if load in found), Decimal(0))
        return None


def within(scope: Scope, line: NumberedLine) -> Scope:
    """Return a scope as a line sees it: with the lines that its source lane names."""
    return replace(scope, line=line.number, named=frozenset(source_numbers(line)))
