"""A rectangular section to scale, with its strain and stress diagrams beside it at the same depths.

`report.model.SectionFigure` -> `Box`. The section shows stirrup and bars where they lie; the strain
diagram is a straight line through the neutral axis (plane sections), the stress diagram the block
and the steel force. Without a neutral axis only the section is drawn.
"""

from __future__ import annotations

from dataclasses import dataclass

from calcreport.layout.drawing import CHAIN, Drawing, rounded
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Box
from calcreport.layout.sheet import OUTLINE
from calcreport.report.model import Bar, Letters, SectionFigure

#: Label size; greatest and least height the section is drawn at.
SIZE = 7.2
HEIGHT, LEAST = 90.0, 44.0
#: Widths of section (at most), strain diagram and stress block.
SECTION, STRAIN, BLOCK = 84.0, 34.0, 24.0
#: Line weight of the stirrup.
STIRRUP = 0.6


@dataclass(frozen=True, slots=True)
class Frame:
    """The section on paper: its edges, its scale, and the way depths run."""

    left: float
    right: float
    top: float
    foot: float
    #: points on paper in one millimetre of the section
    scale: float
    tension_at_foot: bool

    def at(self, depth: float) -> float:
        """Return the y of a depth in millimetres from the compression face."""
        return self.top + depth * self.scale if self.tension_at_foot else self.foot - depth * self.scale

    @property
    def way(self) -> float:
        """Return +1 where depths run down the sheet, -1 where they run up."""
        return 1.0 if self.tension_at_foot else -1.0


@dataclass(frozen=True, slots=True)
class Columns:
    """How far right of the section strain axis, depth line, stress axis and the drawing's end are."""

    strain: float
    #: widths of the strain diagram right (compression) and left (tension) of its axis
    squeezed: float
    stretched: float
    depth: float
    stress: float
    end: float


def draw_section(formulas: Formulas, figure: SectionFigure, width: float) -> Box:
    """Draw the section, at the greatest height that `width` points allow.

    Only the section itself gives way to a narrow lane; diagrams and labels keep their widths.
    """
    labels = {name: formulas.box(label, SIZE, "text") for name, label in figure.labels}
    columns = _columns(figure, labels, 0.0)
    frame = _frame(figure, labels, columns, width)
    aside = max((box.width for box, _, inside in _callouts(formulas, figure, frame) if not inside), default=0.0)
    if aside:
        columns = _columns(figure, labels, aside + 3.0)
        frame = _frame(figure, labels, columns, width)
    drawing = Drawing()
    _section(drawing, figure, frame)
    _outer_dimensions(drawing, frame, labels)
    _name_layers(drawing, formulas, figure, frame)
    if figure.neutral_axis is not None:
        _diagrams(drawing, figure, frame, labels, columns)
    return drawing.box()


def _frame(figure: SectionFigure, labels: dict[str, Box], columns: Columns, width: float) -> Frame:
    """Find the scale at which the section finds room left of its diagrams."""
    left = 11.0 + labels["h"].width if "h" in labels else 3.0
    room = max(width - left - columns.end, LEAST * figure.width / figure.depth)
    scale = min(HEIGHT / figure.depth, min(SECTION, room) / figure.width)
    return Frame(0.0, figure.width * scale, 0.0, figure.depth * scale, scale, figure.tension_face == "bottom")


def _columns(figure: SectionFigure, labels: dict[str, Box], aside: float) -> Columns:
    """Find the columns right of the section, wide enough for their labels and for callouts set `aside` of it."""
    axis = figure.neutral_axis
    if axis is None:
        return Columns(0.0, 0.0, 0.0, 0.0, 0.0, 1.0)
    extreme = tension_depths(figure)[1]
    wide = {name: box.width for name, box in labels.items()}
    squeezed = STRAIN * axis / max(extreme, axis)
    stretched = STRAIN - squeezed
    steel = aside + wide.get("strain_steel", 0.0) if aside else 0.0
    strain = 6.0 + max(stretched + aside, steel, wide.get("c", 0.0) + 8.0, wide.get("strain_top", 0.0) - squeezed - 3.0)
    depth = strain + squeezed + 7.0
    stress = depth + (7.0 if "d" in labels else 1.0)
    needs = (
        stress + BLOCK + 9.0,
        stress + max(wide.get("stress", 0.0), wide.get("a", 0.0), wide.get("steel", 0.0)),
        depth + 3.0 + wide.get("d", 0.0),
    )
    return Columns(strain, squeezed, stretched, depth, stress, max(needs) + 0.5)


