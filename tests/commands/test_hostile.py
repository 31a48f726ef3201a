"""Hostile and damaged files: each ends in problems and exit code 2, quickly, with nothing written.

Bounds in seconds are processor time: they tell a bound from an explosion, not one machine from another.
"""

from __future__ import annotations

import os
from pathlib import Path

import pytest

from calcreport.core.problems import MOST_KEPT
from tests.commands.desk import EARLIER, HEAD, LINES, PROJECT, TEMPLATE, make, names, run

#: two seconds is the aim; the third leaves room for a busy machine
LONGEST = 3.0
_MANY = "\n".join(f"  - {{mark: X{i}, title: x, template: trial, given: {{b: {{from: Y{i}.b}}}}}}" for i in range(4000))


def _project(value: str) -> str:
    return PROJECT.replace("3 in", value)


FILES: dict[str, tuple[str | bytes, str]] = {
    "list at the top": ("- a\n- b\n", "wrong-shape"),
    "text at the top": ("a", "wrong-shape"),
    "empty": ("", "not-yaml"),
    "comments only": ("# nothing\n", "not-yaml"),
    "null byte": (PROJECT.encode().replace(b"Trial", b"Tri\x00al", 1), "odd-character"),
    "escape sequence": (PROJECT.replace("Trial", "\x1b[31mTrial", 1), "odd-character"),
    "not UTF-8": (PROJECT.encode().replace(b"Trial", b"Tri\xff", 1), "no-file"),
    "UTF-16": (PROJECT.encode("utf-16"), "no-file"),
    "carriage returns alone": (PROJECT.replace("\n", "\r"), "odd-character"),
    "byte order mark inside": (PROJECT.replace("Trial", "\ufeffTrial", 1), "odd-character"),
    "tab": (PROJECT.replace("  - {mark", "\t- {mark"), "not-yaml"),
    "one long line": (PROJECT + "x" * 1_900_000, "not-yaml"),
    "two million characters": (PROJECT + "#" * 2_000_001, "file-too-large"),
    "nine million bytes": (PROJECT + "#" * 9_000_000, "no-file"),
    "deep brackets": ("a: " + "[" * 100_000, "not-yaml"),
    "deep braces": ("a: " + "{a: " * 50_000, "file-too-large"),
    "deep lists": ("- " * 100_000 + "a", "file-too-large"),
    "deep indents": ("\n".join(" " * i + "a:" for i in range(1500)), "file-too-large"),
    "many keys": ("\n".join(f"key{i}: {i}" for i in range(20_000)), "unknown-key"),
    "many links": (PROJECT + _MANY, "unknown-name"),
    "alias": ("a: &a [x, x]\nb: [*a, *a]\n", "yaml-feature"),
    "tag": (PROJECT.replace("3 in", "!!python/object/apply:os.system ['true']"), "yaml-feature"),
    "merge key": (HEAD + "calculations:\n  - {<<: {mark: T1}}\n", "yaml-feature"),
    "key that is a list": ("? [a, b]\n: c\n", "not-yaml"),
    "two documents": (PROJECT + "---\n" + PROJECT, "not-yaml"),
    "thousand digits": (_project("9" * 1000 + " in"), "not-a-quantity"),
    "exponent of three digits": (_project("1e999 in"), "unknown-unit"),
    "foreign digits": (_project("\u0663 in"), "not-a-quantity"),
    "infinity": (_project("inf in"), "not-a-quantity"),
    "not a number": (_project("nan in"), "not-a-quantity"),
    "division by zero": (_project("1/0 in"), "not-a-quantity"),
    "unit with a bomb": (_project("1 in^99"), "unknown-unit"),
}


