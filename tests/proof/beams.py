"""Random projects of simple and cantilever beams and the sections they need, in either system of units, from a seed.

Out: the text of a project file. Sizes are drawn so that every requirement of the templates is met (bars fit, all
layers yield, the moment is positive); checks may come out either way. Knows nothing of the program but its file.
"""

from __future__ import annotations

from dataclasses import dataclass
from random import Random

HEAD = """project: {{title: Proof beams {system}, number: P-{seed}, address: 'lot 1'}}
office: {{name: (office name), contact: (telephone and address)}}
status: for review
date: 2026-11-16
units: {system}
codes:
  adopted: {{name: IBC, year: 2024, amendments: none}}
  concrete: {concrete}
  loads: ASCE/SEI 7-22
criteria:
  risk category: II
  seismic design category: B
revisions:
  - {{number: 1, date: 2026-11-16, why: first submittal}}
materials:
"""


@dataclass(frozen=True, slots=True)
class System:
    """What is drawn in one system of units: lengths in inches and feet, or millimetres and metres."""

    name: str
    concrete: str
    length: str
    span: str
    strengths: tuple[str, ...]
    bars: tuple[tuple[str, str], ...]
    weight: str
    #: bar names with area, for a steel ratio that yields
    sizes: tuple[tuple[str, float], ...]
    stirrups: tuple[str, ...]
    joint: str
    widths: tuple[float, float, float]
    #: depth over width, lowest and highest, is the same in both; one step of depth
    step: float
    covers: tuple[str, ...]
    aggregates: tuple[str, ...]
    layers: tuple[str, ...]


US = System(
    "us", "ACI 318-19", "in", "ft",
    ("3000 psi", "4000 psi", "4500 psi", "5000 psi", "6000 psi", "8500 psi"),
    (("60 ksi", "29000 ksi"), ("75 ksi", "29000 ksi"), ("80 ksi", "29000 ksi")),
    "150 pcf",
    (("#5", 0.31), ("#6", 0.44), ("#7", 0.60), ("#8", 0.79), ("#9", 1.00), ("#10", 1.27), ("#11", 1.56)),
    ("#3", "#4"), "{count}-{size}", (10, 30, 1), 1, ("1.5 in", "2 in", "1 7/8 in"),
    ("3/4 in", "1 in", "3/8 in"), ("1 in", "1.5 in"),
)  # fmt: skip

SI = System(
    "si", "ACI 318M-19", "mm", "m",
    ("21 MPa", "28 MPa", "30 MPa", "35 MPa", "42 MPa", "60 MPa"),
    (("420 MPa", "200000 MPa"), ("500 MPa", "200000 MPa"), ("550 MPa", "200000 MPa")),
    "23.6 kN/m^3",
    (("16", 199.0), ("19", 284.0), ("22", 387.0), ("25", 510.0), ("29", 645.0), ("32", 819.0)),
    ("No. 10", "No. 13"), "{count} No. {size}", (250, 750, 10), 25, ("40 mm", "50 mm", "48 mm"),
    ("19 mm", "25 mm", "9.5 mm"), ("25 mm", "38 mm"),
)  # fmt: skip


def project(system: System, count: int, seed: int) -> str:
    """Return a project of `count` simple beams, each with the section at its greatest moment."""
    draw = Random(f"{system.name} {seed}")
    parts = [HEAD.format(system=system.name, concrete=system.concrete, seed=seed)]
    for place, strength in enumerate(system.strengths):
        parts.append(f"  C{place}: {{f_c: {strength}, w_c: {system.weight}}}\n")
    for place, (strength, modulus) in enumerate(system.bars):
        parts.append(f"  G{place}: {{f_y: {strength}, E_s: {modulus}}}\n")
    parts.append("calculations:\n")
    for place in range(1, count + 1):
        parts.append(_pair(system, draw, place))
    return "".join(parts)


def _pair(system: System, draw: Random, place: int) -> str:
    low, high, step = system.widths
    width = low + step * draw.randint(0, round((high - low) / step))
    depth = system.step * round(width * draw.uniform(1.3, 2.4) / system.step)
    concrete = f"C{draw.randrange(len(system.strengths))}"
    cantilever = draw.random() < 0.25
    return _beam(system, draw, place, (width, depth), concrete, cantilever) + _section(
        system, draw, place, (width, depth), concrete, "top" if cantilever else "bottom"
    )


def _beam(system: System, draw: Random, place: int, size: tuple[float, float], concrete: str, cantilever: bool) -> str:
    width, depth = size
    foot = 1.0 if system.span == "ft" else 0.3048
    slender = draw.uniform(3, 5.5) if cantilever else draw.uniform(8, 14)
    span = round(depth * (1 / 12 if system.span == "ft" else 1 / 1000) * slender, draw.choice((0, 1, 2)))
    point = draw.random() < 0.5
    area, force, line = ("psf", "kip", "kip/ft") if system.span == "ft" else ("kPa", "kN", "kN/m")
    scale = 1.0 if system.span == "ft" else 4.448
    dead = draw.choice((95, 62.5, 80, 71)) if system.span == "ft" else draw.choice((4.5, 3.0, 3.83, 4.1))
    live = draw.choice((40, 50, 100, 125)) if system.span == "ft" else draw.choice((1.92, 2.4, 4.79, 6.0))
    x_p = round(span * draw.uniform(0.2, 0.8), 2)
    given = {
        "l": f"{span} {system.span}",
        "b": f"{width:g} {system.length}",
        "h": f"{depth:g} {system.length}",
        "b_t": f"{round(draw.uniform(6, 14) * foot, 1)} {system.span}",
        "q_D": f"{{value: {dead} {area}, source: slab and finishes}}",
        "q_L": f"{{value: {live} {area}, source: 'ASCE/SEI 7-22 Table 4.3-1'}}",
        "w_Da": f"{round(draw.uniform(0.05, 0.6) * scale, 2)} {line}" if draw.random() < 0.4 else "none",
        "w_La": "none",
        "P_D": f"{round(draw.uniform(2, 12) * scale, 1)} {force}" if point else "none",
        "P_L": f"{round(draw.uniform(2, 12) * scale, 1)} {force}" if point else "none",
        "x_P": f"{x_p} {system.span}" if point else "none",
    }
    template = "statics/cantilever-beam" if cantilever else "statics/simple-beam"
    return _calculation(f"FL{place}", template, concrete, None, given)


