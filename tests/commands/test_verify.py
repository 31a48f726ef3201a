"""`calcreport verify`: each alteration of a package, one at a time, is named; what cannot be told is said.

What is altered is known here, so what must be named needs no other source.
"""

from __future__ import annotations

import json
import re
import shutil
from collections.abc import Callable
from io import BytesIO
from pathlib import Path
from typing import Any

import pypdf
import pytest
from pypdf.generic import ArrayObject, DictionaryObject, NameObject, NumberObject, TextStringObject

from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder
from calcreport.publish import Sampling, build
from tests.commands.desk import Ran, run

SAMPLES = Path(__file__).parents[2] / "samples"
BEAM = SAMPLES / "short-beam"


def made(folder: Path, library: Path | None = None, second: bool = False, sampled: Sampling = "no",
         status: str = "") -> bytes:  # fmt: skip
    disk = Disk(folder, library or library_folder())
    source = disk.project_text("project.yaml")
    assert isinstance(source, Source)
    package = build(disk, source, second=second, sampled=sampled, status=status)
    assert not package.problems
    return package.data


@pytest.fixture(scope="module")
def plain() -> bytes:
    return made(BEAM)


def changed(data: bytes, change: Callable[[pypdf.PdfWriter], None]) -> bytes:
    """Return a package after a change, as another program writes it."""
    writer = pypdf.PdfWriter(clone_from=BytesIO(data))
    change(writer)
    out = BytesIO()
    writer.write(out)
    return out.getvalue()


def attached(writer: pypdf.PdfWriter, name: str) -> Any:
    names = writer.root_object["/Names"]["/EmbeddedFiles"]["/Names"]
    found = next(spec.get_object() for key, spec in zip(names[::2], names[1::2], strict=True) if key == name)
    return found["/EF"]["/F"].get_object()


def replaced(data: bytes, name: str, old: str, new: str) -> bytes:
    """Return a package with other text in an attached file, and nothing else changed."""

    def change(writer: pypdf.PdfWriter) -> None:
        stream = attached(writer, name)
        text = stream.get_data().decode()
        assert text.count(old) == 1, f"{old!r} stands {text.count(old)} times"
        stream.set_data(text.replace(old, new).encode())

    return changed(data, change)


def glyphs(page: Any, text: str) -> list[str]:
    """Return how a text may be drawn by each font of a page: its glyphs in hexadecimal."""
    found = []
    for font in page["/Resources"]["/Font"].values():
        pairs = re.findall(rb"<([0-9A-F]{4})> <([0-9A-F]{4})>", font["/ToUnicode"].get_object().get_data())
        by_letter = {chr(int(letter, 16)): glyph.decode() for glyph, letter in pairs}
        if all(letter in by_letter for letter in text):
            found.append("".join(by_letter[letter] for letter in text))
    return found


def reprinted(data: bytes, label: str, old: str, new: str) -> bytes:
    """Return a package that prints another number on one sheet, at the first place where it prints `old`."""
    place = pypdf.PdfReader(BytesIO(data)).page_labels.index(label)

    def change(writer: pypdf.PdfWriter) -> None:
        page = writer.pages[place]
        for one, other in zip(glyphs(page, old), glyphs(page, new), strict=True):
            for reference in page["/Contents"]:
                stream = reference.get_object()
                drawn = stream.get_data()
                if one.encode() in drawn:
                    stream.set_data(drawn.replace(one.encode(), other.encode(), 1))
                    return
        raise AssertionError(f"{old} is not printed in one piece")

    return changed(data, change)


def verified(folder: Path, data: bytes, *more: str) -> Ran:
    (folder / "package.pdf").write_bytes(data)
    return run("verify", str(folder / "package.pdf"), *more)


def findings(folder: Path, data: bytes) -> dict[str, list[dict[str, str]]]:
    """Return the findings by thing."""
    ran = verified(folder, data, "--json")
    told = json.loads(ran.out)
    assert ran.code == (0 if told["match"] else 1)
    found: dict[str, list[dict[str, str]]] = {}
    for one in told["findings"]:
        found.setdefault(one["thing"], []).append(one)
    return found


@pytest.mark.parametrize(
    ("sample", "second", "sampled", "status"),
    [
        ("short-beam", False, "no", ""), ("short-beam", True, "added", ""), ("short-beam", False, "no", "superseded"),
        ("mill-lane", False, "no", ""), ("canal-shelter", False, "no", ""),
    ],
)  # fmt: skip
def test_a_package_as_it_was_made(tmp_path: Path, sample: str, second: bool, sampled: Sampling, status: str) -> None:
    ran = verified(tmp_path, made(SAMPLES / sample, None, second, sampled, status))
    assert ran.code == 0, ran.out + ran.err
    assert "match: " in ran.out and "the same byte for byte" in ran.out
    assert "Only a digital signature" in ran.out and "belong together" in ran.out


def test_a_copy_written_by_another_program(tmp_path: Path, plain: bytes) -> None:
    ran = verified(tmp_path, changed(plain, lambda writer: None))
    assert ran.code == 0 and "match: " in ran.out and "byte for byte" not in ran.out


