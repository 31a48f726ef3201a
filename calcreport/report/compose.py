"""The whole report: parts in order, each with its title-block facts and blocks.

`WorkedProject` in, `Report` out. Order and fronts are decided here; wording in `fronts`, `summary`, `calculation`.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import partial
from typing import Literal

from calcreport.calculate.model import Member, Worked, WorkedCheck, WorkedProject
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.version import PROGRAM
from calcreport.history.model import Revised
from calcreport.report import fronts
from calcreport.report.calculation import Composer
from calcreport.report.changes import Changes, change_blocks, cover_words
from calcreport.report.confirmations import find_forms
from calcreport.report.deltas import NO_DELTAS
from calcreport.report.forms import CalculationForms
from calcreport.report.governing import worst_checks
from calcreport.report.items import Script
from calcreport.report.model import Block, Index, IndexEntry, Part, Report, TitleFacts
from calcreport.report.notation import Notation
from calcreport.report.script import write_script
from calcreport.report.statuses import STATUS_TEXTS
from calcreport.report.summary import Summary, SummarySheets, dispositions, result_words, summarise
from calcreport.report.told import SymbolForms, Told

#: how the strip over a calculation begins that stopped
_STOPPED = "NOT EVALUATED TO THE END: "


@dataclass(frozen=True, slots=True)
class Telling:
    """How calculations are told: their forms and scripts, before any words."""

    forms: dict[str, CalculationForms]
    scripts: dict[str, Script]


@dataclass(frozen=True, slots=True)
class Composed:
    """A report with what the values file and the terminal say of it too."""

    report: Report
    summary: Summary
    forms: dict[str, CalculationForms]
    scripts: dict[str, Script]


def tell(project: WorkedProject, kept: Fresh = FRESH) -> Telling:
    """Return the order in which each calculation is told, and the printed form of every value."""
    scripts: dict[str, Script] = {}
    for worked in project.calculations:
        mark = worked.calculation.mark
        scripts[mark] = kept.of("script", mark, (worked.values,), partial(write_script, worked))
    return Telling(find_forms(project, kept), scripts)


def compose(
    project: WorkedProject,
    telling: Telling,
    progress: Callable[[int, int], None],
    evidence: tuple[str, ...] = (),
    kept: Fresh = FRESH,
    changes: Changes | None = None,
) -> Composed:
    """Compose the package; `evidence` is what the disclosure says of the second path.

    `changes` are those since the issue before; without them every sheet is of the last row of the revision record.
    """
    forms, scripts = telling.forms, telling.scripts
    entries = fronts.register(project, scripts)
    summary = summarise(project, entries)
    shared: dict[int, SymbolForms] = {}
    parts: list[Part] = []
    for done, worked in enumerate(project.calculations, 1):
        symbols = shared.setdefault(id(worked.plan), SymbolForms(Notation(worked.plan.slots)))
        mark = worked.calculation.mark
        said = {
            id(check): dispositions(project, member.mark, check.line.name)
            for member in worked.members
            for check in member.checks
        }
        # figures are solved with all calculations that links bind together: where they are kept, so are those' lines
        deltas = changes.deltas(mark) if changes is not None else NO_DELTAS
        inputs = (scripts[mark], forms[mark], tuple(sorted(said.items())), deltas.plain)
        composer = Composer(Told(scripts[mark], forms, scripts, symbols), said, deltas)
        blocks = kept.of("blocks", mark, inputs, composer.blocks)
        revised = changes.revisions.revised[mark] if changes is not None else None
        part = _calculation(project, worked, scripts[mark], blocks, revised)
        parts.append(replace(part, clouded=deltas.now) if deltas.now else part)
        progress(done, len(project.calculations))
    sheets = SummarySheets(project, forms, scripts).blocks(summary, entries)
    report = _report(project, summary, tuple(parts), sheets, fronts.assumptions(entries), evidence, changes)
    return Composed(report, summary, forms, scripts)


def _report(
    project: WorkedProject,
    summary: Summary,
    calculations: tuple[Part, ...],
    summary_blocks: tuple[Block, ...],
    register: tuple[Block, ...],
    evidence: tuple[str, ...],
    changes: Changes | None,
) -> Report:
    facts, now = project.project, changes.revisions.now if changes is not None else None
    loud = bool(summary.failed or summary.not_evaluated)
    cover = Part(
        "COVER",
        "Cover",
        "cover",
        title_facts(project, "Cover", revised=now),
        cover=fronts.cover(project, (*result_words(project, summary), *cover_words(changes)), loud, now),
    )
    told = [_front(project, "CHANGES", "Change report", change_blocks(changes), now)] if changes is not None else []
    front = [
        *told,
        _front(project, "CRITERIA", "Design criteria and assumptions", (*fronts.criteria(project), *register), now),
        _front(project, "SUMMARY", "Check summary", summary_blocks, now),
    ]
    back = [
        _front(project, "A", "Appendix A: input echo", fronts.echo(facts.files), now, "appendix"),
        _front(project, "B", "Appendix B: program disclosure", fronts.disclosure(project, evidence), now, "appendix"),
    ]
    title = "Revision record and index"
    index = Part("INDEX", title, "index", title_facts(project, title, revised=now), fronts.revisions(project))
    entries = tuple(_entry(project, part) for part in (cover, index, *front, *calculations, *back))
    index = replace(index, index=Index(entries))
    parts = (cover, index, *front, *calculations, *back)
    return Report(
        facts.title, facts.office, f"Structural calculations, {facts.number}", "en-US", facts.date, facts.paper, parts
    )


def _entry(project: WorkedProject, part: Part) -> IndexEntry:
    return IndexEntry(part.mark, part.title, part.mark, _flag(part), part.facts.revision, part.facts.date)


def _front(
    project: WorkedProject,
    mark: str,
    title: str,
    blocks: tuple[Block, ...],
    now: Revised | None,
    kind: Literal["front", "appendix"] = "front",
) -> Part:
    return Part(mark, title, kind, title_facts(project, title, revised=now), blocks)


def title_facts(
    project: WorkedProject, subject: str, code: str = "", fingerprint: str = "", revised: Revised | None = None
) -> TitleFacts:
    """Return what the title block of a part says; of the last row of the revision record unless told otherwise."""
    facts = project.project
    status = STATUS_TEXTS[facts.status]
    revised = revised or Revised(facts.last_issue.number, facts.last_issue.date)
    return TitleFacts(
        project=facts.title,
        project_number=facts.number,
        subject=subject,
        code=code,
        status=facts.status.upper(),
        status_note=status.note,
        revision=f"rev {revised.number}",
        date=fronts.short_date(revised.date),
        fingerprint=fingerprint,
        program=PROGRAM,
        banner=status.banner,
        strokes=status.strokes,
    )


def _calculation(
    project: WorkedProject, worked: Worked, script: Script, blocks: tuple[Block, ...], revised: Revised | None
) -> Part:
    calculation, template = worked.calculation, worked.calculation.template
    system = "in.-lb" if template.system == "us" else "SI"
    facts = title_facts(
        project,
        f"{calculation.mark}  {calculation.title}",
        f"{template.code} ({system})",
        f"input {fronts.grouped(worked.fingerprint[:8])}",
        revised,
    )
    return Part(calculation.mark, calculation.title, "calculation", facts, blocks, strip=_strip(worked, script))


def _strip(worked: Worked, script: Script) -> str:
    """Return the words of the strip over a calculation that holds an NG, or did not run to its end."""
    judged = [(member, check) for member in worked.members for check in worst_checks(member)]
    failed: dict[str, list[tuple[Member, WorkedCheck]]] = {}
    for member, check in judged:
        if check.verdict == "NG":
            failed.setdefault(check.line.name, []).append((member, check))
    if failed:
        words = ", ".join(_failed(script, name, found) for name, found in failed.items())
        count = sum(len(found) for found in failed.values())
        return f"{count} CHECK{'S' if count > 1 else ''} NG IN THIS CALCULATION: {words}"
    return _STOPPED + worked.stop.told if worked.stop else ""


def _failed(script: Script, name: str, found: list[tuple[Member, WorkedCheck]]) -> str:
    """Return `line 31 shear`, or `line 31 shear of B7 B9` where like members share the calculation."""
    lines = list(dict.fromkeys(script.check_line.get(id(check), 0) for _, check in found))
    shared = found[0][0].place[0] >= 0
    of = f" of {' '.join(member.mark for member, _ in found)}" if shared else ""
    return f"line {lines[0]} {name}{of}"


def _flag(part: Part) -> str:
    """Return what the index says beside a part: an NG in it, or that it did not run to its end."""
    if not part.strip:
        return ""
    return "not evaluated" if part.strip.startswith(_STOPPED) else "NG"
