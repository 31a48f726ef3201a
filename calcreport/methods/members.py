"""A straight member on supports that do not settle, spans of their own stiffness, by the stiffness method.

Numbers in base units in, `Result` out. Unknown are the slopes (anticlockwise) of the supports that turn; an overhang
acts by its root moment. Every load case, and every span of a patterned one, is solved by itself: greatest and least
over all arrangements are the sums of what adds and of what takes away. Method: slope deflection in matrix form
(common practice), its equations solved by the library.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from calcreport.core.late import load
from calcreport.methods.results import Handed, NoResult, Spend, number, numbers, rows_of
from calcreport.methods.spans import Loads, Spread

#: spans at most
MOST_SPANS = 50
#: what is left of terms that cancel is rounding below this share of their sizes
NOISE = 1e-13


@dataclass(frozen=True, slots=True)
class Loading:
    """Loads that always act together: a case on all spans, or a patterned case on one."""

    case: int
    #: loads by span
    on: dict[int, Loads]
    #: acts or not as is worse
    patterned: bool


@dataclass(frozen=True, slots=True)
class Member:
    """A member with its loads; base units."""

    lengths: tuple[float, ...]
    stiffness: tuple[float, ...]
    hold: tuple[str, ...]
    springs: tuple[float, ...]
    loadings: tuple[Loading, ...]

    def starts(self) -> tuple[float, ...]:
        """Return the places of supports and free ends from the left end."""
        found = [0.0]
        for length in self.lengths:
            found.append(found[-1] + length)
        return tuple(found)

    def hangs(self, span: int) -> str:
        """Return the side on which a span is free, or nothing."""
        return "left" if self.hold[span] == "free" else "right" if self.hold[span + 1] == "free" else ""


@dataclass(frozen=True, slots=True)
class Solved:
    """Every loading solved: arrays by loading and node or span; moments sagging, slopes anticlockwise."""

    slopes: Any
    #: moments at the left and right end of spans, shear at their left end
    left: Any
    right: Any
    shear: Any
    #: forces of the supports up; moments right of them less those left of them
    reactions: Any
    taken: Any


def member_handed(handed: Handed, spend: Spend) -> Member:
    """Return the member handed over; one that would fall is none."""
    lengths, stiffness = numbers(handed, "l"), numbers(handed, "EI")
    hold, springs = handed["hold"], numbers(handed, "k")
    count = len(lengths)
    if not 0 < count <= MOST_SPANS:
        raise NoResult(f"a member has between 1 and {MOST_SPANS} spans")
    if len(hold) != count + 1:
        raise NoResult(f"{count} spans stand on {count + 1} supports, free ends counted, not on {len(hold)}")
    if min(lengths) <= 0 or min(stiffness) <= 0:
        raise NoResult("a member needs lengths and stiffnesses above zero")
    if "free" in hold[1:-1]:
        raise NoResult("only an end of a member is free")
    if any(word == "spring" and k <= 0 for word, k in zip(hold, springs, strict=True)):
        raise NoResult("a spring needs a stiffness above zero")
    held = [word for word in hold if word != "free"]
    if not held or held == ["pinned"]:
        raise NoResult("a member on one pinned support, or none, falls")
    spend(count * (count + 1) ** 2)
    member = Member(lengths, stiffness, hold, springs, _loadings(handed, lengths))
    spend(len(member.loadings) * count)
    return member


def _loadings(handed: Handed, lengths: tuple[float, ...]) -> tuple[Loading, ...]:
    """Return what acts together; what has no load is left out."""
    found: list[Loading] = []
    placed = [_span_of(handed, "n_s", row, lengths, ("s_1", "s_2")) for row in range(len(rows_of(handed, "patches")))]
    at = [_span_of(handed, "n_P", row, lengths, ("s_P",)) for row in range(len(rows_of(handed, "points")))]
    for case, word in enumerate(handed["placing"]):
        on: dict[int, Loads] = {}
        for span, length in enumerate(lengths):
            w = handed["w"][span][case]
            spread = [Spread(0.0, length, w, w)] if w else []
            for row, (own, (start, end)) in enumerate(placed):
                first, last = handed["w_1"][row][case], handed["w_2"][row][case]
                if own == span and (first or last):
                    spread.append(Spread(start, end, first, last))
            points = [(s, handed["P"][row][case]) for row, (own, (s,)) in enumerate(at) if own == span]
            loads = Loads(tuple(spread), tuple(point for point in points if point[1]))
            if loads.spread or loads.points:
                on[span] = loads
        if word == "patterned":
            found += [Loading(case, {span: loads}, True) for span, loads in on.items()]
        elif on:
            found.append(Loading(case, on, False))
    return tuple(found)


def _span_of(
    handed: Handed, name: str, row: int, lengths: tuple[float, ...], places: tuple[str, ...]
) -> tuple[int, tuple[float, ...]]:
    """Return the span a load stands in and its places there; outside of it is a load on nothing."""
    which = handed["patches" if name == "n_s" else "points"][row]
    span, found = handed[name][row], tuple(handed[place][row] for place in places)
    if span != int(span) or not 1 <= span <= len(lengths):
        raise NoResult(f"load {which}: there is no span number {span:g}")
    length = lengths[int(span) - 1]
    if found[0] < 0 or found[-1] > length * (1 + 1e-12) or (len(found) > 1 and found[0] >= found[1]):
        raise NoResult(f"load {which} does not stand within its span")
    return int(span) - 1, tuple(min(place, length) for place in found)


def solve(member: Member) -> Solved:
    """Return slopes, end forces and reactions of every loading."""
    numpy = load("numpy")
    count, size = len(member.lengths), len(member.loadings)
    matrix, forces = numpy.zeros((count + 1, count + 1)), numpy.zeros((count + 1, size))
    fixed = numpy.zeros((size, count, 2))
    for span, length in enumerate(member.lengths):
        side = member.hangs(span)
        if not side:
            stiff = 2 * member.stiffness[span] / length
            matrix[span : span + 2, span : span + 2] += stiff * numpy.array([[2.0, 1.0], [1.0, 2.0]])
        for number_, loading in enumerate(member.loadings):
            if span not in loading.on:
                continue
            ends = _ends(loading.on[span], length, side)
            fixed[number_, span] = ends
            forces[span, number_] -= ends[0]
            forces[span + 1, number_] -= ends[1]
    for node, word in enumerate(member.hold):
        matrix[node, node] += member.springs[node] if word == "spring" else 0.0
    free = [node for node, word in enumerate(member.hold) if word not in ("fixed", "free")]
    slopes = numpy.zeros((count + 1, size))
    if free and size:
        slopes[free] = numpy.linalg.solve(matrix[numpy.ix_(free, free)], forces[free])
        slopes[abs(slopes) <= NOISE * abs(slopes).max(axis=0)] = 0.0
    return _ends_of(member, slopes.T, fixed)


def summed(terms: Any) -> Any:
    """Return sums of terms, the first axis; of terms that cancel to the last bits nothing is left."""
    numpy = load("numpy")
    terms = numpy.asarray(terms)
    found = terms.sum(axis=0)
    return numpy.where(abs(found) > NOISE * abs(terms).sum(axis=0), found, 0.0)


def _ends(loads: Loads, length: float, side: str) -> tuple[float, float]:
    """Return the moments (anticlockwise) that hold the ends of a loaded span, or the root of an overhang."""
    if side == "right":
        return loads.weighed(lambda s: s), 0.0
    if side == "left":
        return 0.0, -loads.weighed(lambda s: length - s)
    left, right = loads.fixed(length)
    return left, -right


def _ends_of(member: Member, slopes: Any, fixed: Any) -> Solved:
    numpy = load("numpy")
    count, size = len(member.lengths), len(member.loadings)
    left, right, shear = (numpy.zeros((size, count)) for _ in range(3))
    # by what acts on a node: the span left of it, and that right of it
    pushed, turning = numpy.zeros((3, size, count + 1)), numpy.zeros((2, size, count + 1))
    for span, length in enumerate(member.lengths):
        stiff = 0.0 if member.hangs(span) else 2 * member.stiffness[span] / length
        start, end = stiff * slopes[:, span], stiff * slopes[:, span + 1]
        left[:, span] = -summed([fixed[:, span, 0], 2 * start, end])
        right[:, span] = summed([fixed[:, span, 1], start, 2 * end])
        side, own = member.hangs(span), [loading.on.get(span, Loads()) for loading in member.loadings]
        whole = [loads.effect(length, 0) for loads in own]
        turned = summed([right[:, span], -left[:, span], [loads.effect(length, 1) for loads in own]])
        shear[:, span] = 0.0 if side == "left" else whole if side == "right" else turned / length
        pushed[0, :, span + 1] = whole
        pushed[1, :, span] = shear[:, span]
        pushed[2, :, span + 1] = -shear[:, span]
        turning[0, :, span] = left[:, span]
        turning[1, :, span + 1] = -right[:, span]
    reactions, taken = summed(pushed), summed(turning)
    for node, word in enumerate(member.hold):
        if word in ("free", "pinned"):
            taken[:, node] = 0.0
        if word == "free":
            reactions[:, node] = 0.0
    return Solved(slopes, left, right, shear, reactions, taken)


def curvature_terms(member: Member, solved: Solved, which: int, span: int, x: float) -> tuple[float, float]:
    """Return the areas under M/EI of one loading from the left of a span to a place: slope and deflection they add."""
    loads = member.loadings[which].on.get(span, Loads())
    left, shear, stiffness = float(solved.left[which, span]), float(solved.shear[which, span]), member.stiffness[span]
    turned = (left * x + shear * x**2 / 2 - loads.effect(x, 2)) / stiffness
    return turned, (left * x**2 / 2 + shear * x**3 / 6 - loads.effect(x, 3)) / stiffness


def parts_of(handed: Handed) -> int:
    """Return into how many equal parts stations divide a span."""
    return int(number(handed, "parts"))
