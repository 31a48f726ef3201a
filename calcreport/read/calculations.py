"""Calculations of a project, each bound to its template with its given values typed.

Mappings in, `Calculation` records out; the marks of those that had problems are kept apart.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass, field

from calcreport.core.expression import Name
from calcreport.core.problems import Problems
from calcreport.core.source import Span, TableSource
from calcreport.read.candidates import Choice, read_choice
from calcreport.read.criteria import Criteria
from calcreport.read.editions import Editions
from calcreport.read.fields import Fields, is_empty
from calcreport.read.gathering import Gathered
from calcreport.read.library import Library
from calcreport.read.model import SYSTEMS, Calculation, GivenPairs, GivenRows, GivenValue, System
from calcreport.read.nodes import Mapping, Scalar, Sequence
from calcreport.read.roles import RoleReader, roles_of
from calcreport.read.together import Gatherings, Shared, read_members, read_rows
from calcreport.read.values import RowSource, ValueReader, is_complete

MARK = re.compile(r"[A-Z][A-Za-z0-9]{0,11}")
#: marks of the front sheets and appendices
_RESERVED = ("COVER", "INDEX", "REVISIONS", "CRITERIA", "ASSUMPTIONS", "SUMMARY", "SAMPLER", "A", "B", "C")
KEYS = ("mark", "title", "member", "template", "units", "given", "choose", "pinned", "members", "table")


@dataclass(slots=True)
class CalculationReader:
    """Reads the calculations of one project."""

    library: Library
    gathered: Gathered
    system: System
    editions: Editions
    criteria: Criteria
    problems: Problems
    #: what reads the tables that rows are given from, made when first needed
    tables: Callable[[], RowSource]
    #: marks of calculations that had problems
    poisoned: set[str] = field(default_factory=set)
    #: the shared calculation of every member that has none of its own
    standing: dict[str, str] = field(default_factory=dict)
    gatherings: Gatherings = field(init=False)
    roles: RoleReader = field(init=False)
    _marks: dict[str, Span] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.gatherings = Gatherings()
        self.roles = RoleReader(self.gathered.materials, self.gathered.calculations, KEYS, self.problems)
        for node in self.gathered.calculations:
            mark, members = node.get("mark"), node.get("members")
            for item in members.items if isinstance(members, Sequence) else ():
                own = item.get("mark") if isinstance(item, Mapping) else None
                if isinstance(own, Scalar) and isinstance(mark, Scalar):
                    self.standing[own.text] = mark.text

    def read(self) -> tuple[Calculation, ...]:
        """Return the calculations that had no problem, in written order."""
        found: list[Calculation] = []
        #: a mark that stands twice still is that of the first
        whole: set[str] = set()
        for node in self.gathered.calculations:
            before = self.problems.met
            calculation = self.calculation(node)
            if calculation is not None and self.problems.met == before:
                found.append(calculation)
                whole.add(calculation.mark)
            elif isinstance(mark := node.get("mark"), Scalar) and mark.text not in whole:
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
        member = fields.scalar("member")
        if member is not None and not MARK.fullmatch(member.text):
            self.problems.add("bad-mark", member.span, f"`{member.text[:40]}` cannot be a mark",
                              expected="the mark of the member: a capital letter, then up to 11 letters and digits",
                              found=member.text[:40] or "nothing")  # fmt: skip
        fields.scalar("template", required=True)
        kept = mark is not None and self.mark(mark)
        if mark is None or template is None or self.problems.stand_in(template.files):
            return None
        given = fields.mapping("given")
        if given is None and fields.node_of("given") is not None:
            return None
        bars = self.library.bar_table(template.name, system)
        shared = read_members(fields, template.body.given, roles, self.mark)
        own_roles = shared.roles if shared else ()
        common = tuple(role for role in roles if role not in own_roles)
        materials = self.roles.named(fields, common, template.body.given)
        reader = ValueReader(materials, bars, node.span, self.problems, self.standing, self.criteria, self.tables)
        held = given or Mapping((), node.span)
        least = template.body.least is not None and shared is None
        choice = read_choice(fields, template.body.given, reader, held, least)
        elsewhere = choice.names | frozenset(shared.names if shared else ())
        wanted = tuple(one for one in template.body.given if one.name not in elsewhere)
        node_given = self.once(held, choice, shared)
        values: tuple[GivenValue | GivenRows | GivenPairs, ...] = reader.read(wanted, node_given, _named(mark))
        if not kept or not is_complete(values, wanted):
            return None
        table = self.table(fields, shared)
        if shared is not None:
            values = (*values, read_rows(shared, template, reader, self.roles))
            template = self.gatherings.template(template, shared, table)
        return Calculation(mark.text, title, template, values, node.span.text, mark.span,
                           choice.candidates, choice.pinned, shared.marks if shared else (),
                           member.text if member else "")  # fmt: skip

    def once(self, given: Mapping, choice: Choice, shared: Shared | None) -> Mapping:
        """Return what is given in common, without what candidates choose or members have for themselves."""
        columns = shared.names if shared else ()
        for key, _ in given.entries:
            if (key.text in choice.names and key.text not in choice.by_cells) or key.text in columns:
                by = "the candidates choose it" if key.text in choice.names else "the members have it in a column"
                self.say_twice(key, f"`{key.text[:40]}` is given, and {by}")
        for candidate in choice.candidates[:1]:
            for value in candidate.values:
                if value.given.name in columns:
                    self.problems.add("given-twice", candidate.span.part(0, 1),
                                      f"`{value.given.name}` is chosen, and the members have it in a column",
                                      expected="one place", found="two")  # fmt: skip
        taken = (*choice.names, *columns)
        return Mapping(tuple(entry for entry in given.entries if entry[0].text not in taken), given.span)

    def say_twice(self, key: Scalar, words: str) -> None:
        self.problems.add("given-twice", key.span, words, expected="one place", found="two")

    def table(self, fields: Fields, shared: Shared | None) -> tuple[Name, ...]:
        """Return the symbols that a table of like members is to show."""
        names = tuple(Name(scalar.text, scalar.span) for scalar in fields.texts("table"))
        if names and shared is None:
            at = next(key.span for key, _ in fields.node.entries if key.text == "table")
            self.problems.add("unknown-key", at, "`table` stands without members",
                              expected="`members: [{mark: …}, …]`, or `together: MARK` in a schedule",
                              found="one member")  # fmt: skip
        return names

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


def _named(mark: Scalar) -> str:
    """Return what problems call a calculation; what all rows of a schedule lack is told once."""
    source = mark.span.source
    return f"a row of {source.name[:60]}" if isinstance(source, TableSource) else mark.text[:12]
