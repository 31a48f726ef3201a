"""Stations of a member on supports: where they stand, what shear and moment are there by load case.

A solved member in, places and values by station out. Patterned cases act on any spans: the greatest moment is the sum
of what every span alone adds to it.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from calcreport.core.late import load
from calcreport.methods.members import Member, Solved, curvature_terms, summed
from calcreport.methods.results import Handed, NoResult, rows_of
from calcreport.methods.spans import Loads, turning_places

#: stations closer than this share of a span are one
CLOSE = 1e-9


#: places closer than this share of a span are one
SAME = 1e-12


@dataclass(frozen=True, slots=True)
class Station:
    """A place in a span; `past` counts a point load that stands there as left of it."""

    name: str
    x: float
    past: bool = False


@dataclass(frozen=True, slots=True)
class Forces:
    """Shear and moment at a station, by loading."""

    shear: Any
    moment: Any


def forces_at(member: Member, solved: Solved, span: int, station: Station) -> Forces:
    """Return shear and moment of every loading at a station; terms that cancel to the last bits are nothing."""
    numpy = load("numpy")
    x, count = station.x, len(member.loadings)
    own_shear, own_moment = numpy.zeros(count), numpy.zeros(count)
    for which, loading in enumerate(member.loadings):
        if span in loading.on:
            own_shear[which] = loading.on[span].effect(x, 0, past=station.past)
            own_moment[which] = loading.on[span].effect(x, 1)
    left, shear = solved.left[:, span], solved.shear[:, span]
    return Forces(summed([shear, -own_shear]), summed([left, shear * x, -own_moment]))


def stations_of(
    member: Member, solved: Solved, handed: Handed, parts: int, span: int, weights: list[tuple[float, ...]]
) -> list[Station]:
    """Return the stations of a span from left to right: faces, cuts, parts, loads, greatest and least moment."""
    length = member.lengths[span]
    face, cut = handed["face"], handed["cut"][span]
    left, right = face[span], length - face[span + 1]
    if min(face[span], face[span + 1], cut) < 0 or left >= right:
        raise NoResult(f"span number {span + 1} has no length between the faces of its supports")
    found = [Station("start", 0.0), Station("left", left), Station("left_d", min(left + cut, right))]
    found.append(Station("middle", length / 2))
    for part in range(1, parts):
        if 2 * part != parts:
            found.append(Station(f"{round(part / parts, 4):g} l", length * part / parts))
    # the support is on the right of these: a point load there acts between them and the span
    found.append(Station("right_d", max(right - cut, left), past=True))
    found += [Station("right", right, past=True), Station("end", length, past=True)]
    for row, name in enumerate(rows_of(handed, "points")):
        if handed["n_P"][row] == span + 1:
            at = min(handed["s_P"][row], length)
            found += [Station(f"{name} -", at), Station(f"{name} +", at, past=True)]
    for row, name in enumerate(rows_of(handed, "patches")):
        if handed["n_s"][row] == span + 1:
            ends = (("from", handed["s_1"][row]), ("to", min(handed["s_2"][row], length)))
            found += [Station(f"{name} {word}", place) for word, place in ends]
    for name, sign in (("greatest", 1.0), ("least", -1.0)) if weights else ():
        found.append(Station(name, _turning(member, solved, span, weights, sign, parts)))
    # a place within the last bits of a point load is that load's place
    loads = [one.x for one in found if one.past and one.name.endswith(" +")]
    near = [next((at for at in loads if abs(at - one.x) <= SAME * length), one.x) for one in found]
    found = [Station(one.name, at, one.past) for one, at in zip(found, near, strict=True)]
    # what stands just left of a point load comes before what stands just right of it
    return sorted(found, key=lambda one: (one.x, one.past))


def _turning(
    member: Member, solved: Solved, span: int, weights: list[tuple[float, ...]], sign: float, parts: int
) -> float:
    """Return where the greatest (or least) moment of all combinations and arrangements stands.

    `weights` has the factor of every loading for each combination. From every arrangement that is worst somewhere on
    a grid: the place that is worst for it, then the arrangement that is worst there, until neither moves.
    """
    length = member.lengths[span]
    breaks = {place for loading in member.loadings for place in loading.on.get(span, Loads()).breaks()}
    places = sorted({0.0, length, *breaks, *(length * part / parts for part in range(1, parts))})
    at = {place: forces_at(member, solved, span, Station("", place)).moment for place in places}
    best, where = -math.inf, 0.0
    for factors in weights:
        tried: set[tuple[float, ...]] = set()
        for place in places:
            value, x, acting = -math.inf, place, _acting(member, factors, at[place], sign)
            while acting not in tried:
                tried.add(acting)
                moved, further = _worst_place(member, solved, span, acting, sign, places)
                if moved <= value + 1e-14 * abs(value):
                    break
                value, x = moved, further
                acting = _acting(member, factors, forces_at(member, solved, span, Station("", x)).moment, sign)
            if value > best:
                best, where = value, x
    return where


def _acting(member: Member, factors: tuple[float, ...], moment: Any, sign: float) -> tuple[float, ...]:
    """Return the factors of what acts in the worst arrangement at a place: all of a case, or spans that add."""
    return tuple(
        factor if not loading.patterned or sign * factor * float(m) > 0 else 0.0
        for loading, factor, m in zip(member.loadings, factors, moment, strict=True)
    )


def _worst_place(
    member: Member, solved: Solved, span: int, acting: tuple[float, ...], sign: float, places: list[float]
) -> tuple[float, float]:
    """Return the greatest moment of one arrangement along a span, times the sign, and its place."""
    numpy = load("numpy")
    weights = numpy.array(acting)

    def moment(x: float) -> float:
        return sign * float(forces_at(member, solved, span, Station("", x)).moment @ weights)

    def shear(x: float, *, past: bool) -> float:
        return float(forces_at(member, solved, span, Station("", x, past)).shear @ weights)

    found = [(moment(x), x) for x in places]
    for start, end in pairwise(places):
        three = shear(start, past=True), shear((start + end) / 2, past=False), shear(end, past=False)
        found += [(moment(x), x) for x in turning_places(three, start, end)]
    return max(found, key=lambda one: one[0])


def drop_at(member: Member, solved: Solved, span: int, x: float) -> list[float]:
    """Return the deflection (down) of every loading at a place."""
    length, side = member.lengths[span], member.hangs(span)
    found = []
    for which in range(len(member.loadings)):
        turned, moved = curvature_terms(member, solved, which, span, length)
        there = curvature_terms(member, solved, which, span, x)[1]
        if side == "right":
            slope, start = float(solved.slopes[which, span]), 0.0
        elif side == "left":
            slope = float(solved.slopes[which, span + 1]) - turned
            start = -(slope * length + moved)
        else:
            slope, start = -moved / length, 0.0
        found.append(-(start + slope * x + there))
    return found
