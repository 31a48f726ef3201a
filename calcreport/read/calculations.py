"""Calculations of a project, each bound to its template with its given values typed.

Mappings in, `Calculation` records out; the marks of those that had problems are kept apart.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass, field

from calcreport.core.problems import Problems
from calcreport.core.source import Span, TableSource
from calcreport.read.candidates import Choice, read_choice
from calcreport.read.fields import Fields, is_empty
from calcreport.read.gathering import Gathered
from calcreport.read.library import Editions, Library
from calcreport.read.model import SYSTEMS, Calculation, Given, System
from calcreport.read.nodes import Mapping, Scalar
from calcreport.read.single_values import Material
from calcreport.read.values import RowSource, ValueReader, is_complete

MARK = re.compile(r"[A-Z][A-Za-z0-9]{0,11}")
#: marks of the front sheets and appendices
_RESERVED = ("COVER", "INDEX", "REVISIONS", "CRITERIA", "ASSUMPTIONS", "SUMMARY", "SAMPLER", "A", "B", "C")
KEYS = ("mark", "title", "template", "units", "given", "choose", "pinned")


@dataclass(slots=True)
class CalculationReader:
    """Reads the calculations of one project."""

    library: Library
    gathered: Gathered
    system: System
    editions: Editions
    problems: Problems
    #: what reads the tables that rows are given from, made when first needed
    tables: Callable[[], RowSource]
    #: marks of calculations that had problems
    poisoned: set[str] = field(default_factory=set)
    _marks: dict[str, Span] = field(default_factory=dict)

    def read(self) -> tuple[Calculation, ...]:
        """Return the calculations that had no problem, in written order."""
        found: list[Calculation] = []
        for node in self.gathered.calculations:
            before = self.problems.met
            calculation = self.calculation(node)
            if calculation is not None and self.problems.met == before:
                found.append(calculation)
            elif isinstance(mark := node.get("mark"), Scalar):
                self.poisoned.add(mark.text)
        return tuple(found)

    def calculation(self, node: Mapping) -> Calculation | None:
        own = node.get("units")
        system = next((s for s in SYSTEMS if isinstance(own, Scalar) and own.text == s), self.system)
        name = node.get("template")
        template = None
        if isinstance(name, Scalar) and not is_empty(name):
            template = self.library.template(name.text, system, self.editions, name.span)
        # without its template nobody knows which material roles a calculation takes
        roles = roles_of(template.body.given) if template else tuple(k.text for k, _ in node.entries)
        fields = Fields(node, (*KEYS, *roles), "a calculation", self.problems)
        fields.choice("units", SYSTEMS)
        mark = fields.scalar("mark", required=True)
        title = fields.text("title", required=True)
        fields.scalar("template", required=True)
        kept = mark is not None and self.mark(mark)
        if mark is None or template is None or self.problems.stand_in(template.files):
            return None
        given = fields.mapping("given")
        if given is None and fields.node_of("given") is not None:
            return None
        materials = self.materials(fields, roles)
        bars = self.library.bar_table(template.name, system)
        reader = ValueReader(materials, bars, node.span, self.problems, self.tables)
        choice = read_choice(fields, template.body.given, reader)
        wanted = tuple(one for one in template.body.given if one.name not in choice.names)
        values = reader.read(wanted, self.once(given or Mapping((), node.span), choice), _named(mark))
        if not kept or not is_complete(values, wanted):
            return None
        return Calculation(mark.text, title, template, values, node.span.text, mark.span,
                           choice.candidates, choice.pinned)  # fmt: skip

    def once(self, given: Mapping, choice: Choice) -> Mapping:
        """Return what is given without what the candidates choose, which must not be given too."""
        for key, _ in given.entries:
            if key.text in choice.names:
                first = choice.candidates[0].span.part(0, 1)
                self.problems.add("given-twice", key.span, f"`{key.text[:40]}` is given, and the candidates choose it",
                                  expected="one place", found="a given value and candidates",
                                  related=((first, "the candidates"),))  # fmt: skip
        return Mapping(tuple(entry for entry in given.entries if entry[0].text not in choice.names), given.span)

    def mark(self, mark: Scalar) -> bool:
        """Keep a mark: short, not one of the fronts, every one once."""
        if not MARK.fullmatch(mark.text) or mark.text in _RESERVED:
            self.problems.add("bad-mark", mark.span, f"`{mark.text[:40]}` cannot be a mark",
                              expected="a capital letter, then up to 11 letters and digits; not " + " ".join(_RESERVED),
                              found=mark.text[:40] or "nothing")  # fmt: skip
            return False
        if mark.text in self._marks:
            self.problems.add("given-twice", mark.span, f"the mark `{mark.text}` stands twice",
                              expected="every mark once", found=mark.text,
                              related=((self._marks[mark.text], "first here"),))  # fmt: skip
            return False
        self._marks[mark.text] = mark.span
        return True

    def materials(self, fields: Fields, roles: tuple[str, ...]) -> dict[str, Material | None]:
        """Return the materials a calculation names, by role; None for one that is not there."""
        found: dict[str, Material | None] = {}
        known = self.gathered.materials
        for role in roles:
            scalar = fields.scalar(role)
            if scalar is None:
                if fields.node_of(role) is not None:
                    found[role] = None
                continue
            if scalar.text not in known:
                self.problems.add("unknown-name", scalar.span, f"there is no material `{scalar.text[:40]}`",
                                  expected="a mark of `materials`", found=scalar.text[:40],
                                  hint=self.problems.near(scalar.text, known))  # fmt: skip
                found[role] = None
                continue
            key, properties = known[scalar.text]
            found[role] = (key, properties) if properties is not None else None
        return found


def _named(mark: Scalar) -> str:
    """Return what problems call a calculation; what all rows of a schedule lack is told once."""
    source = mark.span.source
    return f"a row of {source.name[:60]}" if isinstance(source, TableSource) else mark.text[:12]


def roles_of(givens: tuple[Given, ...]) -> tuple[str, ...]:
    """Return the material roles of a template, once each."""
    roles = (one.material for given in givens for one in (given, *given.columns) if one.material)
    return tuple(dict.fromkeys(roles))
