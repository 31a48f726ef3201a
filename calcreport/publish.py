"""From a composed report to paper: pages laid out, PDF bytes written. The last stages, in their order."""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.core.source import Source
from calcreport.core.world import World
from calcreport.driver import Progress, Result, report, silent
from calcreport.layout.fonts import installed_fonts
from calcreport.layout.model import Pages
from calcreport.layout.paginate import lay_out
from calcreport.output.pdf import write_pdf


@dataclass(frozen=True, slots=True)
class Package:
    """A built package; no pages and no bytes where there are problems."""

    result: Result
    pages: Pages | None
    data: bytes


def build(world: World, source: Source, progress: Progress = silent) -> Package:
    """Build the package of a project."""
    result = report(world, source, progress)
    if result.composed is None:
        return Package(result, None, b"")
    progress("laying out", 0, 1)
    fonts = installed_fonts()
    pages = lay_out(result.composed.report, fonts)
    progress("writing", 0, 1)
    return Package(result, pages, write_pdf(pages, fonts.files))
