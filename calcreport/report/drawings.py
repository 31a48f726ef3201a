"""Figures from a calculation's own values: section with bars, span with loads and moments, demand against strength.

A worked figure and forms in, a figure record out. What each kind is handed is declared in `core.figures`.
"""

from __future__ import annotations

import math
from collections.abc import Callable

from calcreport.calculate.model import WorkedFigure
from calcreport.core.figures import needed_inputs
from calcreport.report.envelope import envelope
from calcreport.report.figure_inputs import FigureInputs
from calcreport.report.forms import CalculationForms
from calcreport.report.model import (
    Bar,
    BeamLoad,
    Curve,
    Figure,
    Formula,
    Letters,
    Row,
    SectionFigure,
    SpanFigure,
    StrengthFigure,
)

_STATIONS = 48


def draw(worked: WorkedFigure, forms: CalculationForms) -> Figure | None:
    """Return the figure, or None where an input it needs has no value."""
    inputs = FigureInputs(forms, {given.name: given for given in worked.line.inputs}, dict(worked.open))
    needed = needed_inputs(worked.line.kind)
    if not all(inputs.has(name) for name in needed):
        return None
    makers: dict[str, Callable[[FigureInputs], Figure | None]] = {
        "beam section": _section,
        "span": _span,
        "envelope": envelope,
        "shear strength along span": _shear_strength,
        "moment strength along span": _moment_strength,
    }
    return makers[worked.line.kind](inputs)


def _section(inputs: FigureInputs) -> Figure:
    """Return a beam section: bars where the lines put them, depths from the compression face."""
    names, rows = inputs.rows("layers"), inputs.inputs["layers"].rows
    top = inputs.word("face") == "top"
    bars = []
    for row, _ in enumerate(names):
        at = rows, row
        # bars are placed from the top; the lines give depths from the compression face
        depth = inputs.number("h") - inputs.number("y", at) if top else inputs.number("y", at)
        diameter, count = _mm(inputs.number("d_b", at)), int(inputs.number("n", at))
        bars.append(Bar(count, diameter, _mm(depth), _callout(inputs, at)))
    labels: list[tuple[str, Formula]] = [("b", inputs.label("b")), ("h", inputs.label("h"))]
    for name, label in (("c", "c"), ("a", "a"), ("eps_cu", "strain_top"), ("eps_t", "strain_steel")):
        if inputs.has(name):
            labels.append((label, inputs.label(name)))
    steel = " + ".join(bar.callout for bar in bars)
    face = inputs.word("face")
    b, h = inputs.number("b"), inputs.number("h")
    return SectionFigure(
        width=_mm(b),
        depth=_mm(h),
        cover=_mm(inputs.number("c_c")),
        stirrup_diameter=_mm(inputs.number("d_s")),
        bars=tuple(bars),
        tension_face="top" if face == "top" else "bottom",
        neutral_axis=_mm(inputs.number("c")) if inputs.has("c") else None,
        block_depth=_mm(inputs.number("a")) if inputs.has("a") else None,
        labels=tuple(labels),
        alternative=f"Section to scale with {steel} near the {face} face, with strains and the stress block.",
    )


def _callout(inputs: FigureInputs, row: tuple[int, int]) -> str:
    """Return the callout of a layer: the word value among the set's columns, else the count."""
    values, plan = inputs.forms.worked.values, inputs.forms.worked.plan
    for slot in plan.slots:
        if slot.sets == (row[0],) and slot.symbol.unit is None:
            found = values.get(slot.index, (row[1],))
            if isinstance(found, str):
                return found
    return f"{int(inputs.number('n', row))} bars"


def _mm(metres: float) -> float:
    return metres * 1000.0


def _span(inputs: FigureInputs) -> Figure:
    """Return a span with its unfactored loads and the governing factored moments."""
    length = inputs.number("l")
    rows, names = inputs.inputs["loads"].rows, inputs.rows("loads")
    kinds = (("fixed", "fixed"), ("pinned", "pinned"), ("roller", "roller"))
    supports = tuple((inputs.number(name), kind) for name, kind in kinds if inputs.has(name))
    cantilever = any(kind == "fixed" for _, kind in supports)
    spread = [inputs.number("w", (rows, row)) for row in range(len(names))]
    points = [inputs.number("P", (rows, row)) for row in range(len(names))]
    most = max([*map(abs, spread), 1e-12]), max([*map(abs, points), 1e-12])
    loads: list[BeamLoad] = []
    for row, name in enumerate(names):
        if spread[row]:
            loads.append(BeamLoad(0.0, length, abs(spread[row]) / most[0], _load_label(inputs, "w", (rows, row), name)))
        if points[row]:
            at = inputs.number("x_P")
            loads.append(BeamLoad(at, at, abs(points[row]) / most[1], _load_label(inputs, "P", (rows, row), name)))
    place = inputs.number("x_u") if inputs.has("x_u") else 0.0
    moment = inputs.number("M_u")
    # without the factored loads the diagram takes the proportions of the loads as given
    w = inputs.number("w_u") if inputs.has("w_u") else sum(spread)
    p = inputs.number("P_u") if inputs.has("P_u") else sum(points)
    shape = _shape(length, w, p, inputs.number("x_P"), cantilever)
    scale = moment / shape(place) if shape(place) else 0.0
    curve = tuple((length * i / _STATIONS, scale * shape(length * i / _STATIONS)) for i in range(_STATIONS + 1))
    return SpanFigure(
        span=length,
        supports=supports,
        loads=tuple(loads),
        moments=curve,
        moment_labels=((place, inputs.label("M_u")),),
        span_label=inputs.label("l"),
        alternative="Span with its supports, loads by case and the factored moment diagram.",
    )


