"""Sizes and figures of one formula style, and the boxes of single letters, signs and gaps in it.

A style is a size (full, fraction part, script, script of a script) with the constants of the formula face
scaled to points. In: characters. Out: boxes, kept for as long as the style lives. Knows no formula trees;
`mathbox` puts boxes together.
"""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise
from typing import Literal, TypeAlias

from calcreport.core.record import record
from calcreport.layout.fonts import Fonts
from calcreport.layout.model import Box, Run

#: sizes as shares of the full size: at 10 pt fraction parts 8.5, scripts 7, scripts of scripts 6. Scripts in
#: fraction parts are set at 6.4: the face draws its script forms larger, so their letters stand as tall as
#: plain letters of 7 pt
_PART, _SCRIPT, _PART_SCRIPT, _SMALLEST = 0.85, 0.7, 0.64, 0.6
#: nothing on a sheet is set smaller, in points
_LEAST = 6.0
#: gaps, narrow to wide: none, thin, number to unit, medium, thick
NONE, THIN, UNIT, MEDIUM, THICK = range(5)
#: in thousandths of the em: three, four and five eighteenths, and a fifth between number and unit
_GAPS = (0, 167, 200, 222, 278)
#: boxes of letters and scripts kept a style before the store is emptied
KEPT = 4000
#: signs as typed and as printed
_SIGNS = {"-": "−"}

#: glyph, advance, reach above and below the baseline, in font units
_Figures: TypeAlias = tuple[int, int, int, int]


@record
class Nucleus:
    """Letters set on their own, and what scripts beside them need to know."""

    #: its width takes in the lean of a slanted last letter
    box: Box
    #: that lean, in points
    italic: float
    first: int
    last: int


class _Characters(dict[str, _Figures]):
    """Figures of characters in the forms of one level of scripts, read on first use."""

    def __init__(self, fonts: Fonts, level: int, italic: bool) -> None:
        super().__init__()
        self._fonts, self._level, self._italic = fonts, level, italic

    def __missing__(self, character: str) -> _Figures:
        fonts = self._fonts
        glyph = fonts.slanted(character) if self._italic else fonts.characters["math"][character]
        if self._level:
            glyph = fonts.math.script(glyph, self._level)
        _, bottom, _, top = fonts.files["math"].bounds(glyph)
        found = self[character] = (glyph, fonts.advances["math"][glyph], max(top, 0), max(-bottom, 0))
        return found


