"""The order of the stages that need no paper: read, plan, calculate; and when to stop.

A World and a project's text in; problems and worked values out. `publish` goes on to the report and to paper.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field, replace
from functools import partial

from calcreport.calculate.cases import run_case
from calcreport.calculate.model import Worked, WorkedProject
from calcreport.calculate.project import work_project
from calcreport.calculate.reachable import Reachable, Thing
from calcreport.calculate.reached import Unreached, explained, reached, unreached
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source
from calcreport.core.world import World
from calcreport.plan.closed import supply_closed
from calcreport.plan.dimensions import hold_dimensions
from calcreport.plan.link import link
from calcreport.plan.links import bind_links
from calcreport.plan.model import Plan
from calcreport.plan.proofs import prove_cited
from calcreport.read.as_built import build_otherwise
from calcreport.read.cases import read_cases
from calcreport.read.changes import AsBuilt
from calcreport.read.codes import CODES
from calcreport.read.criteria import CRITERIA
from calcreport.read.editions import ANY
from calcreport.read.library import Library
from calcreport.read.model import Inputs, Template
from calcreport.read.project import ProjectReader

Progress = Callable[[str, int, int], None]


def silent(stage: str, done: int, total: int) -> None:
    """Show no progress."""


@dataclass(frozen=True, slots=True)
class Result:
    """How far a project came: every field after the first problem is None."""

    problems: tuple[Problem, ...]
    #: all that could be worked, also beside problems
    worked: WorkedProject | None = None
    #: files its templates and its closed lists were read from, by the names they are asked for
    templates: dict[str, Source] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class TemplateReport:
    """What `lint` found of a template: problems, and what its cases touch."""

    problems: tuple[Problem, ...]
    variants: tuple[str, ...]
    #: how many agree; None without a case file, or where there were problems before
    cases: int | None
    #: what no case reaches, by place
    unreached: tuple[Unreached, ...]


@dataclass(frozen=True, slots=True)
class Instead:
    """Another edition to work a project to, for comparison and never for a package."""

    #: field of `codes`, and the edition to take in it
    field: str
    edition: str
    #: place of the candidate the design takes, by mark: the comparison takes the same
    taken: dict[str, int]


def work(
    world: World,
    source: Source,
    progress: Progress = silent,
    instead: Instead | None = None,
    kept: Fresh = FRESH,
    status: str = "",
    built: AsBuilt | None = None,
) -> Result:
    """Read, plan and work a project; calculations without problems are worked even beside problems.

    A `status` stands in place of the project's own, as on an earlier issue that is marked superseded.
    With `built` it is worked as built on site, for an answer and never for a package.
    """
    problems = Problems()
    library = kept.last("library")
    if not (isinstance(library, Library) and library.renew(world, problems)):
        library = Library(world, problems)
        kept.put("library", library)
    other = (instead.field, instead.edition) if instead is not None else None
    inputs = ProjectReader(world, library, problems, other).read(source)
    if inputs is None:
        return Result(problems.sorted())
    if instead is not None:
        taken = (replace(c, pinned=instead.taken.get(c.mark, c.pinned)) for c in inputs.calculations)
        inputs = replace(inputs, calculations=tuple(taken))
    if built is not None:
        inputs = build_otherwise(inputs, built, library, problems)
    plans = _plans(inputs, problems, kept)
    inputs = bind_links(inputs, plans, problems)
    worked = work_project(inputs, plans, problems, lambda done, total: progress("working", done, total), kept)
    return Result(problems.sorted(), worked, _files_read(inputs, library))


def _files_read(inputs: Inputs, library: Library) -> dict[str, Source]:
    """Return what was read for the calculations, and the closed lists, whatever else an open project has kept."""
    files = {source for calculation in inputs.calculations for source in calculation.template.files}
    lists = (library.tree(name) for name in (CODES, CRITERIA))
    return library.named(files | {tree.span.source for tree in lists if tree is not None})


def _plans(inputs: Inputs, problems: Problems, kept: Fresh) -> dict[int, Plan]:
    plans: dict[int, Plan] = {}
    templates = {id(c.template): c.template for c in inputs.calculations}.values()
    for template in templates:
        plan = kept.of("plan", id(template), (template,), partial(make_plan, template, problems))
        if plan is not None:
            plans[id(template)] = plan
    return plans


def make_plan(template: Template, problems: Problems) -> Plan | None:
    """Plan a template: names bound, dimensions held, cited equations proved on request only.

    A template with a problem in one of its files is looked through all the same, and then has no plan.
    """
    sound, before = not problems.stand_in(template.files), problems.met
    plan = link(template, problems)
    hold_dimensions(plan, problems)
    return supply_closed(plan) if sound and problems.met == before else None


def lint_template(world: World, name: str) -> TemplateReport:
    """Report every problem of a template in every system and year it offers, then run its cases."""
    problems = Problems()
    library = Library(world, problems)
    head = library.head(name, None)
    variants: dict[str, Template | None] = {}
    plans: dict[int, Plan] = {}
    for system, code in head.codes if head else ():
        for year in (head.years if head else ()) or ("",):
            template = library.template(name, system, tuple(sorted(((code, year), (ANY, "")))), None)
            variants[f"{system} {year}".strip()] = template
    for template in variants.values():
        if template is None:
            continue
        plan = make_plan(template, problems)
        if plan is not None:
            plans[id(template)] = plan
            prove_cited(plan, problems)
    holds = {variant: Reachable(plans[id(template)]) for variant, template in variants.items() if id(template) in plans}
    # a case file is read beside problems of its template too, and worked where there is a plan
    sound = not problems
    cases, missed = _run_cases(world, name, library, holds, problems) if variants else (None, ())
    return TemplateReport(problems.sorted(), tuple(variants), cases if sound else None, missed if sound else ())


def _run_cases(
    world: World, name: str, library: Library, holds: dict[str, Reachable], problems: Problems
) -> tuple[int | None, tuple[Unreached, ...]]:
    """Run the cases of a template; returns how many there are, None without a case file, and what they leave out."""
    source = world.template_text(f"{name}.cases.yaml")
    if isinstance(source, str):
        return None, unreached(holds, set())
    file = read_cases(name, source, library, problems)
    reachable = {id(held.plan.template): held for held in holds.values()}
    found: set[Thing] = set()
    for case in file.cases:
        held = reachable.get(id(case.calculation.template))
        if held is None:
            continue
        worked = run_case(case, held.plan, problems)
        if worked is not None:
            found |= reached(worked, held)
    missed = unreached(holds, found)
    return len(file.cases), explained(missed, file.reasons, holds, problems) if not problems else missed


def worked_calculation(project: WorkedProject, mark: str) -> Worked | None:
    """Return a calculation by its mark."""
    return next((w for w in project.calculations if w.calculation.mark == mark), None)
