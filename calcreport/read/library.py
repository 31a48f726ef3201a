"""Template files, symbol tables and bar tables, each read once; a template settled for a system and a year.

Names in, `Template` records out. Files come through the World; formulas are parsed by `read.lines`.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field
from functools import partial

from calcreport.core.late import load_template_tables
from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.core.world import NO_SUCH_FILE, World
from calcreport.read.bars import BarTable, read_bar_table
from calcreport.read.bodies import TEMPLATE_KEYS, BodyReader
from calcreport.read.criteria import hold_criteria
from calcreport.read.editions import ANY, NOWHERE, Editions, StatedCodes, TemplateHead, code_label, hold_served
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import SYSTEMS, PartBody, System, Template
from calcreport.read.nodes import Mapping, Scalar, read_tree
from calcreport.read.symbols import Table, read_symbols
from calcreport.read.variants import settle

YEAR = re.compile(r"(19|20)[0-9]{2}")
CODE_KEYS = ("name", "years")
DEEPEST_PART = 8


def _alike(one: Source | str, other: Source | str) -> bool:
    """Tell whether two readings of a file found the same: one text under one name, or nothing for one reason."""
    if isinstance(one, Source) and isinstance(other, Source):
        return (one.name, one.text, one.folder) == (other.name, other.text, other.folder)
    return one == other


@dataclass(slots=True)
class Library:
    """Reads files on demand and keeps them for one run."""

    world: World
    problems: Problems
    #: where a project states the codes it is worked to
    stated: StatedCodes = NOWHERE
    _found: dict[str, Source | str] = field(default_factory=dict)
    _trees: dict[str, Mapping | None] = field(default_factory=dict)
    _heads: dict[str, TemplateHead | None] = field(default_factory=dict)
    _symbols: dict[tuple[str, str, str], Table] = field(default_factory=dict)
    _bars: dict[str, BarTable | None] = field(default_factory=dict)
    _templates: dict[tuple[str, System, Editions], Template | None] = field(default_factory=dict)
    #: names of the templates being read, outermost first, and the files each has touched so far
    _open: list[str] = field(default_factory=list)
    _touched: list[set[str]] = field(default_factory=list)

    def renew(self, world: World, problems: Problems) -> bool:
        """Take up another run's problems; False where a file is not as it was found, or a problem was told in one."""
        told = self.problems.stand_in(found for found in self._found.values() if isinstance(found, Source))
        if told or any(isinstance(found, str) and found != NO_SUCH_FILE for found in self._found.values()):
            return False
        self.world, self.problems = world, problems
        return all(_alike(world.template_text(file), found) for file, found in self._found.items())

    # -------------------------------------------------------- files

    def tree(self, file: str) -> Mapping | None:
        """Return the tree of a library file; None where there is none, or where it cannot be read."""
        for touched in self._touched:
            touched.add(file)
        return self._tree(file)

    def _tree(self, file: str) -> Mapping | None:
        if file not in self._trees:
            found = self._find(file)
            if isinstance(found, str) and found != NO_SUCH_FILE:
                self.problems.add("no-file", None, f"`{file[:80]}` cannot be read", expected="a text file", found=found)
            root = read_tree(found, self.problems) if isinstance(found, Source) else None
            self._trees[file] = as_mapping(root, "the file", self.problems) if root is not None else None
        return self._trees[file]

    def _find(self, file: str) -> Source | str:
        if file not in self._found:
            self._found[file] = self.world.template_text(file)
        return self._found[file]

    def head(self, name: str, span: Span | None) -> TemplateHead | None:
        """Return what a template file offers; a template that is not there is a problem at `span`."""
        found = self._find(f"{name}.yaml")
        if isinstance(found, str):
            self.problems.add(
                "no-template", span, f"there is no template `{name[:60]}`",
                expected="a template of the library, or a file beside the project", found=found,
                hint=self.problems.near(name, self.world.template_names()),
            )  # fmt: skip
            return None
        if name not in self._heads:
            tree = self.tree(f"{name}.yaml")
            self._heads[name] = self._read_head(name, tree, found) if tree is not None else None
        return self._heads[name]

    def _read_head(self, name: str, tree: Mapping, source: Source) -> TemplateHead | None:
        fields = Fields(tree, TEMPLATE_KEYS, "a template", self.problems)
        fields.text("template", required=True)
        title = fields.text("title", required=True)
        systems = tuple(s.text for s in fields.texts("units"))
        if not systems or any(s not in SYSTEMS for s in systems):
            self.problems.add(
                "not-a-word",
                fields.span_of("units"),
                "`units` names the unit systems served",
                expected="us, si, or both: [us, si]",
                found=", ".join(systems)[:60] or "nothing",
            )
        code = fields.mapping("code", required=True)
        if code is None or not systems or any(s not in SYSTEMS for s in systems):
            return None
        entry = Fields(code, CODE_KEYS, "`code`", self.problems)
        years = entry.texts("years")
        for year in years:
            if not YEAR.fullmatch(year.text):
                self.problems.add("not-a-date", year.span, f"`{year.text[:40]}` is not a year",
                                  expected="four digits, such as 2019", found=year.text[:40])  # fmt: skip
        named = entry.node_of("name")
        if named is None:
            entry.say_missing("name")
            return None
        served = tuple(system for system in SYSTEMS if system in systems)
        leaves = ((system, settle(named, system, "", self.problems)) for system in served)
        codes = tuple((system, leaf.text) for system, leaf in leaves if isinstance(leaf, Scalar))
        if len(codes) < len(served):
            return None
        # in the order written, which is that of `by_units`
        ordered = tuple(s for name in dict.fromkeys(systems) for s in SYSTEMS if s == name)
        return TemplateHead(name, title, codes, tuple(y.text for y in years), ordered, tree, source)

    def symbols(self, folder: str, system: str, year: str) -> Table | None:
        """Return the notation of a folder; a folder without a table has none, None where it cannot be read."""
        key = (folder, system, year)
        file = f"{folder}/symbols.yaml" if folder else "symbols.yaml"
        tree = self.tree(file)
        if tree is None and self._find(file) != NO_SUCH_FILE:
            return None
        if key not in self._symbols:
            settled = settle(tree, system, year, self.problems) if tree else None
            self._symbols[key] = read_symbols(settled, self.problems) if isinstance(settled, Mapping) else {}
        return self._symbols[key]

    def bar_table(self, template: str, system: str) -> BarTable | None:
        """Return the bar table of the folder a template takes its notation from."""
        file = self._bar_file(template, system)
        table = self.tree(file)
        if file not in self._bars:
            self._bars[file] = read_bar_table(table, self.problems) if table else None
        return self._bars[file]

    def _bar_file(self, template: str, system: str) -> str:
        folder = self.folder(template, self.tree(f"{template}.yaml"))
        return f"{folder}/bars-{system}.yaml" if folder else f"bars-{system}.yaml"

    def folder(self, name: str, tree: Mapping | None) -> str:
        """Return the folder a template takes its notation from: its own, or the one it names."""
        notation = tree.get("notation") if tree else None
        return (notation.text if isinstance(notation, Scalar) else "") or name.rpartition("/")[0]

    # -------------------------------------------------------- templates

    def template(
        self, name: str, system: System, editions: Editions, span: Span | None, document: str = ""
    ) -> Template | None:
        """Return a template for a system and the editions adopted; None after adding why not."""
        head = self.head(name, span)
        if head is None or not self._serves(head, system, dict(editions), span):
            return None
        if name in self._open or len(self._open) >= DEEPEST_PART:
            self.problems.add("part-loop", span, "parts use one another without end",
                              expected=f"parts at most {DEEPEST_PART} deep",
                              found=" → ".join([*self._open[-3:], name]))  # fmt: skip
            return None
        key = (name + document, system, editions)
        if key not in self._templates:
            self._touched.append(set())
            self._templates[key] = self._read(head, system, dict(editions), document)
            self._touched.pop()
        found = self._templates[key]
        for touched in self._touched:
            touched.update(self.named(found.files if found else ()))
        return found

    def named(self, files: Iterable[Source]) -> dict[str, Source]:
        """Return files by the names they were asked for."""
        wanted = set(files)
        return {name: found for name, found in self._found.items() if isinstance(found, Source) and found in wanted}

    def _serves(self, head: TemplateHead, system: System, editions: dict[str, str], span: Span | None) -> bool:
        at = span or head.tree.span.part(0, 1)
        return hold_served(head, system, editions, self.stated, at, bool(self._open), self.problems)

    def _read(self, head: TemplateHead, system: System, editions: dict[str, str], document: str) -> Template | None:
        code = head.code(system)
        year = editions.get(code, "") if head.years else ""
        settled = settle(head.tree, system, year, self.problems)
        if not isinstance(settled, Mapping):
            return None
        self._open.append(head.name)
        folder = head.name.rpartition("/")[0]

        def read_part(name: str, span: Span) -> PartBody | None:
            path = name if "/" in name or not folder else f"{folder}/{name}"
            label = self._part_document(path, head, system, editions, document)
            part = self.template(path, system, tuple(sorted(editions.items())), span, label)
            return part.body if part else None

        notation = self.symbols(self.folder(head.name, head.tree), system, year)
        place, table = head.systems.index(system), partial(self.cells, folder)
        reader = BodyReader(dict(notation or {}), place, document, read_part, table, self.problems)
        found = reader.template(settled, head.title) if notation is not None else None
        self._open.pop()
        if found is None:
            return None
        hold_criteria(found[0].given, self._tree, system, self.problems)
        shown = code_label(code, year) if head.years else code
        self.bar_table(head.name, system)
        files = tuple(s for s in (self._found.get(f) for f in sorted(self._touched[-1])) if isinstance(s, Source))
        return Template(head.name, head.title, shown, year, system, found[1], found[0], head.source, files)

    def cells(self, folder: str, file: Scalar, names: tuple[Scalar, ...]) -> tuple[dict[str, Scalar], ...] | None:
        """Return the cells of a table that stands beside a template, by column; None after adding why not."""
        name = f"{folder}/{file.text}" if folder else file.text
        for touched in self._touched:
            touched.add(name)
        reading = load_template_tables()
        source = self._find(name) if reading.is_beside(file, self.problems) else None
        found: tuple[dict[str, Scalar], ...] | None = None
        if source is not None:
            found = reading.read_cells(source, file, names, self.problems)
        return found

    def _part_document(
        self, path: str, head: TemplateHead, system: System, editions: dict[str, str], document: str
    ) -> str:
        """Return the document to name before a part's clauses: '' where it is of the user's own code."""
        part = self.head(path, None) if not isinstance(self._find(f"{path}.yaml"), str) else None
        if part is None or system not in part.systems or part.code(system) == head.code(system):
            return document
        code = part.code(system)
        if code not in editions and part.years and ANY in editions:
            editions[code] = part.years[-1]
        return code_label(code, editions.get(code, ""))
