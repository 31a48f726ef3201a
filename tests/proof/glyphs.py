"""Page content of a finished PDF as positioned glyphs and strokes.

In: a page read by pypdf. Out: `PageInk`, in points, origin bottom left, y upwards. Works the text and path operators
of ISO 32000-1 clauses 8 and 9, forms included. Knows nothing of what the ink means.
"""

from __future__ import annotations

import itertools
import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any, NamedTuple

from .fontdata import Face, read_face

_TOKEN = re.compile(
    rb"(?P<number>[+-]?(?:\d+\.?\d*|\.\d+))(?=[\s/\[\]<>()]|$)|<(?P<hex>[0-9A-Fa-f\s]*)>(?!>)|(?P<open><<)|(?P<close>>>)"
    rb"|/(?P<name>[^\s/\[\]<>()%]*)|(?P<array>[\[\]])|\((?P<string>(?:[^()\\]|\\.|\((?:[^()\\]|\\.)*\))*)\)"
    rb"|(?P<comment>%[^\r\n]*)|(?P<word>[A-Za-z'\"*][A-Za-z0-9'\"*]*)",
    re.S,
)
Matrix = tuple[float, float, float, float, float, float]
UNIT: Matrix = (1.0, 0.0, 0.0, 1.0, 0.0, 0.0)


#: a bar over a letter
BAR = "\u0304"


class Glyph(NamedTuple):
    """A glyph on a page; `left` to `right` is the advance, `x0 y0 x1 y1` the ink (the advance where none is known)."""

    text: str
    left: float
    right: float
    y: float
    size: float
    font: str
    x0: float
    y0: float
    x1: float
    y1: float


class Line(NamedTuple):
    """A straight stroke."""

    x0: float
    y0: float
    x1: float
    y1: float
    width: float


class Area(NamedTuple):
    """The box round a curved or filled path, or round a closed path of straight strokes."""

    x0: float
    y0: float
    x1: float
    y1: float
    filled: bool
    curved: bool


@dataclass(slots=True)
class PageInk:
    """All that a page shows, in the order of its content."""

    width: float
    height: float
    glyphs: list[Glyph] = field(default_factory=list)
    lines: list[Line] = field(default_factory=list)
    areas: list[Area] = field(default_factory=list)


def times(a: Matrix, b: Matrix) -> Matrix:
    """Return the matrix that works a, then b."""
    return (
        a[0] * b[0] + a[1] * b[2], a[0] * b[1] + a[1] * b[3],
        a[2] * b[0] + a[3] * b[2], a[2] * b[1] + a[3] * b[3],
        a[4] * b[0] + a[5] * b[2] + b[4], a[4] * b[1] + a[5] * b[3] + b[5],
    )  # fmt: skip


class Reader:
    """Reads pages; keeps the fonts it has met."""

    def __init__(self) -> None:
        self._faces: dict[object, Face] = {}

    @property
    def faces(self) -> list[Face]:
        """The fonts met so far."""
        return list(self._faces.values())

    def read(self, page: Any) -> PageInk:
        """Return the ink of a page."""
        box = page.mediabox
        ink = PageInk(float(box.width), float(box.height))
        contents = page.get_contents()
        if contents is not None:
            _Work(self, ink).run(contents.get_data(), page["/Resources"].get_object(), UNIT)
        return ink

    def face(self, reference: Any) -> Face:
        """Return a font once read."""
        key = getattr(reference, "idnum", None) or id(reference)
        if key not in self._faces:
            self._faces[key] = read_face(reference)
        return self._faces[key]


def with_bars(found: list[Glyph]) -> list[Glyph]:
    """Return glyphs with every bar over a letter in the text of that letter: the nearest whose ink is under it."""
    glyphs = list(found)
    for bar in [g for g in glyphs if g.text == BAR]:
        middle = (bar.x0 + bar.x1) / 2
        under = [g for g in glyphs if g.text != BAR and abs(g.y - bar.y) < 0.6 * bar.size and g.size >= bar.size - 0.1]
        letter = min(under, key=lambda g: abs((g.x0 + g.x1) / 2 - middle), default=None)
        if letter is not None:
            glyphs.remove(bar)
            glyphs[glyphs.index(letter)] = letter._replace(text=letter.text + BAR)
    return glyphs


def tokens(data: bytes) -> Iterator[tuple[str, Any]]:
    """Part content into numbers, names, strings, arrays and operators."""
    held: list[Any] | None = None
    for match in _TOKEN.finditer(data):
        kind = match.lastgroup
        if kind == "number":
            value: Any = float(match[kind])
        elif kind == "hex":
            value = bytes.fromhex(match[kind].decode())
        elif kind == "string":
            value = re.sub(rb"\\([nrtbf()\\])", lambda m: m[1], match[kind])
        elif kind == "name":
            value = match[kind].decode()
        elif kind == "array":
            if match[kind] == b"[":
                held = []
                continue
            value, held = held, None
        elif kind in ("comment", "open", "close"):
            continue
        else:
            yield "operator", match[kind or "word"].decode()
            continue
        if held is not None:
            held.append(value)
        else:
            yield "operand", value


