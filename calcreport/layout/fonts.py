"""The four faces: where their files are, what text becomes in them, how wide it is.

In: characters, a face, a size in points. Out: `Run` and `Box` with glyph ids, lengths in points; to
`mathbox` the figures of the formula face in thousandths of the em. The font files are found inside the
installed packages that carry them, without importing those packages. Characters a face lacks are taken
from the formula face one by one. Knows no lines, no paragraphs and no formulas.
"""

from __future__ import annotations

from collections.abc import Mapping
from importlib.machinery import PathFinder, SourceFileLoader
from itertools import pairwise

from calcreport.core.fontfile import FontFile
from calcreport.core.record import record
from calcreport.layout.mathtable import MathTable
from calcreport.layout.model import Box, Face, Run
from calcreport.layout.opentype import Kerning, substitutes

#: face to (package, place of the file inside it); all four under the SIL Open Font License 1.1
_PLACES: dict[Face, tuple[str, str]] = {
    "regular": ("font_source_sans_pro", "files/SourceSansPro-Regular.ttf"),
    "italic": ("font_source_sans_pro", "files/SourceSansPro-It.ttf"),
    "semibold": ("font_source_sans_pro", "files/SourceSansPro-Semibold.ttf"),
    "math": ("ziamath", "fonts/STIXTwoMath-Regular.ttf"),
}
#: extents of a line of words in thousandths of the size: tallest ascender and lowest descender of the faces
_ASCENT, _DESCENT = 750, 250
#: words kept with their glyphs before the store is emptied
_KEPT = 4_000


def _mathematical_italics() -> dict[str, str]:
    """Pair letters with their code points as mathematical italics (Unicode chart U+1D400)."""
    pairs = {chr(65 + i): chr(0x1D434 + i) for i in range(26)} | {chr(97 + i): chr(0x1D44E + i) for i in range(26)}
    pairs |= {chr(0x3B1 + i): chr(0x1D6FC + i) for i in range(25)}
    # h is an older character; the strength reduction factor is printed with the stroked phi (common practice)
    return pairs | {
        "h": "\u210e",
        "φ": "\U0001d719",
        "ϕ": "\U0001d719",
        "ϵ": "\U0001d716",
        "ϑ": "\U0001d717",
        "∂": "\U0001d715",
        "ı": "\U0001d6a4",
        "ȷ": "\U0001d6a5",
    }


class _Advances(dict[int, int]):
    """Glyph to advance, read on first use."""

    def __init__(self, font: FontFile) -> None:
        super().__init__()
        self._font = font

    def __missing__(self, glyph: int) -> int:
        found = self[glyph] = self._font.advance(glyph)
        return found


class _Characters(dict[str, int]):
    """Character to glyph, 0 for none, read on first use."""

    def __init__(self, font: FontFile) -> None:
        super().__init__()
        self._font = font

    def __missing__(self, character: str) -> int:
        found = self[character] = self._font.glyph(ord(character))
        return found


@record
class _Piece:
    """Glyphs of one face; lengths in thousandths of the size."""

    face: Face
    start: int
    glyphs: tuple[int, ...]
    text: str
    shifts: tuple[int, ...]


@record
class Manner:
    """How words are set."""

    kern: bool = True
    #: lower-case letters as small capitals, in the faces that have them
    small_caps: bool = False
    #: distance added between letters, in thousandths of the size
    tracking: int = 0


PLAIN = Manner()


