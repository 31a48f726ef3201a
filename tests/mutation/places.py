"""Every place of a template where a rule can be altered, and a copy of the template with one place altered.

A template's body in, places by line, formula and node out. Figures, words, tables and the ranges of given values are
no places: no case can see them.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any, Literal, TypeAlias

from calcreport.core.expression import Condition, Expression, Node, Over, children
from calcreport.core.methods import METHODS
from calcreport.core.record import replace
from calcreport.core.source import Span
from calcreport.read.model import (
    Branches,
    Check,
    Each,
    Gives,
    Line,
    Method,
    PartBody,
    PartUse,
    Require,
    Rows,
    Twin,
    Unknown,
)

#: names of fields and numbers of items that lead from a body to a place inside it
Steps: TypeAlias = tuple[str | int, ...]
#: file, first and last offset, kind of node, steps inside its formula: the same rule in every template that holds it
Key: TypeAlias = tuple[str, int, int, str, Steps]
#: what a formula stands for; 'record' is a line, a row or a cell as a whole
Use: TypeAlias = Literal["value", "word", "condition", "cited", "record"]


@dataclass(frozen=True, slots=True)
class Place:
    """A node of a formula, or a line, row or cell as a whole."""

    key: Key
    steps: Steps
    node: Any
    #: the line it stands in, in a word or two: 'phi', 'check flexure', 'rows combination: 2'
    line: str
    #: text of the formula or condition it belongs to, '' for a record
    formula: str
    #: the formula as a whole, not a piece of it
    whole: bool
    use: Use
    #: where the formula begins in its file
    start: int = 0


def altered(record: Any, steps: Steps, change: Callable[[Any], Any]) -> Any:
    """Return a copy of a record in which what the steps lead to has passed through `change`."""
    if not steps:
        return change(record)
    step, rest = steps[0], steps[1:]
    if isinstance(step, int):
        return (*record[:step], altered(record[step], rest, change), *record[step + 1 :])
    return replace(record, **{step: altered(getattr(record, step), rest, change)})


def places(body: PartBody, steps: Steps = ()) -> Iterator[Place]:
    """Yield every place of a body and of the parts it uses, in page order."""
    return _lines(body.lines, steps)


def _lines(lines: tuple[Line, ...], steps: Steps) -> Iterator[Place]:
    for number, line in enumerate(lines):
        yield from _line(line, (*steps, "lines", number))


def _record(node: Any, steps: Steps, line: str, span: Span) -> Place:
    return Place(
        (span.source.name, span.start, span.end, type(node).__name__, ()), steps, node, line, "", True, "record"
    )


def _line(line: Line, steps: Steps) -> Iterator[Place]:
    match line:
        case Gives():
            yield from _gives(line, steps)
        case Branches(arms):
            yield _record(line, steps, "branches", line.span)
            for number, arm in enumerate(arms):
                at = (*steps, "arms", number)
                if arm.when is not None:
                    yield from _formula(arm.when, (*at, "when"), "branches", "condition")
                yield from _lines(arm.lines, at)
        case Rows():
            yield from _rows(line, steps)
        case Each(_, lines):
            yield from _lines(lines, steps)
        case Unknown(symbol):
            for side in ("low", "high", "left", "right"):
                yield from _formula(getattr(line, side), (*steps, side), f"unknown {symbol.name}", "value")
            yield from _lines(line.lines, steps)
        case PartUse(body, name, _, _, handed):
            kinds = {g.name: g.symbol.kind for g in body.given if g.symbol is not None} if body is not None else {}
            for number, (given, formula) in enumerate(handed):
                at, use = (*steps, "handed", number, 1), _use(kinds.get(given.name, ""))
                yield from _formula(formula, at, f"{given.name} of {name.name}", use)
            if body is not None:
                yield from places(body, (*steps, "body"))
        case Method(method, inputs) | Twin(_, method, inputs):
            yield _record(line, steps, method.name, line.span)
            takes = METHODS[method.name].takes if method.name in METHODS else {}
            for number, (given, formula) in enumerate(inputs):
                shape = takes[given.name].shape if given.name in takes else ""
                if shape == "word":
                    # a word of the method's own: what else it could be is no symbol of the template
                    continue
                if shape in ("number", "row number"):
                    name = f"{given.name} of {method.name}"
                    yield from _formula(formula, (*steps, "inputs", number, 1), name, "value")
            if isinstance(line, Twin):
                yield from _formula(line.within, (*steps, "within"), f"{line.name.name} by another method", "value")
        case Check(name, holds):
            yield _record(line, steps, f"check {name}", line.span)
            yield from _formula(holds, (*steps, "holds"), f"check {name}", "condition")
        case Require(condition):
            yield _record(line, steps, f"require: {line.says}", line.span)
            yield from _formula(condition, (*steps, "condition"), f"require: {line.says}", "condition")
        case _:
            pass


def _gives(line: Gives, steps: Steps) -> Iterator[Place]:
    name, use = line.symbol.name, _use(line.symbol.kind)
    yield _record(line, steps, name, line.span)
    for number, arm in enumerate(line.arms):
        at = (*steps, "arms", number)
        if arm.when is not None:
            yield from _formula(arm.when, (*at, "when"), name, "condition")
        yield from _formula(arm.formula, (*at, "formula"), name, use)
    for side, formula in enumerate(line.as_cited or ()):
        yield from _formula(formula, (*steps, "as_cited", side), f"{name} as cited", "cited")


def _rows(line: Rows, steps: Steps) -> Iterator[Place]:
    yield _record(line, steps, f"rows {line.name}", line.span)
    uses = {column.symbol.name: _use(column.symbol.kind) for column in line.columns}
    for number, column in enumerate(line.columns):
        if column.other is not None:
            at = (*steps, "columns", number, "other")
            yield from _formula(column.other, at, f"rows {line.name}: else", uses[column.symbol.name])
    for side in ("low", "high") if line.spaced is not None else ():
        yield from _formula(getattr(line.spaced, side), (*steps, "spaced", side), f"rows {line.name}: {side}", "value")
    for number, entry in enumerate(line.entries):
        at, name = (*steps, "entries", number), f"rows {line.name}: {entry.name.name or number + 1}"
        yield _record(entry, at, name, entry.span)
        if entry.when is not None:
            yield from _formula(entry.when, (*at, "when"), name, "condition")
        for place, (column_name, cell) in enumerate(entry.cells):
            inner, use = (*at, "cells", place, 1), uses.get(column_name, "value")
            yield _record(cell, inner, name, cell.span)
            if cell.formula is not None:
                yield from _formula(cell.formula, (*inner, "formula"), name, use)
            for mapped, (row, formula) in enumerate(cell.mapped):
                yield from _formula(formula, (*inner, "mapped", mapped, 1), f"{name}: {row.name}", use)


def _use(kind: str) -> Use:
    return "word" if kind == "word" else "value"


def _formula(root: Expression | Condition, steps: Steps, line: str, use: Use) -> Iterator[Place]:
    text = " ".join(root.span.text.split())
    for inner, node in _nodes(root, ()):
        span = node.span
        key = span.source.name, span.start, span.end, type(node).__name__, inner
        yield Place(key, (*steps, *inner), node, line, text, not inner, use, root.span.start)


def _nodes(node: Node, steps: Steps) -> Iterator[tuple[Steps, Node]]:
    yield steps, node
    for step, child in zip(_child_steps(node), children(node), strict=True):
        yield from _nodes(child, (*steps, *step))


def _child_steps(node: Node) -> tuple[Steps, ...]:
    """Return the steps to `children(node)`, in their order."""
    match type(node).__name__:
        case "Negate" | "Strip" | "Attach" | "Not":
            return (("body",),)
        case "Binary" | "Compare" | "Logic":
            return ("left",), ("right",)
        case "Is" | "IsGiven":
            return (("name",),)
        case "Over":
            assert isinstance(node, Over)
            return tuple((field,) for field in ("body", "where", "otherwise") if getattr(node, field) is not None)
        case _:
            return tuple(("arguments", number) for number in range(len(children(node))))
