"""The MATH table and the script forms against fontTools, which reads the same file by its own code."""

from __future__ import annotations

from io import BytesIO
from typing import Any

import pytest
from fontTools.ttLib import TTFont

from calcreport.layout.fonts import installed_fonts
from calcreport.layout.mathtable import MathTable, Part


@pytest.fixture(scope="module")
def table() -> MathTable:
    return installed_fonts().math


@pytest.fixture(scope="module")
def font() -> TTFont:
    return TTFont(BytesIO(installed_fonts().files["math"].data), lazy=True)


def test_constants(table: MathTable, font: TTFont) -> None:
    constants = font["MATH"].table.MathConstants
    constants.ensureDecompiled()
    expected = {name: getattr(value, "Value", value) for name, value in vars(constants).items()}
    assert table.constants == expected


def test_italics_corrections(table: MathTable, font: TTFont) -> None:
    info = font["MATH"].table.MathGlyphInfo.MathItalicsCorrectionInfo
    values = dict(zip(info.Coverage.glyphs, (v.Value for v in info.ItalicsCorrection), strict=True))
    assert [table.italics(i) for i in range(6000)] == [values.get(name, 0) for name in font.getGlyphOrder()[:6000]]


def test_cut_ins_at_all_heights(table: MathTable, font: TTFont) -> None:
    info = font["MATH"].table.MathGlyphInfo.MathKernInfo
    corners = {"top_right": "TopRightMathKern", "top_left": "TopLeftMathKern"}
    corners |= {"bottom_right": "BottomRightMathKern", "bottom_left": "BottomLeftMathKern"}
    for name, record in zip(info.MathKernCoverage.glyphs, info.MathKernInfoRecords, strict=True):
        for corner, attribute in corners.items():
            kern: Any = getattr(record, attribute)
            for height in (-250, 0, 155, 156, 213, 300, 352, 700):
                # the value after all heights not above this one (OpenType, MathKern)
                passed = sum(h.Value <= height for h in kern.CorrectionHeight) if kern else 0
                expected = kern.KernValue[passed].Value if kern else 0
                assert table.kern(font.getGlyphID(name), corner, height) == expected  # type: ignore[arg-type]


def test_sizes_and_pieces_of_growing_signs(table: MathTable, font: TTFont) -> None:
    variants = font["MATH"].table.MathVariants
    ids = font.getReverseGlyphMap()
    pairs = zip(variants.VertGlyphCoverage.glyphs, variants.VertGlyphConstruction, strict=True)
    for name, construction in pairs:
        assert table.sizes(ids[name]) == tuple(
            (ids[r.VariantGlyph], r.AdvanceMeasurement) for r in construction.MathGlyphVariantRecord
        )
        parts = construction.GlyphAssembly.PartRecords if construction.GlyphAssembly else ()
        assert table.parts(ids[name]) == tuple(
            Part(
                ids[p.glyph],
                p.StartConnectorLength,
                p.EndConnectorLength,
                p.FullAdvance,
                bool(p.PartFlags & 1),
            )
            for p in parts
        )
    assert table.min_overlap == variants.MinConnectorOverlap
    assert table.sizes(ids["a"]) == () and table.parts(ids["a"]) == ()


def test_script_forms(table: MathTable, font: TTFont) -> None:
    ids = font.getReverseGlyphMap()
    for name in ("zero", "comma", "minute", "s", "u1D440", "plus"):
        assert table.script(ids[name], 1) == ids[f"{name}.ssty"]
        assert table.script(ids[name], 2) == ids[f"{name}.ssty2"]
    # a glyph without script forms stays as it is
    assert table.script(ids["uni239B"], 1) == ids["uni239B"]
