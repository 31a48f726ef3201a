"""Fonts inside a PDF: a subset of the file, its widths, and what text each glyph stands for.

In: a `FontFile` and its used glyphs with their text. Out: the bytes of the PDF objects. Glyph numbers stay
those of the file, so page content never depends on what else is used. Knows no pages.
Methods: ISO 32000-1 clauses 9.7 (composite fonts) and 9.10.3 (ToUnicode); the OpenType specification.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from hashlib import sha256
from struct import pack, unpack

from calcreport.core.fontfile import FontFile
from calcreport.output.syntax import name, number, reference, stream

#: tables a TrueType font inside a PDF needs, in the order of the file
_TABLES = ("cvt ", "fpgm", "glyf", "head", "hhea", "hmtx", "loca", "maxp", "prep")
#: the whole of a font file must sum to this (published OpenType specification, table head)
_SUM = 0xB1B0AFBA

_CMAP_HEAD = b"""/CIDInit /ProcSet findresource begin
12 dict begin
begincmap
/CIDSystemInfo << /Registry (Adobe) /Ordering (UCS) /Supplement 0 >> def
/CMapName /Adobe-Identity-UCS def
/CMapType 2 def
1 begincodespacerange
<0000> <FFFF>
endcodespacerange
"""
_CMAP_FOOT = b"endcmap\nCMapName currentdict /CMap defineresource pop\nend\nend\n"


def embed_font(font: FontFile, used: Mapping[int, str], add: Callable[[bytes], int]) -> int:
    """Add the objects of a font through `add`, which numbers them; give the number of the font itself."""
    glyphs = sorted({0, *used})
    tag = subset_tag(font, glyphs)
    base = name(f"{tag}+{font.postscript_name}")
    data = subset(font, glyphs)
    file = add(stream(data, b"/Length1 %d" % len(data)))
    ascent, descent = font.ascent_descent
    descriptor = add(
        b"<</Type/FontDescriptor/FontName%b/Flags 4/FontBBox[%b]/ItalicAngle %b/Ascent %d/Descent %d"
        b"/CapHeight %d/StemV 80/FontFile2 %b>>"
        % (
            base,
            b" ".join(b"%d" % v for v in font.box),
            number(font.italic_angle),
            ascent,
            descent,
            font.cap_height,
            reference(file),
        )
    )
    descendant = add(
        b"<</Type/Font/Subtype/CIDFontType2/BaseFont%b/CIDSystemInfo<</Registry(Adobe)/Ordering(Identity)"
        b"/Supplement 0>>/FontDescriptor %b/CIDToGIDMap/Identity/DW 0/W[%b]>>"
        % (base, reference(descriptor), _widths(font, glyphs))
    )
    unicode = add(stream(to_unicode(used)))
    return add(
        b"<</Type/Font/Subtype/Type0/BaseFont%b/Encoding/Identity-H/DescendantFonts[%b]/ToUnicode %b>>"
        % (base, reference(descendant), reference(unicode))
    )


def subset_tag(font: FontFile, glyphs: list[int]) -> str:
    """Give the six letters that tell this subset from others of the font."""
    digest = sha256(font.postscript_name.encode() + pack(f">{len(glyphs)}H", *glyphs)).digest()
    return "".join(chr(65 + byte % 26) for byte in digest[:6])


def to_unicode(used: Mapping[int, str]) -> bytes:
    """Write the map from glyphs to text, UTF-16, at most a hundred a block."""
    rows = [b"<%04X> <%b>\n" % (g, used[g].encode("utf-16-be").hex().upper().encode()) for g in sorted(used)]
    blocks = (rows[i : i + 100] for i in range(0, len(rows), 100))
    return (
        _CMAP_HEAD
        + b"".join(b"%d beginbfchar\n%bendbfchar\n" % (len(block), b"".join(block)) for block in blocks)
        + _CMAP_FOOT
    )


def _widths(font: FontFile, glyphs: list[int]) -> bytes:
    """Write advances of glyphs, those in sequence under one first number."""
    runs: list[list[int]] = []
    for glyph in glyphs:
        if runs and runs[-1][-1] + 1 == glyph:
            runs[-1].append(glyph)
        else:
            runs.append([glyph])
    scale = 1000 / font.units_per_em
    return b" ".join(b"%d[%b]" % (run[0], b" ".join(number(font.advance(g) * scale) for g in run)) for run in runs)


def subset(font: FontFile, glyphs: list[int]) -> bytes:
    """Write a font file that holds the glyphs asked for, what they are made of, and nothing else."""
    kept = set(glyphs)
    waiting = list(glyphs)
    while waiting:
        parts = [part for part in font.components(waiting.pop()) if part not in kept]
        kept.update(parts)
        waiting += parts
    count = max(kept) + 1
    outlines: list[bytes] = []
    places: list[int] = []
    metrics = bytearray(4 * count)
    at = 0
    hmtx = font.offset("hmtx")
    for glyph in sorted(kept):
        # glyphs left out before this one begin where it begins, and so are empty
        places += [at] * (glyph + 1 - len(places))
        start, end = font.outline_range(glyph)
        outline = font.data[start:end]
        outlines.append(outline + bytes(-len(outline) % 4))
        at += len(outlines[-1])
        metrics[4 * glyph : 4 * glyph + 4] = font.data[hmtx + 4 * glyph : hmtx + 4 * glyph + 4]
    places.append(at)
    tables = {tag: font.table(tag) for tag in _TABLES if tag in font.tables}
    tables["glyf"] = b"".join(outlines)
    tables["loca"] = pack(f">{count + 1}I", *places)
    tables["hmtx"] = bytes(metrics)
    tables["maxp"] = tables["maxp"][:4] + pack(">H", count) + tables["maxp"][6:]
    tables["hhea"] = tables["hhea"][:34] + pack(">H", count)
    # no sum yet, offsets of glyphs in four bytes
    tables["head"] = tables["head"][:8] + bytes(4) + tables["head"][12:50] + pack(">h", 1) + tables["head"][52:]
    return _font_file(tables)


def _font_file(tables: Mapping[str, bytes]) -> bytes:
    """Join tables into a file, with its directory and sums."""
    power = len(tables).bit_length() - 1
    search = 16 << power
    head = pack(">4s4H", b"\0\1\0\0", len(tables), search, power, 16 * len(tables) - search)
    at = len(head) + 16 * len(tables)
    entries, bodies = b"", b""
    places: dict[str, int] = {}
    for tag, table in tables.items():
        padded = table + bytes(-len(table) % 4)
        entries += pack(">4s3I", tag.encode(), _sum(padded), at, len(table))
        places[tag] = at
        bodies += padded
        at += len(padded)
    file = head + entries + bodies
    whole = pack(">I", (_SUM - _sum(file)) & 0xFFFFFFFF)
    return file[: places["head"] + 8] + whole + file[places["head"] + 12 :]


def _sum(data: bytes) -> int:
    """Add up the four-byte words of data."""
    words: tuple[int, ...] = unpack(f">{len(data) // 4}I", data)
    return sum(words) & 0xFFFFFFFF
