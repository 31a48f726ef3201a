"""Items at fixed points as PDF page content.

In: items of `layout.model`, origin top left, y downwards. Out: content operators as bytes, with links and
anchors at their places on the page, origin bottom left, y upwards. Every item of a page becomes one chunk
that begins and ends outside a text object, so that marked content can be put round it. A box is written
once and its bytes reused wherever it is placed again. Coordinates are rounded to hundredths of a point.
Knows no fonts beyond their names in the page resources.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import TypeAlias

from calcreport.core.record import record
from calcreport.layout.model import Anchor, Box, Circle, Face, Item, Link, Placed, Run, Stroke
from calcreport.output.syntax import Numbers, number

#: names of the faces in page resources
FONT_NAMES: dict[Face, bytes] = {"regular": b"/F0", "italic": b"/F1", "semibold": b"/F2", "math": b"/F3"}
#: text of glyphs that stand for none: a zero-width space
SILENT = "\u200b"
#: control points of a quarter circle of radius 1: 4 (sqrt 2 - 1) / 3
_ARC = 0.5522847498

#: boxes, strings and numbers kept as written before a store is emptied: those of some thirty sheets
_KEPT = 5000

#: by face: glyph to the text it stands for
Used: TypeAlias = dict[Face, dict[int, str]]
_Shape: TypeAlias = Stroke | Circle | Link | Anchor


#: the content of a box about its own origin; lengths in hundredths of a point, y upwards:
#: strings with the moves between them ('' when it has no text); where the first string starts; the font it
#: needs; the font the last leaves set; the line origin after it; all that is not text, with its offset; and
#: the box itself, so that nothing else takes its identity while it is kept
_Fragment: TypeAlias = tuple[str, int, int, str, str, int, int, tuple[tuple[int, int, _Shape], ...], Box]


@record
class Area:
    """A link's area on the page, in points, y upwards."""

    left: float
    bottom: float
    right: float
    top: float
    target: str


@record
class Content:
    """One content stream of a page with what it holds besides ink."""

    data: bytes
    links: tuple[Area, ...]
    #: (name, x, y), in points, y upwards
    anchors: tuple[tuple[str, float, float], ...]


