"""What a member on supports comes to: by station and load case, by support and load case, and the sums that prove it.

Inputs of the method in, `Result` out. What is printed of a patterned case acting everywhere is the sum over its spans;
greatest and least are the sums of what adds and of what takes away, each with what acts beside it then.
"""

from __future__ import annotations

from typing import Any

from calcreport.core.late import load
from calcreport.methods.members import Member, Solved, curvature_terms, member_handed, parts_of, solve, summed
from calcreport.methods.results import Handed, Key, NoResult, Proof, Result, Spend, rows_of
from calcreport.methods.stations import Station, drop_at, forces_at, stations_of

#: sums further from nothing than this share of their largest term prove no result
CLOSED = 1e-9
#: stations one member may have
MOST_STATIONS = 1000


def member_on_supports(handed: Handed, spend: Spend) -> Result:
    """Return stations and supports by load case; raises `NoResult`."""
    member, parts = member_handed(handed, spend), parts_of(handed)
    weights = _weights(handed, member)
    solved = solve(member)
    proofs = _proofs(member, solved)
    if any(abs(proof.residual) > CLOSED * proof.of for proof in proofs):
        raise NoResult("the sums do not close to one part in 1,000,000,000")
    count = len(member.lengths)
    rows = 2 * len(rows_of(handed, "points")) + 2 * len(rows_of(handed, "patches")) + count * (parts + 8)
    if rows > MOST_STATIONS:
        raise NoResult(f"{rows} stations are more than the {MOST_STATIONS} that one member may have")
    spend(rows * (len(member.loadings) + len(handed["cases"])) + count * parts * len(weights))
    found = _Found(member, len(handed["cases"]))
    names: dict[Key, tuple[str, ...]] = {}
    for span in range(count):
        stations = stations_of(member, solved, handed, parts, span, weights)
        names[span,] = tuple(station.name for station in stations)
        found.by_row.setdefault("number", {})[span,] = span + 1.0
        for row, station in enumerate(stations):
            found.station(solved, span, row, station)
        found.spans(span, names[span,])
    found.supports(solved)
    return Result({}, proofs, {"stations": names}, found.by_row)


def _weights(handed: Handed, member: Member) -> list[tuple[float, ...]]:
    """Return the factor of every loading for each combination."""
    found = []
    for row, factors in enumerate(rows_of(handed, "factor")):
        if any(loading.patterned and factors[loading.case] < 0 for loading in member.loadings):
            name = handed["combinations"][row]
            raise NoResult(f"the combination {name} has a factor below zero for a load that is patterned")
        found.append(tuple(factors[loading.case] for loading in member.loadings))
    return found


