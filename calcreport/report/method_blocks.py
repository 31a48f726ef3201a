"""A method as blocks: what it is handed, what it gives, and the sums that prove it.

A calculation as told in, blocks out.
"""

from __future__ import annotations

from typing import TypeAlias

from calcreport.core.expression import Expression, Name
from calcreport.core.methods import METHODS
from calcreport.core.units import ONE
from calcreport.report.display import row_words
from calcreport.report.forms import proof_unit
from calcreport.report.items import SayMethod, SayOutput, SayOutputs, SayProof
from calcreport.report.model import (
    Block,
    Column,
    Formula,
    Letters,
    Line,
    Reference,
    Row,
    SourceLane,
    Statement,
    Table,
    TableRow,
    Words,
)
from calcreport.report.notation import relation, show_figure
from calcreport.report.told import Told

Said: TypeAlias = SayMethod | SayOutput | SayOutputs | SayProof


class MethodBlocks:
    """Composes methods."""

    def __init__(self, told: Told) -> None:
        self.told = told
        self.worked, self.forms, self.shared = told.worked, told.forms, told.shared

    def blocks(self, item: Said) -> tuple[Block, ...]:
        """Return the blocks of one item."""
        match item:
            case SayMethod():
                return self.method(item)
            case SayOutput():
                return (self.output(item),)
            case SayOutputs():
                return (self.outputs(item),)
            case SayProof():
                return (self.proof(item),)

    def method(self, item: SayMethod) -> tuple[Block, ...]:
        """Return a method with what it is handed, in words."""
        line = item.worked.line
        kind, handed = METHODS[line.kind], {given.name: given for given in line.inputs}
        words: list[str | Formula] = []
        nodes: list[Expression] = []
        for name, wanted in kind.takes.items():
            given = handed.get(name)
            if given is None:
                continue
            before, _, after = wanted.says.partition("{}")
            words.append(before if not words or before.startswith((" ", ",")) else f", {before}")
            if given.formula is not None:
                words.append(self.shared.formula(given.formula))
                nodes.append(given.formula)
            elif given.slot >= 0:
                words.append(self.shared.symbol(given.slot))
                nodes.append(Name(self.told.slots[given.slot].symbol.name, given.span or line.span, given.slot))
            else:
                words.append(given.word or self.worked.plan.sets[given.rows].name)
            words.append(after)
        said: Words = (f"{line.kind[:1].upper()}{line.kind[1:]}: ", *words, f". {kind.says}")
        lane = self.told.source(line.cite.printed, tuple(nodes), item.worked.open, item.number)
        return (Statement(item.number, self.told.anchor(item.number), said, Row(()), lane),)

    def lane(self, of: int) -> SourceLane:
        """Return the lane of what a method gives: the method's line."""
        return SourceLane("", (Reference(str(of), self.told.anchor(of)),))

    def output(self, item: SayOutput) -> Block:
        """Return a value a method gives."""
        symbol = self.told.slots[item.slot].symbol
        return Line(
            item.number, self.told.anchor(item.number), (symbol.says,), self.shared.symbol(item.slot), None, None, None,
            self.told.value(item.slot, item.key), self.lane(item.of),
        )  # fmt: skip

    def outputs(self, item: SayOutputs) -> Block:
        """Return what a method gives over rows: a row for every row of a set, or group of rows of several."""
        plan, values = self.worked.plan, self.told.values
        head = ", ".join(plan.sets[index].name for index in item.sets)
        columns = (Column((head,)), *(self.told.column(slot) for slot in item.columns))
        found = []
        for key in item.keys(values):
            opened = (*item.worked.open, *zip(item.sets, key, strict=True))
            rows = dict(opened)
            names = [
                values.names[index][tuple(rows[other] for other in values.outer[index])][rows[index]]
                for index in item.sets
            ]
            cells: tuple[Words, ...] = tuple(self.told.cell(s, self.told.key(s, opened)) for s in item.columns)
            # one name a row: what a row is found by is its first cell
            found.append(TableRow(((", ".join(map(row_words, names)),), *cells)))
        return Table(columns, tuple(found), (), item.number, self.told.anchor(item.number), self.lane(item.of))

    def proof(self, item: SayProof) -> Block:
        """Return a sum that proves a method, with its number and the largest of its terms."""
        proves = METHODS[item.worked.line.kind].proves[item.place]
        unit = proof_unit(item.worked, item.place, self.worked.plan.template.system)
        shown = None if unit is ONE else unit
        residual = show_figure(self.forms.proof(item.worked, item.place, "residual"), shown)
        largest = show_figure(self.forms.proof(item.worked, item.place, "of"), shown)
        formula = Row((relation("="), residual, Letters(" of "), largest))
        words: Words = (f"{proves.name}: {proves.says}",)
        return Statement(item.number, self.told.anchor(item.number), words, formula, self.lane(item.of))
