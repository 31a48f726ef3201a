"""The font file reader against fontTools, which reads the same files by its own code."""

from __future__ import annotations

from importlib.util import find_spec
from pathlib import Path

import pytest
from fontTools.ttLib import TTFont

from calcreport.core.fontfile import FontFile


def _path(package: str, place: str) -> Path:
    spec = find_spec(package)
    assert spec is not None and spec.submodule_search_locations
    return Path(spec.submodule_search_locations[0]) / place


PATHS = (
    _path("ziamath", "fonts/STIXTwoMath-Regular.ttf"),
    _path("font_source_sans_pro", "files/SourceSansPro-Regular.ttf"),
    _path("font_source_sans_pro", "files/SourceSansPro-It.ttf"),
    _path("font_source_sans_pro", "files/SourceSansPro-Semibold.ttf"),
)


@pytest.fixture(params=PATHS, ids=lambda path: path.stem)
def pair(request: pytest.FixtureRequest) -> tuple[FontFile, TTFont]:
    return FontFile(request.param.read_bytes()), TTFont(request.param, lazy=True)


def test_characters_have_the_glyphs_fonttools_gives(pair: tuple[FontFile, TTFont]) -> None:
    font, reference = pair
    best = reference.getBestCmap()
    order = {name: i for i, name in enumerate(reference.getGlyphOrder())}
    codes = [*range(0x3000), *range(0x1D400, 0x1D800), 0xFFFF, 0x10FFFF]
    assert [font.glyph(c) for c in codes] == [order[best[c]] if c in best else 0 for c in codes]


def test_advances_and_ink_boxes(pair: tuple[FontFile, TTFont]) -> None:
    font, reference = pair
    glyf, hmtx = reference["glyf"], reference["hmtx"]
    for i, name in enumerate(reference.getGlyphOrder()):
        if i % 7:
            continue  # every seventh glyph tells enough
        glyph = glyf[name]
        box = (glyph.xMin, glyph.yMin, glyph.xMax, glyph.yMax) if glyph.numberOfContours else (0, 0, 0, 0)
        assert font.advance(i) == hmtx[name][0]
        assert font.bounds(i) == box


def test_components_of_composite_glyphs(pair: tuple[FontFile, TTFont]) -> None:
    font, reference = pair
    glyf, names = reference["glyf"], reference.getGlyphOrder()
    made = [i for i in range(0, len(names), 3) if glyf[names[i]].isComposite()]
    for i in made:
        expected = tuple(reference.getGlyphID(part.glyphName) for part in glyf[names[i]].components)
        assert font.components(i) == expected


def test_names_and_line_figures(pair: tuple[FontFile, TTFont]) -> None:
    font, reference = pair
    assert font.postscript_name == reference["name"].getDebugName(6)
    assert font.units_per_em == reference["head"].unitsPerEm
    assert font.ascent_descent == (reference["hhea"].ascent, reference["hhea"].descent)
    assert font.cap_height == reference["OS/2"].sCapHeight
    assert font.italic_angle == reference["post"].italicAngle


def test_bytes_that_are_no_font_are_refused() -> None:
    with pytest.raises(ValueError, match="not a TrueType font file"):
        FontFile(b"OTTO" + bytes(64))
