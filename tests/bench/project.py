"""Projects to be timed: simple beams with the sections they need, and one with load combinations of many sections.

A number of beams and a seed in, the text of a project file out. Sizes are whole trade sizes; every requirement of the
templates is met, so that each calculation runs to its end. Knows nothing of the program but its file.
"""

from __future__ import annotations

from random import Random

_HEAD = """project: {{title: {title}, number: T-{seed}, address: 'lot 1'}}
office: {{name: (office name), contact: (telephone and address)}}
status: for review
date: 2026-11-16
units: us
codes:
  adopted: {{name: IBC, year: 2024, amendments: none}}
  concrete: ACI 318-19
  loads: ASCE/SEI 7-22
criteria:
  risk category: II
  seismic design category: B
  floor live load: 125 psf
  live-load deflection limit: span/360
revisions:
  - {{number: 1, date: 2026-11-16, why: first submittal}}
materials:
  C4: {{f_c: 4000 psi, w_c: 150 pcf}}
  C5: {{f_c: 5000 psi, w_c: 150 pcf}}
  G60: {{f_y: 60 ksi, E_s: 29000 ksi}}
assumptions:
  - {{says: Partitions weigh no more than the allowance., to be verified: yes, by: architect}}
  - {{says: Beams are laterally held by the slab., to be verified: no}}
elsewhere:
  - {{what: columns and footings, where: 'package 2, not issued'}}
calculations:
"""

_LOADS = """  - mark: FL{place}
    title: Loads and moments, beam {place}
    template: statics/simple-beam
    concrete: {concrete}
    given:
      l: {span} ft 6 in
      b: {width} in
      h: {depth} in
      b_t: {strip} ft
      q_D: {{value: {dead} psf, source: '6 in. slab 75, finishes and partitions {rest}'}}
      q_L: {{value: {live} psf, source: 'ASCE/SEI 7-22 Table 4.3-1'}}
      w_Da: none
      w_La: none
      P_D: none
      P_L: none
      x_P: none
"""

_SECTION = """  - mark: B{place}
    title: Beam {place}, midspan
    template: aci318/beam-flexure
    concrete: {concrete}
    bars: G60
    given:
      b: {width} in
      h: {depth} in
      c_c: 1.5 in
      stirrup: '#4'
      face: bottom
      layer: [{{name: first, steel: {count}-#{bar}}}]
      c_l: none
      M_u: {moment}
      d_agg: 3/4 in
      rounded_eps_ty: no
      third_more: {third}
      in_sfrs: no
"""


def beams(count: int, seed: int) -> str:
    """Return a project of `count` simple beams, each with the section at its greatest moment: two calculations."""
    draw = Random(seed)
    parts = [_HEAD.format(title="Timed beams", seed=seed)]
    for place in range(1, count + 1):
        sizes = _sizes(draw, place)
        parts += [_LOADS.format(**sizes), _SECTION.format(**sizes, moment=f"{{from: FL{place}.M_u}}")]
    return "".join(parts)


def section(seed: int) -> str:
    """Return a project of one calculation: a section with its moment given."""
    draw = Random(seed)
    return _HEAD.format(title="Timed section", seed=seed) + _SECTION.format(**_sizes(draw, 1), moment="220 kip*ft")


def combinations(sections: int, seed: int) -> str:
    """Return a project of one calculation: strength combinations of many sections, three effects each."""
    draw = Random(seed)
    loads = ("D", "L", "L_r", "S", "W+", "W-", "E+", "E-")
    marks = [f"s{place}" for place in range(1, sections + 1)]
    lines = [
        _HEAD.format(title="Timed rows", seed=seed)
        + "  - mark: LC1\n    title: Combinations\n    template: asce7/strength-combinations\n    given:",
        f"      section: [{', '.join(f'{{name: {mark}}}' for mark in marks)}]",
        f"      load: [{', '.join(f'{{name: {load}}}' for load in loads)}]",
        "      k_L: 0.5",
    ]
    for symbol, unit in (("P", "kip"), ("V", "kip"), ("M", "kip*ft")):
        lines.append(f"      {symbol}:")
        for mark in marks:
            cells = ", ".join(f"{load}: {draw.randint(-90, 90)} {unit}" for load in loads)
            lines.append(f"        {mark}: {{{cells}}}")
    return "\n".join(lines) + "\n"


def _sizes(draw: Random, place: int) -> dict[str, str]:
    """Draw one beam: its section, span, loads and bars; steel near three quarters of a percent of the section."""
    width = draw.choice((14, 16, 18, 20))
    depth = draw.choice((24, 26, 28, 30, 32))
    bar, area = draw.choice((("7", 0.60), ("8", 0.79), ("9", 1.00)))
    dead = draw.choice((85, 90, 95, 100, 105))
    return {
        "place": str(place),
        "concrete": draw.choice(("C4", "C5")),
        "width": str(width),
        "depth": str(depth),
        "span": str(draw.randint(18, 26)),
        "strip": str(draw.randint(7, 11)),
        "dead": str(dead),
        "rest": str(dead - 75),
        "live": str(draw.choice((50, 80, 100, 125))),
        "bar": bar,
        "count": str(max(3, min((width - 4) // 2, round(0.0075 * width * depth / area)))),
        "third": draw.choice(("yes", "no")),
    }
