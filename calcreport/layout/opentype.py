"""Layout tables of a font file: pair kerning, script alternates, small capitals.

In: a `FontFile`. Out: glyphs for glyphs, and distances in font units. Reads one subtable the first time it is
needed. Knows no text setting; the MATH table is `mathtable`.
Layout of the tables: the published OpenType specification (ISO/IEC 14496-22).
"""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterator, Sequence
from struct import unpack_from

from calcreport.core.fontfile import FontFile

_SINGLE, _ALTERNATE, _PAIR = 1, 3, 2
_EXTENSION = {"GSUB": 7, "GPOS": 9}


def coverage(data: bytes, at: int) -> dict[int, int]:
    """Read a coverage table: glyph to its index."""
    form, count = unpack_from(">2H", data, at)
    if form == 1:
        return dict(zip(unpack_from(f">{count}H", data, at + 4), range(count), strict=True))
    numbers = unpack_from(f">{3 * count}H", data, at + 4)
    found: dict[int, int] = {}
    for start, end, index in zip(numbers[0::3], numbers[1::3], numbers[2::3], strict=True):
        found.update(zip(range(start, end + 1), range(index, index + end - start + 1), strict=True))
    return found


class _Classes:
    """A class definition, kept as ranges of glyphs: most glyphs of a font are never asked for."""

    __slots__ = ("_firsts", "_groups", "_lasts")

    def __init__(self, data: bytes, at: int) -> None:
        form, first = unpack_from(">2H", data, at)
        if form == 1:
            count = unpack_from(">H", data, at + 4)[0]
            self._firsts: Sequence[int] = range(first, first + count)
            self._lasts: Sequence[int] = self._firsts
            self._groups: Sequence[int] = unpack_from(f">{count}H", data, at + 6)
            return
        numbers = unpack_from(f">{3 * first}H", data, at + 4)
        self._firsts, self._lasts, self._groups = numbers[0::3], numbers[1::3], numbers[2::3]

    def of(self, glyph: int) -> int:
        """Give the class of a glyph; 0 is that of all glyphs not listed."""
        i = bisect_right(self._firsts, glyph) - 1
        return self._groups[i] if i >= 0 and glyph <= self._lasts[i] else 0


def _subtables(font: FontFile, tag: str, feature: str, kind: int, script: bytes = b"DFLT") -> Iterator[int]:
    """Give where the subtables of one kind start, for a feature of a script in its default language."""
    if tag not in font.tables:
        return
    data, base = font.data, font.offset(tag)
    scripts, features, lookups = (base + o for o in unpack_from(">3H", data, base + 4))
    tags = unpack_from(">" + "4sH" * unpack_from(">H", data, scripts)[0], data, scripts + 2)
    place = scripts + dict(zip(tags[0::2], tags[1::2], strict=True)).get(script, tags[1])
    language = place + unpack_from(">H", data, place)[0]
    chosen = unpack_from(f">{unpack_from('>H', data, language + 4)[0]}H", data, language + 6)
    for i in chosen:
        name, at = unpack_from(">4sH", data, features + 2 + 6 * i)
        if name != feature.encode():
            continue
        for n in unpack_from(f">{unpack_from('>H', data, features + at + 2)[0]}H", data, features + at + 4):
            lookup = lookups + unpack_from(">H", data, lookups + 2 + 2 * n)[0]
            form, _, count = unpack_from(">3H", data, lookup)
            for offset in unpack_from(f">{count}H", data, lookup + 6):
                place, real = lookup + offset, form
                if form == _EXTENSION[tag]:
                    real, step = unpack_from(">HI", data, place + 2)
                    place += step
                if real == kind:
                    yield place


