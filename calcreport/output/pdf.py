"""Pages as PDF bytes: page objects, fonts, page labels, bookmarks, links, metadata, attached files.

In: `layout.model.Pages` and the font files its glyphs come from. Out: the bytes of a PDF 1.7 file, the same
for the same pages. Decides nothing: every place and every glyph is given. A page is written when it is handed over and
not kept; what it says of itself waits for the end: where links lead is known when all pages are there.
Method: ISO 32000-1.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from functools import partial
from hashlib import md5
from sys import intern

from calcreport.core.fontfile import FontFile
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.record import record
from calcreport.layout.model import Face, Page, Pages
from calcreport.output.content import FONT_NAMES, Area, Content, ContentWriter, Used
from calcreport.output.embed import embed_font
from calcreport.output.file import PdfFile
from calcreport.output.metadata import information, xmp_packet
from calcreport.output.outline import outline_objects
from calcreport.output.syntax import Numbers, name, number, reference, stream, string, text_bytes, text_string


@record
class Attachment:
    """A file carried inside the PDF."""

    name: str
    data: bytes
    #: 'Source', 'Data', 'Supplement', 'Unspecified': what it is to the document (ISO 19005-3, Annex E)
    relationship: str
    #: 'application/yaml'
    mime: str
    description: str = ""


def write_pdf(
    pages: Pages, fonts: Mapping[Face, FontFile], attachments: tuple[Attachment, ...] = (), kept: Fresh = FRESH
) -> bytes:
    """Write all pages.

    ValueError when there are none, a link or bookmark leads nowhere, two anchors or two labels share a name,
    a bookmark skips a level, or the date is no ISO date.
    """
    writer = PdfWriter(pages.width, pages.height, kept)
    for page in pages.pages:
        writer.add(page)
    return writer.finish(pages, fonts, attachments)


@record
class _Sheet:
    """A page whose content is written: its number, references to its streams, and what lies on it besides ink."""

    number: int
    streams: bytes
    #: corners of every link's area, and in the same order the name of the place it leads to
    corners: tuple[bytes, ...]
    targets: tuple[str, ...]
    #: names of anchors, and in the same order their destinations
    names: tuple[str, ...]
    places: tuple[bytes, ...]


class PdfWriter:
    """Writes pages one after another, and at the end what binds them together."""

    def __init__(self, width: float, height: float, kept: Fresh = FRESH) -> None:
        """Start a file of sheets of one size in points."""
        self.width, self.height, self._kept = width, height, kept
        self._file = PdfFile()
        self._content = ContentWriter()
        self._numbers = Numbers()
        self._tree, self._resources = self._file.reserve(), self._file.reserve()
        #: by label
        self._sheets: dict[str, _Sheet] = {}

    def add(self, page: Page) -> None:
        """Write body and title block of a page as two streams; ValueError when another page has its label."""
        if page.label in self._sheets:
            raise ValueError(f"two pages have the same label {page.label!r}")
        own = self._file.reserve()
        inputs = page, round(self.height * 100)
        body, block, packed, used = self._kept.of("sheet", page.label, inputs, partial(self._write, page))
        self._content.take(used)
        streams = []
        for content, data in zip((body, block), packed, strict=True):
            self._file.mark(content.data)
            streams.append(self._file.add(data))
        areas, anchors = body.links + block.links, body.anchors + block.anchors
        self._sheets[page.label] = _Sheet(
            own,
            _references(streams),
            tuple([self._corners(area) for area in areas]),
            # names come from many hands; kept once each
            tuple([intern(area.target) for area in areas]),
            tuple([intern(anchor) for anchor, _, _ in anchors]),
            tuple([self._place(own, x, y) for _, x, y in anchors]),
        )

    def _write(self, page: Page) -> tuple[Content, Content, tuple[bytes, bytes], Used]:
        """Write the streams of a page, also packed, and the glyphs that are not yet among those used.

        A page that may be asked for again is written by a writer of its own, which sees every glyph of the page.
        """
        writer = ContentWriter() if self._kept.keeps else self._content
        body, block = (writer.write(items, self.height) for items in (page.body, page.title_block))
        used = writer.used if self._kept.keeps else {}
        return body, block, (stream(body.data), stream(block.data)), used

    def finish(self, pages: Pages, fonts: Mapping[Face, FontFile], attachments: tuple[Attachment, ...] = ()) -> bytes:
        """Write what binds the pages added, in the order of `pages`; give the whole file.

        ValueError when there are none, or as for `write_pdf`.
        """
        if not pages.pages:
            raise ValueError("there are no pages to write")
        file, places = self._file, _places(self._sheets, self.height)
        sheets = [self._sheets[page.label] for page in pages.pages]
        for sheet in sheets:
            links = [
                file.add(_link(corners, _found(places, target)))
                for corners, target in zip(sheet.corners, sheet.targets, strict=True)
            ]
            file.put(sheet.number, self._page(sheet, _references(links)))
        kids = _references(sheet.number for sheet in sheets)
        file.put(self._tree, b"<</Type/Pages/Count %d/Kids[%b]>>" % (len(sheets), kids))
        file.put(self._resources, _fonts(file, self._content, fonts))
        info = _dictionary(information(pages))
        file.mark(info)
        catalog = {"Type": b"/Catalog", "Pages": reference(self._tree), **_particulars(file, pages)}
        catalog |= _names(file, pages, places, attachments)
        catalog |= _outline(file, pages, places)
        return file.finish(file.add(_dictionary(catalog)), file.add(info))

    def _page(self, sheet: _Sheet, links: bytes) -> bytes:
        return b"<</Type/Page/Parent %b/MediaBox[0 0 %b %b]/Resources %b/Contents[%b]%b>>" % (
            reference(self._tree),
            number(self.width),
            number(self.height),
            reference(self._resources),
            sheet.streams,
            b"/Annots[%b]" % links if links else b"",
        )

    def _corners(self, area: Area) -> bytes:
        """Write the corners of an area, to hundredths of a point."""
        digits = self._numbers
        left, bottom, right, top = area.left, area.bottom, area.right, area.top
        corners = (
            digits[round(left * 100)],
            digits[round(bottom * 100)],
            digits[round(right * 100)],
            digits[round(top * 100)],
        )
        return " ".join(corners).encode()

    def _place(self, own: int, x: float, y: float) -> bytes:
        """Write the destination of an anchor, to hundredths of a point."""
        digits = self._numbers
        return f"[{own} 0 R/XYZ {digits[round(x * 100)]} {digits[round(y * 100)]} 0]".encode()


def _dictionary(entries: Mapping[str, bytes]) -> bytes:
    return b"<<%b>>" % b"".join(name(key) + b" " + value for key, value in entries.items())


def _references(numbers: Iterable[int]) -> bytes:
    return b" ".join(map(reference, numbers))


def _particulars(file: PdfFile, pages: Pages) -> dict[str, bytes]:
    """Write the catalog's entries on language, metadata, page labels and how the file opens."""
    packet = stream(xmp_packet(pages), b"/Type/Metadata/Subtype/XML", compress=False)
    labels = (b"%d<</P%b>>" % (i, text_string(page.label)) for i, page in enumerate(pages.pages))
    return {
        "Lang": text_string(pages.language),
        "Metadata": reference(file.add(packet)),
        "PageLabels": b"<</Nums[%b]>>" % b" ".join(labels),
        "PageMode": b"/UseOutlines" if pages.bookmarks else b"/UseNone",
        "ViewerPreferences": b"<</DisplayDocTitle true>>",
    }


