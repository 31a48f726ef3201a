"""One calculation's script as blocks: given values, lines with formula and numbers, tables, checks, figures.

`Script` and forms in, blocks out. Wording is the program's own; clauses stand in the source lane.
Kept in one though long: a method for each kind of item.
"""

from __future__ import annotations

import re

from calcreport.core.expression import Name
from calcreport.core.units import ONE
from calcreport.report.candidates import candidate_blocks
from calcreport.report.check_blocks import CheckBlocks
from calcreport.report.deltas import NO_DELTAS, Deltas, marked
from calcreport.report.display import unit_text
from calcreport.report.drawings import draw
from calcreport.report.forms import Opened, equation_unit
from calcreport.report.given_blocks import GivenBlocks
from calcreport.report.items import (
    Item,
    SayAlike,
    SayBranch,
    SayCheck,
    SayChoice,
    SayEquation,
    SayFigure,
    SayFormula,
    SayGivens,
    SayHeading,
    SayLine,
    SayMade,
    SayMethod,
    SayOutput,
    SayOutputs,
    SayProof,
    SayRequire,
    SayRows,
    SayStop,
    SayTable,
    SayText,
    SayUnknown,
    SayUnseen,
)
from calcreport.report.joining import joined
from calcreport.report.method_blocks import MethodBlocks
from calcreport.report.model import (
    Block,
    EnvelopeFigure,
    FigureBlock,
    Formula,
    Givens,
    Heading,
    Line,
    Paragraph,
    ResultBox,
    Row,
    SourceLane,
    Statement,
    Strong,
    Words,
)
from calcreport.report.notation import has_values, relation, show_figure
from calcreport.report.row_blocks import RowBlocks
from calcreport.report.told import Told

_TEXT_KINDS = {"note": "note", "caution": "caution", "assume": "assumption"}


def _figure_first(blocks: list[Block]) -> list[Block]:
    """Put the figure beside the given values it shows: a reader wants it first, and there is room."""
    figures = [block for block in blocks if isinstance(block, FigureBlock) and block.beside]
    givens = next((block for block in blocks if isinstance(block, Givens) and len(block.rows) >= 6), None)
    if len(figures) != 1 or givens is None:
        return blocks
    rest = [block for block in blocks if block is not figures[0]]
    place = rest.index(givens)
    return [*rest[:place], figures[0], *rest[place:]]


