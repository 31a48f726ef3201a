"""Every slug the program can use is explained, and nothing else is; explanations keep their form."""

from __future__ import annotations

import ast
import re
from pathlib import Path

import pytest

from calcreport.core.explanations import EXPLANATIONS

ROOT = Path(__file__).parents[2] / "calcreport"
_SLUG = re.compile(r"[a-z]+(?:-[a-z]+)+")


def slugs_in_code() -> set[str]:
    """Return the slugs handed to a collector of problems anywhere in the program."""
    found: set[str] = set()
    for path in ROOT.rglob("*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if not isinstance(node, ast.Call) or not node.args:
                continue
            name = node.func.attr if isinstance(node.func, ast.Attribute) else getattr(node.func, "id", "")
            first = node.args[0]
            if (
                name in ("add", "stop", "one_problem")
                and isinstance(first, ast.Constant)
                and isinstance(first.value, str)
            ):
                found |= {first.value} if _SLUG.fullmatch(first.value) else set()
            elif name == "add" and getattr(first, "id", "") != "slug":
                # `slug` is handed on by functions whose callers are seen here; another choice would escape this test
                owner = node.func.value if isinstance(node.func, ast.Attribute) else None
                assert getattr(owner, "attr", getattr(owner, "id", "")) != "problems", f"{path}:{node.lineno}"
    return found


def test_slugs_used_are_slugs_explained() -> None:
    assert slugs_in_code() == EXPLANATIONS.keys()


@pytest.mark.parametrize("slug", sorted(EXPLANATIONS))
def test_form(slug: str) -> None:
    text = EXPLANATIONS[slug]
    words, _, example = text.partition("\n\n")
    assert 2 <= len(re.findall(r"[.?](?=\s|$)", words)) <= 5
    assert "\n" in words and words.split("\n")[0][-1] in ".:", "the first line stands alone in the list"
    assert example and all(line.startswith("    ") for line in example.split("\n") if line)
    assert all(len(line) <= 120 for line in text.split("\n"))
    assert not re.search(r"\b(you|your|invalid|illegal)\b", text, re.I)
