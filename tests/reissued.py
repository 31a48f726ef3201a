"""A small project of three calculations that are issued one after another, as files and as finished packages."""

from __future__ import annotations

import json
import re
from dataclasses import dataclass
from io import BytesIO
from pathlib import Path
from typing import Any

from pypdf import PdfReader

from calcreport.commands.desk import Opened, open_project
from calcreport.history.frozen import VALUES
from calcreport.publish import Package, build
from calcreport.report.deltas import Shown
from tests.commands.desk import run

TEMPLATE = """\
template: bar
title: Bar in tension
code: {name: OWN}
units: [us]
covers: [tension]
excludes: []
symbols:
  P: {unit: kip, says: load}
  A: {unit: 'in^2', says: area}
  s: {unit: ksi, says: stress}
  s_max: {unit: ksi, says: stress permitted}
  t: {unit: ksi, says: twice the stress}
given: {P: , A: , s_max: }
lines:
  - {gives: s, formula: 'P/A', cite: statics}
  - {check: stress, holds: 's <= s_max', cite: statics}
"""
HEAD = """\
project: {{title: Trial, number: T1, address: none}}
office: {{name: (office)}}
status: {status}
date: 2026-11-{day}
units: us
codes: {{adopted: {{name: IBC, year: 2024, amendments: none}}, concrete: ACI 318-19, loads: ASCE/SEI 7-22}}
criteria: {{risk category: II, seismic design category: B}}
revisions: [{revisions}]
calculations:
"""
#: T3 takes its load from T2
CALCULATIONS = (
    "  - {mark: T1, title: First bar, template: bar, given: {P: 10 kip, A: 2 in^2, s_max: 20 ksi}}\n"
    "  - {mark: T2, title: Second bar, template: bar, given: {P: 30 kip, A: 2 in^2, s_max: 20 ksi}}\n"
    "  - {mark: T3, title: Third bar, template: bar, given: {P: {from: T2.P}, A: 4 in^2, s_max: 20 ksi}}\n"
)


@dataclass
class Project:
    """The project in its folder, changed between issues by replacing text."""

    folder: Path
    calculations: str = CALCULATIONS
    template: str = TEMPLATE
    status: str = "for review"
    number: int = 1

    def build(self, marks: Shown = "last") -> Package:
        """Build the package as the files stand now."""
        rows = ", ".join(f"{{number: {n}, date: 2026-11-{15 + n}, why: issue {n}}}" for n in range(1, self.number + 1))
        text = HEAD.format(status=self.status, revisions=rows, day=15 + self.number) + self.calculations
        (self.folder / "project.yaml").write_text(text, encoding="utf-8")
        (self.folder / "bar.yaml").write_text(self.template, encoding="utf-8")
        opened = open_project(str(self.folder))
        assert isinstance(opened, Opened), opened
        package = build(opened.world, opened.source, marks=marks)
        assert not package.problems, package.problems
        return package

    def issue(self) -> Package:
        """Build, issue, and go on to the next number."""
        package = self.build()
        assert run("issue", str(self.folder)).code in (0, 1)
        place = self.folder / "issues" / str(self.number)
        assert (place / "package.pdf").read_bytes() == package.data
        (self.folder / f"{self.number}.pdf").write_bytes(package.data)
        self.number += 1
        return package

    def change(self, old: str, new: str) -> None:
        """Replace text in the calculations, once."""
        assert old in self.calculations
        self.calculations = self.calculations.replace(old, new, 1)


def values(package: Package) -> dict[str, Any]:
    """Return the calculations of a package's values file."""
    found = json.loads(package.files[VALUES])["calculations"]
    assert isinstance(found, dict)
    return found


def revisions(package: Package) -> dict[str, tuple[str, str]]:
    """Return revision and date by mark, as the values file tells them."""
    return {mark: (one["revision"], one["changed"]) for mark, one in values(package).items()}


def sheets(package: Package) -> dict[str, str]:
    """Return what is drawn on every sheet, by its label."""
    pages = PdfReader(BytesIO(package.data)).pages
    assert package.pages is not None
    return {
        own.label: page.get_contents().get_data().decode("latin-1")  # type: ignore[union-attr]
        for own, page in zip(package.pages.pages, pages, strict=True)
    }


def words(package: Package, label: str) -> str:
    """Return the text of a sheet as another library reads it."""
    assert package.pages is not None
    place = [page.label for page in package.pages.pages].index(label)
    text = PdfReader(BytesIO(package.data)).pages[place].extract_text()
    return re.sub(r"\s+", " ", text)