@pytest.mark.parametrize("name", FILES)
def test_project_file(tmp_path: Path, name: str) -> None:
    text, slug = FILES[name]
    make(tmp_path, text)
    ran = run("build", str(tmp_path))
    assert ran.code == 2
    assert f"error[{slug}]" in ran.err
    assert ran.seconds < LONGEST
    assert (tmp_path / "project.pdf").read_bytes() == EARLIER
    assert names(tmp_path) == ["project.pdf", "project.yaml", "trial.yaml"]


def test_problems_are_bounded(tmp_path: Path) -> None:
    make(tmp_path, FILES["many keys"][0])
    ran = run("lint", str(tmp_path))
    assert f"{MOST_KEPT} or more problems" in ran.err
    assert ran.err.count("error[") == MOST_KEPT


@pytest.mark.parametrize("text", [PROJECT.replace("\n", "\r\n"), "\ufeff" + PROJECT, "%YAML 1.1\n---\n" + PROJECT])
def test_line_ends_marks_and_directives_of_other_editors_are_read(tmp_path: Path, text: str) -> None:
    make(tmp_path, text.encode())
    assert run("lint", str(tmp_path)).code == 0


#: lines of a template, with the slug it is refused by or '' where the calculation stops or fails instead
BOMBS: dict[str, tuple[str, str]] = {
    "exponent": ("  - {gives: r, formula: '9^(9^9)', cite: geometry}\n", "bad-formula"),
    "exponent by a symbol": (
        "  - {gives: q, formula: 'num(b, in)', cite: geometry}\n"
        "  - {gives: r, formula: '9^(q*9^9)', cite: geometry}\n  - {check: x, holds: 'r <= 1', cite: geometry}\n",
        "",
    ),
    "vanishing exponential in a tie": (
        "  - {gives: q, formula: '-num(b, in)*1e17', cite: geometry}\n"
        "  - {check: x, holds: 'exp(q) <= 0', cite: geometry}\n  - {check: y, holds: '2^q <= 0', cite: geometry}\n",
        "",
    ),
    "tower of powers in a tie": (
        "  - {gives: q, formula: 'num(b, in)/1e9', cite: geometry}\n"
        "  - {check: x, holds: '((q^12)^12)^12 <= ((q^12)^12)^12', cite: geometry}\n",
        "",
    ),
    "zero in an exact tie": (
        "  - {check: x, holds: '1/(0.1 + 0.2 - 0.3) <= 1/(0.1 + 0.2 - 0.3)', cite: geometry}\n",
        "",
    ),
    "beyond all bounds": (
        "  - {gives: q, formula: 'num(b, in)*1e90', cite: geometry}\n"
        "  - {check: x, holds: 'q*q*q*q - q*q*q*q*q <= 1', cite: geometry}\n"
        "  - {require: 'exp(q) <= 1', says: not reached, cite: geometry}\n",
        "",
    ),
    "sum of two hundred": ("  - {gives: r, formula: '" + "+".join(["1"] * 199) + "', cite: geometry}\n", ""),
    "sums in sums": (
        "  - {rows: p, cite: geometry, columns: {r: }, list: [" + ", ".join(["{r: '1'}"] * 900) + "]}\n"
        "  - {check: x, holds: 'sum(sum(sum(sum(1 over p) over p) over p) over p) <= 1', cite: geometry}\n",
        "",
    ),
    "long proof": (
        "  - {gives: r, formula: '2', as cited: '((((((r^12)^12)^12)^12)^12)^12)^12 = 1', cite: geometry}\n",
        "not-as-cited",
    ),
}


@pytest.mark.parametrize("name", BOMBS)
@pytest.mark.parametrize("what", ["project", "template"])
def test_template(tmp_path: Path, name: str, what: str) -> None:
    lines, slug = BOMBS[name]
    make(tmp_path, template=TEMPLATE + lines)
    ran = run("lint", str(tmp_path if what == "project" else tmp_path / "trial.yaml"))
    expected = {2} if slug and (what == "template" or slug != "not-as-cited") else {0, 1}
    assert ran.code in expected, ran.err
    assert ran.seconds < LONGEST


