"""Margins against hand sums: the value at which a limit is exactly met."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.calculate import margins
from calcreport.calculate.margins import find_margins, is_searched, least_margins
from calcreport.calculate.model import WorkedProject
from calcreport.commands.desk import Opened, open_project
from calcreport.driver import work
from tests.small import work_small, write_small

TEXT = """\
symbols:
  a: {unit: in, says: a length}
  b: {unit: in, says: a length}
  c: {unit: in^2, says: an area}
given: {a: , b: {range: '> 0'}}
lines:
  - {gives: c, formula: 'a*b', cite: geometry}
  - {check: area, holds: 'c <= 24 in^2', cite: geometry}
  - {check: never, holds: 'a <= 100*a + b', cite: geometry}
"""


def test_margins_stop_where_the_limit_is_met(tmp_path: Path) -> None:
    worked = work_small(tmp_path, TEXT, "{a: 4 in, b: 4 in}")
    inch = 0.0254
    found = {(m.check, worked.plan.slots[m.slot].path): m for m in find_margins(worked)}
    area = found["area", "a"]
    # 24/4 = 6 in: half as much again; smaller values never flip it
    assert area.upper == pytest.approx(6 * inch, rel=1e-7) and area.lower is None
    assert area.share == pytest.approx(0.5, rel=1e-6)
    assert found["never", "a"].share == float("inf")


def test_margin_of_a_failing_check_shows_what_would_mend_it(tmp_path: Path) -> None:
    worked = work_small(tmp_path, TEXT, "{a: 8 in, b: 4 in}")
    found = {(m.check, worked.plan.slots[m.slot].path): m for m in find_margins(worked)}
    # 24/8 = 3 in, a quarter less
    assert found["area", "b"].lower == pytest.approx(3 * 0.0254, rel=1e-7)
    assert found["area", "b"].share == pytest.approx(0.25, rel=1e-6)


STOPPING = """\
symbols:
  b: {unit: in, says: a length}
  k: {unit: '1', says: a factor}
given: {b: , k: }
lines:
  - {require: 'b >= 3.8 in', says: too thin, cite: geometry}
  - {check: width, holds: 'k*b <= 5 in', cite: geometry}
  - {check: never, holds: 'b <= 100*b', cite: geometry}
"""


def worked_project(folder: Path, text: str, given: str) -> WorkedProject:
    opened = open_project(str(write_small(folder, text, given)))
    assert isinstance(opened, Opened)
    project = work(opened.world, opened.source).worked
    assert project is not None
    return project


def test_least_margins_are_where_a_verdict_changes_and_not_where_a_calculation_stops(tmp_path: Path) -> None:
    project = worked_project(tmp_path, STOPPING, "{b: 4 in, k: 1}")
    (worked,) = project.calculations
    found = {(m.check, worked.plan.slots[m.slot].path): m for m in find_margins(worked)}
    # 3.8 in, a twentieth less, stops the calculation; 5 in, a quarter more, is the width's limit
    assert found["width", "b"].share == pytest.approx(0.05, rel=1e-6)
    ((mark, least),) = least_margins(project, lambda done, total: None)
    assert (mark, least.check, least.lower) == ("T1", "width", None)
    assert least.share == pytest.approx(0.25, rel=1e-6)
    assert least.nearest is not None and least.nearest > least.value


ROWS = """\
symbols:
  a: {unit: in, says: a length}
  b: {unit: in, says: a width}
  c: {unit: in^2, says: an area}
given: {b: , bar: {rows: {a: }}}
lines:
  - {gives: c, formula: 'b*sum(a over bar)', cite: geometry}
  - {check: area, holds: 'c <= 24 in^2', cite: geometry}
"""


def test_a_value_in_rows_moves_too(tmp_path: Path) -> None:
    worked = work_small(tmp_path, ROWS, "{b: 2 in, bar: [{name: p, a: 4 in}, {name: q, a: 2 in}]}")
    found = {(worked.plan.slots[m.slot].path, m.key): m for m in find_margins(worked)}
    # 2(a + 2) = 24 at a = 10 in, two and a half times 4; 2(4 + a) = 24 at 8 in, four times 2: the end of the search
    assert found["a", (0,)].upper == pytest.approx(10 * 0.0254, rel=1e-7)
    assert found["b", ()].upper == pytest.approx(4 * 0.0254, rel=1e-7)


def test_a_value_of_one_of_like_members_moves_its_own_checks(tmp_path: Path) -> None:
    members = "{mark: S1, bar: [{a: 4 in}, {a: 2 in}]}, {mark: S2, bar: [{a: 10 in}]}"
    worked = work_small(tmp_path, ROWS, f"{{b: 2 in}}, members: [{members}]")
    found = {(m.check, worked.plan.slots[m.slot].path, m.key): m for m in find_margins(worked)}
    assert {key[0] for key in found} == {"S1 area", "S2 area"}
    assert found["S1 area", "a", (0, 0)].upper == pytest.approx(10 * 0.0254, rel=1e-7)
    # 2(12) = 24; 6b = 24 and 10b = 24 for the width they have in common
    assert found["S2 area", "a", (1, 0)].upper == pytest.approx(12 * 0.0254, rel=1e-7)
    assert found["S1 area", "b", ()].upper == pytest.approx(4 * 0.0254, rel=1e-7)
    assert found["S2 area", "b", ()].upper == pytest.approx(2.4 * 0.0254, rel=1e-7)
    assert ("S1 area", "a", (1, 0)) not in found


def test_values_in_rows_are_moved_only_where_asked_for(tmp_path: Path) -> None:
    project = worked_project(tmp_path, ROWS, "{b: 4 in, bar: [{a: 1 in}, {a: 2 in}]}")
    (worked,) = project.calculations
    assert any(margin.key for margin in find_margins(worked))
    assert not any(margin.key for margin in find_margins(worked, rows=False))


def test_a_calculation_of_too_many_values_is_left_out_and_like_members_are(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    project = worked_project(tmp_path, STOPPING, "{b: 4 in, k: 1}")
    (worked,) = project.calculations
    assert is_searched(worked)
    # two numbers may move, each on two ways of 24 steps, and the calculation works so many values
    monkeypatch.setattr(margins, "MOST_TRIED", 2 * 2 * 24 * len(worked.values.worked) - 1)
    assert not is_searched(worked) and least_margins(project, lambda done, total: None) == ()
