"""The index of sheets: one ruled row a part, filled in once every sheet has its number.

`report.model.Index` and the sheets each part came to -> a table in the sheets' common style. A part
that holds a failing check is marked as loudly here as on its own sheets.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from calcreport.report.model import (
    Column,
    Heading,
    Index,
    IndexEntry,
    Reference,
    Strong,
    Table,
    TableRow,
    Words,
)


@dataclass(frozen=True, slots=True)
class Extent:
    """The sheets of one part: first and last label, and the place of the first in the package."""

    first: str
    last: str
    page: int


def index_blocks(index: Index, extents: dict[str, Extent]) -> tuple[Heading, Table]:
    """Return heading and table of the index; entries whose part has no sheets are left without a number."""
    columns = (
        Column(("Mark",)),
        Column(("Subject",), stretch=1.0),
        Column(("",), "centre"),
        Column(("Sheets",)),
        Column(("Rev.",)),
        Column(("Last changed",)),
        Column(("Page",), "right"),
    )
    rows = tuple(_row(entry, extents.get(entry.part)) for entry in index.entries)
    return Heading("Index of sheets", 1), Table(columns, rows)


def _row(entry: IndexEntry, extent: Extent | None) -> TableRow:
    flag: Words = (Strong(entry.flag),) if entry.flag else ()
    loud: Literal["", "loud"] = "loud" if entry.flag else ""
    if extent is None:
        return TableRow(((entry.mark,), (entry.title,), flag, (), (entry.revision,), (entry.date,), ()), loud)
    sheets = extent.first if extent.first == extent.last else f"{extent.first} to {extent.last}"
    cells = (
        (Reference(entry.mark, extent.first),),
        (Reference(entry.title, extent.first),),
        flag,
        (Reference(sheets, extent.first),),
        (entry.revision,),
        (entry.date,),
        (str(extent.page),),
    )
    return TableRow(cells, loud)
