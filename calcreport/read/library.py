"""Template files, symbol tables and bar tables, each read once; a template settled for a system and a year.

Names in, `Template` records out. Files come through the World; formulas are parsed by `read.lines`.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from calcreport.core.problems import Problems, nearest
from calcreport.core.source import Source, Span
from calcreport.core.world import World
from calcreport.read.bars import BarTable, read_bar_table
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.given import read_givens
from calcreport.read.lines import LineReader
from calcreport.read.model import SYSTEMS, PartBody, Symbol, System, Template
from calcreport.read.nodes import Mapping, read_tree
from calcreport.read.symbols import read_symbols
from calcreport.read.variants import settle

_TEMPLATE_KEYS = ("template", "title", "code", "units", "covers", "excludes", "gives", "notation", "symbols",
                  "given", "parts", "lines")  # fmt: skip
_PART_KEYS = ("given", "lines", "gives", "title")
_CODE = re.compile(r"(.+?)-(\d{2}|\d{4})")
DEEPEST_PART = 8


def split_code(text: str) -> tuple[str, str] | None:
    """Split 'ACI 318-19' into name and year '2019'; None where the text names no edition."""
    match = _CODE.fullmatch(text.strip())
    if match is None:
        return None
    return match[1], match[2] if len(match[2]) == 4 else f"20{match[2]}"


def code_label(name: str, year: str) -> str:
    """Return a code with its edition as the trade writes it: 'ACI 318-19'."""
    return f"{name}-{year[2:]}" if year else name


@dataclass(frozen=True, slots=True)
class TemplateHead:
    """What a template file offers before it is settled."""

    name: str
    title: str
    #: code name by system
    codes: tuple[tuple[System, str], ...]
    years: tuple[str, ...]
    systems: tuple[System, ...]
    tree: Mapping
    source: Source


@dataclass(slots=True)
class Library:
    """Reads files on demand and keeps them for one run."""

    world: World
    problems: Problems
    _trees: dict[str, Mapping | None] = field(default_factory=dict)
    _sources: dict[str, Source] = field(default_factory=dict)
    _symbols: dict[tuple[str, str, str], dict[str, Symbol]] = field(default_factory=dict)
    _templates: dict[tuple[str, str, tuple[tuple[str, str], ...]], Template | None] = field(default_factory=dict)
    #: names of the templates being read, outermost first, and the files each has touched so far
    _open: list[str] = field(default_factory=list)
    _touched: list[set[str]] = field(default_factory=list)

    # -------------------------------------------------------- files

    def tree(self, file: str, span: Span | None) -> Mapping | None:
        """Return the tree of a library file; a file that cannot be read is `no-file` at `span`."""
        for touched in self._touched:
            touched.add(file)
        if file not in self._trees:
            self._trees[file] = None
            found = self.world.template_text(file)
            if isinstance(found, str):
                if span is not None:
                    names = self.world.template_names()
                    self.problems.add("no-template", span, f"there is no template `{file.removesuffix('.yaml')[:60]}`",
                                      expected="a template of the library, or a file beside the project",
                                      found=found, hint=nearest(file.removesuffix(".yaml"), names))  # fmt: skip
                return None
            self._sources[file] = found
            root = read_tree(found, self.problems)
            self._trees[file] = as_mapping(root, "the file", self.problems) if root is not None else None
        return self._trees[file]

    def sources(self) -> tuple[Source, ...]:
        """Return every library file read so far, by name."""
        return tuple(self._sources[name] for name in sorted(self._sources))

    def head(self, name: str, span: Span | None) -> TemplateHead | None:
        """Return what a template file offers."""
        tree = self.tree(f"{name}.yaml", span)
        if tree is None:
            return None
        source = self._sources[f"{name}.yaml"]
        fields = Fields(tree, _TEMPLATE_KEYS, "a template", self.problems)
        systems = tuple(s.text for s in fields.texts("units"))
        if not systems or any(s not in SYSTEMS for s in systems):
            self.problems.add("not-a-word", fields.span_of("units").part(0, 1), "`units` names the systems served",
                              expected="us, si, or both: [us, si]", found=", ".join(systems) or "nothing")  # fmt: skip
            return None
        code = fields.mapping("code", required=True)
        if code is None:
            return None
        entry = Fields(code, ("name", "years"), "`code`", self.problems)
        years = tuple(s.text for s in entry.texts("years"))
        named = entry.node_of("name")
        codes = []
        for system in ("us", "si"):
            if system in systems:
                leaf = settle(named, system, "", self.problems) if named is not None else None
                codes.append((system, getattr(leaf, "text", "")))
        fields.text("template", required=True)
        return TemplateHead(name, fields.text("title", required=True), tuple(codes), years, systems, tree, source)  # type: ignore[arg-type]

    def symbols(self, folder: str, system: str, year: str) -> dict[str, Symbol]:
        """Return the notation of a folder; a folder without a table has none."""
        key = (folder, system, year)
        if key not in self._symbols:
            tree = self.tree(f"{folder}/symbols.yaml" if folder else "symbols.yaml", None)
            settled = settle(tree, system, year, self.problems) if tree else None
            self._symbols[key] = read_symbols(settled, self.problems) if isinstance(settled, Mapping) else {}
        return self._symbols[key]

    def bar_table(self, template: str, system: str) -> BarTable | None:
        """Return the bar table of the folder a template takes its notation from."""
        table = self.tree(self._bar_file(template, system), None)
        return read_bar_table(table, self.problems) if table else None

    def _bar_file(self, template: str, system: str) -> str:
        folder = self._folder(template, self.tree(f"{template}.yaml", None))
        return f"{folder}/bars-{system}.yaml" if folder else f"bars-{system}.yaml"

    def _folder(self, name: str, tree: Mapping | None) -> str:
        notation = tree.get("notation") if tree else None
        return getattr(notation, "text", "") or name.rpartition("/")[0]

    # -------------------------------------------------------- templates

    def template(
        self, name: str, system: System, editions: tuple[tuple[str, str], ...], span: Span | None, document: str = ""
    ) -> Template | None:
        """Return a template for a system and the editions adopted; None after adding why not."""
        key = (name + document, system, editions)
        if key not in self._templates:
            self._touched.append(set())
            self._templates[key] = self._read(name, system, dict(editions), span, document)
            self._touched.pop()
        found = self._templates[key]
        for touched in self._touched:
            touched.update(self._file_names(found))
        return found

    def _file_names(self, template: Template | None) -> tuple[str, ...]:
        files = template.files if template else ()
        return tuple(name for name, source in self._sources.items() if source in files)

    def _read(self, name: str, system: System, editions: dict[str, str], span: Span | None, document: str) -> Template | None:
        head = self.head(name, span)
        if head is None:
            return None
        if system not in head.systems:
            self._say_uncovered(span, head, f"`{name}` does not serve {system} units", " and ".join(head.systems), system)
            return None
        code = dict(head.codes)[system]
        year = editions.get(code, "" if head.years else "-")
        if head.years and year not in head.years:
            offered = ", ".join(code_label(code, y) for y in head.years)
            found = code_label(code, year) if year else f"no edition of {code} among the project's codes"
            self._say_uncovered(span, head, f"`{name}` does not cover this edition", offered, found)
            return None
        settled = settle(head.tree, system, year, self.problems)
        assert isinstance(settled, Mapping)
        if name in self._open or len(self._open) >= DEEPEST_PART:
            self.problems.add("part-loop", span, "parts use one another without end",
                              expected=f"{DEEPEST_PART} parts deep at most", found=" → ".join([*self._open, name]))  # fmt: skip
            return None
        self._open.append(name)
        body, excludes = self._body(head, settled, system, year, editions, document)
        self._open.pop()
        shown = code_label(code, year) if head.years else code
        self.tree(self._bar_file(name, system), None)
        files = tuple(self._sources[file] for file in sorted(self._touched[-1]) if file in self._sources)
        return Template(name, head.title, shown, year, system, excludes, body, head.source, files)

    def _say_uncovered(self, span: Span | None, head: TemplateHead, message: str, expected: str, found: str) -> None:
        self.problems.add("edition-mix", span or head.tree.span.part(0, 1), message, expected=expected, found=found)

    def _body(
        self, head: TemplateHead, settled: Mapping, system: System, year: str, editions: dict[str, str], document: str
    ) -> tuple[PartBody, tuple[str, ...]]:
        fields = Fields(settled, _TEMPLATE_KEYS, "a template", self.problems)
        table = dict(self.symbols(self._folder(head.name, head.tree), system, year))
        own = fields.mapping("symbols")
        table.update(read_symbols(own, self.problems) if own else {})
        entries = {key.text: value for key, value in (fields.mapping("parts") or Mapping((), fields.span)).entries}
        folder = head.name.rpartition("/")[0]

        def read_part(name: str, span: Span) -> PartBody | None:
            if name in entries:
                return self._entry(name, entries[name], reader, table, span)
            path = name if "/" in name or not folder else f"{folder}/{name}"
            label = self._part_document(path, head, system, editions, document)
            part = self.template(path, system, tuple(sorted(editions.items())), span, label)
            return part.body if part else None

        reader = LineReader(table, head.systems.index(system), document, read_part, self.problems)
        given = fields.mapping("given")
        covers = tuple(s.text for s in fields.texts("covers"))
        body = PartBody(
            title=head.title,
            given=read_givens(given, table, self.problems) if given else (),
            lines=reader.lines(fields.items("lines", required=True)),
            gives=tuple(s.text for s in fields.texts("gives")),
            sees_user=False,
            covers=covers,
            span=settled.span,
        )
        return body, tuple(s.text for s in fields.texts("excludes"))

    def _part_document(self, path: str, head: TemplateHead, system: System, editions: dict[str, str], document: str) -> str:
        """Return the document to name before a part's clauses: '' where it is of the user's own code."""
        part = self.head(path, None)
        if part is None or system not in dict(part.codes):
            return document
        code = dict(part.codes)[system]
        if code == dict(head.codes).get(system):
            return document
        if code not in editions and part.years:
            editions[code] = part.years[-1] if "*" in editions else ""
        return code_label(code, editions.get(code, ""))

    def _entry(self, name: str, node: object, reader: LineReader, table: dict[str, Symbol], span: Span) -> PartBody | None:
        mapping = as_mapping(node, f"the part `{name}`", self.problems)  # type: ignore[arg-type]
        if mapping is None:
            return None
        if name in self._open:
            self.problems.add("part-loop", span, f"the part `{name}` uses itself", expected="no loop", found=name)
            return None
        fields = Fields(mapping, _PART_KEYS, f"the part `{name}`", self.problems)
        given = fields.mapping("given")
        self._open.append(name)
        body = PartBody(fields.text("title"), read_givens(given, table, self.problems) if given else (),
                        reader.lines(fields.items("lines", required=True)),
                        tuple(s.text for s in fields.texts("gives")), True, (), mapping.span)  # fmt: skip
        self._open.pop()
        return body
