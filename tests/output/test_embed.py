"""Embedded subsets against fontTools, which reads them as font files."""

from __future__ import annotations

from io import BytesIO

import pytest
from fontTools.pens.recordingPen import RecordingPen
from fontTools.ttLib import TTFont

from calcreport.layout.fonts import Fonts, installed_fonts
from calcreport.layout.model import Face
from calcreport.output.embed import subset, subset_tag, to_unicode


@pytest.fixture(scope="module")
def fonts() -> Fonts:
    return installed_fonts()


@pytest.mark.parametrize("face", ["regular", "italic", "semibold", "math"])
def test_a_subset_is_a_font_with_the_same_outlines_and_advances(fonts: Fonts, face: Face) -> None:
    file = fonts.files[face]
    glyphs = sorted({0, *(fonts.characters[face][c] for c in "Quarry é½ 12 ≤")})
    part = TTFont(BytesIO(subset(file, glyphs)), checkChecksums=2)
    whole = TTFont(BytesIO(file.data))
    assert part["maxp"].numGlyphs >= max(glyphs) + 1
    whole_set, part_set = whole.getGlyphSet(), part.getGlyphSet()
    for glyph in glyphs:
        drawn, expected = RecordingPen(), RecordingPen()
        part_set[part.getGlyphName(glyph)].draw(drawn)
        whole_set[whole.getGlyphName(glyph)].draw(expected)
        names = {whole.getGlyphName(i): part.getGlyphName(i) for i in range(part["maxp"].numGlyphs)}
        renamed = [
            (verb, (names[args[0]], *args[1:]) if verb == "addComponent" else args) for verb, args in expected.value
        ]
        assert drawn.value == renamed
        assert part["hmtx"][part.getGlyphName(glyph)] == whole["hmtx"][whole.getGlyphName(glyph)]


def test_a_subset_holds_no_other_outlines(fonts: Fonts) -> None:
    file = fonts.files["math"]
    kept = [0, fonts.slanted("M"), fonts.slanted("φ")]
    part = TTFont(BytesIO(subset(file, kept)))
    glyf = part["glyf"]
    drawn = [i for i, name in enumerate(part.getGlyphOrder()) if glyf[name].numberOfContours]
    assert drawn == sorted(kept)


def test_the_tag_tells_subsets_apart(fonts: Fonts) -> None:
    file = fonts.files["math"]
    tags = {subset_tag(file, glyphs) for glyphs in ([0, 5], [0, 6], [0, 5, 6])}
    assert len(tags) == 3
    assert all(len(tag) == 6 and tag.isalpha() and tag.isupper() for tag in tags)


def test_text_beyond_the_basic_plane_is_utf_16(fonts: Fonts) -> None:
    # U+1D440 is D835 DC40 in UTF-16 (RFC 2781)
    cmap = to_unicode({7: "M", 9: "\U0001d440", 8: "fi"})
    assert b"3 beginbfchar\n<0007> <004D>\n<0008> <00660069>\n<0009> <D835DC40>\nendbfchar" in cmap


def test_long_maps_are_cut_into_blocks_of_a_hundred() -> None:
    cmap = to_unicode(dict.fromkeys(range(250), "x"))
    assert [cmap.count(b"%d beginbfchar" % n) for n in (100, 50)] == [2, 1]
