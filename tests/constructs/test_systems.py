"""What differs between the systems of units: one constant of two, and nothing of the other.

Expected text is written by hand, with the sums beside it.
"""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.constructs.finished import finish

TEMPLATE = """\
symbols:
  f: {unit: {us: psi, si: MPa}, says: strength of concrete, shows: "f_c'"}
  v: {unit: {us: psi, si: MPa}, says: stress the concrete carries}
given: {f: }
lines:
  - gives: v
    formula: {us: 'qty(by_units(2, 0.17)*sqrt(num(f, psi)), psi)', si: 'qty(by_units(2, 0.17)*sqrt(num(f, MPa)), MPa)'}
    cite: '5.1'
"""


@pytest.mark.parametrize(
    ("system", "given", "first", "second"),
    [
        # 2(63.2456) = 126.49
        ("us", "4000 psi", "f ′ c = 4,000 psi strength of concrete project file",
         "stress the concrete carries v = 2 √f ′ c = 2 √4,000 = 126.5 psi 5.1 1"),
        # 0.17(5) = 0.85
        ("si", "25 MPa", "f ′ c = 25 MPa strength of concrete project file",
         "stress the concrete carries v = 0.17 √f ′ c = 0.17 √25 = 0.85 MPa 5.1 1"),
    ],
)  # fmt: skip
def test_the_constant_of_the_system_alone_is_printed(
    tmp_path: Path, system: str, given: str, first: str, second: str
) -> None:
    sheet = finish(tmp_path, TEMPLATE, f"{{f: {given}}}", system)
    assert sheet.lines == {0: "", 1: first, 2: second}
