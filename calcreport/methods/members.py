"""A straight member of one stiffness on supports that do not settle, under a uniform load a span, by stiffness.

Numbers in base units in, `Result` out. Every support and free end is a node with a deflection (up) and a slope
(anticlockwise); the loads of a span act as their fixed-end forces; shears and moments inside a span follow by statics.
Method: the direct stiffness method (common practice), its equations solved by the library.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

from calcreport.core.late import load
from calcreport.methods.results import Handed, MadeSet, NoResult, Proof, Result, Spend, number, numbers

#: spans at most
MOST_SPANS = 50
#: what is left of terms that cancel is rounding below this share of the largest
NOISE = 1e-13
#: sums further from nothing than this share of their largest term prove no result
CLOSED = 1e-9


@dataclass(frozen=True, slots=True)
class Member:
    """A member with its loads; base units. `held` tells of every node whether it is a support."""

    lengths: tuple[float, ...]
    loads: tuple[float, ...]
    stiffness: float
    held: tuple[bool, ...]

    def nodes(self) -> tuple[float, ...]:
        """Return the places of supports and free ends from the left end."""
        found = [0.0]
        for length in self.lengths:
            found.append(found[-1] + length)
        return tuple(found)


def member_on_supports(handed: Handed, spend: Spend) -> Result:
    """Return stations with shear and moment, and the reactions; raises `NoResult`."""
    member, parts = _member(handed), int(number(handed, "parts"))
    count = len(member.lengths)
    spend(4 * (count + 1) ** 3 + count * parts)
    moved = _deflected(member)
    ends = [_end_forces(member, span, moved) for span in range(count)]
    reactions = [0.0] * (count + 1)
    for span, (left, _, right, _) in enumerate(ends):
        reactions[span] += left
        reactions[span + 1] += right
    return _result(member, parts, moved, ends, reactions)


def _member(handed: Handed) -> Member:
    """Return the member handed over; one that would fall is none."""
    lengths, loads = numbers(handed, "l"), numbers(handed, "w")
    if not 0 < len(lengths) <= MOST_SPANS:
        raise NoResult(f"a member has between 1 and {MOST_SPANS} spans")
    if min(lengths) <= 0 or number(handed, "EI") <= 0:
        raise NoResult("a member needs lengths and a stiffness above zero")
    inner = (True,) * (len(lengths) - 1)
    held = (handed["left"] == "supported", *inner, handed["right"] == "supported")
    if sum(held) < 2:
        raise NoResult("a member on fewer than two supports falls")
    return Member(lengths, loads, number(handed, "EI"), held)


def _deflected(member: Member) -> list[float]:
    """Return deflection and slope of every node in turn."""
    numpy = load("numpy")
    size = 2 * len(member.held)
    matrix, forces = numpy.zeros((size, size)), numpy.zeros(size)
    for span, length in enumerate(member.lengths):
        at = slice(2 * span, 2 * span + 4)
        matrix[at, at] += numpy.array(_stiffness(member.stiffness, length))
        forces[at] += numpy.array(_fixed(member.loads[span], length))
    free = [place for place in range(size) if place % 2 or not member.held[place // 2]]
    moved = numpy.zeros(size)
    moved[free] = numpy.linalg.solve(matrix[numpy.ix_(free, free)], forces[free])
    return [float(value) for value in moved]


def _stiffness(stiffness: float, length: float) -> list[list[float]]:
    """Return forces and moments at the ends of a span for unit deflections and slopes there."""
    a, b, c = 12 * stiffness / length**3, 6 * stiffness / length**2, 2 * stiffness / length
    return [[a, b, -a, b], [b, 2 * c, -b, c], [-a, -b, a, -b], [b, c, -b, 2 * c]]


def _fixed(load_: float, length: float) -> list[float]:
    """Return the forces and moments by which a load acts on the nodes of its span."""
    force, moment = load_ * length / 2, load_ * length**2 / 12
    return [-force, -moment, -force, moment]


def _end_forces(member: Member, span: int, moved: list[float]) -> list[float]:
    """Return the forces (up) and moments (anticlockwise) on the ends of a span: left, left, right, right."""
    length, at = member.lengths[span], moved[2 * span : 2 * span + 4]
    rows, fixed = _stiffness(member.stiffness, length), _fixed(member.loads[span], length)
    return [sum(k * u for k, u in zip(row, at, strict=True)) - f for row, f in zip(rows, fixed, strict=True)]


def _result(member: Member, parts: int, moved: list[float], ends: list[list[float]], reactions: list[float]) -> Result:
    nodes = member.nodes()
    names, places, shears, moments = [], [], [], []
    for span, length in enumerate(member.lengths):
        shear, moment, load_ = ends[span][0], -ends[span][1], member.loads[span]
        for part in range(parts + 1):
            x = length * part / parts
            names.append(f"{span + 1}.{part}")
            places.append(nodes[span] + x)
            shears.append(_sum(shear, -load_ * x))
            moments.append(_sum(moment, shear * x, -load_ * x * x / 2))
    own = [node for node, held in enumerate(member.held) if held]
    columns = {"x": tuple(places), "V": tuple(shears), "M": tuple(moments)}
    supports = {"x_R": tuple(nodes[n] for n in own), "R": tuple(reactions[n] for n in own)}
    proofs = _proofs(member, moved, ends, supports)
    if any(abs(proof.residual) > CLOSED * proof.of for proof in proofs):
        raise NoResult("the sums do not close to one part in 1,000,000,000")
    return Result({}, proofs, {
        "stations": MadeSet(tuple(names), columns),
        "supports": MadeSet(tuple(str(n + 1) for n in range(len(own))), supports),
    })  # fmt: skip


def _sum(*terms: float) -> float:
    """Add up; what is left of terms that cancel to the last bits is nothing."""
    found = sum(terms)
    return found if abs(found) > NOISE * max(map(abs, terms)) else 0.0


def _proofs(
    member: Member, moved: list[float], ends: list[list[float]], supports: dict[str, tuple[float, ...]]
) -> tuple[Proof, ...]:
    nodes = member.nodes()
    loads = [load_ * length for load_, length in zip(member.loads, member.lengths, strict=True)]
    turned = [force * (nodes[n] + nodes[n + 1]) / 2 for n, force in enumerate(loads)]
    held = [force * x for force, x in zip(supports["R"], supports["x_R"], strict=True)]
    slopes = [_slopes(member, span, moved, ends[span]) for span in range(len(loads))]
    gaps = [right[0] - left[1] for left, right in pairwise(slopes)]
    return (
        Proof(sum(supports["R"]) - sum(loads), max(map(abs, (*loads, *supports["R"])))),
        Proof(sum(held) - sum(turned), max(map(abs, (*held, *turned)))),
        Proof(max(gaps, key=abs, default=0.0), max(abs(slope) for pair in slopes for slope in pair)),
    )


def _slopes(member: Member, span: int, moved: list[float], ends: list[float]) -> tuple[float, float]:
    """Return the slopes at the ends of a span from its moments by the areas under them, not from the nodes' own."""
    length, load_ = member.lengths[span], member.loads[span]
    left, right = -ends[1], ends[3]
    chord = (moved[2 * span + 2] - moved[2 * span]) / length
    bent = load_ * length**3 / 24
    one = chord - (bent + length * (2 * left + right) / 6) / member.stiffness
    other = chord + (bent + length * (left + 2 * right) / 6) / member.stiffness
    return one, other
