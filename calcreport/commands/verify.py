"""`calcreport verify`: a package held against what the files inside it give, and its templates against the library."""

from __future__ import annotations

import json
from argparse import Namespace
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcreport.commands.desk import ProgressLine, one_problem, say_problems
from calcreport.core.problems import Problem
from calcreport.core.source import Source
from calcreport.core.version import PROGRAM
from calcreport.filesystem import library_folder, read_file, read_text
from calcreport.history.alterations import (
    DRESS,
    Finding,
    Thing,
    altered_catalog,
    altered_files,
    altered_sheet,
    altered_values,
    parted_sheets,
    read_values,
)
from calcreport.history.frozen import INPUTS, TEMPLATES, VALUES, Frozen, marks_of, stated
from calcreport.history.package import PackageFile, read_package, sheet_words
from calcreport.publish import Package, build
from calcreport.report.fronts import counted
from calcreport.second.agreement import Agreement, compare_paths

UNSAID = "; the package was not held against anything"
#: the order findings are told in, causes first, and how many of a kind the terminal shows
THINGS: tuple[Thing, ...] = ("template", "input", "file", "second path", "number", "sheet")
MOST_SAID = 16
PROVES = (
    "The files inside this PDF, its values and its sheets belong together: every number attached and every sheet is "
    "what these inputs and templates give when they are worked again here, by the program and by its second path."
)
NOT_PROVED = (
    "It is no proof of who made the package, when, or that inputs, values and sheets were not all changed alike: a "
    "forgery that is consistent agrees with itself. Only a digital signature shows that nothing was changed since it "
    "was signed. Templates are held against the library installed here, no further; the second path shares the "
    "formulas. Whether inputs, loads and the choice of rules are right no comparison tells."
)


@dataclass(frozen=True, slots=True)
class Verified:
    """What the comparison came to."""

    package: PackageFile
    made: Package
    agreement: Agreement
    findings: tuple[Finding, ...]
    #: words on what differs as a whole, '' where all is alike
    verdict: str
    #: templates of the project itself, which no library holds
    own: tuple[str, ...]
    #: what made the package, by its values
    program: str
    #: the file made again is the same byte for byte
    same_bytes: bool


def run(arguments: Namespace) -> int:
    """Verify; 0 where all agrees, 1 where something differs, 2 where the file cannot be worked again."""
    progress = ProgressLine()
    found = verify(arguments.package, progress)
    progress.clear()
    if isinstance(found, tuple):
        return say_problems(found, arguments.json, tail=UNSAID)
    if arguments.json:
        print(json.dumps(_object(arguments.package, found), indent=1, ensure_ascii=False))
    else:
        for line in _lines(arguments.package, found):
            print(line)
    return 1 if found.findings else 0


def verify(name: str, progress: ProgressLine) -> Verified | tuple[Problem, ...]:
    """Work a package again from the files inside it; returns the problems where that cannot be."""
    path = Path(name)
    data = read_file(path)
    if isinstance(data, str):
        return one_problem("no-file", f"{name[:200]} cannot be read", "a package as PDF", data)
    package = read_package(data)
    if isinstance(package, str):
        return one_problem("not-a-package", f"{name[:200]} is not read as a package",
                           "a PDF made by `calcreport build` or `calcreport issue`", package)  # fmt: skip
    if not package.inputs or VALUES not in package.files:
        carried = f"{len(package.files)} other files" if package.files else "no files"
        return one_problem("not-a-package", f"{name[:200]} does not carry its inputs and values",
                           "input files, templates and values.json inside the PDF", carried,
                           "some portals drop attached files: verify the copy that was sent there")  # fmt: skip
    world = Frozen(package.files, path.name)
    source = world.project()
    if isinstance(source, str):
        return one_problem("not-a-package", f"{name[:200]} names no project file", "values.json that names it", source)
    made = _made_again(world, source, package, data, progress)
    if made.problems or made.worked is None:
        return made.problems
    return _held(package, data, made, progress)


def _made_again(world: Frozen, source: Source, package: PackageFile, data: bytes, progress: ProgressLine) -> Package:
    """Build the package as it says it was built: with the sampler, with the second path, marked superseded."""
    sampled = any(sheet.label.startswith("SAMPLER") for sheet in package.sheets)
    last = [place for place, sheet in enumerate(package.sheets) if sheet.label.startswith("B-")]
    second = any("Second path." in " ".join(words) for words in sheet_words(data, last))
    status = stated(package.files).get("status", "")
    return build(world, source, progress, second, sampled="added" if sampled else "no",
                 status=status if status == "superseded" else "", marks=marks_of(package.files))  # fmt: skip


def _held(package: PackageFile, data: bytes, made: Package, progress: ProgressLine) -> Verified:
    """Hold everything against everything."""
    assert made.worked is not None
    progress("working again", 0, 1)
    agreement = made.agreement or compare_paths(made.worked)
    again = read_package(made.data)
    assert isinstance(again, PackageFile)
    templates, own = _templates(package.files)
    values = altered_values(package.files[VALUES], made.files[VALUES])
    sheets = _sheets(package, data, again, made.data)
    findings = [*templates, *values, *sheets, *altered_files(package.files, made.files)]
    findings += altered_catalog(package, again)
    findings += [Finding("second path", d.name, d.second, d.first, "") for d in agreement.differences]
    program = read_values(package.files[VALUES])
    by = program.get("program") if isinstance(program, dict) else None
    return Verified(package, made, agreement, tuple(findings), _verdict(templates, values, sheets), own,
                    by if isinstance(by, str) else "", made.data == data)  # fmt: skip


