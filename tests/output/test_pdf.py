"""Whole files read back by pypdf and poppler: text, labels, bookmarks, links, fonts, the same bytes."""

from __future__ import annotations

import hashlib
import shutil
import subprocess
import sys
from dataclasses import replace
from io import BytesIO
from pathlib import Path
from typing import Any

import pytest
from pypdf import PdfReader

from calcreport.layout.fonts import Fonts, installed_fonts
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Anchor, Bookmark, Box, Circle, Item, Link, Page, Pages, Placed, Stroke
from calcreport.output.pdf import Attachment, write_pdf
from calcreport.report.model import Fence, Fraction, Letters, Operator, Root, Row, Script, Space


def V(letter: str) -> Letters:
    """Give a one-letter variable."""
    return Letters(letter, "italic")


U = Letters
EQUALS, MINUS, THIN, UNIT = Operator("=", "relation"), Operator("−", "binary"), Space("thin"), Space("unit")
F_C = Script(V("f"), U("c"), U("′"))
MOMENT = Row(
    (
        Row((V("φ"), Script(V("M"), U("n")))),
        EQUALS,
        Row((V("φ"), Script(V("A"), U("s")), THIN, Script(V("f"), U("y")), THIN)),
        Fence("(", Row((V("d"), MINUS, Fraction(V("a"), U("2")))), ")"),
        EQUALS,
        U("2,880"),
        UNIT,
        U("kip·in"),
    )
)
SHEAR = Row(
    (
        Script(V("V"), U("c")),
        EQUALS,
        U("2"),
        THIN,
        V("λ"),
        THIN,
        Root(F_C),
        THIN,
        Script(V("b"), U("w")),
        THIN,
        V("d"),
    )
)


@pytest.fixture(scope="module")
def fonts() -> Fonts:
    return installed_fonts()


def sheets(fonts: Fonts) -> Pages:
    """Two sheets of words, formulas, rules, a link and an anchor."""
    formulas = Formulas(fonts)
    pages = []
    for number in (1, 2):
        linked = fonts.box("14", "regular", 7.5)
        body: list[Item] = [
            *fonts.run("17", "semibold", 8, 60, 100),
            *fonts.run("Nominal and design strength, ε and ≤ in words", "regular", 9, 90, 100),
            Placed(100, 125, formulas.box(MOMENT, 10)),
            Placed(100, 150, formulas.box(SHEAR, 10)),
            *fonts.run("22.2.2.4.1", "semibold", 7.5, 480, 125),
            Placed(480, 135, Box(9, 5, 2, (*linked.items, Link(0, -5.5, 9, 7, f"B1.{3 - number}")))),
            Anchor(f"B1.{number}", 60, 90),
            Stroke(((54, 160), (560, 160)), 0.35),
            Circle(65, 110, 3.5, 0.35),
        ]
        block = (
            *fonts.run("Quarry Road Workshops", "regular", 8.5, 60, 730),
            *fonts.run(f"B1-{number}", "semibold", 16, 500, 760),
        )
        pages.append(Page(f"B1-{number}", "B1", number, 2, tuple(body), block))
    bookmarks = (Bookmark("B1  Level 2 beam", "B1-1", 0), *(Bookmark(p.label, p.label, 1) for p in pages))
    return Pages(
        612,
        792,
        "Quarry Road Workshops (Level 2)",
        "Office & Söhne",
        "Calculations",
        "en-US",
        "2026-11-16",
        tuple(pages),
        bookmarks,
    )


@pytest.fixture(scope="module")
def data(fonts: Fonts) -> bytes:
    return write_pdf(sheets(fonts), fonts.files)


@pytest.fixture(scope="module")
def reader(data: bytes) -> PdfReader:
    return PdfReader(BytesIO(data), strict=True)


def words(reader: PdfReader, page: int = 0) -> str:
    return " ".join(reader.pages[page].extract_text().split())


# ---------------------------------------------------------------- text


@pytest.mark.parametrize(
    "text",
    [
        "Nominal and design strength, ε and ≤ in words",
        "φMn =",
        "φAs fy",
        "2,880 kip·in",
        "Vc = 2 λ √f′c",
        "22.2.2.4.1",
        "B1-1",
    ],
)
def test_text_comes_out_as_written(reader: PdfReader, text: str) -> None:
    assert text in words(reader)


