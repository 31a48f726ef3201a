"""The schemas of files, held against the reader itself.

The reader is listened to while it reads every sample, template, case file and file of mistakes: which keys it knows in
which mapping, and how it asks for each. The schemas must know the same keys and take the same shapes. Then every file
that reads without a problem must validate, and those with mistakes of structure must not.
"""

from __future__ import annotations

import json
import re
from collections.abc import Iterable
from functools import cache
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from calcreport.commands.schema import KINDS, schema_of
from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.driver import lint_template, work
from calcreport.filesystem import Disk, library_folder, read_text
from calcreport.read import fields as reading
from calcreport.read.library import Library
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told, read_tree
from calcreport.read.project_schema import project_schema
from calcreport.read.shapes import Schema
from tests.commands.desk import run
from tests.test_problems import HERE as MISTAKES
from tests.test_problems import MAIN, problems_of

ROOT = Path(__file__).parents[2]
SAMPLES = sorted((ROOT / "samples").glob("*/project.yaml"))
#: what the reader calls a mapping, names in it taken out: the schema of its file, and where it is defined there
DEFINED = {
    "a project file": ("project", "project file"), "an included file": ("project", "included file"),
    "`project`": ("project", "project"), "`office`": ("project", "office"), "`codes`": ("project", "codes"),
    "`adopted`": ("project", "adopted"), "an assumption": ("project", "assumption"),
    "`criteria`": ("project", "criteria"),
    "an entry of `elsewhere`": ("project", "elsewhere"), "a disposition": ("project", "disposition"),
    "a revision": ("project", "revision"), "the value of …": ("project", "told value"),
    "a calculation": ("project", "calculation"), "a schedule": ("project", "schedule"),
    "a column": ("project", "column"), "rows of a table": ("project", "rows of a table"),
    "rows of another": ("project", "rows of another"), "the values of …": ("project", "rows of a table"),
    "a template": ("template", ""), "`code`": ("template", "code"), "the symbol …": ("template", "symbol"),
    "the given …": ("template", "given"), "the part …": ("template", "part"), "a branch": ("template", "branch"),
    "a branch of a value": ("template", "arm"), "the column …": ("template", "column"), "a row": ("template", "row"),
    "a comment log": ("comments", "comment log"), "a comment": ("comments", "comment"),
    "an entry of `answered`": ("comments", "other place"),
    "a case": ("cases", "case"), "an entry `no case`": ("cases", "reason"), "`stops`": ("cases", "stops"), "the expectation of …": ("cases", "expected"),
}  # fmt: skip
#: mappings of other files, of a line's own keys, and those whose keys are all the author's
ELSEWHERE = ("a member", "a bar table", "a bar size", "an include", "`where`", "`at`", "`columns`", "…")


@cache
def schema(kind: str) -> Schema:
    return schema_of(kind)


@cache
def validator(kind: str) -> Any:
    """Return the validator of a kind of file, or of a project that takes the library of the mistakes."""
    if kind == "mistaken project":
        mistaken = project_schema(Library(Disk(MISTAKES, MISTAKES / "library"), Problems()))
        return jsonschema.Draft202012Validator(mistaken)
    return jsonschema.Draft202012Validator(schema(kind))


# ---------------------------------------------------------------- files as an editor sees them

_NUMBER = re.compile(r"[-+]?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][-+]?[0-9]+)?")


def as_json(node: Node, *, typed: bool) -> Any:
    """Return a tree as JSON: typed as YAML's core schema types plain text, or all of it as text."""
    match node:
        case Scalar(text, _, quoted):
            if not text and not quoted:
                return None
            if typed and not quoted and _NUMBER.fullmatch(text):
                return json.loads(text.removeprefix("+"))
            if typed and not quoted and text in ("true", "false", "null"):
                return json.loads(text)
            return text
        case Sequence(items):
            return [as_json(item, typed=typed) for item in items]
        case Mapping(entries):
            return {key.text: as_json(value, typed=typed) for key, value in entries}
        case Told():
            return None


def faults(kind: str, path: Path) -> list[str]:
    """Return what a schema says of a file, for both ways in which an editor may type it."""
    source = read_text(path.parent, path.name)
    assert isinstance(source, Source)
    root = read_tree(source, Problems())
    if root is None:
        return ["it is not well formed"]
    said = [
        [
            f"{error.json_path}: {error.message[:200]}"
            for error in validator(kind).iter_errors(as_json(root, typed=typed))
        ]
        for typed in (True, False)
    ]
    assert bool(said[0]) == bool(said[1]), said
    return said[0]


# ---------------------------------------------------------------- the reader listened to


class _Ear:
    """What the reader asked for: keys allowed by mapping, and how each key was read."""

    def __init__(self) -> None:
        self.allowed: dict[str, set[str]] = {}
        self.asked: dict[tuple[str, str], set[tuple[str, tuple[object, ...]]]] = {}


