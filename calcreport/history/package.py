"""A package as it was handed over: the files inside its PDF, and what every sheet of it prints.

The bytes of a PDF in, `PackageFile` out, or why it cannot be read. A stranger's file is read under bounds: objects,
sheets, files, and how much its streams may unpack to. Nothing in it is run, no password is tried, nothing is written.
Method: ISO 32000-1, clauses 7.5 to 7.11; the library reads the objects, what they mean to a package is decided here.
"""

from __future__ import annotations

import hashlib
import logging
import zlib
from collections.abc import Iterator
from io import BytesIO
from typing import Any

from calcreport.core.late import load
from calcreport.core.record import made, record, state

#: bounds against files made to exhaust: objects, sheets, embedded files; bytes of one stream and of all, unpacked
MOST_OBJECTS, MOST_SHEETS, MOST_FILES = 400_000, 20_000, 2_000
LARGEST_STREAM, MOST_UNPACKED = 60_000_000, 400_000_000
#: how deep objects may stand in one another, and how many may be looked at to tell what lies on a sheet
DEEPEST, MOST_LOOKED_AT = 40, 2_000_000
#: entries of a catalog that a signature adds, and what may come before it
SIGNED = frozenset({"/AcroForm", "/DSS", "/Perms", "/Extensions", "/Version"})
#: what damage makes the library raise beside its own errors
_DAMAGED = (ArithmeticError, AssertionError, AttributeError, EOFError, LookupError, MemoryError, OSError, RuntimeError,
            TypeError, ValueError, zlib.error)  # fmt: skip


@record
class PrintedSheet:
    """One sheet as the file holds it."""

    #: its page label, '' where there is none
    label: str
    #: what is drawn: its content streams unpacked, in order
    content: bytes
    #: all else that shows: size, fonts, forms, links, annotations; SHA-256 over objects in a fixed order
    dress: str
    #: annotations that are no links: 'FreeText', 'Widget'; 'signature' for the field of a signature
    laid_over: tuple[str, ...]


@record
class PackageFile:
    """What was found in a PDF."""

    #: embedded files by name
    files: dict[str, bytes]
    sheets: tuple[PrintedSheet, ...]
    #: entries of the catalog and of its name trees
    catalog: frozenset[str]
    #: fields of signatures that hold one
    signatures: int

    @property
    def inputs(self) -> bool:
        """Whether the project's files are inside."""
        return any(name.startswith("inputs/") for name in self.files)


def read_package(data: bytes) -> PackageFile | str:
    """Return what a PDF holds, or why it cannot be read, in words."""
    if b"%PDF-" not in data[:1024]:
        return "a file that is no PDF"
    try:
        with _Bounded() as library:
            return _Reader(library, data).package()
    except _Refused as refused:
        return str(refused)
    except load("pypdf").errors.PyPdfError as error:
        return "more than the program unpacks" if "imit" in type(error).__name__ else "a damaged file"
    except _DAMAGED:
        return "a damaged file"


def sheet_words(data: bytes, places: list[int]) -> list[list[str]]:
    """Return the words of some sheets of a PDF that was read before, in the order they are drawn.

    A sheet whose text cannot be told apart has none.
    """
    found: list[list[str]] = []
    with _Bounded() as library:
        pages = library.PdfReader(BytesIO(data)).pages
        for place in places:
            try:
                found.append(str(pages[place].extract_text()).split())
            except (library.errors.PyPdfError, *_DAMAGED):
                found.append([])
    return found


class _Refused(Exception):
    """The file is read no further; the words say why."""