def test_an_attached_input(tmp_path: Path, plain: bytes) -> None:
    # the beam of 10 in. by 18 in. carries 80 psf and 125 psf over 8 ft
    found = findings(tmp_path, replaced(plain, "inputs/project.yaml", "q_L: {value: 125 psf", "q_L: {value: 100 psf"))
    inputs = {one["where"]: one for one in found["input"]}
    assert list(inputs) == ["FL1.q_L", "A-1, the echo of the input files"]
    assert (inputs["FL1.q_L"]["found"], inputs["FL1.q_L"]["made"]) == ("125 psf", "100 psf")
    echoed = inputs["A-1, the echo of the input files"]
    assert (echoed["found"], echoed["made"]) == ("125", "100")
    assert {"FL1.M_u", "B1.M_u", "B1.flexure"} <= {one["where"] for one in found["number"]}
    assert "template" not in found
    ran = verified(tmp_path, (tmp_path / "package.pdf").read_bytes())
    assert "an input or a template was changed" in ran.out


def test_words_of_an_input_that_no_number_rests_on(tmp_path: Path, plain: bytes) -> None:
    found = findings(tmp_path, replaced(plain, "inputs/project.yaml", "stock room in place", "archive in place"))
    assert "template" not in found
    assert any(one["where"].startswith("A-1, the echo") and one["made"] == "archive" for one in found["input"])


def test_an_attached_value(tmp_path: Path, plain: bytes) -> None:
    found = findings(tmp_path, replaced(plain, "values.json", '"ratio": 1.0503975501009932', '"ratio": 0.95'))
    assert list(found) == ["number"] and len(found["number"]) == 1
    one = found["number"][0]
    assert (one["where"], one["found"]) == ("B1.flexure", "0.95") and one["made"].startswith("1.0503975501")
    ran = verified(tmp_path, (tmp_path / "package.pdf").read_bytes())
    assert ran.code == 1 and "The sheets are what the files inside give; values.json is not." in ran.out


@pytest.mark.parametrize(
    ("old", "new", "where"),
    [
        ('"path": "l", "gives": "l", "value": 16.0', '"path": "l", "gives": "l", "value": 15.0', "FL1.l"),
        ('"format": 2', '"format": 2, "format": 2', "values.json"),
        ('"format": 2', '"format":  2', "values.json"),
        ('"format": 2', '"format": NaN', "values.json format"),
        ('"title": "Stock room beam, midspan"', '"title": "Stock room beam"', "B1 title"),
        ("}}\n", "", "values.json"),
    ],
)
def test_other_things_in_the_values(tmp_path: Path, plain: bytes, old: str, new: str, where: str) -> None:
    ran = verified(tmp_path, replaced(plain, "values.json", old, new), "--json")
    if "findings" not in ran.out:
        assert ran.code == 2 and "names no project file" in ran.out
        return
    assert ran.code == 1 and where in [one["where"] for one in json.loads(ran.out)["findings"]]


def test_values_to_the_last_digit_of_another_machine(tmp_path: Path, plain: bytes) -> None:
    # one part in 10^16 of the ratio: two machines may part by that
    data = replaced(plain, "values.json", '"ratio": 1.0503975501009932', '"ratio": 1.0503975501009934')
    assert verified(tmp_path, data).code == 0


def test_a_printed_number(tmp_path: Path, plain: bytes) -> None:
    # the sheet of the beam prints the ratio of its flexure, 1.050
    label = "B1-1"
    found = findings(tmp_path, reprinted(plain, label, "1.050", "0.950"))
    assert list(found) == ["sheet"], found
    assert all(one["where"] == label for one in found["sheet"])
    assert any("0.950" in one["found"] and "1.050" in one["made"] for one in found["sheet"])
    ran = verified(tmp_path, (tmp_path / "package.pdf").read_bytes())
    assert ran.code == 1 and "The values are what the files inside give; the sheets are not." in ran.out


def forged_library(folder: Path) -> Path:
    """Return a library in which flexure is resisted with 0.95 in place of 0.90."""
    shutil.copytree(library_folder(), folder / "library")
    path = folder / "library" / "aci318" / "phi-tied.yaml"
    text = path.read_text(encoding="utf-8")
    assert "'0.90'" in text
    path.write_text(text.replace("'0.90'", "'0.95'"), encoding="utf-8")
    return folder / "library"


def test_a_template_forged_with_all_that_rests_on_it(tmp_path: Path) -> None:
    found = findings(tmp_path, made(BEAM, forged_library(tmp_path)))
    assert [(one["thing"], one["where"]) for ones in found.values() for one in ones] == [
        ("template", "templates/aci318/phi-tied.yaml"),
    ]  # fmt: skip
    ran = verified(tmp_path, (tmp_path / "package.pdf").read_bytes())
    assert "Inputs, values and sheets agree; a template is not the library's." in ran.out


