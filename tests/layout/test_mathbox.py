"""Formulas as geometry: each expected length is worked from the font's tables as fontTools reads them.

At 10 pt a font unit is 0.01 pt. Y runs downwards; the baseline is at 0.
"""

from __future__ import annotations

from itertools import groupby, pairwise

import pytest
from formulas import (
    A_S,
    ALL,
    COMMA,
    D_T,
    EQUALS,
    F_C,
    F_Y,
    HALF_A,
    M_N,
    MINUS,
    MOMENT,
    NUMBERS,
    PLUS,
    SHEAR,
    SLASH,
    THIN,
    UNIT,
    A,
    B,
    D,
    brackets,
    row,
    symbol,
    variable,
)
from ink import font, name_of, outside, overlaps, runs, strokes

from calcreport.core.shows import ACCENTS
from calcreport.layout.fonts import installed_fonts
from calcreport.layout.mathbox import Formulas, FormulaStyle
from calcreport.layout.model import Box, Placed
from calcreport.report.model import Accent, Big, Fence, Formula, Fraction, Letters, Operator, Root, Row, Script, Stack

SIZE = 10.0


@pytest.fixture(scope="module")
def formulas() -> Formulas:
    return Formulas(installed_fonts())


def constant(name: str, size: float = SIZE) -> float:
    """A constant of the MATH table in points."""
    value = getattr(font()["MATH"].table.MathConstants, name)
    return float(value.Value) * size / 1000


def advance(text: str, size: float = SIZE) -> float:
    best, metrics = font().getBestCmap(), font()["hmtx"]
    return sum(int(metrics[best[ord(c)]][0]) for c in text) * size / 1000


def text(box: Box) -> str:
    return "".join(run.text for run in runs(box))


# ---------------------------------------------------------------- letters


def test_a_variable_is_a_slanted_glyph_that_reads_as_its_letter(formulas: Formulas) -> None:
    for letter, glyph in (
        ("M", "u1D440"),
        ("h", "uni210E"),
        ("φ", "u1D719"),
        ("ε", "u1D700"),
        ("β", "u1D6FD"),
    ):
        (run,) = runs(formulas.box(variable(letter), SIZE))
        assert (name_of(run.glyphs[0]), run.text) == (glyph, letter)


def test_upright_letters_and_figures_stay_upright(formulas: Formulas) -> None:
    (run,) = runs(formulas.box(Letters("kip·ft"), SIZE))
    assert [name_of(g) for g in run.glyphs] == ["k", "i", "p", "periodcentered", "f", "t"]
    assert run.text == "kip·ft"


def test_a_comma_in_a_number_takes_no_gap(formulas: Formulas) -> None:
    assert formulas.box(Letters("2,880"), SIZE).width == pytest.approx(advance("2,880"))


def test_extents_are_those_of_the_ink(formulas: Formulas) -> None:
    box = formulas.box(Letters("8p"), SIZE)
    glyf = font()["glyf"]
    assert box.ascent == pytest.approx(glyf["eight"].yMax / 100)
    assert box.descent == pytest.approx(-glyf["p"].yMin / 100)


# ---------------------------------------------------------------- gaps


def gap(formulas: Formulas, between: Row, *parts: str) -> float:
    """What a row is wider than its letters."""
    return formulas.box(between, SIZE).width - sum(advance(part) for part in parts)


def test_gaps_of_a_relation_a_binary_sign_and_a_comma(formulas: Formulas) -> None:
    # The TeXbook, page 170: 5, 4 and 3 eighteenths of the em; a comma has its gap behind it only
    em = SIZE / 18
    assert gap(formulas, row("1", EQUALS, "2"), "1=2") == pytest.approx(2 * 5 * em, abs=0.01)
    assert gap(formulas, row("1", PLUS, "2"), "1+2") == pytest.approx(2 * 4 * em, abs=0.01)
    assert gap(formulas, row("1", COMMA, "2"), "1,2") == pytest.approx(3 * em, abs=0.01)


@pytest.mark.parametrize("before", [(), (EQUALS,), (Operator("(", "open"),), (COMMA,)])
def test_a_minus_with_nothing_to_take_from_is_a_sign(formulas: Formulas, before: tuple[Operator, ...]) -> None:
    sign = formulas.box(row(*before, MINUS, "5"), SIZE)
    as_prefix = formulas.box(row(*before, Operator("−", "prefix"), "5"), SIZE)
    assert sign == as_prefix


