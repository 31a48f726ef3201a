"""Confirms the result of a method from what it was handed, by residuals in thirty digits; nothing is searched again.

Numbers in base units and what the first path found in; silence, or `NotClosed`. Shares no code with `methods`.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

#: residuals beyond this share of their largest term do not close
WITHIN = 1e-9


class NotClosed(Exception):
    """What the first path found does not satisfy its own equations; the words say which."""


@dataclass(frozen=True, slots=True)
class Found:
    """What a method of the first path came to, base units: outputs, and row names with columns by set."""

    outputs: dict[str, float]
    sets: dict[str, tuple[tuple[str, ...], dict[str, tuple[float, ...]]]]


def _close(what: str, terms: list[Any]) -> None:
    """Hold a sum of terms against nothing."""
    gap, largest = abs(sum(terms)), max(abs(term) for term in terms)
    if gap > WITHIN * largest:
        raise NotClosed(f"{what} is out by {float(gap / largest):.1e}")


def _section_by_fibres(handed: dict[str, Any], found: Found, mp: Any) -> None:
    """Equilibrium at the neutral axis found, and the moment there, from strains at every fibre."""
    c = mp.mpf(found.outputs["c"])
    widths, edges = (handed["b"], handed["to"]) if "to" in handed else ([handed["b"]], [handed["h"]])
    depth = edges[-1]
    half = depth / 2
    uniform, count = handed["stress"] == "uniform", int(handed["fibres"])

    def concrete(y: Any) -> Any:
        if uniform:
            return handed["f"] if y < handed["share"] * c else mp.mpf(0)
        part = max(mp.mpf(0), min(mp.mpf(1), handed["eps_cu"] * (1 - y / c) / handed["eps_0"]))
        return handed["f"] * (1 - (1 - part) ** 2)

    forces: list[tuple[Any, Any]] = []
    cuts = sorted({depth * place / count for place in range(count)} | {mp.mpf(edge) for edge in edges})
    stressed = handed["share"] * c if uniform else depth
    for upper, lower in itertools.pairwise(cuts):
        width = next(width for width, edge in zip(widths, edges, strict=True) if edge >= lower)
        end = max(upper, min(lower, stressed))
        middle = (upper + end) / 2
        forces.append(((handed["f"] if uniform else concrete(middle)) * width * (end - upper), middle))
    whole = sum(force for force, _ in forces)
    bars: list[tuple[Any, Any]] = []
    for y, area in zip(handed["y"], handed["A_s"], strict=True):
        stress = handed["E_s"] * handed["eps_cu"] * (1 - y / c)
        stress = mp.sign(stress) * min(abs(stress), handed["f_y"])
        bars.append((area * (stress - (concrete(y) if handed["displaced"] == "deducted" else 0)), y))
    steel = sum(force for force, _ in bars)
    _close("equilibrium", [whole, steel, -handed["P"]])
    _close("the force in the concrete", [whole, -mp.mpf(found.outputs["C"])])
    _close("the force in the steel", [*(force for force, _ in bars), -mp.mpf(found.outputs["F"])])
    moments = [force * (half - y) for force, y in (*forces, *bars)]
    _close("the moment", [*moments, -mp.mpf(found.outputs["M"])])
    strains = [handed["eps_cu"] * max(handed["y"]) / c, -handed["eps_cu"], -mp.mpf(found.outputs["eps_t"])]
    _close("the strain in the farthest layer", strains)


def _member_on_supports(handed: dict[str, Any], found: Found, mp: Any) -> None:
    """Shears and moments from the reactions by statics, and no deflection at any support by double integration."""
    lengths, loads = handed["l"], handed["w"]
    starts = [mp.fsum(lengths[:n]) for n in range(len(lengths) + 1)]
    reactions = [(mp.mpf(x), mp.mpf(force)) for x, force in zip(*found.sets["supports"][1].values(), strict=True)]
    held = starts[0 if handed["left"] == "supported" else 1 : None if handed["right"] == "supported" else -1]
    for (x, _), place in zip(reactions, held, strict=True):
        _close("a support's place", [x, -place, starts[-1], -starts[-1]])
    whole = [load * length for load, length in zip(loads, lengths, strict=True)]
    _close("the sum of forces", [*(force for _, force in reactions), *(-load for load in whole)])
    arms = [-load * (start + length / 2) for load, start, length in zip(whole, starts, lengths, strict=False)]
    _close("the sum of moments", [*(force * x for x, force in reactions), *arms])
    _stations(handed, found, starts, reactions, mp)

    def terms(x: Any) -> list[Any]:
        """Return what adds up to stiffness times deflection at a place, but for a straight line."""
        up = [force * max(x - at, mp.mpf(0)) ** 3 / 6 for at, force in reactions]
        ends = zip(loads, starts, starts[1:], strict=False)
        return up + [-load * (max(x - a, mp.mpf(0)) ** 4 - max(x - b, mp.mpf(0)) ** 4) / 24 for load, a, b in ends]

    first, last = reactions[0][0], reactions[-1][0]
    low, high = mp.fsum(terms(first)), mp.fsum(terms(last))
    for x, _ in reactions[1:-1]:
        line = low + (high - low) * (x - first) / (last - first)
        _close("the deflection at a support", [*terms(x), -line, high, -high])


def _stations(handed: dict[str, Any], found: Found, starts: list[Any], reactions: list[Any], mp: Any) -> None:
    """Hold place, shear and moment of every station against the forces left of it."""
    columns, parts = found.sets["stations"][1], int(handed["parts"])
    shear_scale = mp.fsum(abs(force) for _, force in reactions)
    for number, (x, shear, moment) in enumerate(zip(columns["x"], columns["V"], columns["M"], strict=True)):
        span, part = divmod(number, parts + 1)
        place = starts[span] + handed["l"][span] * part / parts
        left = [(at, force) for at, force in reactions if at <= starts[span] * (1 + mp.mpf("1e-12"))]
        spread = [(w, handed["l"][n], starts[n]) for n, w in enumerate(handed["w"][:span])]
        spread.append((handed["w"][span], place - starts[span], starts[span]))
        _close("a station's place", [place, -mp.mpf(x), starts[-1], -starts[-1]])
        forces = [force for _, force in left] + [-w * length for w, length, _ in spread]
        _close("a shear", [*forces, -mp.mpf(shear), shear_scale, -shear_scale])
        turns = [force * (place - at) for at, force in left]
        turns += [-w * length * (place - start - length / 2) for w, length, start in spread]
        scale = shear_scale * starts[-1]
        _close("a moment", [*turns, -mp.mpf(moment), scale, -scale])


CLOSURES: dict[str, Callable[[dict[str, Any], Found, Any], None]] = {
    "section by fibres": _section_by_fibres,
    "section in bands by fibres": _section_by_fibres,
    "member on supports": _member_on_supports,
}
