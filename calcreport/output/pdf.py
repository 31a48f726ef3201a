"""Pages as PDF bytes: page objects, fonts, page labels, bookmarks, links, metadata, attached files.

In: `layout.model.Pages` and the font files its glyphs come from. Out: the bytes of a PDF 1.7 file, the same
for the same pages. Decides nothing: every place and every glyph is given. The numbering of objects and the
cross-reference table are ReportLab's; the objects themselves are written here and in the modules beside.
Method: ISO 32000-1.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from reportlab.pdfbase import pdfdoc  # type: ignore[import-untyped]

from calcreport.core.fontfile import FontFile
from calcreport.layout.model import Face, Page, Pages
from calcreport.output.content import FONT_NAMES, Area, ContentWriter
from calcreport.output.embed import embed_font
from calcreport.output.metadata import information, xmp_packet
from calcreport.output.outline import outline_objects
from calcreport.output.syntax import name, number, reference, stream, string, text_string


@dataclass(frozen=True, slots=True)
class Attachment:
    """A file carried inside the PDF."""

    name: str
    data: bytes
    #: 'Source', 'Data', 'Supplement', 'Unspecified': what it is to the document (ISO 19005-3, Annex E)
    relationship: str
    #: 'application/yaml'
    mime: str
    description: str = ""


class _File:
    """Numbered objects, and the file made of them at the end."""

    def __init__(self, language: str) -> None:
        self._document = pdfdoc.PDFDocument(invariant=1, pdfVersion=(1, 7), lang=language)

    @property
    def next(self) -> int:
        """The number the next object will have."""
        return int(self._document.objectcounter) + 1

    def reserve(self) -> int:
        """Give the number of an object that follows later."""
        number = self.next
        self._document.Reference(b"null", f"object{number}")
        return number

    def put(self, number: int, data: bytes) -> None:
        """Give a reserved object its bytes."""
        self._document.idToObject[f"object{number}"] = data

    def add(self, data: bytes) -> int:
        """Add an object; give its number."""
        number = self.reserve()
        self.put(number, data)
        return number

    def mark(self, data: bytes) -> None:
        """Let data decide, with all else marked, the identifier of the file."""
        self._document.updateSignature(data)

    def finish(self, catalog: int, info: int) -> bytes:
        """Write the file; the two objects are its catalog and its information dictionary."""
        self._document.Catalog = pdfdoc.PDFObjectReference(f"object{catalog}")
        self._document.info = pdfdoc.PDFObjectReference(f"object{info}")
        return bytes(self._document.format())


def write_pdf(
    pages: Pages, fonts: Mapping[Face, FontFile], attachments: tuple[Attachment, ...] = ()
) -> bytes:
    """Write all pages.

    ValueError when there are none, a link or bookmark leads nowhere, two anchors or two labels share a name,
    a bookmark skips a level, or the date is no ISO date.
    """
    if not pages.pages:
        raise ValueError("there are no pages to write")
    file = _File(pages.language)
    writer = ContentWriter()
    info = _dictionary(information(pages))
    file.mark(info)
    tree, resources = file.reserve(), file.reserve()
    numbers = [file.reserve() for _ in pages.pages]
    sheets = [_sheet(file, writer, page, pages.height) for page in pages.pages]
    places = _places(pages, numbers, sheets)
    page = b"<</Type/Page/Parent %b/MediaBox[0 0 %b %b]/Resources %b/Contents[%%b]%%b>>" % (
        reference(tree),
        number(pages.width),
        number(pages.height),
        reference(resources),
    )
    for own, sheet in zip(numbers, sheets, strict=True):
        links = b" ".join(reference(file.add(_link(area, places))) for area in sheet.links)
        file.put(own, page % (_references(sheet.streams), b"/Annots[%b]" % links if links else b""))
    file.put(tree, b"<</Type/Pages/Count %d/Kids[%b]>>" % (len(numbers), _references(numbers)))
    file.put(resources, _resources(file, writer, fonts))
    catalog = {"Type": b"/Catalog", "Pages": reference(tree), **_particulars(file, pages)}
    catalog |= _names(file, pages, places, attachments)
    catalog |= _outline(file, pages, places)
    return file.finish(file.add(_dictionary(catalog)), file.add(info))


def _dictionary(entries: Mapping[str, bytes]) -> bytes:
    return b"<<%b>>" % b"".join(name(key) + b" " + value for key, value in entries.items())


def _references(numbers: Iterable[int]) -> bytes:
    return b" ".join(map(reference, numbers))


@dataclass(frozen=True, slots=True)
class _Sheet:
    """A page whose content is written: the numbers of its streams, and what lies on it besides ink."""

    streams: tuple[int, ...]
    links: tuple[Area, ...]
    anchors: tuple[tuple[str, float, float], ...]


def _sheet(file: _File, writer: ContentWriter, page: Page, height: float) -> _Sheet:
    """Write the body and the title block of a page as two streams."""
    parts = writer.write(page.body, height), writer.write(page.title_block, height)
    for content in parts:
        file.mark(content.data)
    streams = tuple(file.add(stream(content.data)) for content in parts)
    body, block = parts
    return _Sheet(streams, body.links + block.links, body.anchors + block.anchors)


def _particulars(file: _File, pages: Pages) -> dict[str, bytes]:
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


def _outline(file: _File, pages: Pages, places: Mapping[str, bytes]) -> dict[str, bytes]:
    """Write the bookmarks."""
    if not pages.bookmarks:
        return {}
    root = file.next
    for entry in outline_objects(pages.bookmarks, root, lambda target: _place(places, target)):
        file.add(entry)
    return {"Outlines": reference(root)}


def _places(pages: Pages, numbers: list[int], sheets: list[_Sheet]) -> dict[str, bytes]:
    """Give the destination of every page label and anchor; a label stands before an anchor of its name."""
    top = number(pages.height)
    labels = {
        page.label: b"[%b/XYZ 0 %b 0]" % (reference(own), top)
        for page, own in zip(pages.pages, numbers, strict=True)
    }
    if len(labels) != len(numbers):
        raise ValueError("two pages have the same label")
    anchors: dict[str, bytes] = {}
    for own, sheet in zip(numbers, sheets, strict=True):
        for anchor, x, y in sheet.anchors:
            if anchor in anchors:
                raise ValueError(f"two anchors are named {anchor!r}")
            anchors[anchor] = b"[%b/XYZ %b %b 0]" % (reference(own), number(x), number(y))
    return anchors | labels


def _place(places: Mapping[str, bytes], target: str) -> bytes:
    found = places.get(target)
    if found is None:
        raise ValueError(f"nothing is named {target!r}, to which a link or bookmark leads")
    return found


def _link(area: Area, places: Mapping[str, bytes]) -> bytes:
    """Write a link without border, to be printed."""
    corners = b" ".join(number(v) for v in (area.left, area.bottom, area.right, area.top))
    return b"<</Type/Annot/Subtype/Link/Rect[%b]/Border[0 0 0]/F 4/Dest%b>>" % (
        corners,
        _place(places, area.target),
    )


def _resources(file: _File, writer: ContentWriter, fonts: Mapping[Face, FontFile]) -> bytes:
    """Embed the fonts that were used; write the resources all pages share."""
    entries = b"".join(
        FONT_NAMES[face] + b" " + reference(embed_font(fonts[face], used, file.add))
        for face, used in writer.used.items()
        if used
    )
    return b"<</Font<<%b>>>>" % entries


def _names(
    file: _File, pages: Pages, places: Mapping[str, bytes], attachments: tuple[Attachment, ...]
) -> dict[str, bytes]:
    """Write named destinations of the page labels, and attached files by name."""
    labels = sorted((page.label.encode(), places[page.label]) for page in pages.pages)
    trees = b"/Dests<</Names[%b]>>" % b" ".join(string(label) + place for label, place in labels)
    if not attachments:
        return {"Names": b"<<%b>>" % trees}
    files = sorted((item.name.encode(), reference(file.add(_attachment(file, item)))) for item in attachments)
    trees += b"/EmbeddedFiles<</Names[%b]>>" % b" ".join(string(key) + b" " + ref for key, ref in files)
    return {"Names": b"<<%b>>" % trees, "AF": b"[%b]" % b" ".join(ref for _, ref in files)}


def _attachment(file: _File, item: Attachment) -> bytes:
    """Write the specification of an attached file."""
    entries = b"/Type/EmbeddedFile/Subtype%b/Params<</Size %d>>" % (name(item.mime), len(item.data))
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
