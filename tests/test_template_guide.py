"""templates/README.md: every example runs, lints clean, and prints what the guide says beside it, which is by hand.

    ```yaml template     a whole template file, named as its first line says; its cases and the like stand below it
    ```yaml cases        its case file
    ```yaml given        what a calculation of a project says: given values, roles, units
    ```text printed      rows off its sheet; `…` alone on a row stands for rows not shown
    ```text lint         what `lint` says of it

A template stays for the examples below it. What a calculation of another example gives is linked by its template's name.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from pathlib import Path

import pytest

from calcreport.driver import lint_template, work
from calcreport.filesystem import Disk, library_folder, read_text
from calcreport.read.lines import KINDS
from calcreport.report.compose import compose, tell
from tests.commands.desk import run
from tests.plain import rows

GUIDE = Path(__file__).parent.parent / "templates" / "README.md"
_BLOCK = re.compile(r"^```(\w+) (\w+)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
_FENCE = re.compile(r"^```(.*)$", re.MULTILINE)

PROJECT = """\
project: {title: Guide, number: G-1, address: none}
office: {name: (office)}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: IBC, year: 2021, amendments: none}, concrete: ACI 318-19, loads: ASCE/SEI 7-16}
criteria: {risk category: II, seismic design category: B}
revisions: [{number: 1, date: 2026-11-16, why: guide}]
materials:
  C4: {f_c: 4000 psi, w_c: 150 pcf}
  G60: {f_y: 60 ksi, E_s: 29000 ksi}
calculations:
"""


@dataclass
class Example:
    """A template with what stands below it in the guide."""

    name: str
    template: str
    line: int
    cases: str = ""
    #: (given, printed): one pair a calculation
    worked: list[tuple[str, str]] = field(default_factory=list)
    said: str = ""


def examples(text: str) -> list[Example]:
    """Return the examples of the guide in order."""
    found: list[Example] = []
    for match in _BLOCK.finditer(text):
        kind, body = f"{match[1]} {match[2]}", match[3]
        line = text.count("\n", 0, match.start()) + 1
        if kind == "yaml template":
            name = re.match(r"template: ([\w-]+)", body)
            assert name, f"line {line}: a template begins with its name"
            found.append(Example(name[1], body, line))
        elif kind == "yaml cases":
            found[-1].cases = body
        elif kind == "yaml given":
            found[-1].worked.append((body, ""))
        elif kind == "text printed":
            given, printed = found[-1].worked[-1]
            assert not printed, f"line {line}: printed twice"
            found[-1].worked[-1] = given, body
        elif kind == "text lint":
            found[-1].said = body
        else:
            raise AssertionError(f"line {line}: no such block: {kind}")
    return found


TEXT = GUIDE.read_text(encoding="utf-8")
EXAMPLES = examples(TEXT)


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with every template of the guide."""
    made = tmp_path_factory.mktemp("guide")
    for example in EXAMPLES:
        (made / f"{example.name}.yaml").write_text(example.template, encoding="utf-8")
        if example.cases:
            (made / f"{example.name}.cases.yaml").write_text(example.cases, encoding="utf-8")
    return made


def printed(folder: Path, example: Example, given: str) -> list[str]:
    """Return the rows of the sheet of a calculation made by an example."""
    entry = f"  - mark: T1\n    title: Trial\n    template: {example.name}\n"
    entry += "".join(f"    {line}\n" for line in given.splitlines())
    (folder / "project.yaml").write_text(PROJECT + entry, encoding="utf-8")
    disk = Disk(folder, library_folder())
    source = read_text(folder, "project.yaml")
    assert not isinstance(source, str)
    result = work(disk, source)
    assert not result.problems and result.worked is not None, result.problems
    report = compose(result.worked, tell(result.worked), lambda done, total: None).report
    part = next(part for part in report.parts if part.mark == "T1")
    return rows(part.blocks)


@pytest.mark.parametrize("example", EXAMPLES, ids=[example.name for example in EXAMPLES])
def test_example_lints_clean(folder: Path, example: Example) -> None:
    report = lint_template(Disk(folder, library_folder()), example.name)
    assert not report.problems, report.problems
    if example.cases:
        assert report.cases and not [one for one in report.unreached if not one.because], report.unreached


PAIRS = [(example, given, shown) for example in EXAMPLES for given, shown in example.worked]


@pytest.mark.parametrize(
    ("example", "given", "shown"), PAIRS, ids=[f"{example.name}-{n}" for n, (example, _, _) in enumerate(PAIRS)]
)
def test_example_prints_what_the_guide_says(folder: Path, example: Example, given: str, shown: str) -> None:
    assert shown, "every calculation shows what it prints"
    wanted = [" ".join(row.split()) for row in shown.splitlines() if row.strip()]
    left = printed(folder, example, given)
    skipping = True
    for row in wanted:
        if row == "…":
            skipping = True
            continue
        assert row in left, "\n".join(["", f"wanted {row}", *left])
        at = left.index(row)
        assert skipping or at == 0, "\n".join(["", f"rows before {row}", *left])
        left, skipping = left[at + 1 :], False
    assert skipping or not left, "\n".join(["", "more rows", *left])


def test_every_block_of_the_guide_is_looked_at() -> None:
    fences = [mark for mark in _FENCE.findall(TEXT) if mark]
    assert len(fences) == len(_BLOCK.findall(TEXT)) and _FENCE.findall(TEXT).count("") == len(fences)
    assert len(EXAMPLES) >= 18 and len(PAIRS) >= 20
    assert len({example.name for example in EXAMPLES}) == len(EXAMPLES)


@pytest.mark.parametrize("kind", [*KINDS, "parts", "only", "by_units", "linear", "pick", "over", "for", "as", "with"])
def test_every_construct_stands_in_an_example(kind: str) -> None:
    texts = "\n".join(example.template for example in EXAMPLES)
    assert re.search(rf"\b{kind}\b", texts), kind


SAID = [example for example in EXAMPLES if example.said]


@pytest.mark.parametrize("example", SAID, ids=[example.name for example in SAID])
def test_lint_says_what_the_guide_says(folder: Path, example: Example) -> None:
    ran = run("lint", str(folder / f"{example.name}.yaml"))
    assert (ran.out + ran.err).replace(f"{folder}/", "") == example.said