def _called(what: str, allowed: tuple[str, ...]) -> str:
    plain = re.sub(r"^((?:the \w+(?: of)? )|)`.*`$", lambda m: f"{m[1]}…" if m[1] else m[0], what)
    if plain == "a branch" and "formula" in allowed:
        return "a branch of a value"
    if plain == "the rows of …":
        return "rows of another" if "from" in allowed else "rows of a table"
    return plain


@cache
def heard() -> _Ear:
    """Read everything there is with the reader's fields listened to."""
    ear = _Ear()
    patch = pytest.MonkeyPatch()
    made = reading.Fields.__init__

    def listen(self: Any, node: Any, allowed: Any, what: str, problems: Any, later: Any = ()) -> None:
        keys = tuple(allowed)
        self.called = _called(what, keys)
        ear.allowed.setdefault(self.called, set()).update(keys)
        made(self, node, keys, what, problems, later)

    patch.setattr(reading.Fields, "__init__", listen)
    for name in ("scalar", "choice", "whole", "mapping", "items", "texts"):
        patch.setattr(reading.Fields, name, _listening(ear, name, getattr(reading.Fields, name)))
    try:
        for path in SAMPLES:
            source = read_text(path.parent, path.name)
            assert isinstance(source, Source)
            work(Disk(path.parent, library_folder()), source)
        world = Disk(ROOT / "templates", library_folder())
        for name in world.template_names():
            lint_template(world, name)
        problems_of.cache_clear()
        for name in MAIN:
            problems_of(name)
    finally:
        patch.undo()
        problems_of.cache_clear()
    return ear


def _listening(ear: _Ear, name: str, method: Any) -> Any:
    def listen(self: Any, key: str, *more: Any, **named: Any) -> Any:
        told = tuple(more[0]) if name == "choice" else (named["low"], named["high"]) if name == "whole" else ()
        ear.asked.setdefault((self.called, key), set()).add((name, told))
        return method(self, key, *more, **named)

    return listen


def definition(called: str) -> Schema | None:
    """Return the schema of a mapping by what the reader calls it."""
    line = re.fullmatch(r"an? `([\w ]+)` line", called)
    kind, name = ("template", f"{line[1]} line") if line else DEFINED.get(called, ("", ""))
    if not kind:
        return None
    found: Schema = schema(kind) if not name else schema(kind)["$defs"][name]
    return found


def test_the_reader_was_heard() -> None:
    assert len(heard().allowed) > 35 and len(heard().asked) > 100
    unknown = [called for called in heard().allowed if definition(called) is None]
    assert [called for called in unknown if called not in ELSEWHERE and not called.startswith("`")] == []


def test_every_key_the_reader_knows_is_in_the_schema_and_no_other() -> None:
    for called, allowed in heard().allowed.items():
        found = definition(called)
        if found is None:
            continue
        keys = set(found["properties"])
        if called == "`criteria`":
            # the library of the mistakes has a list of its own
            assert keys < allowed
        elif found.get("additionalProperties") is False:
            assert keys == allowed, called
        else:
            # roles of a template and columns of a set are the author's own keys
            assert keys <= allowed, called
            assert called in ("a calculation", "a schedule", "a row")


def test_every_key_is_told_a_shape_that_is_the_readers() -> None:
    """A key read as text takes text and no list, a list takes no mapping, a word is of the reader's own list."""
    wrong = []
    samples = {"text": "x", "list": ["x"], "mapping": {"x": "y"}}
    takes = {"scalar": {"text"}, "texts": {"text", "list"}, "items": {"list"}, "mapping": {"mapping"}}
    for (called, key), ways in heard().asked.items():
        found = definition(called)
        if found is None or key not in found["properties"]:
            continue
        kind = DEFINED.get(called, ("template", ""))[0]
        whole = {"$defs": schema(kind)["$defs"], **found["properties"][key]}
        here = jsonschema.Draft202012Validator(whole)
        for way, told in ways:
            if way == "choice":
                good = all(here.is_valid(word) for word in told) and not here.is_valid("no such word")
            elif way == "whole":
                low, high = told
                good = here.is_valid(low) and here.is_valid(high) and not here.is_valid(high + 1)
                good = good and here.is_valid(str(high)) and not here.is_valid("x")
            elif way == "scalar" and any(other in ("choice", "whole") for other, _ in ways):
                continue
            else:
                shapes = {name for name, sample in samples.items() if not _refused(here.iter_errors(sample), sample)}
                good = shapes == takes[way]
            if not good:
                wrong.append((called, key, way, told))
    assert wrong == []


def _refused(errors: Iterable[Any], sample: Any) -> bool:
    """Tell whether a shape itself is refused, and not only what stands in it."""
    for error in errors:
        if error.relative_path:
            continue
        if error.validator == "type" or (error.validator == "enum" and not isinstance(sample, str)):
            return True
        if error.validator == "anyOf":
            ways = {cause.schema_path[0] for cause in error.context}
            if all(_refused([c for c in error.context if c.schema_path[0] == way], sample) for way in ways):
                return True
    return False


