"""The methods of numerical analysis a template may ask for: what each takes and gives, and what proves its result.

Declares names, shapes and dimensions; planning holds templates against it, `methods` works them, the second path
confirms them by what stands under `proves`. A closed list.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcreport.core.inputs import HOLDS, InputKind
from calcreport.core.units import FORCE, LENGTH, NONE, STRESS, Dimension, divide, multiply


@dataclass(frozen=True, slots=True)
class Closure:
    """A sum that must come to nothing where the result is right."""

    name: str
    #: the sum in words, as the sheet says it
    says: str
    dimension: Dimension


@dataclass(frozen=True, slots=True)
class OutputKind:
    """A number a method gives, or one for every row or group of rows of sets handed over or made, outer first."""

    dimension: Dimension
    over: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class MethodKind:
    """The signature of a method."""

    takes: dict[str, InputKind]
    #: output by name
    gives: dict[str, OutputKind]
    #: sets it makes, each with the sets handed over of whose every row it has rows of its own
    sets: dict[str, tuple[str, ...]] = field(default_factory=dict)
    proves: tuple[Closure, ...] = ()
    #: a sentence on what it assumes, printed under its inputs
    says: str = ""


def _number(says: str, dimension: Dimension = NONE, where: tuple[str, str] | None = None) -> InputKind:
    return InputKind("number", dimension, says=says, where=where)


def _row(rows: str, says: str, dimension: Dimension = NONE) -> InputKind:
    return InputKind("row number", dimension, rows=tuple(rows.split()), says=says)


def _row_word(rows: str, says: str, *words: str) -> InputKind:
    return InputKind("row word", rows=tuple(rows.split()), words=words, says=says)


def _over(sets: str, dimension: Dimension, *names: str) -> dict[str, OutputKind]:
    """Return outputs that have the same sets and dimension."""
    return {name: OutputKind(dimension, tuple(sets.split())) for name in names}


def _count(says: str, least: int, most: int) -> InputKind:
    return InputKind("number", says=says, count=(least, most))


def _word(says: str, *words: str) -> InputKind:
    return InputKind("word", words=words, says=says)


_AREA = multiply(LENGTH, LENGTH)
_MOMENT, _SPREAD = multiply(FORCE, LENGTH), divide(FORCE, LENGTH)

#: what a section by fibres comes to
_SECTION = _over("", LENGTH, "c") | _over("", _MOMENT, "M") | _over("", FORCE, "C", "F") | _over("", NONE, "eps_t")

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
        gives=_SECTION,
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
        gives=_SECTION,
        proves=(Closure("equilibrium", "force in the concrete + force in the steel − axial force", FORCE),),
        says="Plane sections; compression positive; the moment about mid-depth.",
    ),
    "member on supports": MethodKind(
        takes={
            "spans": InputKind("set", says="each {}"),
            "l": _row("spans", " of length {}", LENGTH),
            "EI": _row("spans", " and stiffness {}", multiply(_AREA, FORCE)),
            "supports": InputKind("set", says="each {}"),
            "hold": _row_word("supports", " ({})", *HOLDS),
            "k": _row("supports", ", a spring by {}", _MOMENT),
            "face": _row("supports", ", with faces {} from its line", LENGTH),
            "cut": _row("spans", " and sections {} from those", LENGTH),
            "cases": InputKind("set", says="each {}"),
            "placing": _row_word("cases", " ({})", "everywhere", "patterned"),
            "w": _row("spans cases", ", {} along a span", _SPREAD),
            "patches": InputKind("set", needed=False, says="each {}"),
            "n_s": _row("patches", " in the span numbered {}"),
            "s_1": _row("patches", " from {}", LENGTH),
            "s_2": _row("patches", " to {}", LENGTH),
            "w_1": _row("patches cases", " growing evenly from {}", _SPREAD),
            "w_2": _row("patches cases", " to {}", _SPREAD),
            "points": InputKind("set", needed=False, says="each {}"),
            "n_P": _row("points", " in the span numbered {}"),
            "s_P": _row("points", " at {}", LENGTH),
            "P": _row("points cases", " with {}", FORCE),
            "combinations": InputKind("set", needed=False, says="each {}"),
            "factor": _row("combinations cases", " with factors {}"),
            "parts": _count("{} parts a span", 2, 20),
        },
        gives={
            **_over("spans", NONE, "number"),
            **_over("spans stations", LENGTH, "x"),
            **_over("spans stations cases", FORCE, "V", "V_hi", "V_lo", "V_with_M_hi", "V_with_M_lo"),
            **_over("spans stations cases", _MOMENT, "M", "M_hi", "M_lo", "M_with_V_hi", "M_with_V_lo"),
            **_over("spans stations cases", LENGTH, "drop"),
            **_over("spans cases", _MOMENT, "M_left", "M_left_lo", "M_middle", "M_middle_hi", "M_right", "M_right_lo"),
            **_over("supports", LENGTH, "share"),
            **_over("supports cases", FORCE, "R", "R_hi", "R_lo"),
            **_over("supports cases", _MOMENT, "T", "T_hi", "T_lo"),
        },
        sets={"stations": ("spans",)},
        proves=(
            Closure("forces", "reactions − loads", FORCE),
            Closure("moments about the left end", "of reactions − of loads", _MOMENT),
            Closure("continuity", "largest gap between the slopes left and right of a support and of what holds it, by "
                    "the areas under M/EI", NONE),
        ),
        says="Supports hold without settling; loads down, reactions up, sagging positive; places from the left of a "
        "span. A patterned case lies on any spans, and its greatest and least are over every arrangement. Stations are "
        "at the parts, the faces, the sections, the loads, and where the factored moment is greatest and least.",
    ),
}  # fmt: skip


def rests_on(takes: dict[str, InputKind], name: str) -> tuple[str, ...]:
    """Return the sets without which an input is left out."""
    return tuple(key for key in (name, *takes[name].rows) if not takes[key].needed)


def outputs_of(kind: str) -> tuple[str, ...]:
    """Return everything a method gives by name: values, those over rows among them, and sets."""
    found = METHODS[kind]
    return (*found.gives, *found.sets)
