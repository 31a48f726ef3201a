"""Members on supports against exact fractions (slope deflection of the test's own), handbooks, and every arrangement."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction as F
from itertools import product
from typing import Any

import mpmath
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcreport.methods.envelopes import member_on_supports
from calcreport.methods.results import Handed, NoResult, Result
from calcreport.second.closing import Found, NotClosed
from calcreport.second.continuous import member_on_supports as again
from tests.methods.exact_members import Exact, Span


def quiet(work: int) -> None:
    """Take all work as free."""


@dataclass
class Beam:
    """A member as a person would list it; loads by case."""

    lengths: list[F]
    hold: list[str]
    w: list[list[F]]
    stiffness: list[F] = field(default_factory=list)
    springs: list[F] = field(default_factory=list)
    placing: list[str] = field(default_factory=lambda: ["everywhere"])
    #: (span from 0, start, end, first and last by case)
    patches: list[tuple[int, F, F, list[F], list[F]]] = field(default_factory=list)
    #: (span from 0, place, force by case)
    points: list[tuple[int, F, list[F]]] = field(default_factory=list)
    factors: list[list[F]] = field(default_factory=lambda: [[F(1)]])
    face: list[F] = field(default_factory=list)
    cut: list[F] = field(default_factory=list)
    parts: int = 10

    def handed(self) -> Handed:
        count = len(self.lengths)
        found: dict[str, Any] = {
            "spans": tuple(f"s{n}" for n in range(count)), "l": self.lengths, "EI": self.stiffness or [F(1)] * count,
            "supports": tuple(f"n{n}" for n in range(count + 1)), "hold": tuple(self.hold),
            "k": self.springs or [F(0)] * (count + 1), "face": self.face or [F(0)] * (count + 1),
            "cut": self.cut or [F(0)] * count, "cases": tuple("DLSW"[: len(self.placing)]),
            "placing": tuple(self.placing), "w": self.w,
            "patches": tuple(f"q{n}" for n in range(len(self.patches))), "n_s": [F(one[0] + 1) for one in self.patches],
            "s_1": [one[1] for one in self.patches], "s_2": [one[2] for one in self.patches],
            "w_1": [one[3] for one in self.patches], "w_2": [one[4] for one in self.patches],
            "points": tuple(f"P{n}" for n in range(len(self.points))), "n_P": [F(one[0] + 1) for one in self.points],
            "s_P": [one[1] for one in self.points], "P": [one[2] for one in self.points],
            "combinations": tuple(f"c{n}" for n in range(len(self.factors))), "factor": self.factors,
            "parts": F(self.parts),
        }  # fmt: skip
        return {name: floats(one) for name, one in found.items()}

    def exact(self, case: int, on: tuple[int, ...]) -> Exact:
        """Return one case lying on some spans, solved in fractions."""
        spans = [Span(length, k) for length, k in zip(self.lengths, self.stiffness or [F(1)] * 99, strict=False)]
        for n, span in enumerate(spans):
            if n not in on:
                continue
            span.lines = [(F(0), span.length, self.w[n][case], self.w[n][case])]
            span.lines += [(a, b, p[case], q[case]) for own, a, b, p, q in self.patches if own == n]
            span.points = [(a, p[case]) for own, a, p in self.points if own == n]
        return Exact(spans, self.hold, self.springs or [F(0)] * (len(spans) + 1))


def floats(one: Any) -> Any:
    return (
        tuple(floats(each) for each in one)
        if isinstance(one, list | tuple)
        else float(one)
        if isinstance(one, F)
        else one
    )


def work(beam: Beam) -> Result:
    result = member_on_supports(beam.handed(), quiet)
    confirm(beam, result)
    return result


def confirm(beam: Beam, result: Result) -> None:
    """Hold the result by the second path, which works by forces in thirty digits."""
    mp = mpmath.mp.clone()
    mp.dps = 30

    def lists(one: Any) -> Any:
        return (
            [lists(each) for each in one] if isinstance(one, tuple) else mp.mpf(one) if isinstance(one, float) else one
        )

    again({k: lists(v) for k, v in beam.handed().items()}, Found(result.outputs, result.sets, result.by_row), mp)


def hold_exactly(beam: Beam, result: Result) -> None:
    """Hold every value by station and by support to 1e-9 of the largest of its kind."""
    rows, spans = result.by_row, tuple(range(len(beam.lengths)))
    arrangements = [tuple(s for s in spans if bits[s]) for bits in product((0, 1), repeat=len(spans))]
    solved = {
        (case, on): beam.exact(case, on)
        for case, word in enumerate(beam.placing)
        for on in (arrangements if word == "patterned" else [spans])
    }
    force = float(max(max(map(abs, one.reactions)) for one in solved.values())) or 1.0
    moment = force * float(sum(beam.lengths))
    for (span,), names in result.sets["stations"].items():
        for row, name in enumerate(names):
            x = F(rows["x"][span, row]).limit_denominator(10**9)
            # stations that have their support on the right, and those right of a point load
            past = name in ("right_d", "right", "end") or name.endswith(" +")
            for case in range(len(beam.placing)):
                values = [one.at(span, x, past) for (c, _), one in solved.items() if c == case]
                whole = solved[case, spans].at(span, x, past)
                key = span, row, case
                for what, place, size in (("V", 0, force), ("M", 1, moment)):
                    wanted = {what: whole[place], f"{what}_hi": max(v[place] for v in values),
                              f"{what}_lo": min(v[place] for v in values)}  # fmt: skip
                    for output, exact in wanted.items():
                        assert abs(rows[output][key] - float(exact)) <= 1e-9 * size, (output, name, key)
                    # what acts beside the greatest and the least is what acts in such an arrangement
                    for word in ("hi", "lo"):
                        beside = rows[f"{'MV'[place]}_with_{what}_{word}"][key]
                        fits = [
                            v[1 - place]
                            for v in values
                            if abs(float(v[place]) - rows[f"{what}_{word}"][key]) <= 1e-9 * size
                        ]
                        assert min(abs(beside - float(v)) for v in fits) <= 1e-9 * (moment if place == 0 else force)
    for node in range(len(spans) + 1):
        for case in range(len(beam.placing)):
            own = [one for (c, _), one in solved.items() if c == case]
            for what, pick, size in (("R", "reactions", force), ("T", "taken", moment)):
                if beam.hold[node] == "free" or (what == "T" and beam.hold[node] == "pinned"):
                    continue
                values = [getattr(one, pick)[node] for one in own]
                wanted = {
                    what: getattr(solved[case, spans], pick)[node],
                    f"{what}_hi": max(values),
                    f"{what}_lo": min(values),
                }
                for output, exact in wanted.items():
                    assert abs(rows[output][node, case] - float(exact)) <= 1e-9 * size, (output, node, case)


def at(result: Result, output: str, span: int, name: str, case: int = 0) -> float:
    row = result.sets["stations"][span,].index(name)
    return result.by_row[output][(span, row) if output == "x" else (span, row, case)]


WHOLE = ["everywhere"]
CASES = [
    Beam([F(20), F(25), F(18)], ["pinned"] * 4, [[F(3)], [F(1, 2)], [F(4)]], [F(1), F(5, 2), F(1, 3)]),
    Beam([F(6), F(24), F(30), F(5)], ["free", "pinned", "pinned", "pinned", "free"], [[F(2)], [F(5, 2)], [F(3)], [F(1)]],
         placing=["patterned"], points=[(0, F(2), [F(3)]), (1, F(8), [F(10)]), (1, F(16), [F(-4)]), (3, F(5), [F(2)])]),
    Beam([F(12), F(18)], ["fixed", "spring", "fixed"], [[F(2), F(-1)], [F(5, 2), F(3)]], [F(1), F(3, 2)],
         [F(0), F(7, 4), F(0)], ["everywhere", "patterned"], factors=[[F(6, 5), F(8, 5)], [F(9, 10), F(1)]],
         patches=[(0, F(3), F(12), [F(0), F(1)], [F(2), F(1, 2)]), (1, F(0), F(18), [F(4), F(0)], [F(0), F(1)])]),
    Beam([F(9)], ["fixed", "free"], [[F(5)]], points=[(0, F(9), [F(1)])]),
    Beam([F(4), F(9)], ["free", "spring", "free"], [[F(5)], [F(1)]], springs=[F(0), F(3), F(0)], placing=["patterned"]),
    Beam([F(7, 3), F(100), F(9), F(11, 7), F(30)], ["pinned"] * 5 + ["free"], [[F(1)], [F(-2)], [F(3)], [F(40)], [F(1, 9)]]),
]  # fmt: skip


@pytest.mark.parametrize("beam", CASES, ids=range(len(CASES)))
def test_against_fractions(beam: Beam) -> None:
    result = work(beam)
    hold_exactly(beam, result)
    assert all(abs(proof.residual) <= 1e-11 * proof.of for proof in result.proofs)


@st.composite
def beams(draw: st.DrawFn) -> Beam:
    small = st.fractions(min_value=F(1, 4), max_value=F(8), max_denominator=8)
    loads = st.fractions(min_value=F(-3), max_value=F(6), max_denominator=8)
    count = draw(st.integers(1, 4))
    lengths = [draw(st.fractions(min_value=F(2), max_value=F(40), max_denominator=4)) for _ in range(count)]
    hold = [draw(st.sampled_from(["pinned", "fixed", "spring"])) for _ in range(count + 1)]
    for end in (0, -1):
        hold[end] = draw(st.sampled_from([hold[end], "free"]))
    held = [word for word in hold if word != "free"]
    if not held or held == ["pinned"]:
        hold[0], hold[-1] = "fixed", "free"
    placing = [draw(st.sampled_from(["everywhere", "patterned"])) for _ in range(draw(st.integers(1, 2)))]
    cases = len(placing)
    some = st.lists(loads, min_size=cases, max_size=cases)
    patches, points = [], []
    for _ in range(draw(st.integers(0, 2))):
        span = draw(st.integers(0, count - 1))
        share = draw(st.integers(0, 5)), draw(st.integers(6, 11))
        patches.append((span, lengths[span] * share[0] / 11, lengths[span] * share[1] / 11, draw(some), draw(some)))
    for _ in range(draw(st.integers(0, 2))):
        span = draw(st.integers(0, count - 1))
        points.append((span, lengths[span] * draw(st.integers(0, 7)) / 7, draw(some)))
    factor = st.fractions(min_value=F(0), max_value=F(8, 5), max_denominator=10)
    return Beam(
        lengths, hold, [draw(some) for _ in range(count)], [draw(small) for _ in range(count)],
        [draw(small) for _ in range(count + 1)], placing, patches, points,
        [[draw(factor) for _ in range(cases)] for _ in range(2)], [F(1, 3)] * (count + 1), [F(1, 2)] * count, 4,
    )  # fmt: skip


@settings(max_examples=30, deadline=None)
@given(beams())
def test_any_member_against_fractions(beam: Beam) -> None:
    result = work(beam)
    hold_exactly(beam, result)
    # no station of ten times as many has a factored moment beyond the places named for it
    finer = member_on_supports({**beam.handed(), "parts": 40.0}, quiet)
    for (span,), names in finer.sets["stations"].items():
        for name, output, most in (("greatest", "M_hi", max), ("least", "M_lo", min)):
            best, *others = (
                [most(sum(float(k) * one.by_row[output][span, row, case] for case, k in enumerate(factors))
                      for factors in beam.factors) for row in where]
                for one, where in ((result, [result.sets["stations"][span,].index(name)]), (finer, range(len(names))))
            )  # fmt: skip
            beyond = (most(others[0]) - best[0]) * (1 if most is max else -1)
            assert beyond <= 1e-9 * max(1.0, abs(best[0])), (span, name)


def test_four_equal_spans_as_in_every_handbook() -> None:
    # reactions 0.393, 1.143, 0.929 w l; moments -0.1071, -0.0714 w l^2 over supports, 0.0772, 0.0364 between (common practice)
    result = work(Beam([F(1)] * 4, ["pinned"] * 5, [[F(1)]] * 4))
    assert [result.by_row["R"][n, 0] for n in range(3)] == pytest.approx([11 / 28, 32 / 28, 26 / 28])
    assert at(result, "M", 0, "end") == pytest.approx(-3 / 28)
    assert at(result, "M", 1, "end") == pytest.approx(-2 / 28)
    assert at(result, "M", 0, "greatest") == pytest.approx((11 / 28) ** 2 / 2)
    assert at(result, "x", 0, "greatest") == pytest.approx(11 / 28)


def test_what_symmetry_makes_nothing_is_nothing() -> None:
    # two like spans under like loads turn nothing at their middle support, whose columns then take no moment (statics)
    for placing in ("everywhere", "patterned"):
        spring = [F(0), F(1461, 10), F(0)]
        beam = Beam([F(27)] * 2, ["pinned", "spring", "pinned"], [[F(669, 1000)]] * 2, springs=spring)
        beam.placing = [placing]
        assert work(beam).by_row["T"][1, 0] == 0.0
    ends = [F(1461, 10)] * 4
    beam = Beam([F(27), F(31), F(27)], ["spring"] * 4, [[F(71, 100)]] * 3, springs=ends)
    assert at(work(beam), "V", 1, "middle") == 0.0


#: load, the size of the fixed-end moment near (left) and far (right): fractions of w l^2 or P l
TABLE = [
    ({"w": F(1)}, F(1, 12), F(1, 12)),
    ({"points": [(F(1, 2), F(1))]}, F(1, 8), F(1, 8)),
    ({"points": [(F(1, 3), F(1)), (F(2, 3), F(1))]}, F(2, 9), F(2, 9)),
    ({"points": [(F(n, 4), F(1)) for n in (1, 2, 3)]}, F(5, 16), F(5, 16)),
    ({"patches": [(F(0), F(1), F(1), F(0))]}, F(1, 20), F(1, 30)),
    ({"patches": [(F(0), F(1, 2), F(0), F(1)), (F(1, 2), F(1), F(1), F(0))]}, F(5, 96), F(5, 96)),
    ({"points": [(F(1, 4), F(1))]}, F(9, 64), F(3, 64)),
    ({"patches": [(F(0), F(1, 2), F(1), F(1))]}, F(11, 192), F(5, 192)),
]
#: the same with the far end pinned
PROPPED = [(TABLE[0][0], F(1, 8)), (TABLE[1][0], F(3, 16)), (TABLE[4][0], F(1, 15))]


def single(load: dict[str, Any], far: str) -> Result:
    patches = [(0, a, b, [p], [q]) for a, b, p, q in load.get("patches", ())]
    points = [(0, a, [p]) for a, p in load.get("points", ())]
    return work(Beam([F(1)], ["fixed", far], [[load.get("w", F(0))]], patches=patches, points=points))


@pytest.mark.parametrize(("load", "near", "far"), TABLE)
def test_fixed_end_moments(load: dict[str, Any], near: F, far: F) -> None:
    # AISC Steel Construction Manual, Table 3-23, and fixed-end-moment tables of textbooks (from memory), as fractions
    result = single(load, "fixed")
    assert at(result, "M", 0, "start") == pytest.approx(-float(near), rel=1e-9)
    assert at(result, "M", 0, "end") == pytest.approx(-float(far), rel=1e-9)


@pytest.mark.parametrize(("load", "near"), PROPPED)
def test_propped_end_moments(load: dict[str, Any], near: F) -> None:
    assert at(single(load, "pinned"), "M", 0, "start") == pytest.approx(-float(near), rel=1e-9)


#: ends, place, K in drop = K (5/48) M l^2/(EI), with M at midspan, at the support of a cantilever
DROPS = [
    (["pinned", "pinned"], "middle", "middle", 1.0), (["fixed", "free"], "end", "start", 2.4),
    (["fixed", "fixed"], "middle", "middle", 0.6), (["fixed", "pinned"], "middle", "middle", 0.8),
]  # fmt: skip


@pytest.mark.parametrize(("hold", "place", "moment", "k"), DROPS)
def test_deflection_coefficients(hold: list[str], place: str, moment: str, k: float) -> None:
    # Portland Cement Association, Notes on ACI 318, deflection chapter, table of K (from memory)
    result = work(Beam([F(10)], hold, [[F(2)]], [F(50)]))
    drop = k * 5 / 48 * abs(at(result, "M", 0, moment)) * 100 / 50
    assert at(result, "drop", 0, place) == pytest.approx(drop, rel=1e-9)


def test_greatest_deflection_of_a_propped_span() -> None:
    # w l^4/(184.6 EI) at 0.4215 l from the pinned end (common practice); K by the greatest moment 9 w l^2/128 is 0.739
    beam = Beam([F(1)], ["pinned", "fixed"], [[F(1)]], points=[(0, F(4215, 10000), [F(0)])])
    result = work(beam)
    found = max(result.by_row["drop"].values())
    assert 1 / found == pytest.approx(184.6, rel=0.002)
    assert found / (5 / 48 * 9 / 128) == pytest.approx(0.738, rel=0.003)


def test_overhangs_drop_with_the_slope_of_their_root() -> None:
    # one span of 10 with a load on the overhang of 4 alone: the tip drops by P a^2 (l + a)/(3 EI) (common practice)
    tip = [(1, F(4), [F(3)])]
    right = work(Beam([F(10), F(4)], ["pinned", "pinned", "free"], [[F(0)], [F(0)]], [F(7), F(7)], points=tip))
    assert at(right, "drop", 1, "end") == pytest.approx(3 * 16 * 14 / 3 / 7, rel=1e-9)
    left = work(
        Beam([F(4), F(10)], ["free", "pinned", "pinned"], [[F(0)], [F(0)]], [F(7), F(7)], points=[(0, F(0), [F(3)])])
    )
    assert at(left, "drop", 0, "start") == pytest.approx(3 * 16 * 14 / 3 / 7, rel=1e-9)


def test_influence_line_of_two_equal_spans() -> None:
    # moment over the middle support: -x(1 - x^2)/4 of P l for a load at x from the end (Anger's tables, from memory)
    for tenth in range(1, 10):
        x = F(tenth, 10)
        result = work(Beam([F(1), F(1)], ["pinned"] * 3, [[F(0)], [F(0)]], points=[(0, x, [F(1)])]))
        assert at(result, "M", 0, "end") == pytest.approx(-float(x * (1 - x**2) / 4), rel=1e-9)


def test_lengths_next_to_supports() -> None:
    # half of every span beside a support, all of an overhang: 4 + 3, 3 + 5, 5 of 4 + 6 + 10 (geometry)
    result = work(Beam([F(4), F(6), F(10)], ["free", "pinned", "pinned", "fixed"], [[F(1)]] * 3))
    assert [result.by_row["share"][n,] for n in range(4)] == [0, 7, 8, 5]
    assert [result.by_row["number"][n,] for n in range(3)] == [1, 2, 3]


def test_stations_in_order_with_both_sides_of_a_point_load() -> None:
    beam = Beam(
        [F(10)], ["pinned"] * 2, [[F(1)]], points=[(0, F(5), [F(4)])], face=[F(1), F(1, 2)], cut=[F(2)], parts=2
    )
    result = work(beam)
    assert result.sets["stations"][0,] == (
        "start", "least", "left", "left_d", "middle", "P0 -", "greatest", "P0 +", "right_d", "right", "end",
    )  # fmt: skip
    assert [at(result, "x", 0, name) for name in ("left", "left_d", "right_d", "right")] == [1, 3, 7.5, 9.5]
    # half of 10 + 4 at the supports; 7 - 5 left of the load, 4 less right of it
    assert [at(result, "V", 0, name) for name in ("start", "P0 -", "P0 +", "end")] == pytest.approx([7, 2, -2, -7])


def broken(**other: Any) -> Handed:
    beam = Beam(
        [F(10), F(10)],
        ["pinned"] * 3,
        [[F(1)], [F(1)]],
        points=[(0, F(5), [F(1)])],
        patches=[(1, F(1), F(2), [F(1)], [F(1)])],
    )
    return {**beam.handed(), **other}


@pytest.mark.parametrize(
    ("given", "words"),
    [
        (broken(l=(10.0, 0.0)), "above zero"),
        (broken(EI=(1.0, 0.0)), "above zero"),
        (broken(spans=(), l=(), EI=()), "between 1 and 50 spans"),
        (broken(l=(1.0,) * 51, EI=(1.0,) * 51), "between 1 and 50 spans"),
        (broken(hold=("pinned", "pinned")), "stand on 3 supports, free ends counted, not on 2"),
        (broken(hold=("free", "pinned", "free")), "falls"),
        (broken(hold=("pinned", "free", "pinned")), "only an end"),
        (broken(hold=("pinned", "spring", "pinned")), "a spring needs a stiffness"),
        (broken(n_P=(3.0,)), "load P0: there is no span number 3"),
        (broken(n_P=(1.5,)), "load P0: there is no span number 1.5"),
        (broken(s_P=(10.1,)), "load P0 does not stand within its span"),
        (broken(s_1=(2.0,)), "load q0 does not stand within its span"),
        (broken(s_2=(11.0,)), "load q0 does not stand within its span"),
        (broken(face=(5.0, 5.0, 0.0)), "span number 1 has no length between the faces"),
        (broken(placing=("patterned",), factor=((-1.0,),)), "the combination c0 has a factor below zero"),
        (broken(points=tuple(f"P{n}" for n in range(600)), n_P=(1.0,) * 600, s_P=(1.0,) * 600, P=((1.0,),) * 600), "1000"),
    ],
)  # fmt: skip
def test_no_member(given: Handed, words: str) -> None:
    with pytest.raises(NoResult, match=words):
        member_on_supports(given, quiet)


def test_fifty_spans() -> None:
    beam = Beam(
        [F(20)] * 50,
        ["pinned"] * 51,
        [[F(1), F(2)]] * 50,
        placing=["everywhere", "patterned"],
        factors=[[F(6, 5), F(8, 5)]],
    )
    spent: list[int] = []
    result = member_on_supports(beam.handed(), spent.append)
    # far from the ends a support takes w l, and its moment is -w l^2/12 (common practice)
    assert result.by_row["R"][25, 0] == pytest.approx(20)
    assert at(result, "M", 25, "start") == pytest.approx(-400 / 12)
    assert 0 < sum(spent) < 1_000_000


@pytest.mark.parametrize(
    "output",
    [
        "V",
        "M_hi",
        "M_lo",
        "V_with_M_hi",
        "M_with_V_lo",
        "drop",
        "R",
        "R_hi",
        "T_lo",
        "x",
        "share",
        "M_left_lo",
        "M_middle",
    ],
)
def test_the_second_path_sees_a_value_that_is_out(output: str) -> None:
    beam = CASES[2]
    result = member_on_supports(beam.handed(), quiet)
    values = result.by_row[output]
    key = max(values, key=lambda one: abs(values[one]))
    values[key] *= 1 + 1e-6
    with pytest.raises(NotClosed):
        confirm(beam, result)
