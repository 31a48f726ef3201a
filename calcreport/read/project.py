"""The project file and the files it includes, joined with the templates they name.

Text in through the World, `Inputs` out. What stands outside the calculations is read here; the closed lists of
criteria and of editions that belong together are data of the template library.
"""

from __future__ import annotations

import re
from datetime import date
from functools import cache

from calcreport.core.late import load_row_tables, load_schedules, load_tables
from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.core.world import World
from calcreport.read.calculations import CalculationReader
from calcreport.read.codes import Codes, read_codes
from calcreport.read.criteria import CRITERIA, Criteria, read_criteria
from calcreport.read.editions import StatedCodes
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.gathering import Gathered, Gatherer
from calcreport.read.library import Library
from calcreport.read.model import SYSTEMS, Disposition, Inputs, Issue, Project, System
from calcreport.read.nodes import Mapping, Scalar, read_tree

KEYS = ("project", "office", "status", "date", "units", "paper", "codes", "criteria", "materials", "assumptions",
         "elsewhere", "calculations", "schedules", "dispositions", "revisions")  # fmt: skip
HEAD_KEYS, OFFICE_KEYS = ("title", "number", "address", "client", "permit"), ("name", "contact")
ELSEWHERE_KEYS, REVISION_KEYS = ("what", "where"), ("number", "date", "why")
DISPOSITION_KEYS = ("check", "limit state", "says", "covered by")
PAPERS = ("letter", "a4")
#: keys the language has and this version does not read
_LATER = ("attachments",)
STATUSES = ("preliminary", "for review", "for permit", "issued for construction", "superseded", "void")
DATE = re.compile(r"([0-9]{4})-([0-9]{2})-([0-9]{2})")


