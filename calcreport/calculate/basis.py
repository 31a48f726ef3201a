"""What a calculation rests on: its links, its fingerprint, and all that it says, without the places it stands at.

Calculations with those worked before in, plain values out.
"""

from __future__ import annotations

import hashlib

from calcreport.calculate.model import (
    BarCallout,
    Calculation,
    GivenPairs,
    GivenRows,
    GivenValue,
    LinkedRows,
    LinkedValue,
    Worked,
    singles,
)
from calcreport.core.expression import Name
from calcreport.core.quantity import Amount


def links_of(calculation: Calculation) -> list[tuple[GivenValue, LinkedValue]]:
    """Return the given values that are links, those of candidates too, with where they lead."""
    return [(value, value.value) for value in singles(calculation.handed) if isinstance(value.value, LinkedValue)]


def fingerprint(settled: Calculation, calculation: Calculation, worked: dict[str, Worked]) -> str:
    """Return sixteen hexadecimal digits over the given values, exactly, and the text of the template's files.

    `settled` has a candidate's values among its own; the candidates not taken count too.
    """
    digest = hashlib.sha256()
    template = calculation.template
    digest.update(f"{template.name}\n{template.system}\n{template.year}\n".encode())
    for source in template.files:
        digest.update(source.text.encode())
    for value in (*settled.given, *(value for one in calculation.candidates for value in one.values)):
        digest.update(f"\n{value.given.name}=".encode() + _exactly(value, worked))
    return digest.hexdigest()[:16]


def _exactly(value: GivenValue | GivenRows | GivenPairs, worked: dict[str, Worked]) -> bytes:
    """Return what was given, the same however it was spelled."""
    match value:
        case GivenValue():
            return _canonical(value, worked)
        case GivenRows():
            rows = zip(value.names, value.cells, strict=True)
            return b"".join(f"|{n}:".encode() + b",".join(_exactly(c, worked) for c in cells) for n, cells in rows)
        case GivenPairs():
            return b"".join("/".join(names).encode() + _canonical(cell, worked) for names, cell in value.cells)


def _canonical(value: GivenValue, worked: dict[str, Worked]) -> bytes:
    handed = value.value
    match handed:
        case Amount():
            return f"{handed.value}".encode()
        case BarCallout():
            return handed.text.encode()
        case LinkedValue():
            source = worked[handed.mark]
            return f"{handed.mark}.{handed.path}={source.values.get(*source.place(handed.path))}".encode()
        case None:
            return b"none"
        case _:
            return handed.encode()


def rests_on(calculation: Calculation, worked: dict[str, Worked]) -> tuple[object, ...]:
    """Return all that a calculation says, without the places it stands at, and the values its links lead to."""
    given = tuple(_said(value) for value in calculation.given)
    candidates = tuple(
        (one.preference, one.named, tuple(_said(value) for value in one.values)) for one in calculation.candidates
    )
    linked = tuple(worked[link.mark].values for _, link in links_of(calculation))
    return (
        calculation.mark,
        calculation.title,
        calculation.input_text,
        given,
        candidates,
        calculation.pinned,
        calculation.members,
        linked,
    )


def _said(value: GivenValue | GivenRows | GivenPairs) -> tuple[object, ...]:
    origin = value.origin.kind, value.origin.words
    match value:
        case GivenRows():
            cells = tuple(tuple(_said(cell) for cell in row) for row in value.cells)
            return value.given, value.names, cells, origin, _taken(value.linked)
        case GivenPairs():
            return value.given, tuple((names, _said(cell)) for names, cell in value.cells), origin
    match value.value:
        case Amount(amount, unit, text):
            return value.given, amount, unit.text, text, origin
        case BarCallout():
            # the sizes it names are those of the template's own bar table
            return value.given, value.value.text, origin
        case LinkedValue(mark, path, _, at):
            return value.given, mark, path, _named(at), origin
    return value.given, value.value, origin


def _taken(rows: LinkedRows | None) -> tuple[object, ...]:
    """Return where the rows of another calculation were taken from; the values themselves stand in the cells."""
    if rows is None:
        return ()
    columns = tuple((ours, theirs.name) for ours, theirs in rows.columns)
    return rows.mark, rows.rows.name, _named(rows.at), columns, tuple(_said(one) for one in rows.same)


def _named(at: tuple[tuple[Name, Name], ...]) -> tuple[tuple[str, str], ...]:
    return tuple((rows.name, row.name) for rows, row in at)
