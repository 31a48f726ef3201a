"""Items at fixed points as PDF page content.

In: items of `layout.model`, origin top left, y downwards. Out: content operators as bytes, with links and
anchors at their places on the page, origin bottom left, y upwards. Every item of a page becomes one chunk
that begins and ends outside a text object, so that marked content can be put round it. A box is written
once and its bytes reused wherever it is placed again. Coordinates are rounded to hundredths of a point.
Knows no fonts beyond their names in the page resources.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

from calcreport.layout.model import Anchor, Box, Circle, Face, Item, Link, Placed, Run, Stroke
from calcreport.output.syntax import Numbers, number

#: names of the faces in page resources
FONT_NAMES: dict[Face, bytes] = {"regular": b"/F0", "italic": b"/F1", "semibold": b"/F2", "math": b"/F3"}
#: text of glyphs that stand for none: a zero-width space
SILENT = "\u200b"
#: control points of a quarter circle of radius 1: 4 (sqrt 2 - 1) / 3
_ARC = 0.5522847498

_Shape: TypeAlias = Stroke | Circle | Link | Anchor


#: the bytes of a box about its own origin; lengths in hundredths of a point, y upwards:
#: strings with the moves between them (b'' when it has no text); where the first string starts; the font it
#: needs; the font the last leaves set; the line origin after it; all that is not text, with its offset
_Fragment: TypeAlias = tuple[bytes, int, int, bytes, bytes, int, int, tuple[tuple[int, int, _Shape], ...]]


@dataclass(frozen=True, slots=True)
class Area:
    """A link's area on the page, in points, y upwards."""

    left: float
    bottom: float
    right: float
    top: float
    target: str


@dataclass(frozen=True, slots=True)
class Content:
    """One content stream of a page with what it holds besides ink."""

    data: bytes
    links: tuple[Area, ...]
    #: (name, x, y), in points, y upwards
    anchors: tuple[tuple[str, float, float], ...]


