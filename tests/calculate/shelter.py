"""A post with load combinations and a template that takes them as rows, written into a folder and worked."""

from __future__ import annotations

from pathlib import Path

from calcreport.calculate.model import Worked
from calcreport.commands.desk import Opened, open_project
from calcreport.driver import work
from tests.small import HEAD, TEMPLATE_HEAD

LC = """\
  - mark: LC1
    title: combinations
    template: asce7/strength-combinations
    given:
      section: [{name: head}, {name: foot}]
      load: [{name: D}, {name: S}, {name: W+}]
      P: {head: {D: 9 kip}, foot: {D: 10 kip, S: 5 kip, W+: -2 kip}}
      V: none
      M: {head: {D: 1 kip*ft}, foot: {D: 2 kip*ft, S: 1 kip*ft, W+: 6 kip*ft}}
      k_L: 1
"""
PD = """\
  - mark: PD1
    title: pedestal
    template: ped
    given:
      p: LIMIT
      combination: {from: LC1.combination, at: {section: foot}, columns: {P_u: P_u, M_u: M_u}}
"""
SYMBOLS = """\
symbols:
  P_u: {unit: kip, says: factored axial force}
  M_u: {unit: kip*ft, says: factored moment}
  p: {unit: kip, says: limit}
  r: {unit: in, says: eccentricity}
"""
PED = """\
given: {p: , combination: {rows: {P_u: , M_u: }, says: factored forces}}
lines:
  - each: combination
    table: [P_u, M_u, r]
    lines:
      - {gives: r, formula: 'M_u/P_u', cite: statics}
      - {check: axial force, holds: 'P_u <= p', cite: statics}
"""
SINGLE = "given: {P_u: }\nlines: [{check: compression, holds: 'P_u >= 0', cite: statics}]\n"


def write(folder: Path, calculations: str, limit: str = "17 kip") -> dict[str, Worked]:
    """Write and work a project; a problem fails the test."""
    (folder / "ped.yaml").write_text(TEMPLATE_HEAD + SYMBOLS + PED, encoding="utf-8")
    (folder / "single.yaml").write_text(TEMPLATE_HEAD + SYMBOLS + SINGLE, encoding="utf-8")
    (folder / "project.yaml").write_text(HEAD + calculations.replace("LIMIT", limit), encoding="utf-8")
    opened = open_project(str(folder))
    assert isinstance(opened, Opened)
    result = work(opened.world, opened.source)
    assert not result.problems, result.problems
    assert result.worked is not None
    return {one.calculation.mark: one for one in result.worked.calculations}
