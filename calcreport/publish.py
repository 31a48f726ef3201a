"""From worked values to paper: the report composed, pages laid out, PDF bytes written. The last stages, in order."""

from __future__ import annotations

from dataclasses import dataclass, replace

from calcreport.calculate.model import WorkedProject
from calcreport.calculate.release import hold_release
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source
from calcreport.core.world import World
from calcreport.driver import Progress, silent, work
from calcreport.layout.fonts import installed_fonts
from calcreport.layout.model import Pages
from calcreport.layout.paginate import lay_out
from calcreport.output.pdf import write_pdf
from calcreport.report.compose import Composed, compose
from calcreport.second.agreement import Agreement, compare_paths


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
    world: World, source: Source, progress: Progress = silent, second: bool = False, kept: Fresh = FRESH
) -> Package:
    """Build the package of a project; steps whose inputs have not changed are taken from `kept`."""
    told = report(world, source, progress, second, kept)
    if told.composed is None:
        return told
    progress("laying out", 0, 1)
    fonts = installed_fonts()
    pages = lay_out(told.composed.report, fonts, kept)
    progress("writing", 0, 1)
    return replace(told, pages=pages, data=write_pdf(pages, fonts.files, kept=kept))
