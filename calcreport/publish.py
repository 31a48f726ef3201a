"""From worked values to paper: the report composed, pages laid out, PDF bytes written. The last stages, in order."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from functools import partial
from typing import Any, Literal, TypeAlias

from calcreport.calculate.margins import is_searched, least_margins
from calcreport.calculate.model import WorkedProject
from calcreport.calculate.release import hold_release
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source, TableSource
from calcreport.core.world import World
from calcreport.driver import Progress, Result, silent, work
from calcreport.history.accounts import placed_entries
from calcreport.history.frozen import TEMPLATES, VALUES, frozen_files
from calcreport.layout.fonts import Fonts, installed_fonts
from calcreport.layout.model import Pages
from calcreport.layout.paginate import lay_out
from calcreport.layout.places import sheets_of
from calcreport.output.pdf import Attachment, write_pdf
from calcreport.reissue import since_last_issue
from calcreport.report.changes import Changes
from calcreport.report.compose import Composed, compose, tell
from calcreport.report.deltas import Shown
from calcreport.report.model import Part
from calcreport.report.sampler import SIZES, Sampled, sampler, sampler_alone, with_sampler
from calcreport.report.value_lines import Finished
from calcreport.report.valuesfile import count_sheets, date_values, values_bytes, values_file
from calcreport.second.agreement import Agreement, compare_paths

#: the reviewer's sampler in the package, as the only sheet, or not at all: it asks for margins, which take time
Sampling: TypeAlias = Literal["no", "added", "alone"]
#: kinds of the files a package carries, by their ending (RFC 9512, RFC 4180, RFC 8259, ECMA-376); else plain text
_MIME = {
    "yaml": "application/yaml",
    "csv": "text/csv",
    "json": "application/json",
    "xlsx": "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
}


@dataclass(frozen=True, slots=True)
class Package:
    """How far a project came on the way to paper; every field after a problem is empty."""

    problems: tuple[Problem, ...]
    #: all that could be worked, also beside problems
    worked: WorkedProject | None = None
    composed: Composed | None = None
    pages: Pages | None = None
    data: bytes = b""
    #: what it was made from and the values it came to, by the names they are attached under
    files: dict[str, bytes] = field(default_factory=dict)
    #: the values file as an object, its sheets not counted yet
    values: dict[str, Any] = field(default_factory=dict)
    #: what the second path came to, where it was asked for
    agreement: Agreement | None = None


def report(
    world: World,
    source: Source,
    progress: Progress = silent,
    second: bool = False,
    kept: Fresh = FRESH,
    status: str = "",
    marks: Shown = "last",
) -> Package:
    """Go as far as the composed report; with `second`, the disclosure says how the second path agrees.

    A `status` stands in place of the project's own on sheets and in the values, as on an issue marked superseded; what
    has changed since the issue before is told as it was. `marks` says of which revisions changed lines are marked.
    """
    result = work(world, source, progress, kept=kept)
    if result.problems or result.worked is None:
        return Package(result.problems, result.worked)
    problems = Problems()
    if not status:
        hold_release(result.worked, problems)
    if problems:
        return Package(problems.sorted(), result.worked)
    agreement = None
    if second:
        progress("working again", 0, 1)
        agreement = compare_paths(result.worked)
    evidence = agreement.words if agreement else ()
    telling = tell(result.worked, kept)
    lines = {worked.calculation.mark: tuple(placed_entries(worked)) for worked in result.worked.calculations}
    values = values_file(Finished(result.worked, telling.forms, telling.scripts, lines))
    last = since_last_issue(world, result.worked, values, problems)
    if problems:
        return Package(problems.sorted(), result.worked)
    files = _files(world, result, {last.name: last.data} if last is not None else {})
    changes = Changes(last.comparison, last.revisions, result.worked, lines, marks) if last is not None else None
    if last is not None:
        date_values(values, last.revisions, marks)
    worked = result.worked
    if status:
        worked = replace(worked, project=replace(worked.project, status=status))
        values["project"]["status"] = status
    told = partial(progress, "composing")
    composed = compose(worked, telling, told, evidence, kept, changes)
    return Package((), worked, composed, agreement=agreement, files=files, values=values)


def _files(world: World, result: Result, inputs: dict[str, bytes]) -> dict[str, bytes]:
    """Return the files a project was read from; its values are added when its sheets are counted."""
    assert result.worked is not None
    for source in result.worked.project.files:
        # a workbook is carried as it is, text as it was read
        book = isinstance(source, TableSource) and source.sheet
        data = world.project_bytes(source.name) if book else source.text.encode()
        inputs[source.name] = data if isinstance(data, bytes) else b""
    return frozen_files(inputs, {name: source.text.encode() for name, source in result.templates.items()})


def build(
    world: World,
    source: Source,
    progress: Progress = silent,
    second: bool = False,
    kept: Fresh = FRESH,
    sampled: Sampling = "no",
    status: str = "",
    attached: bool = True,
    marks: Shown = "last",
) -> Package:
    """Build the package of a project; steps whose inputs have not changed are taken from `kept`.

    `sampled` adds the reviewer's sampler, or makes that one sheet alone, which carries no files. A `status` stands in
    place of the project's own. What the package is made from is attached to it.
    """
    told = report(world, source, progress, second, kept, status, marks)
    if told.composed is None or told.worked is None:
        return told
    progress("laying out", 0, 1)
    fonts = installed_fonts()
    pages = lay_out(told.composed.report, fonts, kept)
    if sampled != "no":
        margins = least_margins(told.worked, lambda done, total: progress("finding margins", done, total))
        unmoved = tuple(w.calculation.mark for w in told.worked.calculations if w.checks and not is_searched(w))
        sample = Sampled(told.worked, told.composed, margins, unmoved, sheets_of(pages), linked=sampled == "added")
        part = _fitted(sample, fonts)
        whole = sampler_alone(sample, part) if sampled == "alone" else with_sampler(told.composed.report, part)
        pages = lay_out(whole, fonts)
    progress("writing", 0, 1)
    files = told.files | {VALUES: package_values(replace(told, pages=pages))}
    carried = attachments(files) if attached and sampled != "alone" else ()
    return replace(told, pages=pages, data=write_pdf(pages, fonts.files, carried, kept), files=files)


def attachments(files: dict[str, bytes]) -> tuple[Attachment, ...]:
    """Return files as a PDF carries them."""
    found = []
    for name, data in files.items():
        kind, words = ("Data", "values of every line and check") if name == VALUES else ("Source", "input file")
        words = "template file" if name.startswith(TEMPLATES) else words
        found.append(Attachment(name, data, kind, _MIME.get(name.rpartition(".")[2].lower(), "text/plain"), words))
    return tuple(found)


def package_values(package: Package) -> bytes:
    """Return the values file of a package, with its sheets counted where they are laid out."""
    if package.pages is not None:
        count_sheets(package.values, {page.part: page.count for page in package.pages.pages})
    return values_bytes(package.values)


def _fitted(sample: Sampled, fonts: Fonts) -> Part:
    """Return the fullest sampler that keeps to one sheet."""
    for size in SIZES:
        part = sampler(sample, size)
        if len(lay_out(sampler_alone(sample, part), fonts).pages) == 1:
            break
    return part
