"""Sets made on the sheet: spaced between bounds, from a table, read between rows; values and print by hand."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from calcreport.__main__ import main
from calcreport.calculate.model import Worked
from calcreport.commands.desk import Opened, open_project
from calcreport.publish import report
from calcreport.report.script import write_script
from calcreport.second.agreement import compare_paths
from tests.printed import printed
from tests.small import number, verdicts, work_or_problems, work_small

SYMBOLS = """\
symbols:
  h: {unit: in, says: depth}
  z: {unit: in, says: depth of a point}
  x: {unit: in, says: place}
  y: {unit: kip, says: force}
  F: {unit: kip, says: force there}
  G: {unit: kip, says: two look-ups}
  B: {unit: in^2, says: area at a point}
  A: {unit: in^2, says: largest area}
  kind: {one of: [soft, stiff], says: kind of soil}
given: {h: }
lines:
"""
CHECK = "  - {check: found, holds: 'h <= 90 in', cite: statics}\n"
SPACED = "  - {rows: point, spaced: {symbol: z, from: '0.1*h', to: h, count: 4}, cite: geometry}\n"
KNOTS = "name,x (in),y (kip)\nlow,0,2\nmid,10,6\nhigh,30,7\n"
TABLE = "  - {rows: knot, file: knots.csv, columns: {x: , y: }, says: forces by test, cite: statics}\n"


def column(one: Worked, path: str) -> list[float]:
    slot = one.plan.slots[one.plan.by_path[path]]
    assert slot.symbol.unit is not None
    return [v / slot.symbol.unit.size for v in one.values.rows[slot.index].values() if isinstance(v, float)]


def agreed(folder: Path) -> None:
    """Hold the second path against the first."""
    opened = open_project(str(folder))
    assert isinstance(opened, Opened)
    worked = report(opened.world, opened.source).worked
    assert worked is not None
    found = compare_paths(worked)
    assert found.differences == () and found.largest < 1e-12


def test_spaced_points_and_their_sentence(tmp_path: Path) -> None:
    found = work_small(tmp_path, SYMBOLS + SPACED + CHECK, "{h: 20 in}")
    # 2 to 20 in three steps of 6
    assert column(found, "z") == pytest.approx([2, 8, 14, 20], rel=1e-15)
    text = printed(tmp_path)
    assert "depth of a point, 4 values in equal steps" in text
    assert "z from 0.1 h = 2 in. to h = 20 in." in text
    # no line uses the points: no table of them
    assert "8 14" not in text
    agreed(tmp_path)


def test_spaced_points_that_lines_use_stand_in_a_table(tmp_path: Path) -> None:
    lines = SPACED + "  - {gives: A, formula: 'h*max(z over point where z < h)', cite: geometry}\n" + CHECK
    found = work_small(tmp_path, SYMBOLS + lines, "{h: 20 in}")
    assert number(found, "A") == pytest.approx(280)  # 20 times 14
    text = printed(tmp_path)
    assert "point z in. 1 2 2 8 3 14 4 20" in text
    assert "20 (14)" in text  # the row taken, and no other
    agreed(tmp_path)


def test_bounds_exactly_met_are_met(tmp_path: Path) -> None:
    # h/3 has no end in decimals: the last point is h itself, and the check of it is OK
    lines = "  - {rows: point, spaced: {symbol: z, from: h/3, to: 'h*3/3', count: 7}, cite: geometry}\n"
    check = "  - {check: top, holds: 'max(z over point) <= h', cite: geometry}\n"
    assert verdicts(work_small(tmp_path, SYMBOLS + lines + check, "{h: 1.1 in}"))["top"][0] == "OK"


def test_a_table_beside_the_template(tmp_path: Path) -> None:
    (tmp_path / "knots.csv").write_text(KNOTS)
    lines = TABLE + "  - {gives: F, formula: 'linear(y over knot where x = h/2)', cite: statics}\n" + CHECK
    found = work_small(tmp_path, SYMBOLS + lines, "{h: 32 in}")
    # 16 lies 6/20 of the way from 10 to 30: 6 + 0.3
    assert number(found, "F") == pytest.approx(6.3)
    text = printed(tmp_path)
    assert "forces by test" in text and "knot x in. y kip statics low 0 2 mid 10 6 high 30 7" in text
    for piece in ("6 + (7 − 6)", "32/2 − 10", "30 − 10"):
        assert piece.replace(" ", "") in text.replace(" ", ""), piece
    agreed(tmp_path)
    assert "knots.csv" in {source.name for source in found.plan.template.files}


def test_a_row_that_is_met_is_read_as_it_stands(tmp_path: Path) -> None:
    (tmp_path / "knots.csv").write_text(KNOTS)
    lines = TABLE + "  - {gives: F, formula: '2*linear(y over knot where x = h/2)', cite: statics}\n" + CHECK
    assert number(work_small(tmp_path, SYMBOLS + lines, "{h: 20 in}"), "F") == pytest.approx(12)
    assert "2(6)" in printed(tmp_path).replace(" ", "")


@pytest.mark.parametrize(("h", "value", "words"), [("8 in", 6, "no row"), ("70 in", None, "no row")])
def test_beyond_the_rows_there_is_no_number(tmp_path: Path, h: str, value: float | None, words: str) -> None:
    (tmp_path / "knots.csv").write_text(KNOTS)
    lines = TABLE + "  - {gives: F, formula: 'pick(y over knot where x >= h)', cite: statics}\n" + CHECK
    found = work_small(tmp_path, SYMBOLS + lines, f"{{h: {h}}}")
    if value is not None:
        assert number(found, "F") == pytest.approx(value)
    else:
        assert found.stop is not None and words in found.stop.words


def test_look_up_by_two_keys(tmp_path: Path) -> None:
    (tmp_path / "soils.csv").write_text("kind,x (in),y (kip)\nsoft,10,1\nsoft,20,2\nstiff,10,5\nstiff,20,9\n")
    lines = (
        "  - {rows: soil, file: soils.csv, columns: {kind: , x: , y: }, cite: statics}\n"
        "  - {gives: F, formula: 'pick(y over soil where kind is stiff and x = h)', cite: statics}\n"
        "  - {gives: G, formula: 'F + 3*pick(y over soil where x = h and kind is soft)', cite: statics}\n"
    )
    found = work_small(tmp_path, SYMBOLS + lines + CHECK, "{h: 20 in}")
    assert (number(found, "F"), number(found, "G")) == pytest.approx((9, 15))  # 9; 9 + 3(2)
    text = printed(tmp_path)
    assert "force there, soil 4" in text
    assert "9 + 3 (2)" in text
    agreed(tmp_path)


FIGURE = SPACED + "  - {each: point, show: %s, lines: [{gives: B, formula: 'z*h', cite: geometry}]}\n" + CHECK


def test_show_figure_keeps_numbers_off_the_sheets_and_in_the_values_file(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    found = work_small(tmp_path, SYMBOLS + FIGURE % "figure", "{h: 20 in}")
    assert column(found, "B") == pytest.approx([40, 160, 280, 400])  # 20 times 2, 8, 14, 20
    text = printed(tmp_path)
    assert "area at a point" not in text and "160" not in text
    capsys.readouterr()
    assert main(["values", str(tmp_path), "--json"]) == 0
    lines = json.loads(capsys.readouterr().out)["calculations"]["T1"]["lines"]
    assert [line["value"] for line in lines if line["gives"] == "B"] == pytest.approx([40, 160, 280, 400])
    agreed(tmp_path)


def test_what_stands_on_no_sheet_asks_no_digits_of_what_does(tmp_path: Path) -> None:
    # pi times h: to confirm its areas to four digits the depth would need more than its own
    lines = FIGURE.replace("'z*h'", "'z*h*3.14159265'") % "figure"
    work_small(tmp_path, SYMBOLS + lines, "{h: 20 in}")
    assert "h = 20 in." in printed(tmp_path)


def test_show_every_tells_all_rows_in_full(tmp_path: Path) -> None:
    found = work_small(tmp_path, SYMBOLS + FIGURE % "every", "{h: 20 in}")
    # 1 the given value, 2 the points, then a line a row
    slot = found.plan.by_path["B"]
    assert [write_script(found).line_of[slot, (row,)] for row in range(4)] == [3, 4, 5, 6]
    text = printed(tmp_path)
    for row, substituted in enumerate(("2 (20)", "8 (20)", "14 (20)", "20 (20)"), 1):
        assert f"point {row}" in text and substituted in text


def test_show_first_tells_one_row_in_full_and_names_those_by_other_branches(tmp_path: Path) -> None:
    lines = (
        "  - each: point\n    table: [z, B]\n    show: first\n    lines:\n"
        "      - branches:\n"
        "          - {when: 'z < 10 in', lines: [{gives: B, formula: 'z*h', cite: geometry}]}\n"
        "          - {otherwise: [{gives: B, formula: 'z*h/2', cite: geometry}]}\n"
    )
    work_small(tmp_path, SYMBOLS + SPACED + lines + CHECK, "{h: 20 in}")
    text = printed(tmp_path)
    # 20 times 2 and 8, half of 20 times 14 and 20: only the first is set out
    assert "2 (20)" in text and "8 (20)" not in text and "14 (20)" not in text
    assert "1 2 40 2 8 160 3 14 140 4 20 200" in text
    assert "By other branches than 1 above: 3, 4." in text and "governs" not in text
    agreed(tmp_path)


def test_parts_that_come_to_the_same_words_are_told_once(tmp_path: Path) -> None:
    parts = "parts:\n  dry: {lines: [{note: Kept dry.}]}\n  wet: {lines: [{note: Kept wet.}]}\n  deep: {lines: [{note: 'Depth {h}.'}]}\n"
    lines = "  - {part: dry}\n  - {part: deep}\n  - {part: wet}\n  - {part: dry}\n  - {part: deep}\n"
    template = SYMBOLS.replace("lines:\n", parts + "lines:\n") + SPACED + lines + CHECK
    work_small(tmp_path, template, "{h: 20 in}")
    text = printed(tmp_path)
    # words with a value in them may say another value the next time
    assert [text.count(words) for words in ("Kept dry.", "Kept wet.", "Depth 20 in.")] == [1, 1, 2]


def test_a_dash_stands_for_what_another_arm_gives(tmp_path: Path) -> None:
    lines = (
        "  - each: point\n    table: [z, F, G]\n    lines:\n"
        "      - branches:\n"
        "          - {when: 'z < 10 in', lines: [{gives: F, formula: 'z*1 kip/(1 in)', cite: statics}]}\n"
        "          - {otherwise: [{gives: G, formula: 'z*2 kip/(1 in)', cite: statics}]}\n"
        "      - {check: point, holds: 'z <= h', cite: geometry}\n"
    )
    work_small(tmp_path, SYMBOLS + SPACED + lines, "{h: 20 in}")
    text = printed(tmp_path)
    # points 2, 8, 14, 20 of 20: shares 0.1, 0.4, 0.7, 1; G is 28 and 40
    assert "1 2 2 – 0.100 2 8 8 – 0.400 3 14 – 28 0.700 4 20 – 40 1.000" in text


def test_a_cell_of_a_table_is_no_formula(tmp_path: Path) -> None:
    (tmp_path / "knots.csv").write_text("name,x (in),y (kip)\nlow,0,2*h\n")
    _, problems = work_or_problems(tmp_path, SYMBOLS + TABLE + CHECK, "{h: 20 in}")
    assert [(p.slug, p.span.place.rsplit("/", 1)[-1] if p.span else "") for p in problems] == [
        ("bad-cell", "knots.csv:2:7")
    ]
