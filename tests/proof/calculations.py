"""Calculations put together from their sheets: what every symbol, row and word is printed as, and where.

In: `SheetPage` records of one mark. Out: `Calculation` with a register of printed forms. Judges nothing.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace
from typing import NamedTuple

from .equations import assignments, printed_of, symbol_of
from .expressions import split
from .letters import Token, plain
from .sheets import SheetPage
from .statements import NumberedLine, Statement
from .tables import Table
from .units import Printed, is_number

#: words of a line of values given as none, or of answers that are no
LEFT_OUT = re.compile(r"none(?:, counted as (\S+))?|no")
#: stations that a method makes on a span, by name
STATIONS = {"start", "left", "left_d", "middle", "greatest", "least", "right_d", "right", "end"}
#: (set, row) pairs that stand open
Rows = tuple[tuple[str, str], ...]


class Key(NamedTuple):
    """A symbol, with the rows of sets it belongs to."""

    name: str
    rows: frozenset[tuple[str, str]]


@dataclass(frozen=True, slots=True)
class Place:
    """Where something is printed."""

    sheet: str
    line: int
    kind: str

    def __str__(self) -> str:
        return f"{self.sheet} line {self.line} ({self.kind})" if self.line else f"{self.sheet} ({self.kind})"


@dataclass(slots=True)
class TableHere:
    """A table with the line it stands under, the rows a heading opens, and the symbol of a table of pairs."""

    table: Table
    line: NumberedLine
    open: Rows
    pairs: tuple[str, str] | None

    @property
    def inner(self) -> str:
        """The set that each member has for itself, its row names in the second column; '' for none."""
        second = self.table.columns[1] if len(self.table.columns) > 2 else None
        shared = self.table.set_name == "member" and second is not None and not second.math and not second.unit
        return second.name if second is not None and shared and self.pairs is None and self.table.given else ""

    def rows_of(self, row: list[str], column: int) -> frozenset[tuple[str, str]]:
        """Return the rows that a cell belongs to."""
        second = self.table.set_name.partition(" / ")[2]
        found = {pair for pair in self.open if pair[0] not in (*self.table.sets, second)} | set(self.table.named(row))
        if self.inner:
            found.add((self.inner, row[1]))
        return frozenset(found | {(second, self.table.columns[column].name)} if second else found)


class InlineRow(NamedTuple):
    """A value of a row that stands on a line instead of in a table."""

    set_name: str
    row: str
    name: str
    tokens: list[Token]
    statement: Statement


@dataclass(slots=True)
class Calculation:
    """All sheets of a mark."""

    mark: str
    pages: list[SheetPage]
    lines: list[NumberedLine] = field(default_factory=list)
    tables: list[TableHere] = field(default_factory=list)
    inline: list[InlineRow] = field(default_factory=list)
    #: sets of symbols whose rows are named in words: `load D: line load`
    worded: dict[str, set[str]] = field(default_factory=lambda: defaultdict(set))
    #: printed forms of values, and of words
    forms: dict[Key, list[tuple[Printed, Place]]] = field(default_factory=lambda: defaultdict(list))
    words: dict[str, list[tuple[str, Place]]] = field(default_factory=lambda: defaultdict(list))
    #: words in the columns of tables, by symbol: rows and word
    row_words: dict[str, list[tuple[frozenset[tuple[str, str]], str]]] = field(
        default_factory=lambda: defaultdict(list)
    )
    #: sets of which one row alone tells a symbol, in full
    told_once: dict[str, set[str]] = field(default_factory=lambda: defaultdict(set))
    #: keys by the name of the symbol
    keys: dict[str, list[Key]] = field(default_factory=lambda: defaultdict(list))
    #: every number with its unit that stands on a sheet as a value
    shown: set[tuple[str, str]] = field(default_factory=set)

    def sheet(self, page: int) -> str:
        """Return the sheet number of a page."""
        return next(p.name for p in self.pages if p.index == page)

    def set_rows(self) -> dict[str, list[str]]:
        """Return the rows of every set, in order of print."""
        found: dict[str, list[str]] = defaultdict(list)
        for here in self.tables:
            second = here.table.set_name.partition(" / ")[2]
            for row in here.table.rows:
                for name, one in here.table.named(row):
                    found[name] += [one] if one not in found[name] else []
            if here.inner:
                found[here.inner] = list(dict.fromkeys([*found[here.inner], *(row[1] for row in here.table.rows)]))
            if second:
                found[second] += [c.name for c in here.table.columns[1:] if c.name not in found[second]]
        for item in self.inline:
            found[item.set_name] += [item.row] if item.row not in found[item.set_name] else []
        return dict(found)

    def belongs(self, name: str) -> set[str]:
        """Return the sets that a symbol is a column of."""
        found = {item.set_name for item in self.inline if item.name == name} | self.worded.get(name, set())
        for here in self.tables:
            if here.pairs is not None and here.pairs[0] == name:
                found.update((*here.table.sets, here.table.set_name.partition(" / ")[2]))
            elif here.table.column(name) is not None:
                found |= {*here.table.sets, *(set_name for set_name, _ in here.open)}
        return found

    def empty_sets(self) -> bool:
        """Tell whether a set of rows is given as none; its name is printed in words."""
        return any(plain(s.tokens) == "none" for line in self.lines for s in line.statements if s.kind == "formula")

    def drawn(self, name: str) -> bool:
        """Tell whether a symbol is of a station of a member on supports, and such values are drawn, not printed."""
        base, _, row = name.partition(",") if "," in name else name.partition("_")
        made = any("Stations are at" in " ".join(line.words) for line in self.lines)
        return made and row in STATIONS and base not in self.keys

    def note(self, key: Key, printed: Printed, place: Place) -> None:
        """Register one printed form."""
        if key not in self.forms:
            self.keys[key.name].append(key)
        self.forms[key].append((printed, place))
        self.shown.add((printed.text, printed.unit))


#: how a heading ends that sets one row out in full, before the table of all
_GOVERNS = ", which governs"


def assemble(pages: Sequence[SheetPage]) -> list[Calculation]:
    """Put pages together by mark and read their printed forms; the pages stay as they are."""
    found: dict[str, Calculation] = {}
    for page in pages:
        calculation = found.setdefault(page.mark, Calculation(page.mark, []))
        calculation.pages.append(page)
        if calculation.lines and (page.carried.statements or page.carried.tables):
            _carry(calculation.lines[-1], page.carried)
        calculation.lines += [
            replace(line, statements=list(line.statements), tables=list(line.tables)) for line in page.lines
        ]
    for calculation in found.values():
        _open_rows(calculation)
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
    line.tables += carried.tables


def _open_rows(calculation: Calculation) -> None:
    """Follow the headings down the sheets: which row of which set stands open at each statement and table."""
    over = {name for line in calculation.lines for s in line.statements for name in _gone_over(s.tokens)}
    for line in calculation.lines:
        calculation.tables += [TableHere(table, line, (), _pairs(line, table)) for table in line.tables]
        for table in line.tables:
            _fill_down(table)
        for statement in line.statements:
            calculation.inline += _inline_row(statement, over)
    sets = calculation.set_rows()
    heading: Rows = ()
    governs = False
    for line in calculation.lines:
        events: list[tuple[int, float, Statement | TableHere]] = [(s.page, -s.y, s) for s in line.statements]
        events += [(h.table.page, -h.table.y, h) for h in calculation.tables if h.line is line]
        for _, _, event in sorted(events, key=lambda e: e[:2]):
            if isinstance(event, TableHere):
                if governs and heading and event.table.set_name == heading[0][0]:
                    # the row told in full ends where the table of all rows stands
                    heading, governs = (), False
                event.open = heading
            elif event.kind == "heading":
                row = _row_named(sets, event.words)
                if row or not governs:
                    heading = (row,) if row else ()
                    governs = row is not None and (event.words.endswith(_GOVERNS) or _tabled(calculation, line, row))
            else:
                row = _row_named(sets, event.words.partition(":")[0]) if ":" in event.words else None
                event.context = (*heading, row) if row else heading
                if row and event.kind == "formula":
                    calculation.worded[symbol_of(split(event.tokens, "relation")[0][0]) or ""].add(row[0])


def _tabled(calculation: Calculation, line: NumberedLine, row: tuple[str, str]) -> bool:
    """Tell whether a table of all rows follows a row told in full: no other row of its set is told before it."""
    at = calculation.lines.index(line)

    def first(lines: Sequence[NumberedLine]) -> str:
        for other in lines:
            if any(row[0] in table.sets for table in other.tables):
                return "table"
            if any(s.kind == "heading" and _other_row(s.words, row) for s in other.statements):
                return "row"
        return ""

    return first(calculation.lines[at + 1 :]) == "table" and first(calculation.lines[at::-1]) != "row"


def _other_row(words: str, row: tuple[str, str]) -> bool:
    return words.startswith(row[0] + " ") and words.removeprefix(row[0] + " ").removesuffix(_GOVERNS) != row[1]


def _gone_over(tokens: Sequence[Token]) -> Iterator[str]:
    """Yield the sets that sums and extremes in a row of tokens go over."""
    for token in tokens:
        if token.kind == "over" and token.parts[0]:
            yield token.parts[0][0].text
        for part in token.parts:
            yield from _gone_over(part)


def _pairs(line: NumberedLine, table: Table) -> tuple[str, str] | None:
    """Return symbol and unit of a table whose cells belong to two sets; its title says them: `V shear, kip`."""
    titles = [s for s in line.statements if (s.kind == "title" and s.y > table.y) or s.page < table.page]
    if " / " not in table.set_name or not titles:
        return None
    tokens = titles[-1].tokens
    comma = max((i for i, token in enumerate(tokens) if token.kind == "comma"), default=len(tokens))
    return tokens[0].text, "".join(token.text for token in tokens[comma + 1 :])


def _inline_row(statement: Statement, over: set[str]) -> list[InlineRow]:
    """Read a row on a line, its set and name as words: `layer first   2-#7, A_s,i = 1.20 in.², n = 2`.

    A row of one value is known by its set, which a sum or an extreme of the calculation goes over.
    """
    parts, _ = split(statement.tokens, "comma")
    set_name, _, row = statement.words.partition(" ")
    if statement.kind != "formula" or (len(parts) < 2 and set_name not in over) or not row:
        return []
    found = []
    for sides, marks in (split(part, "relation") for part in parts):
        name = symbol_of(sides[0])
        if marks == ["="] and name is not None:
            found.append(InlineRow(set_name, row, name, sides[1], statement))
        elif marks:
            return []
    return found


def _fill_down(table: Table) -> None:
    """Put a member's mark into the rows that leave it out because they follow another row of that member."""
    above = ""
    for row in table.rows:
        row[0] = above = row[0] or above


