"""What README.md and DEVELOPERS.md name exists: modules, files, commands; and CI runs the README's test command."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from calcreport.__main__ import make_parser

ROOT = Path(__file__).parent.parent
README = (ROOT / "README.md").read_text(encoding="utf-8")
GUIDE = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")


def modules_named() -> list[str]:
    """Return every `stage/module` of the map, stars included."""
    table = GUIDE[GUIDE.index("| where | what it knows |") : GUIDE.index("## Terms")]
    cells = [row.split("|")[1] for row in table.splitlines()[2:] if row.startswith("|")]
    return re.findall(r"`([a-z_/*]+)`", " ".join(cells))


@pytest.mark.parametrize("name", modules_named())
def test_modules_of_the_map_exist(name: str) -> None:
    assert list((ROOT / "calcreport").glob(f"{name}.py")), name


def test_every_module_stands_in_the_map() -> None:
    named = {path for name in modules_named() for path in (ROOT / "calcreport").glob(f"{name}.py")}
    all_modules = {p for p in (ROOT / "calcreport").rglob("*.py") if p.name not in ("__init__.py", "model.py")}
    left = {p.relative_to(ROOT).as_posix() for p in all_modules - named}
    # records live beside the stage they are handed on by; the version is a line
    assert all(name.endswith("_model.py") or name.endswith(("version.py", "world.py")) for name in left), sorted(left)


def test_commands_named_exist() -> None:
    parser = make_parser()
    choices = next(a.choices for a in parser._actions if getattr(a, "choices", None))
    assert choices is not None
    named = set(re.findall(r"`?calcreport ([a-z]+)\b", README)) - {"takes"}
    assert named <= set(choices), named - set(choices)
    assert set(choices) <= named, set(choices) - named


@pytest.mark.parametrize("path", re.findall(r"\]\(([^)h][^)]*)\)", README))
def test_files_linked_exist(path: str) -> None:
    assert (ROOT / path).exists()


def test_ci_runs_the_test_command_of_the_readme() -> None:
    commands = re.findall(r"^    (python3 -m venv \.venv-test .*)$", README, flags=re.MULTILINE)
    assert len(commands) == 1 and "pytest" in commands[0]
    assert "README.md" in (ROOT / ".ci" / "run").read_text(encoding="utf-8")
