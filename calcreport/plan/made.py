"""Sets made in a template: rows, columns and pairings bound, the row names known where they are.

A `Rows` line in, `PlannedRows` out. A factor for a row that no set can have is a problem, never passed over.
"""

from __future__ import annotations

import re
from fractions import Fraction

from calcreport.core.expression import Binary, Expression, Name, Number
from calcreport.core.problems import listed
from calcreport.plan.model import PlannedColumn, PlannedEntry, PlannedRows, RowSet
from calcreport.plan.names import Names
from calcreport.plan.space import Context, Maker, Space
from calcreport.read.model import Entry, MadeColumn, Rows

_VARIABLE = re.compile(r"\{([^{}]*)\}|[{}]")


def plan_rows(line: Rows, names: Names, maker: Maker, space: Space, at: Context) -> PlannedRows:
    """Bind a set made here."""
    planner = _RowsPlanner(line, names, space, at)
    overs = tuple(names.set_named(c.over.name, c.over.span, space) if c.over else -1 for c in line.columns)
    bounds = planner.bounds()
    entries = planner.points(bounds) if bounds else tuple(planner.entry(entry, overs) for entry in line.entries)
    rows = maker.row_set(line.name, space, at.open, planner.row_names(), line.span)
    columns = []
    for column, over in zip(line.columns, overs, strict=True):
        sets = (*at.open, rows.index) + ((over,) if column.over else ())
        other = None if column.other is None else names.value(column.other, column.symbol, space, at)
        slot = maker.slot(column.symbol, space, sets, column.span)
        columns.append(PlannedColumn(slot.index, over, other))
    return PlannedRows(rows.index, tuple(columns), entries, line.says, line.cite, line.span, bounds)


class _RowsPlanner:
    def __init__(self, line: Rows, names: Names, space: Space, at: Context) -> None:
        self.line, self.names, self.space, self.at = line, names, space, at
        self.problems = names.problems

    def bounds(self) -> tuple[Expression, Expression] | None:
        """Bind the bounds of a spaced set."""
        spaced, column = self.line.spaced, self.line.columns[0] if self.line.columns else None
        if spaced is None or column is None:
            return None
        low = self.names.value(spaced.low, column.symbol, self.space, self.at)
        return low, self.names.value(spaced.high, column.symbol, self.space, self.at)

    def points(self, bounds: tuple[Expression, Expression]) -> tuple[PlannedEntry, ...]:
        """Return the points of a spaced set, each with the formula that gives it."""
        low, high = bounds
        assert self.line.spaced is not None
        last, span = self.line.spaced.count - 1, low.span

        def at(place: int) -> Expression:
            if place in (0, last):
                return high if place else low
            share = Binary("/", Number(Fraction(place), str(place), None, span),
                           Number(Fraction(last), str(last), None, span), span)  # fmt: skip
            return Binary("+", low, Binary("*", share, Binary("-", high, low, span), span), span)

        return tuple(PlannedEntry("", (), (at(place),), None, self.line.span) for place in range(last + 1))

    def row_names(self) -> tuple[str, ...]:
        """Return the names the rows can have; () where they depend on the rows of another set."""
        if self.line.spaced is not None:
            return tuple(str(number) for number in range(1, self.line.spaced.count + 1))
        if any(entry.pairing for entry in self.line.entries):
            return ()
        found: dict[str, bool] = {}
        for number, entry in enumerate(self.line.entries, 1):
            name = entry.name.name or str(number)
            # two rows under conditions of their own may share a name: one of them is made
            if name in found and not (found[name] and entry.when is not None):
                self.problems.add(
                    "given-twice",
                    entry.name.span,
                    f"the row `{name[:40]}` of `{self.line.name}` stands twice",
                    expected="every name once",
                    found=name[:40],
                )
            found[name] = entry.when is not None
        return tuple(found)

    def entry(self, entry: Entry, overs: tuple[int, ...]) -> PlannedEntry:
        when = None if entry.when is None else self.names.condition(entry.when, self.space, self.at)
        mapped = next((self.names.sets[over] for over in overs if over >= 0), None)
        self.pairing(entry, mapped)
        by_name = dict(entry.cells)
        cells: list[Expression | tuple[tuple[str, Expression], ...]] = []
        for column, over in zip(self.line.columns, overs, strict=True):
            cell = by_name.get(column.symbol.name)
            if cell is not None and cell.formula is not None:
                cells.append(self.names.value(cell.formula, column.symbol, self.space, self.at))
            elif cell is not None:
                rows = self.names.sets[over] if over >= 0 else None
                cells.append(self.mapping(cell.mapped, entry, column, rows))
            else:
                # told of already; the cells after it stay under their columns
                cells.append(())
        pairing = tuple((variable.name, tuple(n.name for n in fits)) for variable, fits in entry.pairing)
        return PlannedEntry(entry.name.name, pairing, tuple(cells), when, entry.span)

    def mapping(
        self, mapped: tuple[tuple[Name, Expression], ...], entry: Entry, column: MadeColumn, rows: RowSet | None
    ) -> tuple[tuple[str, Expression], ...]:
        variables = {variable.name for variable, _ in entry.pairing}
        for key, _ in mapped:
            if rows is not None and key.name not in variables:
                self.names.hold_row(key.name, rows, key.span)
        return tuple((k.name, self.names.value(f, column.symbol, self.space, self.at)) for k, f in mapped)

    def pairing(self, entry: Entry, rows: RowSet | None) -> None:
        """Hold `for` and the {variables} of a row's name against one another and against the set they pair over."""
        variables = {variable.name for variable, _ in entry.pairing}
        if entry.pairing and rows is None and not any(column.over for column in self.line.columns):
            self.problems.add(
                "unknown-name",
                entry.pairing[0][0].span,
                "`for` pairs with no set",
                expected="a column `over` the set whose rows it takes",
                found="no such column",
            )
        if rows is not None:
            for name in (name for _, fits in entry.pairing for name in fits):
                self._hold_pattern(name, rows)
        for match in _VARIABLE.finditer(entry.name.name):
            if match[1] is None or match[1] not in variables:
                self.problems.add(
                    "bad-text",
                    entry.name.span.part(match.start(), match.end()),
                    f"`{match[0][:40]}` stands for no row",
                    expected=listed("{" + v + "}" for v in sorted(variables)) if variables else "a variable of `for`",
                    found=match[0][:40],
                )

    def _hold_pattern(self, name: Name, rows: RowSet) -> None:
        known, stem = rows.row_names, name.name.removesuffix("*")
        if not name.name.endswith("*"):
            self.names.hold_row(name.name, rows, name.span)
        elif known and not any(row.startswith(stem) for row in known):
            self.problems.add("not-a-row", name.span, f"no row of `{rows.name}` begins with `{stem[:40]}`",
                              expected=listed(known), found=name.name[:40])  # fmt: skip
