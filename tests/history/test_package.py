"""Packages handed in: what is read of them, and what is refused however it was made to harm or deceive."""

from __future__ import annotations

import random
import time
import zlib
from io import BytesIO
from pathlib import Path

import pypdf
import pytest
from pypdf.generic import ArrayObject, DecodedStreamObject, DictionaryObject, NameObject, TextStringObject

from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder
from calcreport.history import package as module
from calcreport.history.package import PackageFile, read_package, sheet_words
from calcreport.publish import build

SAMPLE = Path(__file__).parents[2] / "samples" / "short-beam"
#: far above what any of these takes, in processor seconds
LONGEST = 20


@pytest.fixture(scope="module")
def made() -> bytes:
    disk = Disk(SAMPLE, library_folder())
    source = disk.project_text("project.yaml")
    assert isinstance(source, Source)
    return build(disk, source).data


def opened(data: bytes) -> PackageFile:
    found = read_package(data)
    assert isinstance(found, PackageFile), found
    return found


def written(writer: pypdf.PdfWriter) -> bytes:
    out = BytesIO()
    writer.write(out)
    return out.getvalue()


def test_files_labels_and_content_agree_with_another_reader(made: bytes) -> None:
    found, reader = opened(made), pypdf.PdfReader(BytesIO(made))
    assert found.files == {name: data[0] for name, data in reader.attachments.items()} and found.inputs
    assert [sheet.label for sheet in found.sheets] == reader.page_labels
    for sheet, page in zip(found.sheets, reader.pages, strict=True):
        # words and digits are drawn by the streams: the same operators, the same glyphs
        streams = [stream.get_object().get_data() for stream in page["/Contents"]]
        assert sheet.content == b"\n".join(streams) and not sheet.laid_over
    words = sheet_words(made, [0])[0]
    assert words == pypdf.PdfReader(BytesIO(made)).pages[0].extract_text().split()


def test_a_copy_packed_in_another_way_reads_alike(made: bytes) -> None:
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    for page in writer.pages:
        page.compress_content_streams()
    first, again = opened(made), opened(written(writer))
    assert again.files == first.files
    assert [sheet.dress for sheet in again.sheets] == [sheet.dress for sheet in first.sheets]


def test_what_is_laid_over_a_sheet_shows(made: bytes) -> None:
    first = opened(made)
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    note = DictionaryObject({NameObject("/Type"): NameObject("/Annot"), NameObject("/Subtype"): NameObject("/FreeText"),
                             NameObject("/Contents"): TextStringObject("0.50 OK")})  # fmt: skip
    page = writer.pages[2]
    page[NameObject("/Annots")] = ArrayObject([*page.get("/Annots", []), writer._add_object(note)])
    found = opened(written(writer)).sheets
    assert found[2].laid_over == ("FreeText",) and found[2].dress != first.sheets[2].dress
    assert [s.dress for s in found[:2]] == [s.dress for s in first.sheets[:2]]


def test_a_font_that_draws_another_digit_shows(made: bytes) -> None:
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    fonts = writer.pages[0]["/Resources"]["/Font"]
    program = next(iter(fonts.values()))["/DescendantFonts"][0]["/FontDescriptor"]["/FontFile2"].get_object()
    data = bytearray(program.get_data())
    data[-40] ^= 1
    program.set_data(bytes(data))
    first, found = opened(made).sheets, opened(written(writer)).sheets
    assert all(one.dress != other.dress for one, other in zip(first, found, strict=True))


def test_an_encrypted_file_is_refused_and_no_password_tried(made: bytes) -> None:
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    writer.encrypt("", "owner", algorithm="RC4-128")
    assert read_package(written(writer)) == "an encrypted file"


@pytest.mark.parametrize("data", [b"", b"%PDF-1.7", b"%PDF-1.7\n%%EOF", b"project: {}", b"%PDF-1.7\n" + b"[" * 200_000])
def test_what_is_no_package(data: bytes) -> None:
    assert read_package(data) in ("a file that is no PDF", "a damaged file")


def test_two_files_of_one_name_are_refused(made: bytes) -> None:
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    names = writer.root_object["/Names"]["/EmbeddedFiles"]["/Names"]
    names.extend(names[:2])
    assert read_package(written(writer)) == f"two embedded files named {names[0]}"


def bomb(size: int) -> bytes:
    """Return a stream that unpacks to zeros."""
    packer = zlib.compressobj(9)
    return b"".join(packer.compress(bytes(1_000_000)) for _ in range(size)) + packer.flush()


def with_streams(made: bytes, count: int, size: int) -> bytes:
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    packed = bomb(size)
    for number in range(count):
        stream = DecodedStreamObject()
        stream._data = packed
        stream[NameObject("/Filter")] = NameObject("/FlateDecode")
        writer.pages[number % 2][NameObject("/Contents")].append(writer._add_object(stream))
    return written(writer)


@pytest.mark.parametrize(("count", "size"), [(1, 100), (60, 50)])
def test_streams_that_unpack_without_end(made: bytes, count: int, size: int) -> None:
    data = with_streams(made, count, size)
    before = time.process_time()
    found = read_package(data)
    assert isinstance(found, str) and "unpack" in found
    assert time.process_time() - before < LONGEST


def test_bounds_on_objects_sheets_and_files(made: bytes, monkeypatch: pytest.MonkeyPatch) -> None:
    for name, few in (("MOST_OBJECTS", 20), ("MOST_SHEETS", 3), ("MOST_FILES", 2), ("MOST_LOOKED_AT", 50)):
        with monkeypatch.context() as patched:
            patched.setattr(module, name, few)
            found = read_package(made)
        assert isinstance(found, str) and (f"{few:,}" in found or "without end" in found or "unpacks" in found), name


def test_names_that_lead_back_to_themselves(made: bytes) -> None:
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    tree = writer._add_object(DictionaryObject({NameObject("/Kids"): ArrayObject()}))
    tree.get_object()["/Kids"].append(tree)
    writer.root_object["/Names"][NameObject("/EmbeddedFiles")] = tree
    assert read_package(written(writer)) == "objects that stand in one another without end"


def test_scripts_are_seen_and_not_run(made: bytes) -> None:
    writer = pypdf.PdfWriter(clone_from=BytesIO(made))
    script = DictionaryObject({NameObject("/S"): NameObject("/JavaScript"), NameObject("/JS"): TextStringObject("x()")})
    tree = DictionaryObject({NameObject("/Names"): ArrayObject([TextStringObject("x"), script])})
    writer.root_object["/Names"][NameObject("/JavaScript")] = tree
    writer.root_object[NameObject("/OpenAction")] = script
    found, first = opened(written(writer)), opened(made)
    assert found.catalog - first.catalog == {"/Names/JavaScript", "/OpenAction"}


def test_damage_is_told_and_never_raised(made: bytes) -> None:
    # 300 copies with bytes changed, cut or doubled, from one seed
    chance = random.Random(31)
    before = time.process_time()
    read = 0
    for _ in range(300):
        data = bytearray(made)
        for _ in range(chance.choice((1, 3, 20, 200))):
            place = chance.randrange(len(data))
            match chance.randrange(3):
                case 0:
                    data[place] = chance.randrange(256)
                case 1:
                    del data[place : place + chance.randrange(1, 400)]
                case _:
                    data[place:place] = data[place : place + chance.randrange(1, 400)]
        found = read_package(bytes(data))
        assert isinstance(found, str | PackageFile)
        read += isinstance(found, PackageFile)
    assert 0 < read < 300, "some are read with their damage, some refused"
    assert time.process_time() - before < 10 * LONGEST
