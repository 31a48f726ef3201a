"""Given values of a project, typed by the template's declarations: single ones, rows of a set, pairs of rows.

Nodes in, `GivenValue`, `GivenRows`, `GivenPairs` out. What is missing or unknown is a problem; nothing is ever assumed.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from dataclasses import dataclass, replace
from typing import Protocol

from calcreport.core.problems import listed
from calcreport.core.record import record
from calcreport.core.rows import fits
from calcreport.core.rows import wanted as rows_wanted
from calcreport.core.source import Span
from calcreport.read.fields import as_items, as_mapping, as_scalar, is_empty
from calcreport.read.links import read_linked_rows
from calcreport.read.model import Given, GivenPairs, GivenRows, GivenValue, ValueOrigin
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told
from calcreport.read.single_values import FILE, NONE, SingleReader, wanted

_ROW_NAME = re.compile(r"\w[\w .+/-]{0,39}")


@record
class Taken:
    """Rows taken from a table: a list of mappings, and where they were taken from."""

    rows: Sequence
    origin: ValueOrigin


@record
class TakenPair:
    """A value taken from a table, and the rows it is for, one of each set."""

    names: tuple[Scalar, ...]
    value: Scalar | Told


class RowSource(Protocol):
    """Takes rows and pairs from the tables of a project."""

    def rows(self, given: Given, node: Mapping) -> Taken | None:
        """Return the rows of a set."""

    def pairs(self, given: Given, node: Mapping) -> tuple[tuple[TakenPair, ...], ValueOrigin] | None:
        """Return values for pairs of rows."""


@dataclass(frozen=True, slots=True)
class ValueReader(SingleReader):
    """Reads the given values of one calculation."""

    #: what reads the tables of the project, made when first needed; None for a case beside a template
    tables: Callable[[], RowSource] | None = None

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

    def one(self, given: Given, node: Mapping, what: str, *, told: bool) -> GivenValue | GivenRows | GivenPairs | None:
        """Read one given value, of whatever kind; `told` where an unknown name seems to mean it."""
        key, value = next(((k, v) for k, v in node.entries if k.text == given.name), (None, None))
        if given.criterion is not None and self.criteria is not None:
            return self.from_criterion(given, key, what)
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
            expected=f"{wanted(given)}{words}", found="no value",
            hint="it may be `none`" if given.if_none is not None else "",
        )  # fmt: skip

    def rows(self, given: Given, node: Node) -> GivenRows | None:
        """Read a list of rows, each a mapping of the set's columns and an optional `name`."""
        if isinstance(node, Scalar) and node.text == "none":
            return GivenRows(given, (), (), NONE, node.span) if self.may_be_none(given, node) else None
        if isinstance(node, Mapping) and node.get("from") is not None:
            return self.linked_rows(given, node)
        taken = self.from_table(given, node) if isinstance(node, Mapping) and node.get("file") is not None else None
        if isinstance(node, Mapping) and node.get("file") is not None and taken is None:
            return None
        before = self.problems.met
        items = as_items(taken.rows if taken else node, f"`{given.name}`", self.problems)
        if self.problems.met > before:
            return None
        if not given.least <= len(items) <= given.most:
            self.problems.add("row-count", node.span.part(0, 1), f"`{given.name}` has {len(items)} rows",
                              expected=rows_wanted(given.least, given.most), found=f"{len(items)}")  # fmt: skip
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
        origin = taken.origin if taken else _origin(cell for row in cells for cell in row)
        return GivenRows(given, tuple(names), tuple(cells), origin, node.span)

    def from_table(self, given: Given, node: Mapping) -> Taken | None:
        """Take the rows of a set from a table of the project."""
        tables = self.row_tables(node)
        return tables.rows(given, node) if tables is not None else None

    def row_tables(self, node: Mapping) -> RowSource | None:
        """Return what takes rows from tables; a case beside a template has none."""
        if self.tables is None:
            self.problems.add("wrong-shape", node.span.part(0, 1), "a case writes its rows out",
                              expected="rows, or pairs", found="a table")  # fmt: skip
            return None
        return self.tables()

    def linked_rows(self, given: Given, node: Mapping) -> GivenRows | None:
        """Read rows taken from another calculation; a column of a material is the same in every row."""
        found = read_linked_rows(given, node, self.problems, self.shared)
        if found is None or found.linked is None:
            return None
        named = {column.name for column, _ in found.linked.columns} | {v.given.name for v in found.linked.same}
        rest = (self.from_material(c, f"`{given.name}`") for c in given.columns if c.material and c.name not in named)
        same = (*found.linked.same, *(value for value in rest if value is not None))
        return replace(found, linked=replace(found.linked, same=same))

    def row_name(self, given: Given, label: Scalar | None, at: Span, names: list[str], number: int) -> None:
        """Keep a row's name, or its number; a name outside the set's list or twice is a problem."""
        name = label.text if label else str(number)
        span = label.span if label else at.part(0, 1)
        if given.row_names and not fits(name, given.row_names, given.row_names):
            self.problems.add(
                "not-a-row",
                span,
                f"`{given.name}` has no row named `{name[:40]}`",
                expected=listed(given.row_names)
                + (" (* stands for any ending)" if "*" in "".join(given.row_names) else ""),
                found=name[:40],
                hint=self.problems.near(name, given.row_names),
            )
        elif not _ROW_NAME.fullmatch(name):
            self.problems.add(
                "not-a-row",
                span,
                f"`{name[:40]}` cannot be a row name",
                expected="up to 40 letters, digits, spaces and . + - /",
                found=name[:40] or "nothing",
            )
        elif name in names:
            self.problems.add("given-twice", span, f"the row `{name}` of `{given.name}` stands twice",
                              expected="every name once", found=name)  # fmt: skip
        names.append(name)

    def pairs(self, given: Given, node: Node) -> GivenPairs | None:
        """Read values for pairs of rows: `{C3 foot: {D: 150 kip, L: 90 kip}}`, as deep as there are sets."""
        if isinstance(node, Scalar) and node.text == "none":
            return GivenPairs(given, (), NONE, node.span) if self.may_be_none(given, node) else None
        if isinstance(node, Mapping) and node.get("file") is not None:
            return self.pairs_from_table(given, node)
        mapping = as_mapping(node, f"`{given.name}`", self.problems)
        if mapping is None:
            return None
        cells: list[tuple[tuple[str, ...], GivenValue]] = []
        self.pair_level(given, mapping, (), cells)
        return GivenPairs(given, tuple(cells), _origin(cell for _, cell in cells), node.span)

    def pairs_from_table(self, given: Given, node: Mapping) -> GivenPairs | None:
        """Take values for pairs of rows from a table with the names of both in columns."""
        tables = self.row_tables(node)
        taken = tables.pairs(given, node) if tables is not None else None
        if taken is None:
            return None
        found = ((pair, self.value(given, pair.value)) for pair in taken[0] if not isinstance(pair.value, Told))
        cells = tuple((tuple(name.text for name in pair.names), cell) for pair, cell in found if cell is not None)
        return GivenPairs(given, cells, taken[1], node.span)

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


def _origin(cells: Iterable[GivenValue]) -> ValueOrigin:
    """Return where rows come from: a schedule, if any of their cells does."""
    return next((cell.origin for cell in cells if cell.origin.kind == "schedule"), FILE)


def is_complete(values: tuple[GivenValue | GivenRows | GivenPairs, ...], givens: tuple[Given, ...]) -> bool:
    """Tell whether every given value was read, and every cell of its rows."""
    rows = [value for value in values if isinstance(value, GivenRows)]
    whole = all(is_complete(cells, value.given.columns) for value in rows for cells in value.cells)
    return whole and len(values) == len(givens) and all(len(r.names) == len(r.cells) for r in rows)
