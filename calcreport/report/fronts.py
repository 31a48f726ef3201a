"""The sheets before and after the calculations: cover, revision record, criteria, assumptions, echo, disclosure.

A worked project in, blocks and cover facts out. Texts are cautions and records; they vouch for nothing.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from calcreport.calculate.model import WorkedProject, WorkedText
from calcreport.core.source import Source
from calcreport.core.version import PROGRAM
from calcreport.history.model import Revised
from calcreport.report.display import show_name
from calcreport.report.items import SayText, Script
from calcreport.report.model import (
    Block,
    Column,
    CoverFacts,
    Heading,
    Listing,
    Paragraph,
    Strong,
    Table,
    TableRow,
    Words,
)
from calcreport.report.statuses import STATUS_TEXTS

MONTHS = (
    "January",
    "February",
    "March",
    "April",
    "May",
    "June",
    "July",
    "August",
    "September",
    "October",
    "November",
    "December",
)
CAUTIONS = (
    "Prepared with a computer program. Every number can be worked again from its own sheet.",
    "Inputs are echoed in appendix A and are the user's; the program does not verify them.",
    "Adequacy, the choice of code edition, loads and load path rest with the engineer who seals this package.",
    "Valid for the named project only. Local amendments are included only where they are listed.",
    "Adopted local codes and the judgement of the licensed engineer govern over anything printed here.",
    "Not final unless sealed, signed and dated by the engineer in responsible charge.",
)


def date_words(iso: str) -> str:
    """Return '16 November 2026' for '2026-11-16'."""
    year, month, day = iso.split("-")
    return f"{int(day)} {MONTHS[int(month) - 1]} {year}"


def short_date(iso: str) -> str:
    """Return '16 Nov 2026' for '2026-11-16'."""
    day, month, year = date_words(iso).split(" ")
    return f"{day} {month[:3]} {year}"


def counted(number: int, words: str) -> str:
    """Return '1 limit state' or '2 limit states'."""
    return f"{number} {words}" if number == 1 else f"{number} {words}s"


def grouped(fingerprint: str) -> str:
    """Return hexadecimal digits in fours."""
    return " ".join(fingerprint[i : i + 4] for i in range(0, len(fingerprint), 4))


@dataclass(frozen=True, slots=True)
class RegisterEntry:
    """One assumption as the register prints it."""

    number: str
    says: str
    state: str
    where: Words


def cover(project: WorkedProject, result: tuple[Words, ...], loud: bool, now: Revised | None = None) -> CoverFacts:
    """Return what the cover says; `now` is the revision being made where that is not a row of the record."""
    facts = project.project
    header = tuple(line for line in (facts.address, f"Project {facts.number}") if line)
    header += (f"Client: {facts.client}",) if facts.client else ()
    header += (f"Permit no. {facts.permit}" if facts.permit else "Permit no. ____________",)
    calculations = [worked.calculation for worked in project.calculations]
    groups: dict[str, list[str]] = {}
    for calculation in calculations:
        count = f" ({len(calculation.members)} members)" if calculation.members else ""
        groups.setdefault(calculation.template.title, []).append(calculation.mark + count)
    scope = tuple((" ".join(marks), title) for title, marks in groups.items())
    basis = [f"{name}: {code}" for name, code in facts.codes]
    basis[0] += ", no local amendments listed" if facts.amendments == "none" else f", amendments: {facts.amendments}"
    basis += [f"{name}: {value}" for name, value in facts.criteria[:6]]
    status = STATUS_TEXTS[facts.status]
    return CoverFacts(
        title=facts.title,
        header=header,
        issue=f"Issue {now.number if now is not None else facts.last_issue.number}",
        date=date_words(facts.date),
        status=facts.status.upper(),
        status_note=status.note,
        scope=scope,
        elsewhere=facts.elsewhere,
        basis=tuple(basis),
        result=result,
        result_is_loud=loud,
        cautions=(status.caution, *CAUTIONS),
        seal_words=status.seal_words,
        office=tuple(line for line in (facts.office, facts.contact) if line),
        fingerprint=grouped(project.fingerprint),
        status_is_loud=bool(status.banner),
    )


def revisions(project: WorkedProject) -> tuple[Block, ...]:
    """Return the revision record."""
    rows = tuple(
        TableRow(((issue.number,), (date_words(issue.date),), (issue.why,))) for issue in project.project.issues
    )
    columns = (Column(("Issue",)), Column(("Date",)), Column(("What changed and why",), stretch=1.0))
    return (Heading("Revision record", 1), Table(columns, rows))


def criteria(project: WorkedProject) -> tuple[Block, ...]:
    """Return the design criteria: codes, criteria, materials."""
    facts = project.project
    blocks: list[Block] = [Heading("Codes", 2)]
    amendments = "none listed" if facts.amendments == "none" else facts.amendments
    units = "US customary" if facts.system == "us" else "SI"
    mixed = any(worked.calculation.template.system != facts.system for worked in project.calculations)
    units += "; a calculation in the other system says so" if mixed else ""
    rows = [*facts.codes, ("local amendments", amendments), ("units", units)]
    blocks.append(_two_columns(rows))
    blocks += [Heading("Criteria", 2), _two_columns(list(facts.criteria))]
    if facts.materials:
        blocks.append(Heading("Materials", 2))
        names = list(dict.fromkeys(name for _, properties in facts.materials for name, _ in properties))
        columns = (Column(("Mark",)), *(Column((show_name(name),)) for name in names))
        table = [
            TableRow(((mark,), *((dict(properties).get(name, "–"),) for name in names)))
            for mark, properties in facts.materials
        ]
        blocks.append(Table(columns, tuple(table)))
    caution = (
        "The codes are taken in the editions named. Amendments of the authority having jurisdiction are not "
        "included unless listed above."
    )
    blocks.append(Paragraph((caution,), "caution"))
    return tuple(blocks)


def _two_columns(rows: list[tuple[str, str]]) -> Table:
    return Table((Column(("",)), Column(("",), stretch=1.0)), tuple(TableRow(((a,), (b,))) for a, b in rows))


def register(project: WorkedProject, scripts: dict[str, Script]) -> tuple[RegisterEntry, ...]:
    """Return every assumption: the project's own, then those of the templates with the marks they concern."""
    found: list[RegisterEntry] = []
    for place, assumption in enumerate(project.project.assumptions, 1):
        state = f"to be verified by: {assumption.by}" if assumption.to_be_verified else "stated"
        found.append(RegisterEntry(f"P{place}", assumption.says, state, ("project",)))
    shared: dict[str, list[str]] = {}
    for mark, script in scripts.items():
        for item in script.items:
            if isinstance(item, SayText) and item.worked.line.kind == "assume":
                marks = shared.setdefault(_plain(item.worked), [])
                if mark not in marks:
                    marks.append(mark)
    for place, (says, marks) in enumerate(shared.items(), 1):
        found.append(RegisterEntry(f"T{place}", says, "made by the template", (" ".join(marks),)))
    return tuple(found)


