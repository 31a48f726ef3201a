"""What a package carries is what it was made from: the same bytes come out of the files taken from the PDF."""

from __future__ import annotations

from io import BytesIO
from pathlib import Path

import pypdf
import pytest

from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder
from calcreport.history.frozen import Frozen, stated
from calcreport.publish import build

SAMPLES = Path(__file__).parents[2] / "samples"


def carried(data: bytes) -> dict[str, bytes]:
    """Return the files inside a PDF, read by a library that is not ours."""
    return {name: found[0] for name, found in pypdf.PdfReader(BytesIO(data)).attachments.items()}


#: a sample with an include and a template beside it, one with tables, one of rows alone
@pytest.mark.parametrize("sample", ["mill-lane", "canal-shelter", "long-floor"])
def test_a_package_is_made_again_from_the_files_inside_it(sample: str) -> None:
    folder = SAMPLES / sample
    disk = Disk(folder, library_folder())
    source = disk.project_text("project.yaml")
    assert isinstance(source, Source)
    first = build(disk, source).data
    frozen = Frozen(carried(first))
    project = frozen.project()
    assert isinstance(project, Source)
    assert build(frozen, project).data == first
    # inputs are carried as they stand in the folder, templates as they stand in the library or beside the project
    for name, data in frozen.files.items():
        kind, _, path = name.partition("/")
        places = {"inputs": [folder], "templates": [library_folder(), folder]}.get(kind, [])
        assert not places or data in [(place / path).read_bytes() for place in places if (place / path).exists()]


def test_nothing_is_looked_for_outside_the_files_given() -> None:
    frozen = Frozen(
        {"inputs/a.yaml": b"a", "templates/x/y.yaml": b"\xef\xbb\xbfone\r\ntwo", "templates/z.csv": b"\xff"}
    )
    assert frozen.template_names() == ("x/y",)
    found = frozen.template_text("x/y.yaml")
    assert isinstance(found, Source) and (found.name, found.text) == ("templates/x/y.yaml", "one\ntwo")
    assert frozen.template_text("statics/simple-beam.yaml") == frozen.project_bytes("b.yaml") == "no such file"
    assert frozen.template_text("z.csv") == "it is not UTF-8 text: see line 1"
    assert isinstance(frozen.project_text("sub/../a.yaml"), Source)
    assert frozen.project_text("/etc/hostname") == frozen.project_text("../templates/x/y.yaml") == "no such file"


@pytest.mark.parametrize("values", [b"", b"[", b"[" * 100_000, b"\xff", b"7", b"{}", b'{"project": 1}'])
def test_values_that_say_nothing(values: bytes) -> None:
    assert stated({"values.json": values}) == {}
    assert Frozen({"values.json": values}).project() == "values.json names no project file"
