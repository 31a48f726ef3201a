"""Confirms the result of a method from what it was handed, in thirty digits; nothing is searched again.

Numbers in base units and what the first path found in; silence, or `NotClosed`. Shares no code with `methods`.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable
from typing import Any

from calcreport.second.closing import Found, close
from calcreport.second.continuous import member_on_supports


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
    close("equilibrium", [whole, steel, -handed["P"]])
    close("the force in the concrete", [whole, -mp.mpf(found.outputs["C"])])
    close("the force in the steel", [*(force for force, _ in bars), -mp.mpf(found.outputs["F"])])
    moments = [force * (half - y) for force, y in (*forces, *bars)]
    close("the moment", [*moments, -mp.mpf(found.outputs["M"])])
    strains = [handed["eps_cu"] * max(handed["y"]) / c, -handed["eps_cu"], -mp.mpf(found.outputs["eps_t"])]
    close("the strain in the farthest layer", strains)


CLOSURES: dict[str, Callable[[dict[str, Any], Found, Any], None]] = {
    "section by fibres": _section_by_fibres,
    "section in bands by fibres": _section_by_fibres,
    "member on supports": member_on_supports,
}