class _Work:
    """One content stream being worked."""

    def __init__(self, reader: Reader, ink: PageInk) -> None:
        self.reader, self.ink = reader, ink
        self.matrix, self.width = UNIT, 1.0
        self.face: Face | None = None
        self.size, self.leading, self.rise, self.char, self.word, self.scale = 1.0, 0.0, 0.0, 0.0, 0.0, 1.0
        self.line = self.text = UNIT
        self.path: list[list[tuple[float, float]]] = []
        self.curved, self.closed = False, False
        self.stack: list[tuple[Any, ...]] = []

    def run(self, data: bytes, resources: Any, matrix: Matrix) -> None:
        """Work one stream."""
        self.matrix = matrix
        held: list[Any] = []
        for kind, value in tokens(data):
            if kind == "operand":
                held.append(value)
                continue
            self._operate(value, held, resources)
            held.clear()

    def _operate(self, name: str, held: list[Any], resources: Any) -> None:
        if name in ("Tj", "TJ", "'", '"'):
            if name in ("'", '"'):
                self._move(0, -self.leading)
            self._show(held[-1] if name == "TJ" else [held[-1]])
        elif name == "Td":
            self._move(*held)
        elif name == "TD":
            self.leading = -held[1]
            self._move(*held)
        elif name == "T*":
            self._move(0, -self.leading)
        elif name == "Tm":
            self.line = self.text = tuple(held)
        elif name == "Tf":
            self.face, self.size = self.reader.face(resources["/Font"].raw_get("/" + held[0])), held[1]
        elif name == "BT":
            self.line = self.text = UNIT
        elif name in ("TL", "Ts", "Tc", "Tw", "Tz"):
            self._set(name, held[0])
        elif name == "cm":
            self.matrix = times(tuple(held), self.matrix)
        elif name == "q":
            self.stack.append((self.matrix, self.width, self.face, self.size, self.leading, self.rise))
        elif name == "Q":
            self.matrix, self.width, self.face, self.size, self.leading, self.rise = self.stack.pop()
        elif name == "Do":
            self._form(resources["/XObject"][f"/{held[0]}"].get_object(), resources)
        elif name == "w":
            self.width = held[0]
        else:
            self._draw(name, held)

    def _set(self, name: str, value: float) -> None:
        if name == "TL":
            self.leading = value
        elif name == "Ts":
            self.rise = value
        elif name == "Tc":
            self.char = value
        elif name == "Tw":
            self.word = value
        else:
            self.scale = value / 100

    def _move(self, x: float, y: float) -> None:
        self.line = self.text = times((1, 0, 0, 1, x, y), self.line)

    def _form(self, form: Any, resources: Any) -> None:
        if form["/Subtype"] != "/Form":
            return
        inner = _Work(self.reader, self.ink)
        own = form.get("/Resources", resources).get_object()
        a, b, c, d, e, f = (float(v) for v in form.get("/Matrix", UNIT))
        inner.run(form.get_data(), own, times((a, b, c, d, e, f), self.matrix))

    def _show(self, parts: list[Any]) -> None:
        face = self.face
        assert face is not None
        a, b, _c, d, e, f = times(self.text, self.matrix)
        size, x = self.size, 0.0
        whole = size * abs(d)
        for part in parts:
            if isinstance(part, float):
                x -= part / 1000 * size * self.scale
                continue
            step = face.width
            for at in range(0, len(part), step):
                code = int.from_bytes(part[at : at + step], "big")
                advance = face.advance.get(code, face.usual_advance) / 1000 * size
                advance = (advance + self.char + (self.word if step == 1 and code == 32 else 0)) * self.scale
                left, y = e + x * a, f + x * b + self.rise * d
                right = left + advance * a
                box = face.ink.get(code)
                if box is None:
                    ink = (left, y, right, y)
                else:
                    unit = size / 1000
                    ink = (
                        left + box[0] * unit * a,
                        y + box[1] * unit * d,
                        left + box[2] * unit * a,
                        y + box[3] * unit * d,
                    )
                self.ink.glyphs.append(Glyph(face.text.get(code, "�"), left, right, y, whole, face.name, *ink))
                x += advance
        self.text = times((1, 0, 0, 1, x, 0), self.text)

    def _point(self, x: float, y: float) -> tuple[float, float]:
        a, b, c, d, e, f = self.matrix
        return a * x + c * y + e, b * x + d * y + f

    def _draw(self, name: str, held: list[Any]) -> None:
        """Work a path operator; anything else leaves no ink."""
        if name == "m":
            self.path.append([self._point(*held)])
        elif name == "l":
            self.path[-1].append(self._point(*held))
        elif name in ("c", "v", "y"):
            self.path[-1] += [self._point(*held[i : i + 2]) for i in range(0, len(held), 2)]
            self.curved = True
        elif name == "re":
            x, y, w, h = held
            corners = [(x, y), (x + w, y), (x + w, y + h), (x, y + h), (x, y)]
            self.path.append([self._point(*corner) for corner in corners])
        elif name == "h" and self.path:
            self.path[-1].append(self.path[-1][0])
        elif name in ("S", "s", "f", "F", "f*", "B", "B*", "b", "b*", "n"):
            if name in ("s", "b", "b*") and self.path:
                self.path[-1].append(self.path[-1][0])
            if name != "n":
                self._paint(filled=name not in ("S", "s"), stroked=name not in ("f", "F", "f*"))
            self.path, self.curved = [], False

    def _paint(self, *, filled: bool, stroked: bool) -> None:
        width = self.width * abs(self.matrix[3] or self.matrix[1])
        for points in self.path:
            xs, ys = [p[0] for p in points], [p[1] for p in points]
            closed = len(points) > 2 and points[0] == points[-1]
            if filled or self.curved or closed:
                self.ink.areas.append(Area(min(xs), min(ys), max(xs), max(ys), filled, self.curved))
            if stroked and not self.curved:
                self.ink.lines += [Line(*p, *q, width) for p, q in itertools.pairwise(points) if p != q]
