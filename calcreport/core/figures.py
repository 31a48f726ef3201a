"""The kinds of figures a template may ask for, and what each is handed: a closed list.

Declares names, shapes and dimensions of inputs; planning holds templates against it, the report draws.
"""

from __future__ import annotations

from calcreport.core.inputs import HOLDS, InputKind
from calcreport.core.units import FORCE, LENGTH, NONE, Dimension, divide, multiply


def _named(dimension: Dimension, *, needed: bool = True) -> InputKind:
    return InputKind("number", dimension, needed, named=True)


def _number(dimension: Dimension, *, needed: bool = True) -> InputKind:
    return InputKind("number", dimension, needed)


def _row(rows: str, dimension: Dimension, *, named: bool = False) -> InputKind:
    return InputKind("row number", dimension, named=named, rows=tuple(rows.split()))


_MOMENT, _SPREAD = multiply(FORCE, LENGTH), divide(FORCE, LENGTH)


def _along(dimension: Dimension) -> dict[str, InputKind]:
    """Return what demand against strength along a member takes: stations, and pieces with their strength.

    A piece has one strength, or one at either end of it; pieces without length are places, joined by straight lines.
    Strength against the other sign is `against`; without it the strength holds for both signs.
    """
    return {
        "stations": InputKind("set"), "x": _row("stations", LENGTH),
        "demand": _row("stations", dimension, named=True),
        "least_demand": InputKind("row number", dimension, False, rows=("stations",)),
        "pieces": InputKind("set"),
        "from": _row("pieces", LENGTH, named=True), "to": _row("pieces", LENGTH, named=True),
        "strength": _row("pieces", dimension, named=True),
        "strength_to": InputKind("row number", dimension, False, named=True, rows=("pieces",)),
        "against": InputKind("row number", dimension, False, named=True, rows=("pieces",)),
        "against_to": InputKind("row number", dimension, False, named=True, rows=("pieces",)),
    }  # fmt: skip


#: inputs by name, by kind of figure
FIGURES: dict[str, dict[str, InputKind]] = {
    "beam section": {
        "b": _named(LENGTH), "h": _named(LENGTH), "c_c": _number(LENGTH), "d_s": _number(LENGTH),
        "face": InputKind("word", words=("bottom", "top")),
        "layers": InputKind("set"), "n": _row("layers", NONE), "d_b": _row("layers", LENGTH),
        "y": _row("layers", LENGTH),
        "c": _named(LENGTH, needed=False), "a": _named(LENGTH, needed=False),
        "eps_cu": _named(NONE, needed=False), "eps_t": _named(NONE, needed=False),
    },
    "span": {
        "l": _named(LENGTH), "loads": InputKind("set"), "w": _row("loads", _SPREAD, named=True),
        "P": _row("loads", FORCE, named=True), "x_P": _number(LENGTH), "M_u": _named(_MOMENT),
        "pinned": _number(LENGTH, needed=False), "roller": _number(LENGTH, needed=False),
        "fixed": _number(LENGTH, needed=False), "x_u": _number(LENGTH, needed=False),
        "w_u": _number(_SPREAD, needed=False), "P_u": _number(FORCE, needed=False),
    },
    "envelope": {
        "spans": InputKind("set"), "l": _row("spans", LENGTH, named=True),
        "supports": InputKind("set"), "hold": InputKind("row word", words=HOLDS, rows=("supports",)),
        "stations": InputKind("set"), "x": _row("spans stations", LENGTH),
        **{name: _row("spans stations", FORCE, named=True) for name in ("V_max", "V_min")},
        **{name: _row("spans stations", _MOMENT, named=True) for name in ("M_max", "M_min")},
        **{name: _row("spans", FORCE, named=True) for name in ("V_left", "V_right")},
        **{name: _row("spans", _MOMENT, named=True) for name in ("M_left", "M_span", "M_right")},
        **{name: _row("spans", LENGTH) for name in ("x_V_left", "x_V_right", "x_left", "x_span", "x_right")},
    },
    "shear strength along span": _along(FORCE),
    "moment strength along span": _along(_MOMENT),
}  # fmt: skip


def needed_inputs(kind: str) -> tuple[str, ...]:
    """Return the inputs a figure cannot do without."""
    return tuple(name for name, given in FIGURES[kind].items() if given.needed)