class ContentWriter:
    """Writes the content of pages; keeps the bytes of boxes and which glyphs stand for what text."""

    def __init__(self) -> None:
        """Start with no glyphs used."""
        #: by face: glyph to the text it stands for
        self.used: dict[Face, dict[int, str]] = {face: {} for face in FONT_NAMES}
        self._numbers = Numbers()
        self._strings: dict[tuple[Face, str, tuple[int, ...], tuple[int, ...]], bytes] = {}
        self._fonts: dict[tuple[Face, float], bytes] = {}
        self._fragments: dict[int, _Fragment] = {}
        self._rings: dict[tuple[float, float, float | None], bytes] = {}

    def write(self, items: tuple[Item, ...], height: float) -> Content:
        """Write items of a page of a height in points."""
        numbers, fragments, top = self._numbers, self._fragments, round(height * 100)
        chunks: list[bytes] = []
        links: list[Area] = []
        anchors: list[tuple[str, float, float]] = []
        font = b""
        for item in items:
            if type(item) is Run:
                # most items of a page are runs: their only string needs no joining
                x, y = round(item.x * 100), top - round(item.y * 100)
                text, first = self._string(item), self._font(item)
                last = first
            else:
                if type(item) is Placed:
                    left, base = round(item.x * 100), top - round(item.y * 100)
                    text, dx, dy, first, last, _, _, shapes = fragments.get(id(item.box)) or self._fragment(
                        item.box
                    )
                    x, y = left + dx, base + dy
                else:
                    text, left, base, shapes = b"", 0, top, ((0, 0, item),)  # type: ignore[assignment]
                for dx, dy, shape in shapes:
                    if isinstance(shape, Link):
                        links.append(_area(shape, left + dx, base + dy))
                    elif isinstance(shape, Anchor):
                        anchors.append((shape.name, (left + dx) / 100 + shape.x, (base + dy) / 100 - shape.y))
                    else:
                        chunks.append(self._shape(shape, left + dx, base + dy))
                if not text:
                    continue
            setting = b"" if first == font else first
            font = last
            chunks += (b"BT ", numbers[x], b" ", numbers[y], b" Td", setting, text, b" ET\n")
        return Content(b"".join(chunks), tuple(links), tuple(anchors))

    def _fragment(self, box: Box) -> _Fragment:
        """Give the bytes of a box, kept for its next place."""
        found = self._fragments[id(box)] = self._gather(box.items)
        return found

    def _gather(self, items: tuple[Item, ...]) -> _Fragment:
        """Join the bytes of items about a common origin."""
        numbers, fragments = self._numbers, self._fragments
        text: list[bytes] = []
        shapes: list[tuple[int, int, _Shape]] = []
        whole_x = whole_y = line_x = line_y = 0
        whole_first = font = b""
        for item in items:
            if type(item) is Placed:
                part = fragments.get(id(item.box)) or self._fragment(item.box)
                string, start_x, start_y, first, last, end_x, end_y, inner = part
                x, y = round(item.x * 100), -round(item.y * 100)
                if inner:
                    shapes += [(x + dx, y + dy, shape) for dx, dy, shape in inner]
                if not string:
                    continue
                start_x, start_y, end_x, end_y = x + start_x, y + start_y, x + end_x, y + end_y
            elif type(item) is Run:
                start_x, start_y = end_x, end_y = round(item.x * 100), -round(item.y * 100)
                first = last = self._font(item)
                string = self._string(item)
            else:
                shapes.append((0, 0, item))  # type: ignore[arg-type]
                continue
            if text:
                setting = b"" if first == font else first
                text += (
                    b" ",
                    numbers[start_x - line_x],
                    b" ",
                    numbers[start_y - line_y],
                    b" Td",
                    setting,
                    string,
                )
            else:
                whole_x, whole_y, whole_first = start_x, start_y, first
                text.append(string)
            font, line_x, line_y = last, end_x, end_y
        return b"".join(text), whole_x, whole_y, whole_first, font, line_x, line_y, tuple(shapes)

    def _font(self, run: Run) -> bytes:
        key = (run.face, run.size)
        found = self._fonts.get(key)
        if found is None:
            found = self._fonts[key] = b"%b %b Tf" % (FONT_NAMES[run.face], number(run.size))
        return found

    def _string(self, run: Run) -> bytes:
        """Write the glyphs of a run, two bytes each, and note what text they stand for."""
        key = (run.face, run.text, run.glyphs, run.shifts)
        found = self._strings.get(key)
        if found is not None:
            return found
        self._note(run)
        codes = [b"%04X" % glyph for glyph in run.glyphs]
        if any(run.shifts):
            pieces = [b"<"]
            for code, shift in zip(codes, run.shifts, strict=True):
                pieces.append(code + (b">%d<" % -shift if shift else b""))
            found = (
                b"[" + b"".join(pieces).removesuffix(b"<") + (b">" if not run.shifts[-1] else b"") + b"]TJ"
            )
        else:
            found = b"<" + b"".join(codes) + b">Tj"
        if run.text == SILENT:
            # the further pieces of a tall bracket are ink without text
            found = b"/Span<</ActualText()>>BDC" + found + b" EMC"
        self._strings[key] = found
        return found

    def _note(self, run: Run) -> None:
        """Note the text of each glyph; a lone glyph stands for the whole text of its run.

        Where characters share a glyph the lower stands for it, whichever comes first on the sheets.
        """
        used = self.used[run.face]
        texts = (run.text,) if len(run.glyphs) == 1 else run.text
        for glyph, text in zip(run.glyphs, texts, strict=True):
            used[glyph] = min(text, used.get(glyph, text))

    def _shape(self, shape: Stroke | Circle, x: int, y: int) -> bytes:
        """Draw a line, a polygon or a circle about an offset in hundredths."""
        numbers = self._numbers
        if isinstance(shape, Circle):
            center = numbers[x + round(shape.x * 100)], numbers[y - round(shape.y * 100)]
            return b"q 1 0 0 1 %b %b cm %bQ\n" % (*center, self._ring(shape))
        first, *rest = [
            numbers[x + round(px * 100)] + b" " + numbers[y - round(py * 100)] for px, py in shape.points
        ]
        path = b"%b m %b l" % (first, b" l ".join(rest))
        if shape.dash:
            dash = b" ".join(number(length) for length in shape.dash)
            return b"[%b]0 d %b[]0 d\n" % (dash, self._painted(path, shape.width, shape.fill, shape.closed))
        return self._painted(path, shape.width, shape.fill, shape.closed)

    def _ring(self, circle: Circle) -> bytes:
        """Draw a circle about the origin; circles of one size are written once."""
        key = (circle.radius, circle.width, circle.fill)
        found = self._rings.get(key)
        if found is None:
            found = self._rings[key] = self._painted(_circle(circle.radius), circle.width, circle.fill, True)
        return found

    def _painted(self, path: bytes, width: float, fill: float | None, closed: bool) -> bytes:
        """Stroke and fill a path; the fill goes back to black afterwards, for text."""
        if not width:
            paint, pen = b" f" if fill is not None else b" n", b""
        else:
            paint = b" b" if fill is not None else b" s" if closed else b" S"
            pen = self._numbers[round(width * 100)] + b" w "
        if fill:
            return pen + number(fill) + b" g " + path + paint + b" 0 g\n"
        return pen + path + paint + b"\n"


def _circle(radius: float) -> bytes:
    """Give the path of a circle about the origin as four curves."""
    r, k = radius, radius * _ARC
    quarters = (
        (r, k, k, r, 0.0, r),
        (-k, r, -r, k, -r, 0.0),
        (-r, -k, -k, -r, 0.0, -r),
        (k, -r, r, -k, r, 0.0),
    )
    curves = b"".join(b" ".join(number(v) for v in quarter) + b" c " for quarter in quarters)
    return number(r) + b" 0 m " + curves


def _area(link: Link, x: int, y: int) -> Area:
    left, top = x / 100 + link.x, y / 100 - link.y
    return Area(left, top - link.height, left + link.width, top, link.target)