def test_a_space_between_number_and_unit_is_wider_than_a_thin_space(formulas: Formulas) -> None:
    unit = gap(formulas, row("4", UNIT, "k"), "4k")
    thin_space = font()["hmtx"][font().getBestCmap()[0x2009]][0] / 100
    # common practice: a little more than U+2009, which is at most a fifth of the em (The Unicode Standard)
    assert thin_space < unit == pytest.approx(2.0)


def test_the_wider_of_a_gap_and_a_space_stands(formulas: Formulas) -> None:
    # a fraction asks for a thin gap beside it (TeXbook page 170), a thin space for the same: not for both
    with_space = formulas.box(row("2", THIN, HALF_A), SIZE).width
    assert with_space == pytest.approx(formulas.box(row("2", HALF_A), SIZE).width)


def test_scripts_have_no_gaps_about_signs(formulas: Formulas) -> None:
    (script,) = (r for r in runs(formulas.box(Script(A, None, row("1", SLASH, "3")), SIZE)) if r.text == "/")
    assert len(script.glyphs) == 1


def test_every_gap_is_a_space_in_the_text(formulas: Formulas) -> None:
    assert text(formulas.box(NUMBERS, SIZE)) == "−596.5 + 103.2 (0.8333) − 6.00 (0.8333)22 = −2,512.6 kip·ft"


def test_rows_in_rows_space_as_one(formulas: Formulas) -> None:
    nested = Row((row("1", PLUS), row("2", EQUALS, Row((Letters("3"),)))))
    assert formulas.box(nested, SIZE) == formulas.box(row("1", PLUS, "2", EQUALS, "3"), SIZE)


# ---------------------------------------------------------------- fractions and roots


@pytest.mark.parametrize("style", ["text", "display"])
def test_the_rule_of_a_fraction_is_at_the_axis(formulas: Formulas, style: FormulaStyle) -> None:
    box = formulas.box(Fraction(Letters("200"), F_Y), SIZE, style)
    ((left, right, height, width),) = strokes(box)
    assert height == pytest.approx(constant("AxisHeight"))
    assert width == pytest.approx(constant("FractionRuleThickness"))
    # as long as the wider part, 1.2 pt clear at either end (The TeXbook, nulldelimiterspace)
    size = 8.5 if style == "text" else 10
    assert right - left == pytest.approx(advance("200", size))
    assert (left, box.width - right) == pytest.approx((1.2, 1.2))


@pytest.mark.parametrize(("style", "size"), [("text", 8.5), ("display", 10.0)])
def test_parts_of_a_fraction_are_centred_and_keep_clear(formulas: Formulas, style: FormulaStyle, size: float) -> None:
    above, below = runs(formulas.box(Fraction(Letters("1"), Letters("1,000")), SIZE, style))
    assert above.size == below.size == size
    assert above.x + advance("1", size) / 2 == pytest.approx(below.x + advance("1,000", size) / 2)
    shift = constant("FractionNumeratorDisplayStyleShiftUp")
    if style == "text":  # half way between the figures for displays and for small parts
        shift = (shift + constant("FractionNumeratorShiftUp")) / 2
    assert -above.y == pytest.approx(shift)
    # the figures of the denominator rise 0.642 of its size; the least gap would put it higher
    assert below.y >= constant("FractionDenominatorShiftDown") - 1e-9


def test_sizes_step_down_no_further_than_can_be_read(formulas: Formulas) -> None:
    power = Script(variable("b"), None, Letters("2"))
    deep = Fraction(Fraction(Script(A, Letters("s"), power), variable("c")), D)
    sizes = {run.text: run.size for run in runs(formulas.box(deep, SIZE))}
    # parts of fractions 8.5 however deep; their scripts 6.4, which stand as tall as plain letters of 7 pt
    assert sizes == {"a": 8.5, "s": 6.4, "b": 6.4, "2": 6.0, "c": 8.5, "d": 8.5}
    forms = font()["glyf"]
    assert forms["s.ssty"].yMax * 6.4 == pytest.approx(forms["s"].yMax * 7, rel=0.02)
    small = formulas.box(Script(A, Letters("s")), 7.5)
    assert [run.size for run in runs(small)] == [7.5, 6.0]