class _Bounded:
    """The library with bounds of its own, for a `with` statement."""

    def __init__(self) -> None:
        self.library = load("pypdf")
        # what it has to say of a damaged file is for its authors
        logging.getLogger("pypdf").addHandler(logging.NullHandler())
        logging.getLogger("pypdf").propagate = False
        self.bounds = self.library.apply_configuration(
            zlib_maximum_output_length=LARGEST_STREAM,
            zlib_maximum_recovery_input_length=0,
            lzw_maximum_output_length=LARGEST_STREAM,
            run_length_maximum_output_length=LARGEST_STREAM,
            maximum_declared_stream_length=LARGEST_STREAM,
            array_based_stream_maximum_output_length=LARGEST_STREAM,
            page_tree_maximum_entries=MOST_SHEETS,
            jbig2dec_binary=None,
        )

    def __enter__(self) -> Any:
        self.bounds.__enter__()
        return self.library

    def __exit__(self, *raised: object) -> None:
        self.bounds.__exit__(*raised)


@state
class _Reader:
    """Reads one file; `spent` counts the bytes unpacked so far."""

    library: Any
    data: bytes
    spent: int = 0
    looked_at: int = 0
    #: digests of objects by number, each made once
    digests: dict[tuple[int, int], bytes] = made(factory=dict)
    #: place of every page by the number of its object
    places: dict[tuple[int, int], int] = made(factory=dict)

    def package(self) -> PackageFile:
        file = self.library.PdfReader(BytesIO(self.data), xref_stream_maximum_entries=MOST_OBJECTS,
                                      root_object_recovery_limit=100)  # fmt: skip
        if file.is_encrypted:
            raise _Refused("an encrypted file")
        self.hold_objects(file)
        if len(file.pages) > MOST_SHEETS:
            raise _Refused(f"more than {MOST_SHEETS:,} sheets")
        self.places = {_number(page.indirect_reference): place for place, page in enumerate(file.pages)}
        labels = file.page_labels if "/PageLabels" in file.root_object else [""] * len(file.pages)
        sheets = tuple(self.sheet(page, str(label)) for page, label in zip(file.pages, labels, strict=True))
        names = _dictionary(file.root_object.get("/Names"))
        trees = (f"/Names{name}" for name in names)
        signatures = sum(_signs(widget) for page in file.pages for widget in _annotations(page))
        return PackageFile(self.embedded(names), sheets, frozenset((*file.root_object, *trees)), signatures)

    def hold_objects(self, file: Any) -> None:
        """Count the objects, and unpack the streams that hold objects while that is counted too."""
        if sum(map(len, file.xref.values())) + len(file.xref_objStm) > MOST_OBJECTS:
            raise _Refused(f"more than {MOST_OBJECTS:,} objects")
        for number in sorted({number for number, _ in file.xref_objStm.values()}):
            self.unpacked(self.library.generic.IndirectObject(number, 0, file).get_object())

    def unpacked(self, stream: Any) -> bytes:
        """Return the bytes of a stream, counted."""
        if self.spent > MOST_UNPACKED:
            raise _Refused("streams that unpack to more than the program reads")
        found = bytes(stream.get_data())
        self.spent += len(found)
        return found

    # ------------------------------------------------------------ embedded files

    def embedded(self, names: Any) -> dict[str, bytes]:
        """Return the embedded files; two of one name are refused, as nobody could tell which one is meant."""
        found: dict[str, bytes] = {}
        for specification in self.leaves(_dictionary(names.get("/EmbeddedFiles")), 0):
            name = str(specification.get("/UF", specification.get("/F", "")))
            bodies = _dictionary(specification.get("/EF"))
            body = _resolved(bodies.get("/UF", bodies.get("/F")))
            if body is None or not name or len(name) > 300:
                raise _Refused("an embedded file without a name or without content")
            if name in found:
                raise _Refused(f"two embedded files named {name[:80]}")
            if len(found) >= MOST_FILES:
                raise _Refused(f"more than {MOST_FILES:,} embedded files")
            found[name] = self.unpacked(body)
        return found

    def leaves(self, node: Any, depth: int) -> Iterator[Any]:
        """Yield the values of a name tree."""
        self.look(depth)
        pairs = _resolved(node.get("/Names")) or []
        for value in list(pairs)[1::2]:
            yield _dictionary(value)
        for kid in _resolved(node.get("/Kids")) or []:
            yield from self.leaves(_dictionary(kid), depth + 1)

    def look(self, depth: int) -> None:
        self.looked_at += 1
        if depth > DEEPEST or self.looked_at > MOST_LOOKED_AT:
            raise _Refused("objects that stand in one another without end")

    # ------------------------------------------------------------ sheets

    def sheet(self, page: Any, label: str) -> PrintedSheet:
        contents = _resolved(page.get("/Contents"))
        streams = list(contents) if isinstance(contents, list) else [contents] if contents is not None else []
        content = b"\n".join([self.unpacked(_resolved(stream)) for stream in streams])
        # inherited entries show as the page's own do; what a page is drawn from, and where it hangs, is apart
        keys = ("/MediaBox", "/CropBox", "/Rotate", "/Resources")
        shown = {key: value for key in keys if (value := _inherited(page, key)) is not None}
        shown |= {key: page.raw_get(key) for key in page if key not in ("/Parent", "/Contents", "/Type", *keys)}
        shown["/Annots"] = [link for link in _annotations(page) if not _signs(link)]
        over = tuple("signature" if _signs(one) else str(one.get("/Subtype", "/?"))[1:]
                     for one in _annotations(page) if one.get("/Subtype") != "/Link")  # fmt: skip
        return PrintedSheet(label, content, self.digest(shown, 0).hex(), over)

    def digest(self, value: Any, depth: int) -> bytes:
        """Return a digest of an object and of all it stands for, the same for any order of keys and any packing."""
        self.look(depth)
        if isinstance(value, self.library.generic.IndirectObject):
            number = _number(value)
            if number in self.places:
                return b"page %d" % self.places[number]
            if number not in self.digests:
                # an object that leads back to itself is told by its depth alone
                self.digests[number] = b"circle"
                self.digests[number] = self.digest(value.get_object(), depth + 1)
            return self.digests[number]
        whole = hashlib.sha256()
        if isinstance(value, self.library.generic.StreamObject):
            whole.update(b"stream" + hashlib.sha256(self.unpacked(value)).digest())
        if isinstance(value, dict):
            packing = ("/Length", "/Filter", "/DecodeParms", "/Parent", "/P")
            for key in sorted(key for key in value if key not in packing):
                raw = value.raw_get(key) if isinstance(value, self.library.generic.DictionaryObject) else value[key]
                whole.update(str(key).encode() + b"=" + self.digest(raw, depth + 1))
        elif isinstance(value, list):
            for item in list.__iter__(value):
                whole.update(b"," + self.digest(item, depth + 1))
        elif isinstance(value, int | float):
            whole.update(f"{float(value):.6g}".encode())
        elif isinstance(value, bytes):
            whole.update(b"bytes" + value)
        else:
            whole.update(f"{type(value).__name__}{value}".encode())
        return whole.digest()


def _resolved(value: Any) -> Any:
    found = value.get_object() if value is not None else None
    return None if type(found).__name__ == "NullObject" else found


def _dictionary(value: Any) -> Any:
    found = _resolved(value)
    return found if isinstance(found, dict) else {}


def _number(reference: Any) -> tuple[int, int]:
    return int(reference.idnum), int(reference.generation)


def _inherited(page: Any, key: str) -> Any:
    """Return an entry of a page or of the nodes above it, as it stands there."""
    node = page
    for _ in range(DEEPEST):
        if key in node:
            return node.raw_get(key)
        node = _resolved(node.get("/Parent"))
        if node is None:
            break
    return None


def _annotations(page: Any) -> list[Any]:
    return [_dictionary(one) for one in _resolved(page.get("/Annots")) or []]


def _signs(annotation: Any) -> bool:
    """Tell whether an annotation is the field of a signature."""
    field = _dictionary(annotation.get("/Parent")) or annotation
    return "/Sig" in (annotation.get("/FT"), field.get("/FT"))