class _Found:
    """Gathers values by output and row."""

    def __init__(self, member: Member, cases: int) -> None:
        self.member, self.cases = member, cases
        self.by_row: dict[str, dict[Key, float]] = {}
        numpy = load("numpy")
        own = numpy.array([loading.case for loading in member.loadings], dtype=int)
        self.of_case = [own == case for case in range(cases)]
        self.patterned = [any(one.patterned for one in member.loadings if one.case == case) for case in range(cases)]

    def put(self, key: Key, **values: Any) -> None:
        for name, value in values.items():
            self.by_row.setdefault(name, {})[key] = float(value)

    def station(self, solved: Solved, span: int, row: int, station: Station) -> None:
        numpy = load("numpy")
        self.put((span, row), x=station.x)
        forces = forces_at(self.member, solved, span, station)
        drops = numpy.array(drop_at(self.member, solved, span, station.x))
        for case in range(self.cases):
            v, m = forces.shear[self.of_case[case]], forces.moment[self.of_case[case]]
            v_hi, m_with_v_hi, v_lo, m_with_v_lo = self.ends(case, v, m)
            m_hi, v_with_m_hi, m_lo, v_with_m_lo = self.ends(case, m, v)
            self.put((span, row, case), V=summed(v), M=summed(m), V_hi=v_hi, V_lo=v_lo, M_hi=m_hi, M_lo=m_lo,
                     M_with_V_hi=m_with_v_hi, M_with_V_lo=m_with_v_lo, V_with_M_hi=v_with_m_hi,
                     V_with_M_lo=v_with_m_lo, drop=summed(drops[self.of_case[case]]))  # fmt: skip

    def ends(self, case: int, leading: Any, other: Any) -> tuple[float, float, float, float]:
        """Return greatest and least of the leading force over all arrangements, each with the other force then."""
        if not self.patterned[case]:
            return (summed(leading), summed(other)) * 2
        up, down = leading > 0, leading < 0
        return leading[up].sum(), summed(other[up]), leading[down].sum(), summed(other[down])

    def spans(self, span: int, names: tuple[str, ...]) -> None:
        """Repeat by span what its faces and midspan come to, as deflections are taken from."""
        for name, other, word in (("left", "M_lo", "_lo"), ("middle", "M_hi", "_hi"), ("right", "M_lo", "_lo")):
            row = names.index(name)
            for case in range(self.cases):
                whole, end = self.by_row["M"][span, row, case], self.by_row[other][span, row, case]
                self.put((span, case), **{f"M_{name}": whole, f"M_{name}{word}": end})

    def supports(self, solved: Solved) -> None:
        member, count = self.member, len(self.member.lengths)
        for node in range(count + 1):
            shares = [
                length if member.hangs(span) else length / 2
                for span, length in enumerate(member.lengths)
                if node in (span, span + 1) and member.hold[node] != "free"
            ]
            self.put((node,), share=sum(shares))
            for case in range(self.cases):
                r, t = solved.reactions[self.of_case[case], node], solved.taken[self.of_case[case], node]
                r_hi, _, r_lo, _ = self.ends(case, r, t)
                t_hi, _, t_lo, _ = self.ends(case, t, r)
                self.put((node, case), R=summed(r), R_hi=r_hi, R_lo=r_lo, T=summed(t), T_hi=t_hi, T_lo=t_lo)


def _proofs(member: Member, solved: Solved) -> tuple[Proof, Proof, Proof]:
    """Return the sums of the loading that closes worst, each beside its largest term."""
    sums = [
        (_forces(member, solved, which), _moments(member, solved, which), _continuity(member, solved, which))
        for which in range(len(member.loadings))
    ] or [(Proof(0.0, 0.0),) * 3]
    one, two, three = (max(column, key=_share) for column in zip(*sums, strict=True))
    return one, two, three


def _share(proof: Proof) -> tuple[float, float]:
    return abs(proof.residual) / proof.of if proof.of else 0.0, proof.of


def _forces(member: Member, solved: Solved, which: int) -> Proof:
    loads = [own.effect(member.lengths[span], 0) for span, own in member.loadings[which].on.items()]
    terms = [*map(float, solved.reactions[which]), *(-force for force in loads)]
    return Proof(sum(terms), max(map(abs, terms)))


def _moments(member: Member, solved: Solved, which: int) -> Proof:
    starts = member.starts()
    terms = [float(r) * x for r, x in zip(solved.reactions[which], starts, strict=True)]
    terms += [-float(t) for t in solved.taken[which]]
    for span, own in member.loadings[which].on.items():
        terms.append(-own.weighed(lambda s, start=starts[span]: start + s))  # type: ignore[misc]
    return Proof(sum(terms), max(map(abs, terms)))


def _continuity(member: Member, solved: Solved, which: int) -> Proof:
    """Return the largest gap of slopes at a support: areas under M/EI of the spans beside it, and what holds it."""
    at: list[list[float]] = [[] for _ in member.hold]
    sizes = [0.0]
    for span, length in enumerate(member.lengths):
        if member.hangs(span):
            continue
        turned, moved = curvature_terms(member, solved, which, span, length)
        at[span].append(-moved / length)
        at[span + 1].append(turned - moved / length)
        left, shear = float(solved.left[which, span]), float(solved.shear[which, span])
        sizes += [abs(term) * length / member.stiffness[span] for term in (left, shear * length / 2)]
    for node, word in enumerate(member.hold):
        if word == "spring":
            at[node].append(float(solved.taken[which, node]) / member.springs[node])
        elif word == "fixed":
            at[node].append(0.0)
    gaps = [max(slopes) - min(slopes) for slopes in at if len(slopes) > 1]
    return Proof(max(gaps, default=0.0), max(sizes))
