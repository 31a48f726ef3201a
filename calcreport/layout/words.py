"""Running text: words, heavier words, inline formulas and references broken to a width.

`report.model.Words` and a width in points -> one `Box` a text line, origin at its baseline's left
end; references become link areas. Knows faces and sizes, not sheets. Lines are filled from the
first word on and set ragged; a word wider than the line parts after a slash, hyphen or underscore,
else wherever the line ends, so that no text can leave its lane.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

from calcreport.layout.fonts import PLAIN as AS_IS
from calcreport.layout.fonts import Fonts, Manner
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Box, Face, Item, Link, Placed
from calcreport.report.model import Formula, Reference, Strong, Words

#: A width that no line reaches.
UNBROKEN = 1e6
#: Ascent and descent of a plain text line, as shares of its size.
RISE, FALL = 0.74, 0.24


@dataclass(frozen=True, slots=True, eq=False)
class TextStyle:
    """Face, size and distance between baselines, in points; made once each, and the same only as itself."""

    face: Face
    size: float
    leading: float
    manner: Manner = AS_IS

    @property
    def rise(self) -> float:
        """Ascent that a plain text line takes up."""
        return RISE * self.size

    @property
    def fall(self) -> float:
        """Descent that a plain text line takes up."""
        return FALL * self.size


PLAIN = TextStyle("regular", 9, 11)
SMALL = TextStyle("regular", 8, 10)
SMALL_STRONG = TextStyle("semibold", 8, 10)
STRONG = TextStyle("semibold", 9, 11)
RESULT = TextStyle("semibold", 10, 12.5)
CITATION = TextStyle("semibold", 7.5, 9)
SOURCE = TextStyle("regular", 7.5, 9)
QUIET = TextStyle("regular", 8, 9.5)
#: heading by level
HEADINGS = {
    1: TextStyle("semibold", 12.5, 15, Manner(small_caps=True, tracking=40)),
    2: TextStyle("semibold", 10.5, 13, Manner(small_caps=True, tracking=40)),
    3: TextStyle("semibold", 9, 11),
}


@dataclass(frozen=True, slots=True)
class _Atom:
    """What never parts: letters of one face, or a formula box."""

    width: float
    text: str
    face: Face
    target: str
    box: Box | None
    formula: Formula | None


_Chunk: TypeAlias = "list[_Atom]"


class Lettering:
    """Sets words; keeps the width of every word and the box of every label it has met."""

    __slots__ = ("_labels", "_set", "_widths", "fonts", "formulas")

    def __init__(self, fonts: Fonts, formulas: Formulas) -> None:
        self.fonts = fonts
        self.formulas = formulas
        self._widths: dict[tuple[str, Face], float] = {}
        self._labels: dict[tuple[str, Face, float], Box] = {}
        self._set: dict[tuple[str, TextStyle, float], tuple[Box, ...]] = {}

    def width(self, text: str, style: TextStyle, face: Face) -> float:
        """Return the advance of `text` in points, in the size and manner of a style."""
        if style.manner is not AS_IS:
            return self.fonts.width(text, face, style.size, style.manner)
        unit = self._widths.get((text, face))
        if unit is None:
            unit = self._widths[text, face] = self.fonts.width(text, face, 1000.0) / 1000.0
        return unit * style.size

    def label(self, text: str, face: Face, size: float) -> Box:
        """Return `text` in one line as a box; the same box for the same text."""
        key = (text, face, size)
        box = self._labels.get(key)
        if box is None:
            box = self.fonts.box(text, face, size)
            box = self._labels[key] = Box(box.width, RISE * size, FALL * size, box.items)
        return box

    def set(self, words: Words, style: TextStyle, width: float) -> tuple[Box, ...]:
        """Break `words` into lines no wider than `width` points; no words make no lines."""
        if not words:
            return ()
        first = words[0]
        if len(words) == 1 and isinstance(first, str):
            key = (first, style, width)
            done = self._set.get(key)
            if done is None:
                done = self._set[key] = self._break(words, style, width)
            return done
        return self._break(words, style, width)

    def fitting(self, words: Words, style: TextStyle, width: float) -> tuple[Box, ...]:
        """Break words that have been measured in one line, if that line is too wide."""
        whole = self.set(words, style, UNBROKEN)
        return whole if not whole or whole[0].width <= width else self.set(words, style, width)

    def natural(self, words: Words, style: TextStyle) -> float:
        """Return the width of `words` in one line."""
        return sum(box.width for box in self.set(words, style, UNBROKEN))

    def longest(self, words: Words, style: TextStyle) -> float:
        """Return the width of the longest stretch of `words` that has no break in it."""
        chunks = self._chunks(words, style)
        return max((sum(atom.width for atom in chunk) for chunk in chunks), default=0.0)

    def _break(self, words: Words, style: TextStyle, width: float) -> tuple[Box, ...]:
        space = self.width(" ", style, style.face)
        lines: list[Box] = []
        line: list[_Chunk] = []
        used = 0.0
        for chunk in self._fitting(self._chunks(words, style), style, width):
            wide = sum(atom.width for atom in chunk)
            if line and used + space + wide > width + 0.01:
                lines.append(self._line(line, style))
                line, used = [], 0.0
            used += wide + (space if line else 0.0)
            line.append(chunk)
        if line:
            lines.append(self._line(line, style))
        return tuple(lines)

    def _chunks(self, words: Words, style: TextStyle) -> list[_Chunk]:
        """Split at spaces; what touches without a space stays in one chunk."""
        chunks: list[_Chunk] = []
        chunk: _Chunk = []
        for word in words:
            if isinstance(word, str):
                text, face, target = word, style.face, ""
            elif isinstance(word, Strong):
                text, face, target = word.text, _heavier(style.face), ""
            elif isinstance(word, Reference):
                text, face, target = word.text, style.face, word.target
            else:
                box = self.formulas.box(word, style.size, "text")
                chunk.append(_Atom(box.width, "", style.face, "", box, word))
                continue
            for position, part in enumerate(text.replace("\n", " ").split(" ")):
                if position and chunk:
                    chunks.append(chunk)
                    chunk = []
                if part:
                    chunk.append(self._atom(part, face, style, target))
        if chunk:
            chunks.append(chunk)
        return chunks

    def _atom(self, text: str, face: Face, style: TextStyle, target: str) -> _Atom:
        return _Atom(self.width(text, style, face), text, face, target, None, None)

    def _fitting(self, chunks: list[_Chunk], style: TextStyle, width: float) -> list[_Chunk]:
        """Part chunks that are wider than the line."""
        if all(sum(atom.width for atom in chunk) <= width for chunk in chunks):
            return chunks
        fitting: list[_Chunk] = []
        for chunk in chunks:
            if sum(atom.width for atom in chunk) <= width:
                fitting.append(chunk)
                continue
            for atom in chunk:
                if atom.box is not None and atom.formula is not None and atom.width > width:
                    rows = self.formulas.broken(atom.formula, width, style.size)
                    fitting.extend([_Atom(row.width, "", style.face, "", row, None)] for row in rows)
                elif atom.box is not None or atom.width <= width:
                    fitting.append([atom])
                else:
                    fitting.extend([part] for part in self._parted(atom, style, width))
        return fitting

    def _parted(self, atom: _Atom, style: TextStyle, width: float) -> list[_Atom]:
        parts: list[_Atom] = []
        text = atom.text
        while text:
            end = self._prefix(text, atom.face, style, width)
            if end < len(text):
                soft = max(text.rfind(sign, 0, end) for sign in "/-_.")
                end = soft + 1 if soft > 0 else end
            parts.append(self._atom(text[:end], atom.face, style, atom.target))
            text = text[end:]
        return parts

    def _prefix(self, text: str, face: Face, style: TextStyle, width: float) -> int:
        """Return how many letters of `text` fit the width, one at least."""
        used = 0.0
        for end, letter in enumerate(text):
            used += self.width(letter, style, face)
            if used > width and end:
                return end
        return len(text)

    def _line(self, chunks: list[_Chunk], style: TextStyle) -> Box:
        """Put chunks side by side, joining letters of one face into one run."""
        space = self.width(" ", style, style.face)
        rise, fall = style.rise, style.fall
        items: list[Item] = []
        x, start, held, face, target = 0.0, 0.0, "", style.face, ""
        for position, chunk in enumerate(chunks):
            for place, atom in enumerate(chunk):
                gap = " " if position and not place else ""
                if held and (atom.box is not None or atom.face != face or atom.target != target):
                    # The space belongs to the run before it, so that copied words stay apart.
                    self._emit(items, (held + gap, face, target), style, start, x)
                    held = ""
                x += space if gap else 0.0
                if atom.box is not None:
                    items.append(Placed(x, 0.0, atom.box))
                    rise, fall = max(rise, atom.box.ascent), max(fall, atom.box.descent)
                elif held:
                    held += gap + atom.text
                else:
                    start, held, face, target = x, atom.text, atom.face, atom.target
                x += atom.width
        if held:
            self._emit(items, (held, face, target), style, start, x)
        return Box(x, rise, fall, tuple(items))

    def _emit(self, items: list[Item], held: tuple[str, Face, str], style: TextStyle, start: float, end: float) -> None:
        """Add a run of letters from `start`, and its link area where it leads somewhere."""
        text, face, target = held
        items.extend(self.fonts.run(text, face, style.size, start, 0.0, style.manner))
        if target:
            items.append(Link(start, -style.rise, end - start, style.rise + style.fall, target))


def _heavier(face: Face) -> Face:
    return "semibold" if face in ("regular", "italic") else face
