"""Every file in `tests/problems` holds one mistake; the problem expected of it stands in a comment beside the line.

    # problem: 12:28 unit-mismatch the formula does not give a length
    #   expected: a length, because d is declared in `in`
    #   found: an area, from b (in), h (in)
    #   see: 8:13 first here

A comment log is answered from the project `included/reviewed.yaml`. A problem in a table, which has no comments, stands in the project file with the table's name before its place.
Place, slug and every word are compared, and nothing else may be reported: one cause, one problem.
"""

from __future__ import annotations

import re
from functools import cache
from pathlib import Path

import pytest

from calcreport.commands.responding import respond
from calcreport.core.explanations import EXPLANATIONS
from calcreport.core.problems import Problem
from calcreport.core.source import Source, Span
from calcreport.driver import lint_template
from calcreport.filesystem import Disk, read_text
from calcreport.publish import report

HERE = Path(__file__).parent / "problems"
MAIN = sorted(path.stem for path in HERE.glob("*.yaml") if not path.name.endswith(".cases.yaml"))
_HEAD = re.compile(r"# problem: ((?:(?:tables/)?[\w.-]+\.csv:)?\d+:\d+) ([a-z-]+) (.*)")
_REST = re.compile(r"#   (expected|found|hint|see): (.*)")


class _Recorder:
    """The world of the test files; remembers which of them were read."""

    def __init__(self) -> None:
        self.disk = Disk(HERE, HERE / "library")
        self.read: dict[str, Source] = {}

    def project_text(self, path: str) -> Source | str:
        return self._kept(self.disk.project_text(path))

    def project_bytes(self, path: str) -> bytes | str:
        return self.disk.project_bytes(path)

    def template_text(self, name: str) -> Source | str:
        return self._kept(self.disk.template_text(name))

    def template_names(self) -> tuple[str, ...]:
        return self.disk.template_names()

    def _kept(self, found: Source | str) -> Source | str:
        if isinstance(found, Source):
            self.read[found.name] = found
        return found


@cache
def problems_of(name: str) -> tuple[tuple[Problem, ...], dict[str, Source]]:
    """Return what the program says of a file, with every file that was read."""
    world = _Recorder()
    source = read_text(HERE, f"{name}.yaml")
    assert isinstance(source, Source)
    world.read[source.name] = source
    if re.search(r"^(template|lines):", source.text, re.M) and not re.search(r"^project:", source.text, re.M):
        return lint_template(world, name).problems, world.read
    if re.search(r"^cycle:", source.text, re.M):
        project = world.project_text("included/reviewed.yaml")
        assert isinstance(project, Source)
        return respond(world, project, source).problems, world.read
    return report(world, source).problems, world.read


def expected_in(source: Source) -> list[list[str]]:
    """Return the problems a file's comments expect, each as lines of text."""
    found: list[list[str]] = []
    for line in source.text.split("\n"):
        if head := _HEAD.fullmatch(line):
            place = head[1] if ".csv:" in head[1] else f"{source.name}:{head[1]}"
            found.append([f"{place} {head[2]} {head[3]}"])
        elif (rest := _REST.fullmatch(line)) and found:
            found[-1].append(f"{rest[1]}: {rest[2]}")
    return found


def told(problem: Problem) -> list[str]:
    """Return a problem as the comments write it."""
    assert problem.span is not None
    source = problem.span.source
    lines = [f"{_place(problem.span)} {problem.slug} {problem.message}"]
    for label, words in (("expected", problem.expected), ("found", problem.found), ("hint", problem.hint)):
        lines += [f"{label}: {words}"] if words else []
    for span, words in problem.related:
        place = _place(span).removeprefix(f"{source.name}:") if span.source is source else _place(span)
        lines.append(f"see: {place} {words}")
    return lines


def _place(span: Span) -> str:
    line, column = span.source.place(span.start)
    return f"{span.source.name}:{line}:{column}"


@pytest.mark.parametrize("name", MAIN)
def test_the_problem_and_nothing_else(name: str) -> None:
    problems, read = problems_of(name)
    expected = [lines for source in read.values() for lines in expected_in(source)]
    assert sorted(told(problem) for problem in problems) == sorted(expected)
    assert len(expected) == 1, "one mistake a file"


def test_every_message_says_what_was_expected_and_found() -> None:
    for name in MAIN:
        for problem in problems_of(name)[0]:
            assert problem.message and problem.expected and problem.found, name
            assert not re.search(r"\b(you|your|invalid|illegal|bad|wrong|forbidden)\b", problem.message), name


#: slugs that no file of the corpus can show, with the test that does
ELSEWHERE = {
    "bad-cell": "tests/read/test_workbook.py",
    "bad-revision": "tests/commands/test_issue.py",
    "cannot-write": "tests/commands/test_build.py",
    "file-too-large": "tests/commands/test_hostile.py",
    "no-values": "tests/commands/test_compare.py",
    "hidden-rows": "tests/read/test_workbook.py",
    "issue-altered": "tests/commands/test_issue.py",
    "issue-exists": "tests/commands/test_issue.py",
    "not-an-issue": "tests/commands/test_issue.py",
    "not-a-change": "tests/commands/test_field.py",
    "not-a-package": "tests/commands/test_verify.py",
}


def test_every_slug_has_a_file() -> None:
    shown = {problem.slug for name in MAIN for problem in problems_of(name)[0]}
    assert shown | ELSEWHERE.keys() == EXPLANATIONS.keys()
    assert all((HERE.parent.parent / path).exists() for path in ELSEWHERE.values())
