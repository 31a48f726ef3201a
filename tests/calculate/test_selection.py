"""Candidates: the first that serves, what a pin keeps, and what is told when it no longer serves."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.calculate.model import Worked, WorkedProject
from calcreport.commands.desk import Opened, open_project
from calcreport.driver import work
from calcreport.publish import report
from calcreport.second.agreement import compare_paths
from tests.small import work_or_problems, work_small, write_small

# a plate of width b and thickness t under a force P: P/(b t) <= 10 ksi, and no thinner than 0.2 in
TEMPLATE = """\
symbols:
  P: {unit: kip, says: force}
  b: {unit: in, says: width}
  t: {unit: in, says: thickness}
  f: {unit: ksi, says: stress}
given: {P: , b: , t: }
lines:
  - {require: 't >= 0.2 in', says: thinner than this is not covered, cite: geometry}
  - {gives: f, formula: 'P/(b*t)', cite: statics}
  - {check: stress, holds: 'f <= 10 ksi', cite: statics}
"""
# hand sums, P = 20 kip, b = 4 in: t = 0.1 stops; 0.25 gives 20 ksi, 2.0; 0.4 gives 12.5, 1.25; 0.5 gives 10, 1.0; 1 gives 5
CANDIDATES = "[{t: 0.1 in}, {t: 0.25 in}, {t: 0.4 in}, {t: 0.5 in}, {t: 1 in}]"


def worked(folder: Path, force: str = "20 kip", candidates: str = CANDIDATES, pinned: str = "") -> Worked:
    pin = f", pinned: {{t: {pinned}}}" if pinned else ""
    return work_small(folder, TEMPLATE, f"{{P: {force}, b: 4 in}}, choose: {candidates}{pin}")


def found(one: Worked) -> tuple[int, int, list[tuple[int, str]]]:
    selection = one.selection
    assert selection is not None
    return selection.used, selection.first, [(tried.place, tried.worked.verdict) for tried in selection.tried]


def test_the_first_that_meets_every_check_is_used_and_those_after_it_are_not_worked(tmp_path: Path) -> None:
    one = worked(tmp_path)
    assert found(one) == (3, 3, [(0, "not evaluated"), (1, "NG"), (2, "NG"), (3, "OK")])
    assert [check.ratio for check in one.checks] == [pytest.approx(1.0, rel=1e-15)]


def test_the_order_is_the_engineers_not_that_of_size(tmp_path: Path) -> None:
    assert found(worked(tmp_path, candidates="[{t: 1 in}, {t: 0.5 in}]"))[:2] == (0, 0)


def test_where_none_serves_the_nearest_is_shown_and_is_ng(tmp_path: Path) -> None:
    one = worked(tmp_path, "44 kip")  # 1 in: 44/4 = 11 ksi
    assert found(one)[:2] == (4, -1)
    assert one.verdict == "NG"
    assert [check.ratio for check in one.checks] == [pytest.approx(1.1)]


def test_a_pinned_candidate_stays_though_an_earlier_one_would_do(tmp_path: Path) -> None:
    one = worked(tmp_path, "10 kip", pinned="0.50 in")  # 0.25 in would do: 10 ksi
    assert found(one) == (3, 1, [(0, "not evaluated"), (1, "OK"), (3, "OK")])
    assert one.selection is not None and one.selection.has_moved


def test_a_pinned_candidate_stays_though_it_no_longer_serves(tmp_path: Path) -> None:
    one = worked(tmp_path, "40 kip", pinned="0.5 in")  # 20 ksi; 1 in gives 10
    assert found(one)[:2] == (3, 4)
    assert one.verdict == "NG"


def test_joint_candidates_are_taken_whole(tmp_path: Path) -> None:
    given = "{P: 20 kip}, choose: [{b: 4 in, t: 0.25 in}, {t: 0.25 in, b: 8 in}]"
    one = work_small(tmp_path, TEMPLATE, given)
    assert found(one)[:2] == (1, 1)


def test_the_second_path_works_every_candidate_that_was_worked(tmp_path: Path) -> None:
    opened = open_project(str(write_small(tmp_path, TEMPLATE, f"{{P: 20 kip, b: 4 in}}, choose: {CANDIDATES}")))
    assert isinstance(opened, Opened)
    project = work(opened.world, opened.source).worked
    assert isinstance(project, WorkedProject)
    agreement = compare_paths(project)
    assert not agreement.differences
    # P, b and t of four, and the stress of the three that do not stop
    assert (agreement.values, agreement.verdicts) == (15, 3)


# the weight of a plate a foot long, which is b t (12 in)(490 pcf): what is to be least among plates of one preference
WEIGHED = TEMPLATE.replace("symbols:\n", "least: W\nsymbols:\n  W: {unit: lb, says: weight}\n") + (
    "  - {gives: W, formula: 'b*t*12 in*qty(490, pcf)', cite: geometry}\n"
)


def weighed(folder: Path, candidates: str) -> Worked:
    return work_small(folder, WEIGHED, f"{{P: 20 kip}}, choose: {candidates}")


def test_of_one_preference_the_one_with_least_is_taken_and_the_next_preference_is_not_worked(tmp_path: Path) -> None:
    # areas 0.8 and 1.6 fail (25 and 12.5 ksi); 2.4 and 2.0 serve (8.3 and 10 ksi), 2.0 weighs less
    first = "[{b: 2 in, t: 0.4 in}, {b: 4 in, t: 0.4 in}, {b: 4 in, t: 0.6 in}, {b: 4 in, t: 0.5 in}]"
    one = weighed(tmp_path, f"[{first}, {{b: 20 in, t: 0.2 in}}]")
    assert found(one) == (3, 3, [(0, "NG"), (1, "NG"), (2, "OK"), (3, "OK")])
    assert one.selection is not None
    assert [one.preference for one in one.selection.candidates] == [0, 0, 0, 0, 1]


def test_a_preference_that_serves_goes_before_less_of_a_later_one(tmp_path: Path) -> None:
    # 4.0 in2 of the second preference serves; 2.0 in2 of the third would be less
    one = weighed(tmp_path, "[[{b: 1 in, t: 0.4 in}], [{b: 8 in, t: 0.5 in}], [{b: 4 in, t: 0.5 in}]]")
    assert found(one)[:2] == (1, 1)


def test_of_two_alike_the_engineers_order_decides(tmp_path: Path) -> None:
    # 5 by 0.4 and 4 by 0.5 are both 2.0 in2
    assert found(weighed(tmp_path, "[[{b: 5 in, t: 0.4 in}, {b: 4 in, t: 0.5 in}]]"))[:2] == (0, 0)
    assert found(weighed(tmp_path, "[[{b: 4 in, t: 0.5 in}, {b: 5 in, t: 0.4 in}]]"))[:2] == (0, 0)


ROWS = """\
symbols:
  A: {unit: in^2, says: area}
  P: {unit: kip, says: force}
