"""Given declarations of a template: what a project must hand over, in which kind and range.

Mapping nodes in, `Given` records out.
"""

from __future__ import annotations

import re
from typing import Literal

from calcreport.core.expression import Name
from calcreport.core.problems import Problems, listed
from calcreport.core.quantity import Amount, read_in_unit
from calcreport.core.rows import MOST_ROWS
from calcreport.core.units import LENGTH, NONE, Dimension, dimension_words, multiply
from calcreport.read.fields import Fields, as_mapping, is_empty, say_not_a_word, say_not_yet
from calcreport.read.model import Given, Range, Symbol
from calcreport.read.nodes import Mapping, Node, Scalar
from calcreport.read.symbols import KEYS as SYMBOL_KEYS
from calcreport.read.symbols import KINDS, Table, find_symbol, hold_name, read_symbol

KEYS = (
    *SYMBOL_KEYS,
    "range",
    "if none",
    "material",
    "property",
    "criterion",
    "rows",
    "names",
    "least",
    "most",
    "over",
    "gives",
)
#: keys that do not stand beside `criterion`
NO_CRITERION = ("material", "rows", "over")
#: what a callout gives, in which dimension
OUTPUTS: dict[str, Dimension] = {
    "area": multiply(LENGTH, LENGTH), "diameter": LENGTH, "count": NONE, "spacing": LENGTH,
}  # fmt: skip
GIVEN_KINDS = (*KINDS, "bars", "spaced bars")
#: kinds the language has and this version does not read
_LATER = ("station",)
_ONE_SIDED = re.compile(r"(>=|<=|>|<)\s*(.+)")
_INTERVAL = re.compile(r"([\[(])\s*([^,]+),\s*([^,]+?)\s*([\])])")


def read_givens(node: Mapping, table: Table, problems: Problems) -> tuple[Given, ...]:
    """Read the `given` mapping of a template or part."""
    found = (_Reader(key, value, table, problems).read() for key, value in node.entries)
    return tuple(given for given in found if given is not None)