def _section(drawing: Drawing, figure: SectionFigure, frame: Frame) -> None:
    """Draw concrete outline, stirrup and bars."""
    corners = (
        (frame.left, frame.top),
        (frame.right, frame.top),
        (frame.right, frame.foot),
        (frame.left, frame.foot),
    )
    drawing.shape(corners)
    scale = frame.scale
    if figure.stirrup_diameter > 0:
        inset = (figure.cover + figure.stirrup_diameter / 2) * scale
        bend = min(2.5 * figure.stirrup_diameter * scale, (frame.right - frame.left) / 2 - inset)
        edges = (frame.left + inset, frame.top + inset, frame.right - inset, frame.foot - inset)
        # A thin line, so that bars inside the bends stay apart from it.
        drawing.shape(rounded(*edges, max(0.0, bend)), STIRRUP)
    for x, y, radius in bar_places(figure):
        drawing.disc(x * scale, y * scale, radius * scale)


def bar_places(figure: SectionFigure) -> tuple[tuple[float, float, float], ...]:
    """Return x, y from the top-left corner and radius of every bar, in millimetres.

    Bars of one layer are spread evenly between the stirrup legs, the larger ones outermost.
    """
    places: list[tuple[float, float, float]] = []
    for depth in sorted({bar.depth for bar in figure.bars}):
        layer = [bar.diameter for bar in figure.bars if bar.depth == depth for _ in range(bar.count)]
        layer.sort(reverse=True)
        ordered = (*layer[0::2], *reversed(layer[1::2]))
        inset = figure.cover + figure.stirrup_diameter
        first = inset + ordered[0] / 2
        last = figure.width - inset - ordered[-1] / 2
        for place, diameter in enumerate(ordered):
            share = place / (len(ordered) - 1) if len(ordered) > 1 else 0.5
            places.append((first + (last - first) * share, depth, diameter / 2))
    return tuple(places)


def _outer_dimensions(drawing: Drawing, frame: Frame, labels: dict[str, Box]) -> None:
    """Draw h left of the section and b under it."""
    if "h" in labels:
        x = frame.left - 7.5
        for y in (frame.top, frame.foot):
            drawing.line(((frame.left - 2.0, y), (x - 2.5, y)))
        drawing.dimension((x, frame.top), (x, frame.foot))
        drawing.label(labels["h"], (x - 3.0, (frame.top + frame.foot) / 2, 1.0))
    if "b" in labels:
        y = frame.foot + 8.0
        for x in (frame.left, frame.right):
            drawing.line(((x, frame.foot + 2.0), (x, y + 2.5)))
        drawing.dimension((frame.left, y), (frame.right, y))
        drawing.label(labels["b"], ((frame.left + frame.right) / 2, y + 7.5, 0.5))


def _callouts(formulas: Formulas, figure: SectionFigure, frame: Frame) -> list[tuple[Box, float, bool]]:
    """Return each layer's callout, its depth, and whether it stands inside the section.

    The layer nearest the middle on either side stands inside if it has room there, the others beside the section.
    """
    inside = frame.right - frame.left - 2 * (figure.cover + figure.stirrup_diameter) * frame.scale - 3.0
    middle = figure.depth / 2
    found: list[tuple[Box, float, bool]] = []
    named: set[bool] = set()
    for depth in sorted({bar.depth for bar in figure.bars}, key=lambda depth: abs(depth - middle)):
        words = " + ".join(bar.callout for bar in figure.bars if bar.depth == depth)
        box = formulas.box(Letters(words), SIZE, "text")
        found.append((box, depth, box.width <= inside and (depth < middle) not in named))
        named.add(depth < middle)
    return found


def _name_layers(drawing: Drawing, formulas: Formulas, figure: SectionFigure, frame: Frame) -> None:
    """Set the callouts, clear of bars, faces and neutral axis."""
    scale = frame.scale
    for _, y, radius in bar_places(figure):
        drawing.keep_clear(frame.left, (y - radius) * scale, frame.right, (y + radius) * scale)
    for y in (frame.top, frame.foot):
        drawing.keep_clear(frame.left, y, frame.right, y)
    if figure.neutral_axis is not None:
        axis = frame.at(figure.neutral_axis)
        drawing.keep_clear(frame.left, axis, frame.right, axis)
    for box, depth, inside in _callouts(formulas, figure, frame):
        thickest = max(bar.diameter for bar in figure.bars if bar.depth == depth)
        half = thickest / 2 * scale + 2.0 + (box.ascent + box.descent) / 2
        inwards = depth * scale + (half if depth < figure.depth / 2 else -half)
        beside = (frame.right + 3.0, depth * scale, 0.0)
        if inside:
            drawing.label(box, ((frame.left + frame.right) / 2, inwards, 0.5), beside)
        else:
            drawing.label(box, beside)


