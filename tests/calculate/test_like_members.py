"""Like members on one calculation: each comes to what it comes to alone, and keeps its mark everywhere."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.__main__ import main
from calcreport.calculate.model import Worked, WorkedProject
from calcreport.commands.desk import Opened, open_project
from calcreport.driver import work
from calcreport.publish import report
from calcreport.second.agreement import compare_paths
from tests.small import HEAD, TEMPLATE_HEAD

# bars in a tie of area A = sum(a) under a force P: stress P/A <= 10 ksi; a tie may also carry a word
TEMPLATE = """\
symbols:
  P: {unit: kip, says: force}
  k: {unit: '1', says: factor}
  a: {unit: in^2, says: area of a bar}
  A: {unit: in^2, says: area of all bars}
  f: {unit: ksi, says: stress}
  end: {one of: [fixed, free], says: end}
given:
  P: {range: '> 0'}
  k:
  end:
  bar: {rows: {a: }, says: bars}
lines:
  - {gives: A, formula: 'sum(a over bar)', cite: geometry}
  - branches:
      - when: 'end is fixed'
        lines: [{gives: f, formula: 'k*P/A', cite: statics}]
      - otherwise: [{gives: f, formula: '2*k*P/A', cite: statics}]
  - {require: 'f < 40 ksi', says: beyond this range, cite: statics}
  - {check: stress, holds: 'f <= 10 ksi', cite: statics}
  - {use: 'stress {f} on {A}'}
"""
# by hand: T1 1(20)/(1 + 2) = 6.67; T2 1(20)/2 = 10; T3 2(1)(12)/2 = 12 ksi
OWN = """\
      - {mark: T1, P: 20 kip, end: fixed, bar: [{a: 1 in^2}, {a: 2 in^2}]}
      - {mark: T2, P: 20 kip, end: fixed, bar: [{a: 2 in^2}]}
      - {mark: T3, P: 12 kip, end: free, bar: [{a: 2 in^2}]}
"""
SHARED = "  - mark: TT\n    title: ties\n    template: small\n    given: {k: 1}\n    members:\n"


def write(folder: Path, members: str = OWN, more: str = "", status: str = "preliminary") -> Path:
    (folder / "small.yaml").write_text(TEMPLATE_HEAD + TEMPLATE, encoding="utf-8")
    text = HEAD.replace("status: preliminary", f"status: {status}") + SHARED + members + more
    (folder / "project.yaml").write_text(text, encoding="utf-8")
    return folder / "project.yaml"


def worked(path: Path) -> WorkedProject:
    opened = open_project(str(path))
    assert isinstance(opened, Opened), opened
    result = work(opened.world, opened.source)
    assert not result.problems, result.problems
    assert result.worked is not None
    return result.worked


def ratios(one: Worked) -> list[tuple[str, str, float]]:
    found = []
    for member in one.members:
        (check,) = member.checks
        assert check.ratio is not None
        found.append((member.mark, member.verdict, check.ratio))
    return found


def test_each_comes_to_what_it_comes_to_by_hand(tmp_path: Path) -> None:
    (one,) = worked(write(tmp_path)).calculations
    assert ratios(one) == [
        ("T1", "OK", pytest.approx(20 / 3 / 10)),
        ("T2", "OK", pytest.approx(1.0)),
        ("T3", "NG", pytest.approx(1.2)),
    ]


def test_the_second_path_agrees(tmp_path: Path) -> None:
    agreement = compare_paths(worked(write(tmp_path)))
    assert not agreement.differences
    # k, three P, four a, three A, three f
    assert (agreement.values, agreement.verdicts) == (14, 3)


def test_a_link_names_a_member_as_if_it_stood_alone(tmp_path: Path) -> None:
    more = """\
  - mark: U1
    title: user
    template: small
    given: {k: {from: T3.k}, P: {from: T2.P}, end: fixed, bar: [{a: 4 in^2}]}