def _templates(files: dict[str, bytes]) -> tuple[list[Finding], tuple[str, ...]]:
    """Hold the templates against those of the library installed; returns what differs, and the project's own."""
    findings: list[Finding] = []
    own: list[str] = []
    for name, data in files.items():
        if not name.startswith(TEMPLATES):
            continue
        installed = read_text(library_folder(), name.removeprefix(TEMPLATES))
        if isinstance(installed, str):
            own.append(name.removeprefix(TEMPLATES))
        elif installed.text.encode() != data:
            findings.append(Finding("template", name, "", "", "is not the one of the library installed here"))
    return findings, tuple(own)


def _sheets(package: PackageFile, data: bytes, again: PackageFile, made: bytes) -> list[Finding]:
    """Return what of the sheets differs; the echo of inputs tells which line of a file does."""
    pairs = parted_sheets(package, again)
    both = [(a, b) for a, b in pairs if a >= 0 and b >= 0]
    words = zip(sheet_words(data, [a for a, _ in both]), sheet_words(made, [b for _, b in both]), strict=True)
    findings: list[Finding] = []
    for a, b in pairs:
        if b < 0:
            findings.append(Finding("sheet", package.sheets[a].label or "no label", "", "", "does not come out again"))
        elif a < 0:
            findings.append(Finding("sheet", again.sheets[b].label, "", "", "is missing from the file"))
        else:
            findings += altered_sheet(package.sheets[a], again.sheets[b], *next(words))
    # the same fonts serve all sheets: where they are others, that is one thing
    dressed = [f.where for f in findings if f.words == DRESS]
    findings = [_echoed(f) for f in findings if f.words != DRESS]
    findings += [Finding("sheet", ", ".join(dressed), "", "", DRESS)] if dressed else []
    kept = [label for sheet in package.sheets if (label := sheet.label)]
    if not pairs and kept != [sheet.label for sheet in again.sheets]:
        findings.append(Finding("sheet", "all", "", "", "stand in another order"))
    return findings


def _echoed(finding: Finding) -> Finding:
    """Return a finding on a sheet that echoes the input files as one of inputs."""
    if not finding.where.startswith("A-"):
        return finding
    return Finding("input", f"{finding.where}, the echo of the input files", finding.found, finding.made, finding.words)


def _verdict(templates: list[Finding], values: list[Finding], sheets: list[Finding]) -> str:
    """Say what the differences point to: which of inputs, values and sheets does not go with the other two."""
    if values and sheets:
        words = (
            "Values and sheets both differ from what the files inside give: an input or a template was changed, or both"
        )
        return words + " of the others."
    if values:
        return "The sheets are what the files inside give; values.json is not."
    if sheets:
        return "The values are what the files inside give; the sheets are not."
    return "Inputs, values and sheets agree; a template is not the library's." if templates else ""


def _lines(name: str, found: Verified) -> Iterable[str]:
    """Yield what a person is told."""
    files = found.package.files
    inputs, templates = (sum(file.startswith(kind) for file in files) for kind in (INPUTS, TEMPLATES))
    carried = f"{counted(inputs, 'input file')}, {counted(templates, 'template file')}"
    by = found.program or "a program it does not name"
    yield f"{name}: {counted(len(found.package.sheets), 'sheet')}, {carried}, made by {by}"
    if found.program != PROGRAM:
        yield f"worked again by {PROGRAM}: what differs may come of that alone"
    yield f"second path: {found.agreement.words[0]}"
    yield from (f"a template of the project itself, held against nothing: {one}" for one in found.own)
    if found.package.signatures:
        signed = counted(found.package.signatures, "signature")
        yield f"{signed} in the file, not looked into; what a signature draws is not compared"
    if not found.findings:
        same = "; made again it is the same byte for byte" if found.same_bytes else ""
        yield f"match: every attached value and every sheet is what the files inside give{same}"
        yield PROVES
    else:
        yield f"differs: {counted(len(found.findings), 'finding')}. {found.verdict}".rstrip()
        for thing in THINGS:
            ones = [finding for finding in found.findings if finding.thing == thing]
            yield from (f"  {thing:<12}{finding.where}: {_words(finding)}" for finding in ones[:MOST_SAID])
            if len(ones) > MOST_SAID:
                yield f"  {thing:<12}and {len(ones) - MOST_SAID} more, all with --json"
    yield NOT_PROVED


def _words(finding: Finding) -> str:
    if not finding.found and not finding.made:
        return finding.words
    where = f", {finding.words}" if finding.words else ""
    found, made = finding.found or "nothing", finding.made or "nothing"
    if finding.thing == "second path":
        return f"{found} by the second path, {made} by the first"
    said = "printed" if finding.thing == "sheet" or "the echo of" in finding.where else "in values.json"
    return f"{found} {said}, {made} from the files inside{where}"


def _object(name: str, found: Verified) -> dict[str, Any]:
    return {
        "package": name,
        "match": not found.findings,
        "same_bytes": found.same_bytes,
        "made_by": found.program,
        "worked_by": PROGRAM,
        "sheets": len(found.package.sheets),
        "files": sorted(found.package.files),
        "second_path": {"values": found.agreement.values, "verdicts": found.agreement.verdicts,
                        "largest": found.agreement.largest},
        "findings": [{"thing": f.thing, "where": f.where, "found": f.found, "made": f.made, "words": f.words}
                     for f in found.findings],
        "verdict": found.verdict,
        "own_templates": list(found.own),
        "signatures": found.package.signatures,
        "proves": PROVES if not found.findings else "",
        "not_proved": NOT_PROVED,
    }  # fmt: skip