def tension_depths(figure: SectionFigure) -> tuple[float, float]:
    """Return depths from the compression face of the tension bars: centroid, and extreme layer."""
    limit = figure.depth / 2 if figure.neutral_axis is None else figure.neutral_axis
    pairs = [(_depth(figure, bar), bar.count * bar.diameter**2) for bar in figure.bars]
    pairs = [(depth, area) for depth, area in pairs if depth > limit]
    if not pairs:
        return figure.depth, figure.depth
    area = sum(part for _, part in pairs)
    return sum(depth * part for depth, part in pairs) / area, max(depth for depth, _ in pairs)


def _depth(figure: SectionFigure, bar: Bar) -> float:
    return bar.depth if figure.tension_face == "bottom" else figure.depth - bar.depth


def _diagrams(drawing: Drawing, figure: SectionFigure, frame: Frame, labels: dict[str, Box], columns: Columns) -> None:
    """Draw strains, effective depth and stresses right of the section."""
    axis = figure.neutral_axis or 0.0
    centroid, extreme = tension_depths(figure)
    strain_x, depth_x, stress_x = (frame.right + x for x in (columns.strain, columns.depth, columns.stress))
    across = (strain_x, columns.squeezed, columns.stretched)
    right = stress_x + BLOCK
    drawing.keep_clear(frame.right, frame.at(axis), right, frame.at(axis))
    _strains(drawing, frame, labels, across, (axis, extreme))
    if "d" in labels:
        drawing.line(((strain_x + columns.squeezed + 2.0, frame.at(0.0)), (depth_x + 2.5, frame.at(0.0))))
        drawing.line(((strain_x + 2.0, frame.at(centroid)), (depth_x + 2.5, frame.at(centroid))))
        drawing.dimension((depth_x, frame.at(0.0)), (depth_x, frame.at(centroid)))
    _stresses(drawing, figure, frame, labels, stress_x, centroid)
    if "d" in labels:
        low = max(axis, figure.block_depth or 0.0)
        spots = (0.5, 0.7, 0.35)
        at = [(depth_x + 3.0, frame.at(low + (centroid - low) * spot), 0.0) for spot in spots]
        drawing.label(labels["d"], *at)
    drawing.line(((frame.left - 3.0, frame.at(axis)), (right, frame.at(axis))), dash=CHAIN)


def _strains(
    drawing: Drawing,
    frame: Frame,
    labels: dict[str, Box],
    across: tuple[float, float, float],
    depths: tuple[float, float],
) -> None:
    """Draw the strain line, compression right of its axis, tension left, and the depth c."""
    x, squeezed, stretched = across
    axis, extreme = depths
    face, steel, neutral = frame.at(0.0), frame.at(extreme), frame.at(axis)
    drawing.line(((x, face), (x, steel)))
    points = ((x, face), (x + squeezed, face), (x - stretched, steel), (x, steel))
    drawing.line(points, OUTLINE)
    if "c" in labels:
        at = x - 6.0
        drawing.line(((at - 2.5, face), (x - 1.0, face)))
        drawing.dimension((at, face), (at, neutral))
        beyond = neutral + frame.way * 6.5
        drawing.label(labels["c"], (at - 2.5, (face + neutral) / 2, 1.0), (at - 6.0, beyond, 1.0))
    if "strain_top" in labels:
        drawing.label(labels["strain_top"], (x + squeezed + 3.0, face - frame.way * 7.0, 1.0))
    if "strain_steel" in labels:
        drawing.label(labels["strain_steel"], (x + 5.0, steel + frame.way * 7.0, 1.0))


def _stresses(
    drawing: Drawing,
    figure: SectionFigure,
    frame: Frame,
    labels: dict[str, Box],
    x: float,
    centroid: float,
) -> None:
    """Draw the stress block with its depth, and the steel force."""
    steel = frame.at(centroid)
    drawing.arrow((x, steel), (x + BLOCK, steel), OUTLINE)
    if "steel" in labels:
        drawing.label(labels["steel"], (x, steel + frame.way * 7.0, 0.0))
    if figure.block_depth is None:
        return
    face, end = frame.at(0.0), frame.at(figure.block_depth)
    drawing.shape(((x, face), (x + BLOCK, face), (x + BLOCK, end), (x, end)))
    rows = max(1, int(abs(end - face) / 5.0))
    for row in range(rows):
        y = face + (end - face) * (row + 0.5) / rows
        drawing.arrow((x + BLOCK, y), (x + 1.0, y), head=3.0)
    if "stress" in labels:
        drawing.label(labels["stress"], (x, face - frame.way * 7.0, 0.0))
    if "a" in labels:
        at = x + BLOCK + 6.0
        for y in (face, end):
            drawing.line(((x + BLOCK + 2.0, y), (at + 2.5, y)))
        drawing.dimension((at, face), (at, end))
        under = (x, end + frame.way * 7.0, 0.0), (x, end + frame.way * 10.0, 0.0)
        drawing.label(labels["a"], *under, (at + 3.5, (face + end) / 2, 0.0))