def test_the_body_is_read_before_the_title_block(reader: PdfReader) -> None:
    text = words(reader)
    assert text.index("17") < text.index("φMn") < text.index("Vc") < text.index("Quarry Road") < text.index("B1-1")


@pytest.mark.skipif(shutil.which("pdftotext") is None, reason="poppler is not installed")
def test_poppler_reads_the_same_words(data: bytes, tmp_path: Path) -> None:
    path = tmp_path / "sheets.pdf"
    path.write_bytes(data)
    done = subprocess.run(["pdftotext", "-raw", str(path), "-"], capture_output=True, text=True, check=True)
    text = " ".join(done.stdout.split())
    for part in (
        "Nominal and design strength, ε and ≤ in words",
        "φMn = φAs fy",
        "2,880 kip·in",
        "22.2.2.4.1",
    ):
        assert part in text


# ---------------------------------------------------------------- structure


def test_page_labels_are_the_printed_numbers_and_the_bookmarks(reader: PdfReader) -> None:
    assert reader.page_labels == ["B1-1", "B1-2"]
    outline: Any = reader.outline
    part, below = outline
    assert part.title == "B1  Level 2 beam"
    assert [entry.title for entry in below] == reader.page_labels
    assert [reader.get_destination_page_number(entry) for entry in below] == [0, 1]


def test_every_label_is_a_named_place(reader: PdfReader) -> None:
    assert {name: reader.get_destination_page_number(d) for name, d in reader.named_destinations.items()} == {
        "B1-1": 0,
        "B1-2": 1,
    }


def test_links_lead_to_anchors_are_printed_and_have_no_border(reader: PdfReader) -> None:
    for number, page in enumerate(reader.pages):
        annotations: Any = page["/Annots"]
        (annotation,) = (ref.get_object() for ref in annotations)
        assert (annotation["/F"], list(annotation["/Border"])) == (4, [0, 0, 0])
        # the box stands at (480, 135), the area 5.5 above its baseline and 7 high: 792 - 135 + 5.5 = 662.5
        assert [float(v) for v in annotation["/Rect"]] == [480, 655.5, 489, 662.5]
        place = annotation["/Dest"]
        assert place[0].get_object() == reader.pages[1 - number]
        assert [float(v) for v in place[2:4]] == [60, 702]  # 792 - 90


def test_body_and_title_block_are_streams_of_their_own(reader: PdfReader) -> None:
    contents: list[Any] = [page["/Contents"] for page in reader.pages]
    first, second = contents
    assert len(first) == len(second) == 2
    assert all(part.get_object()["/Filter"] == "/FlateDecode" for part in (*first, *second))
    assert first[1].get_object().get_data() != second[1].get_object().get_data()
    assert first[0].get_object().get_data() == second[0].get_object().get_data()


def test_every_font_is_an_embedded_subset_with_text(reader: PdfReader, data: bytes) -> None:
    resources: Any = reader.pages[0]["/Resources"]
    fonts = resources["/Font"]
    bases = []
    for font in (fonts[name].get_object() for name in fonts):
        (inner,) = (d.get_object() for d in font["/DescendantFonts"])
        assert (font["/Subtype"], font["/Encoding"]) == ("/Type0", "/Identity-H")
        assert (inner["/Subtype"], inner["/CIDToGIDMap"]) == ("/CIDFontType2", "/Identity")
        assert "/FontFile2" in inner["/FontDescriptor"]
        assert "/ToUnicode" in font
        bases.append(font["/BaseFont"][8:])
    assert bases == ["SourceSansPro-Regular", "SourceSansPro-Semibold", "STIXTwoMath"]
    assert b"Helvetica" not in data


def test_the_document_says_what_it_is(reader: PdfReader) -> None:
    root: Any = reader.trailer["/Root"]
    info, packet = reader.metadata, reader.xmp_metadata
    assert reader.pdf_header == "%PDF-1.7"
    assert root["/Lang"] == "en-US"
    assert root["/ViewerPreferences"]["/DisplayDocTitle"].value is True
    assert root["/PageMode"] == "/UseOutlines"
    assert info is not None and packet is not None
    assert (info.title, info.author, info.subject) == (
        "Quarry Road Workshops (Level 2)",
        "Office & Söhne",
        "Calculations",
    )
    assert packet.dc_title == {"x-default": info.title}
    assert packet.dc_creator == [info.author]
    assert str(info.creation_date_raw) == "D:20261116000000Z"
    assert packet.xmp_create_date is not None and packet.xmp_create_date.isoformat()[:10] == "2026-11-16"