def _row_named(sets: dict[str, list[str]], text: str) -> tuple[str, str] | None:
    text = text.removesuffix(_GOVERNS)
    for name, rows in sets.items():
        if text.startswith(name + " ") and text[len(name) + 1 :].strip() in rows:
            return name, text[len(name) + 1 :].strip()
    return None


def _register(calculation: Calculation) -> None:
    for line in calculation.lines:
        for statement in line.statements:
            place = Place(calculation.sheet(statement.page), line.number, statement.kind)
            rows = [item for item in calculation.inline if item.statement is statement]
            if rows:
                for item in rows:
                    _note(calculation, item.name, ((item.set_name, item.row),), item.tokens, place)
            elif statement.kind == "formula":
                # an arm is for the rows of a table, each of which goes by its own
                for name, tokens in () if is_arm(statement) else assignments(statement):
                    _note(calculation, name, statement.context, tokens, place)
                _left_out(calculation, statement, place)
            elif statement.kind in ("required", "condition", "arm"):
                _from_condition(calculation, statement, place)
    for here in calculation.tables:
        _from_table(calculation, here, Place(calculation.sheet(here.table.page), here.line.number, "table"))
    for page in calculation.pages:
        for _, tokens in page.labels:
            _from_label(calculation, tokens, Place(page.name, 0, "figure"))