def _load_label(inputs: FigureInputs, name: str, row: tuple[int, int], case: str) -> Formula:
    return Row((Letters(f"{case}: "), inputs.label(name, row, symbol=False)))


def _shape(length: float, w: float, p: float, at: float, cantilever: bool) -> Callable[[float], float]:
    """Return the bending moment of a simple span or cantilever along it (statics), sagging positive."""

    def simple(x: float) -> float:
        point = p * (length - at) * x / length if x <= at else p * at * (length - x) / length
        return w * x * (length - x) / 2 + point

    def hanging(x: float) -> float:
        return -(w * (length - x) ** 2 / 2 + p * max(at - x, 0.0))

    return hanging if cantilever else simple


def _shear_strength(inputs: FigureInputs) -> Figure | None:
    """Return factored shear against design strength along a member, positive values above the base line."""
    return _strength(inputs, "shear", down=False)


def _moment_strength(inputs: FigureInputs) -> Figure | None:
    """Return factored moments against design strength along a member, positive values below the base line."""
    return _strength(inputs, "moment", down=True)


def _strength(inputs: FigureInputs, what: str, *, down: bool) -> Figure | None:
    """Return the figure, or None where no station, no piece or no length makes one."""
    stations, pieces = inputs.inputs["stations"].rows, inputs.inputs["pieces"].rows
    at = [(stations, row) for row, _ in enumerate(inputs.rows("stations"))]
    if not inputs.rows("stations") or not inputs.rows("pieces"):
        return None
    demands = [
        tuple((inputs.number("x", row), inputs.number(name, row)) for row in at)
        for name in ("demand", "least_demand")
        if name in inputs.inputs
    ]
    along = sorted(
        ((pieces, row) for row, _ in enumerate(inputs.rows("pieces"))), key=lambda row: inputs.number("from", row)
    )
    strengths = [_steps(inputs, along, "strength", "strength_to", 1.0)]
    least = min(value for curve in demands for _, value in curve)
    if "against" in inputs.inputs:
        strengths.append(_steps(inputs, along, "against", "against_to", -1.0))
    elif least < 0:
        strengths.append(tuple((x, -value) for x, value in strengths[0]))
    largest = max(range(len(at)), key=lambda row: abs(demands[0][row][1]))
    labels = _strength_labels(inputs, along, "strength", "strength_to", 1.0)
    if "against" in inputs.inputs:
        labels += _strength_labels(inputs, along, "against", "against_to", -1.0)
    # strength told at places, with straight lines between them: the ends are ticked
    ticked = along if any(_length(inputs, row) > 0 for row in along) else along[:1]
    ticks = [(inputs.number("from", row), inputs.label("from", row, symbol=False, unit=False)) for row in ticked]
    ticks.append((inputs.number("to", along[-1]), inputs.label("to", along[-1], symbol=False)))
    start, end = min(ticks[0][0], *(x for x, _ in demands[0])), max(ticks[-1][0], *(x for x, _ in demands[0]))
    if end <= start:
        return None
    return StrengthFigure(
        start=start,
        end=end,
        demands=tuple(demands),
        strengths=tuple(strengths),
        demand_labels=((*demands[0][largest], inputs.label("demand", at[largest])),),
        strength_labels=tuple(labels),
        ticks=tuple(ticks),
        down=down,
        alternative=f"Factored {what} against design strength along the member, to scale.",
    )


def _steps(inputs: FigureInputs, along: list[tuple[int, int]], name: str, end: str, sign: float) -> Curve:
    """Return the strength of the pieces one after the other, from where each begins to where it ends."""
    points: list[tuple[float, float]] = []
    for row in along:
        value = inputs.number(name, row)
        last = inputs.number(end, row) if end in inputs.inputs else value
        points += [(inputs.number("from", row), sign * value), (inputs.number("to", row), sign * last)]
    return tuple(points)


def _strength_labels(
    inputs: FigureInputs, along: list[tuple[int, int]], name: str, end: str, sign: float
) -> list[tuple[float, float, Formula]]:
    """Return a label for every level piece; where there is most room it tells symbol and unit for all of them."""
    level = [
        row
        for row in along
        if end not in inputs.inputs or math.isclose(inputs.number(name, row), inputs.number(end, row))
    ]
    if level and not any(_length(inputs, row) > 0 for row in level):
        level = [max(level, key=lambda row: inputs.number(name, row))]
    widest = max(level, key=lambda row: _length(inputs, row), default=None)
    labels = []
    for row in level:
        label = inputs.label(name, row, symbol=row == widest, unit=row == widest)
        middle = (inputs.number("from", row) + inputs.number("to", row)) / 2
        labels.append((middle, sign * inputs.number(name, row), label))
    return labels


def _length(inputs: FigureInputs, row: tuple[int, int]) -> float:
    return inputs.number("to", row) - inputs.number("from", row)
