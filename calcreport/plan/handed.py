"""What a figure or a method is handed: every input bound to a slot, a set, a formula or a word.

Names with formulas in, `BoundInput` out, held against the inputs that `core` declares.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TypeAlias

from calcreport.core.expression import Expression, Name, literal
from calcreport.core.inputs import InputKind
from calcreport.core.problems import listed
from calcreport.plan.model import BoundInput, RowSet, Slot
from calcreport.plan.names import Names
from calcreport.plan.space import Context, Space

#: by name; None where a formula could not be read
Inputs: TypeAlias = tuple[tuple[Name, Expression | None], ...]


class Binder:
    """Binds what one figure or one method is handed; `what` is the word its problems call it by."""

    def __init__(self, what: str, handed: Inputs, names: Names, space: Space, at: Context) -> None:
        self.what, self.names, self.space, self.at = what, names, space, at
        self.inputs = handed
        self.handed = {name.name: formula for name, formula in handed}
        self.problems = names.problems

    def bind_all(self, kind: Name, takes: dict[str, InputKind], needed: tuple[str, ...]) -> tuple[BoundInput, ...]:
        """Bind every input; one that is unknown or missing is a problem."""
        found, problems = [], self.problems
        #: inputs that an unknown one seems to mean: they are not missing besides
        mistaken: set[str] = set()
        for name, formula in self.inputs:
            wanted = takes.get(name.name)
            if wanted is not None:
                found += [self.bind(name, formula, wanted)] if formula is not None else []
                continue
            mistaken.update(problems.close(name.name, takes))
            problems.add(
                "unknown-key", name.span, f"the {self.what} `{kind.name}` takes no `{name.name[:40]}`",
                expected=listed(takes), found=name.name[:40], hint=problems.near(name.name, takes),
            )  # fmt: skip
        missing = [name for name in needed if name not in self.handed and name not in mistaken]
        if missing:
            problems.add("missing-key", kind.span, f"the {self.what} `{kind.name}` needs more",
                         expected=", ".join(missing), found="not under `with`")  # fmt: skip
        return tuple(found)

    def bind(self, name: Name, formula: Expression, wanted: InputKind) -> BoundInput:
        match wanted.shape:
            case "set":
                return self.set(name, formula)
            case "word" | "row word":
                return self.word(name, formula, wanted)
            case _:
                return self.number(name, formula, wanted)

    def set(self, name: Name, formula: Expression) -> BoundInput:
        if not isinstance(formula, Name):
            self.say_shape(name, formula, "the name of a set")
            return BoundInput(name.name)
        return BoundInput(name.name, rows=self.names.set_named(formula.name, formula.span, self.space))

    def word(self, name: Name, formula: Expression, wanted: InputKind) -> BoundInput:
        found = self.space.names.get(formula.name) if isinstance(formula, Name) else None
        if isinstance(formula, Name) and isinstance(found, Slot) and set(found.symbol.words) <= set(wanted.words):
            self.names.hold_open(found.sets, formula.name, formula.span, self.rows_open(wanted))
            return BoundInput(name.name, slot=found.index, span=formula.span)
        if isinstance(formula, Name) and formula.name in wanted.words:
            return BoundInput(name.name, word=formula.name)
        self.say_shape(name, formula, f"{listed(wanted.words)}, or a symbol with such words")
        return BoundInput(name.name)

    def number(self, name: Name, formula: Expression, wanted: InputKind) -> BoundInput:
        at = self.rows_open(wanted)
        found = self.space.names.get(formula.name) if isinstance(formula, Name) else None
        if isinstance(formula, Name) and isinstance(found, Slot):
            # a value that may be absent is no problem: the figure is left out with it
            self.names.hold_open(found.sets, formula.name, formula.span, at)
            return BoundInput(name.name, slot=found.index, span=formula.span)
        if wanted.named and literal(formula) != 0 and not isinstance(formula, Name):
            self.say_shape(name, formula, f"a symbol, whose name the {self.what} prints")
            return BoundInput(name.name)
        return BoundInput(name.name, formula=self.names.expression(formula, self.space, self.at))

    def rows_open(self, wanted: InputKind) -> Context:
        """Return where a number or a word stands: with the rows of its sets open, if it has some."""
        opened = self.at.open
        for name in wanted.rows:
            rows = self.handed.get(name)
            owner = self.space.names.get(rows.name) if isinstance(rows, Name) else None
            opened = (*opened, owner.index) if isinstance(owner, RowSet) else opened
        return replace(self.at, open=opened)

    def say_shape(self, name: Name, formula: Expression, expected: str) -> None:
        self.problems.add("wrong-shape", formula.span, f"the {self.what} takes something else for `{name.name}`",
                          expected=expected, found=formula.span.text[:40])  # fmt: skip
