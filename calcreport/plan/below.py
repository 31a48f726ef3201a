"""The names that a list of lines gives, at any depth.

Lines as read in, names out. Binds nothing and finds no mistake.
"""

from __future__ import annotations

from collections.abc import Iterator

from calcreport.read.model import (
    EVERY,
    Branches,
    Broken,
    Each,
    Gives,
    Line,
    Method,
    PartBody,
    PartUse,
    Rows,
    Twin,
    Unknown,
)


def given_below(lines: tuple[Line, ...]) -> Iterator[str]:
    """Yield every name that lines of this name space give, at any depth."""
    for line in lines:
        match line:
            case Gives(symbol):
                yield symbol.name
            case Branches(arms):
                for arm in arms:
                    yield from given_below(arm.lines)
            case Each(_, inner):
                yield from given_below(inner)
            case Unknown(symbol):
                yield symbol.name
                yield from given_below(line.lines)
            case Rows(name, columns):
                yield name
                yield from (column.symbol.name for column in columns)
            case Broken(names, inner):
                yield from (name for name in names if name != EVERY)
                yield from given_below(inner)
            case Method() | Twin():
                yield from line.names()
            case PartUse(PartBody() as body, _, stem):
                own = [name.name for name in body.gives] or [n.symbol.name for n in body.lines if isinstance(n, Gives)]
                yield from (f"{stem}.{name}" if stem else name for name in own)
