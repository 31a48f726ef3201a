"""Rows that part between sheets: nothing lost, nothing over anything else, headings again, columns read one by one."""

from __future__ import annotations

import pytest
from inked import clashes, inked

from calcreport.layout.flow import flow
from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.long_rows import paragraphs
from calcreport.layout.model import Run
from calcreport.layout.pieces import flat
from calcreport.report.model import Column, Letters, Paragraph, Strong, Table, TableRow

COLUMNS = (Column(("No.",)), Column(("Comment",), stretch=1.0), Column(("Response",), stretch=1.0))


def words(letter: str, count: int) -> str:
    return " ".join(f"{letter}{n}" for n in range(count))


def row(number: int, comment: int, response: int) -> TableRow:
    cells = ((Strong(str(number)), "\nstructural"), (words(f"c{number}x", comment),), (words(f"r{number}x", response),))
    return TableRow(cells, over=f"{number}, continued")


def sheets(kit: Kit, *rows: TableRow) -> list[list[Run]]:
    bodies = flow(kit, (Table(COLUMNS, rows),), kit.sheet.body_top)
    return [[item for item in flat(body.items) if isinstance(item, Run)] for body in bodies]


@pytest.mark.parametrize("counts", [(3, 2), (900, 10), (10, 900), (2000, 2000), (0, 0)])
def test_every_word_once_in_order_and_apart(kit: Kit, fonts: Fonts, counts: tuple[int, int]) -> None:
    rows = (row(1, 4, 4), row(2, *counts), row(3, 5, 5))
    bodies = flow(kit, (Table(COLUMNS, rows),), kit.sheet.body_top)
    runs = [item.text for body in bodies for item in flat(body.items) if isinstance(item, Run)]
    said = " ".join(runs).split()
    for number, (comment, response) in ((1, (4, 4)), (2, counts), (3, (5, 5))):
        for letter, count in (("c", comment), ("r", response)):
            own = [word for word in said if word.startswith(f"{letter}{number}x")]
            assert own == words(f"{letter}{number}x", count).split()
    for body in bodies:
        inks = inked(body.items, fonts)
        assert clashes(inks) == []
        assert all(ink.foot <= kit.sheet.body_foot + 0.5 and ink.top >= kit.sheet.body_top - 0.5 for ink in inks)


def test_headings_and_the_name_of_the_row_stand_again(kit: Kit) -> None:
    # by hand: on the first sheet the row begins; on all others it runs on
    found = sheets(kit, row(1, 2500, 10))
    assert len(found) > 2
    for place, runs in enumerate(found):
        text = " ".join(run.text for run in runs)
        assert text.startswith("No. Comment Response")
        assert ("1, continued" in text) is (place > 0)


def test_columns_are_read_one_by_one(kit: Kit) -> None:
    (runs,) = sheets(kit, row(1, 60, 60))
    said = " ".join(run.text for run in runs).split()
    assert said == ["No.", "Comment", "Response", "1", "structural", *words("c1x", 60).split(),
                    *words("r1x", 60).split()]  # fmt: skip


def test_two_lines_at_least_on_either_sheet(kit: Kit) -> None:
    """Whatever stands above, a row neither begins with its last line on a sheet nor ends with its first on another."""
    parted = 0
    for above in range(20, 46):
        blocks = (*(Paragraph((f"line {n}",), "plain") for n in range(above)), Table(COLUMNS, (row(1, 400, 4),)))
        bodies = flow(kit, blocks, kit.sheet.body_top)
        counts = [
            len({round(item.y, 1) for item in flat(body.items) if isinstance(item, Run) and "c1x" in item.text})
            for body in bodies
        ]
        counts = [count for count in counts if count]
        parted += len(counts) > 1
        assert min(counts) >= 2
    assert parted > 10, "most of them part"


def test_line_ends_are_kept_and_blank_lines_too(kit: Kit) -> None:
    formula = Letters("x")
    assert paragraphs(("a\n\nb", Strong("c"), formula, "\nd")) == (("a",), (), ("b", Strong("c"), formula), ("d",))
    (runs,) = sheets(kit, TableRow((("1",), ("a\n\nb",), ()), over="1, continued"))
    ys = {run.text.strip(): run.y for run in runs}
    # by hand: two leadings of the table's letters, 10.5 pt
    assert ys["b"] - ys["a"] == pytest.approx(21.0, abs=0.6)
