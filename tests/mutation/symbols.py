"""A symbol taken for another of the same dimension, a word for another of its list, a row name for its neighbour.

The body a place stands in gives the names that may be confused; whether one is visible at the place is left to the
planner, which refuses it if not.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from calcreport.core.expression import Is, Name
from calcreport.core.record import replace
from calcreport.core.units import Dimension
from calcreport.read.model import (
    Branches,
    Cell,
    Each,
    Entry,
    Given,
    Gives,
    Line,
    Method,
    PartBody,
    PartUse,
    Rows,
    Symbol,
    Unknown,
)

from .formulas import Apply, Change, altered_field


@dataclass(frozen=True, slots=True)
class Names:
    """The names of one template file: quantities with their dimension, words and rows with their lists."""

    dimensions: dict[str, Dimension]
    words: dict[str, tuple[str, ...]]


def names_of(body: PartBody) -> Names:
    """Return every name that a body's givens, lines and parts bring."""
    found = Names({}, {})
    for given in body.given:
        _given(given, found)
    _lines(body.lines, found)
    return found


def symbol_changes(node: Any, names: Names, *, use: str) -> Iterator[Change]:
    """Yield the slips of one node in which it names another thing."""
    match node:
        case Name(name) if use == "word":
            for words in names.words.values():
                for word in words if name in words else ():
                    if word != name:
                        yield _renamed(node, word)
        case Name(name):
            dimension = names.dimensions.get(name)
            for other, its_own in names.dimensions.items():
                if other != name and its_own == dimension:
                    yield _renamed(node, other)
        case Is(Name(name), word):
            own = Names({}, {name: tuple(w for w in names.words.get(name, ()) if not w.endswith("*"))})
            for other in sorted(_near(word, own)):
                yield Change(f"{name} is {word} → {other}", altered_field("word", other))
        case Cell(_, mapped):
            taken = {row.name for row, _ in mapped}
            for number, (row, _) in enumerate(mapped):
                for other in sorted(_near(row.name, names) - taken):
                    yield Change(f"{row.name} → {other}", _mapped(number, other))
        case Entry(_, pairing):
            for number, (variable, fits) in enumerate(pairing):
                for item, fit in enumerate(fits):
                    for other in sorted(_near(fit.name, names) - {f.name for f in fits}):
                        yield Change(f"{fit.name} → {other} for {variable.name}", _paired(number, item, other))
        case _:
            pass


def _near(word: str, names: Names) -> set[str]:
    """Return the neighbours of a row name in the list it stands in."""
    found: set[str] = set()
    for words in names.words.values():
        if word in words and len(words) > 1:
            at = words.index(word)
            found |= {words[(at + step) % len(words)] for step in (-1, 1)}
    return found - {word}


def _mapped(number: int, other: str) -> Apply:
    def apply(found: Cell) -> Cell:
        row, formula = found.mapped[number]
        new = (replace(row, name=other), formula)
        return replace(found, mapped=(*found.mapped[:number], new, *found.mapped[number + 1 :]))

    return apply


def _paired(number: int, item: int, other: str) -> Apply:
    def apply(found: Entry) -> Entry:
        variable, fits = found.pairing[number]
        new = (variable, (*fits[:item], replace(fits[item], name=other), *fits[item + 1 :]))
        return replace(found, pairing=(*found.pairing[:number], new, *found.pairing[number + 1 :]))

    return apply


def _renamed(node: Name, other: str) -> Change:
    return Change(f"{node.name} → {other}", altered_field("name", other))


def _given(given: Given, found: Names) -> None:
    if given.kind == "rows":
        found.words[given.name] = given.row_names
    for symbol in (given.symbol, *(symbol for symbol, _ in given.gives)):
        if symbol is not None and not (given.kind.endswith("bars") and symbol is given.symbol):
            _symbol(symbol, symbol.name, found)
    for column in given.columns:
        _given(column, found)


def _symbol(symbol: Symbol, name: str, found: Names) -> None:
    if symbol.unit is not None:
        found.dimensions[name] = symbol.unit.dimension
    elif symbol.words:
        found.words[name] = symbol.words


def _lines(lines: tuple[Line, ...], found: Names) -> None:
    for line in lines:
        match line:
            case Gives(symbol):
                _symbol(symbol, symbol.name, found)
            case Branches(arms):
                for arm in arms:
                    _lines(arm.lines, found)
            case Each(_, inner):
                _lines(inner, found)
            case Unknown(symbol):
                _symbol(symbol, symbol.name, found)
                _lines(line.lines, found)
            case Rows(name, columns, entries):
                rows = tuple(dict.fromkeys(entry.name.name for entry in entries if not entry.pairing))
                found.words[name] = rows
                for column in columns:
                    _symbol(column.symbol, column.symbol.name, found)
            case Method(gives=gives, stem=stem):
                for output in gives:
                    if output.symbol is not None:
                        name = output.name.name
                        _symbol(output.symbol, f"{stem}.{name}" if stem else name, found)
            case PartUse(PartBody() as body, _, stem):
                inner_names, told = names_of(body), {name.name for name in body.gives}
                for name, dimension in inner_names.dimensions.items():
                    if not told or name in told:
                        found.dimensions[f"{stem}.{name}" if stem else name] = dimension
                for name, words in inner_names.words.items():
                    found.words.setdefault(name, words)
            case _:
                pass
