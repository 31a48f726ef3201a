"""Members of a project as rows: who is one, its size, its bars, what governs, the result as printed."""

from __future__ import annotations

from pathlib import Path

from calcreport.report.confirmations import find_forms
from calcreport.report.members import HEADINGS, members, sizes, taken
from tests.read.test_schedules import SCHEDULE, TABLE, result
from tests.small import number, work_small

TEMPLATE = """\
symbols:
  b: {unit: in, says: width}
  h: {unit: in, says: depth}
  c: {unit: in, says: cover}
  A: {unit: in^2, says: area}
given: {b: , h: , c: }
lines:
  - {gives: A, formula: 'b*h', cite: geometry}
  - {check: area, holds: 'A <= 500 in^2', cite: geometry}
  - {use: '{h} × {b}, area {A}'}
"""


def _rows(folder: Path) -> tuple[tuple[str, ...], ...]:
    found = result(folder, SCHEDULE, beams=TABLE)
    assert found.worked is not None
    return members(found.worked, find_forms(found.worked))


def test_a_calculation_with_bars_is_a_member(tmp_path: Path) -> None:
    rows = _rows(tmp_path)
    assert [dict(zip(HEADINGS, row, strict=True))["Bars"] for row in rows] == ["steel: 4-#8", "steel: 5-#8"]
    row = dict(zip(HEADINGS, rows[0], strict=True))
    # the template has one check, no shear is given, and no line of it says the result
    assert (row["Mark"], row["Governing check"], row["Ratio"], row["Verdict"]) == ("B1", "shear", "0.000", "OK")
    assert (row["Size"], row["Result"]) == ("", "")


def test_the_size_is_what_the_result_line_names_in_its_order(tmp_path: Path) -> None:
    one = work_small(tmp_path, TEMPLATE, "{b: 16 in, h: 2 ft, c: 2 in}")
    assert [size.path for size in sizes(one.members[0])] == ["h", "b"]
    # by hand: 16*24 = 384
    assert round(number(one, "A"), 9) == 384


def test_every_given_value_has_a_name(tmp_path: Path) -> None:
    found = result(tmp_path, SCHEDULE, beams=TABLE)
    assert found.worked is not None
    paths = [one.path for one in taken(found.worked.calculations[0].members[0])]
    assert paths == ["b", "h", "face", "n", "V", "f_c", "steel", "tie", "layer.first.y", "layer.first.A_i"]


def test_like_members_on_one_calculation_are_rows_of_their_own(tmp_path: Path) -> None:
    one = work_small(
        tmp_path, TEMPLATE, "{c: 2 in}, members: [{mark: T2, b: 16 in, h: 2 ft}, {mark: T3, b: 1 ft, h: 9 in}]"
    )
    assert [[size.path for size in sizes(member)] for member in one.members] == [["h", "b"], ["h", "b"]]
    assert [[one.path for one in taken(member)] for member in one.members] == [["c", "b", "h"]] * 2
