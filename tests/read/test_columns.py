"""Columns by their headings, units of headings, and what is taken from a row."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.core.problems import Problem, Problems
from calcreport.core.source import Source
from calcreport.read.columns import Table, make_table, read_use, take, with_unit
from calcreport.read.nodes import Node, Scalar, read_tree
from tests.read.tables import named, read


def table_of(folder: Path, text: str) -> Table:
    """Return the table of a text."""
    sheet, problems = read(folder, text, "a.csv")
    assert sheet is not None and not problems
    table = make_table(sheet, None, sheet.rows[0].cell(0).span, Problems())
    assert table is not None
    return table


@pytest.mark.parametrize(
    ("heading", "stem", "unit"),
    [
        ("Width (in)", "Width", "in"),
        ("WIDTH (in.)", "WIDTH", "in"),
        ("Width, in", "Width", "in"),
        ("Width [mm]", "Width", "mm"),
        # common practice: the trade writes kip-ft and in.², a file kip*ft and in^2
        ("Moment (kip-ft)", "Moment", "kip*ft"),
        ("Area (in.²)", "Area", "in^2"),
        ("Stress, N/mm^2", "Stress", "N/mm^2"),
        ("Bars, bottom", "Bars, bottom", ""),
        ("Bars (bottom)", "Bars (bottom)", ""),
        ("Width (inches)", "Width (inches)", ""),
        ("Width", "Width", ""),
    ],
)
def test_headings_state_units(tmp_path: Path, heading: str, stem: str, unit: str) -> None:
    table = table_of(tmp_path, f'Mark,"{heading}"\nB1,1\n')
    assert (table.headings[1].stem, table.headings[1].unit) == (stem, unit)


@pytest.mark.parametrize(
    ("text", "unit", "full"),
    [
        ("16", "in", "16 in"),
        ("-16.5", "kip", "-16.5 kip"),
        ("1,200", "lb", "1,200 lb"),
        ("1/2", "in", "1/2 in"),
        ("7 1/2", "in", "7 1/2 in"),
        ("16 mm", "in", "16 mm"),
        ("18'-6\"", "in", "18'-6\""),
        ("4-#8", "in", "4-#8"),
        ("16", "", "16"),
        # a spacing is a length too; common practice: o.c. is "on centre" and says nothing more
        ("#4 @ 12", "in", "#4 @ 12 in"),
        ("#4@12", "in", "#4@12 in"),
        ("#4 @ 12 in o.c.", "in", "#4 @ 12 in"),
        ('#4 @ 12" O.C.', "", '#4 @ 12"'),
        ("#4@12oc", "in", "#4@12 in"),
        ("#4 @ 300 c/c", "mm", "#4 @ 300 mm"),
        ("bottom", "in", "bottom"),
    ],
)
def test_a_number_takes_the_unit_of_its_column(text: str, unit: str, full: str) -> None:
    assert with_unit(text, unit) == full


def node(text: str) -> Node:
    """Return a node of a project file."""
    found = read_tree(Source("project.yaml", text), Problems())
    assert found is not None
    return found


def taken(folder: Path, use: str, cells: str) -> tuple[object, list[Problem]]:
    """Return the text taken from a row of four columns, or the problems."""
    table = table_of(folder, f"Mark,Count,Size,Width (in)\n{cells}\n")
    problems = Problems()
    found = read_use(node(use), table, problems)
    assert found is not None, problems.sorted()
    one = take(found, table.rows[0], table, problems)
    return (one.text if isinstance(one, Scalar) else one), list(problems.sorted())


def test_a_cell(tmp_path: Path) -> None:
    assert taken(tmp_path, "Width", "B1,4,#8,16") == ("16 in", [])
    assert taken(tmp_path, "Width (in)", "B1,4,#8,16 mm") == ("16 mm", [])


def test_text_with_cells_in_it(tmp_path: Path) -> None:
    assert taken(tmp_path, "'{Count}-{Size}'", "B1,4,#8,16") == ("4-#8", [])
    assert taken(tmp_path, "{column: '{Count}-{Size} bars'}", "B1,4,#8,16") == ("4-#8 bars", [])


def test_a_unit_beside_the_column(tmp_path: Path) -> None:
    assert taken(tmp_path, "{column: Count, unit: mm}", "B1,4,#8,16") == ("4 mm", [])
    assert taken(tmp_path, "{column: Width, unit: in}", "B1,4,#8,16") == ("16 in", [])


@pytest.mark.parametrize(("says", "text"), [("none", "none"), ("12 in", "12 in"), ("no row", None)])
def test_what_an_empty_cell_stands_for(tmp_path: Path, says: str, text: str | None) -> None:
    assert taken(tmp_path, f"{{column: Width, if empty: {says}}}", "B1,4,#8,") == (text, [])
    assert taken(tmp_path, f"{{column: Width, if empty: {says}}}", "B1,4,#8,16") == ("16 in", [])


def test_an_empty_cell_is_never_passed_over(tmp_path: Path) -> None:
    for use in ("Width", "'{Count}-{Width}'"):
        _, problems = taken(tmp_path, use, "B1,4,#8,")
        assert [(p.slug, p.span.place if p.span else "") for p in problems] == [("empty-cell", f"{tmp_path}/a.csv:2:9")]


def test_the_place_of_a_value_is_its_cell(tmp_path: Path) -> None:
    table = table_of(tmp_path, "Mark,Width (in)\nB1,16\n")
    use = read_use(named("Width"), table, Problems())
    assert use is not None
    one = take(use, table.rows[0], table, Problems())
    assert isinstance(one, Scalar)
    # with the unit of the heading the text is not that of the cell: no part of it has a place of its own
    assert (one.span.place, one.span.text, one.span.whole) == (f"{tmp_path}/a.csv:2:4", "16", True)
