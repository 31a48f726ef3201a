"""The strength of a section with layers of steel, by fibres: axial force given, bending sought.

Numbers in base units in, `Result` out. Plane sections, the compressed face at a given strain. The depth is cut into
fibres of one thickness, and these where the width changes: a section is one band, or several below each other. Under a
uniform stress a fibre counts as far as the stressed depth covers it, about the middle of what is covered, so that the
sum jumps nowhere; under the parabola each fibre has the stress at its middle, an error that falls with the square
of the fibres. Steel is elastic up to its strength. No equation of any design code.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.methods.results import Handed, NoResult, Proof, Result, Spend, number, numbers
from calcreport.methods.roots import NoRoot, find_root

#: the neutral axis is sought between these shares of the depth
NEAREST, FARTHEST = 1e-4, 1e3
#: forces further out of balance than this share of the largest are no equilibrium
BALANCE = 1e-9


@dataclass(frozen=True, slots=True)
class Section:
    """A section with its materials; base units."""

    h: float
    #: width, upper and lower edge of every band, from the compressed face down
    bands: tuple[tuple[float, float, float], ...]
    layers: tuple[tuple[float, float], ...]
    #: 'uniform' or 'parabola'
    shape: str
    stress: float
    #: share of c under uniform stress, or strain at which the parabola meets its level
    measure: float
    eps_cu: float
    f_y: float
    modulus: float
    deducts: bool
    fibres: int

    def concrete(self, c: float) -> tuple[float, float]:
        """Return the force of the concrete and its moment about mid-depth."""
        thick = self.h / self.fibres
        force = moment = 0.0
        depth = self.measure * c if self.shape == "uniform" else c
        for width, upper, lower in self.bands:
            for place in range(int(upper / thick), self.fibres):
                top, bottom = max(upper, place * thick), min(lower, (place + 1) * thick)
                if top >= min(lower, depth):
                    break
                if self.shape == "uniform":
                    bottom = min(bottom, depth)
                elif (top + bottom) / 2 >= c:
                    break
                middle = (top + bottom) / 2
                stress = self.stress if self.shape == "uniform" else self.concrete_stress(c, middle)
                share = stress * max(bottom - top, 0.0) * width
                force += share
                moment += share * (self.h / 2 - middle)
        return force, moment

    def concrete_stress(self, c: float, y: float) -> float:
        """Return the stress of the concrete at a depth."""
        if self.shape == "uniform":
            return self.stress if y < self.measure * c else 0.0
        strain = self.eps_cu * (c - y) / c
        if strain <= 0.0:
            return 0.0
        part = min(strain / self.measure, 1.0)
        return self.stress * part * (2.0 - part)

    def steel(self, c: float) -> tuple[float, float]:
        """Return the force of the steel and its moment about mid-depth; compression is positive."""
        force = moment = 0.0
        for y, area in self.layers:
            stress = max(-self.f_y, min(self.f_y, self.modulus * self.eps_cu * (c - y) / c))
            if self.deducts:
                stress -= self.concrete_stress(c, y)
            force += area * stress
            moment += area * stress * (self.h / 2 - y)
        return force, moment


def section_by_fibres(handed: Handed, spend: Spend) -> Result:
    """Return the neutral axis, the moment and the forces; raises `NoResult`."""
    b, h = number(handed, "b"), number(handed, "h")
    return _strength(_section(handed, h, ((b, 0.0, h),), "b" if b <= 0 else ""), number(handed, "P"), spend)


def section_in_bands_by_fibres(handed: Handed, spend: Spend) -> Result:
    """Return the same of a section whose width changes with depth; raises `NoResult`."""
    bands, upper = [], 0.0
    for width, lower in zip(numbers(handed, "b"), numbers(handed, "to"), strict=True):
        if width <= 0 or lower <= upper:
            raise NoResult("every band needs a width, and a lower edge below that of the band before")
        bands.append((width, upper, lower))
        upper = lower
    return _strength(_section(handed, upper, tuple(bands), ""), number(handed, "P"), spend)


def _strength(section: Section, axial: float, spend: Spend) -> Result:
    """Return the result for a section under an axial force."""

    def unbalanced(c: float) -> float:
        spend(section.fibres + len(section.bands) + len(section.layers))
        return section.concrete(c)[0] + section.steel(c)[0] - axial

    try:
        c, _ = find_root(unbalanced, NEAREST * section.h, FARTHEST * section.h)
    except NoRoot as error:
        raise NoResult("no neutral axis gives equilibrium: the axial force is beyond what the section bears") from error
    (concrete, concrete_moment), (steel, steel_moment) = section.concrete(c), section.steel(c)
    residual, largest = concrete + steel - axial, max(abs(concrete), abs(steel), abs(axial))
    if abs(residual) > BALANCE * largest:
        raise NoResult("the forces do not balance to one part in 1,000,000,000")
    outputs = {
        "c": c, "M": concrete_moment + steel_moment, "C": concrete, "F": steel,
        "eps_t": section.eps_cu * (max(y for y, _ in section.layers) - c) / c,
    }  # fmt: skip
    return Result(outputs, (Proof(residual, largest),))


def _section(handed: Handed, h: float, bands: tuple[tuple[float, float, float], ...], wrong: str) -> Section:
    """Return the section handed over; a size that is none is no section."""
    layers = tuple(zip(numbers(handed, "y"), numbers(handed, "A_s"), strict=True))
    shape = str(handed["stress"])
    measure = number(handed, "share" if shape == "uniform" else "eps_0")
    sizes = {"h": h, **{name: number(handed, name) for name in ("f", "eps_cu", "f_y", "E_s")}}
    wrong = wrong or next((name for name, size in sizes.items() if size <= 0), "")
    if wrong or measure <= 0 or (shape == "uniform" and measure > 1):
        raise NoResult(f"a section needs {wrong or 'a stressed depth'} above zero")
    if not layers:
        raise NoResult("a section needs a layer of steel")
    if any(not 0 <= y <= h or area < 0 for y, area in layers):
        raise NoResult("a layer of steel stands outside the section")
    return Section(h, bands, layers, shape, sizes["f"], measure, sizes["eps_cu"], sizes["f_y"], sizes["E_s"],
                   handed["displaced"] == "deducted", int(number(handed, "fibres")))  # fmt: skip
