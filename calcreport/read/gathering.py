"""What a project file and the files it includes hold: materials, assumptions, calculations, schedules, as written.

Fields in, `Gathered` out. An included file is read from inside the project folder and once.
"""

from __future__ import annotations

import posixpath
from dataclasses import dataclass, field

from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.core.world import World
from calcreport.read.fields import Fields, as_mapping, as_scalar
from calcreport.read.model import Assumption
from calcreport.read.nodes import Mapping, Node, Scalar, read_tree

#: bounds against files made to exhaust
DEEPEST_INCLUDE, MOST_FILES, MOST_CALCULATIONS = 5, 200, 20_000
KEYS = ("materials", "assumptions", "calculations", "schedules")
ASSUMPTION_KEYS = ("says", "to be verified", "by")


@dataclass(slots=True)
class Gathered:
    """What the project file and its includes hold, before calculations are bound."""

    files: list[Source] = field(default_factory=list)
    #: properties by mark; None where a problem was told
    materials: dict[str, tuple[Scalar, dict[str, Scalar | None] | None]] = field(default_factory=dict)
    assumptions: list[Assumption] = field(default_factory=list)
    calculations: list[Mapping] = field(default_factory=list)
    schedules: list[Mapping] = field(default_factory=list)


class Gatherer:
    """Gathers through includes."""

    def __init__(self, world: World, source: Source, problems: Problems) -> None:
        self.world, self.problems = world, problems
        self.gathered = Gathered([source])
        self.names = {posixpath.normpath(source.name)}

    def gather(self, fields: Fields, depth: int = 0) -> None:
        """Collect from one file."""
        materials = fields.mapping("materials")
        for key, value in materials.entries if materials else ():
            self.material(key, value)
        for item in fields.items("assumptions"):
            mapping = as_mapping(item, "an assumption", self.problems)
            if mapping is not None:
                self.assumption(mapping)
        for item in fields.items("schedules"):
            mapping = as_mapping(item, "a schedule", self.problems)
            self.gathered.schedules += [mapping] if mapping is not None else []
        for item in fields.items("calculations", required=not fields.has("schedules")):
            mapping = as_mapping(item, "a calculation", self.problems)
            if mapping is None:
                continue
            include = mapping.get("include")
            if include is None:
                self.calculation(mapping)
            else:
                entry = Fields(mapping, ("include",), "an include", self.problems)
                scalar = entry.scalar("include", required=True)
                if scalar is not None:
                    self.include(scalar, depth)

    def material(self, key: Scalar, value: Node) -> None:
        node = as_mapping(value, f"the material `{key.text[:40]}`", self.problems)
        known = self.gathered.materials
        if key.text in known:
            self.problems.add("given-twice", key.span, f"the material `{key.text[:40]}` stands twice",
                              expected="every mark once", found=key.text[:40],
                              related=((known[key.text][0].span, "first here"),))  # fmt: skip
        elif node is None:
            known[key.text] = key, None
        else:
            found: dict[str, Scalar | None] = {}
            for name, inner in node.entries:
                found[name.text] = as_scalar(inner, f"`{name.text[:40]}` of a material", self.problems)
            known[key.text] = key, found

    def assumption(self, mapping: Mapping) -> None:
        entry = Fields(mapping, ASSUMPTION_KEYS, "an assumption", self.problems)
        open_word = entry.choice("to be verified", ("yes", "no"), required=True)
        by = entry.text("by", required=open_word == "yes")
        says = entry.text("says", required=True)
        self.gathered.assumptions.append(Assumption(says, open_word == "yes", by, mapping.span))

    def calculation(self, mapping: Mapping) -> None:
        if len(self.gathered.calculations) < MOST_CALCULATIONS:
            self.gathered.calculations.append(mapping)
        else:
            self.problems.add("file-too-large", mapping.span.part(0, 1), "the project holds too many calculations",
                              expected=f"{MOST_CALCULATIONS:,} at most", found="more")  # fmt: skip

    def include(self, scalar: Scalar, depth: int) -> None:
        """Read an included file: the same keys for materials, assumptions, calculations, schedules."""
        path = posixpath.normpath(scalar.text)
        if path in self.names or depth >= DEEPEST_INCLUDE or len(self.gathered.files) >= MOST_FILES:
            self.problems.add("include-loop", scalar.span, f"`{scalar.text[:60]}` is included again",
                              expected=f"every file once, {DEEPEST_INCLUDE} deep and {MOST_FILES} in all at most",
                              found=scalar.text[:60])  # fmt: skip
            return
        self.names.add(path)
        source = self.world.project_text(scalar.text)
        if isinstance(source, str):
            self.problems.add("no-file", scalar.span, f"`{scalar.text[:60]}` cannot be read",
                              expected="a file inside the project folder", found=source)  # fmt: skip
            return
        self.gathered.files.append(source)
        root = read_tree(source, self.problems)
        tree = as_mapping(root, "an included file", self.problems) if root is not None else None
        if tree is not None:
            self.gather(Fields(tree, KEYS, "an included file", self.problems), depth + 1)
