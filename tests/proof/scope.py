"""What symbols are worth on the sheets of a calculation, with rows of sets open.

In: a `Calculation`. Out: `Scope`, the ground on which expressions and conditions are worked. Knows what is printed.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal

from .arithmetic import Unknown, Value, with_unit
from .calculations import Calculation, Rows
from .conditions import judge
from .letters import Token
from .units import Printed

_TERM = re.compile(r"([+−-])?\s*([\d.,]+) (\S+)")


@dataclass(frozen=True, slots=True)
class Scope:
    """What symbols are worth on the sheets of a calculation, with rows of sets open."""

    calculation: Calculation
    open: Rows = ()

    def value(self, name: str) -> Value:
        """Return what a symbol is printed as, in base units."""
        factor = self._factor(name)
        if factor is not None:
            return Value(factor)
        printed = self.printed(name)
        if printed is None:
            raise Unknown(name)
        return with_unit(printed)

    def printed(self, name: str) -> Printed | None:
        """Return the printed form of a symbol, that of the open rows first."""
        keys = self.calculation.keys.get(name, [])
        opened = set(dict(self.open).items())
        fitting = [key for key in keys if key.rows <= opened]
        if fitting:
            return self.calculation.forms[max(fitting, key=lambda key: len(key.rows))][0][0]
        here = dict(self.open)
        alike = [key for key in keys if all(here.get(set_name, row) == row for set_name, row in key.rows)]
        if len(alike) == 1:
            return self.calculation.forms[alike[0]][0][0]
        return self._of_row(name)

    def _of_row(self, name: str) -> Printed | None:
        """Return the value of a symbol that names its row: d_b,first, n_first."""
        for mark in ",_":
            base, _, row = name.rpartition(mark)
            opened = set(dict(self.open).items())
            for key in self.calculation.keys.get(base, []):
                if row in {row_name for _, row_name in key.rows} and len(key.rows - opened) == 1:
                    return self.calculation.forms[key][0][0]
        return None

    def word(self, name: str) -> str | None:
        """Return the word a symbol or an open set stands for; a number where it has one."""
        opened = dict(self.open)
        if name in opened:
            return opened[name]
        words = self.calculation.words.get(name)
        if words:
            return words[0][0]
        printed = self.printed(name)
        return str(printed) if printed is not None else None

    def rows(self, name: str, where: tuple[Token, ...]) -> Sequence[Scope]:
        """Return the scope of every row of a set that meets a condition."""
        rows = self.calculation.set_rows().get(name)
        if rows is None:
            raise Unknown(f"the rows of {name}")
        rows = [row for row in rows if self._has(name, row)]
        scopes = [Scope(self.calculation, (*self.open, (name, row))) for row in rows]
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