def test_an_attached_file_is_carried_whole(fonts: Fonts) -> None:
    source = Attachment("project (1).yaml", b"mark: B1\n", "Source", "application/yaml", "input")
    read = PdfReader(BytesIO(write_pdf(sheets(fonts), fonts.files, (source,))), strict=True)
    assert read.attachments == {"project (1).yaml": [b"mark: B1\n"]}
    root: Any = read.trailer["/Root"]
    (entry,) = (ref.get_object() for ref in root["/AF"])
    assert (entry["/AFRelationship"], entry["/EF"]["/F"]["/Subtype"]) == ("/Source", "/application/yaml")


# ---------------------------------------------------------------- faults


def test_a_link_that_leads_nowhere_is_a_fault(fonts: Fonts) -> None:
    pages = sheets(fonts)
    page = replace(pages.pages[0], body=(Link(0, 0, 9, 9, "B9.1"),))
    with pytest.raises(ValueError, match=r"nothing is named 'B9\.1'"):
        write_pdf(replace(pages, pages=(page,), bookmarks=()), fonts.files)


def test_two_anchors_or_labels_of_one_name_are_a_fault(fonts: Fonts) -> None:
    pages = sheets(fonts)
    page = replace(pages.pages[0], body=(Anchor("x", 0, 0), Anchor("x", 0, 9)))
    with pytest.raises(ValueError, match="two anchors are named 'x'"):
        write_pdf(replace(pages, pages=(page,), bookmarks=()), fonts.files)
    with pytest.raises(ValueError, match="two pages have the same label"):
        write_pdf(replace(pages, pages=(page, page)), fonts.files)


def test_no_pages_are_a_fault(fonts: Fonts) -> None:
    with pytest.raises(ValueError, match="no pages"):
        write_pdf(replace(sheets(fonts), pages=(), bookmarks=()), fonts.files)


def test_a_bookmark_may_not_skip_a_level(fonts: Fonts) -> None:
    pages = replace(sheets(fonts), bookmarks=(Bookmark("B1", "B1-1", 1),))
    with pytest.raises(ValueError, match="skips a level"):
        write_pdf(pages, fonts.files)


# ---------------------------------------------------------------- the same bytes, a sound file

_AGAIN = """
import hashlib, sys
sys.path.insert(0, sys.argv[1])
import test_pdf
fonts = test_pdf.installed_fonts()
print(hashlib.sha256(test_pdf.write_pdf(test_pdf.sheets(fonts), fonts.files)).hexdigest())
"""


@pytest.mark.parametrize(("seed", "zone"), [("1", "UTC"), ("77", "Asia/Tokyo")])
def test_the_same_pages_give_the_same_bytes_in_any_process(data: bytes, seed: str, zone: str) -> None:
    done = subprocess.run(
        [sys.executable, "-c", _AGAIN, str(Path(__file__).parent)],
        capture_output=True,
        text=True,
        check=True,
        env={"PYTHONHASHSEED": seed, "TZ": zone, "PYTHONPATH": str(Path(__file__).parents[2])},
    )
    assert done.stdout.strip() == hashlib.sha256(data).hexdigest()


def test_other_pages_have_another_identifier(fonts: Fonts, reader: PdfReader) -> None:
    other = PdfReader(BytesIO(write_pdf(replace(sheets(fonts), date="2026-11-17"), fonts.files)))
    identifiers: list[Any] = [each.trailer["/ID"] for each in (other, reader)]
    assert identifiers[0][0] != identifiers[1][0]


@pytest.mark.skipif(shutil.which("qpdf") is None, reason="qpdf is not installed")
def test_qpdf_finds_nothing_wrong(data: bytes, tmp_path: Path) -> None:
    path = tmp_path / "sheets.pdf"
    path.write_bytes(data)
    done = subprocess.run(["qpdf", "--check", str(path)], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


@pytest.mark.skipif(shutil.which("pdftoppm") is None, reason="poppler is not installed")
def test_poppler_draws_without_complaint(data: bytes, tmp_path: Path) -> None:
    path = tmp_path / "sheets.pdf"
    path.write_bytes(data)
    done = subprocess.run(
        ["pdftoppm", "-r", "40", "-png", str(path), str(tmp_path / "sheet")],
        capture_output=True,
        text=True,
        check=True,
    )
    assert done.stderr == ""
    assert len(list(tmp_path.glob("sheet*.png"))) == 2
