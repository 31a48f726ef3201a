"""What an embedded font says of its codes: text, advance and the box its ink fills.

In: a font dictionary of a PDF, read by pypdf. Out: `Face`. Text comes from ToUnicode, advances from the widths of the
PDF, ink boxes from the glyph headers of the embedded TrueType file (OpenType specification, tables head, loca, glyf).
Reads composite fonts with two-byte identity codes and simple fonts with one-byte codes; refuses all others.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from struct import unpack_from
from typing import Any

#: left, bottom, right, top in thousandths of the type size
Box = tuple[float, float, float, float]

_HEX = re.compile(rb"<([0-9A-Fa-f\s]*)>")
_BLOCK = re.compile(rb"begin(bfchar|bfrange)(.*?)end\1", re.S)
_RANGE = re.compile(rb"<([0-9A-Fa-f]+)>\s*<([0-9A-Fa-f]+)>\s*(?:<([0-9A-Fa-f]+)>|\[(.*?)\])", re.S)


@dataclass(frozen=True, slots=True)
class Face:
    """One font as a page uses it."""

    name: str
    #: bytes of a code
    width: int
    text: dict[int, str]
    #: thousandths of the type size
    advance: dict[int, float]
    usual_advance: float
    ink: dict[int, Box]
    embedded: bool


def read_face(font: Any) -> Face:
    """Return what a font dictionary says; ValueError where its kind is not one this reader knows."""
    font = font.get_object()
    text = _to_unicode(font["/ToUnicode"].get_object().get_data()) if "/ToUnicode" in font else {}
    if font["/Subtype"] == "/Type0":
        if font["/Encoding"] != "/Identity-H":
            raise ValueError(f"composite font encoded {font['/Encoding']}")
        inner = font["/DescendantFonts"].get_object()[0].get_object()
        advance = _wide(inner.get("/W", []))
        usual, width = float(inner.get("/DW", 1000)), 2
    else:
        inner = font
        first = int(font.get("/FirstChar", 0))
        advance = {first + i: float(w) for i, w in enumerate(font.get("/Widths", []))}
        usual, width = 0.0, 1
    descriptor = inner["/FontDescriptor"].get_object() if "/FontDescriptor" in inner else {}
    file = next((descriptor[key] for key in ("/FontFile2", "/FontFile", "/FontFile3") if key in descriptor), None)
    ink = _ink(file.get_object().get_data()) if file is not None and "/FontFile2" in descriptor else {}
    return Face(str(font["/BaseFont"])[1:], width, text, advance, usual, ink, file is not None)


def _text(digits: bytes) -> str:
    """Return the text a code stands for; a blank that does not break is a blank."""
    return bytes.fromhex(digits.decode()).decode("utf-16-be").replace("\xa0", " ")


def _to_unicode(data: bytes) -> dict[int, str]:
    found: dict[int, str] = {}
    for kind, body in _BLOCK.findall(data):
        if kind == b"bfchar":
            pairs = _HEX.findall(body)
            found.update((int(a, 16), _text(b)) for a, b in zip(pairs[::2], pairs[1::2], strict=True))
            continue
        for low, high, first, listed in _RANGE.findall(body):
            codes = range(int(low, 16), int(high, 16) + 1)
            if first:
                start = _text(first)
                found.update((code, start[:-1] + chr(ord(start[-1]) + i)) for i, code in enumerate(codes))
            else:
                found.update(zip(codes, map(_text, _HEX.findall(listed)), strict=True))
    return found


def _wide(runs: Any) -> dict[int, float]:
    """Read the W array of a composite font."""
    found: dict[int, float] = {}
    items = list(runs)
    at = 0
    while at < len(items):
        first, second = int(items[at]), items[at + 1]
        second = second.get_object() if hasattr(second, "get_object") else second
        if isinstance(second, list):
            found.update((first + i, float(w)) for i, w in enumerate(second))
            at += 2
        else:
            found.update((code, float(items[at + 2])) for code in range(first, int(second) + 1))
            at += 3
    return found


def _ink(data: bytes) -> dict[int, Box]:
    """Read the ink box of every glyph that has an outline."""
    tables = {}
    for i in range(unpack_from(">H", data, 4)[0]):
        tag, _, start, length = unpack_from(">4sIII", data, 12 + 16 * i)
        tables[tag] = (start, length)
    head, (loca, length), glyf = tables[b"head"][0], tables[b"loca"], tables[b"glyf"][0]
    scale = 1000 / unpack_from(">H", data, head + 18)[0]
    if unpack_from(">h", data, head + 50)[0]:
        places = unpack_from(f">{length // 4}I", data, loca)
    else:
        places = tuple(2 * place for place in unpack_from(f">{length // 2}H", data, loca))
    found = {}
    for glyph in range(len(places) - 1):
        if places[glyph] < places[glyph + 1]:
            x0, y0, x1, y1 = unpack_from(">4h", data, glyf + places[glyph] + 2)
            found[glyph] = (x0 * scale, y0 * scale, x1 * scale, y1 * scale)
    return found
