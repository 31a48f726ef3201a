"""Case files beside templates: given values, expected results, and the source of each expectation.

Text in, `Case` records out. A case whose expectation names no source is a problem. An entry `no case` gives the reason
why something of the template is reached by none.
"""

from __future__ import annotations

from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount, read_amount
from calcreport.core.source import Source
from calcreport.core.units import dimension_words
from calcreport.read.editions import ANY
from calcreport.read.fields import Fields, as_items, as_mapping
from calcreport.read.library import Library
from calcreport.read.model import EVERY, SYSTEMS, Calculation, Case, CaseFile, Expected, Reason, Template
from calcreport.read.nodes import Mapping, Node, Scalar, read_tree
from calcreport.read.roles import roles_of
from calcreport.read.single_values import Material
from calcreport.read.values import ValueReader, is_complete

KEYS = ("case", "units", "year", "given", "materials", "expect", "stops")
#: keys of an entry that says why no case reaches something
REASON_KEYS = ("no case", "because")
STOPS_KEYS, EXPECTED_KEYS = ("line", "source"), ("value", "tol", "outcome", "ratio", "source")
#: what a check may come to; a limit state that a caution may leave out is not covered or not applicable
VERDICTS = ("OK", "NG", "not applicable", "not evaluated", "not covered")


def read_cases(template: str, source: Source, library: Library, problems: Problems) -> CaseFile:
    """Read a case file; each case is bound to its template for its system and year."""
    root = read_tree(source, problems)
    items = as_items(root, "a case file", problems) if root is not None else ()
    found: list[Case] = []
    reasons: list[Reason] = []
    for item in items:
        mapping = as_mapping(item, "a case", problems)
        if mapping is None:
            continue
        if mapping.get("no case") is not None:
            reasons.append(_reason(mapping, problems))
            continue
        case = _CaseReader(template, mapping, library, problems).read()
        if case is not None:
            found.append(case)
    return CaseFile(tuple(found), tuple(reasons))


def _reason(mapping: Mapping, problems: Problems) -> Reason:
    fields = Fields(mapping, REASON_KEYS, "an entry `no case`", problems)
    what, because = fields.text("no case", required=True), fields.text("because", required=True)
    return Reason(" ".join(what.split()), because, fields.span_of("no case"))


class _CaseReader:
    """Reads one case."""

    def __init__(self, template: str, node: Mapping, library: Library, problems: Problems) -> None:
        self.template, self.node, self.library, self.problems = template, node, library, problems
        self.fields = Fields(node, KEYS, "a case", problems)

    def read(self) -> Case | None:
        before = self.problems.met
        fields = self.fields
        name = fields.text("case", required=True)
        stops = self.stops()
        expect = fields.mapping("expect", required=not fields.has("stops"))
        expected = tuple(self.expected(key, node) for key, node in expect.entries) if expect else ()
        settled = self.settled()
        if settled is None:
            return None
        materials = self.materials()
        if "materials" in fields.mistaken:
            materials = dict.fromkeys(roles_of(settled.body.given))
        reader = ValueReader(
            materials, self.library.bar_table(self.template, settled.system), self.node.span, self.problems
        )
        told = settled.body.told
        given = fields.mapping("given") or Mapping((), self.node.span)
        if EVERY in told:
            return None
        # what the template could not be read to take is no mistake of the case
        given = Mapping(tuple(entry for entry in given.entries if entry[0].text not in told), given.span)
        values = reader.read(settled.body.given, given, f"the case `{name[:60]}`")
        if self.problems.met > before or not is_complete(values, settled.body.given):
            return None
        calculation = Calculation("CASE", name, settled, values, "", self.node.span)
        return Case(name, calculation, tuple(e for e in expected if e is not None), stops, self.node.span)

    def settled(self) -> Template | None:
        """Return the template for the case's system and year."""
        stated = self.fields.choice("units", SYSTEMS, required=True)
        head = self.library.head(self.template, self.node.span)
        system = next((s for s in SYSTEMS if s == stated), None)
        if head is None or system is None:
            return None
        year = self.fields.text("year") or (head.years[0] if len(head.years) == 1 else "")
        code = dict(head.codes).get(system, "")
        if not year and head.years:
            self.fields.say_missing("year")
            return None
        at = self.fields.span_of("year" if self.fields.has("year") else "units")
        return self.library.template(self.template, system, tuple(sorted(((code, year), (ANY, "")))), at)

    def materials(self) -> dict[str, Material | None]:
        found: dict[str, Material | None] = {}
        roles = self.fields.mapping("materials")
        for role, value in roles.entries if roles else ():
            properties = as_mapping(value, f"the material `{role.text[:40]}`", self.problems)
            entries = properties.entries if properties else ()
            found[role.text] = role, {k.text: v for k, v in entries if isinstance(v, Scalar)}
        return found

    def stops(self) -> str:
        """Return the words of the requirement it must stop at, '' for none."""
        mapping = self.fields.mapping("stops")
        if mapping is None:
            return ""
        entry = Fields(mapping, STOPS_KEYS, "`stops`", self.problems)
        entry.text("source", required=True)
        return entry.text("line", required=True)

    def expected(self, key: Scalar, node: Node) -> Expected | None:
        what = f"the expectation of `{key.text[:60]}`"
        mapping = as_mapping(node, what, self.problems)
        if mapping is None:
            return None
        fields = Fields(mapping, EXPECTED_KEYS, what, self.problems)
        source = fields.text("source", required=True)
        outcome = fields.choice("outcome", VERDICTS)
        scalar = fields.scalar("value") or fields.scalar("ratio")
        if scalar is None and fields.node_of("outcome") is None:
            fields.say_missing("value")
        value: Amount | str | None = None
        if scalar is not None:
            number = scalar.text[:1].isdigit() or scalar.text[:1] in "-+."
            value = read_amount(scalar.text, scalar.span, self.problems) if number else scalar.text
        return Expected(key.text, value, self.tolerance(fields, value), outcome, source, key.span)

    def tolerance(self, fields: Fields, value: Amount | str | None) -> Amount | None:
        scalar = fields.scalar("tol", required=isinstance(value, Amount))
        found = read_amount(scalar.text, scalar.span, self.problems) if scalar else None
        if scalar and found and isinstance(value, Amount) and found.dimension != value.dimension:
            self.problems.add(
                "unit-mismatch",
                scalar.span,
                "the tolerance is not in the unit of the value",
                expected=dimension_words(value.dimension),
                found=dimension_words(found.dimension),
            )
        return found
