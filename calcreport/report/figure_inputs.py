"""What a figure was handed, as numbers, words and printed labels."""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.calculate.model import BoundInput, Key
from calcreport.report.display import show_symbol, unit_text
from calcreport.report.forms import CalculationForms
from calcreport.report.model import Formula, Row
from calcreport.report.notation import relation, show_figure


@dataclass(frozen=True, slots=True)
class FigureInputs:
    """Reads a figure's inputs."""

    forms: CalculationForms
    inputs: dict[str, BoundInput]
    open: dict[int, int]

    def has(self, name: str) -> bool:
        """Tell whether an input was handed and has a value."""
        given = self.inputs.get(name)
        if given is None:
            return False
        return given.slot < 0 or self.forms.worked.values.get(given.slot, self.key(given.slot)) is not None

    def key(self, slot: int, *rows: tuple[int, int]) -> Key:
        """Return a slot's key in the open rows and those named."""
        opened = {**self.open, **dict(rows)}
        return tuple(opened.get(index, 0) for index in self.forms.worked.values.sets[slot])

    def number(self, name: str, *rows: tuple[int, int]) -> float:
        """Return a number in base units."""
        given = self.inputs[name]
        values = self.forms.worked.values
        if given.slot >= 0:
            return values.number(given.slot, self.key(given.slot, *rows))
        if given.formula is None:
            return 0.0
        return self.forms.worked.compiled(given.formula)(values)

    def word(self, name: str) -> str:
        """Return a word."""
        given = self.inputs[name]
        return str(self.forms.worked.values.get(given.slot, ())) if given.slot >= 0 else given.word

    def word_of(self, name: str, *rows: tuple[int, int]) -> str:
        """Return a word of a row."""
        given = self.inputs[name]
        values = self.forms.worked.values
        return str(values.get(given.slot, self.key(given.slot, *rows))) if given.slot >= 0 else given.word

    def rows(self, name: str) -> tuple[str, ...]:
        """Return the row names of a set handed over."""
        return self.forms.worked.values.row_names(self.inputs[name].rows)

    def count(self, name: str, *rows: tuple[int, int]) -> int:
        """Return how many rows a set has that lies inside the rows named."""
        opened, values = {**self.open, **dict(rows)}, self.forms.worked.values
        index = self.inputs[name].rows
        return len(values.names[index].get(tuple(opened[outer] for outer in values.outer[index]), ()))

    def unit(self, name: str) -> str:
        """Return the unit an input is printed in."""
        unit = self.forms.worked.plan.slots[self.inputs[name].slot].symbol.unit
        return unit_text(unit) if unit else ""

    def label(self, name: str, *rows: tuple[int, int], symbol: bool = True, unit: bool = True) -> Formula:
        """Return `b = 16 in.` with the printed figure."""
        slot = self.inputs[name].slot
        declared = self.forms.worked.plan.slots[slot].symbol
        figure = show_figure(self.forms.figure(slot, self.key(slot, *rows)), declared.unit if unit else None)
        return Row((show_symbol(declared), relation("="), figure)) if symbol else figure
