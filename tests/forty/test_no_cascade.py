"""One slip anywhere in a sound template is told once: what depends on the line at fault says nothing of its own."""

from __future__ import annotations

import re
from collections.abc import Iterator
from random import Random

import pytest

from calcreport.core.source import Source
from calcreport.driver import lint_template
from calcreport.filesystem import Disk, library_folder

LIBRARY = library_folder()
#: what is slipped on a line: a pattern, and what stands in its place
SLIPS = {
    "formula": (r"((?:formula|otherwise|when|holds|require): '[^']+)'", r"\1 +'"),
    "kind": (r"\b(gives|rows|each|unknown|part|branches): ", r"x\1: "),
    "name": (r"\b((?:each|part|same|over): \[?\w+)", r"\1q"),
    "set": (r"\bover (\w+)\)", r"over \1q)"),
    "range": (r"range: '", "range: '~"),
    "unit": (r"unit: (\w+)", r"unit: \1q"),
    "key": (r"says: ", "sais: "),
    "tab": (r"^ {2}(?=\S+.*: )", "\t  "),
    "brace": (r"\}$", ""),
}


class _World:
    """The library with one file changed."""

    def __init__(self, file: str, text: str) -> None:
        self.disk = Disk(LIBRARY, LIBRARY)
        self.file, self.text = file, text

    def template_text(self, name: str) -> Source | str:
        return Source(name, self.text) if name == self.file else self.disk.template_text(name)

    def template_names(self) -> tuple[str, ...]:
        return self.disk.template_names()

    def project_text(self, path: str) -> Source | str:
        return self.disk.project_text(path)

    def project_bytes(self, path: str) -> bytes | str:
        return self.disk.project_bytes(path)


def _slipped(text: str, slip: str) -> Iterator[tuple[int, str]]:
    pattern, instead = SLIPS[slip]
    lines = text.split("\n")
    for number, line in enumerate(lines):
        for match in re.finditer(pattern, line):
            new = line[: match.start()] + match.expand(instead) + line[match.end() :]
            yield number + 1, "\n".join([*lines[:number], new, *lines[number + 1 :]])


@pytest.mark.parametrize("slip", SLIPS)
@pytest.mark.parametrize("name", ["aci318/beam-flexure", "asce7/strength-combinations", "statics/simple-beam"])
def test_one_slip_one_problem(name: str, slip: str) -> None:
    text = (LIBRARY / f"{name}.yaml").read_text(encoding="utf-8")
    every = list(_slipped(text, slip))
    for line, changed in Random(1).sample(every, min(4, len(every))):
        problems = lint_template(_World(f"{name}.yaml", changed), name).problems
        told = [f"{p.span.place if p.span else ''} {p.slug} {p.message}" for p in problems]
        assert len(told) == 1, (line, told)
