"""The index: sheets by name, links, loud marks."""

from __future__ import annotations

from calcreport.layout.index import Extent, index_blocks
from calcreport.report.model import Index, IndexEntry, Reference, Strong

INDEX = Index((
    IndexEntry("B1", "Beam", "B1", "", "1", "2 Nov 2026"),
    IndexEntry("B14", "Other beam", "B14", "NG", "2", "16 Nov 2026"),
    IndexEntry("X1", "Left out", "X1", "", "1", "2 Nov 2026"),
))  # fmt: skip
EXTENTS = {"B1": Extent("B1-1", "B1-1", 4), "B14": Extent("B14-1", "B14-3", 5)}


def test_entries_name_their_sheets_and_their_page() -> None:
    _, table = index_blocks(INDEX, EXTENTS)
    one, three, none = table.rows
    assert one.cells[3] == (Reference("B1-1", "B1-1"),)
    assert three.cells[3] == (Reference("B14-1 to B14-3", "B14-1"),)
    assert (one.cells[-1], three.cells[-1], none.cells[-1]) == (("4",), ("5",), ())
    assert none.cells[3] == ()


def test_a_part_with_a_failing_check_is_loud() -> None:
    _, table = index_blocks(INDEX, EXTENTS)
    assert [row.emphasis for row in table.rows] == ["", "loud", ""]
    assert table.rows[1].cells[2] == (Strong("NG"),)
    assert table.rows[0].cells[2] == ()
