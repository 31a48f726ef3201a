"""The order and the numbers of what is told; every expected number is counted by hand on the template beside it."""

from __future__ import annotations

from pathlib import Path

from calcreport.report.items import SayStop
from calcreport.report.script import write_script
from tests.small import work_small

TEMPLATE = """\
symbols:
  a: {unit: in, says: a length}
  b: {unit: in, says: a length}
  c: {unit: in, says: a length}
given: {a: , b: }
lines:
  - {check: before, holds: 'a <= 9 in', cite: statics}
  - {require: 'a <= b', says: too long, cite: statics}
  - {check: first after, holds: 'a <= b', cite: statics}
  - {gives: c, formula: 'a + b', cite: geometry}
  - {check: second after, holds: 'c <= b', cite: statics}
"""


def test_checks_a_stop_left_have_numbers_of_their_own(tmp_path: Path) -> None:
    worked = work_small(tmp_path, TEMPLATE, "{a: 3 in, b: 2 in}")
    script = write_script(worked)
    # the given values are 1 and 2, the check before the stop is 3, what was not reached goes on from there
    assert {check.line.name: script.check_line[id(check)] for check in worked.checks} == {
        "before": 3, "first after": 4, "second after": 5,
    }  # fmt: skip
    last = script.items[-1]
    assert isinstance(last, SayStop)
    assert [(number, checks[0].line.name) for number, checks in last.left] == [(4, "first after"), (5, "second after")]