class Style:
    """One size of one formula, with its constants in points."""

    def __init__(self, fonts: Fonts, full: float, size: float, level: int, cramped: bool, display: bool) -> None:
        """Scale the constants of the formula face to a size in points."""
        self.fonts = fonts
        #: size of the whole formula
        self.full = full
        self.size = size
        #: 0 on the line and in fractions, 1 in scripts, 2 in scripts of scripts
        self.level = level
        #: under a root or a rule, where superscripts stay low
        self.cramped = cramped
        self.display = display
        #: a font unit in points
        self.unit = unit = size / 1000
        #: all constants by the names of the specification; percentages too are multiplied by `unit`
        self.value = value = {name: units * unit for name, units in fonts.math.constants.items()}
        self.axis = value["AxisHeight"]
        self.rule = value["FractionRuleThickness"]
        self.sub_down = value["SubscriptShiftDown"]
        self.sub_top = value["SubscriptTopMax"]
        self.sub_drop = value["SubscriptBaselineDropMin"]
        self.sup_up = value["SuperscriptShiftUpCramped" if cramped else "SuperscriptShiftUp"]
        self.sup_bottom = value["SuperscriptBottomMin"]
        self.sup_drop = value["SuperscriptBaselineDropMax"]
        self.both_gap = value["SubSuperscriptGapMin"]
        self.sup_bottom_with_sub = value["SuperscriptBottomMaxWithSubscript"]
        self.after_script = value["SpaceAfterScript"]
        self.num_up = self._part_figure(value, "FractionNumerator{}ShiftUp")
        self.den_down = self._part_figure(value, "FractionDenominator{}ShiftDown")
        self.num_gap = self._part_figure(value, "FractionNum{}GapMin", "erator")
        self.den_gap = self._part_figure(value, "FractionDenom{}GapMin", "inator")
        #: letters set before, by text and style
        self.nuclei: dict[tuple[str, str], Nucleus] = {}
        #: signs set before, by text and the gaps about them, and gaps; `mathbox` looks here first
        self.operators: dict[tuple[str, int, int], Box] = {}
        self.spaces: dict[int, Box] = {}
        #: boxes of letters with letters as scripts, kept by `mathbox`
        self.scripts: dict[object, Box] = {}
        self._kin: dict[tuple[str, bool], Style] = {}
        self._grown: dict[tuple[str, int], Box] = {}
        self._sizes: dict[str, tuple[tuple[int, float], ...]] = {}
        self._upright = _Characters(fonts, level, italic=False)
        self._slanted = _Characters(fonts, level, italic=True)

    def _part_figure(self, value: dict[str, float], name: str, infix: str = "") -> float:
        """Give a figure of fractions: that of displayed ones, of small ones, or half way between.

        Parts of fractions on the line are larger than the scripts the small figures are drawn for.
        """
        displayed, small = value[name.format("DisplayStyle")], value[name.format(infix)]
        return displayed if self.display else small if self.level else (displayed + small) / 2

    def kin(self, role: Literal["part", "script", "root"], cramped: bool) -> Style:
        """Give the style of what stands in a fraction, as a script or under a root of this style."""
        key = (role, cramped or self.cramped)
        found = self._kin.get(key)
        if found is None:
            found = self._kin[key] = self._make_kin(role, key[1])
        return found

    def _make_kin(self, role: str, cramped: bool) -> Style:
        level, share = self.level, self.size / self.full
        if role == "script" or (role == "part" and level):
            level = min(level + 1, 2)
            share = _SMALLEST if level == 2 else _SCRIPT if self.size == self.full else _PART_SCRIPT
        elif role == "part" and not self.display:
            share = _PART
        size = max(share * self.full, min(_LEAST, self.size))
        display = self.display and role == "root"
        if (size, level, cramped, display) == (self.size, self.level, self.cramped, self.display):
            return self
        return Style(self.fonts, self.full, size, level, cramped, display)

    def sign(self, character: str, form: int, make: Callable[[], Box]) -> Box:
        """Give the box of one form of a sign that grows, made when it is first needed."""
        key = (character, form)
        found = self._grown.get(key)
        if found is None:
            found = self._grown[key] = make()
        return found

    def sizes(self, character: str) -> tuple[tuple[int, float], ...]:
        """Give the forms of a sign that grows, smallest first: glyph and height in points."""
        found = self._sizes.get(character)
        if found is None:
            glyph = self.fonts.characters["math"][character]
            forms = self.fonts.math.sizes(glyph) or ((glyph, 0),)
            found = self._sizes[character] = tuple((form, units * self.unit) for form, units in forms)
        return found

    def nucleus(self, text: str, style: str) -> Nucleus:
        """Set letters of one style."""
        key = (text, style)
        found = self.nuclei.get(key)
        if found is None:
            if len(self.nuclei) >= KEPT:
                self.nuclei.clear()
            found = self.nuclei[key] = self._set_letters(text, style == "italic")
        return found

    def operator(self, text: str, before: int, after: int) -> Box:
        """Set a sign with the gaps about it; each gap holds a space, so that copied text keeps it."""
        key = (text, before, after)
        found = self.operators.get(key)
        if found is None:
            found = self.operators[key] = self._set_operator(_SIGNS.get(text, text), before, after)
        return found

    def space(self, gap: int) -> Box:
        """Set a gap."""
        found = self.spaces.get(gap)
        if found is None:
            run = Run(0.0, 0.0, "math", self.size, (self.fonts.characters["math"][" "],), " ")
            found = self.spaces[gap] = Box(_GAPS[gap] * self.unit, 0.0, 0.0, (run,))
        return found

    def _set_letters(self, text: str, italic: bool) -> Nucleus:
        if not text:
            return Nucleus(Box(0.0, 0.0, 0.0, ()), 0.0, 0, 0)
        kept = self._slanted if italic else self._upright
        figures = [kept[character] for character in text]
        glyphs = tuple([figure[0] for figure in figures])
        width = sum([figure[1] for figure in figures])
        shifts: tuple[int, ...] = ()
        # numbers have no pairs to kern, and the face has no kerning for its script forms
        if not italic and not self.level and text[0].isalpha() and len(text) > 1:
            kerning = self.fonts.kerning["math"]
            shifts = (*(kerning[pair] for pair in pairwise(glyphs)), 0)
            width += sum(shifts)
            shifts = shifts if any(shifts) else ()
        lean = self.fonts.math.italics(glyphs[-1]) if italic else 0
        unit = self.unit
        run = Run(0.0, 0.0, "math", self.size, glyphs, text, shifts)
        top, bottom = max([figure[2] for figure in figures]), max([figure[3] for figure in figures])
        box = Box((width + lean) * unit, top * unit, bottom * unit, (run,))
        return Nucleus(box, lean * unit, glyphs[0], glyphs[-1])

    def _set_operator(self, text: str, before: int, after: int) -> Box:
        space = self.fonts.characters["math"][" "]
        glyphs, advances, tops, bottoms = zip(*[self._upright[c] for c in text], strict=True)
        width = sum(advances) + _GAPS[before] + _GAPS[after]
        shifts: tuple[int, ...] = ()
        if before:
            glyphs, text = (space, *glyphs), " " + text
            shifts = (_GAPS[before] - self.fonts.advances["math"][space], *([0] * (len(glyphs) - 1)))
        if after:
            glyphs, text = (*glyphs, space), text + " "
            shifts = (*shifts, 0) if shifts else ()
        run = Run(0.0, 0.0, "math", self.size, glyphs, text, shifts)
        return Box(width * self.unit, max(tops) * self.unit, max(bottoms) * self.unit, (run,))
