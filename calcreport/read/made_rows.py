"""Sets made in a template: `rows:` with its columns and its list, each cell a formula or a mapping over a set.

Fields in, `Rows` out.
"""

from __future__ import annotations

from calcreport.core.expression import Expression, Name
from calcreport.core.source import Citation
from calcreport.read.fields import Fields, as_mapping, as_scalar, is_empty
from calcreport.read.formulas import FormulaReader
from calcreport.read.model import Cell, Entry, MadeColumn, Rows
from calcreport.read.nodes import Mapping, Node
from calcreport.read.symbols import OWN_KEYS, hold_name

COLUMN_KEYS, ROW_KEYS = (*OWN_KEYS, "over", "else"), ("name", "for", "when")


class RowsReader:
    """Reads one `rows` line."""

    def __init__(self, formulas: FormulaReader, fields: Fields, cite: Citation) -> None:
        self.formulas, self.fields, self.cite = formulas, fields, cite
        self.problems = formulas.problems

    def read(self) -> Rows | None:
        """Return the set, or None where it has no name."""
        name = self.fields.scalar("rows", required=True)
        columns = self.columns(self.fields.mapping("columns", required=True))
        entries = tuple(self.entry(node, columns) for node in self.fields.items("list", required=True))
        if name is None or not hold_name(name, self.problems):
            return None
        kept = tuple(entry for entry in entries if entry is not None)
        return Rows(name.text, columns, kept, self.fields.text("says"), self.cite, name.span)

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
        names = tuple(column.symbol.name for column in columns)
        fields = Fields(mapping, (*ROW_KEYS, *names), "a row", self.problems)
        cells: list[tuple[str, Cell]] = []
        for column in columns:
            cell_node = fields.node_of(column.symbol.name)
            if cell_node is None:
                fields.say_missing(column.symbol.name)
                continue
            cell = self.cell(cell_node, column)
            if cell is not None:
                cells.append((column.symbol.name, cell))
        when = self.formulas.condition(fields.node_of("when"))
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