class ProjectReader:
    """Reads one project."""

    def __init__(
        self, world: World, library: Library, problems: Problems, instead: tuple[str, str] | None = None
    ) -> None:
        self.world, self.library, self.problems = world, library, problems
        #: a field of `codes` and the edition to take in it for comparison
        self.instead = instead

    def read(self, source: Source) -> Inputs | None:
        """Return the inputs, or None where the file has no readable shape."""
        root = read_tree(source, self.problems)
        tree = as_mapping(root, "a project file", self.problems) if root is not None else None
        if tree is None:
            return None
        fields = Fields(tree, KEYS, "a project file", self.problems, _LATER)
        stated = fields.choice("units", SYSTEMS, required=True)
        system: System = "si" if stated == "si" else "us"
        codes = read_codes(fields.mapping("codes", required=True), self.library, self.problems, self.instead)
        units = fields.node_of("units")
        self.library.stated = StatedCodes(units.span if units is not None else None, codes.places)
        criteria = read_criteria(
            fields.mapping("criteria", required=True), self.library.tree(CRITERIA), system, self.problems
        )
        gatherer = Gatherer(self.world, source, self.problems)
        gatherer.gather(fields)
        editions = tuple(sorted(codes.editions.items()))
        gathered = gatherer.gathered
        tables = cache(lambda: load_tables().Tables(self.world, gathered.files, self.problems))
        if stated and gathered.schedules:
            reading = load_schedules().ScheduleReader
            reading(self.library, system, editions, gathered, tables(), self.problems).read()
        reader = CalculationReader(
            self.library, gathered, system, editions, criteria, self.problems,
            lambda: load_row_tables().RowTables(tables()),
        )  # fmt: skip
        # without a unit system no template can be chosen: that one problem is enough
        calculations = reader.read() if stated else ()
        project = self.header(fields, system, codes, criteria, gathered)
        if not stated:
            return None
        if fields.node_of("calculations") is not None and not gathered.calculations:
            self.hold_some(fields)
        return Inputs(project, calculations, frozenset(reader.poisoned))

    def hold_some(self, fields: Fields) -> None:
        """Add a problem for a project without a calculation, unless another says why there is none."""
        if not self.problems:
            at = fields.span_of("calculations").part(0, 1)
            self.problems.add("missing-key", at, "the project holds no calculation", expected="one or more",
                              found="an empty list")  # fmt: skip

    def header(self, fields: Fields, system: System, codes: Codes, criteria: Criteria, gathered: Gathered) -> Project:
        """Read what stands outside the calculations."""
        head = self.block(fields, "project", HEAD_KEYS)
        office = self.block(fields, "office", OFFICE_KEYS)
        paper = fields.choice("paper", PAPERS) or ("letter" if system == "us" else "a4")
        return Project(
            title=head.text("title", required=True) if head else "",
            number=head.text("number", required=True) if head else "",
            address=head.text("address", required=True) if head else "",
            client=head.text("client") if head else "",
            permit=head.text("permit") if head else "",
            office=office.text("name", required=True) if office else "",
            contact=office.text("contact") if office else "",
            status=fields.choice("status", STATUSES, required=True),
            date=self.date(fields.scalar("date", required=True)),
            paper="a4" if paper == "a4" else "letter",
            system=system,
            codes=codes.rows,
            amendments=codes.amendments,
            editions=tuple(sorted(codes.editions.items())),
            criteria=criteria.rows,
            materials=tuple(
                (mark, tuple((name, scalar.text) for name, scalar in (found or {}).items() if scalar is not None))
                for mark, (_, found) in gathered.materials.items()
            ),
            assumptions=tuple(gathered.assumptions),
            elsewhere=self.elsewhere(fields),
            dispositions=self.dispositions(fields),
            issues=self.revisions(fields),
            files=tuple(gathered.files),
            foreign=codes.foreign,
        )

    def block(self, fields: Fields, key: str, keys: tuple[str, ...]) -> Fields | None:
        """Return the fields of a required mapping."""
        mapping = fields.mapping(key, required=True)
        return Fields(mapping, keys, f"`{key}`", self.problems) if mapping is not None else None

    def date(self, scalar: Scalar | None) -> str:
        """Read a date as year-month-day."""
        return read_date(scalar, self.problems)

    def elsewhere(self, fields: Fields) -> tuple[tuple[str, str], ...]:
        """Read what this package leaves to others."""
        rows: list[tuple[str, str]] = []
        for mapping in self.mappings(fields, "elsewhere", "an entry of `elsewhere`"):
            entry = Fields(mapping, ELSEWHERE_KEYS, "an entry of `elsewhere`", self.problems)
            rows.append((entry.text("what", required=True), entry.text("where", required=True)))
        return tuple(rows)

    def dispositions(self, fields: Fields) -> tuple[Disposition, ...]:
        """Read the engineer's word on checks and limit states."""
        found: list[Disposition] = []
        for mapping in self.mappings(fields, "dispositions", "a disposition"):
            entry = Fields(mapping, DISPOSITION_KEYS, "a disposition", self.problems)
            check, state = entry.scalar("check"), entry.scalar("limit state")
            if check is None and state is None:
                entry.say_missing("check")
                continue
            says = entry.text("says", required=True) if check else entry.text("covered by", required=True)
            named = check or state
            assert named is not None
            found.append(Disposition(check.text if check else "", state.text if state else "", says, named.span))
        return tuple(found)

    def revisions(self, fields: Fields) -> tuple[Issue, ...]:
        """Read the revision record."""
        if fields.node_of("revisions") is None:
            fields.say_missing("revisions")
        found: list[Issue] = []
        for mapping in self.mappings(fields, "revisions", "a revision"):
            entry = Fields(mapping, REVISION_KEYS, "a revision", self.problems)
            found.append(Issue(entry.text("number", required=True), self.date(entry.scalar("date", required=True)),
                               entry.text("why", required=True)))  # fmt: skip
        return tuple(found)

    def mappings(self, fields: Fields, key: str, what: str) -> tuple[Mapping, ...]:
        """Return the entries of a list that must be mappings."""
        found = (as_mapping(item, what, self.problems) for item in fields.items(key))
        return tuple(mapping for mapping in found if mapping is not None)


def read_date(scalar: Scalar | None, problems: Problems) -> str:
    """Read a date as year-month-day; '' after adding `not-a-date`."""
    if scalar is None:
        return ""
    match = DATE.fullmatch(scalar.text)
    try:
        if match is not None:
            return date(int(match[1]), int(match[2]), int(match[3])).isoformat()
    except ValueError:
        pass
    problems.add("not-a-date", scalar.span, f"`{scalar.text[:40]}` is not a date",
                 expected="year-month-day, such as 2026-11-16", found=scalar.text[:40])  # fmt: skip
    return ""