given: {P: , plate: {rows: {A: }, least: 1, says: plates}}
lines:
  - {check: stress, holds: 'P/sum(A over plate) <= 10 ksi', cite: statics}
"""


def test_cells_are_chosen_by_row_and_the_other_rows_stay(tmp_path: Path) -> None:
    # 20 kip over 1 + 0.5 is 13.3 ksi; over 1 + 1 it is 10
    rows = "[{name: top, A: 1 in^2}, {name: web, A: 9 in^2}]"
    choose = "[{plate: {web: {A: 0.5 in^2}}}, {plate: {web: {A: 1 in^2}}}]"
    one = work_small(tmp_path, ROWS, f"{{P: 20 kip, plate: {rows}}}, choose: {choose}")
    assert found(one) == (1, 1, [(0, "NG"), (1, "OK")])
    assert [check.ratio for check in one.checks] == [pytest.approx(1.0)]
    assert one.selection is not None
    assert [one.named for one in one.selection.candidates] == [
        (("plate web A", "0.5 in^2"),),
        (("plate web A", "1 in^2"),),
    ]


def test_cells_are_pinned_as_they_are_chosen(tmp_path: Path) -> None:
    choose = "[{plate: {1: {A: 2 in^2}}}, {plate: {1: {A: 4 in^2}}}], pinned: {plate: {1: {A: 4.0 in^2}}}"
    one = work_small(tmp_path, ROWS, f"{{P: 20 kip, plate: [{{A: 9 in^2}}]}}, choose: {choose}")
    assert found(one)[:2] == (1, 0)


def test_a_final_status_wants_it_pinned(tmp_path: Path) -> None:
    def slugs(pin: str) -> list[str]:
        path = write_small(tmp_path, TEMPLATE, f"{{P: 20 kip, b: 4 in}}, choose: {CANDIDATES}{pin}")
        path.write_text(path.read_text().replace("status: preliminary", "status: for permit"))
        opened = open_project(str(path))
        assert isinstance(opened, Opened)
        return [problem.slug for problem in report(opened.world, opened.source).problems]

    assert slugs("") == ["not-ready"]
    assert slugs(", pinned: {t: 1/2 in}") == []


def test_a_candidate_may_be_linked_and_a_circle_through_it_is_found(tmp_path: Path) -> None:
    _, problems = work_or_problems(tmp_path, TEMPLATE, "{P: 20 kip, b: 4 in}, choose: [{t: {from: T1.t}}]")
    assert [problem.slug for problem in problems] == ["link-loop"]


def test_the_fingerprint_moves_with_the_candidates(tmp_path: Path) -> None:
    prints = {worked(tmp_path, candidates=text).fingerprint for text in ("[{t: 1 in}]", "[{t: 1 in}, {t: 2 in}]")}
    assert len(prints) == 2
