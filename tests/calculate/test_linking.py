"""Rows and values taken from another calculation: names, order of work, trace, second path; sums by hand."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.calculate.model import Worked
from calcreport.commands.desk import Opened, open_project
from calcreport.driver import work
from calcreport.publish import report
from calcreport.report.traced import trace_lines
from calcreport.second.agreement import compare_paths
from tests.calculate.shelter import LC, PD, write
from tests.printed import printed


def values(one: Worked, path: str) -> dict[tuple[str, ...], float]:
    """Return a value of every row by its row names, in the declared unit."""
    slot = one.plan.slots[one.plan.by_path[path]]
    assert slot.symbol.unit is not None
    names = [one.values.names[index][()] for index in slot.sets]
    return {
        tuple(known[row] for known, row in zip(names, key, strict=True)): value / slot.symbol.unit.size
        for key, value in one.values.rows[slot.index].items()
        if isinstance(value, float)
    }


def test_rows_of_another_calculation(tmp_path: Path) -> None:
    # the pedestal stands first in the file: the order of work follows the links
    worked = write(tmp_path, PD + LC)
    # D 10 and 2, S 5 and 1, W+ -2 and 6 (kip, kip ft), ASCE/SEI 7-22 2.3.1: 1.4 D; 1.2 D; 1.2 D + 0.3 S; 1.2 D + S;
    # 1.2 D + S + 0.5 W; 1.2 D + W; 1.2 D + 0.3 S + W; 0.9 D + W, worked on paper
    assert values(worked["PD1"], "P_u") == pytest.approx({
        ("1",): 14, ("2",): 12, ("2 S",): 13.5, ("3 S",): 17, ("3 S W+",): 16, ("4 W+",): 10, ("4 W+ S",): 11.5,
        ("5 W+",): 7,
    }, rel=1e-12)  # fmt: skip
    assert values(worked["PD1"], "M_u") == pytest.approx({
        ("1",): 2.8, ("2",): 2.4, ("2 S",): 2.7, ("3 S",): 3.4, ("3 S W+",): 6.4, ("4 W+",): 8.4, ("4 W+ S",): 8.7,
        ("5 W+",): 7.8,
    }, rel=1e-12)  # fmt: skip


def test_ties_stay_exact_through_a_link(tmp_path: Path) -> None:
    # P_u of 3 S is 17 kip exactly; the template's check is P_u <= p, and 17 is no number that floats make of 1.2(10) + 5
    worked = write(tmp_path, PD + LC)
    assert {check.verdict for check in worked["PD1"].checks if check.line.name == "axial force"} == {"OK"}
    worst = max(check.ratio or 0 for check in worked["PD1"].checks if check.line.name == "axial force")
    assert worst == pytest.approx(1)


def test_one_value_of_a_row_by_its_name(tmp_path: Path) -> None:
    one = "  - {mark: X1, title: x, template: single, given: {P_u: {from: LC1.P_max, at: {section: foot}}}}\n"
    two = (
        "  - {mark: X2, title: x, template: single,"
        " given: {P_u: {from: LC1.P_u, at: {combination: 4 W+, section: foot}}}}\n"
    )
    worked = write(tmp_path, one + two + LC)
    slot = worked["X1"].plan.by_path["P_u"]
    unit = worked["X1"].plan.slots[slot].symbol.unit
    assert unit is not None
    # the greatest of the list above; 1.2(10) - 2
    assert worked["X1"].values.number(slot) / unit.size == pytest.approx(17, rel=1e-12)
    assert worked["X2"].values.number(slot) / unit.size == pytest.approx(10, rel=1e-12)


def test_trace_goes_through_to_the_loads(tmp_path: Path) -> None:
    write(tmp_path, PD + LC)
    opened = open_project(str(tmp_path))
    assert isinstance(opened, Opened)
    composed = report(opened.world, opened.source).composed
    assert composed is not None
    slot = composed.scripts["PD1"].worked.plan.by_path["r"]
    key = next(iter(composed.scripts["PD1"].worked.values.rows[slot]))
    lines = trace_lines("PD1", slot, key, composed.scripts, composed.forms)
    text = "\n".join(lines)
    assert "P_u = 14 kip  [line LC1.section[foot].combination[1].P_u]" in text
    assert "P_u = 14 kip  = sum(k*P over load)" in text
    assert "P = 10 kip  [project file]" in text


def test_second_path_makes_the_rows_again(tmp_path: Path) -> None:
    write(tmp_path, PD + LC)
    opened = open_project(str(tmp_path))
    assert isinstance(opened, Opened)
    worked = report(opened.world, opened.source).worked
    assert worked is not None
    found = compare_paths(worked)
    assert found.differences == () and found.largest < 1e-12
    # 8 rows of P_u, M_u, r and the 8 checks of each of two kinds at least
    assert found.verdicts == 8


def test_fingerprint_follows_the_linked_rows(tmp_path: Path) -> None:
    before = write(tmp_path, PD + LC)["PD1"].fingerprint
    assert write(tmp_path, PD + LC.replace("D: 10 kip", "D: 11 kip"), limit="20 kip")["PD1"].fingerprint != before
    assert write(tmp_path, PD + LC)["PD1"].fingerprint == before


def test_the_sheet_names_the_lines_the_rows_came_from(tmp_path: Path) -> None:
    write(tmp_path, PD + LC)
    text = printed(tmp_path)
    # LC1 has given lines 1 to 4 and the combinations as 5; the forces are lines 6 and 7, told once a section
    assert "LC1 combination, foot" in text
    assert "factored forces" in text


def test_a_stopped_calculation_has_no_rows_to_give(tmp_path: Path) -> None:
    write(tmp_path, PD + LC)
    file = tmp_path / "project.yaml"
    # a factor between those the clause knows: the combinations stop before their rows are made
    file.write_text(file.read_text().replace("k_L: 1", "k_L: 0.7"))
    opened = open_project(str(tmp_path))
    assert isinstance(opened, Opened)
    told = work(opened.world, opened.source).problems
    assert [(p.slug, p.message) for p in told] == [("unknown-name", "LC1 made no rows of `combination`")]
