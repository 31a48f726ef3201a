"""The body of a template or of an entry of its `parts`: symbols, given declarations, lines.

Settled mappings in, `PartBody` records out. An entry is read once, however often it is used.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

from calcreport.core.expression import Name
from calcreport.core.problems import Problems
from calcreport.core.source import Span
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.formulas import FormulaReader
from calcreport.read.given import read_givens
from calcreport.read.lines import LineReader
from calcreport.read.lost import lost_givens
from calcreport.read.made_rows import ReadTable
from calcreport.read.model import EVERY, Given, PartBody
from calcreport.read.nodes import Mapping, Node
from calcreport.read.symbols import Table, read_symbols

TEMPLATE_KEYS = ("template", "title", "code", "units", "covers", "excludes", "gives", "least", "notation", "symbols",
                 "given", "parts", "lines")  # fmt: skip
PART_KEYS = ("given", "lines", "gives", "title")


@dataclass(slots=True)
class BodyReader:
    """Reads the bodies of one template file for one system and year."""

    #: notation of the folder; the file's own symbols are put on top
    table: Table
    #: which argument `by_units` takes
    place: int
    document: str
    #: reads a part that is a template file of its own
    read_file: Callable[[str, Span], PartBody | None]
    #: takes the cells of a table beside the file
    read_table: ReadTable
    problems: Problems
    _entries: dict[str, Node] = field(default_factory=dict)
    _read: dict[str, PartBody | None] = field(default_factory=dict)
    _open: list[str] = field(default_factory=list)
    #: whether `parts` stands there and could not be read
    _unread: bool = False

    def template(self, settled: Mapping, title: str) -> tuple[PartBody, tuple[str, ...]]:
        """Return a template's body and the limit states it leaves out."""
        fields = Fields(settled, TEMPLATE_KEYS, "a template", self.problems)
        own = fields.mapping("symbols")
        self.table.update(read_symbols(own, self.problems) if own else {})
        parts = fields.mapping("parts")
        self._unread = parts is None and fields.node_of("parts") is not None
        self._entries.update({key.text: value for key, value in parts.entries} if parts else {})
        body = self._body(fields, title, sees_user=False)
        for key, _ in parts.entries if parts else ():
            if key.text not in self._read:
                self.part(key.text, key.span)
        return body, tuple(s.text for s in fields.texts("excludes"))

    def part(self, name: str, span: Span) -> PartBody | None:
        """Return a part by its name: an entry of this file's `parts`, or another template."""
        if name not in self._entries:
            return None if self._unread else self.read_file(name, span)
        if name in self._open:
            self.problems.add(
                "part-loop",
                span,
                f"the part `{name[:40]}` uses itself",
                expected="parts that lead to an end",
                found=" → ".join([*self._open[-3:], name]),
            )
            return None
        if name not in self._read:
            self._open.append(name)
            mapping = as_mapping(self._entries[name], f"the part `{name[:40]}`", self.problems)
            fields = Fields(mapping, PART_KEYS, f"the part `{name[:40]}`", self.problems) if mapping else None
            self._read[name] = self._body(fields, fields.text("title"), sees_user=True) if fields else None
            self._open.pop()
        return self._read[name]

    def _body(self, fields: Fields, title: str, *, sees_user: bool) -> PartBody:
        given = fields.mapping("given")
        givens: tuple[Given, ...] = read_givens(given, self.table, self.problems) if given else ()
        formulas = FormulaReader(self.table, self.place, self.problems)
        lines = LineReader(formulas, self.document, self.part, self.read_table, self.problems).lines(
            fields.items("lines", required=True)
        )
        told = lost_givens(fields.node_of("given"), givens) if self.problems else frozenset()
        return PartBody(
            title=title,
            given=givens,
            lines=lines,
            gives=tuple(Name(scalar.text, scalar.span) for scalar in fields.texts("gives")),
            sees_user=sees_user,
            least=next((Name(s.text, s.span) for s in (fields.scalar("least"),) if s), None) if not sees_user else None,
            covers=tuple(s.text for s in fields.texts("covers")) if not sees_user else (),
            span=fields.span,
            told=frozenset({EVERY}) if "given" in fields.mistaken else told,
        )