def test_a_root_rises_over_its_body(formulas: Formulas) -> None:
    box = formulas.box(Root(F_C), SIZE)
    ((_left, right, height, width),) = strokes(box)
    body = formulas.box(Root(F_C), SIZE).items[-1]
    assert isinstance(body, Placed)
    assert width == pytest.approx(constant("RadicalRuleThickness"))
    assert height - width / 2 - body.box.ascent >= constant("RadicalVerticalGap") - 1e-9
    assert right == pytest.approx(body.x + body.box.width)
    # the top of the sign meets the top of the rule
    (sign,) = (run for run in runs(box) if run.text == "√")
    top = font()["glyf"][name_of(sign.glyphs[0])].yMax / 100 - sign.y
    assert top == pytest.approx(height + width / 2)


def test_roots_grow_with_what_they_hold(formulas: Formulas) -> None:
    plain, tall = (runs(formulas.box(Root(body), SIZE))[0] for body in (Letters("2"), Fraction(A, B)))
    assert name_of(plain.glyphs[0]) == "uni221A"
    assert name_of(tall.glyphs[0]).startswith("uni221A.s")
    assert (plain.text, tall.text) == ("√", "√")


# ---------------------------------------------------------------- scripts


def test_a_subscript_falls_and_a_superscript_rises_by_the_constants(formulas: Formulas) -> None:
    _, below = runs(formulas.box(Script(Letters("x"), Letters("n")), SIZE))
    _, above = runs(formulas.box(Script(Letters("x"), None, Letters("2")), SIZE))
    assert below.y == pytest.approx(constant("SubscriptShiftDown"))
    assert -above.y == pytest.approx(constant("SuperscriptShiftUp"))
    assert below.size == above.size == 7.0
    # script forms of the letters, not small text forms
    assert [name_of(below.glyphs[0]), name_of(above.glyphs[0])] == ["n.ssty", "two.ssty"]


def test_under_a_root_a_superscript_stays_low(formulas: Formulas) -> None:
    box = formulas.box(Root(Script(Letters("x"), None, Letters("2"))), SIZE)
    (above,) = (run for run in runs(box) if run.text == "2")
    assert -above.y == pytest.approx(constant("SuperscriptShiftUpCramped"))


def test_a_subscript_goes_under_the_lean_a_superscript_clear_of_it(formulas: Formulas) -> None:
    italics = font()["MATH"].table.MathGlyphInfo.MathItalicsCorrectionInfo
    lean = dict(zip(italics.Coverage.glyphs, italics.ItalicsCorrection, strict=True))["u1D440"].Value / 100
    width = font()["hmtx"]["u1D440"][0] / 100
    _, below = runs(formulas.box(symbol("M", "n"), SIZE))
    _, above = runs(formulas.box(Script(variable("M"), None, Letters("2")), SIZE))
    # M has no cut-in below and none above
    assert (below.x, above.x) == pytest.approx((width, width + lean))


def test_a_subscript_moves_into_the_corner_of_f(formulas: Formulas) -> None:
    kerns = font()["MATH"].table.MathGlyphInfo.MathKernInfo
    corner = dict(zip(kerns.MathKernCoverage.glyphs, kerns.MathKernInfoRecords, strict=True))["u1D453"]
    heights = [h.Value for h in corner.BottomRightMathKern.CorrectionHeight]
    values = [v.Value for v in corner.BottomRightMathKern.KernValue]
    # top of the subscript: 0.7 of the height of the script form of c, less the shift, in units of the base
    top = 0.7 * font()["glyf"]["c.ssty"].yMax - 210
    bottom = font()["glyf"]["u1D453"].yMin
    kern = max(values[sum(h <= at for h in heights)] for at in (top, bottom))
    assert kern < 0
    _f, c = runs(formulas.box(symbol("f", "c"), SIZE))
    assert c.x == pytest.approx((font()["hmtx"]["u1D453"][0] + kern) / 100)


def test_a_tall_subscript_is_not_pushed_out_of_an_open_letter(formulas: Formulas) -> None:
    _, low = runs(formulas.box(symbol("V", "n"), SIZE))
    _, tall = runs(formulas.box(symbol("V", "D"), SIZE))
    # the arm of V goes 273 units right in 410 up (its outline, read by fontTools): 1.3 pt up is 0.9 pt right
    assert 0 <= tall.x - low.x <= 1.0


@pytest.mark.parametrize("letter", "VWTPFfrγσφ")
def test_subscripts_keep_clear_of_their_letters(formulas: Formulas, letter: str) -> None:
    for below in ("D", "b", "d", "l", "1", "c"):
        assert overlaps(formulas.box(symbol(letter, below), SIZE)) == []


