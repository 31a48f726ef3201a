"""Sets made in a template: `rows:` with columns and a list, a table beside the template, or `spaced` between bounds.

A cell of a list is a formula or a mapping over a set, one of a table a number or a word.

Fields in, `Rows` out.
"""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

from calcreport.core.expression import Compare, Expression, Name, Negate, Number
from calcreport.core.rows import MOST_ROWS
from calcreport.core.source import Citation
from calcreport.read.fields import Fields, as_mapping, as_scalar, is_empty
from calcreport.read.formulas import FormulaReader
from calcreport.read.model import Cell, Entry, MadeColumn, Rows, Spaced
from calcreport.read.nodes import Mapping, Node, Scalar
from calcreport.read.symbols import OWN_KEYS, hold_name

COLUMN_KEYS, ROW_KEYS = (*OWN_KEYS, "over", "else"), ("name", "for", "when")
SPACED_KEYS = ("symbol", "from", "to", "count", *OWN_KEYS)
#: ways to say which rows a set has
_WAYS = ("list", "spaced", "file")
#: takes the cells of a table beside the template by their columns; None after adding why not
ReadTable = Callable[[Scalar, tuple[Scalar, ...]], tuple[dict[str, Scalar], ...] | None]


class RowsReader:
    """Reads one `rows` line."""

    def __init__(self, formulas: FormulaReader, fields: Fields, cite: Citation, read_table: ReadTable) -> None:
        self.formulas, self.fields, self.cite, self.read_table = formulas, fields, cite, read_table
        self.problems = formulas.problems

    def read(self) -> Rows | None:
        """Return the set, or None where it has no name."""
        name = self.fields.scalar("rows", required=True)
        ways = [key for key in _WAYS if self.fields.has(key)]
        if len(ways) > 1:
            self.problems.add("unknown-key", self.fields.span_of(ways[1]).part(0, 1),
                              f"`{ways[0]}` and `{ways[1]}` stand on one line", expected="one of them",
                              found="both")  # fmt: skip
            return None
        spaced, columns = None, self.columns(self.fields.mapping("columns", required="spaced" not in ways))
        entries: tuple[Entry | None, ...] = ()
        if "spaced" in ways:
            made = self.spaced()
            if made is None:
                return None
            columns, spaced = (made[0],), made[1]
        elif "file" in ways:
            entries = self.from_table(columns)
        else:
            entries = tuple(self.entry(node, columns) for node in self.fields.items("list", required=True))
        if name is None or not hold_name(name, self.problems):
            return None
        kept = tuple(entry for entry in entries if entry is not None)
        return Rows(name.text, columns, kept, self.fields.text("says"), self.cite, name.span, spaced)

    def spaced(self) -> tuple[MadeColumn, Spaced] | None:
        """Read `spaced: {symbol: c_i, unit: in, says: …, from: '0.05*h', to: '3*h', count: 40}`."""
        mapping = self.fields.mapping("spaced")
        if mapping is None:
            return None
        if self.fields.has("columns"):
            self.problems.add("unknown-key", self.fields.span_of("columns").part(0, 1),
                              "`spaced` and `columns` stand on one line", expected="the symbol under `spaced` alone",
                              found="both")  # fmt: skip
            return None
        fields = Fields(mapping, SPACED_KEYS, "`spaced`", self.problems)
        named = fields.scalar("symbol", required=True)
        for key in ("from", "to"):
            if fields.node_of(key) is None:
                fields.say_missing(key)
        low, high = self.formulas.formula(fields.node_of("from")), self.formulas.formula(fields.node_of("to"))
        count = fields.whole("count", low=2, high=MOST_ROWS, required=True)
        symbol = self.formulas.symbol(named, fields) if named is not None else None
        if named is None or symbol is None or low is None or high is None or count is None:
            return None
        if symbol.kind != "quantity":
            self.problems.add("wrong-shape", named.span, f"`{named.text}` cannot be spaced between bounds",
                              expected="a quantity", found=f"a {symbol.kind}")  # fmt: skip
            return None
        return MadeColumn(symbol, None, None, named.span), Spaced(low, high, count)

    def from_table(self, columns: tuple[MadeColumn, ...]) -> tuple[Entry | None, ...]:
        """Read rows from a table beside the template."""
        file = self.fields.scalar("file", required=True)
        names = tuple(Scalar(column.symbol.name, column.span, False) for column in columns)
        rows = self.read_table(file, names) if file is not None else None
        found: list[Entry | None] = []
        for row in rows or ():
            cells = tuple((key, self.constant(cell)) for key, cell in row.items() if key != "name")
            if any(cell is None for _, cell in cells):
                return ()
            name, span = row.get("name"), next(iter(row.values())).span
            named = Name(name.text, name.span) if name else Name("", span)
            found.append(Entry(named, (), tuple((k, c) for k, c in cells if c is not None), None, span))
        return tuple(found)

    def constant(self, cell: Scalar) -> Cell | None:
        """Read a cell that must be a number with its unit, or a word."""
        formula = self.formulas.formula(cell)
        plain = formula.body if isinstance(formula, Negate) else formula
        if formula is None or isinstance(plain, Number | Name):
            return Cell(formula, (), cell.span) if formula is not None else None
        self.problems.add("bad-cell", cell.span, "this cell cannot be taken as it stands",
                          expected="a number, or a word", found=f"the formula `{cell.text[:40]}`")  # fmt: skip
        return None

    def columns(self, node: Mapping | None) -> tuple[MadeColumn, ...]:
        found: list[MadeColumn] = []
        for key, value in node.entries if node else ():
            what = f"the column `{key.text[:40]}`"
            entry = Mapping((), key.span) if is_empty(value) else as_mapping(value, what, self.problems)
            if entry is None:
                continue
            fields = Fields(entry, COLUMN_KEYS, what, self.problems)
            symbol = self.formulas.symbol(key, fields)
            over = fields.scalar("over")
            other = self.formulas.formula(fields.node_of("else"))
            if symbol is not None:
                named = Name(over.text, over.span) if over else None
                found.append(MadeColumn(symbol, named, other, key.span))
        return tuple(found)

    def entry(self, node: Node, columns: tuple[MadeColumn, ...]) -> Entry | None:
        mapping = as_mapping(node, "a row", self.problems)
        if mapping is None:
            return None
        columned = self.fields.node_of("columns")
        names = tuple(key.text for key, _ in columned.entries) if isinstance(columned, Mapping) else ()
        keys = (*ROW_KEYS, *names)
        fields = Fields(mapping, keys if names else (k.text for k, _ in mapping.entries), "a row", self.problems)
        cells: list[tuple[str, Cell]] = []
        for column in columns:
            cell_node = fields.node_of(column.symbol.name)
            if cell_node is None:
                fields.say_missing(column.symbol.name)
                continue
            cell = self.cell(cell_node, column)
            if cell is not None:
                cells.append((column.symbol.name, cell))
        stated = fields.node_of("when")
        when = self.formulas.condition(stated)
        if when is None and stated is not None:
            # a condition that could not be read still parts this row from others of its name
            zero = Number(Fraction(0), "0", None, stated.span)
            when = Compare("=", zero, zero, stated.span)
        name = fields.scalar("name")
        named = Name(name.text, name.span) if name else Name("", mapping.span.part(0, 1))
        return Entry(named, self.pairing(fields), tuple(cells), when, mapping.span)

    def cell(self, node: Node, column: MadeColumn) -> Cell | None:
        if column.over is None:
            formula = self.formulas.formula(node)
            return Cell(formula, (), node.span) if formula is not None else None
        mapping = as_mapping(node, f"a cell of `{column.symbol.name}`", self.problems)
        mapped: list[tuple[Name, Expression]] = []
        for key, value in mapping.entries if mapping else ():
            formula = self.formulas.formula(value)
            if formula is not None:
                mapped.append((Name(key.text, key.span), formula))
        return Cell(None, tuple(mapped), node.span)

    def pairing(self, fields: Fields) -> tuple[tuple[Name, tuple[Name, ...]], ...]:
        mapping = fields.mapping("for")
        found: list[tuple[Name, tuple[Name, ...]]] = []
        for key, value in mapping.entries if mapping else ():
            scalar = as_scalar(value, "`for`", self.problems)
            if scalar is not None and hold_name(key, self.problems):
                at = 0
                words: list[Name] = []
                for word in scalar.text.split("|"):
                    lead = at + len(word) - len(word.lstrip())
                    words.append(Name(word.strip(), scalar.span.part(lead, lead + max(len(word.strip()), 1))))
                    at += len(word) + 1
                found.append((Name(key.text, key.span), tuple(words)))
        return tuple(found)
