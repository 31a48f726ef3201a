"""Numbered objects, and the PDF file made of them: objects in the order they are finished, a table of places.

In: the bytes of objects. Out: the bytes of a PDF 1.7 file, the same for the same objects. Knows nothing of what the
objects say. Method: ISO 32000-1 clauses 7.5 (file structure) and 14.4 (identifiers).
"""

from __future__ import annotations

from array import array
from hashlib import sha256
from io import BytesIO

from calcreport.output.syntax import reference

#: the second line tells programs that the file is not plain text (7.5.2)
_HEADER = b"%PDF-1.7\n%\xe2\xe3\xcf\xd3\n"


class PdfFile:
    """A file that grows as objects are finished; only their places are kept beside its bytes."""

    def __init__(self) -> None:
        """Start with a header and no objects."""
        self._bytes = BytesIO()
        self._bytes.write(_HEADER)
        #: where each object begins, by its number less one; 0 until it is written
        self._places = array("Q")
        self._digest = sha256()

    @property
    def next(self) -> int:
        """The number the next object will have."""
        return len(self._places) + 1

    def reserve(self) -> int:
        """Give the number of an object that follows later."""
        self._places.append(0)
        return len(self._places)

    def put(self, number: int, data: bytes) -> None:
        """Write a reserved object."""
        self._places[number - 1] = self._bytes.tell()
        self._bytes.write(b"%d 0 obj\n%b\nendobj\n" % (number, data))

    def add(self, data: bytes) -> int:
        """Write an object; give its number."""
        number = self.reserve()
        self.put(number, data)
        return number

    def mark(self, data: bytes) -> None:
        """Let data decide, with all else marked, the identifier of the file."""
        self._digest.update(data)

    def finish(self, catalog: int, info: int) -> bytes:
        """Close the file; the two objects are its catalog and its information dictionary.

        ValueError when a reserved object was never written.
        """
        if 0 in self._places:
            raise ValueError(f"object {self._places.index(0) + 1} was reserved and never written")
        table = self._bytes.tell()
        rows = b"".join([b"%010d 00000 n \n" % place for place in self._places])
        identifier = self._digest.hexdigest()[:32].encode()
        self._bytes.write(b"xref\n0 %d\n0000000000 65535 f \n%b" % (self.next, rows))
        self._bytes.write(
            b"trailer\n<</Size %d/Root %b/Info %b/ID[<%b><%b>]>>\nstartxref\n%d\n%%%%EOF\n"
            % (self.next, reference(catalog), reference(info), identifier, identifier, table)
        )
        return self._bytes.getvalue()