def test_prime_and_subscript_of_the_concrete_strength_are_stacked(formulas: Formulas) -> None:
    f, prime, c = runs(formulas.box(F_C, SIZE))
    assert (f.text, prime.text, c.text) == ("f", "′", "c")
    assert prime.y < 0 < c.y
    glyf = font()["glyf"]
    boxes = []
    for run in (prime, c):
        glyph = glyf[name_of(run.glyphs[0])]
        boxes.append((run.x + glyph.xMin * 0.007, run.x + glyph.xMax * 0.007))
    # the two stand over one another
    assert boxes[0][0] < boxes[1][1] and boxes[1][0] < boxes[0][1]


def test_a_power_of_a_symbol_reads_after_its_subscript(formulas: Formulas) -> None:
    assert text(formulas.box(Script(D, Letters("t"), Letters("3")), SIZE)) == "dt3"


def test_scripts_of_a_fence_hang_on_its_top_and_foot(formulas: Formulas) -> None:
    box = formulas.box(Script(Fence("(", Fraction(A, B), ")"), None, Letters("3")), SIZE)
    base = box.items[0]
    assert isinstance(base, Placed)
    (power,) = (run for run in runs(box) if run.text == "3")
    assert -power.y == pytest.approx(base.box.ascent - constant("SuperscriptBaselineDropMax"))


# ---------------------------------------------------------------- accents


def point(glyph: str) -> float:
    """Where a mark is centred over a glyph, or a mark's own point, in points at 10 pt (MathTopAccentAttachment)."""
    table = font()["MATH"].table.MathGlyphInfo.MathTopAccentAttachment
    places = dict(zip(table.TopAccentCoverage.glyphs, table.TopAccentAttachment, strict=True))
    return float(places[glyph].Value) / 100


@pytest.mark.parametrize(
    ("word", "glyph"), [("bar", "uni0304"), ("hat", "uni0302"), ("tilde", "uni0303"), ("dot", "uni0307")]
)
@pytest.mark.parametrize(("letter", "under"), [("y", "u1D466"), ("d", "u1D451"), ("ε", "u1D700"), ("M", "u1D440")])
def test_a_mark_is_centred_over_its_letter(formulas: Formulas, word: str, glyph: str, letter: str, under: str) -> None:
    box = formulas.box(Accent(variable(letter), ACCENTS[word]), SIZE)
    base, mark = runs(box)
    # read as the letter, then the combining mark (The Unicode Standard, chapter 2: combining marks follow the base)
    assert (base.text, mark.text) == (letter, ACCENTS[word])
    assert (name_of(base.glyphs[0]), name_of(mark.glyphs[0])) == (under, glyph)
    # point over point (OpenType specification, chapter MATH, MathTopAccentAttachment)
    assert mark.x + point(glyph) == pytest.approx(base.x + point(under))
    # raised by what the letter stands above AccentBaseHeight (The TeXbook, appendix G, rule 12)
    glyf = font()["glyf"]
    assert -mark.y == pytest.approx(max(0.0, glyf[under].yMax / 100 - constant("AccentBaseHeight")))
    # the mark takes no width, and its ink is clear of the letter and inside the box
    assert box.width == formulas.box(variable(letter), SIZE).width
    assert box.ascent == pytest.approx(max(glyf[under].yMax, glyf[glyph].yMax - 100 * mark.y) / 100)
    assert overlaps(box) == []


def test_a_subscript_of_a_marked_letter_stands_where_it_does_without_the_mark(formulas: Formulas) -> None:
    _, plain = runs(formulas.box(symbol("y", "t"), SIZE))
    _, _, marked = runs(formulas.box(Script(Accent(variable("y"), ACCENTS["bar"]), Letters("t")), SIZE))
    assert (marked.x, marked.y) == (plain.x, plain.y)


def test_a_mark_in_a_subscript_is_of_its_size(formulas: Formulas) -> None:
    *_, base, mark = runs(formulas.box(Script(A, Accent(variable("y"), ACCENTS["bar"])), SIZE))
    assert (base.size, mark.size) == (7.0, 7.0)
    assert base.y >= mark.y


# ---------------------------------------------------------------- fences, stacks, limits