def test_parts_that_multiply(tmp_path: Path) -> None:
    fan = ", ".join(f"p{i}: {{lines: [{', '.join([f'{{part: p{i + 1}}}'] * 9)}]}}" for i in range(7))
    parts = f"parts: {{{fan}, p7: {{lines: [{{note: x}}]}}}}\n"
    make(tmp_path, template=TEMPLATE.replace("lines:\n", parts + "lines:\n") + "  - {part: p0}\n")
    ran = run("lint", str(tmp_path))
    assert ran.code == 2 and "error[file-too-large]" in ran.err
    assert ran.seconds < LONGEST


def test_includes_that_multiply(tmp_path: Path) -> None:
    make(tmp_path, HEAD + "calculations:\n  - include: level-0.yaml\n")
    for level in range(220):
        again = "".join(f"  - include: level-{n}.yaml\n" for n in range(220))
        (tmp_path / f"level-{level}.yaml").write_text("calculations:\n" + again)
    ran = run("lint", str(tmp_path))
    assert ran.code == 2 and "error[include-loop]" in ran.err
    assert ran.seconds < LONGEST


@pytest.mark.parametrize(
    ("path", "found"),
    [
        ("../secret.yaml", "outside"), ("link.yaml", "outside"), ("folder/../../secret.yaml", "outside"),
        ("/etc/hosts", "not a path inside"), ("a\\b.yaml", "not a path inside"), ("x" * 301, "not a path inside"),
        ("x" * 290, "too long"), ("folder", "not a file"), ("pipe", "not a file"), ("none.yaml", "no such file"),
        ("''", "not a path inside"),
    ],
)  # fmt: skip
def test_includes_stay_inside(tmp_path: Path, path: str, found: str) -> None:
    (tmp_path / "secret.yaml").write_text("calculations: []\n")
    folder = tmp_path / "project"
    folder.mkdir()
    make(folder, HEAD + f"calculations:\n  - include: {path}\n")
    (folder / "folder").mkdir()
    os.symlink("../secret.yaml", folder / "link.yaml")
    os.mkfifo(folder / "pipe")
    ran = run("build", str(folder))
    assert ran.code == 2 and "error[no-file]" in ran.err and found in ran.err
    assert (folder / "project.pdf").read_bytes() == EARLIER


def test_template_outside_the_folder_is_refused(tmp_path: Path) -> None:
    (tmp_path / "trial.yaml").write_text(TEMPLATE + LINES)
    folder = tmp_path / "project"
    folder.mkdir()
    make(folder)
    (folder / "trial.yaml").unlink()
    os.symlink("../trial.yaml", folder / "trial.yaml")
    ran = run("build", str(folder))
    assert ran.code == 2 and "it leads outside the folder" in ran.err


def test_unreadable_notation_is_one_problem(tmp_path: Path) -> None:
    make(tmp_path)
    (tmp_path / "symbols.yaml").write_bytes(b"\xff")
    ran = run("lint", str(tmp_path))
    assert ran.code == 2 and ran.err.count("error[") == 1 and "symbols.yaml" in ran.err


def test_folder_in_place_of_a_file(tmp_path: Path) -> None:
    (tmp_path / "project.yaml").mkdir()
    ran = run("build", str(tmp_path))
    assert ran.code == 2 and "it is not a file" in ran.err


@pytest.mark.skipif(os.geteuid() == 0, reason="root reads every file")
def test_file_without_permission(tmp_path: Path) -> None:
    make(tmp_path)
    (tmp_path / "project.yaml").chmod(0)
    ran = run("build", str(tmp_path))
    assert ran.code == 2 and "permission denied" in ran.err


def test_control_characters_stay_off_the_terminal(tmp_path: Path) -> None:
    make(tmp_path, PROJECT.replace("status: preliminary", "status: \u202epreliminary"))
    ran = run("lint", str(tmp_path))
    assert ran.code == 2 and "\u202e" not in ran.err
