"""Formula trees as measured boxes.

In: a `report.model` formula, a size in points, 'text' (fractions set smaller, inside a row) or 'display'
(fractions at full size). Out: a `Box` with its baseline; or several where one is wider than its line.
Knows no pages and no words; says nothing the tree does not. Gaps are `mathatoms`, forms `mathforms`,
scripts `mathscripts`, sizes and letters `mathstyle`, breaks `mathbreak`.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Literal, TypeAlias

from calcreport.layout import mathforms
from calcreport.layout.fonts import Fonts
from calcreport.layout.mathatoms import EXPLICIT, GAPS, GAPS_IN_SCRIPTS, OPEN, ROW, SPACE, flat, kinds_of
from calcreport.layout.mathbreak import STRUT, Items, break_row
from calcreport.layout.mathscripts import Scripted, attach
from calcreport.layout.mathstyle import KEPT, NONE, Nucleus, Style
from calcreport.layout.model import Box, Item, Placed
from calcreport.report.model import (
    Accent,
    Big,
    Fence,
    Formula,
    Fraction,
    Letters,
    Operator,
    Root,
    Row,
    Script,
    Space,
    Stack,
)

FormulaStyle: TypeAlias = Literal["text", "display"]

#: letters and signs that stand for a large operator
_LARGE = {"∑": "∑", "Σ": "∑", "∏": "∏", "Π": "∏"}
#: first letters of superscripts that are primes
_PRIMES = ("′", "″", "‴")


class Formulas:
    """Sets formulas; keeps the boxes of letters, of scripts and of whole formulas met again."""

    def __init__(self, fonts: Fonts) -> None:
        """Take the faces; the boxes kept belong to this object."""
        self.fonts = fonts
        self._styles: dict[tuple[float, str], Style] = {}
        self._kept: dict[tuple[int, float, str], tuple[Formula, Box]] = {}
        self._setters: dict[type, Callable[..., Box]] = {
            Letters: self._letters,
            Operator: self._operator,
            Space: self._space,
            Row: self._row,
            Fraction: self._fraction,
            Root: self._root,
            Script: self._script,
            Accent: self._accent,
            Fence: self._fence,
            Stack: self._stack,
            Big: self._big,
        }

    def box(self, formula: Formula, size: float, style: FormulaStyle = "text") -> Box:
        """Set a formula at a size in points; the same object at the same size gives the same box."""
        key = (id(formula), size, style)
        kept = self._kept.get(key)
        if kept is not None:
            return kept[1]
        box = self._set(formula, self._outermost(size, style))
        if len(self._kept) >= KEPT:
            self._kept.clear()
        # the formula is kept too: its identity is the key
        self._kept[key] = (formula, box)
        return box

    def broken(
        self, formula: Formula, width: float, size: float, style: FormulaStyle = "text", hang: float = 0.0
    ) -> tuple[Box, ...]:
        """Set a formula in as few lines of a width in points as its breaks allow; later lines `hang` shorter.

        It parts before relations first, then before plus and minus, before a multiplication sign only where
        one term is wider than the line. A line is wider than asked where nothing in it may part.
        """
        whole = self.box(formula, size, style)
        if whole.width <= width:
            return (whole,)
        outermost = self._outermost(size, style)

        def measure(items: Items) -> float:
            return self._row(Row(items), outermost).width

        lines = break_row((formula,), width, hang, measure)
        return tuple(self._row(Row(line), outermost) for line in lines)

    def _outermost(self, size: float, style: FormulaStyle) -> Style:
        found = self._styles.get((size, style))
        if found is None:
            found = Style(self.fonts, full=size, size=size, level=0, cramped=False, display=style == "display")
            self._styles[size, style] = found
        return found

    def _set(self, formula: Formula, style: Style) -> Box:
        return self._setters[type(formula)](formula, style)

    def _maybe(self, formula: Formula | None, style: Style) -> Box | None:
        return None if formula is None else self._set(formula, style)

    def _letters(self, formula: Letters, style: Style) -> Box:
        return style.nucleus(formula.text, formula.style).box

    def _operator(self, formula: Operator, style: Style) -> Box:
        return style.operator(formula.text, NONE, NONE)

    def _space(self, formula: Space, style: Style) -> Box:
        return style.space(EXPLICIT[formula.kind])

    def _row(self, formula: Row, style: Style) -> Box:
        """Set items side by side with the gaps their kinds ask for; of a gap and a space the wider stands."""
        items = formula.items
        kinds = kinds_of(items)
        if ROW in kinds:
            items = flat(items)
            kinds = kinds_of(items)
        # a sign looks one item ahead
        kinds.append(SPACE)
        table = GAPS_IN_SCRIPTS if style.level else GAPS
        setters, nuclei, operators = self._setters, style.nuclei, style.operators
        placed: list[Item] = []
        x = ascent = descent = 0.0
        before, asked, done = table[OPEN], NONE, False
        for i, item in enumerate(items):
            kind = kinds[i]
            if kind == SPACE:
                asked = max(asked, EXPLICIT[item.kind])  # type: ignore[union-attr]
                continue
            # the sign before has set its own gap already
            gap = NONE if done else max(asked, before[kind])
            before, asked, done = table[kind], NONE, item is STRUT
            made = type(item)
            if made is Operator:
                following = kinds[i + 1]
                done = following != SPACE
                sign = item.text, gap, before[following]  # type: ignore[union-attr]
                box = operators.get(sign) or style.operator(*sign)
            else:
                if gap:
                    space = style.space(gap)
                    placed.append(Placed(x, 0.0, space))
                    x += space.width
                known = nuclei.get((item.text, item.style)) if made is Letters else None  # type: ignore[union-attr]
                box = known.box if known is not None else setters[made](item, style)
            placed.append(Placed(x, 0.0, box))
            x += box.width
            if box.ascent > ascent:
                ascent = box.ascent
            if box.descent > descent:
                descent = box.descent
        if asked:
            placed.append(Placed(x, 0.0, style.space(asked)))
            x += style.space(asked).width
        return Box(x, ascent, descent, tuple(placed))

    def _fraction(self, formula: Fraction, style: Style) -> Box:
        above = self._set(formula.above, style.kin("part", False))
        below = self._set(formula.below, style.kin("part", True))
        return mathforms.fraction(style, above, below)

    def _root(self, formula: Root, style: Style) -> Box:
        body = self._set(formula.body, style.kin("root", True))
        index = self._maybe(formula.index, style.kin("script", True).kin("script", True))
        return mathforms.root(style, body, index)

    def _accent(self, formula: Accent, style: Style) -> Box:
        return self._accented(formula, style).box

    def _accented(self, formula: Accent, style: Style) -> Nucleus:
        base = style.nucleus(formula.base.text, formula.base.style)
        return mathforms.accent(style, base, style.nucleus(formula.mark, "upright"))

    def _fence(self, formula: Fence, style: Style) -> Box:
        if isinstance(formula.body, Letters) and formula.body.style == "upright":
            # a number in parentheses never grows: one piece
            return style.nucleus(formula.opening + formula.body.text + formula.closing, "upright").box
        body = self._set(formula.body, style)
        return mathforms.fence(style, formula.opening, body, formula.closing, isinstance(formula.body, Stack))

    def _stack(self, formula: Stack, style: Style) -> Box:
        return mathforms.stack(style, tuple(self._set(row, style) for row in formula.rows))

    def _big(self, formula: Big, style: Style) -> Box:
        sign = formula.sign
        large = _LARGE.get(sign.text) if isinstance(sign, Letters | Operator) else None
        box = self._set(sign, style) if large is None else mathforms.large_operator(style, large)
        below = self._maybe(formula.below, style.kin("script", True))
        above = self._maybe(formula.above, style.kin("script", style.cramped))
        return mathforms.limits(style, box, below, above)

    def _script(self, formula: Script, style: Style) -> Box:
        """Set scripts, from the store when base and scripts are letters met before."""
        base, below, above = formula.base, formula.below, formula.above
        if (
            type(base) is not Letters
            or not (below is None or type(below) is Letters)
            or not (above is None or type(above) is Letters)
        ):
            return self._set_script(formula, style)
        key = (
            base.text,
            base.style,
            below and (below.text, below.style),
            above and (above.text, above.style),
        )
        found = style.scripts.get(key)
        if found is None:
            if len(style.scripts) >= KEPT:
                style.scripts.clear()
            found = style.scripts[key] = self._set_script(formula, style)
        return found

    def _set_script(self, formula: Script, style: Style) -> Box:
        base = formula.base
        match base:
            case Letters(text, face):
                nucleus = style.nucleus(text, face)
            case Accent():
                nucleus = self._accented(base, style)
            case _:
                nucleus = Nucleus(self._set(base, style), 0.0, 0, 0)
        sub = self._scripted(formula.below, style.kin("script", True))
        sup = self._scripted(formula.above, style.kin("script", style.cramped))
        return attach(style, nucleus, sub, sup)

    def _scripted(self, formula: Formula | None, style: Style) -> Scripted | None:
        if formula is None:
            return None
        if isinstance(formula, Letters):
            nucleus = style.nucleus(formula.text, formula.style)
            reach = self.fonts.files["math"].bounds(nucleus.first)[3] * style.unit
            return Scripted(nucleus.box, nucleus.first, reach, formula.text[:1] in _PRIMES)
        box = self._set(formula, style)
        return Scripted(box, 0, box.ascent)