"""
    _, user = worked(write(tmp_path, more=more)).calculations
    assert [check.ratio for check in user.checks] == [pytest.approx(20 / 4 / 10)]


def test_a_disposition_names_a_member_and_a_final_status_wants_one_for_each_that_is_ng(tmp_path: Path) -> None:
    def slugs(more: str, members: str = OWN) -> list[str]:
        opened = open_project(str(write(tmp_path, members, more, "for permit")))
        assert isinstance(opened, Opened)
        return [problem.slug for problem in report(opened.world, opened.source).problems]

    word = "dispositions: [{check: T3.stress, says: by judgement}]\n"
    assert slugs("") == ["not-ready"]
    assert slugs(word) == []
    assert slugs(word, OWN.replace("T2, P: 20", "T2, P: 21")) == ["not-ready"]
    assert slugs("dispositions: [{check: TT.stress, says: all of them}]\n") == ["unknown-name"]


def test_a_member_outside_the_range_stops_there_and_leaves_the_rest_not_evaluated(tmp_path: Path) -> None:
    (one,) = worked(write(tmp_path, OWN.replace("T2, P: 20", "T2, P: 90"))).calculations
    assert [(member.mark, member.verdict) for member in one.members] == [
        ("T1", "OK"), ("T2", "not evaluated"), ("T3", "not evaluated"),
    ]  # fmt: skip
    assert one.stop is not None and one.stop.told == "member T2: requirement not met: beyond this range"


def test_the_range_of_a_given_value_holds_for_every_member(tmp_path: Path) -> None:
    opened = open_project(str(write(tmp_path, OWN.replace("T2, P: 20", "T2, P: -20"))))
    assert isinstance(opened, Opened)
    assert [problem.slug for problem in work(opened.world, opened.source).problems] == ["out-of-range"]


def test_a_mark_stands_once_in_the_whole_project(tmp_path: Path) -> None:
    opened = open_project(str(write(tmp_path, OWN.replace("T3", "TT"))))
    assert isinstance(opened, Opened)
    assert [problem.slug for problem in work(opened.world, opened.source).problems] == ["given-twice"]


def test_trace_and_values_and_schedule_know_members(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = str(write(tmp_path))
    assert main(["trace", path, "T1.f"]) == 0
    lines = capsys.readouterr().out.splitlines()
    # 20/3 = 6.667 from the force of T1 and the area 1 + 2 = 3
    assert lines[0].endswith("f = 6.667 ksi  = k*P/A")
    assert any("P = 20 kip" in line for line in lines) and any("A = 3 in^2" in line for line in lines)
    assert main(["build", path, "-o", str(tmp_path / "out.pdf")]) == 1
    assert "T3          1.200  NG  ties: stress" in capsys.readouterr().out


def test_rows_of_a_table_come_together(tmp_path: Path) -> None:
    (tmp_path / "small.yaml").write_text(TEMPLATE_HEAD + TEMPLATE, encoding="utf-8")
    (tmp_path / "ties.csv").write_text("Mark,Force (kip),Bar,Second\nT1,20,1 in^2,2 in^2\nT2,20,2 in^2,\n")
    schedule = """\
schedules:
  - file: ties.csv
    template: small
    together: TT
    mark: Mark
    title: ties
    columns: {P: Force}
    given: {k: 1, end: fixed, bar: [{a: {column: Bar}}, {a: {column: Second, if empty: no row}}]}
"""
    (tmp_path / "project.yaml").write_text(HEAD.replace("calculations:\n", "") + schedule)
    (one,) = worked(tmp_path / "project.yaml").calculations
    assert ratios(one) == [("T1", "OK", pytest.approx(20 / 3 / 10)), ("T2", "OK", pytest.approx(1.0))]
    rows = one.calculation.given[-1]
    assert (rows.origin.kind, rows.origin.words) == ("schedule", "rows 2 to 3")


def test_members_with_materials_of_their_own(tmp_path: Path) -> None:
    template = TEMPLATE.replace("  k:\n", "  k: {material: grade}\n")
    (tmp_path / "small.yaml").write_text(TEMPLATE_HEAD + template, encoding="utf-8")
    members = """\
      - {mark: T1, grade: A1}
      - {mark: T2, grade: A2}
"""
    text = HEAD.replace("calculations:", "materials: {A1: {k: 1}, A2: {k: 3}}\ncalculations:") + SHARED + members
    common = "given: {P: 10 kip, end: fixed, bar: [{a: 2 in^2}]}"
    (tmp_path / "project.yaml").write_text(text.replace("given: {k: 1}", common))
    (one,) = worked(tmp_path / "project.yaml").calculations
    assert ratios(one) == [("T1", "OK", pytest.approx(0.5)), ("T2", "NG", pytest.approx(1.5))]
