"""What each status says on cover and title blocks, and that it says it nowhere else.

Texts are written out here by hand from what is asked of them: status on every sheet, what an issue that is not final is
not for, superseded and void loud on every sheet. Bodies are compared as decoded content, the title block cut out.
"""

from __future__ import annotations

import re
from functools import cache
from itertools import pairwise
from pathlib import Path
from tempfile import TemporaryDirectory

import pypdf
import pytest

from calcreport.commands.desk import Opened, open_project
from calcreport.layout.cover import SEAL
from calcreport.layout.fonts import Fonts, installed_fonts
from calcreport.layout.model import Run, Stroke
from calcreport.layout.paginate import lay_out
from calcreport.layout.pieces import flat
from calcreport.layout.sheet import sheet_of
from calcreport.publish import report
from calcreport.read.project import STATUSES
from calcreport.report.statuses import STATUS_TEXTS
from tests.commands.desk import PROJECT, make, run

#: what must stand on every title block and on the cover
NOT_FOR = {
    "preliminary": ("not for permit", "not for construction"),
    "for review": ("not for permit", "not for construction"),
    "for permit": ("not for construction",),
    "issued for construction": ("only as sealed, signed and dated",),
    "superseded": ("replaced by a later issue", "not for use"),
    "void": ("withdrawn", "not for use"),
}
#: how the cover's first caution begins
CAUTION = {
    "preliminary": "Preliminary: given values, members and results may still change.",
    "for review": "For review: issued for comment.",
    "for permit": "For permit: submitted to the authority having jurisdiction.",
    "issued for construction": "Issued for construction: the drawings govern.",
    "superseded": "Superseded: a later issue has replaced this one.",
    "void": "Void: withdrawn",
}
LOUD = {"superseded": "SUPERSEDED: REPLACED BY A LATER ISSUE, NOT FOR USE", "void": "VOID: WITHDRAWN, NOT FOR USE"}


@cache
def package(status: str) -> tuple[tuple[str, str, bytes, bytes], ...]:
    """Return label, text, decoded body and decoded title block of every sheet under a status."""
    with TemporaryDirectory() as name:
        folder = make(Path(name), PROJECT.replace("status: preliminary", f"status: {status}"))
        assert run("build", name).code == 0
        reader = pypdf.PdfReader(folder / "project.pdf")
        found = []
        for label, page in zip(reader.page_labels, reader.pages, strict=True):
            contents = page["/Contents"]
            assert isinstance(contents, pypdf.generic.ArrayObject)
            body, block = (stream.get_object().get_data() for stream in contents)
            found.append((label, page.extract_text(), body, block))
        return tuple(found)


def joined(text: str) -> str:
    return re.sub(r"\s", "", text)


def test_every_status_has_its_texts() -> None:
    assert tuple(STATUS_TEXTS) == STATUSES == tuple(NOT_FOR)
    for texts in STATUS_TEXTS.values():
        said = " ".join((texts.note, texts.caution, texts.seal_words, texts.banner))
        assert not re.search(r"\b(certified|approved|checked|compliant|safe)\b", said, re.I)


@pytest.mark.parametrize("status", STATUSES)
def test_every_sheet_says_its_status(status: str) -> None:
    for label, text, _, _ in package(status):
        assert joined(status.upper()) in joined(text), label
        for words in NOT_FOR[status]:
            assert joined(words) in joined(text), label


@pytest.mark.parametrize("status", STATUSES)
def test_the_cover_says_what_it_means(status: str) -> None:
    cover = joined(package(status)[0][1])
    assert joined(CAUTION[status]) in cover
    assert joined("Not final unless sealed, signed and dated by the engineer in responsible charge.") in cover
    if status in ("preliminary", "for review", "for permit"):
        assert joined("until the status changes") in cover


@pytest.mark.parametrize("status", STATUSES)
def test_only_what_is_out_of_use_is_loud_and_then_on_every_sheet(status: str) -> None:
    for label, text, _, _ in package(status):
        for other, words in LOUD.items():
            assert (joined(words) in joined(text)) is (other == status), label


@pytest.mark.parametrize("status", STATUSES)
def test_a_status_leaves_the_body_of_every_calculation_as_it_is(status: str) -> None:
    """All but the cover, which says it, and the echo of the project file, which holds it."""
    plain = package("for review")
    changed = package(status)
    assert [label for label, *_ in plain] == [label for label, *_ in changed]
    differing = {a[0] for a, b in zip(plain, changed, strict=True) if a[2] != b[2]}
    assert differing == (set() if status == "for review" else {"COVER", "A-1"})
    if status != "for review":
        assert all(a[3] != b[3] for a, b in zip(plain, changed, strict=True) if a[0] != "COVER")