class _Reader:
    """Reads one declaration."""

    def __init__(self, key: Scalar, node: Node, table: Table, problems: Problems) -> None:
        self.key, self.node, self.table, self.problems = key, node, table, problems
        self.what = f"the given `{key.text[:40]}`"

    def read(self) -> Given | None:
        entry = Mapping((), self.key.span) if is_empty(self.node) else as_mapping(self.node, self.what, self.problems)
        if entry is None or not hold_name(self.key, self.problems):
            return None
        fields = Fields(entry, KEYS, self.what, self.problems)
        kind = self.kind(fields)
        symbol = self.symbol(fields, kind)
        if kind is None or (symbol is None and kind != "rows"):
            return None
        rows = fields.mapping("rows") if kind == "rows" else None
        least = fields.whole("least", low=0, high=MOST_ROWS)
        most = fields.whole("most", low=1, high=MOST_ROWS)
        return Given(
            name=self.key.text,
            kind=kind,
            symbol=symbol,
            says=fields.text("says") or (symbol.says if symbol else ""),
            range=_Range(fields, symbol, self.problems).read(),
            if_none=self.if_none(fields, kind, symbol),
            material=fields.text("material"),
            property=fields.text("property") or self.key.text,
            criterion=self.criterion(fields, kind),
            columns=self.columns(rows) if rows else (),
            row_names=tuple(scalar.text for scalar in fields.texts("names")),
            least=1 if least is None else least,
            most=MOST_ROWS if most is None else most,
            over=tuple(Name(scalar.text, scalar.span) for scalar in fields.texts("over")),
            gives=self.gives(fields, kind),
            span=self.key.span,
        )

    def kind(self, fields: Fields) -> Literal["value", "bars", "spaced bars", "rows", "pairs"] | None:
        if fields.has("rows"):
            return "rows"
        if "rows" in fields.mistaken:
            return None
        scalar = fields.scalar("kind")
        if scalar is not None and scalar.text in _LATER:
            say_not_yet(scalar, self.problems)
            return None
        if scalar is not None and scalar.text not in GIVEN_KINDS:
            say_not_a_word(scalar, GIVEN_KINDS, "`kind`", self.problems)
            return None
        if scalar is not None and scalar.text == "bars":
            return "bars"
        if scalar is not None and scalar.text == "spaced bars":
            return "spaced bars"
        return "pairs" if fields.has("over") else "value"

    def symbol(self, fields: Fields, kind: str | None) -> Symbol | None:
        if kind is None or kind == "rows":
            return None
        base = self.table.get(self.key.text)
        if kind in ("bars", "spaced bars"):
            says = fields.text("says") or (base.says if base else "")
            if not says:
                fields.say_missing("says")
            return Symbol(self.key.text, fields.text("shows"), says, "word", None, (), None)
        told = self.key.text in self.table and base is None
        if told or (base is None and not any(fields.has(key) for key in ("unit", "one of", "kind", "says"))):
            if base is None and fields.mistaken & {"unit", "one of", "kind", "says"}:
                return None
            return find_symbol(self.key.text, self.key.span, self.table, self.problems)
        return read_symbol(self.key, fields, base, self.problems)

    def criterion(self, fields: Fields, kind: str) -> Name | None:
        """Return the criterion a single value is read from; only one value, from one place."""
        scalar = fields.scalar("criterion")
        if scalar is not None and (kind != "value" or fields.has("material")):
            found = "a material" if fields.has("material") else "rows" if kind == "rows" else f"{kind}"
            self.problems.add("wrong-shape", scalar.span, f"{self.what} cannot be read from the criteria",
                              expected="one quantity or word, from one place", found=found)  # fmt: skip
            return None
        return Name(scalar.text, scalar.span) if scalar is not None else None

    def columns(self, node: Mapping) -> tuple[Given, ...]:
        columns = read_givens(node, self.table, self.problems)
        for column in columns:
            if column.kind in ("rows", "pairs"):
                self.problems.add("wrong-shape", column.span, f"the column `{column.name}` cannot hold rows",
                                  expected="a value, a word or bars", found="a set in a set")  # fmt: skip
            elif column.criterion is not None:
                self.problems.add("wrong-shape", column.criterion.span, f"the column `{column.name}` is a criterion",
                                  expected="a value of its own beside the set: a criterion is the same in every row",
                                  found="a column")  # fmt: skip
        return tuple(column for column in columns if column.kind not in ("rows", "pairs"))

    def gives(self, fields: Fields, kind: str) -> tuple[tuple[Symbol, str], ...]:
        mapping = fields.mapping("gives")
        pairs: list[tuple[Symbol, str]] = []
        if mapping is not None and kind not in ("bars", "spaced bars"):
            self.problems.add(
                "unknown-key",
                mapping.span.part(0, 1),
                "only a bar callout gives values",
                expected="`kind: bars` or `kind: spaced bars` beside `gives`",
                found=f"a {kind}",
            )
            return ()
        outputs = tuple(name for name in OUTPUTS if name != "spacing" or kind == "spaced bars")
        for key, value in mapping.entries if mapping else ():
            symbol = find_symbol(key.text, key.span, self.table, self.problems)
            if not isinstance(value, Scalar) or value.text not in outputs:
                self.problems.add("not-a-word", value.span, "these bars give no such value", expected=listed(outputs),
                                  found=value.text[:40] if isinstance(value, Scalar) else "no word")  # fmt: skip
            elif symbol is not None and self.fits(symbol, key, value.text):
                pairs.append((symbol, value.text))
        return tuple(pairs)

    def fits(self, symbol: Symbol, key: Scalar, output: str) -> bool:
        if symbol.unit is not None and symbol.unit.dimension == OUTPUTS[output]:
            return True
        found = dimension_words(symbol.unit.dimension) if symbol.unit else "a word"
        self.problems.add("unit-mismatch", key.span, f"`{key.text}` cannot take the {output} of bars",
                          expected=dimension_words(OUTPUTS[output]), found=f"{found}, by its symbol")  # fmt: skip
        return False

    def if_none(self, fields: Fields, kind: str, symbol: Symbol | None) -> Amount | str | None:
        scalar = fields.scalar("if none")
        if scalar is None:
            return None
        if scalar.text == "absent" or kind == "rows":
            return "absent"
        if symbol is None or symbol.unit is None:
            words = symbol.words if symbol else ()
            if scalar.text not in words:
                say_not_a_word(scalar, ("absent", *words), "`if none`", self.problems)
                return None
            return scalar.text
        return read_in_unit(scalar.text, scalar.span, self.problems, symbol.unit)


class _Range:
    """Reads `range: '> 0'`, `'[0.5, 1.0]'` or `'(0, 8 in]'`."""

    def __init__(self, fields: Fields, symbol: Symbol | None, problems: Problems) -> None:
        self.scalar, self.symbol, self.problems = fields.scalar("range"), symbol, problems

    def read(self) -> Range | None:
        scalar = self.scalar
        if scalar is None:
            return None
        if self.symbol is None or self.symbol.unit is None:
            self.say(scalar, "only a quantity has a range", "no `range` here")
            return None
        one = _ONE_SIDED.fullmatch(scalar.text)
        if one:
            amount = self.bound(scalar, one, 2)
            low, is_open = one[1].startswith(">"), len(one[1]) == 1
            return Range(amount if low else None, None if low else amount, is_open, is_open, scalar.text, scalar.span)
        both = _INTERVAL.fullmatch(scalar.text)
        if both is None:
            self.say(scalar, "this is not a range", "'> 0', '[0.5, 1.0]' or '(0, 8 in]'")
            return None
        low_end, high_end = self.bound(scalar, both, 2), self.bound(scalar, both, 3)
        if low_end and high_end and low_end.value > high_end.value:
            self.say(scalar, "this range holds nothing", "the lower bound first")
        return Range(low_end, high_end, both[1] == "(", both[4] == ")", scalar.text, scalar.span)

    def say(self, scalar: Scalar, message: str, expected: str) -> None:
        self.problems.add("bad-range", scalar.span, message, expected=expected, found=scalar.text[:40] or "nothing")

    def bound(self, scalar: Scalar, match: re.Match[str], group: int) -> Amount | None:
        assert self.symbol is not None and self.symbol.unit is not None
        span = scalar.span.part(match.start(group), match.end(group))
        return read_in_unit(match[group], span, self.problems, self.symbol.unit)
