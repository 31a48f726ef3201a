"""Files with forty planted mistakes of one stage: one run tells of every one of them once, and of nothing else.

Beside each file stands a list made by hand from the file alone: the place, the slug, and words that must stand in what
was expected, in what was found and in the hint.

    line:column | slug | expected | found | hint
"""

from __future__ import annotations

import json
import re
from pathlib import Path

import pytest

from calcreport.core.explanations import EXPLANATIONS
from tests.commands.desk import run

HERE = Path(__file__).parent
_HEAD = re.compile(r"^\S*?([\w-]+(?:\.cases)?\.yaml|[\w-]+\.csv):(\d+):(\d+): error\[([a-z-]+)\]: (.+)$", re.M)
#: file given to `lint`: lists of what it must tell, by the file each is about
FILES: dict[str, tuple[str, ...]] = {
    "slips.yaml": ("slips.yaml",),
    "wall-footing.yaml": ("wall-footing.cases.yaml", "wall-footing.yaml"),
    "project.yaml": ("pads.csv", "project.yaml"),
}
#: mistakes planted in a file and in the table it reads; cases have their own
PLANTED = {"slips.yaml": 12, "wall-footing.yaml": 40 + 9, "project.yaml": 40}


def _expected(name: str) -> list[tuple[str, int, int, list[str]]]:
    """Return file, line, column, and slug with the words expected, found and hinted."""
    rows = []
    for line in (HERE / name).with_suffix(".expected").read_text(encoding="utf-8").splitlines():
        place, *words = (part.strip() for part in line.split(" |"))
        at = place.split(":")
        rows.append((name, int(at[0]), int(at[1]), [*words, "", ""][:4]))
    return rows


def _all_expected(file: str) -> list[tuple[str, int, int, list[str]]]:
    return [row for name in FILES[file] for row in _expected(name)]


@pytest.mark.parametrize("file", FILES)
def test_every_mistake_is_told_once_and_nothing_else(file: str) -> None:
    ran = run("lint", str(HERE / file), "--json")
    assert ran.code == 2
    told = json.loads(ran.out)["problems"]
    places = [(Path(p["file"]).name, p["line"], p["column"], p["slug"]) for p in told]
    expected = _all_expected(file)
    assert places == [(name, line, column, words[0]) for name, line, column, words in expected]
    assert len(places) == PLANTED[file]
    assert len(set(places)) == len(places)
    for problem, (_, line, _, (_, *words)) in zip(told, expected, strict=True):
        for key, word in zip(("expected", "found", "hint"), words, strict=True):
            assert word in problem[key], (line, key, problem[key])
        assert problem["message"] and problem["expected"] and problem["found"], problem
        assert problem["slug"] in EXPLANATIONS


@pytest.mark.parametrize("file", FILES)
def test_the_text_form_says_the_same_and_points_at_the_place(file: str) -> None:
    ran = run("lint", str(HERE / file))
    heads = [(name, int(line), int(column), slug) for name, line, column, slug, _ in _HEAD.findall(ran.err)]
    expected = _all_expected(file)
    assert heads == [(name, line, column, words[0]) for name, line, column, words in expected]
    assert f"\n{len(expected)} problems." in ran.err
    # the caret stands under the column told, in a window cut out of a long line
    for name, line, column, _ in heads:
        text = (HERE / name).read_text(encoding="utf-8").split("\n")[line - 1]
        block = re.search(rf"{re.escape(name)}:{line}:{column}: .*\n +{line} \| (.*)\n +\| ( *)\^", ran.err)
        assert block is not None
        if len(text) <= 150:
            assert block[1] == text.replace("\t", " ") and len(block[2]) == column - 1
