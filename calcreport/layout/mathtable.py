"""The MATH table of a font file: constants, italics corrections, cut-ins, sizes of delimiters.

In: a `FontFile`. Out: font units and glyphs. Reads one part of the table the first time it is needed.
Knows no formulas; `mathbox` sets them.
Layout of the table: the published OpenType specification, chapter MATH (ISO/IEC 14496-22).
"""

from __future__ import annotations

from bisect import bisect_right
from struct import unpack_from
from typing import Literal, TypeAlias

from calcreport.core.fontfile import FontFile
from calcreport.core.record import record
from calcreport.layout.opentype import coverage, substitutes

Corner: TypeAlias = Literal["top_right", "top_left", "bottom_right", "bottom_left"]
_CORNERS: dict[Corner, int] = {"top_right": 0, "top_left": 1, "bottom_right": 2, "bottom_left": 3}

#: names of the records that follow two percentages and two heights, in the order of the file
# fmt: off
_RECORDS = (
    "MathLeading", "AxisHeight", "AccentBaseHeight", "FlattenedAccentBaseHeight", "SubscriptShiftDown",
    "SubscriptTopMax", "SubscriptBaselineDropMin", "SuperscriptShiftUp", "SuperscriptShiftUpCramped",
    "SuperscriptBottomMin", "SuperscriptBaselineDropMax", "SubSuperscriptGapMin",
    "SuperscriptBottomMaxWithSubscript", "SpaceAfterScript", "UpperLimitGapMin",
    "UpperLimitBaselineRiseMin", "LowerLimitGapMin", "LowerLimitBaselineDropMin", "StackTopShiftUp",
    "StackTopDisplayStyleShiftUp", "StackBottomShiftDown", "StackBottomDisplayStyleShiftDown",
    "StackGapMin", "StackDisplayStyleGapMin", "StretchStackTopShiftUp", "StretchStackBottomShiftDown",
    "StretchStackGapAboveMin", "StretchStackGapBelowMin", "FractionNumeratorShiftUp",
    "FractionNumeratorDisplayStyleShiftUp", "FractionDenominatorShiftDown",
    "FractionDenominatorDisplayStyleShiftDown", "FractionNumeratorGapMin",
    "FractionNumDisplayStyleGapMin", "FractionRuleThickness", "FractionDenominatorGapMin",
    "FractionDenomDisplayStyleGapMin", "SkewedFractionHorizontalGap", "SkewedFractionVerticalGap",
    "OverbarVerticalGap", "OverbarRuleThickness", "OverbarExtraAscender", "UnderbarVerticalGap",
    "UnderbarRuleThickness", "UnderbarExtraDescender", "RadicalVerticalGap",
    "RadicalDisplayStyleVerticalGap", "RadicalRuleThickness", "RadicalExtraAscender",
    "RadicalKernBeforeDegree", "RadicalKernAfterDegree",
)
# fmt: on


@record
class Part:
    """One piece of a delimiter put together from pieces, bottom to top; lengths in font units."""

    glyph: int
    #: lengths at either end that may lie over the neighbour
    start: int
    end: int
    length: int
    repeats: bool


