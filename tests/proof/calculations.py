"""Calculations put together from their sheets: what every symbol, row and word is printed as, and where.

In: `SheetPage` records of one mark. Out: `Calculation` with a register of printed forms, and `Scope`, which answers what
a symbol is worth on the sheet, row by row. Judges nothing.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace
from decimal import Decimal

from .conditions import judge
from .expressions import Unknown, Unread, Value, as_printed, parse, split, with_unit
from .formulas import Token, plain
from .sheets import NumberedLine, SheetPage, Statement
from .tables import Table
from .units import Printed, is_number

#: a symbol, with the row of a set where it belongs to one
Key = tuple[str, str, str]


@dataclass(frozen=True, slots=True)
class Place:
    """Where something is printed."""

    sheet: str
    line: int
    kind: str

    def __str__(self) -> str:
        return f"{self.sheet} line {self.line} ({self.kind})" if self.line else f"{self.sheet} ({self.kind})"


@dataclass(slots=True)
class Calculation:
    """All sheets of a mark."""

    mark: str
    pages: list[SheetPage]
    lines: list[NumberedLine] = field(default_factory=list)
    tables: list[tuple[Table, NumberedLine]] = field(default_factory=list)
    #: rows that stand on a line instead of in a table: set, row, symbol and tokens of its value
    inline: list[tuple[str, str, str, list[Token], Statement]] = field(default_factory=list)
    #: printed forms of values, and of words
    forms: dict[Key, list[tuple[Printed, Place]]] = field(default_factory=lambda: defaultdict(list))
    words: dict[str, list[tuple[str, Place]]] = field(default_factory=lambda: defaultdict(list))
    #: every number with a unit that stands on a sheet as a value
    shown: set[tuple[str, str]] = field(default_factory=set)

    def sheet(self, page: int) -> str:
        """Return the sheet number of a page."""
        return next(p.name for p in self.pages if p.index == page)

    def set_rows(self) -> dict[str, list[str]]:
        """Return the rows of every set, in order of print."""
        found: dict[str, list[str]] = {}
        for table, _ in self.tables:
            rows = found.setdefault(table.set_name, [])
            rows += [row[0] for row in table.rows if row[0] not in rows]
        for set_name, row_name, *_ in self.inline:
            rows = found.setdefault(set_name, [])
            rows += [row_name] if row_name not in rows else []
        return found

    def belongs(self, name: str) -> set[str]:
        """Return the sets that a symbol is a column of."""
        tabled = {table.set_name for table, _ in self.tables if table.column(name) is not None}
        return tabled | {set_name for set_name, _, symbol, *_ in self.inline if symbol == name}


def assemble(pages: Sequence[SheetPage]) -> list[Calculation]:
    """Put pages together by mark and read their printed forms; the pages stay as they are."""
    found: dict[str, Calculation] = {}
    for page in pages:
        calculation = found.setdefault(page.mark, Calculation(page.mark, []))
        calculation.pages.append(page)
        if calculation.lines and (page.carried.statements or page.carried.table):
            _carry(calculation.lines[-1], page.carried)
        calculation.lines += [replace(line, statements=list(line.statements)) for line in page.lines]
    for calculation in found.values():
        for line in calculation.lines:
            if line.table is not None:
                calculation.tables.append((line.table, line))
            for statement in line.statements:
                calculation.inline += _inline_row(statement)
        _contexts(calculation)
        _register(calculation)
    return list(found.values())


def _carry(line: NumberedLine, carried: NumberedLine) -> None:
    """Add what stands above the first number of a page to the last line of the page before."""
    for statement in carried.statements:
        last = line.statements[-1] if line.statements else None
        goes_on = statement.kind == "formula" and statement.tokens[0].kind == "relation"
        if goes_on and last is not None and last.kind == "formula":
            line.statements[-1] = replace(last, tokens=[*last.tokens, *statement.tokens])
        else:
            line.statements.append(statement)
    line.table = line.table or carried.table


def _contexts(calculation: Calculation) -> None:
    sets = calculation.set_rows()
    open_: tuple[tuple[str, str], ...] = ()
    for line in calculation.lines:
        for statement in line.statements:
            if statement.kind == "heading":
                row = _row_named(sets, statement.words)
                open_ = (row,) if row else ()
                continue
            row = _row_named(sets, statement.words.partition(":")[0])
            statement.context = (*open_, row) if row else open_


def _inline_row(statement: Statement) -> list[tuple[str, str, str, list[Token], Statement]]:
    """Read a row that stands on a line, its set and name as words: `layer first   2-#7, A_s,i = 1.20 in.², n = 2`."""
    parts, _ = split(statement.tokens, "comma")
    set_name, _, row = statement.words.partition(" ")
    if statement.kind != "formula" or len(parts) < 2 or not row:
        return []
    pairs = [split(part, "relation") for part in parts]
    if pairs[0][1] == ["="] and len(pairs) == 1 or not any(marks == ["="] for _, marks in pairs[1:]):
        return []
    found = []
    for sides, marks in pairs:
        name = symbol_of(sides[0])
        if marks == ["="] and name is not None:
            found.append((set_name, row, name, sides[1], statement))
        elif marks:
            return []
    return found


def _row_named(sets: dict[str, list[str]], text: str) -> tuple[str, str] | None:
    for name, rows in sets.items():
        if text.startswith(name + " ") and text[len(name) + 1 :].strip() in rows:
            return name, text[len(name) + 1 :].strip()
    return None


def symbol_of(tokens: Sequence[Token]) -> str | None:
    """Return the symbol that a row of tokens is, if it is one."""
    if len(tokens) == 1 and tokens[0].kind == "word" and not tokens[0].raised:
        return tokens[0].text
    if len(tokens) == 1 and tokens[0].kind == "root":
        return "√" + plain(tokens[0].parts[0])
    return None


def printed_of(tokens: Sequence[Token]) -> Printed | None:
    """Return the printed number that a row of tokens is, if it is one; `none (0 kip)` is worth 0 kip."""
    tokens = list(tokens)
    if len(tokens) > 1 and tokens[0].text == "none" and tokens[1].kind == "open":
        tokens = tokens[2:-1]
    if len(tokens) > 2 and tokens[0].kind == "number" and tokens[1].kind == "unit" and tokens[2].kind == "open":
        tokens = tokens[:2]
    try:
        return as_printed(parse(tokens)) if tokens else None
    except Unread:
        return None


def assignments(statement: Statement) -> Iterator[tuple[str, list[Token]]]:
    """Yield (symbol, tokens of its value) of an equation; bars give a value after their callout."""
    parts, relations = split(statement.tokens, "relation")
    name = symbol_of(parts[0])
    if name is None or len(parts) < 2 or set(relations) != {"="}:
        return
    if any(token.kind == "colon" for token in parts[1]):
        (callout, rest), _ = _at_colon(statement.tokens)
        yield name, callout[2:]
        for part in split(rest, "comma")[0]:
            inner, _ = split(part, "relation")
            inner_name = symbol_of(inner[0])
            if inner_name is not None and len(inner) == 2:
                yield inner_name, inner[1]
        return
    yield name, parts[-1]


def _at_colon(tokens: Sequence[Token]) -> tuple[tuple[list[Token], list[Token]], int]:
    at = next(i for i, token in enumerate(tokens) if token.kind == "colon")
    return (list(tokens[:at]), list(tokens[at + 1 :])), at


def _register(calculation: Calculation) -> None:
    for line in calculation.lines:
        for statement in line.statements:
            place = Place(calculation.sheet(statement.page), line.number, statement.kind)
            rows = [row for row in calculation.inline if row[4] is statement]
            if rows:
                for set_name, row_name, name, tokens, _ in rows:
                    note(calculation, name, ((set_name, row_name),), tokens, place)
            elif statement.kind == "formula":
                for name, tokens in assignments(statement):
                    note(calculation, name, statement.context, tokens, place)
            elif statement.kind in ("required", "condition", "arm"):
                _from_condition(calculation, statement, place)
    for table, line in calculation.tables:
        _from_table(calculation, table, Place(calculation.sheet(table.page), line.number, "table"))
    for page in calculation.pages:
        for _, tokens in page.labels:
            _from_label(calculation, tokens, Place(page.name, 0, "figure"))


def note(
    calculation: Calculation, name: str, context: tuple[tuple[str, str], ...], tokens: Sequence[Token], place: Place
) -> None:
    """Register one printed form of a symbol."""
    printed = printed_of(tokens)
    if printed is None:
        if len(tokens) >= 1:
            calculation.words[name].append((plain(tokens), place))
        return
    calculation.forms[key_of(calculation, name, context)].append((printed, place))
    calculation.shown.add((printed.text, printed.unit))


def key_of(calculation: Calculation, name: str, context: tuple[tuple[str, str], ...]) -> Key:
    """Return the key of a symbol: with the row that is open, where it is a column of that set."""
    sets = calculation.belongs(name)
    for set_name, row in reversed(context):
        if set_name in sets:
            return name, set_name, row
    return name, "", ""


def _from_condition(calculation: Calculation, statement: Statement, place: Place) -> None:
    """Register `symbol = number` pairs of a comparison that is stated, not of one that may fail."""
    tokens = statement.condition or statement.tokens
    if any(token.kind == "word" and token.text in ("or", "and", "is") for token in tokens):
        return
    parts, relations = split(tokens, "relation")
    for left, relation, right in zip(parts, relations, parts[1:], strict=False):
        name = symbol_of(left)
        if relation == "=" and name is not None and printed_of(right) is not None:
            note(calculation, name, statement.context, right, place)


def _from_table(calculation: Calculation, table: Table, place: Place) -> None:
    for row in table.rows:
        for column, cell in zip(table.columns[1:], row[1:], strict=True):
            if column.math and is_number(cell):
                printed = Printed(cell, 0, column.unit)
                calculation.forms[column.name, table.set_name, row[0]].append((printed, place))
                calculation.shown.add((cell, column.unit))


def _from_label(calculation: Calculation, tokens: Sequence[Token], place: Place) -> None:
    parts, relations = split(tokens, "relation")
    name = symbol_of(parts[0]) if parts else None
    if relations == ["="] and name is not None and printed_of(parts[1]) is not None:
        note(calculation, name, (), parts[1], place)


_TERM = re.compile(r"([+−])?\s*([\d.,]+)\s+(\S+)")


@dataclass(frozen=True, slots=True)
class Scope:
    """What symbols are worth on the sheets of a calculation, with rows of sets open."""

    calculation: Calculation
    open: tuple[tuple[str, str], ...] = ()

    def value(self, name: str) -> Value:
        """Return what a symbol is printed as, in base units."""
        printed = self.printed(name)
        if printed is not None:
            return with_unit(printed)
        factor = self._factor(name)
        if factor is None:
            raise Unknown(name)
        return Value(factor)

    def printed(self, name: str) -> Printed | None:
        """Return the printed form of a symbol, open rows first."""
        for set_name, row in reversed(self.open):
            forms = self.calculation.forms.get((name, set_name, row))
            if forms:
                return forms[0][0]
        forms = self.calculation.forms.get((name, "", ""))
        if forms:
            return forms[0][0]
        lone = [key for key in self.calculation.forms if key[0] == name]
        if len(lone) == 1:
            return self.calculation.forms[lone[0]][0][0]
        base, comma, row = name.rpartition(",")
        named = [key for key in self.calculation.forms if comma and key[0] == base and key[2] == row]
        return self.calculation.forms[named[0]][0][0] if named else None

    def word(self, name: str) -> str | None:
        """Return the word a symbol or an open set stands for."""
        for set_name, row in reversed(self.open):
            if set_name == name:
                return row
        words = self.calculation.words.get(name)
        return words[0][0] if words else None

    def rows(self, name: str, where: tuple[Token, ...]) -> Sequence[Scope]:
        """Return the scope of every row of a set that meets a condition."""
        rows = self.calculation.set_rows().get(name)
        if rows is None:
            raise Unknown(f"the rows of {name}")
        scopes = [Scope(self.calculation, (*self.open, (name, row))) for row in rows]
        return [scope for scope in scopes if not where or judge(list(where), scope)]

    def _factor(self, name: str) -> Decimal | None:
        """Return a load factor: its cell is a sum of factors and rows, 1.2 D + 1.6 L."""
        opened = dict(self.open)
        for table, _ in self.calculation.tables:
            place = table.column(name)
            if place is None or table.set_name not in opened:
                continue
            for row in table.rows:
                if row[0] == opened[table.set_name]:
                    terms = _TERM.findall(row[place])
                    found = {rest: Decimal(f"{'-' if sign == '−' else ''}{size}") for sign, size, rest in terms}
                    inner = [row_name for set_name, row_name in self.open if set_name != table.set_name]
                    return next((found[r] for r in inner if r in found), Decimal(0)) if terms and inner else None
        return None
