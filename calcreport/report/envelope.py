"""Shear and moment envelopes of a member on supports from its stations, span after span.

Inputs of the figure in, `EnvelopeFigure` out; what it is handed is declared in `core.figures`.
"""

from __future__ import annotations

from calcreport.report.figure_inputs import FigureInputs
from calcreport.report.model import Curve, EnvelopeDiagram, EnvelopeFigure, Formula, Letters

#: inputs by diagram: upper and lower curve, then labels with the places they stand at
_SHEAR = ("V_max", "V_min", (("V_left", "x_V_left"), ("V_right", "x_V_right")))
_MOMENT = ("M_max", "M_min", (("M_left", "x_left"), ("M_span", "x_span"), ("M_right", "x_right")))


def envelope(inputs: FigureInputs) -> EnvelopeFigure:
    """Return a member with its spans and supports, greatest and least shear and moment along it."""
    spans, supports = inputs.inputs["spans"].rows, inputs.inputs["supports"].rows
    lengths = [inputs.number("l", (spans, row)) for row in range(inputs.count("spans"))]
    starts = [sum(lengths[:row]) for row in range(len(lengths) + 1)]
    count = inputs.count("supports")
    held = tuple((starts[row], inputs.word_of("hold", (supports, row))) for row in range(count))
    return EnvelopeFigure(
        supports=held,
        spans=tuple(
            (starts[row], starts[row + 1], inputs.label("l", (spans, row), symbol=False, unit=False))
            for row in range(len(lengths))
        ),
        length_unit=Letters(inputs.unit("l")),
        shears=_diagram(inputs, starts, *_SHEAR, name="V", down=False),
        moments=_diagram(inputs, starts, *_MOMENT, name="M", down=True),
        alternative="Member with its supports, greatest and least factored shear and moment along it, to scale.",
    )


def _diagram(
    inputs: FigureInputs, starts: list[float], upper: str, lower: str, labelled: tuple[tuple[str, str], ...], *,
    name: str, down: bool,
) -> EnvelopeDiagram:  # fmt: skip
    spans = inputs.inputs["spans"].rows
    labels: list[tuple[float, float, Formula, float]] = []
    for row in range(len(starts) - 1):
        at = spans, row
        for value, place in labelled:
            number = inputs.number(value, at)
            here = _nearest(inputs, starts, row, inputs.number(place, at), number, (upper, lower))
            share = {"left": 0.0, "right": 1.0}.get(value.partition("_")[2], 0.5)
            labels.append((*here, inputs.label(value, at, symbol=False, unit=False), share))
    curves = (_curve(inputs, starts, upper), _curve(inputs, starts, lower))
    return EnvelopeDiagram(curves, tuple(labels), Letters(f"{name} {inputs.unit(upper)}"), down)


def _curve(inputs: FigureInputs, starts: list[float], name: str) -> Curve:
    spans, stations = inputs.inputs["spans"].rows, inputs.inputs["stations"].rows
    found: list[tuple[float, float]] = []
    for row in range(len(starts) - 1):
        for station in range(inputs.count("stations", (spans, row))):
            at = (spans, row), (stations, station)
            found.append((starts[row] + inputs.number("x", *at), inputs.number(name, *at)))
    return tuple(found)


def _nearest(
    inputs: FigureInputs, starts: list[float], row: int, x: float, value: float, names: tuple[str, str]
) -> tuple[float, float]:
    """Return place and ordinate of a label: of the stations at its place the ordinate of its own size."""
    spans, stations = inputs.inputs["spans"].rows, inputs.inputs["stations"].rows
    near: list[tuple[float, float]] = []
    for station in range(inputs.count("stations", (spans, row))):
        at = (spans, row), (stations, station)
        for name in names:
            ordinate = inputs.number(name, *at)
            near.append((abs(inputs.number("x", *at) - x) + abs(abs(ordinate) - abs(value)) * 1e-9, ordinate))
    return starts[row] + x, min(near)[1]