def _plain(worked: WorkedText) -> str:
    return "".join(piece for piece in worked.line.pieces if isinstance(piece, str))


def assumptions(entries: tuple[RegisterEntry, ...]) -> tuple[Block, ...]:
    """Return the assumption register."""
    columns = (
        Column(("No.",)),
        Column(("Assumption",), stretch=2.0),
        Column(("State",), stretch=1.0),
        Column(("Concerns",), stretch=1.0),
    )
    rows = tuple(
        TableRow(((e.number,), (e.says,), (e.state,), e.where), "loud" if e.state.startswith("to be") else "")
        for e in entries
    )
    heading = Heading("Assumptions", 2)
    if not rows:
        return heading, Paragraph(("None is registered.",), "plain")
    return heading, Table(columns, rows)


def echo(files: tuple[Source, ...]) -> tuple[Block, ...]:
    """Return the project files line by line, as read."""
    blocks: list[Block] = [
        Paragraph(
            ("The project files as the program read them. They are the user's; the program does not verify them.",),
            "note",
        )
    ]
    for source in files:
        blocks.append(Heading(source.titled, 3))
        blocks.append(Listing(tuple(_kept(text) for text in source.text.rstrip("\n").split("\n"))))
    return tuple(blocks)


def _kept(text: str) -> str:
    """Keep the blanks of a line of a file: its indent, and where several stand together."""
    bare = text.expandtabs(4)
    indent = len(bare) - len(bare.lstrip(" "))
    rest = re.sub(r" {2,}", lambda run: "\N{NO-BREAK SPACE}" * (len(run[0]) - 1) + " ", bare[indent:])
    return "\N{NO-BREAK SPACE}" * indent + rest


def disclosure(project: WorkedProject, evidence: tuple[str, ...]) -> tuple[Block, ...]:
    """Return the program disclosure: what computed this, from what, with which evidence and limits."""
    templates = {worked.calculation.template.name: worked for worked in project.calculations}
    columns = (
        Column(("Template",)),
        Column(("Code",)),
        Column(("Title",), stretch=1.0),
        Column(("Calculations",), stretch=1.0),
    )
    rows = []
    for name, worked in sorted(templates.items()):
        marks = [w.calculation.mark for w in project.calculations if w.calculation.template.name == name]
        template = worked.calculation.template
        rows.append(TableRow(((name,), (template.code,), (template.title,), (" ".join(marks),))))
    paragraphs = (
        (
            "Program. ",
            f"{PROGRAM}, without warranty of any kind. It reads the project files echoed in "
            "appendix A and templates of design-code rules, works every formula in double precision, and prints "
            "formula, substituted values and result.",
        ),
        (
            "Numbers. ",
            "Full precision is carried; rounding is for the eye. Verdicts come from unrounded values, and a "
            "limit met exactly is OK. The printed inputs of a line, put into its printed formula, give its printed "
            "result.",
        ),
        (
            "Evidence. ",
            "Every template has a case file beside it: given values and expected results, each with the "
            "publication or hand computation it is taken from. The program's tests run all of them. Evidence of this "
            "kind is not an independent check of this package; a checker is another person.",
        ),
        (
            "Limits. ",
            "Each calculation names the limit states it decides and those it leaves out, and stops outside its "
            "range. Loads, load path, edition and inputs are the engineer's choice and are not verified.",
        ),
        (
            "Fingerprints. ",
            "The input fingerprint of a calculation is taken over its given values and the text of its "
            "templates; that of the package over all of them. Equal fingerprints mean equal inputs, nothing more.",
        ),
    )
    blocks: list[Block] = [Paragraph((Strong(head), text), "plain") for head, text in paragraphs]
    if evidence:
        blocks.append(Paragraph((Strong("Second path. "), evidence[0]), "plain"))
        blocks += [Paragraph((words,), "caution") for words in evidence[1:]]
    blocks += [Heading("Templates used", 2), Table(columns, tuple(rows))]
    return tuple(blocks)
