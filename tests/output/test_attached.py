"""Files inside the PDF, read back by a library that is not ours and held against ISO 32000-1 clause 7.11 and ISO 19005-3.

What must stand there: F and UF, relationship, kind, size, and the MD5 of the content (RFC 1321, by the standard library).
"""

from __future__ import annotations

import hashlib
from io import BytesIO
from pathlib import Path

import pypdf
import pytest
from pypdf.generic import DictionaryObject, IndirectObject, StreamObject

from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder
from calcreport.layout.fonts import installed_fonts
from calcreport.layout.model import Page, Pages
from calcreport.output.pdf import Attachment, write_pdf
from calcreport.publish import Package, build
from tests.commands.desk import make, run

SAMPLE = Path(__file__).parents[2] / "samples" / "canal-shelter"
PAGE = Page("A", "A", 1, 1, (), ())
PAGES = Pages(100.0, 100.0, "t", "a", "s", "en", "2026-11-16", (PAGE,), ())


def _package(attached: bool) -> Package:
    disk = Disk(SAMPLE, library_folder())
    source = disk.project_text("project.yaml")
    assert isinstance(source, Source)
    return build(disk, source, attached=attached)


@pytest.fixture(scope="module")
def package() -> Package:
    return _package(True)


@pytest.fixture(scope="module")
def bare() -> Package:
    return _package(False)


def _specifications(data: bytes) -> tuple[list[str], list[DictionaryObject], DictionaryObject]:
    """Return names and specifications in the order of the name tree, and the catalog."""
    catalog = pypdf.PdfReader(BytesIO(data)).trailer["/Root"].get_object()
    assert isinstance(catalog, DictionaryObject)
    pairs = catalog["/Names"]["/EmbeddedFiles"]["/Names"]  # type: ignore[index]
    return list(pairs[::2]), [one.get_object() for one in pairs[1::2]], catalog


def test_every_file_says_what_it_is(package: Package) -> None:
    names, found, catalog = _specifications(package.data)
    assert names == sorted(package.files) and len(names) == len(set(names)) > 8
    references = [one.idnum for one in catalog.raw_get("/AF") if isinstance(one, IndirectObject)]
    tree = catalog["/Names"]["/EmbeddedFiles"]["/Names"]  # type: ignore[index]
    assert references == [one.idnum for one in list(tree)[1::2]]
    for name, one in zip(names, found, strict=True):
        data = package.files[name]
        assert (one["/Type"], one["/F"], one["/UF"]) == ("/Filespec", name, name)
        assert one["/AFRelationship"] == ("/Data" if name == "values.json" else "/Source")
        stream = one["/EF"]["/F"]  # type: ignore[index]
        assert isinstance(stream, StreamObject) and stream is one["/EF"]["/UF"]  # type: ignore[index]
        assert stream["/Type"] == "/EmbeddedFile" and stream["/Filter"] == "/FlateDecode"
        ending = name.rpartition(".")[2]
        assert (
            stream["/Subtype"] == {"yaml": "/application/yaml", "csv": "/text/csv", "json": "/application/json"}[ending]
        )
        params = stream["/Params"]
        assert set(params) == {"/Size", "/CheckSum"}, "no dates: none is known without a clock"
        assert (params["/Size"], bytes(params["/CheckSum"].original_bytes)) == (len(data), hashlib.md5(data).digest())
        assert stream.get_data() == data


def test_the_same_files_give_the_same_bytes_and_without_them_the_same_sheets(package: Package, bare: Package) -> None:
    assert _package(True).data == package.data != bare.data
    whole, without = (pypdf.PdfReader(BytesIO(one.data)) for one in (package, bare))
    assert without.attachments == {} and "/AF" not in without.trailer["/Root"]  # type: ignore[operator]
    for one, other in zip(whole.pages, without.pages, strict=True):
        assert one.get_contents().get_data() == other.get_contents().get_data()  # type: ignore[union-attr]
    assert bare.files == package.files


def test_files_cost_less_than_a_quarter_of_the_package(package: Package, bare: Package) -> None:
    assert len(package.data) - len(bare.data) < 0.25 * len(bare.data)
    # and less than a third of what they are
    assert len(package.data) - len(bare.data) < sum(map(len, package.files.values())) / 3


def test_names_of_any_letters_are_found_again() -> None:
    files = tuple(
        Attachment(name, name.encode(), "Source", "text/csv") for name in ("b (1).csv", "Ø\\é.csv", "a.csv", "梁.csv")
    )
    data = write_pdf(PAGES, installed_fonts().files, files)
    assert {k: v[0] for k, v in pypdf.PdfReader(BytesIO(data)).attachments.items()} == {f.name: f.data for f in files}


def test_the_command_leaves_them_out(tmp_path: Path) -> None:
    make(tmp_path)
    assert run("build", str(tmp_path), "--no-attachments").code == 0
    assert pypdf.PdfReader(tmp_path / "project.pdf").attachments == {}
    assert run("build", str(tmp_path)).code == 0
    found = pypdf.PdfReader(tmp_path / "project.pdf").attachments
    # a local template stands among the templates by the name the project gives it
    assert {"inputs/project.yaml", "templates/trial.yaml", "values.json"} <= found.keys()
    assert found["templates/trial.yaml"] == [(tmp_path / "trial.yaml").read_bytes()]
    assert run("sampler", str(tmp_path), "-o", str(tmp_path / "s.pdf")).code == 0
    assert pypdf.PdfReader(tmp_path / "s.pdf").attachments == {}