class Composer:
    """Composes one calculation."""

    def __init__(self, told: Told, dispositions: dict[int, tuple[str, ...]], deltas: Deltas = NO_DELTAS) -> None:
        self.deltas = deltas
        self.told, self.given, self.rows = told, GivenBlocks(told), RowBlocks(told)
        self.checks = CheckBlocks(told, dispositions)
        self.methods = MethodBlocks(told)
        self.worked, self.forms, self.shared = told.worked, told.forms, told.shared
        self.values, self.slots = told.values, told.slots

    def blocks(self) -> tuple[Block, ...]:
        """Return all blocks in order."""
        found: list[Block] = [self.opening()]
        for item in self.told.script.items:
            found.extend(marked(item, self.item(item), self.told, self.deltas))
        return joined(tuple(_figure_first(found)))

    def opening(self) -> Block:
        """Say what is decided here and what is not."""
        covers, excludes = self.worked.plan.covers, self.worked.plan.template.excludes
        words: list[str | Strong] = []
        if covers:
            words += [Strong("Decided here: "), ", ".join(covers) + ". "]
        if excludes:
            words += [Strong("Not here: "), ", ".join(excludes) + "."]
        return Paragraph(tuple(words), "note")

    def item(self, item: Item) -> tuple[Block, ...]:
        """Return the blocks of one item."""
        match item:
            case SayGivens():
                return (Givens(tuple(self.given.given_row(number, given) for number, given in item.rows)),)
            case SayAlike():
                return (self.given.alike(item),)
            case SayRows():
                return (self.given.given_table(item),)
            case SayChoice():
                return candidate_blocks(item, self.told)
            case SayText():
                return self.text(item)
            case SayHeading(text, level):
                return (Heading(text, level),)
            case SayLine():
                return (self.line(item),)
            case SayFormula():
                return self.rows.formulas(item)
            case SayMade():
                return self.rows.made(item)
            case SayTable():
                table = (self.rows.table(item),) if len(item.rows) > 1 or item.governing < 0 else ()
                notes = (*self.rows.other_branches(item), *self.rows.rows_left(item))
                return (*table, *notes, *self.checks.dispositions_left(item))
            case SayUnknown():
                return self.unknown(item)
            case SayEquation():
                return (self.equation(item),)
            case SayBranch():
                return self.branch(item)
            case SayCheck():
                return (self.checks.check(item), *self.checks.disposition(item))
            case SayRequire():
                return (self.checks.require(item),)
            case SayFigure():
                figure = draw(item.worked, self.forms)
                # diagrams along a whole member take the width of the lane
                wide = isinstance(figure, EnvelopeFigure)
                return (FigureBlock(figure, beside=not wide),) if figure is not None else ()
            case SayMethod() | SayOutput() | SayOutputs() | SayProof():
                return self.methods.blocks(item)
            case SayStop():
                return self.checks.stopped(item)
            case SayUnseen():
                return ()

    def line(self, item: SayLine) -> Block:
        """Return a line in full."""
        gives = item.worked
        line, formula = gives.line, gives.line.arms[gives.arm].formula
        slot = self.slots[line.slot]
        result = self.told.value(line.slot, gives.key)
        because = self.told.because(line, gives.arm, gives.open)
        chosen = tuple(self.forms.because(line, gives.arm)) if len(line.arms) > 1 else ()
        lane = self.told.source(line.cite.printed, (formula, *chosen), gives.open, item.number)
        if slot.symbol.kind == "word":
            return Line(
                item.number,
                self.told.anchor(item.number),
                (slot.symbol.says,),
                self.shared.symbol(line.slot),
                None,
                None,
                None,
                result,
                lane,
                because,
            )
        shown, substituted = self.told.steps(formula, gives)
        coherent = self.told.coherent(gives, formula)
        taken = self.told.row_taken(gives, formula)
        return Line(
            item.number,
            self.told.anchor(item.number),
            (slot.symbol.says + (f", {taken}" if taken else ""),),
            self.shared.symbol(line.slot),
            shown,
            substituted,
            coherent,
            result,
            lane,
            because,
        )

    def unknown(self, item: SayUnknown) -> tuple[Block, ...]:
        """Return the equation that `c` makes true, then `c = formula = substitution = 6.427 in.` or its root alone."""
        worked, line = item.worked, item.worked.line
        equation = Row((self.shared.formula(line.left), relation("="), self.shared.formula(line.right)))
        says: Words = (self.slots[line.slot].symbol.says, ", so that")
        source = self.told.source("", (line.left, line.right), worked.open, item.number)
        shown: Formula | None = None
        substituted, coherent, lane = shown, shown, SourceLane("")
        if worked.closed is not None:
            formula = worked.closed.line.arms[0].formula
            shown, substituted = self.told.steps(formula, worked.closed)
            coherent = self.told.coherent(worked.closed, formula)
            lane = self.told.source("", (formula,), worked.open, item.number)
        symbol, value = self.shared.symbol(line.slot), self.told.value(line.slot, worked.key)
        root = Line(item.number, self.told.anchor(item.number), (), symbol, shown, substituted, coherent, value, lane)
        sought = Statement(item.equation, self.told.anchor(item.equation), says, equation, source)
        return sought, root

    def equation(self, item: SayEquation) -> Block:
        """Return a side of an equation with its numbers at the root."""
        worked, node = item.worked, item.worked.line.left if item.side == "left" else item.worked.line.right
        unit = equation_unit(worked.line, self.forms)
        figure = show_figure(self.forms.equation(worked, item.side), None if unit is ONE else unit)
        shown = self.shared.formula(node)
        substituted = self.told.substitution(node, worked.open, unit) if has_values(node) else None
        if isinstance(node, Name) or substituted == shown:
            substituted = None
        says, lane = (f"{item.side} side there",), self.told.source("", (node,), worked.open, item.number)
        return Line(item.number, self.told.anchor(item.number), says, shown, None, substituted, None, figure, lane)

    def branch(self, item: SayBranch) -> tuple[Block, ...]:
        """Say which comparison chose a block, or in the template's own words what the arm is for."""
        arms = item.worked.line.arms
        if any(arm.says is not None for arm in arms):
            says = arms[item.worked.arm].says
            return (Paragraph((says[:1].upper() + says[1:] + ":",), "plain"),) if says else ()
        shown = self.told.because(item.worked.line, item.worked.arm, item.worked.open)
        return (Paragraph(("Since ", shown, ":"), "plain"),) if shown is not None else ()

    def text(self, item: SayText) -> tuple[Block, ...]:
        """Return words with their values."""
        line = item.worked.line
        words = self.pieces(line.pieces, item.worked.open)
        if line.kind == "heading":
            return (Heading("".join(str(w) for w in words if isinstance(w, str)), 3),)
        cite = line.cite.printed if line.cite else ""
        if line.kind == "use":
            return (ResultBox(0, "", words, SourceLane(cite)),)
        return (Paragraph(words, _TEXT_KINDS[line.kind], SourceLane(cite)),)  # type: ignore[arg-type]

    def pieces(self, pieces: tuple[str | int, ...], opened: Opened) -> Words:
        """Return words in which each slot shows its value."""
        words: list[str | Formula] = []
        stopped = False
        for piece in pieces:
            if isinstance(piece, str):
                # a full stop behind `in.` is that stop
                words.append(piece[1:] if stopped and re.match(r"\.(?!\w)", piece) else piece)
            else:
                words.append(self.told.value(piece, self.told.key(piece, opened)))
                symbol = self.slots[piece].symbol
                stopped = symbol.unit is not None and symbol.inches is None and unit_text(symbol.unit).endswith(".")
        return tuple(words)