def test_a_changed_value_is_no_change_of_status(tmp_path: Path) -> None:
    """So that the comparison above can fail: the calculation's body does change with its input."""
    make(tmp_path, PROJECT.replace("3 in", "2.5 in"))
    assert run("build", str(tmp_path)).code == 0
    reader = pypdf.PdfReader(tmp_path / "project.pdf")
    place = reader.page_labels.index("T1-1")
    contents = reader.pages[place]["/Contents"]
    assert isinstance(contents, pypdf.generic.ArrayObject)
    before = {label: body for label, _, body, _ in package("preliminary")}
    assert contents[0].get_object().get_data() != before["T1-1"]


def test_a_frozen_issue_marked_superseded_keeps_every_body(tmp_path: Path) -> None:
    """All bodies, the echo too: what is echoed is what was frozen. The cover says it."""
    make(tmp_path)
    assert run("issue", str(tmp_path)).code == 0
    issue = tmp_path / "issues" / "1"
    assert run("build", str(issue), "--superseded", "-o", str(tmp_path / "old.pdf")).code == 0
    readers = [pypdf.PdfReader(path) for path in (issue / "package.pdf", tmp_path / "old.pdf")]
    bodies = []
    for reader in readers:
        contents = [page["/Contents"] for page in reader.pages]
        bodies.append(
            [one[0].get_object().get_data() for one in contents if isinstance(one, pypdf.generic.ArrayObject)]
        )
    labels = readers[0].page_labels
    assert [label for label, a, b in zip(labels, *bodies, strict=True) if a != b] == ["COVER"]
    assert all(joined(LOUD["superseded"]) in joined(page.extract_text()) for page in readers[1].pages)


@pytest.fixture(scope="module")
def fonts() -> Fonts:
    return installed_fonts()


@pytest.mark.parametrize(("status", "strokes"), [("for permit", 0), ("superseded", 1), ("void", 2)])
def test_band_and_strokes(tmp_path: Path, fonts: Fonts, status: str, strokes: int) -> None:
    make(tmp_path, PROJECT.replace("status: preliminary", f"status: {status}"))
    opened = open_project(str(tmp_path))
    assert isinstance(opened, Opened)
    composed = report(opened.world, opened.source).composed
    assert composed is not None
    sheet = sheet_of("letter")
    for page in lay_out(composed.report, fonts).pages:
        items = list(flat(page.title_block))
        slanted = [s for s in items if isinstance(s, Stroke) and not s.closed
                   and abs(s.points[0][0] - s.points[-1][0]) > 400 and abs(s.points[0][1] - s.points[-1][1]) > 400]  # fmt: skip
        assert len(slanted) == (strokes if page.label != "COVER" else 0), page.label
        above = [item for item in items if isinstance(item, Run) and item.y < sheet.top]
        assert bool(above) is (strokes > 0)
        for item in above:
            # well on the paper: printers leave some twelve points white
            assert item.y - 0.7 * item.size > 12.0 and sheet.left < item.x < sheet.right
        assert not [item for item in flat(page.body) if isinstance(item, Run) and item.y < sheet.top]


@pytest.mark.parametrize("status", STATUSES)
def test_the_seal_area_stays_clear(tmp_path: Path, fonts: Fonts, status: str) -> None:
    make(tmp_path, PROJECT.replace("status: preliminary", f"status: {status}"))
    opened = open_project(str(tmp_path))
    assert isinstance(opened, Opened)
    composed = report(opened.world, opened.source).composed
    assert composed is not None
    cover = lay_out(composed.report, fonts).pages[0]
    items = list(flat((*cover.body, *cover.title_block)))
    (square,) = [
        item for item in items
        if isinstance(item, Stroke) and item.closed and item.fill is None
        and abs(item.points[1][0] - item.points[0][0] - SEAL) < 0.01 and abs(item.points[2][1] - item.points[1][1] - SEAL) < 0.01
    ]  # fmt: skip
    (left, top), _, (right, foot), _ = square.points
    for item in items:
        if isinstance(item, Run):
            assert not (left < item.x < right and top < item.y < foot), item.text
        elif isinstance(item, Stroke) and item is not square:
            for (x0, y0), (x1, y1) in pairwise((*item.points, item.points[0]) if item.closed else item.points):
                along = [(x0 + (x1 - x0) * n / 200, y0 + (y1 - y0) * n / 200) for n in range(201)]
                assert not any(left < x < right and top < y < foot for x, y in along)
