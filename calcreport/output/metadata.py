"""What a PDF says of itself: the XMP packet and the information dictionary, saying the same.

In: `Pages`. Out: bytes. The date is the one of the issue; no clock is read.
Method: ISO 32000-1 clause 14.3; ISO 16684-1 (XMP).
"""

from __future__ import annotations

from datetime import date

from calcreport.layout.model import Pages
from calcreport.output.syntax import text_string

PROGRAM = "calcreport"

_PACKET = """<?xpacket begin="\ufeff" id="W5M0MpCehiHzreSzNTczkc9d"?>
<x:xmpmeta xmlns:x="adobe:ns:meta/">
<rdf:RDF xmlns:rdf="http://www.w3.org/1999/02/22-rdf-syntax-ns#">
<rdf:Description rdf:about="" xmlns:dc="http://purl.org/dc/elements/1.1/"
 xmlns:xmp="http://ns.adobe.com/xap/1.0/" xmlns:pdf="http://ns.adobe.com/pdf/1.3/">
<dc:format>application/pdf</dc:format>
<dc:title><rdf:Alt><rdf:li xml:lang="x-default">{title}</rdf:li></rdf:Alt></dc:title>
<dc:creator><rdf:Seq><rdf:li>{author}</rdf:li></rdf:Seq></dc:creator>
<dc:description><rdf:Alt><rdf:li xml:lang="x-default">{subject}</rdf:li></rdf:Alt></dc:description>
<dc:language><rdf:Bag><rdf:li>{language}</rdf:li></rdf:Bag></dc:language>
<xmp:CreatorTool>{program}</xmp:CreatorTool>
<xmp:CreateDate>{date}T00:00:00Z</xmp:CreateDate>
<xmp:ModifyDate>{date}T00:00:00Z</xmp:ModifyDate>
<xmp:MetadataDate>{date}T00:00:00Z</xmp:MetadataDate>
<pdf:Producer>{program}</pdf:Producer>
</rdf:Description>
</rdf:RDF>
</x:xmpmeta>
<?xpacket end="w"?>"""


def xmp_packet(pages: Pages) -> bytes:
    """Write the XMP packet; ValueError when the date is no ISO date."""
    values = {
        "title": pages.title,
        "author": pages.author,
        "subject": pages.subject,
        "language": pages.language,
        "program": PROGRAM,
        "date": date.fromisoformat(pages.date).isoformat(),
    }
    return _PACKET.format(**{key: _escaped(value) for key, value in values.items()}).encode()


def information(pages: Pages) -> dict[str, bytes]:
    """Give the entries of the information dictionary."""
    day = text_string(f"D:{date.fromisoformat(pages.date):%Y%m%d}000000Z")
    return {
        "Title": text_string(pages.title),
        "Author": text_string(pages.author),
        "Subject": text_string(pages.subject),
        "Creator": text_string(PROGRAM),
        "Producer": text_string(PROGRAM),
        "CreationDate": day,
        "ModDate": day,
    }


def _escaped(text: str) -> str:
    """Write text for XML, leaving out what XML cannot hold."""
    kept = "".join(c for c in text if c >= " " or c in "\t\n")
    return kept.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
