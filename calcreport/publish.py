"""From worked values to paper: the report composed, pages laid out, PDF bytes written. The last stages, in order."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

from calcreport.calculate.margins import least_margins
from calcreport.calculate.model import WorkedProject
from calcreport.calculate.release import hold_release
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source
from calcreport.core.world import World
from calcreport.driver import Progress, silent, work
from calcreport.layout.fonts import Fonts, installed_fonts
from calcreport.layout.model import Pages
from calcreport.layout.paginate import lay_out
from calcreport.layout.places import sheets_of
from calcreport.output.pdf import write_pdf
from calcreport.report.compose import Composed, compose
from calcreport.report.model import Part
from calcreport.report.sampler import SIZES, Sampled, sampler, sampler_alone, with_sampler
from calcreport.second.agreement import Agreement, compare_paths

#: the reviewer's sampler in the package, as the only sheet, or not at all: it asks for margins, which take time
Sampling: TypeAlias = Literal["no", "added", "alone"]


@dataclass(frozen=True, slots=True)
class Package:
    """How far a project came on the way to paper; every field after a problem is empty."""

    problems: tuple[Problem, ...]
    #: all that could be worked, also beside problems
    worked: WorkedProject | None = None
    composed: Composed | None = None
    pages: Pages | None = None
    data: bytes = b""
    #: what the second path came to, where it was asked for
    agreement: Agreement | None = None


def report(
    world: World, source: Source, progress: Progress = silent, second: bool = False, kept: Fresh = FRESH
) -> Package:
    """Go as far as the composed report; with `second`, the disclosure says how the second path agrees."""
    result = work(world, source, progress, kept=kept)
    if result.problems or result.worked is None:
        return Package(result.problems, result.worked)
    problems = Problems()
    hold_release(result.worked, problems)
    if problems:
        return Package(problems.sorted(), result.worked)
    agreement = None
    if second:
        progress("working again", 0, 1)
        agreement = compare_paths(result.worked)
    evidence = agreement.words if agreement else ()
    composed = compose(result.worked, lambda done, total: progress("composing", done, total), evidence, kept)
    return Package((), result.worked, composed, agreement=agreement)


def build(
    world: World,
    source: Source,
    progress: Progress = silent,
    second: bool = False,
    kept: Fresh = FRESH,
    sampled: Sampling = "no",
) -> Package:
    """Build the package of a project; steps whose inputs have not changed are taken from `kept`.

    `sampled` adds the reviewer's sampler, or makes that one sheet alone.
    """
    told = report(world, source, progress, second, kept)
    if told.composed is None or told.worked is None:
        return told
    progress("laying out", 0, 1)
    fonts = installed_fonts()
    pages = lay_out(told.composed.report, fonts, kept)
    if sampled != "no":
        margins = least_margins(told.worked, lambda done, total: progress("finding margins", done, total))
        sample = Sampled(told.worked, told.composed, margins, sheets_of(pages), linked=sampled == "added")
        part = _fitted(sample, fonts)
        whole = sampler_alone(sample, part) if sampled == "alone" else with_sampler(told.composed.report, part)
        pages = lay_out(whole, fonts)
    progress("writing", 0, 1)
    return replace(told, pages=pages, data=write_pdf(pages, fonts.files, kept=kept))


def _fitted(sample: Sampled, fonts: Fonts) -> Part:
    """Return the fullest sampler that keeps to one sheet."""
    for size in SIZES:
        part = sampler(sample, size)
        if len(lay_out(sampler_alone(sample, part), fonts).pages) == 1:
            break
    return part
