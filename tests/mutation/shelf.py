"""The template library as the tool needs it: every template in every system and year, with the cases that hold it.

A World in, templates and cases out. What does not read without a problem raises `Unsound`: a mutant of a template that
is wrong already says nothing.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.calculate.cases import run_case
from calcreport.core.problems import Problems, render
from calcreport.core.source import Source
from calcreport.core.world import World
from calcreport.driver import make_plan
from calcreport.read.bars import BarTable
from calcreport.read.cases import read_cases
from calcreport.read.editions import ANY
from calcreport.read.library import Library
from calcreport.read.model import Case, Template
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, read_tree

from .places import Key, Steps, places
from .sources import OUTSIDE, SourceKind, kind_of


class Unsound(Exception):
    """The library has problems of its own, told in the message."""


@dataclass(frozen=True, slots=True)
class Held:
    """A case with the kinds of its sources."""

    case: Case
    #: kind of each expectation's source, in order
    kinds: tuple[SourceKind, ...]
    #: kind of the source of its stop; of a case that must not stop, the best among its expectations
    stop_kind: SourceKind


@dataclass(frozen=True, slots=True)
class Variant:
    """A template settled for one system and year, with its cases and its places."""

    name: str
    template: Template
    cases: tuple[Held, ...]
    steps: dict[Key, tuple[Steps, ...]]
    #: file of the bar table its callouts are read from, without its ending; '' where there is none
    bars: str

    @property
    def words(self) -> str:
        """The system and year: 'us 2019'."""
        return f"{self.template.system} {self.template.year}".strip()


@dataclass(frozen=True, slots=True)
class Shelf:
    """All variants of all templates, in the order of their names."""

    variants: tuple[Variant, ...]
    #: bar tables by the name of their file, without its ending
    bars: tuple[tuple[str, BarTable], ...]

    def of(self, name: str) -> tuple[Variant, ...]:
        """Return the variants of one template."""
        return tuple(variant for variant in self.variants if variant.name == name)

    def readers(self, file: str) -> tuple[Variant, ...]:
        """Return the variants of one template, or those that read one bar table."""
        return tuple(variant for variant in self.variants if file in (variant.name, variant.bars))

    def users(self, name: str, key: Key) -> tuple[Variant, ...]:
        """Return the variants that hold a place, those of the named template first."""
        found = [variant for variant in self.variants if key in variant.steps]
        return tuple(sorted(found, key=lambda variant: variant.name != name))

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the templates."""
        return tuple(dict.fromkeys(variant.name for variant in self.variants))


def read_shelf(world: World) -> Shelf:
    """Read every template and case of a library; raises `Unsound` with what is wrong already."""
    problems = Problems()
    library = Library(world, problems)
    variants: list[Variant] = []
    bars: dict[str, BarTable] = {}
    for name in world.template_names():
        templates = _templates(name, library)
        held = _cases(name, world, library, problems)
        for template in templates:
            own = tuple(h for h in held if h.case.calculation.template is template)
            table = library.bar_table(name, template.system)
            folder = library.folder(name, library.tree(f"{name}.yaml"))
            file = f"{folder}/bars-{template.system}" if table is not None else ""
            variants.append(Variant(name, template, own, _steps(template), file))
            if table is not None:
                bars[file] = table
    if problems:
        raise Unsound(_first(problems))
    shelf = Shelf(tuple(variants), tuple(bars.items()))
    _hold_cases(shelf)
    return shelf


def _first(problems: Problems) -> str:
    return "\n\n".join(render(problem) for problem in problems.sorted()[:5])


def _hold_cases(shelf: Shelf) -> None:
    problems = Problems()
    for variant in shelf.variants:
        plan = make_plan(variant.template, problems)
        for held in variant.cases if plan is not None else ():
            assert plan is not None
            run_case(held.case, plan, problems)
    if problems:
        raise Unsound(_first(problems))


def _templates(name: str, library: Library) -> list[Template]:
    head = library.head(name, None)
    found: list[Template] = []
    for system, code in head.codes if head else ():
        for year in (head.years if head else ()) or ("",):
            template = library.template(name, system, tuple(sorted(((code, year), (ANY, "")))), None)
            found += [template] if template is not None else []
    return found


def _steps(template: Template) -> dict[Key, tuple[Steps, ...]]:
    found: dict[Key, tuple[Steps, ...]] = {}
    for place in places(template.body):
        found[place.key] = (*found.get(place.key, ()), place.steps)
    return found


def _cases(name: str, world: World, library: Library, problems: Problems) -> tuple[Held, ...]:
    source = world.template_text(f"{name}.cases.yaml")
    if not isinstance(source, Source):
        return ()
    stops = _stop_sources(read_tree(source, problems))
    found: list[Held] = []
    for case in read_cases(name, source, library, problems).cases:
        kinds = tuple(kind_of(expected.source) for expected in case.expected)
        best = next((kind for kind in kinds if kind in OUTSIDE), kinds[0] if kinds else "unstated")
        found.append(Held(case, kinds, kind_of(stops[case.span.start]) if case.stops else best))
    return tuple(found)


def _stop_sources(root: Node | None) -> dict[int, str]:
    """Return the words of the source of each stop, by the place of its case."""
    found: dict[int, str] = {}
    for item in root.items if isinstance(root, Sequence) else ():
        stops = item.get("stops") if isinstance(item, Mapping) else None
        source = stops.get("source") if isinstance(stops, Mapping) else None
        found[item.span.start] = source.text if isinstance(source, Scalar) else ""
    return found
