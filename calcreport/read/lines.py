"""The lines of a template: one reader for each kind of line, formulas parsed on the spot.

Nodes in, `read.model` records out. Names are not bound here and nothing is evaluated.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass

from calcreport.core.expression import Condition, Expression, Name
from calcreport.core.grammar import read_condition, read_formula
from calcreport.core.problems import Problems, nearest
from calcreport.core.source import Citation, Span
from calcreport.read.fields import Fields, as_mapping, as_scalar
from calcreport.read.model import (
    Arm,
    BranchArm,
    Branches,
    Cell,
    Check,
    Drawing,
    Each,
    Entry,
    Gives,
    Line,
    MadeColumn,
    PartBody,
    PartUse,
    Require,
    Rows,
    Symbol,
    Text,
)
from calcreport.read.nodes import Mapping, Node, Scalar
from calcreport.read.symbols import find_symbol, read_symbol

#: kind of line by its first key: further keys allowed
_KINDS: dict[str, tuple[str, ...]] = {
    "heading": (), "note": ("cite",), "caution": ("cite",), "assume": ("cite",), "use": ("cite",),
    "gives": ("formula", "branches", "unit", "says", "shows", "places", "kind", "one of", "cite", "as cited"),
    "branches": (), "rows": ("columns", "list", "says", "cite"), "each": ("lines", "table", "show"),
    "part": ("as", "same", "with"), "check": ("holds", "says", "cite"), "require": ("says", "cite"),
    "figure": ("with",),
}  # fmt: skip
_PIECE = re.compile(r"\{([A-Za-z][\w.]*)\}")
MOST_LINES = 400


@dataclass(frozen=True, slots=True)
class LineReader:
    """Reads lines of one file for one system and year."""

    table: dict[str, Symbol]
    #: which argument `by_units` takes
    place: int
    #: document named in front of clauses, '' for the calculation's own code
    document: str
    #: label of this file's code, to recognise a citation of it
    read_part: Callable[[str, Span], PartBody | None]
    problems: Problems

    def lines(self, nodes: tuple[Node, ...]) -> tuple[Line, ...]:
        """Read a list of lines."""
        if len(nodes) > MOST_LINES:
            self.problems.add("file-too-large", nodes[0].span.part(0, 1), "too many lines in one list",
                              expected=f"{MOST_LINES} at most", found=f"{len(nodes)}")  # fmt: skip
            return ()
        found = (self.line(node) for node in nodes)
        return tuple(line for line in found if line is not None)

    def line(self, node: Node) -> Line | None:
        """Read one line by its kind."""
        mapping = as_mapping(node, "a line", self.problems)
        if mapping is None:
            return None
        keys = [key.text for key, _ in mapping.entries]
        kind = next((key for key in keys if key in _KINDS and not (key == "branches" and "gives" in keys)), "")
        if not kind:
            first = mapping.entries[0][0] if mapping.entries else None
            word = first.text if first else ""
            self.problems.add(
                "unknown-line", first.span if first else mapping.span.part(0, 1), "this is not a kind of line",
                expected="a line that begins with one of " + ", ".join(_KINDS), found=word[:40] or "nothing",
                hint=nearest(word, _KINDS),
            )  # fmt: skip
            return None
        fields = Fields(mapping, (kind, *_KINDS[kind], "only"), f"a `{kind}` line", self.problems)
        readers: dict[str, Callable[[Fields], Line | None]] = {
            "gives": self.gives, "branches": self.branches, "rows": self.rows, "each": self.each,
            "part": self.part, "check": self.check, "require": self.require, "figure": self.figure,
        }  # fmt: skip
        reader = readers.get(kind)
        return reader(fields) if reader else self.text(kind, fields)

    # -------------------------------------------------------- pieces

    def formula(self, node: Node | None) -> Expression | None:
        """Parse a formula from a text node."""
        scalar = as_scalar(node, "a formula", self.problems) if node is not None else None
        return read_formula(scalar.text, scalar.span, self.problems, self.place) if scalar else None

    def condition(self, node: Node | None) -> Condition | None:
        """Parse a condition from a text node."""
        scalar = as_scalar(node, "a condition", self.problems) if node is not None else None
        return read_condition(scalar.text, scalar.span, self.problems, self.place) if scalar else None

    def cite(self, fields: Fields) -> Citation:
        """Read the citation a line must have."""
        scalar = fields.scalar("cite")
        if scalar is None:
            self.problems.add(
                "no-cite", fields.span.part(0, 1), f"{fields.what} has no citation",
                expected="`cite:` with a clause, geometry or statics", found="no `cite`",
            )  # fmt: skip
            return Citation("", "")
        return self.citation(scalar.text)

    def citation(self, text: str) -> Citation:
        """Split 'ASCE/SEI 7: 2.3.1' into document and clause; a bare clause is of this file's code."""
        if text in ("geometry", "statics"):
            return Citation("", text)
        document, mark, clause = text.partition(": ")
        return Citation(document, clause) if mark else Citation(self.document, text)

    def name(self, scalar: Scalar) -> Name:
        """Take a text node as a symbol."""
        return Name(scalar.text, scalar.span)

    def pieces(self, scalar: Scalar) -> tuple[str | Name, ...]:
        """Split words at `{symbol}`."""
        found: list[str | Name] = []
        at = 0
        for match in _PIECE.finditer(scalar.text):
            if match.start() > at:
                found.append(scalar.text[at : match.start()])
            found.append(Name(match[1], scalar.span.part(match.start(1), match.end(1))))
            at = match.end()
        if at < len(scalar.text):
            found.append(scalar.text[at:])
        return tuple(found)

    # -------------------------------------------------------- kinds

    def text(self, kind: str, fields: Fields) -> Line | None:
        scalar = fields.scalar(kind, required=True)
        cite = fields.text("cite")
        if scalar is None:
            return None
        cited = self.citation(cite) if cite else None
        return Text(kind, self.pieces(scalar), cited, fields.span)  # type: ignore[arg-type]

    def gives(self, fields: Fields) -> Line | None:
        name = fields.scalar("gives", required=True)
        if name is None:
            return None
        symbol = self.symbol(name, fields)
        cite = self.cite(fields)
        arms = self.arms(fields)
        cited = self.equation(fields.scalar("as cited"))
        if symbol is None or not arms:
            return None
        return Gives(symbol, arms, cite, cited, fields.span, name.span)

    def symbol(self, name: Scalar, fields: Fields) -> Symbol | None:
        base = self.table.get(name.text)
        if base is None and not any(fields.has(key) for key in ("unit", "one of", "kind")):
            return find_symbol(name.text, name.span, self.table, self.problems)
        own = Mapping(tuple(e for e in fields.node.entries if e[0].text in ("unit", "says", "shows", "places", "kind", "one of")), fields.span)  # fmt: skip
        return read_symbol(name.text, Fields(own, ("unit", "says", "shows", "places", "kind", "one of"), f"the symbol `{name.text}`", self.problems), base, self.problems)  # fmt: skip

    def arms(self, fields: Fields) -> tuple[Arm, ...]:
        if fields.has("formula"):
            formula = self.formula(fields.node_of("formula"))
            return (Arm(None, formula),) if formula is not None else ()
        if not fields.has("branches"):
            fields.say_missing("formula")
            return ()
        nodes = fields.items("branches")
        arms: list[Arm] = []
        for place, node in enumerate(nodes):
            entry = as_mapping(node, "a branch", self.problems)
            if entry is None:
                continue
            arm = Fields(entry, ("when", "formula", "otherwise"), "a branch", self.problems)
            last = arm.has("otherwise")
            if last and place < len(nodes) - 1:
                self.say_last(arm)
            formula = self.formula(arm.node_of("otherwise" if last else "formula"))
            when = None if last else self.condition(arm.node_of("when"))
            if not last and not (arm.has("when") and arm.has("formula")):
                arm.say_missing("formula" if arm.has("when") else "when")
            if formula is not None and (last or when is not None):
                arms.append(Arm(when, formula))
        self.need_otherwise(nodes, fields)
        return tuple(arms)

    def say_last(self, arm: Fields) -> None:
        self.problems.add("no-otherwise", arm.span.part(0, 1), "`otherwise` stands before another branch",
                          expected="`otherwise` last", found="more branches after it")  # fmt: skip

    def need_otherwise(self, nodes: tuple[Node, ...], fields: Fields) -> None:
        last = nodes[-1] if nodes else None
        if not (isinstance(last, Mapping) and last.get("otherwise") is not None):
            self.problems.add(
                "no-otherwise", fields.span_of("branches").part(0, 1), "the branches leave a case open",
                expected="`otherwise` as the last branch", found="no `otherwise`",
            )  # fmt: skip

    def equation(self, scalar: Scalar | None) -> tuple[Expression, Expression] | None:
        if scalar is None:
            return None
        left, sign, right = scalar.text.partition("=")
        if not sign:
            self.problems.add("no-equation", scalar.span, "`as cited` is not an equation", expected="left = right",
                              found=scalar.text[:60])  # fmt: skip
            return None
        at = len(left) + 1
        one = read_formula(left, scalar.span.part(0, len(left)), self.problems, self.place)
        other = read_formula(right, scalar.span.part(at, len(scalar.text)), self.problems, self.place)
        return (one, other) if one is not None and other is not None else None

    def branches(self, fields: Fields) -> Line | None:
        nodes = fields.items("branches")
        arms: list[BranchArm] = []
        for place, node in enumerate(nodes):
            entry = as_mapping(node, "a branch", self.problems)
            if entry is None:
                continue
            arm = Fields(entry, ("when", "lines", "otherwise"), "a branch", self.problems)
            last = arm.has("otherwise")
            if last and place < len(nodes) - 1:
                self.say_last(arm)
            when = None if last else self.condition(arm.node_of("when"))
            lines = self.lines(arm.items("otherwise" if last else "lines"))
            if last or when is not None:
                arms.append(BranchArm(when, lines, entry.span))
        self.need_otherwise(nodes, fields)
        return Branches(tuple(arms), fields.span)

    def each(self, fields: Fields) -> Line | None:
        rows = fields.scalar("each", required=True)
        if rows is None:
            return None
        show = fields.choice("show", ("every", "figure"))
        table = tuple(self.name(scalar) for scalar in fields.texts("table"))
        return Each(self.name(rows), self.lines(fields.items("lines", required=True)), table, show, fields.span)  # type: ignore[arg-type]

    def check(self, fields: Fields) -> Line | None:
        name = fields.text("check", required=True)
        holds = self.condition(fields.node_of("holds"))
        if not fields.has("holds"):
            fields.say_missing("holds")
        cite = self.cite(fields)
        return Check(name, holds, fields.text("says"), cite, fields.span) if holds is not None else None

    def require(self, fields: Fields) -> Line | None:
        condition = self.condition(fields.node_of("require"))
        says = fields.text("says", required=True)
        cite = self.cite(fields)
        return Require(condition, says, cite, fields.span) if condition is not None else None

    def figure(self, fields: Fields) -> Line | None:
        kind = fields.text("figure", required=True)
        inputs: list[tuple[Name, Expression]] = []
        mapping = fields.mapping("with")
        for key, value in mapping.entries if mapping else ():
            formula = self.formula(value)
            if formula is not None:
                inputs.append((self.name(key), formula))
        return Drawing(kind, tuple(inputs), fields.span)

    def part(self, fields: Fields) -> Line | None:
        name = fields.scalar("part", required=True)
        if name is None:
            return None
        same = tuple(self.name(scalar) for scalar in fields.texts("same"))
        handed: list[tuple[Name, Expression | str]] = []
        mapping = fields.mapping("with")
        for key, value in mapping.entries if mapping else ():
            formula = self.formula(value)
            if formula is not None:
                handed.append((self.name(key), formula))
        body = self.read_part(name.text, name.span)
        return PartUse(body, name.text, fields.text("as"), same, tuple(handed), fields.span)

    # -------------------------------------------------------- rows

    def rows(self, fields: Fields) -> Line | None:
        name = fields.text("rows", required=True)
        cite = self.cite(fields)
        columns = self.columns(fields.mapping("columns", required=True))
        entries = [self.entry(node, columns) for node in fields.items("list", required=True)]
        kept = tuple(entry for entry in entries if entry is not None)
        return Rows(name, columns, kept, fields.text("says"), cite, fields.span)

    def columns(self, node: Mapping | None) -> tuple[MadeColumn, ...]:
        found: list[MadeColumn] = []
        for key, value in node.entries if node else ():
            empty = isinstance(value, Scalar) and not value.text
            entry = Mapping((), key.span) if empty else as_mapping(value, f"the column `{key.text}`", self.problems)
            if entry is None:
                continue
            fields = Fields(entry, ("unit", "says", "shows", "places", "kind", "one of", "over", "else"),
                            f"the column `{key.text}`", self.problems)  # fmt: skip
            symbol = self.symbol(key, fields)
            other = self.formula(fields.node_of("else"))
            if symbol is not None:
                found.append(MadeColumn(symbol, fields.text("over"), other, key.span))
        return tuple(found)

    def entry(self, node: Node, columns: tuple[MadeColumn, ...]) -> Entry | None:
        mapping = as_mapping(node, "a row", self.problems)
        if mapping is None:
            return None
        names = tuple(column.symbol.name for column in columns)
        fields = Fields(mapping, ("name", "for", "when", *names), "a row", self.problems)
        cells: list[tuple[str, Cell]] = []
        for column in columns:
            cell_node = fields.node_of(column.symbol.name)
            if cell_node is None:
                fields.say_missing(column.symbol.name)
                continue
            cell = self.cell(cell_node, column)
            if cell is not None:
                cells.append((column.symbol.name, cell))
        when = self.condition(fields.node_of("when"))
        return Entry(fields.text("name"), self.pairing(fields), tuple(cells), when, mapping.span)

    def cell(self, node: Node, column: MadeColumn) -> Cell | None:
        if not column.over:
            formula = self.formula(node)
            return Cell(formula, (), node.span) if formula is not None else None
        mapping = as_mapping(node, f"a cell of `{column.symbol.name}`", self.problems)
        mapped: list[tuple[str, Expression]] = []
        for key, value in mapping.entries if mapping else ():
            formula = self.formula(value)
            if formula is not None:
                mapped.append((key.text, formula))
        return Cell(None, tuple(mapped), node.span)

    def pairing(self, fields: Fields) -> tuple[tuple[str, tuple[str, ...]], ...]:
        mapping = fields.mapping("for")
        found: list[tuple[str, tuple[str, ...]]] = []
        for key, value in mapping.entries if mapping else ():
            scalar = as_scalar(value, "`for`", self.problems)
            if scalar is not None:
                found.append((key.text, tuple(word.strip() for word in scalar.text.split("|"))))
        return tuple(found)
