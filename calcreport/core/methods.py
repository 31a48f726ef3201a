"""The methods of numerical analysis a template may ask for: what each takes and gives, and what proves its result.

Declares names, shapes and dimensions; planning holds templates against it, `methods` works them, the second path
confirms them by what stands under `proves`. A closed list.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcreport.core.inputs import InputKind
from calcreport.core.units import FORCE, LENGTH, NONE, STRESS, Dimension, divide, multiply


@dataclass(frozen=True, slots=True)
class Closure:
    """A sum that must come to nothing where the result is right."""

    name: str
    #: the sum in words, as the sheet says it
    says: str
    dimension: Dimension


@dataclass(frozen=True, slots=True)
class MethodKind:
    """The signature of a method."""

    takes: dict[str, InputKind]
    #: dimension by output
    gives: dict[str, Dimension]
    #: dimension by column, by set it makes
    sets: dict[str, dict[str, Dimension]] = field(default_factory=dict)
    proves: tuple[Closure, ...] = ()
    #: a sentence on what it assumes, printed under its inputs
    says: str = ""


def _number(says: str, dimension: Dimension = NONE, where: tuple[str, str] | None = None) -> InputKind:
    return InputKind("number", dimension, says=says, where=where)


def _row(rows: str, says: str, dimension: Dimension) -> InputKind:
    return InputKind("row number", dimension, rows=rows, says=says)


def _count(says: str, least: int, most: int) -> InputKind:
    return InputKind("number", says=says, count=(least, most))


def _word(says: str, *words: str) -> InputKind:
    return InputKind("word", words=words, says=says)


_AREA = multiply(LENGTH, LENGTH)
_MOMENT, _SPREAD = multiply(FORCE, LENGTH), divide(FORCE, LENGTH)

#: what a value found by another method adds to its name: the second value, and the difference
AGAIN, APART = "twin", "difference"
#: what a section by fibres takes besides its outline
_FIBRES: dict[str, InputKind] = {
    "layers": InputKind("set", says="steel {}"),
    "y": _row("layers", " at {} from the compressed face", LENGTH),
    "A_s": _row("layers", " of area {}", _AREA),
    "P": _number("axial force {}", FORCE),
    "stress": _word("concrete stress {}", "uniform", "parabola"),
    "f": _number(" of {}", STRESS),
    "share": _number(" over {} c", NONE, ("stress", "uniform")),
    "eps_0": _number(" level from a strain of {}", NONE, ("stress", "parabola")),
    "eps_cu": _number("strain {} at the compressed face", NONE),
    "f_y": _number("steel strength {}", STRESS),
    "E_s": _number(" and modulus {}", STRESS),
    "displaced": _word("displaced concrete {}", "deducted", "kept"),
    "fibres": _count("{} fibres", 10, 2000),
}  # fmt: skip
#: signature by name
METHODS: dict[str, MethodKind] = {
    "section by fibres": MethodKind(
        takes={"b": _number("width {}", LENGTH), "h": _number("depth {}", LENGTH), **_FIBRES},
        gives={"c": LENGTH, "M": _MOMENT, "C": FORCE, "F": FORCE, "eps_t": NONE},
        proves=(Closure("equilibrium", "force in the concrete + force in the steel − axial force", FORCE),),
        says="Plane sections; compression positive; the moment about mid-depth.",
    ),
    "section in bands by fibres": MethodKind(
        takes={
            "bands": InputKind("set", says="from the compressed face down, each {}"),
            "b": _row("bands", " of width {}", LENGTH),
            "to": _row("bands", " to a depth of {}", LENGTH),
            **_FIBRES,
        },
        gives={"c": LENGTH, "M": _MOMENT, "C": FORCE, "F": FORCE, "eps_t": NONE},
        proves=(Closure("equilibrium", "force in the concrete + force in the steel − axial force", FORCE),),
        says="Plane sections; compression positive; the moment about mid-depth.",
    ),
    "member on supports": MethodKind(
        takes={
            "spans": InputKind("set", says="each {}"),
            "l": _row("spans", " of length {}", LENGTH),
            "w": _row("spans", " under {}", _SPREAD),
            "EI": _number("one stiffness {}", multiply(_AREA, FORCE)),
            "left": _word("left end {}", "supported", "free"),
            "right": _word("right end {}", "supported", "free"),
            "parts": _count("{} parts a span", 1, 100),
        },
        gives={},
        sets={"stations": {"x": LENGTH, "V": FORCE, "M": _MOMENT}, "supports": {"x_R": LENGTH, "R": FORCE}},
        proves=(
            Closure("forces", "reactions − loads", FORCE),
            Closure("moments about the left end", "of reactions − of loads", _MOMENT),
            Closure("continuity", "largest difference of the slopes left and right of a support", NONE),
        ),
        says="Supports hold without settling; loads down, reactions up, sagging positive; x from the left end.",
    ),
}  # fmt: skip


def outputs_of(kind: str) -> tuple[str, ...]:
    """Return everything a method gives by name: values, sets and the columns of sets."""
    found = METHODS[kind]
    return (*found.gives, *found.sets, *(column for columns in found.sets.values() for column in columns))
