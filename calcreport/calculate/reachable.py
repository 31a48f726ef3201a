"""What a plan holds that a case may reach: lines, arms, rows, outcomes of checks, ends of tables.

`Plan` in, things by place out. Only what stands in the template's own file counts: a part has cases of its own. What
two editions or systems write alike is one thing; where they differ each has its own.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Literal, TypeAlias

from calcreport.calculate.model import (
    Plan,
    PlannedBranches,
    PlannedCheck,
    PlannedEach,
    PlannedFigure,
    PlannedGives,
    PlannedLine,
    PlannedMethod,
    PlannedPart,
    PlannedRequire,
    PlannedRows,
    PlannedText,
    PlannedUnknown,
)
from calcreport.core.expression import Compare, Condition, Is, Node, Over, walk
from calcreport.core.record import record
from calcreport.core.source import Span

Kind: TypeAlias = Literal["edition", "line", "arm", "row", "check", "require", "table"]
#: an object of the plan, by its identity, and which of its things: an arm's or a row's number, an outcome, an end
Key: TypeAlias = tuple[int, str | int]

#: characters of a condition that a thing is named by
_LONGEST = 90


@record
class Thing:
    """Something a case may reach."""

    kind: Kind
    #: its name in plain words: 'beta_1 otherwise', 'check flexure NG'
    says: str
    span: Span
    #: places of all that it is written with: where two editions differ, two things
    written: tuple[int, ...]


class Reachable:
    """The things of one plan, and what each stands inside of."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan
        self.things: dict[Key, Thing] = {}
        #: things, at least one of which must be reached before this one can be
        self.inside: dict[Thing, set[Thing]] = {}
        #: sets made here: tables that a line may look into
        self.made = frozenset(_made(plan.lines))
        template = plan.template
        whole = f"{template.system} {template.year}".strip()
        #: that any case is worked in this system and edition
        self.edition = Thing("edition", f"any line in {whole}", template.body.span.part(0, 1), ())
        self._lines(plan.lines, None)

    # -------------------------------------------------------- lines

    def _lines(self, lines: tuple[PlannedLine, ...], outer: Thing | None) -> None:
        for line in lines:
            self._line(line, outer)

    def _line(self, line: PlannedLine, outer: Thing | None) -> None:
        if isinstance(line, PlannedRequire) and line.silent:
            return
        name, nodes = self.named(line), tuple(nodes_of(line))
        if isinstance(line, PlannedRequire) and line.quiet:
            self._add((id(line), "unmet"), "require", f"{name} not met", line.span, nodes, outer)
            return
        own = self._add((id(line), ""), "line", name, line.span, nodes, outer)
        for node in nodes:
            self._tables(node, name, own)
        match line:
            case PlannedGives(arms=arms) if len(arms) > 1:
                symbol = self.plan.slots[line.slot].path
                for number, one in enumerate(arms):
                    words = f"{symbol} when {text_of(one.when)}" if one.when else f"{symbol} otherwise"
                    at = (one.when or one.formula).span
                    self._add((id(line), number), "arm", words, at, (*_some(one.when), one.formula), own)
            case PlannedBranches(blocks):
                before = ""
                for number, block in enumerate(blocks):
                    words = f"when {text_of(block.when)}" if block.when else f"otherwise, after {before}"
                    before = text_of(block.when)
                    at = block.when.span if block.when else (block.lines or (line,))[0].span
                    arm = self._add((id(line), number), "arm", f"branch {words}", at, _some(block.when), own)
                    self._lines(block.lines, arm or own or outer)
            case PlannedCheck():
                # two methods that part are no case of the rule: nobody can hand over values for which they do
                for outcome in ("OK",) if line.bare else ("OK", "NG"):
                    self._add((id(line), outcome), "check", f"{name} {outcome}", line.span, nodes, own)
            case PlannedRequire():
                self._add((id(line), "unmet"), "require", f"{name} not met", line.span, nodes, own)
            case PlannedRows(entries=entries):
                for number, entry in enumerate(entries):
                    if entry.when is not None or entry.pairing:
                        when = f" when {text_of(entry.when)}" if entry.when else ""
                        words = f"row {entry.name or number + 1} of {self.plan.sets[line.rows].name}{when}"
                        cells = tuple(n for cell in entry.cells for n in _cell(cell))
                        self._add((id(line), number), "row", words, entry.span, (*_some(entry.when), *cells), own)
            case PlannedPart(lines=inner):
                self._lines(inner, own or outer)
            case PlannedEach(lines=inner) | PlannedUnknown(lines=inner):
                self._lines(inner, own or outer)
            case _:
                pass

    def named(self, line: PlannedLine) -> str:
        """Return what a line is called here."""
        slots, sets = self.plan.slots, self.plan.sets
        match line:
            case PlannedGives():
                return f"line {slots[line.slot].path}" + (" handed to a part" if line.handed else "")
            case PlannedText(kind, pieces):
                words = "".join(p if isinstance(p, str) else "{" + slots[p].path + "}" for p in pieces)
                return f"{kind} {_short(words)}"
            case PlannedBranches(arms):
                return f"branches on {text_of(arms[0].when)}" if arms and arms[0].when else "branches"
            case PlannedRows(rows=index):
                return f"rows {sets[index].name}"
            case PlannedEach(rows=index):
                return f"each {sets[index].name}"
            case PlannedUnknown(slot):
                return f"unknown {slots[slot].path}"
            case PlannedPart(title, stem):
                return f"part {stem or title}"
            case PlannedCheck(name):
                return f"check {name}"
            case PlannedRequire(condition):
                return f"require {text_of(condition)}"
            case PlannedFigure(kind):
                return f"figure {kind}"
            case PlannedMethod(kind):
                return f"method {kind}"

    # -------------------------------------------------------- tables

    def _tables(self, node: Node, name: str, own: Thing | None) -> None:
        for over in walk(node):
            if isinstance(over, Over):
                name_of = name.removeprefix("line ")
                for end in self.ends(over):
                    self._add((id(over), end), "table", f"{name_of}: {end}", over.span, (over,), own)

    def ends(self, over: Over) -> tuple[str, ...]:
        """Return the places of a table that a look into it may come to; a row named outright is no such look."""
        table, none = over.rows, (f"no row of {over.rows} fits, otherwise",) if over.otherwise is not None else ()
        if over.bound not in self.made or over.function not in ("pick", "linear"):
            return none
        if over.function == "linear":
            return (f"first row of {table}", f"last row of {table}", f"below the first row of {table}",
                    f"above the last row of {table}")  # fmt: skip
        compared = [n for n in walk(over.where) if isinstance(n, Compare)] if over.where is not None else []
        if not compared or (over.where is not None and any(isinstance(n, Is) for n in walk(over.where))):
            return none
        if not none and any(test.op not in ("=", "!=") for test in compared):
            none = (f"no row of {table} fits",)
        return f"first row of {table}", f"last row of {table}", *none

    def _add(
        self, key: Key, kind: Kind, says: str, span: Span, nodes: tuple[Node, ...], outer: Thing | None
    ) -> Thing | None:
        """Keep a thing of the template's own file."""
        if span.source is not self.plan.template.source:
            return None
        written = tuple(node.span.start for root in nodes for node in walk(root))
        made = self.things[key] = Thing(kind, says, span, written)
        around = self.inside.setdefault(made, set())
        if outer is not None:
            around.add(outer)
        return made