class MathTable:
    """The figures a formula setter asks of its font, in font units."""

    __slots__ = ("_alternates", "_font", "_info", "_italics", "_kerns", "_points", "_sizes", "constants", "min_overlap")

    def __init__(self, font: FontFile) -> None:
        """Read the constants; KeyError when the font has no MATH table."""
        base = font.offset("MATH")
        constants, info, variants = unpack_from(">3H", font.data, base + 4)
        self._font = font
        at = base + constants
        percents_and_heights = unpack_from(">2h2H", font.data, at)
        #: by the names of the specification
        self.constants: dict[str, int] = {
            "ScriptPercentScaleDown": percents_and_heights[0],
            "ScriptScriptPercentScaleDown": percents_and_heights[1],
            "DelimitedSubFormulaMinHeight": percents_and_heights[2],
            "DisplayOperatorMinHeight": percents_and_heights[3],
            # each record is a value and the offset of a correction for small screens
            **dict(zip(_RECORDS, unpack_from(">" + "h2x" * len(_RECORDS), font.data, at + 8), strict=True)),
            "RadicalDegreeBottomRaisePercent": unpack_from(">h", font.data, at + 8 + 4 * len(_RECORDS))[0],
        }
        self._info = base + info
        self.min_overlap: int = unpack_from(">H", font.data, base + variants)[0]
        self._sizes: tuple[int, dict[int, int]] = (
            base + variants,
            coverage(font.data, base + variants + unpack_from(">H", font.data, base + variants + 2)[0]),
        )
        self._italics: dict[int, int] | None = None
        self._points: dict[int, int] | None = None
        self._kerns: tuple[int, dict[int, int]] | None = None
        self._alternates: dict[int, tuple[int, ...]] | None = None

    def italics(self, glyph: int) -> int:
        """Give how far a slanted glyph leans over its advance."""
        if self._italics is None:
            self._italics = self._values(0)
        return self._italics.get(glyph, 0)

    def top_point(self, glyph: int) -> float:
        """Give the place across a glyph that marks over it are centred on; of a mark, the place that goes there."""
        if self._points is None:
            self._points = self._values(2)
        found = self._points.get(glyph)
        return self._font.advance(glyph) / 2 if found is None else found

    def _values(self, place: int) -> dict[int, int]:
        """Read a table of one value a glyph, whose offset stands at a place of the glyph information."""
        data, at = self._font.data, self._info + unpack_from(">H", self._font.data, self._info + place)[0]
        covered = coverage(data, at + unpack_from(">H", data, at)[0])
        values = unpack_from(">" + "h2x" * len(covered), data, at + 4)
        return {glyph: values[i] for glyph, i in covered.items()}

    def kern(self, glyph: int, corner: Corner, height: float) -> int:
        """Give the distance to add at a corner of a glyph for what touches it at a height."""
        heights, values = self.steps(glyph, corner)
        return values[bisect_right(heights, height)]

    def steps(self, glyph: int, corner: Corner) -> tuple[tuple[int, ...], tuple[int, ...]]:
        """Give the heights at which a corner steps, and the distances below, between and above them."""
        data = self._font.data
        if self._kerns is None:
            at = self._info + unpack_from(">H", data, self._info + 6)[0]
            self._kerns = (at, coverage(data, at + unpack_from(">H", data, at)[0]))
        base, covered = self._kerns
        index = covered.get(glyph)
        offset = 0
        if index is not None:
            offset = unpack_from(">H", data, base + 4 + 8 * index + 2 * _CORNERS[corner])[0]
        if not offset:
            return (), (0,)
        count = unpack_from(">H", data, base + offset)[0]
        numbers = unpack_from(">" + "h2x" * (2 * count + 1), data, base + offset + 2)
        return numbers[:count], numbers[count:]

    def script(self, glyph: int, level: int) -> int:
        """Give the form of a glyph drawn for scripts (level 1) or scripts of scripts (level 2)."""
        if self._alternates is None:
            self._alternates = substitutes(self._font, "ssty", b"math")
        forms = self._alternates.get(glyph)
        return forms[min(level, len(forms)) - 1] if forms else glyph

    def sizes(self, glyph: int) -> tuple[tuple[int, int], ...]:
        """Give the sizes of a glyph that grows upright, smallest first: (glyph, height)."""
        at = self._construction(glyph)
        if not at:
            return ()
        count = unpack_from(">H", self._font.data, at + 2)[0]
        numbers = unpack_from(f">{2 * count}H", self._font.data, at + 4)
        return tuple(zip(numbers[0::2], numbers[1::2], strict=True))

    def parts(self, glyph: int) -> tuple[Part, ...]:
        """Give the pieces a taller form of a glyph is put together from, bottom to top; () for none."""
        at = self._construction(glyph)
        offset = unpack_from(">H", self._font.data, at)[0] if at else 0
        if not offset:
            return ()
        count = unpack_from(">H", self._font.data, at + offset + 4)[0]
        rows = (unpack_from(">5H", self._font.data, at + offset + 6 + 10 * i) for i in range(count))
        return tuple(Part(g, start, end, length, bool(flags & 1)) for g, start, end, length, flags in rows)

    def _construction(self, glyph: int) -> int:
        """Find the record of a glyph that grows upright; 0 for none."""
        at, covered = self._sizes
        index = covered.get(glyph)
        if index is None:
            return 0
        found: int = at + unpack_from(">H", self._font.data, at + 10 + 2 * index)[0]
        return found