def test_a_template_alone(tmp_path: Path, plain: bytes) -> None:
    found = findings(tmp_path, replaced(plain, "templates/aci318/phi-tied.yaml", "'0.90'", "'0.95'"))
    assert [one["where"] for one in found["template"]] == ["templates/aci318/phi-tied.yaml"]
    assert {"B1.phi", "B1.phiM_n", "B1.flexure"} <= {one["where"] for one in found["number"]}
    assert "input" not in found and found["sheet"]


def test_a_template_of_the_project_is_named_as_held_against_nothing(tmp_path: Path) -> None:
    ran = verified(tmp_path, made(SAMPLES / "mill-lane"))
    assert "a template of the project itself, held against nothing: beam-seat.yaml" in ran.out


def test_a_forgery_of_all_inputs_agrees_with_itself_and_is_said_to(tmp_path: Path) -> None:
    shutil.copytree(BEAM, tmp_path / "beam")
    path = tmp_path / "beam" / "project.yaml"
    path.write_text(path.read_text(encoding="utf-8").replace("value: 125 psf", "value: 100 psf"), encoding="utf-8")
    ran = verified(tmp_path, made(tmp_path / "beam"))
    assert ran.code == 0 and "a forgery that is consistent agrees with itself" in ran.out


def test_sheets_missing_moved_or_more(tmp_path: Path, plain: bytes) -> None:
    def without(writer: pypdf.PdfWriter) -> None:
        pages = writer.root_object["/Pages"]
        pages["/Kids"].pop(2)
        pages[NameObject("/Count")] = NumberObject(len(pages["/Kids"]))
        labels = writer.root_object["/PageLabels"]["/Nums"]
        keep = [one for place, one in enumerate(labels[1::2]) if place != 2]
        labels[:] = [item for place, one in enumerate(keep) for item in (NumberObject(place), one)]

    found = findings(tmp_path, changed(plain, without))
    assert [one["words"] for one in found["sheet"] if one["where"] == "CRITERIA-1"] == ["is missing from the file"]
    found = findings(tmp_path, changed(plain, lambda writer: writer.add_blank_page() and None))
    assert any("does not come out again" in one["words"] for one in found["sheet"])


def laid_over(writer: pypdf.PdfWriter, **entries: Any) -> None:
    note = DictionaryObject({NameObject("/Type"): NameObject("/Annot"),
                             **{NameObject("/" + key): value for key, value in entries.items()}})  # fmt: skip
    page = writer.pages[0]
    page[NameObject("/Annots")] = ArrayObject([*page.get("/Annots", []), writer._add_object(note)])


def test_what_is_laid_over_a_sheet_and_what_the_file_does(tmp_path: Path, plain: bytes) -> None:
    note = {"Subtype": NameObject("/FreeText"), "Contents": TextStringObject("OK")}
    found = findings(tmp_path, changed(plain, lambda writer: laid_over(writer, **note)))
    assert [one["words"] for one in found["sheet"]] == ["something is laid over it: FreeText"]

    def script(writer: pypdf.PdfWriter) -> None:
        act = DictionaryObject({NameObject("/S"): NameObject("/JavaScript"), NameObject("/JS"): TextStringObject("x")})
        writer.root_object[NameObject("/OpenAction")] = act

    found = findings(tmp_path, changed(plain, script))
    assert [one["where"] for one in found["file"]] == ["/OpenAction"]


def test_a_signature_is_no_difference_and_not_looked_into(tmp_path: Path, plain: bytes) -> None:
    field = {"Subtype": NameObject("/Widget"), "FT": NameObject("/Sig"), "T": TextStringObject("s")}
    ran = verified(tmp_path, changed(plain, lambda writer: laid_over(writer, **field)))
    assert ran.code == 0, ran.out
    assert "1 signature in the file, not looked into; what a signature draws is not compared" in ran.out


def test_files_that_nothing_reads(tmp_path: Path, plain: bytes) -> None:
    found = findings(tmp_path, changed(plain, lambda writer: writer.add_attachment("inputs/more.yaml", b"x") and None))
    assert [(one["where"], "nothing" in one["words"]) for one in found["file"]] == [("inputs/more.yaml", True)]
    other = changed(plain, lambda writer: writer.add_attachment("letter.txt", b"x") and None)
    assert verified(tmp_path, other).code == 0, "files of others are no part of the package"


def test_what_cannot_be_worked_again(tmp_path: Path, plain: bytes) -> None:
    broken = replaced(plain, "inputs/project.yaml", "q_L: {value: 125 psf", "q_L: {value: 125")
    ran = verified(tmp_path, broken)
    assert ran.code == 2 and re.search(r"package\.pdf/(inputs/)?project\.yaml:37:\d+: error\[bare-number\]", ran.err), (
        ran.err
    )
    bare = changed(plain, lambda writer: writer.root_object["/Names"].pop("/EmbeddedFiles") and None)
    for data, said in ((bare, "does not carry its inputs and values"), (b"%PDF-1.7 ", "is not read as a package"),
                       (b"x: 1", "a file that is no PDF")):  # fmt: skip
        ran = verified(tmp_path, data)
        assert ran.code == 2 and "error[not-a-package]" in ran.err and said in ran.err
    assert run("verify", str(tmp_path / "none.pdf")).code == 2
    assert run("verify", str(tmp_path)).code == 2
