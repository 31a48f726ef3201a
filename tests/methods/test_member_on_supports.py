"""Members on supports against the equation of three moments in fractions, and against textbook coefficients."""

from __future__ import annotations

from fractions import Fraction as F
from typing import Any

import pytest

from calcreport.methods.members import member_on_supports
from calcreport.methods.results import Handed, NoResult


def quiet(work: int) -> None:
    """Take all work as free."""


def handed(lengths: list[Any], loads: list[Any], left: str = "supported", right: str = "supported") -> Handed:
    return {
        "spans": float(len(lengths)), "l": tuple(map(float, lengths)), "w": tuple(map(float, loads)), "EI": 5000.0,
        "left": left, "right": right, "parts": 4.0,
    }  # fmt: skip


def moments_at_nodes(lengths: list[F], loads: list[F], left: str, right: str) -> list[F]:
    """Return the moments at all nodes by the equation of three moments, solved in fractions.

    M_a l_a + 2 M_b (l_a + l_b) + M_c l_b = -(w_a l_a^3 + w_b l_b^3)/4 (Clapeyron); an end with an overhang has w l^2/2.
    """
    count = len(lengths)
    known: dict[int, F] = {0: F(0), count: F(0)}
    if left == "free":
        known[1] = -loads[0] * lengths[0] ** 2 / 2
    if right == "free":
        known[count - 1] = -loads[-1] * lengths[-1] ** 2 / 2
    unknown = [n for n in range(count + 1) if n not in known]
    rows = []
    for n in unknown:
        one, other = lengths[n - 1], lengths[n]
        parts = {n - 1: one, n: 2 * (one + other), n + 1: other}
        side = -(loads[n - 1] * one**3 + loads[n] * other**3) / 4
        side -= sum((factor * known[m] for m, factor in parts.items() if m in known), F(0))
        rows.append([parts.get(m, F(0)) for m in unknown] + [side])
    for place in range(len(rows)):
        rows[place] = [value / rows[place][place] for value in rows[place]]
        for other_row in range(len(rows)):
            if other_row != place:
                factor = rows[other_row][place]
                rows[other_row] = [a - factor * b for a, b in zip(rows[other_row], rows[place], strict=True)]
    return [known[n] if n in known else rows[unknown.index(n)][-1] for n in range(count + 1)]


CASES = [
    ([F(10), F(10)], [F(2), F(2)], "supported", "supported"),
    ([F(20), F(25), F(18)], [F(3), F(1, 2), F(4)], "supported", "supported"),
    ([F(6), F(24), F(30), F(5)], [F(2), F(5, 2), F(3), F(1)], "free", "free"),
    ([F(4), F(12)], [F(7), F(0)], "free", "supported"),
    ([F(7, 3), F(100), F(9), F(11, 7), F(30), F(30)], [F(1), F(-2), F(3), F(40), F(1, 9), F(6)], "supported", "free"),
    ([F(9)], [F(5)], "supported", "supported"),
]


@pytest.mark.parametrize(("lengths", "loads", "left", "right"), CASES)
def test_against_three_moments_in_fractions(lengths: list[F], loads: list[F], left: str, right: str) -> None:
    result = member_on_supports(handed(lengths, loads, left, right), quiet)
    nodes = moments_at_nodes(lengths, loads, left, right)
    stations = result.sets["stations"].columns
    starts = [sum(lengths[:n], F(0)) for n in range(len(lengths))]
    wanted = []
    shears = []
    for span, (length, w) in enumerate(zip(lengths, loads, strict=True)):
        shear = w * length / 2 + (nodes[span + 1] - nodes[span]) / length
        shears.append((shear, shear - w * length))
        for part in range(5):
            x = length * part / 4
            wanted.append((starts[span] + x, shear - w * x, nodes[span] + shear * x - w * x * x / 2))
    largest = max(float(abs(w * length**2)) for w, length in zip(loads, lengths, strict=True))
    for column, place in (("x", 0), ("V", 1), ("M", 2)):
        exact = [float(row[place]) for row in wanted]
        assert stations[column] == pytest.approx(exact, rel=1e-9, abs=1e-11 * largest), column
    reactions = [F(0)] * (len(lengths) + 1)
    for span, (at_left, at_right) in enumerate(shears):
        reactions[span] += at_left
        reactions[span + 1] -= at_right
    own = reactions[1 if left == "free" else 0 : -1 if right == "free" else None]
    assert result.sets["supports"].columns["R"] == pytest.approx([float(r) for r in own], rel=1e-9)
    assert all(abs(proof.residual) <= 1e-11 * proof.of for proof in result.proofs)


def test_three_equal_spans_as_in_every_handbook() -> None:
    # reactions 0.4, 1.1, 1.1, 0.4 w l; moments -0.1 w l^2 over the inner supports, 0.025 w l^2 mid-length (common practice)
    result = member_on_supports(handed([10, 10, 10], [2, 2, 2]), quiet)
    assert result.sets["supports"].columns["R"] == pytest.approx([8, 22, 22, 8])
    moments = dict(zip(result.sets["stations"].names, result.sets["stations"].columns["M"], strict=True))
    assert (moments["1.4"], moments["2.0"], moments["2.2"]) == pytest.approx((-20, -20, 5))


@pytest.mark.parametrize(
    ("given", "words"),
    [
        (handed([10], [1], "free"), "fewer than two supports"),
        (handed([10, 0], [1, 1]), "above zero"),
        (handed([], []), "between 1 and 50 spans"),
    ],
)
def test_no_member(given: Handed, words: str) -> None:
    with pytest.raises(NoResult, match=words):
        member_on_supports(given, quiet)