def test_subscripts_alone_do_not_make_parentheses_grow(formulas: Formulas) -> None:
    first, *_, last = runs(formulas.box(brackets(D_T, MINUS, variable("c")), SIZE))
    assert [name_of(run.glyphs[0]) for run in (first, last)] == ["parenleft", "parenright"]
    assert first.y == last.y == 0


def test_parentheses_grow_about_the_axis(formulas: Formulas) -> None:
    box = formulas.box(brackets(D, MINUS, HALF_A), SIZE)
    first, *_, last = runs(box)
    assert (first.text, last.text) == ("(", ")")
    glyph = font()["glyf"][name_of(first.glyphs[0])]
    assert (glyph.yMax + glyph.yMin) / 200 - first.y == pytest.approx(constant("AxisHeight"))
    # nine tenths of what the body reaches from the axis are covered (The TeXbook, delimiterfactor 901)
    body = formulas.box(row(D, MINUS, HALF_A), SIZE)
    reach = 2 * max(body.ascent - constant("AxisHeight"), body.descent + constant("AxisHeight"))
    assert (glyph.yMax - glyph.yMin) / 100 >= 0.9 * reach - 0.01


def test_a_brace_taller_than_any_in_the_font_is_put_together(formulas: Formulas) -> None:
    rows = tuple(row("0.85", MINUS, Fraction(Letters("0.05"), Letters("1,000"))) for _ in range(4))
    box = formulas.box(Fence("{", Stack(rows), ""), SIZE)
    pieces = [run for run in runs(box) if name_of(run.glyphs[0]).startswith("uni23A")]
    kinds = [name for name, _ in groupby(name_of(p.glyphs[0]) for p in pieces)]
    assert kinds == ["uni23A7", "uni23AA", "uni23A8", "uni23AA", "uni23A9"]
    # only the topmost carries the sign as text
    assert [p.text for p in pieces] == ["{", *["\u200b"] * (len(pieces) - 1)]
    glyf = font()["glyf"]
    spans = [(p.y - glyf[name_of(p.glyphs[0])].yMax / 100, p.y - glyf[name_of(p.glyphs[0])].yMin / 100) for p in pieces]
    # pieces lie over one another, and the whole is centred on the axis
    assert all(lower[0] < upper[1] for upper, lower in pairwise(spans))
    assert (spans[0][0] + spans[-1][1]) / 2 == pytest.approx(-constant("AxisHeight"), abs=0.03)
    stack_height = box.ascent + box.descent
    assert spans[-1][1] - spans[0][0] >= 0.9 * stack_height - 0.5


def test_rows_of_a_stack_are_left_aligned_and_centred_on_the_axis(formulas: Formulas) -> None:
    box = formulas.box(Stack((Letters("10"), Letters("1"), Letters("1,000"))), SIZE)
    lines = runs(box)
    assert {run.x for run in lines} == {0.0}
    pitches = [b.y - a.y for a, b in pairwise(lines)]
    assert pitches == pytest.approx([13.5, 13.5])  # 1.35 em
    assert (box.ascent - box.descent) / 2 == pytest.approx(constant("AxisHeight"))


def test_limits_of_a_sum_are_centred_under_and_over_it(formulas: Formulas) -> None:
    box = formulas.box(Big(Letters("∑"), Letters("layer"), variable("n")), SIZE, "display")
    above, sign, below = runs(box)
    assert [above.text, sign.text, below.text] == ["n", "∑", "layer"]
    assert name_of(sign.glyphs[0]) == "uni2211.s1"
    middle = sign.x + font()["hmtx"]["uni2211.s1"][0] / 200
    width = sum(font()["hmtx"][f"{c}.ssty"][0] for c in "layer") * 0.007
    assert below.x + width / 2 == pytest.approx(middle)
    glyph = font()["glyf"]["uni2211.s1"]
    foot = sign.y - glyph.yMin / 100
    assert below.y - foot >= constant("LowerLimitBaselineDropMin") - 1e-9
    assert (glyph.yMax + glyph.yMin) / 200 - sign.y == pytest.approx(constant("AxisHeight"))


# ---------------------------------------------------------------- ink


@pytest.mark.parametrize("style", ["text", "display"])
@pytest.mark.parametrize("name", ALL)
def test_no_ink_lies_over_other_ink_or_outside_the_box(formulas: Formulas, name: str, style: FormulaStyle) -> None:
    box = formulas.box(ALL[name], SIZE, style)
    assert overlaps(box) == []
    assert outside(box) == []


