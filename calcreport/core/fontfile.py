"""One TrueType font file: characters to glyphs, advances, outline boxes, raw tables and outlines.

In: the bytes of a file. Out: numbers in font units (`units_per_em` to the em) and slices of those bytes.
Nothing is parsed before it is asked for. Knows no text setting, no mathematics and no PDF.
Layout of the tables: the published OpenType specification (ISO/IEC 14496-22).
"""

from __future__ import annotations

from bisect import bisect_left
from struct import unpack_from

#: (x min, y min, x max, y max) in font units
Bounds = tuple[int, int, int, int]


class FontFile:
    """A TrueType file held in memory; glyph figures are read on first use and kept."""

    __slots__ = (
        "_advances",
        "_bounds",
        "_codes",
        "_long_loca",
        "_metrics",
        "_ranges",
        "data",
        "glyph_count",
        "tables",
        "units_per_em",
    )

    def __init__(self, data: bytes) -> None:
        """Read the table directory and the counts; ValueError when the bytes are no TrueType outlines."""
        self.data = data
        if data[:4] not in (b"\0\1\0\0", b"true"):
            raise ValueError("not a TrueType font file")
        count = unpack_from(">H", data, 4)[0]
        entries = (unpack_from(">4s4xII", data, 12 + 16 * i) for i in range(count))
        #: tag to (offset, length)
        self.tables: dict[str, tuple[int, int]] = {tag.decode("latin-1"): (at, size) for tag, at, size in entries}
        if "glyf" not in self.tables:
            raise ValueError("the font file has no TrueType outlines")
        head = self.offset("head")
        self.units_per_em: int = unpack_from(">H", data, head + 18)[0]
        self._long_loca: bool = unpack_from(">h", data, head + 50)[0] != 0
        self.glyph_count: int = unpack_from(">H", data, self.offset("maxp") + 4)[0]
        self._metrics: int = unpack_from(">H", data, self.offset("hhea") + 34)[0]
        self._advances: dict[int, int] = {}
        self._bounds: dict[int, Bounds] = {}
        self._codes: dict[int, int] = {}
        self._ranges: tuple[tuple[int, ...], tuple[int, ...], tuple[int, ...]] | None = None

    def offset(self, tag: str) -> int:
        """Give where a table starts; KeyError when the file has none of that name."""
        return self.tables[tag][0]

    def table(self, tag: str) -> bytes:
        """Give the bytes of a table, empty when the file has none of that name."""
        at, size = self.tables.get(tag, (0, 0))
        return self.data[at : at + size]

    def glyph(self, code: int) -> int:
        """Give the glyph of a code point, 0 when the font has none."""
        found = self._codes.get(code)
        if found is None:
            found = self._codes[code] = self._look_up(code)
        return found

    def advance(self, glyph: int) -> int:
        """Give the advance width of a glyph."""
        found = self._advances.get(glyph)
        if found is None:
            last = min(glyph, self._metrics - 1)
            found = self._advances[glyph] = unpack_from(">H", self.data, self.offset("hmtx") + 4 * last)[0]
        return found

    def bounds(self, glyph: int) -> Bounds:
        """Give the ink box of a glyph, four zeros when it has no ink."""
        found = self._bounds.get(glyph)
        if found is None:
            start, end = self.outline_range(glyph)
            found = self._bounds[glyph] = unpack_from(">4h", self.data, start + 2) if end > start else (0, 0, 0, 0)
        return found

    def outline_range(self, glyph: int) -> tuple[int, int]:
        """Give where the outline of a glyph starts and ends in `data`; equal when it has none."""
        glyf, loca = self.offset("glyf"), self.offset("loca")
        if self._long_loca:
            start, end = unpack_from(">2I", self.data, loca + 4 * glyph)
        else:
            start, end = (2 * half for half in unpack_from(">2H", self.data, loca + 2 * glyph))
        return glyf + start, glyf + end

    def components(self, glyph: int) -> tuple[int, ...]:
        """Give the glyphs a composite glyph is made of, empty for a simple one."""
        start, end = self.outline_range(glyph)
        if end == start or unpack_from(">h", self.data, start)[0] >= 0:
            return ()
        found = []
        at = start + 10
        while True:
            flags, part = unpack_from(">2H", self.data, at)
            found.append(part)
            # words or bytes for the offsets, then a scale, two scales or a 2 x 2 matrix
            at += 4 + (4 if flags & 1 else 2) + (2 if flags & 8 else 4 if flags & 0x40 else 8 if flags & 0x80 else 0)
            if not flags & 0x20:
                return tuple(found)

    @property
    def box(self) -> Bounds:
        """The box that holds every glyph."""
        return unpack_from(">4h", self.data, self.offset("head") + 36)

    @property
    def ascent_descent(self) -> tuple[int, int]:
        """Line extents, the second below zero."""
        return unpack_from(">2h", self.data, self.offset("hhea") + 4)

    @property
    def cap_height(self) -> int:
        """Height of capitals; the ascent in a file too old to say."""
        at = self.offset("OS/2")
        return (
            unpack_from(">h", self.data, at + 88)[0]
            if unpack_from(">H", self.data, at)[0] >= 2
            else (self.ascent_descent[0])
        )

    @property
    def italic_angle(self) -> float:
        """Degrees counter-clockwise from the vertical."""
        angle: int = unpack_from(">i", self.data, self.offset("post") + 4)[0]
        return angle / 65536

    @property
    def postscript_name(self) -> str:
        """The name a PDF gives the font."""
        at = self.offset("name")
        count, strings = unpack_from(">2H", self.data, at + 2)
        for i in range(count):
            platform, _, _, name, size, start = unpack_from(">6H", self.data, at + 6 + 12 * i)
            if name == 6:
                raw = self.data[at + strings + start : at + strings + start + size]
                return raw.decode("mac-roman" if platform == 1 else "utf-16-be")
        raise ValueError("the font file has no PostScript name")

    def _look_up(self, code: int) -> int:
        """Find a code point in the character ranges; 0 for none."""
        if self._ranges is None:
            self._ranges = self._read_ranges()
        ends, starts, glyphs = self._ranges
        i = bisect_left(ends, code)
        if i == len(ends) or starts[i] > code:
            return 0
        return glyphs[i] + code - starts[i]

    def _read_ranges(self) -> tuple[tuple[int, ...], tuple[int, ...], tuple[int, ...]]:
        """Read last code, first code and first glyph of every range of the widest Unicode map."""
        cmap = self.offset("cmap")
        count = unpack_from(">H", self.data, cmap + 2)[0]
        maps = {(p, e): at for p, e, at in (unpack_from(">2HI", self.data, cmap + 4 + 8 * i) for i in range(count))}
        if (3, 10) in maps:
            at = cmap + maps[3, 10]
            size = unpack_from(">I", self.data, at + 12)[0]
            numbers = unpack_from(f">{3 * size}I", self.data, at + 16)
            return numbers[1::3], numbers[0::3], numbers[2::3]
        return self._read_segments(cmap + maps[3, 1])

    def _read_segments(self, at: int) -> tuple[tuple[int, ...], tuple[int, ...], tuple[int, ...]]:
        """Read a map of 16-bit codes (format 4) as ranges."""
        size = unpack_from(">H", self.data, at + 6)[0] // 2
        ends = unpack_from(f">{size}H", self.data, at + 14)
        starts, deltas, offsets = (unpack_from(f">{size}H", self.data, at + 16 + 2 * size * k) for k in (1, 2, 3))
        ranges: list[tuple[int, int, int]] = []
        for i in range(size):
            if not offsets[i]:
                wrap = starts[i] + deltas[i] >= 65536 or deltas[i] > 32767
                ranges.append((ends[i], starts[i], starts[i] + deltas[i] - (65536 if wrap else 0)))
                continue
            for code in range(starts[i], min(ends[i], 65534) + 1):
                place = at + 16 + 6 * size + 2 * i + offsets[i] + 2 * (code - starts[i])
                glyph = unpack_from(">H", self.data, place)[0]
                if glyph:
                    ranges.append((code, code, (glyph + deltas[i]) & 0xFFFF))
        return tuple(r[0] for r in ranges), tuple(r[1] for r in ranges), tuple(r[2] for r in ranges)
