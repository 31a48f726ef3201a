"""Lines that ask for numerical analysis: a method with what it takes and gives, a value found by another method.

Fields in, `Method` and `Twin` records out. What a method takes and gives is held when names are bound.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.core.expression import Expression, Name
from calcreport.core.methods import METHODS
from calcreport.read.fields import Fields, as_scalar
from calcreport.read.formulas import FormulaReader
from calcreport.read.model import Method, Output, Symbol, Twin
from calcreport.read.nodes import Scalar
from calcreport.read.symbols import find_symbol, hold_name
from calcreport.read.words import read_cite


def read_handed(fields: Fields, formulas: FormulaReader) -> tuple[tuple[Name, Expression | None], ...]:
    """Read the formulas and words under `with`, by the names of who takes them."""
    mapping = fields.mapping("with")
    entries = mapping.entries if mapping else ()
    return tuple((Name(key.text, key.span), formulas.formula(value)) for key, value in entries)


@dataclass(frozen=True, slots=True)
class MethodReader:
    """Reads the two kinds of line of one file, for one system and year."""

    formulas: FormulaReader
    document: str

    def method(self, fields: Fields) -> Method | None:
        """Read a `method` line."""
        name = fields.scalar("method", required=True)
        inputs = read_handed(fields, self.formulas)
        outputs = fields.mapping("gives", required=True)
        stem = fields.scalar("as")
        if stem is not None and not hold_name(stem, self.formulas.problems):
            stem = None
        cite = read_cite(fields, self.document, self.formulas.problems)
        if name is None or outputs is None:
            return None
        found = []
        for ours, node in outputs.entries:
            output = as_scalar(node, f"`{ours.text[:40]}`", self.formulas.problems)
            if output is not None and hold_name(ours, self.formulas.problems):
                symbol = self.symbol(ours, output, name.text)
                found.append(Output(Name(ours.text, ours.span), Name(output.text, output.span), symbol))
        shown = tuple(Name(scalar.text, scalar.span) for scalar in fields.texts("table"))
        table = shown if fields.node_of("table") is not None else None
        own = stem.text if stem else ""
        return Method(Name(name.text, name.span), inputs, tuple(found), own, cite, fields.span, table)

    def symbol(self, ours: Scalar, output: Scalar, method: str) -> Symbol | None:
        """Return the symbol of an output; sets have none, and what the method does not give needs none."""
        kind = METHODS.get(method)
        if kind is None or output.text not in kind.gives:
            return None
        return find_symbol(ours.text, ours.span, self.formulas.table, self.formulas.problems)

    def twin(self, fields: Fields) -> Twin | None:
        """Read a `by another method` line."""
        value = fields.scalar("by another method", required=True)
        name = fields.scalar("method", required=True)
        inputs = read_handed(fields, self.formulas)
        output = fields.scalar("output")
        if fields.node_of("within") is None:
            fields.say_missing("within")
        within = self.formulas.formula(fields.node_of("within"))
        cite = read_cite(fields, self.document, self.formulas.problems)
        if value is None or name is None or within is None:
            return None
        taken = Name(output.text, output.span) if output is not None else None
        return Twin(Name(value.text, value.span), Name(name.text, name.span), inputs, taken, within, cite, fields.span)