def _section(system: System, draw: Random, place: int, size: tuple[float, float], concrete: str, face: str) -> str:
    """Give steel between 0.4 and 1.3 % of the section, so that every layer yields."""
    width, depth = size
    grade = draw.randrange(len(system.bars))
    wanted = width * depth * draw.uniform(0.004, 0.0105)
    sized = [(size, area) for size, area in system.sizes if 2 <= wanted / area <= 9]
    bar, area = draw.choice(sized) if sized else system.sizes[-1]
    count = max(2, round(wanted / area))
    rows = (count - count // 3, count // 3) if count >= 6 and draw.random() < 0.5 else (count,)
    names = ("first", "second")
    layers = ", ".join(
        f"{{name: {name}, steel: {system.joint.format(count=bars, size=bar)}}}"
        for name, bars in zip(names, rows, strict=False)
    )
    given = {
        "b": f"{width:g} {system.length}",
        "h": f"{depth:g} {system.length}",
        "c_c": draw.choice(system.covers),
        "stirrup": f"'{draw.choice(system.stirrups)}'",
        "face": face,
        "layer": f"[{layers}]",
        "c_l": draw.choice(system.layers) if len(rows) > 1 else "none",
        "M_u": f"{{from: FL{place}.M_u}}",
        "d_agg": draw.choice(system.aggregates),
        "rounded_eps_ty": draw.choice(("yes", "no")) if grade == 0 else "no",
        "third_more": draw.choice(("yes", "no")),
        "in_sfrs": draw.choice(("yes", "no")),
    }
    return _calculation(f"B{place}", "aci318/beam-flexure", concrete, f"G{grade}", given)


def _calculation(mark: str, template: str, concrete: str, bars: str | None, given: dict[str, str]) -> str:
    title = "Loads and moments" if bars is None else "Section at the greatest moment"
    lines = [f"  - mark: {mark}", f"    title: {title}, beam {mark}", f"    template: {template}"]
    lines.append(f"    concrete: {concrete}")
    if bars is not None:
        lines.append(f"    bars: {bars}")
    lines.append("    given:")
    lines += [f"      {name}: {value}" for name, value in given.items()]
    return "\n".join(lines) + "\n"


def edges() -> str:
    """Return a project of sections at the edges: ratios a hair from one, no moment, no room, hogging, few bars.

    The design strength of the first sections is 78.995 kip*ft: a = 1.20 (60) / (0.85 (4) 10) = 2.1176 in.,
    d = 18 - 1.5 - 0.375 - 0.875 / 2 = 15.6875 in., 0.90 (1.20) 60 (d - a / 2) / 12.
    """
    head = HEAD.format(system="us", concrete=US.concrete, seed="edges")
    materials = "  C0: {f_c: 4000 psi, w_c: 150 pcf}\n  G0: {f_y: 60 ksi, E_s: 29000 ksi}\n"
    plain = "[{name: first, steel: 2-#7}]"
    parts = [
        _edge("E1", "a hair over", "79 kip*ft", plain),
        _edge("E2", "less than a hair over", "78.995 kip*ft", plain),
        _edge("E3", "less than a hair under", "78.9948 kip*ft", plain),
        _edge("E4", "no moment", "0 kip*ft", plain, third_more="yes"),
        _edge("E5", "hogging", "-52.25 kip*ft", plain, face="top", third_more="yes"),
        _edge("E6", "no room in the first layer, too little in the second", "120 kip*ft",
              "[{name: first, steel: 20-#5}, {name: second, steel: 9-#5}]", b="14 in", h="90 in", c_l="1 in"),
        _edge("E7", "far more steel than tension control allows", "60 kip*ft",
              "[{name: first, steel: 2-#11}]", b="9 in"),
        _edge("E8", "no room at all", "120 kip*ft", "[{name: first, steel: 25-#5}]", b="14 in", h="90 in"),
        _edge("G", "Girder whose title begins like its mark", "40 kip*ft", plain, d_agg="1 1/2 in"),
    ]  # fmt: skip
    return head + materials + "calculations:\n" + "".join(parts)


def _edge(mark: str, title: str, moment: str, layers: str, **other: str) -> str:
    given = {
        "b": "10 in", "h": "18 in", "c_c": "1.5 in", "stirrup": "'#3'", "face": "bottom", "layer": layers,
        "c_l": "none", "M_u": moment, "d_agg": "3/4 in", "rounded_eps_ty": "no", "third_more": "no",
        "in_sfrs": "no",
    }  # fmt: skip
    text = _calculation(mark, "aci318/beam-flexure", "C0", "G0", given | other)
    return text.replace(f"Section at the greatest moment, beam {mark}", title)
