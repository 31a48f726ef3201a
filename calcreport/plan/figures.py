"""Figures of a template: their kind, and every input bound to a slot, a set, a formula or a word.

A `Drawing` line in, `PlannedFigure` out; what the kinds take is declared in `core.figures`.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.core.expression import Expression, Name, literal
from calcreport.core.figures import FIGURES, FigureInputKind, needed_inputs
from calcreport.core.problems import listed
from calcreport.plan.model import FigureInput, PlannedFigure, RowSet, Slot
from calcreport.plan.names import Names
from calcreport.plan.space import Context, Space
from calcreport.read.model import Drawing


def plan_figure(line: Drawing, names: Names, space: Space, at: Context) -> PlannedFigure:
    """Bind a figure; an unknown kind or input, or a missing one, is a problem."""
    kind, problems = line.kind, names.problems
    takes = FIGURES.get(kind.name)
    if takes is None:
        problems.add("not-a-word", kind.span, f"there is no figure `{kind.name[:40]}`", expected=listed(FIGURES),
                     found=kind.name[:40], hint=problems.near(kind.name, FIGURES))  # fmt: skip
        return PlannedFigure(kind.name, (), line.span)
    binder = _Binder(line, takes, names, space, at)
    inputs = []
    #: inputs that an unknown one seems to mean: they are not missing besides
    mistaken: set[str] = set()
    for name, formula in line.inputs:
        wanted = takes.get(name.name)
        if wanted is None:
            mistaken.update(problems.close(name.name, takes))
            problems.add(
                "unknown-key",
                name.span,
                f"the figure `{kind.name}` takes no `{name.name[:40]}`",
                expected=listed(takes),
                found=name.name[:40],
                hint=problems.near(name.name, takes),
            )
        elif formula is not None:
            inputs.append(binder.bind(name, formula, wanted))
    handed = {name.name for name, _ in line.inputs} | mistaken
    missing = [name for name in needed_inputs(kind.name) if name not in handed]
    if missing:
        problems.add("missing-key", kind.span, f"the figure `{kind.name}` needs more", expected=", ".join(missing),
                     found="not under `with`")  # fmt: skip
    return PlannedFigure(kind.name, tuple(inputs), line.span)


class _Binder:
    def __init__(
        self, line: Drawing, takes: dict[str, FigureInputKind], names: Names, space: Space, at: Context
    ) -> None:
        self.takes, self.names, self.space, self.at = takes, names, space, at
        self.handed = {name.name: formula for name, formula in line.inputs}
        self.problems = names.problems

    def bind(self, name: Name, formula: Expression, wanted: FigureInputKind) -> FigureInput:
        match wanted.shape:
            case "set":
                return self.set(name, formula)
            case "word":
                return self.word(name, formula, wanted)
            case _:
                return self.number(name, formula, wanted)

    def set(self, name: Name, formula: Expression) -> FigureInput:
        if not isinstance(formula, Name):
            self.say_shape(name, formula, "the name of a set")
            return FigureInput(name.name)
        return FigureInput(name.name, rows=self.names.set_named(formula.name, formula.span, self.space))

    def word(self, name: Name, formula: Expression, wanted: FigureInputKind) -> FigureInput:
        found = self.space.names.get(formula.name) if isinstance(formula, Name) else None
        if isinstance(formula, Name) and isinstance(found, Slot) and set(found.symbol.words) <= set(wanted.words):
            self.names.hold_open(found.sets, formula.name, formula.span, self.at)
            return FigureInput(name.name, slot=found.index, span=formula.span)
        if isinstance(formula, Name) and formula.name in wanted.words:
            return FigureInput(name.name, word=formula.name)
        self.say_shape(name, formula, f"{listed(wanted.words)}, or a symbol with such words")
        return FigureInput(name.name)

    def number(self, name: Name, formula: Expression, wanted: FigureInputKind) -> FigureInput:
        at = self.at
        rows = self.handed.get(wanted.rows)
        owner = self.space.names.get(rows.name) if isinstance(rows, Name) else None
        if isinstance(owner, RowSet):
            at = replace(at, open=(*at.open, owner.index))
        found = self.space.names.get(formula.name) if isinstance(formula, Name) else None
        if isinstance(formula, Name) and isinstance(found, Slot):
            # a value that may be absent is no problem: the figure is left out with it
            self.names.hold_open(found.sets, formula.name, formula.span, at)
            return FigureInput(name.name, slot=found.index, span=formula.span)
        if wanted.named and literal(formula) != 0 and not isinstance(formula, Name):
            self.say_shape(name, formula, "a symbol, whose name the figure prints")
            return FigureInput(name.name)
        return FigureInput(name.name, formula=self.names.expression(formula, self.space, self.at))

    def say_shape(self, name: Name, formula: Expression, expected: str) -> None:
        self.problems.add("wrong-shape", formula.span, f"the figure takes something else for `{name.name}`",
                          expected=expected, found=formula.span.text[:40])  # fmt: skip