def _outline(file: PdfFile, pages: Pages, places: Mapping[str, bytes]) -> dict[str, bytes]:
    """Write the bookmarks."""
    if not pages.bookmarks:
        return {}
    root = file.next
    for entry in outline_objects(pages.bookmarks, root, lambda target: _found(places, target)):
        file.add(entry)
    return {"Outlines": reference(root)}


def _places(sheets: Mapping[str, _Sheet], height: float) -> dict[str, bytes]:
    """Give the destination of every page label and anchor; a label stands before an anchor of its name."""
    anchors: dict[str, bytes] = {}
    for sheet in sheets.values():
        for anchor, place in zip(sheet.names, sheet.places, strict=True):
            if anchor in anchors:
                raise ValueError(f"two anchors are named {anchor!r}")
            anchors[anchor] = place
    top = number(height)
    return anchors | {label: b"[%d 0 R/XYZ 0 %b 0]" % (sheet.number, top) for label, sheet in sheets.items()}


def _found(places: Mapping[str, bytes], target: str) -> bytes:
    found = places.get(target)
    if found is None:
        raise ValueError(f"nothing is named {target!r}, to which a link or bookmark leads")
    return found


def _link(corners: bytes, place: bytes) -> bytes:
    """Write a link without border, to be printed."""
    return b"<</Type/Annot/Subtype/Link/Rect[%b]/Border[0 0 0]/F 4/Dest%b>>" % (corners, place)


def _fonts(file: PdfFile, writer: ContentWriter, fonts: Mapping[Face, FontFile]) -> bytes:
    """Embed the fonts that were used; write the resources all pages share."""
    entries = b"".join(
        FONT_NAMES[face] + b" " + reference(embed_font(fonts[face], used, file.add))
        for face, used in writer.used.items()
        if used
    )
    return b"<</Font<<%b>>>>" % entries


def _names(
    file: PdfFile, pages: Pages, places: Mapping[str, bytes], attachments: tuple[Attachment, ...]
) -> dict[str, bytes]:
    """Write named destinations of the page labels, and attached files by name."""
    labels = sorted((page.label.encode(), places[page.label]) for page in pages.pages)
    trees = b"/Dests<</Names[%b]>>" % b" ".join(string(label) + place for label, place in labels)
    if not attachments:
        return {"Names": b"<<%b>>" % trees}
    files = sorted((text_bytes(item.name), reference(file.add(_attachment(file, item)))) for item in attachments)
    pairs = b" ".join(string(key) + b" " + ref for key, ref in files)
    # the tree is its own leaf, so it may do without limits (ISO 32000-1 clause 7.9.6)
    trees += b"/EmbeddedFiles<</Names[%b]>>" % pairs
    return {"Names": b"<<%b>>" % trees, "AF": b"[%b]" % b" ".join(ref for _, ref in files)}


def _attachment(file: PdfFile, item: Attachment) -> bytes:
    """Write the specification of an attached file."""
    # a checksum for readers, not against anyone: the format knows MD5 alone; dates are left out, none is known
    sums = md5(item.data, usedforsecurity=False).hexdigest().encode()
    entries = b"/Type/EmbeddedFile/Subtype%b/Params<</Size %d/CheckSum<%b>>>" % (name(item.mime), len(item.data), sums)
    file.mark(item.data)
    body = reference(file.add(stream(item.data, entries)))
    title = text_string(item.name)
    return b"<</Type/Filespec/F%b/UF%b/Desc%b/AFRelationship%b/EF<</F %b/UF %b>>>>" % (
        title,
        title,
        text_string(item.description),
        name(item.relationship),
        body,
        body,
    )