# ---------------------------------------------------------------- files that read well


def test_schemas_are_schemas() -> None:
    for kind in KINDS:
        jsonschema.Draft202012Validator.check_schema(schema(kind))
        assert schema(kind)["$schema"] == "https://json-schema.org/draft/2020-12/schema"


@pytest.mark.parametrize("path", sorted((ROOT / "templates").rglob("*.yaml")), ids=lambda p: p.stem)
def test_the_library(path: Path) -> None:
    if path.name == "project.yaml":
        assert faults("project", path) == []
    elif path.name.endswith(".cases.yaml"):
        assert faults("cases", path) == []
    elif path.name != "symbols.yaml" and not path.name.startswith("bars-") and path.parent.name != "templates":
        assert faults("template", path) == []


@pytest.mark.parametrize("path", sorted((ROOT / "samples").rglob("*.yaml")), ids=lambda p: f"{p.parent.name}-{p.stem}")
def test_samples(path: Path) -> None:
    own = (path.parent / f"{path.stem.removesuffix('.cases')}.cases.yaml").exists()
    kind = "cases" if path.name.endswith(".cases.yaml") else "template" if own else "project"
    kind = "comments" if path.name.startswith("comments") else kind
    assert faults(kind, path) == []


# ---------------------------------------------------------------- files with mistakes

#: mistakes that are structure, which the schema must refuse
STRUCTURE = ("unknown-key", "unknown-line", "wrong-shape", "missing-key", "not-yet", "no-cite", "no-otherwise")
#: slugs whose mistakes a schema sees where a list of words, a form or a template's names are written in it
SEEN_IN_PART = ("bad-comment-number", "bad-mark", "comma-in-braces", "comment-cut", "edition-mix", "missing-value", "not-a-date",
                "not-a-number", "not-a-place", "not-a-word", "not-answered", "not-yaml", "odd-character", "row-count", "unknown-given", "yaml-feature")  # fmt: skip
#: those of them that no schema sees: what stands there depends on other files or other lines, or on the words of a text
UNSEEN = {
    "missing-key-says": "a symbol that the notation does not know needs its meaning on the line",
    "no-otherwise-early": "no schema tells which entry of a list is the last",
    "spaced-and-columns": "which of several ways to say the rows of a set a line takes",
    "spaced-and-list": "which of several ways to say the rows of a set a line takes",
    "spaced-word": "whether a symbol of the notation is a word",
    "wrong-shape-figure": "whether a formula is a symbol alone",
    "wrong-shape-no-row": "whether a value of a row stands in a list",
    "missing-key-twin": "whether two outputs of a method have the dimension of the value",
    "unknown-key-method-word": "which inputs of a method go with a word",
    "unknown-key-gives": "whether a given value is of bars",
    "wrong-shape-cells-of-candidate": "whether rows of the set stand under `given`",
    "wrong-shape-least": "whether a name is a number",
    "wrong-shape-one-preference": "whether the template says what is to be least",
}


def _kind_of(name: str) -> str:
    text = (MISTAKES / f"{name}.yaml").read_text("utf-8")
    if re.search(r"^cycle:", text, re.M):
        return "comments"
    template = re.search(r"^(template|lines):", text, re.M) and not re.search(r"^project:", text, re.M)
    return "template" if template else "mistaken project"


def _own_slugs(name: str) -> set[str]:
    found, _ = problems_of(name)
    return {p.slug for p in found if p.span is not None and p.span.source.name == f"{name}.yaml"}


@pytest.mark.parametrize("name", MAIN)
def test_files_with_mistakes(name: str) -> None:
    slugs = _own_slugs(name)
    if not slugs or "\0" in (MISTAKES / f"{name}.yaml").read_text("utf-8"):
        return
    said = faults(_kind_of(name), MISTAKES / f"{name}.yaml")
    if name in UNSEEN:
        assert said == [], "the schema sees it now: take it off the list"
    elif slugs & set(STRUCTURE):
        assert said, "a mistake of structure is not refused"
    elif not slugs & set(SEEN_IN_PART):
        assert said == [], "what is no mistake of structure is refused"


def test_a_file_may_name_its_schema(tmp_path: Path) -> None:
    """The comment by which editors are pointed to a schema is a comment to the reader."""
    text = (ROOT / "templates" / "starter" / "project.yaml").read_text("utf-8")
    (tmp_path / "project.yaml").write_text(f"# yaml-language-server: $schema=project.schema.json\n{text}", "utf-8")
    ran = run("lint", str(tmp_path))
    assert ran.code == 0, ran.err


@pytest.mark.parametrize("kind", KINDS)
def test_the_command_prints_the_schema(kind: str) -> None:
    ran = run("schema", kind)
    assert ran.code == 0
    assert json.loads(ran.out) == schema(kind)
