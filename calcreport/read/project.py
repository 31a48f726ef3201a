"""The project file and the files it includes, joined with the templates they name.

Text in through the World, `Inputs` out. The closed lists of criteria and of editions that belong together are
data of the template library (`criteria.yaml`, `codes.yaml`).
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from calcreport.core.problems import Problems, nearest
from calcreport.core.quantity import read_amount
from calcreport.core.source import Source, Span
from calcreport.core.units import read_unit
from calcreport.core.world import World
from calcreport.read.fields import Fields, as_mapping, as_scalar, say_not_a_word
from calcreport.read.library import Library, split_code
from calcreport.read.model import (
    SYSTEMS,
    Assumption,
    Calculation,
    Disposition,
    Given,
    Inputs,
    Issue,
    Project,
    System,
    Template,
)
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, read_tree
from calcreport.read.values import ValueReader

_KEYS = ("project", "office", "status", "date", "units", "paper", "codes", "criteria", "materials", "assumptions",
         "elsewhere", "calculations", "dispositions", "revisions")  # fmt: skip
STATUSES = ("preliminary", "for review", "for permit", "issued for construction", "superseded", "void")
_MARK = re.compile(r"[A-Z][A-Za-z0-9]{0,11}")
_RESERVED = ("COVER", "INDEX", "REVISIONS", "CRITERIA", "ASSUMPTIONS", "SUMMARY", "A", "B", "C")
_DATE = re.compile(r"(\d{4})-(\d{2})-(\d{2})")
MOST_CALCULATIONS, DEEPEST_INCLUDE = 20_000, 5


@dataclass(slots=True)
class _Gathered:
    """What the project file and its includes hold, before calculations are bound."""

    files: list[Source] = field(default_factory=list)
    materials: dict[str, tuple[Scalar, Mapping]] = field(default_factory=dict)
    assumptions: list[Assumption] = field(default_factory=list)
    calculations: list[Mapping] = field(default_factory=list)


class ProjectReader:
    """Reads one project."""

    def __init__(self, world: World, library: Library, problems: Problems) -> None:
        self.world, self.library, self.problems = world, library, problems
        self.gathered = _Gathered()

    def read(self, source: Source) -> Inputs | None:
        """Return the inputs, or None where the file has no readable shape."""
        root = read_tree(source, self.problems)
        tree = as_mapping(root, "a project file", self.problems) if root is not None else None
        if tree is None:
            return None
        self.gathered.files.append(source)
        fields = Fields(tree, _KEYS, "a project file", self.problems)
        system = fields.choice("units", SYSTEMS, required=True)
        if system != "us" and system != "si":
            return None
        editions, codes, amendments = self.codes(fields.mapping("codes", required=True))
        self.gather(fields, 0)
        project = self.header(fields, system, editions, codes, amendments)
        calculations = self.calculations(system, tuple(sorted(editions.items())))
        return Inputs(project, calculations)

    # -------------------------------------------------------- header

    def header(
        self, fields: Fields, system: System, editions: dict[str, str], codes: tuple[tuple[str, str], ...], amendments: str
    ) -> Project:
        """Read what stands outside the calculations."""
        head = Fields(fields.mapping("project", required=True) or Mapping((), fields.span),
                      ("title", "number", "address", "client", "permit"), "`project`", self.problems)  # fmt: skip
        office = Fields(fields.mapping("office", required=True) or Mapping((), fields.span),
                        ("name", "contact"), "`office`", self.problems)  # fmt: skip
        paper = fields.choice("paper", ("letter", "a4")) or ("letter" if system == "us" else "a4")
        return Project(
            title=head.text("title", required=True),
            number=head.text("number", required=True),
            address=head.text("address", required=True),
            client=head.text("client"),
            permit=head.text("permit"),
            office=office.text("name", required=True),
            contact=office.text("contact"),
            status=fields.choice("status", STATUSES, required=True),
            date=self.date(fields.scalar("date", required=True)),
            paper="a4" if paper == "a4" else "letter",
            system=system,
            codes=codes,
            amendments=amendments,
            editions=tuple(sorted(editions.items())),
            criteria=self.criteria(fields.mapping("criteria", required=True), system),
            materials=tuple(
                (mark, tuple((k.text, getattr(v, "text", "")) for k, v in node.entries))
                for mark, (_, node) in self.gathered.materials.items()
            ),
            assumptions=tuple(self.gathered.assumptions),
            elsewhere=self.elsewhere(fields),
            dispositions=self.dispositions(fields),
            issues=self.revisions(fields),
            files=tuple(self.gathered.files),
        )

    def date(self, scalar: Scalar | None) -> str:
        """Read a date as year-month-day."""
        if scalar is None:
            return ""
        match = _DATE.fullmatch(scalar.text)
        if match is None or not (1 <= int(match[2]) <= 12 and 1 <= int(match[3]) <= 31):
            self.problems.add("not-a-date", scalar.span, f"`{scalar.text[:40]}` is not a date",
                              expected="year-month-day, such as 2026-11-16", found=scalar.text[:40])  # fmt: skip
            return ""
        return scalar.text

    def codes(self, node: Mapping | None) -> tuple[dict[str, str], tuple[tuple[str, str], ...], str]:
        """Read the adopted code and the codes by field; pairs that do not belong together are a problem."""
        if node is None:
            return {}, (), ""
        fields = Fields(node, ("adopted", "concrete", "loads", *self.other_fields()), "`codes`", self.problems)
        adopted = fields.mapping("adopted", required=True)
        entry = Fields(adopted or Mapping((), node.span), ("name", "year", "amendments"), "`adopted`", self.problems)
        name, year = entry.text("name", required=True), entry.text("year", required=True)
        amendments = entry.text("amendments", required=True)
        rows = [("adopted code", f"{name} {year}")]
        editions: dict[str, str] = {}
        for key, value in node.entries:
            scalar = as_scalar(value, f"`{key.text}`", self.problems) if key.text != "adopted" else None
            if scalar is None:
                continue
            parts = split_code(scalar.text)
            if parts is None:
                self.problems.add("no-edition", scalar.span, f"`{scalar.text[:40]}` names no edition",
                                  expected="name and year, such as ACI 318-19", found=scalar.text[:40])  # fmt: skip
                continue
            editions[parts[0]] = parts[1]
            rows.append((key.text, scalar.text))
        for key_name in ("concrete", "loads"):
            fields.scalar(key_name, required=True)
        self.hold_pair(f"{name} {year}", node)
        return editions, tuple(rows), amendments

    def other_fields(self) -> tuple[str, ...]:
        """Return further fields a code may be named for."""
        return ("masonry", "steel", "timber", "soil", "bars")

    def hold_pair(self, adopted: str, node: Mapping) -> None:
        """Hold the codes named against the editions an adopted code refers to, where the library knows it."""
        tree = self.library.tree("codes.yaml", None)
        known = tree.get("adopted") if tree else None
        refers = known.get(adopted) if isinstance(known, Mapping) else None
        if not isinstance(refers, Mapping):
            return
        for key, value in refers.entries:
            stated = node.get(key.text)
            permitted = tuple(s.text for s in value.items if isinstance(s, Scalar)) if isinstance(value, Sequence) else ()
            if isinstance(stated, Scalar) and permitted and stated.text not in permitted:
                self.problems.add(
                    "edition-mix", stated.span, f"{adopted} does not refer to {stated.text[:40]}",
                    expected=" or ".join(permitted), found=stated.text[:40],
                    hint="where a local amendment adopts another edition, name that code as the adopted one",
                )  # fmt: skip

    def criteria(self, node: Mapping | None, system: str) -> tuple[tuple[str, str], ...]:
        """Read the criteria against the library's closed list."""
        tree = self.library.tree("criteria.yaml", None)
        known = tree.get("criteria") if tree else None
        entries = {k.text: v for k, v in known.entries} if isinstance(known, Mapping) else {}
        rows: list[tuple[str, str]] = []
        for key, value in node.entries if node else ():
            scalar = as_scalar(value, f"`{key.text}`", self.problems)
            if key.text not in entries:
                self.problems.add("unknown-key", key.span, f"there is no criterion `{key.text[:40]}`",
                                  expected="one of " + ", ".join(entries), found=key.text[:40],
                                  hint=nearest(key.text, entries))  # fmt: skip
            elif scalar is not None and self.criterion(scalar, key.text, entries[key.text], system):
                rows.append((key.text, scalar.text))
        for key_name, value in entries.items():
            required = value.get("required") if isinstance(value, Mapping) else None
            if getattr(required, "text", "") == "yes" and node is not None and node.get(key_name) is None:
                self.problems.add("missing-key", node.span.part(0, 1), f"the criteria need `{key_name}`",
                                  expected=f"`{key_name}: …`", found="no such key")  # fmt: skip
        return tuple(rows)

    def criterion(self, scalar: Scalar, name: str, entry: Node, system: str) -> bool:
        """Hold one criterion against its entry: a closed list of words, a unit, or free text."""
        if not isinstance(entry, Mapping):
            return True
        words, unit = entry.get("one of"), entry.get("unit")
        if isinstance(words, Sequence):
            listed = tuple(w.text for w in words.items if isinstance(w, Scalar))
            if scalar.text not in listed:
                say_not_a_word(scalar, listed, f"`{name}`", self.problems)
                return False
        if isinstance(unit, Mapping):
            unit = unit.get(system)
        if isinstance(unit, Scalar):
            read = read_unit(unit.text, unit.span, self.problems)
            return read is not None and read_amount(scalar.text, scalar.span, self.problems, read.dimension) is not None
        return True

    def elsewhere(self, fields: Fields) -> tuple[tuple[str, str], ...]:
        """Read what this package leaves to others."""
        rows: list[tuple[str, str]] = []
        for item in fields.items("elsewhere"):
            mapping = as_mapping(item, "an entry of `elsewhere`", self.problems)
            if mapping is not None:
                entry = Fields(mapping, ("what", "where"), "an entry of `elsewhere`", self.problems)
                rows.append((entry.text("what", required=True), entry.text("where", required=True)))
        return tuple(rows)

    def dispositions(self, fields: Fields) -> tuple[Disposition, ...]:
        """Read the engineer's word on checks and limit states."""
        found: list[Disposition] = []
        for item in fields.items("dispositions"):
            mapping = as_mapping(item, "a disposition", self.problems)
            if mapping is None:
                continue
            entry = Fields(mapping, ("check", "limit state", "says", "covered by"), "a disposition", self.problems)
            check, state = entry.text("check"), entry.text("limit state")
            says = entry.text("says") if check else entry.text("covered by", required=True)
            if not check and not state:
                entry.say_missing("check")
            found.append(Disposition(check, state, says, mapping.span))
        return tuple(found)

    def revisions(self, fields: Fields) -> tuple[Issue, ...]:
        """Read the revision record."""
        found: list[Issue] = []
        for item in fields.items("revisions", required=True):
            mapping = as_mapping(item, "a revision", self.problems)
            if mapping is None:
                continue
            entry = Fields(mapping, ("number", "date", "why"), "a revision", self.problems)
            found.append(Issue(entry.text("number", required=True), self.date(entry.scalar("date", required=True)),
                               entry.text("why", required=True)))  # fmt: skip
        return tuple(found)

    # -------------------------------------------------------- gathering

    def gather(self, fields: Fields, depth: int) -> None:
        """Collect materials, assumptions and calculations, through includes."""
        materials = fields.mapping("materials")
        for key, value in materials.entries if materials else ():
            node = as_mapping(value, f"the material `{key.text}`", self.problems)
            if key.text in self.gathered.materials:
                self.problems.add("given-twice", key.span, f"the material `{key.text[:40]}` stands twice",
                                  expected="every mark once", found=key.text[:40],
                                  related=((self.gathered.materials[key.text][0].span, "first here"),))  # fmt: skip
            elif node is not None:
                self.gathered.materials[key.text] = key, node
        for item in fields.items("assumptions"):
            mapping = as_mapping(item, "an assumption", self.problems)
            if mapping is not None:
                entry = Fields(mapping, ("says", "to be verified", "by"), "an assumption", self.problems)
                open_word = entry.choice("to be verified", ("yes", "no"), required=True)
                by = entry.text("by", required=open_word == "yes")
                self.gathered.assumptions.append(
                    Assumption(entry.text("says", required=True), open_word == "yes", by, mapping.span)
                )
        for item in fields.items("calculations", required=True):
            mapping = as_mapping(item, "a calculation", self.problems)
            if mapping is None:
                continue
            include = mapping.get("include")
            if isinstance(include, Scalar):
                Fields(mapping, ("include",), "an include", self.problems)
                self.include(include, depth)
            else:
                self.gathered.calculations.append(mapping)

    def include(self, scalar: Scalar, depth: int) -> None:
        """Read an included file: the same keys for materials, assumptions and calculations."""
        if depth >= DEEPEST_INCLUDE or any(file.name.endswith(scalar.text) for file in self.gathered.files):
            self.problems.add("include-loop", scalar.span, f"`{scalar.text[:60]}` is included without end",
                              expected=f"every file once, {DEEPEST_INCLUDE} deep at most", found=scalar.text[:60])  # fmt: skip
            return
        source = self.world.project_text(scalar.text)
        if isinstance(source, str):
            self.problems.add("no-file", scalar.span, f"`{scalar.text[:60]}` cannot be read",
                              expected="a file inside the project folder", found=source)  # fmt: skip
            return
        self.gathered.files.append(source)
        root = read_tree(source, self.problems)
        tree = as_mapping(root, "an included file", self.problems) if root is not None else None
        if tree is not None:
            keys = ("materials", "assumptions", "calculations")
            self.gather(Fields(tree, keys, "an included file", self.problems), depth + 1)

    # -------------------------------------------------------- calculations

    def calculations(self, system: System, editions: tuple[tuple[str, str], ...]) -> tuple[Calculation, ...]:
        """Bind every calculation to its template and type its given values."""
        found: list[Calculation] = []
        marks: dict[str, Span] = {}
        for node in self.gathered.calculations[:MOST_CALCULATIONS]:
            calculation = self.calculation(node, system, editions, marks)
            if calculation is not None:
                found.append(calculation)
        if not self.gathered.calculations:
            self.problems.add("missing-key", None, "the project holds no calculation", expected="one or more",
                              found="none")  # fmt: skip
        return tuple(found)

    def calculation(
        self, node: Mapping, system: System, editions: tuple[tuple[str, str], ...], marks: dict[str, Span]
    ) -> Calculation | None:
        """Bind one calculation."""
        name = node.get("template")
        own = node.get("units")
        if isinstance(own, Scalar) and (own.text == "us" or own.text == "si"):
            system = "us" if own.text == "us" else "si"
        template = None
        if isinstance(name, Scalar) and name.text:
            template = self.library.template(name.text, system, editions, name.span)
        roles = _roles(template.body.given) if template else tuple(k.text for k, _ in node.entries)
        fields = Fields(node, ("mark", "title", "template", "units", "given", *roles), "a calculation", self.problems)
        fields.choice("units", SYSTEMS)
        mark = fields.scalar("mark", required=True)
        title = fields.text("title", required=True)
        fields.text("template", required=True)
        if mark is None or template is None or not self.mark(mark, marks):
            return None
        given = fields.mapping("given") or Mapping((), node.span)
        materials = self.roles(fields, roles)
        bars = self.library.bar_table(template.name, system)
        values = ValueReader(materials, bars, self.problems).read(template.body.given, given, f"{mark.text}")
        return Calculation(mark.text, title, template, values, node.span.text, mark.span)

    def mark(self, mark: Scalar, marks: dict[str, Span]) -> bool:
        """Keep a mark: short, not one of the fronts, every one once."""
        if not _MARK.fullmatch(mark.text) or mark.text in _RESERVED:
            self.problems.add("bad-mark", mark.span, f"`{mark.text[:40]}` cannot be a mark",
                              expected="a capital letter, then up to 11 letters and digits; not " + " ".join(_RESERVED),
                              found=mark.text[:40])  # fmt: skip
            return False
        if mark.text in marks:
            self.problems.add("given-twice", mark.span, f"the mark `{mark.text}` stands twice",
                              expected="every mark once", found=mark.text,
                              related=((marks[mark.text], "first here"),))  # fmt: skip
            return False
        marks[mark.text] = mark.span
        return True

    def roles(self, fields: Fields, roles: tuple[str, ...]) -> dict[str, tuple[str, dict[str, Scalar]]]:
        """Return the materials a calculation names, by role."""
        found: dict[str, tuple[str, dict[str, Scalar]]] = {}
        for role in roles:
            scalar = fields.scalar(role)
            if scalar is None:
                continue
            if scalar.text not in self.gathered.materials:
                self.problems.add("unknown-name", scalar.span, f"there is no material `{scalar.text[:40]}`",
                                  expected="a mark of `materials`", found=scalar.text[:40],
                                  hint=nearest(scalar.text, self.gathered.materials))  # fmt: skip
                continue
            _, node = self.gathered.materials[scalar.text]
            found[role] = scalar.text, {k.text: v for k, v in node.entries if isinstance(v, Scalar)}
        return found


def _roles(givens: tuple[Given, ...]) -> tuple[str, ...]:
    """Return the material roles of a template, once each."""
    found: list[str] = []
    for given in givens:
        for one in (given, *given.columns):
            if one.material and one.material not in found:
                found.append(one.material)
    return tuple(found)


def template_roles(template: Template) -> tuple[str, ...]:
    """Return the material roles a template reads from."""
    return _roles(template.body.given)