def is_arm(statement: Statement) -> bool:
    """Tell whether a formula is one of several, of which every row of a table takes one."""
    return statement.because == "where" or statement.words == "otherwise"


def _left_out(calculation: Calculation, statement: Statement, place: Place) -> None:
    """Register what is given as none in one line, `none, counted as 0   b_t, q_D`, and answers: `no   SFRS`."""
    counted = LEFT_OUT.fullmatch(statement.words)
    for part in split(statement.tokens, "comma")[0] if counted is not None else ():
        name = symbol_of(part)
        if counted is not None and name is not None:
            calculation.words[name].append((statement.words.split(",")[0], place))
            if counted[1] is not None and is_number(counted[1]):
                calculation.note(Key(name, frozenset()), Printed(counted[1]), place)


def _note(calculation: Calculation, name: str, context: Rows, tokens: Sequence[Token], place: Place) -> None:
    """Register one printed form of a symbol, in the open rows where it belongs to their sets."""
    if tokens and tokens[0].text == "none":
        calculation.words[name].append(("none", place))
    printed = printed_of(tokens)
    if printed is not None:
        # every line told for one of like members is of that member
        sets = calculation.belongs(name) | {"member"}
        calculation.told_once[name].update(set_name for set_name, _ in context if set_name not in sets)
        calculation.note(Key(name, frozenset(pair for pair in context if pair[0] in sets)), printed, place)
    elif tokens:
        calculation.words[name].append((plain(tokens), place))


def _from_condition(calculation: Calculation, statement: Statement, place: Place) -> None:
    """Register `symbol = number` pairs of a comparison that is stated, not of one that may fail."""
    tokens = statement.condition or statement.tokens
    if any(token.kind == "word" and token.text in ("or", "is") for token in tokens):
        return
    for part in split(tokens, "word", ("and",))[0]:
        parts, relations = split(part, "relation")
        for left, relation, right in zip(parts, relations, parts[1:], strict=False):
            name = symbol_of(left)
            if relation == "=" and name is not None and printed_of(right) is not None:
                _note(calculation, name, statement.context, right, place)


def _from_table(calculation: Calculation, here: TableHere, place: Place) -> None:
    for row in here.table.rows:
        for at, column in enumerate(here.table.columns[1:], start=1):
            if not is_number(row[at]):
                if here.pairs is None and row[at]:
                    calculation.row_words[column.name].append((here.rows_of(row, at), row[at]))
                continue
            name, unit = here.pairs if here.pairs is not None else (column.name, column.unit)
            if here.pairs is not None or column.math:
                calculation.note(Key(name, here.rows_of(row, at)), Printed(row[at], 0, unit), place)


def _from_label(calculation: Calculation, tokens: Sequence[Token], place: Place) -> None:
    parts, relations = split(tokens, "relation")
    name = symbol_of(parts[0]) if parts else None
    if relations == ["="] and name is not None and printed_of(parts[1]) is not None:
        _note(calculation, name, (), parts[1], place)