def nodes_of(line: PlannedLine) -> Iterator[Node]:
    """Yield the formulas and conditions a line is worked by, those of the lines inside it left out."""
    match line:
        case PlannedGives(arms=arms):
            for one in arms:
                yield from (*_some(one.when), one.formula)
        case PlannedBranches(blocks):
            for block in blocks:
                yield from _some(block.when)
        case PlannedCheck(holds=node) | PlannedRequire(condition=node):
            yield node
        case PlannedRows(entries=entries):
            for entry in entries:
                yield from _some(entry.when)
                for cell in entry.cells:
                    yield from _cell(cell)
        case PlannedMethod(inputs=inputs):
            yield from (given.formula for given in inputs if given.formula is not None)
        case PlannedUnknown():
            yield from (line.low, line.high, line.left, line.right)
        case _:
            pass


def _some(node: Condition | None) -> tuple[Node, ...]:
    return (node,) if node is not None else ()


def _cell(cell: object) -> tuple[Node, ...]:
    return tuple(node for _, node in cell) if isinstance(cell, tuple) else (cell,)  # type: ignore[return-value]


def _made(lines: tuple[PlannedLine, ...]) -> Iterator[int]:
    for line in lines:
        match line:
            case PlannedRows(rows=index):
                yield index
            case PlannedBranches(arms):
                for arm in arms:
                    yield from _made(arm.lines)
            case PlannedEach(lines=inner) | PlannedPart(lines=inner) | PlannedUnknown(lines=inner):
                yield from _made(inner)
            case _:
                pass


def text_of(node: Condition | None) -> str:
    """Return a condition as its author wrote it, in one line."""
    return _short(node.span.text) if node is not None else ""


def _short(words: str) -> str:
    words = " ".join(words.split())
    return words if len(words) <= _LONGEST else words[: _LONGEST - 1] + "…"
