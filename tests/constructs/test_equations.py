"""An equation between two symbols, each worked on a line of its own: both keep their substitution and one form."""

from __future__ import annotations

import re
from pathlib import Path

from tests.constructs.finished import finish

TEMPLATE = """\
symbols:
  k: {unit: ksi, says: stress}
  b: {unit: in, says: width}
  P: {unit: kip, says: load}
  c: {unit: in, says: depth}
  C: {unit: kip, says: force above}
  T: {unit: kip, says: force below}
given: {k: , b: , P: }
lines:
  - unknown: c
    between: ['0.01*b', '10*b']
    satisfies: 'C = T'
    lines:
      - {gives: C, formula: 'k*b*c', cite: statics}
      - {gives: T, formula: 'P - k*b^2', cite: statics}
"""
# T = 500 - 3(49) = 353; c = 353/21 = 16.81; C = 3(7)(16.81) = 353
WANTED = ("force above C = k b c = 3 (7)(16.81) = 353 kip", "force below T = P − k b 2 = 500 − 3 (7 2 ) = 353 kip",
          "left side there C = 353 kip", "right side there T = 353 kip")  # fmt: skip


def test_both_sides_show_their_numbers(tmp_path: Path) -> None:
    sheet = finish(tmp_path, TEMPLATE, "{k: 3 ksi, b: 7 in, P: 500 kip}")
    text = " ".join(sheet.lines[number] for number in sorted(sheet.lines))
    for words in WANTED:
        assert words in text, text


GREATER = """\
symbols:
  a: {unit: kip, says: one force}
  b: {unit: kip, says: another force}
  l: {unit: ft, says: length}
  w: {unit: kip/ft, says: load}
  P: {unit: kip, says: point load}
  V: {unit: kip, says: the greater}
given: {w: , l: , P: }
lines:
  - {gives: a, formula: 'w*l/2 + P/2', cite: statics}
  - {gives: b, formula: '(w*l + P)*l/(2*l)', cite: statics}
  - {gives: V, formula: 'max(a, b)', cite: statics}
"""


def test_the_greater_of_two_is_the_greater_in_print(tmp_path: Path) -> None:
    # both are (1.365(24) + 27.952)/2 = 30.356; however many digits stand, max of the printed ones is the printed one
    sheet = finish(tmp_path, GREATER, "{w: 1.365 kip/ft, l: 24 ft, P: 27.952 kip}")
    text = " ".join(sheet.lines[number] for number in sorted(sheet.lines))
    one, other, greater = (float(re.search(rf"{name}.*?= ([\d.]+) kip statics", text)[1])  # type: ignore[index]
                           for name in ("one force", "another force", "the greater"))  # fmt: skip
    assert max(one, other) == greater
    assert abs(greater - 30.356) <= 0.05