class Fonts:
    """Glyphs, widths and formula figures of the four faces."""

    def __init__(self, files: Mapping[Face, FontFile]) -> None:
        """Take the four files; ValueError unless each has 1000 units to the em."""
        for face, file in files.items():
            if file.units_per_em != 1000:
                raise ValueError(f"{face}: {file.units_per_em} units to the em, not 1000")
        self.files: Mapping[Face, FontFile] = files
        self.characters: dict[Face, _Characters] = {face: _Characters(f) for face, f in files.items()}
        self.advances: dict[Face, _Advances] = {face: _Advances(f) for face, f in files.items()}
        self.math = MathTable(files["math"])
        self.kerning: dict[Face, Kerning] = {face: Kerning(f) for face, f in files.items()}
        self._italics = _mathematical_italics()
        self._capitals: dict[Face, dict[int, tuple[int, ...]]] = {}
        self._shaped: dict[tuple[str, Face, Manner], tuple[int, tuple[_Piece, ...]]] = {}

    def width(self, text: str, face: Face, size: float, manner: Manner = PLAIN) -> float:
        """Measure words: the advance in points."""
        return self._shape(text, face, manner)[0] * size / 1000

    def run(
        self, text: str, face: Face, size: float, x: float = 0.0, y: float = 0.0, manner: Manner = PLAIN
    ) -> tuple[Run, ...]:
        """Set words with their baseline at (x, y): one run, more where another face lends characters."""
        return tuple(
            Run(x + piece.start * size / 1000, y, piece.face, size, piece.glyphs, piece.text, piece.shifts)
            for piece in self._shape(text, face, manner)[1]
        )

    def box(self, text: str, face: Face, size: float, manner: Manner = PLAIN) -> Box:
        """Set words as a box; its extents are those of any line of words of this size."""
        width = self._shape(text, face, manner)[0] * size / 1000
        return Box(width, _ASCENT * size / 1000, _DESCENT * size / 1000, self.run(text, face, size, manner=manner))

    def missing(self, text: str) -> str:
        """List the characters of a text that neither words nor formulas can show."""
        words, math = self.characters["regular"], self.characters["math"]
        return "".join(sorted({c for c in text if not words[c] and not math[c]}))

    def slanted(self, character: str) -> int:
        """Give the formula face's glyph of a character as a variable; upright where it has no italic form."""
        return self.characters["math"][self._italics.get(character, character)]

    def _shape(self, text: str, face: Face, manner: Manner) -> tuple[int, tuple[_Piece, ...]]:
        """Give the advance and the pieces of a text, from the store when it was set before."""
        key = (text, face, manner)
        found = self._shaped.get(key)
        if found is None:
            if len(self._shaped) >= _KEPT:
                self._shaped.clear()
            found = self._shaped[key] = self._shape_afresh(text, face, manner)
        return found

    def _shape_afresh(self, text: str, face: Face, manner: Manner) -> tuple[int, tuple[_Piece, ...]]:
        characters = self.characters[face]
        glyphs = [characters[c] for c in text]
        if 0 not in glyphs or face == "math":
            piece, width = self._piece(face, 0, glyphs, text, manner)
            return width, (piece,) if glyphs else ()
        pieces: list[_Piece] = []
        at = start = 0
        for end in range(1, len(text) + 1):
            if end < len(text) and (glyphs[end] == 0) == (glyphs[start] == 0):
                continue
            own = glyphs[start] != 0
            part = glyphs[start:end] if own else [self._lent(c, face) for c in text[start:end]]
            piece, width = self._piece(face if own else "math", at, part, text[start:end], manner)
            pieces.append(piece)
            at, start = at + width, end
        return at, tuple(pieces)

    def _piece(self, face: Face, start: int, glyphs: list[int], text: str, manner: Manner) -> tuple[_Piece, int]:
        """Set glyphs of one face; give the piece and its advance."""
        if manner.small_caps:
            capitals = self._small_capitals(face)
            glyphs = [capitals.get(g, (g,))[0] for g in glyphs]
        advances = self.advances[face]
        width = sum([advances[g] for g in glyphs])
        shifts: tuple[int, ...] = ()
        if manner.kern or manner.tracking:
            kerning = self.kerning[face]
            between = [kerning[pair] for pair in pairwise(glyphs)] if manner.kern else [0] * (len(glyphs) - 1)
            shifts = tuple([shift + manner.tracking for shift in between] if manner.tracking else between)
            # the last glyph keeps its plain advance, so widths of words add up with the spaces between them
            shifts = (*shifts, 0) if any(shifts) else ()
            width += sum(shifts)
        return _Piece(face, start, tuple(glyphs), text, shifts), width

    def _lent(self, character: str, face: Face) -> int:
        """Give the formula face's glyph for a character a face of words lacks."""
        return self.slanted(character) if face == "italic" else self.characters["math"][character]

    def _small_capitals(self, face: Face) -> dict[int, tuple[int, ...]]:
        found = self._capitals.get(face)
        if found is None:
            found = self._capitals[face] = substitutes(self.files[face], "smcp")
        return found


def installed_fonts() -> Fonts:
    """Load the four faces from the packages that carry them; FileNotFoundError names one not installed."""
    return Fonts({face: FontFile(_read(package, place)) for face, (package, place) in _PLACES.items()})


def _read(package: str, place: str) -> bytes:
    """Read a file inside an installed package without importing it."""
    spec = PathFinder.find_spec(package)
    folders = spec.submodule_search_locations if spec is not None else None
    if spec is None or not folders or not isinstance(spec.loader, SourceFileLoader):
        raise FileNotFoundError(f"the package {package.replace('_', '-')} that carries {place} is not installed")
    return spec.loader.get_data(f"{folders[0]}/{place}")