def substitutes(font: FontFile, feature: str, script: bytes = b"DFLT") -> dict[int, tuple[int, ...]]:
    """Read what a feature puts for each glyph: one glyph, or its alternates in order."""
    data = font.data
    found: dict[int, tuple[int, ...]] = {}
    for at in _subtables(font, "GSUB", feature, _SINGLE, script):
        form, place, value = unpack_from(">HHh", data, at)
        covered = coverage(data, at + place)
        if form == 1:
            found.update((glyph, ((glyph + value) & 0xFFFF,)) for glyph in covered)
        else:
            others = unpack_from(f">{len(covered)}H", data, at + 6)
            found.update((glyph, (others[i],)) for glyph, i in covered.items())
    for at in _subtables(font, "GSUB", feature, _ALTERNATE, script):
        covered = coverage(data, at + unpack_from(">H", data, at + 2)[0])
        for glyph, i in covered.items():
            group = at + unpack_from(">H", data, at + 6 + 2 * i)[0]
            found[glyph] = unpack_from(f">{unpack_from('>H', data, group)[0]}H", data, group + 2)
    return found


class _ByClasses:
    """Pair kerning by classes of glyphs."""

    __slots__ = ("_at", "_columns", "_data", "_rows", "_width", "covered")

    def __init__(self, data: bytes, at: int) -> None:
        self._data, self._at = data, at
        offset, _, _, first, second, _, self._width = unpack_from(">7H", data, at + 2)
        self.covered = coverage(data, at + offset)
        self._rows, self._columns = _Classes(data, at + first), _Classes(data, at + second)

    def value(self, left: int, right: int) -> int:
        """Give the value of a pair whose left glyph is covered."""
        place = self._at + 16 + 2 * (self._rows.of(left) * self._width + self._columns.of(right))
        found: int = unpack_from(">h", self._data, place)[0]
        return found


class _ByPairs:
    """Pair kerning listed glyph by glyph."""

    __slots__ = ("_at", "_data", "_sets", "covered")

    def __init__(self, data: bytes, at: int) -> None:
        self._data, self._at = data, at
        self.covered = coverage(data, at + unpack_from(">H", data, at + 2)[0])
        self._sets: dict[int, dict[int, int]] = {}

    def value(self, left: int, right: int) -> int | None:
        """Give the value of a pair whose left glyph is covered; None where the pair is not listed."""
        values = self._sets.get(left)
        if values is None:
            group = self._at + unpack_from(">H", self._data, self._at + 10 + 2 * self.covered[left])[0]
            count = unpack_from(">H", self._data, group)[0]
            numbers = unpack_from(">" + "Hh" * count, self._data, group + 2)
            values = self._sets[left] = dict(zip(numbers[0::2], numbers[1::2], strict=True))
        return values.get(right)


class Kerning(dict[tuple[int, int], int]):
    """Distances to add between two glyphs, in font units, by pairs; 0 for most; a pair is looked up on first use."""

    __slots__ = ("_font", "_tables")

    def __init__(self, font: FontFile) -> None:
        """Take a font; its pair tables are read when a first pair needs them."""
        super().__init__()
        self._font = font
        self._tables: tuple[_ByClasses | _ByPairs, ...] | None = None

    def __missing__(self, pair: tuple[int, int]) -> int:
        found = self[pair] = self._find(*pair)
        return found

    def _find(self, left: int, right: int) -> int:
        """Search the pair tables in order; the first that covers the left glyph with this pair decides."""
        if self._tables is None:
            places = _subtables(self._font, "GPOS", "kern", _PAIR)
            self._tables = tuple(_pair_table(self._font.data, at) for at in places)
        for table in self._tables:
            if left in table.covered:
                found = table.value(left, right)
                if found is not None:
                    return found
        return 0


def _pair_table(data: bytes, at: int) -> _ByClasses | _ByPairs:
    form, _, one, two = unpack_from(">4H", data, at)
    if (one, two) != (4, 0):
        raise ValueError("pair kerning other than a change of the first advance")
    return _ByClasses(data, at) if form == 2 else _ByPairs(data, at)