class ContentWriter:
    """Writes the content of pages; keeps the content of boxes and which glyphs stand for what text."""

    def __init__(self) -> None:
        """Start with no glyphs used."""
        self.used: Used = {face: {} for face in FONT_NAMES}
        self._numbers = Numbers()
        self._codes = _Codes()
        self._strings: dict[tuple[Face, str, tuple[int, ...], tuple[int, ...]], str] = {}
        self._fonts: dict[tuple[Face, float], str] = {}
        self._fragments: dict[int, _Fragment] = {}
        self._rings: dict[tuple[float, float, float | None], str] = {}

    def write(self, items: tuple[Item, ...], height: float) -> Content:
        """Write items of a page of a height in points."""
        for store in (self._fragments, self._strings, self._numbers):
            if len(store) > _KEPT:
                store.clear()
        numbers, fragments, top = self._numbers, self._fragments, round(height * 100)
        chunks: list[str] = []
        links: list[Area] = []
        anchors: list[tuple[str, float, float]] = []
        font = ""
        for item in items:
            if type(item) is Run:
                # most items of a page are runs: their only string needs no joining
                x, y = round(item.x * 100), top - round(item.y * 100)
                text, first = self._string(item), self._font(item)
                last = first
            else:
                if type(item) is Placed:
                    left, base = round(item.x * 100), top - round(item.y * 100)
                    part = fragments.get(id(item.box)) or self._fragment(item.box)
                    text, dx, dy, first, last, _, _, shapes, _ = part
                    x, y = left + dx, base + dy
                else:
                    text, left, base, shapes = "", 0, top, ((0, 0, item),)  # type: ignore[assignment]
                for dx, dy, shape in shapes:
                    if type(shape) is Stroke or type(shape) is Circle:
                        chunks.append(self._shape(shape, left + dx, base + dy))
                    elif type(shape) is Link:
                        links.append(_area(shape, left + dx, base + dy))
                    elif type(shape) is Anchor:
                        anchors.append((shape.name, (left + dx) / 100 + shape.x, (base + dy) / 100 - shape.y))
                if not text:
                    continue
            setting = "" if first == font else first
            chunks.append(f"BT {numbers[x]} {numbers[y]} Td{setting}{text} ET\n")
            font = last
        return Content("".join(chunks).encode(), tuple(links), tuple(anchors))

    def _fragment(self, box: Box) -> _Fragment:
        """Give the content of a box, kept for its next place."""
        items = box.items
        if len(items) == 1 and type(items[0]) is Run:
            # letters, numbers and lines of words: half of all boxes
            run = items[0]
            x, y, font = round(run.x * 100), -round(run.y * 100), self._font(run)
            found: _Fragment = (self._string(run), x, y, font, font, x, y, (), box)
        else:
            found = self._gather(box)
        self._fragments[id(box)] = found
        return found

    def _gather(self, box: Box) -> _Fragment:
        """Join the content of the items of a box about its origin."""
        numbers, known = self._numbers, self._fragments.get
        text = ""
        shapes: list[tuple[int, int, _Shape]] = []
        whole_x = whole_y = line_x = line_y = 0
        whole_first = font = ""
        for item in box.items:
            if type(item) is Placed:
                inner = item.box
                part = known(id(inner)) or self._fragment(inner)
                string, start_x, start_y, first, last, end_x, end_y, drawn, _ = part
                x = round(item.x * 100)
                y = -round(item.y * 100) if item.y else 0
                if drawn:
                    shapes += [(x + dx, y + dy, shape) for dx, dy, shape in drawn]
                if not string:
                    continue
                start_x += x
                start_y += y
                end_x += x
                end_y += y
            elif type(item) is Run:
                start_x, start_y = end_x, end_y = round(item.x * 100), -round(item.y * 100)
                first = last = self._font(item)
                string = self._string(item)
            else:
                shapes.append((0, 0, item))  # type: ignore[arg-type]
                continue
            if text:
                setting = "" if first == font else first
                text += f" {numbers[start_x - line_x]} {numbers[start_y - line_y]} Td{setting}{string}"
            else:
                whole_x, whole_y, whole_first, text = start_x, start_y, first, string
            font, line_x, line_y = last, end_x, end_y
        return text, whole_x, whole_y, whole_first, font, line_x, line_y, tuple(shapes), box

    def _font(self, run: Run) -> str:
        key = (run.face, run.size)
        found = self._fonts.get(key)
        if found is None:
            found = self._fonts[key] = f"{FONT_NAMES[run.face].decode()} {number(run.size).decode()} Tf"
        return found

    def _string(self, run: Run) -> str:
        """Write the glyphs of a run, two bytes each, and note what text they stand for."""
        key = (run.face, run.text, run.glyphs, run.shifts)
        found = self._strings.get(key)
        if found is not None:
            return found
        self._note(run)
        codes = self._codes
        if any(run.shifts):
            pieces = ["<"]
            for glyph, shift in zip(run.glyphs, run.shifts, strict=True):
                pieces.append(f"{codes[glyph]}>{-shift}<" if shift else codes[glyph])
            found = "[" + "".join(pieces).removesuffix("<") + (">" if not run.shifts[-1] else "") + "]TJ"
        else:
            found = f"<{''.join([codes[glyph] for glyph in run.glyphs])}>Tj"
        if run.text == SILENT:
            # the further pieces of a tall bracket are ink without text
            found = f"/Span<</ActualText()>>BDC{found} EMC"
        self._strings[key] = found
        return found

    def _note(self, run: Run) -> None:
        """Note the text of each glyph; a lone glyph stands for the whole text of its run.

        Where characters share a glyph the lower stands for it, whichever comes first on the sheets.
        """
        texts = (run.text,) if len(run.glyphs) == 1 else run.text
        _note(self.used[run.face], zip(run.glyphs, texts, strict=True))

    def take(self, used: Used) -> None:
        """Note the glyphs that another writer has used."""
        for face, glyphs in used.items():
            _note(self.used[face], glyphs.items())

    def _shape(self, shape: Stroke | Circle, x: int, y: int) -> str:
        """Draw a line, a polygon or a circle about an offset in hundredths."""
        numbers = self._numbers
        if type(shape) is Circle:
            center = f"{numbers[x + round(shape.x * 100)]} {numbers[y - round(shape.y * 100)]}"
            return f"q 1 0 0 1 {center} cm {self._ring(shape)}Q\n"
        assert isinstance(shape, Stroke)
        if len(shape.points) == 2 and shape.width and not (shape.closed or shape.dash):
            # rules are by far the most of all lines
            (px, py), (qx, qy) = shape.points
            start = f"{numbers[x + round(px * 100)]} {numbers[y - round(py * 100)]}"
            end = f"{numbers[x + round(qx * 100)]} {numbers[y - round(qy * 100)]}"
            return f"{numbers[round(shape.width * 100)]} w {start} m {end} l S\n"
        path = " l ".join(
            [f"{numbers[x + round(px * 100)]} {numbers[y - round(py * 100)]}" for px, py in shape.points]
        ).replace(" l ", " m ", 1)
        painted = self._painted(f"{path} l", shape.width, shape.fill, shape.closed)
        if shape.dash:
            return f"[{' '.join(number(length).decode() for length in shape.dash)}]0 d {painted}[]0 d\n"
        return painted

    def _ring(self, circle: Circle) -> str:
        """Draw a circle about the origin; circles of one size are written once."""
        key = (circle.radius, circle.width, circle.fill)
        found = self._rings.get(key)
        if found is None:
            found = self._rings[key] = self._painted(_circle(circle.radius), circle.width, circle.fill, True)
        return found

    def _painted(self, path: str, width: float, fill: float | None, closed: bool) -> str:
        """Stroke and fill a path; the fill goes back to black afterwards, for text."""
        if not width:
            paint, pen = " f" if fill is not None else " n", ""
        else:
            paint = " b" if fill is not None else " s" if closed else " S"
            pen = f"{self._numbers[round(width * 100)]} w "
        if fill:
            return f"{pen}{number(fill).decode()} g {path}{paint} 0 g\n"
        return f"{pen}{path}{paint}\n"


def _note(used: dict[int, str], glyphs: Iterable[tuple[int, str]]) -> None:
    for glyph, text in glyphs:
        known = used.get(glyph)
        if known is None or text < known:
            used[glyph] = text


class _Codes(dict[int, str]):
    """Glyphs to four hexadecimal digits, made on first use."""

    def __missing__(self, glyph: int) -> str:
        found = self[glyph] = f"{glyph:04X}"
        return found


def _circle(radius: float) -> str:
    """Give the path of a circle about the origin as four curves."""
    r, k = radius, radius * _ARC
    quarters = ((r, k, k, r, 0.0, r), (-k, r, -r, k, -r, 0.0), (-r, -k, -k, -r, 0.0, -r), (k, -r, r, -k, r, 0.0))
    curves = "".join(" ".join(number(v).decode() for v in quarter) + " c " for quarter in quarters)
    return f"{number(r).decode()} 0 m {curves}"


def _area(link: Link, x: int, y: int) -> Area:
    left, top = x / 100 + link.x, y / 100 - link.y
    return Area(left, top - link.height, left + link.width, top, link.target)
