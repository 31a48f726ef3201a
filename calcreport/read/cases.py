"""Case files beside templates: given values, expected results, and the source of each expectation.

Text in, `Case` records out. A case whose expectation names no source is a problem.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount, read_amount
from calcreport.core.source import Source, Span
from calcreport.read.fields import Fields, as_items, as_mapping
from calcreport.read.library import Library
from calcreport.read.model import Calculation, System
from calcreport.read.nodes import Mapping, Scalar, read_tree
from calcreport.read.values import ValueReader

_KEYS = ("case", "units", "year", "given", "materials", "expect", "stops")


@dataclass(frozen=True, slots=True)
class Expected:
    """One expectation: a value within a tolerance, a word, or the outcome of a check."""

    #: symbol path or check name
    name: str
    value: Amount | str | None
    tolerance: Amount | None
    #: 'OK', 'NG', 'not applicable', 'not evaluated' for a check; '' for a value
    outcome: str
    source: str
    span: Span


@dataclass(frozen=True, slots=True)
class Case:
    """Given values with what an outside source says of them."""

    name: str
    calculation: Calculation
    expected: tuple[Expected, ...]
    #: words of the requirement it must stop at, '' for none
    stops: str
    span: Span


def read_cases(template: str, source: Source, library: Library, problems: Problems) -> tuple[Case, ...]:
    """Read a case file; each case is bound to its template for its system and year."""
    root = read_tree(source, problems)
    items = as_items(root, "a case file", problems) if root is not None else ()
    found = []
    for item in items:
        mapping = as_mapping(item, "a case", problems)
        case = _read_case(template, mapping, library, problems) if mapping else None
        if case is not None:
            found.append(case)
    return tuple(found)


def _read_case(template: str, node: Mapping, library: Library, problems: Problems) -> Case | None:
    fields = Fields(node, _KEYS, "a case", problems)
    name = fields.text("case", required=True)
    system: System = "si" if fields.choice("units", ("us", "si"), required=True) == "si" else "us"
    head = library.head(template, node.span)
    if head is None or system not in head.systems:
        return None
    year = fields.text("year") or (head.years[0] if len(head.years) == 1 else "")
    editions = ((dict(head.codes)[system], year), ("*", ""))
    settled = library.template(template, system, tuple(sorted(editions)), node.span)
    if settled is None:
        return None
    materials: dict[str, tuple[str, dict[str, Scalar]]] = {}
    roles = fields.mapping("materials")
    for role, value in roles.entries if roles else ():
        properties = as_mapping(value, f"the material `{role.text}`", problems)
        entries = properties.entries if properties else ()
        materials[role.text] = role.text, {k.text: v for k, v in entries if isinstance(v, Scalar)}
    reader = ValueReader(materials, library.bar_table(template, system), problems)
    before = len(problems)
    values = reader.read(settled.body.given, fields.mapping("given") or Mapping((), node.span), f"the case `{name}`")
    expected = tuple(_expected(k, v, problems) for k, v in _entries(fields.mapping("expect")))
    if len(problems) > before:
        return None
    calculation = Calculation("CASE", name, settled, values, "", node.span)
    stops = fields.mapping("stops")
    words = ""
    if stops:
        entry = Fields(stops, ("line", "source"), "`stops`", problems)
        words = entry.text("line", required=True)
        entry.text("source", required=True)
    if not stops and not expected:
        fields.say_missing("expect")
    return Case(name, calculation, tuple(e for e in expected if e is not None), words, node.span)


def _entries(node: Mapping | None) -> tuple[tuple[Scalar, object], ...]:
    return node.entries if node else ()


def _expected(key: Scalar, node: object, problems: Problems) -> Expected | None:
    mapping = as_mapping(node, f"the expectation of `{key.text}`", problems)  # type: ignore[arg-type]
    if mapping is None:
        return None
    fields = Fields(mapping, ("value", "tol", "outcome", "ratio", "source"), f"the expectation of `{key.text}`", problems)
    source = fields.text("source", required=True)
    outcome = fields.choice("outcome", ("OK", "NG", "not applicable", "not evaluated"))
    scalar = fields.scalar("value") or fields.scalar("ratio")
    tolerance = fields.scalar("tol")
    value: Amount | str | None = None
    if scalar is not None:
        number = scalar.text[:1].isdigit() or scalar.text[:1] in "-+."
        value = read_amount(scalar.text, scalar.span, problems, None) if number else scalar.text
    within = read_amount(tolerance.text, tolerance.span, problems, None) if tolerance else None
    if isinstance(value, Amount) and within is None:
        fields.say_missing("tol")
    return Expected(key.text, value, within, outcome, source, key.span)
