"""The lines of a template: one reader for each kind of line, formulas parsed on the spot.

Nodes in, `read.model` records out. Names are not bound here and nothing is evaluated.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from calcreport.core.expression import Name
from calcreport.core.problems import Problems, listed
from calcreport.core.source import Span
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.formulas import FormulaReader
from calcreport.read.lost import lost_names
from calcreport.read.made_rows import ReadTable, RowsReader
from calcreport.read.method_lines import MethodReader, read_handed
from calcreport.read.model import (
    EVERY,
    Arm,
    BranchArm,
    Branches,
    Broken,
    Check,
    Drawing,
    Each,
    Gives,
    Line,
    PartBody,
    PartUse,
    Require,
    Text,
    Unknown,
)
from calcreport.read.nodes import Mapping, Node
from calcreport.read.symbols import OWN_KEYS, hold_name
from calcreport.read.words import read_citation, read_cite, read_pieces

#: kind of line by its first key: further keys allowed
KINDS: dict[str, tuple[str, ...]] = {
    "heading": (), "note": ("cite",), "caution": ("leaves out", "cite"), "assume": ("cite",), "use": ("cite",),
    "gives": ("formula", "branches", *OWN_KEYS, "cite", "as cited"),
    "branches": (), "rows": ("columns", "list", "spaced", "file", "says", "cite"), "each": ("lines", "table", "show"),
    "part": ("as", "same", "with"), "check": ("holds", "says", "cite"), "require": ("says", "cite", "show"),
    "figure": ("with",), "method": ("with", "gives", "as", "table", "cite"),
    "by another method": ("method", "with", "output", "within", "cite"),
    "unknown": ("between", "satisfies", "lines", *OWN_KEYS),
}  # fmt: skip
#: keys of a case of one value, and of a case that holds lines
ARM_KEYS, BRANCH_KEYS = ("when", "formula", "otherwise"), ("when", "lines", "otherwise", "says")
SHOWN = ("every", "first", "governing", "figure")
#: a requirement may be printed only where it is not met
REQUIRED_SHOWN = ("unmet",)
MOST_LINES = 400


@dataclass(frozen=True, slots=True)
class LineReader:
    """Reads lines of one file for one system and year."""

    formulas: FormulaReader
    #: document named in front of clauses, '' for the calculation's own code
    document: str
    #: reads a part by its name; None where it could not be read
    read_part: Callable[[str, Span], PartBody | None]
    #: takes the cells of a table beside the template
    read_table: ReadTable
    problems: Problems

    def lines(self, nodes: tuple[Node, ...]) -> tuple[Line, ...]:
        """Read a list of lines."""
        if len(nodes) > MOST_LINES:
            self.problems.add("file-too-large", nodes[MOST_LINES].span.part(0, 1), "too many lines in one list",
                              expected=f"{MOST_LINES} at most", found=f"{len(nodes)}",
                              hint="share them between parts")  # fmt: skip
            return ()
        found: list[Line] = []
        for node in nodes:
            line = self.line(node)
            found += [line] if line is not None else []
            if self.problems and (lost := lost_names(node, line)):
                found.append(Broken(lost, (), node.span))
        return tuple(found)

    def line(self, node: Node) -> Line | None:
        """Read one line by its kind."""
        mapping = as_mapping(node, "a line", self.problems)
        if mapping is None:
            return None
        keys = [key.text for key, _ in mapping.entries]
        kind = _kind_of(keys)
        if kind == "branches" and not {*keys} <= {"branches", "only"}:
            kind = ""
        if not kind:
            self.say_unknown(mapping)
            return None
        what = f"an `{kind}` line" if kind in ("assume", "each", "unknown") else f"a `{kind}` line"
        fields = Fields(mapping, (kind, *KINDS[kind], "only"), what, self.problems)
        readers: dict[str, Callable[[Fields], Line | None]] = {
            "gives": self.gives, "branches": self.branches, "rows": self.rows, "each": self.each,
            "part": self.part, "check": self.check, "require": self.require, "figure": self.figure,
            "unknown": self.unknown, "method": MethodReader(self.formulas, self.document).method,
            "by another method": MethodReader(self.formulas, self.document).twin,
        }  # fmt: skip
        reader = readers.get(kind)
        return reader(fields) if reader else self.text(kind, fields)

    def say_unknown(self, mapping: Mapping) -> None:
        first = mapping.entries[0][0] if mapping.entries else None
        word = first.text if first else ""
        self.problems.add(
            "unknown-line", first.span if first else mapping.span.part(0, 1), "this is not a kind of line",
            expected="a line that begins with " + listed(KINDS), found=word[:40] or "nothing",
            hint=self.problems.near(word, KINDS),
        )  # fmt: skip

    # -------------------------------------------------------- kinds

    def text(self, kind: str, fields: Fields) -> Line | None:
        scalar = fields.scalar(kind, required=True)
        cite = fields.scalar("cite")
        cited = read_citation(cite, self.document, self.problems) if cite else None
        left = tuple(one.text for one in fields.texts("leaves out"))
        if scalar is None:
            return None
        return Text(kind, read_pieces(scalar, self.problems), cited, fields.span, left)  # type: ignore[arg-type]

    def gives(self, fields: Fields) -> Line | None:
        name = fields.scalar("gives", required=True)
        symbol = self.formulas.symbol(name, fields) if name is not None else None
        cite = read_cite(fields, self.document, self.problems)
        arms = self.arms(fields)
        cited = self.formulas.equation(fields, "as cited")
        if name is None or symbol is None:
            return None
        return Gives(symbol, arms, cite, cited, fields.span, name.span)

    def arms(self, fields: Fields) -> tuple[Arm, ...]:
        if fields.has("formula") and fields.has("branches"):
            self.problems.add(
                "unknown-key",
                fields.span_of("branches").part(0, 1),
                "`formula` and `branches` stand on one line",
                expected="one of them",
                found="both",
            )
        if fields.node_of("formula") is not None:
            return (Arm(None, self.formulas.formula(fields.node_of("formula"))),)
        if fields.node_of("branches") is None:
            if "branches" not in fields.mistaken:
                fields.say_missing("formula")
            return ()
        nodes = fields.items("branches")
        found = (self.arm(node, place == len(nodes) - 1) for place, node in enumerate(nodes))
        arms = tuple(arm for arm in found if arm is not None)
        self.need_otherwise(nodes, fields)
        return arms

    def arm(self, node: Node, last: bool) -> Arm | None:
        entry = as_mapping(node, "a branch", self.problems)
        if entry is None:
            return None
        arm = Fields(entry, ARM_KEYS, "a branch", self.problems)
        if arm.has("otherwise"):
            self.hold_last(arm, last)
            return Arm(None, self.formulas.formula(arm.node_of("otherwise")))
        for key in ("when", "formula"):
            if arm.node_of(key) is None:
                arm.say_missing(key)
        return Arm(self.formulas.case(arm.node_of("when")), self.formulas.formula(arm.node_of("formula")))

    def hold_last(self, arm: Fields, last: bool) -> None:
        if arm.has("when"):
            self.problems.add("no-otherwise", arm.span_of("when").part(0, 1), "`otherwise` has a condition",
                              expected="`otherwise` alone, or `when` with its own key", found="`when`")  # fmt: skip
        elif not last:
            self.problems.add("no-otherwise", arm.span.part(0, 1), "`otherwise` stands before another branch",
                              expected="`otherwise` last", found="more branches after it")  # fmt: skip

    def need_otherwise(self, nodes: tuple[Node, ...], fields: Fields) -> None:
        if not any(isinstance(node, Mapping) and node.get("otherwise") is not None for node in nodes):
            self.problems.add(
                "no-otherwise", fields.span_of("branches").part(0, 1), "the branches leave a case open",
                expected="`otherwise` as the last branch", found="no `otherwise`",
            )  # fmt: skip

    def branches(self, fields: Fields) -> Line | None:
        nodes = fields.items("branches", required=True)
        arms: list[BranchArm] = []
        for place, node in enumerate(nodes):
            entry = as_mapping(node, "a branch", self.problems)
            if entry is None:
                continue
            arm = Fields(entry, BRANCH_KEYS, "a branch", self.problems)
            other = arm.has("otherwise")
            if other:
                self.hold_last(arm, place == len(nodes) - 1)
            elif arm.node_of("when") is None:
                arm.say_missing("when")
            when = None if other else self.formulas.case(arm.node_of("when"))
            lines = self.lines(arm.items("otherwise" if other else "lines", required=True))
            says = arm.text("says") if arm.node_of("says") is not None else None
            arms.append(BranchArm(when, lines, says, entry.span))
        if nodes:
            self.need_otherwise(nodes, fields)
        return Branches(tuple(arms), fields.span)

    def rows(self, fields: Fields) -> Line | None:
        cite = read_cite(fields, self.document, self.problems)
        return RowsReader(self.formulas, fields, cite, self.read_table).read()

    def each(self, fields: Fields) -> Line | None:
        rows = fields.scalar("each", required=True)
        show = fields.choice("show", SHOWN)
        table = tuple(Name(scalar.text, scalar.span) for scalar in fields.texts("table"))
        lines = self.lines(fields.items("lines", required=True))
        if rows is None:
            return None
        return Each(Name(rows.text, rows.span), lines, table, show, fields.span)  # type: ignore[arg-type]

    def unknown(self, fields: Fields) -> Line | None:
        name = fields.scalar("unknown", required=True)
        symbol = self.formulas.symbol(name, fields) if name is not None else None
        bounds = [self.formulas.formula(node) for node in fields.items("between", required=True)]
        if len(bounds) != 2 and fields.has("between"):
            self.problems.add("wrong-shape", fields.span_of("between").part(0, 1), "`between` takes two bounds",
                              expected="[lower, upper]", found=f"{len(bounds)}")  # fmt: skip
        equation = self.formulas.equation(fields, "satisfies", required=True)
        lines = self.lines(fields.items("lines"))
        low, high = bounds if len(bounds) == 2 else (None, None)
        if name is None or symbol is None or equation is None or low is None or high is None:
            return Broken((name.text,) if name is not None else (EVERY,), lines, fields.span)
        return Unknown(symbol, low, high, *equation, lines, fields.span, name.span)

    def check(self, fields: Fields) -> Line | None:
        name = fields.text("check", required=True)
        if fields.node_of("holds") is None:
            fields.say_missing("holds")
        holds = self.formulas.condition(fields.node_of("holds"))
        cite = read_cite(fields, self.document, self.problems)
        return Check(name, holds, fields.text("says"), cite, fields.span) if holds is not None else None

    def require(self, fields: Fields) -> Line | None:
        if fields.node_of("require") is None:
            fields.say_missing("require")
        condition = self.formulas.condition(fields.node_of("require"))
        says = fields.text("says", required=True)
        cite = read_cite(fields, self.document, self.problems)
        quiet = fields.choice("show", REQUIRED_SHOWN) == "unmet"
        return Require(condition, says, cite, quiet, fields.span) if condition is not None else None

    def figure(self, fields: Fields) -> Line | None:
        kind = fields.scalar("figure", required=True)
        inputs = read_handed(fields, self.formulas)
        return Drawing(Name(kind.text, kind.span), inputs, fields.span) if kind is not None else None

    def part(self, fields: Fields) -> Line | None:
        name = fields.scalar("part", required=True)
        stem = fields.scalar("as")
        if stem is not None and not hold_name(stem, self.problems):
            stem = None
        same = tuple(Name(scalar.text, scalar.span) for scalar in fields.texts("same"))
        handed = read_handed(fields, self.formulas)
        if name is None:
            return None
        body = self.read_part(name.text, name.span)
        return PartUse(body, Name(name.text, name.span), stem.text if stem else "", same, handed, fields.span)


def _kind_of(keys: list[str]) -> str:
    """Return the kind of a line by its keys; a key that other kinds have too gives way to the one that has it."""
    for kind in ("by another method", "method"):
        if kind in keys:
            return kind
    return next((key for key in keys if key in KINDS and not (key == "branches" and "gives" in keys)), "")
