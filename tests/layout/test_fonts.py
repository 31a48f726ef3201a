"""Words in the four faces: widths, kerning, borrowed characters, small capitals, where the files are."""

from __future__ import annotations

import itertools
import subprocess
import sys
from functools import cache
from io import BytesIO

import pytest
from fontTools.ttLib import TTFont

from calcreport.layout import fonts as module
from calcreport.layout.fonts import Fonts, Manner, installed_fonts
from calcreport.layout.model import Face

PLAIN_SPACING = Manner(kern=False)


@pytest.fixture(scope="module")
def fonts() -> Fonts:
    return installed_fonts()


@cache
def reference(face: Face) -> TTFont:
    """The same file, read by fontTools."""
    return TTFont(BytesIO(installed_fonts().files[face].data), lazy=True)


def advance(face: Face, text: str) -> int:
    font = reference(face)
    best, metrics = font.getBestCmap(), font["hmtx"]
    return sum(int(metrics[best[ord(c)]][0]) for c in text)


def pair_value(face: Face, left: str, right: str) -> int:
    """Kerning of two characters as fontTools reads the first pair lookup of the default script."""
    font = reference(face)
    best, table = font.getBestCmap(), font["GPOS"].table
    script = table.ScriptList.ScriptRecord[0].Script.DefaultLangSys
    records = [table.FeatureList.FeatureRecord[i] for i in script.FeatureIndex]
    lookups = [i for r in records if r.FeatureTag == "kern" for i in r.Feature.LookupListIndex]
    a, b = best[ord(left)], best[ord(right)]
    for subtable in (s for i in lookups for s in table.LookupList.Lookup[i].SubTable):
        pairs = getattr(subtable, "ExtSubTable", subtable)
        if a not in pairs.Coverage.glyphs:
            continue
        if pairs.Format == 2:
            row = pairs.Class1Record[pairs.ClassDef1.classDefs.get(a, 0)]
            value = row.Class2Record[pairs.ClassDef2.classDefs.get(b, 0)].Value1
            return int(getattr(value, "XAdvance", 0)) if value else 0
        for record in pairs.PairSet[pairs.Coverage.glyphs.index(a)].PairValueRecord:
            if record.SecondGlyph == b:
                return int(record.Value1.XAdvance)
    return 0


@pytest.mark.parametrize("face", ["regular", "italic", "semibold", "math"])
def test_width_is_the_sum_of_advances(fonts: Fonts, face: Face) -> None:
    text = "Quarry Road 12"
    # thousandths of the em at 9 pt
    assert fonts.width(text, face, 9, PLAIN_SPACING) == pytest.approx(advance(face, text) * 9 / 1000)


@pytest.mark.parametrize("face", ["regular", "italic", "semibold", "math"])
def test_kerning_moves_the_second_letter(fonts: Fonts, face: Face) -> None:
    text = "To AV, Wa 1. P. fy"
    kerns = [pair_value(face, a, b) for a, b in itertools.pairwise(text)]
    assert any(kerns)
    assert fonts.width(text, face, 10) == pytest.approx((advance(face, text) + sum(kerns)) / 100)
    (run,) = fonts.run(text, face, 10)
    assert run.shifts == (*kerns, 0)


def test_a_character_the_italic_lacks_comes_from_the_formula_face(fonts: Fonts) -> None:
    first, greek, last = fonts.run("with ε here", "italic", 9, x=50, y=70)
    assert (first.face, greek.face, last.face) == ("italic", "math", "italic")
    assert (first.text, greek.text, last.text) == ("with ", "ε", " here")
    # it starts where "with " ends, and is the slanted letter
    assert greek.x == pytest.approx(50 + fonts.width("with ", "italic", 9))
    assert greek.glyphs == (fonts.characters["math"]["\U0001d700"],)
    assert {run.y for run in (first, greek, last)} == {70}


@pytest.mark.parametrize("face", ["regular", "italic", "semibold"])
def test_signs_of_the_trade_are_there(fonts: Fonts, face: Face) -> None:
    signs = "αβφεψλρΔ′″²³·≤≥×−√½¼±≠→°–—“”’…∑ℓ"
    runs = fonts.run(signs, face, 9)
    assert "".join(run.text for run in runs) == signs
    assert all(0 not in run.glyphs for run in runs)
    assert fonts.missing(signs) == ""


def test_what_no_face_can_show_is_named(fonts: Fonts) -> None:
    assert fonts.missing("ab\u6881\u67f1b") == "\u67f1\u6881"


def test_small_capitals_keep_their_letters_as_text(fonts: Fonts) -> None:
    (run,) = fonts.run("Top", "semibold", 10, manner=Manner(small_caps=True, tracking=40))
    names = reference("semibold").getGlyphOrder()
    assert run.text == "Top"
    assert [names[g] for g in run.glyphs] == ["T", "O.sc", "P.sc"]
    # a tracking of 40 between letters on top of the kerning, none after the last
    untracked = fonts.run("Top", "semibold", 10, manner=Manner(small_caps=True))[0].shifts
    assert run.shifts == (untracked[0] + 40, untracked[1] + 40, 0)


def test_a_box_of_words_has_the_extents_of_its_size(fonts: Fonts) -> None:
    box = fonts.box("a", "regular", 8)
    # 0.750 and 0.250 of the size hold the ascender of d and the descender of p
    assert (box.ascent, box.descent) == (6.0, 2.0)
    glyphs = [reference("regular")["glyf"][name] for name in ("d", "p")]
    assert glyphs[0].yMax <= 750 and glyphs[1].yMin >= -250


def test_nothing_of_the_packages_that_carry_the_fonts_is_imported() -> None:
    code = (
        "import sys; from calcreport.layout.fonts import installed_fonts; installed_fonts(); "
        "names = ('ziamath', 'font_source_sans_pro', 'fontTools', 'reportlab'); "
        "print([name for name in names if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_a_missing_package_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "_PLACES", {"math": ("no_such_package", "a.ttf")})
    with pytest.raises(FileNotFoundError, match="no-such-package"):
        installed_fonts()