def test_ink_that_lies_over_other_ink_is_seen(formulas: Formulas) -> None:
    letter = formulas.box(Letters("8"), SIZE)
    twice = Box(10.0, 7.0, 1.0, (Placed(0.0, 0.0, letter), Placed(3.0, 1.0, letter)))
    assert len(overlaps(twice)) == 1
    assert len(outside(Box(4.0, 3.0, 0.0, twice.items))) == 2


# ---------------------------------------------------------------- lines and stores


def test_the_same_object_gives_the_same_box(formulas: Formulas) -> None:
    assert formulas.box(MOMENT, SIZE) is formulas.box(MOMENT, SIZE)
    assert formulas.box(MOMENT, SIZE) is not formulas.box(MOMENT, 9)


def test_a_fresh_setter_gives_an_equal_box(formulas: Formulas) -> None:
    fresh = Formulas(formulas.fonts)
    assert all(fresh.box(f, SIZE) == formulas.box(f, SIZE) for f in ALL.values())


def test_a_formula_that_fits_is_one_line(formulas: Formulas) -> None:
    assert formulas.broken(SHEAR, 200, SIZE) == (formulas.box(SHEAR, SIZE),)


def lines(formulas: Formulas, formula: Row, width: float, hang: float = 0.0) -> list[str]:
    boxes = formulas.broken(formula, width, SIZE, hang=hang)
    assert all(box.width <= width - (hang if i else 0) for i, box in enumerate(boxes))
    return [text(box).strip() for box in boxes]


def test_a_long_line_parts_before_relations_first(formulas: Formulas) -> None:
    formula = row("11", PLUS, "22", EQUALS, "33", PLUS, "44", EQUALS, "55")
    assert lines(formulas, formula, 60) == ["11 + 22", "= 33 + 44", "= 55"]
    # as many relations on a line as go
    assert lines(formulas, formula, 80) == ["11 + 22 = 33 + 44", "= 55"]


def test_a_side_too_long_parts_before_plus_and_minus(formulas: Formulas) -> None:
    formula = row("11", PLUS, "22", Operator("×", "binary"), "3", MINUS, "44", PLUS, "55", EQUALS, "66")
    assert lines(formulas, formula, 60) == ["11 + 22 × 3", "− 44 + 55", "= 66"]


def test_a_term_too_long_parts_before_a_multiplication_sign(formulas: Formulas) -> None:
    times = Operator("×", "binary")
    formula = row("1.111", times, "2.222", times, "3.333", PLUS, "1")
    assert lines(formulas, formula, 70) == ["1.111 × 2.222", "× 3.333 + 1"]


def test_a_fence_parts_only_when_nothing_else_helps(formulas: Formulas) -> None:
    formula = row("12", THIN, brackets("111", PLUS, "222", PLUS, "333"), THIN, "4")
    assert lines(formulas, formula, 80) == ["12 (111 + 222", "+ 333) 4"]


def test_a_fraction_and_a_root_never_part(formulas: Formulas) -> None:
    long = row("111", PLUS, "222", PLUS, "333")
    for whole in (Fraction(long, Letters("2")), Root(long)):
        (box,) = formulas.broken(row(whole), 20, SIZE)
        assert box.width > 20


def test_later_lines_are_shorter_by_the_hang(formulas: Formulas) -> None:
    formula = row("111", PLUS, "222", PLUS, "333", PLUS, "444")
    assert lines(formulas, formula, 66) == ["111 + 222", "+ 333 + 444"]
    assert lines(formulas, formula, 66, hang=20) == ["111 + 222", "+ 333", "+ 444"]


def test_a_continued_line_begins_with_its_sign_flush(formulas: Formulas) -> None:
    _, second = formulas.broken(row("111", PLUS, "222"), 25, SIZE)
    sign, number = runs(second)
    assert (sign.x, sign.text) == (0.0, "+ ")
    assert number.x == pytest.approx(advance("+") + 10 * 4 / 18, abs=0.01)


def test_nodes_of_every_kind_are_set(formulas: Formulas) -> None:
    kinds: list[Formula] = [
        A,
        EQUALS,
        THIN,
        row("1"),
        HALF_A,
        Root(A),
        A_S,
        brackets("1"),
        Stack((A,)),
        Big(Letters("max")),
        Accent(variable("y"), ACCENTS["bar"]),
        M_N,
    ]
    assert all(formulas.box(kind, SIZE).width > 0 for kind in kinds)
