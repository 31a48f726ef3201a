"""A member on supports worked again by forces: moments at the supports from equal slopes, the rest by statics.

What the method was handed and what the first path found in; silence, or `NotClosed`. The first path finds slopes by
stiffness; here support moments are the unknowns, and integrals of loads take five equal places (exact to degree five).
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import Any

from calcreport.second.closing import WITHIN, Found, NotClosed, close

Weight = Callable[[Any], Any]
#: shares of five equal places on a length, in ninetieths
_FIVE = (7, 32, 12, 32, 7)
#: a moment below this share of its terms may be none at all
_FAINT = 1e-12


class _Member:
    """The member in thirty digits; a loading is a case on all spans, or a patterned case on one of them."""

    def __init__(self, handed: dict[str, Any], mp: Any) -> None:
        self.handed, self.mp = handed, mp
        self.lengths, self.hold = handed["l"], handed["hold"]
        self.count = len(self.lengths)
        cases = range(len(handed["cases"]))
        spans = range(self.count)
        split = {case: handed["placing"][case] == "patterned" for case in cases}
        self.loadings: list[tuple[int, tuple[int, ...]]]
        self.loadings = [(case, (span,)) for case in cases if split[case] for span in spans]
        self.loadings += [(case, tuple(spans)) for case in cases if not split[case]]
        self.ends = self.solve()
        #: sizes that what is nothing is held against
        starts = [abs(self.start(n, span)[1]) for n in range(len(self.loadings)) for span in range(self.count)]
        self.force = mp.fsum(starts) or mp.mpf(1)
        self.moment = self.force * sum(self.lengths)

    def forces(self, loading: int, span: int, weight: Weight, before: Any = None, *, past: bool = True) -> Any:
        """Return the sum of the forces of one span, left of a place, each times a weight of its own place."""
        case, on = self.loadings[loading]
        if span not in on:
            return self.mp.mpf(0)
        handed, length = self.handed, self.lengths[span]
        before = length if before is None else before
        spread = [(self.mp.mpf(0), length, handed["w"][span][case], handed["w"][span][case])]
        for row, own in enumerate(handed.get("n_s", ())):
            if own == span + 1:
                ends = handed["s_1"][row], handed["s_2"][row]
                spread.append((*ends, handed["w_1"][row][case], handed["w_2"][row][case]))
        found = []
        for start, end, first, last in spread:
            reach = min(end, before) - start
            for place, share in enumerate(_FIVE) if reach > 0 else ():
                s = reach * place / 4
                w = first + (last - first) * s / (end - start)
                found.append(w * weight(start + s) * reach * share / 90)
        for row, own in enumerate(handed.get("n_P", ())):
            s = handed["s_P"][row]
            here = abs(s - before) <= _FAINT * length
            if own == span + 1 and (past if here else s < before):
                found.append(handed["P"][row][case] * weight(s))
        return self.mp.fsum(found)

    def hangs(self, span: int) -> bool:
        return "free" in (self.hold[span], self.hold[span + 1])

    def slope(self, loading: int, span: int, *, right: bool) -> tuple[dict[int, Any], Any]:
        """Return a slope (anticlockwise) of a span between supports: factors of end moments, share of its loads."""
        length, stiff = self.lengths[span], self.handed["EI"][span]
        unit = length / (6 * stiff)
        if right:
            bent = self.forces(loading, span, lambda s: s * (length**2 - s**2) / (6 * length))
            return {2 * span + 1: unit, 2 * span + 2: 2 * unit}, bent / stiff
        bent = self.forces(loading, span, lambda s: s * (length - s) * (2 * length - s) / (6 * length))
        return {2 * span + 1: -2 * unit, 2 * span + 2: -unit}, -bent / stiff

    def equations(self, loading: int) -> Iterator[tuple[dict[int, Any], Any]]:
        """Yield two equations a support: factors of the moments left (2n) and right (2n + 1) of it, and the sum."""
        for node, word in enumerate(self.hold):
            slopes: list[tuple[dict[int, Any], Any]] = []
            for span, place, right in ((node - 1, 2 * node, True), (node, 2 * node + 1, False)):
                if not 0 <= span < self.count or word == "free":
                    yield {place: self.mp.mpf(1)}, self.mp.mpf(0)
                elif self.hangs(span):
                    length = self.lengths[span]
                    arm: Weight = (lambda s, length=length: length - s) if right else (lambda s: s)  # type: ignore[misc]
                    yield {place: self.mp.mpf(1)}, -self.forces(loading, span, arm)
                else:
                    slopes.append(self.slope(loading, span, right=right))
            if word == "fixed":
                for factors, known in slopes:
                    yield factors, -known
            elif slopes:
                spring = self.handed["k"][node] if word == "spring" else self.mp.mpf(0)
                factors, known = slopes[-1]
                jump = {2 * node + 1: self.mp.mpf(1), 2 * node: self.mp.mpf(-1)}
                for place, factor in factors.items():
                    jump[place] = jump.get(place, self.mp.mpf(0)) - spring * factor
                yield jump, spring * known
                if len(slopes) > 1:
                    (one, first), (other, second) = slopes
                    both = dict(one)
                    for place, factor in other.items():
                        both[place] = both.get(place, self.mp.mpf(0)) - factor
                    yield both, second - first

    def solve(self) -> list[Any]:
        """Return the moments at both sides of every support, by loading."""
        size = 2 * (self.count + 1)
        inverse, found = None, []
        for loading in range(len(self.loadings)):
            equations = list(self.equations(loading))
            if inverse is None:
                matrix = self.mp.zeros(size)
                for row, (factors, _) in enumerate(equations):
                    for place, factor in factors.items():
                        matrix[row, place] = factor
                inverse = matrix**-1
            found.append(inverse * self.mp.matrix([known for _, known in equations]))
        return found

    def start(self, loading: int, span: int) -> tuple[Any, Any]:
        """Return moment and shear at the left end of a span."""
        length, ends = self.lengths[span], self.ends[loading]
        left, right = ends[2 * span + 1], ends[2 * span + 2]
        return left, (right - left + self.forces(loading, span, lambda s: length - s)) / length

    def at(self, loading: int, span: int, x: Any, *, past: bool) -> tuple[Any, Any, Any]:
        """Return shear and moment at a place, and the largest term of the moment."""
        left, shear = self.start(loading, span)
        taken = self.forces(loading, span, lambda s: x - s, x)
        v = shear - self.forces(loading, span, lambda s: 1, x, past=past)
        return v, left + shear * x - taken, max(abs(left), abs(shear * x), abs(taken))

    def drop(self, loading: int, span: int, x: Any) -> Any:
        """Return the deflection (down) at a place."""
        length, stiff, side = self.lengths[span], self.handed["EI"][span], ""
        left, shear = self.start(loading, span)

        def bent(place: Any, order: int) -> Any:
            divisor = (2, 6)[order - 2]
            taken = self.forces(loading, span, lambda s: (place - s) ** order / divisor, place)
            known = left * place if order == 2 else left * place**2 / 2
            return (known + shear * place**order / divisor - taken) / stiff

        side = "left" if self.hold[span] == "free" else "right" if self.hold[span + 1] == "free" else ""
        if side == "right":
            return -(self.root(loading, span) * x + bent(x, 3))
        if side == "left":
            slope = self.root(loading, span + 1) - bent(length, 2)
            return slope * length + bent(length, 3) - slope * x - bent(x, 3)
        return bent(length, 3) / length * x - bent(x, 3)

    def root(self, loading: int, node: int) -> Any:
        """Return the slope of a support that an overhang begins at."""
        if self.hold[node] == "fixed":
            return self.mp.mpf(0)
        for span, right in ((node - 1, True), (node, False)):
            if 0 <= span < self.count and not self.hangs(span):
                factors, known = self.slope(loading, span, right=right)
                return known + sum(factor * self.ends[loading][place] for place, factor in factors.items())
        ends = self.ends[loading]
        return (ends[2 * node + 1] - ends[2 * node]) / self.handed["k"][node]


def member_on_supports(handed: dict[str, Any], found: Found, mp: Any) -> None:
    """Hold every value by station and support, with its greatest and least, against those worked by forces."""
    member = _Member(handed, mp)
    _supports(member, found)
    for (span,), names in found.sets["stations"].items():
        for row, name in enumerate(names):
            _place(member, found, span, row, name)
            _station(member, found, (span, row), name)
        _repeated(member, found, span, names)
        _turning(member, found, span, names)


def _repeated(member: _Member, found: Found, span: int, names: tuple[str, ...]) -> None:
    """Hold what is said by span against its stations."""
    for name, output, word in (("left", "M_lo", "_lo"), ("middle", "M_hi", "_hi"), ("right", "M_lo", "_lo")):
        for case in range(len(member.handed["cases"])):
            for own, of in ((f"M_{name}", "M"), (f"M_{name}{word}", output)):
                if found.by_row[own][span, case] != found.by_row[of][span, names.index(name), case]:
                    raise NotClosed(f"{own} of a span is not that of its station")


def _held(what: str, found: float, wanted: Any, scale: Any) -> None:
    close(what, [wanted, -found, scale, -scale])


def _ends(member: _Member, case: int, terms: dict[int, Any]) -> tuple[Any, Any]:
    """Return greatest and least of a force over all arrangements."""
    own = [terms[n] for n, (of, _) in enumerate(member.loadings) if of == case]
    if member.handed["placing"][case] != "patterned":
        return sum(own), sum(own)
    return sum(t for t in own if t > 0), sum(t for t in own if t < 0)


def _supports(member: _Member, found: Found) -> None:
    count, ends, by_row = member.count, member.ends, found.by_row
    for node, word in enumerate(member.hold):
        lengths = [
            member.lengths[span] * (1 if member.hangs(span) else 0.5) for span in (node - 1, node) if 0 <= span < count
        ]
        if "share" in by_row:
            share = sum(lengths) if word != "free" else 0
            _held("a support's share of the length", by_row["share"][node,], share, sum(member.lengths))
        force: dict[int, Any] = {}
        turn: dict[int, Any] = {}
        for n in range(len(member.loadings)):
            force[n], turn[n] = member.mp.mpf(0), ends[n][2 * node + 1] - ends[n][2 * node]
            if node < count:
                force[n] += member.start(n, node)[1]
            if node > 0:
                force[n] += member.forces(n, node - 1, lambda s: 1) - member.start(n, node - 1)[1]
        for case in range(len(member.handed["cases"])):
            for what, terms in (("R", force), ("T", turn)):
                own = [terms[n] for n, (of, _) in enumerate(member.loadings) if of == case]
                scale = member.force if what == "R" else member.moment
                for name, wanted in zip(("", "_hi", "_lo"), (sum(own), *_ends(member, case, terms)), strict=True):
                    _held(f"{what}{name} of a support", by_row[what + name][node, case], wanted, scale)


def _place(member: _Member, found: Found, span: int, row: int, name: str) -> None:
    """Hold the place of a station whose name says it."""
    handed, length = member.handed, member.lengths[span]
    left, right, cut = handed["face"][span], length - handed["face"][span + 1], handed["cut"][span]
    x = member.mp.mpf(found.by_row["x"][span, row])
    places = {
        "start": 0, "end": length, "middle": length / 2, "left": left, "right": right,
        "left_d": min(left + cut, right), "right_d": max(right - cut, left),
    }  # fmt: skip
    if name in places:
        _held("a station's place", found.by_row["x"][span, row], places[name], length)
    elif not -WITHIN * length <= x <= length * (1 + WITHIN):
        raise NotClosed("a station stands outside its span")


def _station(member: _Member, found: Found, key: tuple[int, int], name: str) -> None:
    """Hold shear, moment and deflection at a station by case."""
    span, x = key[0], member.mp.mpf(found.by_row["x"][key])
    past = name in ("right_d", "right", "end") or name.endswith(" +")
    at = {n: member.at(n, span, x, past=past) for n in range(len(member.loadings))}
    shears, moments = {n: v for n, (v, _, _) in at.items()}, {n: m for n, (_, m, _) in at.items()}
    scale = {"V": member.force, "M": member.moment}
    by_row = found.by_row
    for case in range(len(member.handed["cases"])):
        row = (*key, case)
        own = [n for n, (of, _) in enumerate(member.loadings) if of == case]
        for what, terms, other, beside in (("V", shears, "M", moments), ("M", moments, "V", shears)):
            _held(f"{what} at a station", by_row[what][row], sum(terms[n] for n in own), scale[what])
            for word, wanted in zip(("hi", "lo"), _ends(member, case, terms), strict=True):
                _held(f"{what}_{word} at a station", by_row[f"{what}_{word}"][row], wanted, scale[what])
                sure, unsure = member.mp.mpf(0), member.mp.mpf(0)
                for n in own:
                    faint = abs(terms[n]) <= _FAINT * scale[what]
                    acts = terms[n] > 0 if word == "hi" else terms[n] < 0
                    if member.handed["placing"][case] != "patterned":
                        sure += beside[n]
                    elif faint:
                        unsure += abs(beside[n])
                    elif acts:
                        sure += beside[n]
                gap = abs(by_row[f"{other}_with_{what}_{word}"][row] - sure)
                if gap > unsure + WITHIN * scale[other]:
                    raise NotClosed(f"{other} with {what}_{word} at a station is out")
        if "drop" in by_row:
            drops = {n: member.drop(n, span, x) for n in own}
            largest = member.mp.mpf(max(map(abs, by_row["drop"].values()), default=0.0))
            _held("the deflection at a station", by_row["drop"][row], sum(drops.values()), largest)


def _turning(member: _Member, found: Found, span: int, names: tuple[str, ...]) -> None:
    """Hold that no station has a factored moment beyond those named for it."""
    for name, word, sign in (("greatest", "M_hi", 1), ("least", "M_lo", -1)) if "factor" in member.handed else ():
        by_row, best = found.by_row[word], names.index(name)
        worst = []
        for row in (best, *range(len(names))):
            sums = [
                sign * sum(k * by_row[span, row, case] for case, k in enumerate(factors))
                for factors in member.handed["factor"]
            ]
            worst.append(max(sums, default=member.mp.mpf(0)))
        if max(worst) - worst[0] > WITHIN * max(map(abs, worst)):
            raise NotClosed(f"a moment is beyond the {name} of its span")
