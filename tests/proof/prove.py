"""A project built through the command line and its package proved.

In: a project folder or file. Out: `Proof`, all that the tests look at, small enough to hand between processes.
"""

from __future__ import annotations

import os
import subprocess
import sys
from dataclasses import dataclass, field
from pathlib import Path

import pypdfium2

from .account import Account, Finding
from .claims import examine
from .marks import failed_checks, marks
from .numbering import numbering
from .order import out_of_order
from .overlaps import overlaps
from .package import Package, read_package
from .sampler import sampler

ROOT = Path(__file__).resolve().parents[2]


@dataclass(slots=True)
class Proof:
    """What was found in one package."""

    name: str
    path: Path
    #: exit code and words of the build
    code: int
    said: str
    account: Account = field(default_factory=Account)
    numbering: list[Finding] = field(default_factory=list)
    marks: list[Finding] = field(default_factory=list)
    overlaps: list[Finding] = field(default_factory=list)
    sampler: list[Finding] = field(default_factory=list)
    #: lines that a sampler repeats
    sampled: int = 0
    #: text out of order, by the program that took it out
    order: dict[str, list[str]] = field(default_factory=dict)
    sheets: int = 0
    #: checks that are NG on the sheets
    failed: int = 0


def build(project: Path, target: Path, options: tuple[str, ...] = ()) -> subprocess.CompletedProcess[str]:
    """Build a package through the command line."""
    command = [sys.executable, "-m", "calcreport", "build", str(project), "-o", str(target), *options]
    surroundings = os.environ | {"PYTHONPATH": str(ROOT)}
    return subprocess.run(command, cwd=ROOT, env=surroundings, capture_output=True, text=True, check=False)


def prove(name: str, project: Path, target: Path, most_pages: int, options: tuple[str, ...] = ()) -> Proof:
    """Build a project and prove its package; text is taken out of the first pages only."""
    built = build(project, target, options)
    proof = Proof(name, target, built.returncode, built.stdout + built.stderr)
    if built.returncode in (0, 1) and target.exists():
        look(proof, read_package(target), most_pages)
    return proof


def look(proof: Proof, package: Package, most_pages: int) -> None:
    """Judge a package."""
    proof.sheets = len(package.sheets)
    for calculation in package.calculations:
        proof.account.add(examine(calculation))
        proof.failed += len(failed_checks(calculation))
    proof.numbering, proof.marks, proof.overlaps = numbering(package), marks(package), overlaps(package)
    proof.sampler, proof.sampled = sampler(package), sum(len(sheet.lines) for sheet in package.sampler)
    wanted = package.sheets[:most_pages] + package.sampler
    proof.order["pypdf"] = [
        f"{sheet.name} {text}"
        for sheet in wanted
        for text in out_of_order(package.reader.pages[sheet.index].extract_text(), sheet.lines, sheet.index)
    ]
    texts = _by_pdfium(package.path)
    proof.order["pdfium"] = [
        f"{sheet.name} {text}"
        for sheet in package.sheets + package.sampler
        for text in out_of_order(texts[sheet.index], sheet.lines, sheet.index)
    ]


def _by_pdfium(path: Path) -> list[str]:
    """Return the text of every page in the order of its content, as a second engine takes it out."""
    document = pypdfium2.PdfDocument(path)
    return [page.get_textpage().get_text_range() for page in document]
