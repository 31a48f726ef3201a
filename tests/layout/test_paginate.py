"""The whole package: labels, counts, frames, bookmarks, links, on both papers."""

from __future__ import annotations

import re
from dataclasses import replace

import pytest
import specimen
from inked import clashes, inked, texts

from calcreport.layout.fonts import Fonts
from calcreport.layout.model import Anchor, Link, Pages
from calcreport.layout.paginate import lay_out
from calcreport.layout.pieces import flat
from calcreport.layout.sheet import sheet_of
from calcreport.report.model import Index, IndexEntry


def test_sheet_labels_are_unique_and_numbered_inside_their_part(package: Pages) -> None:
    labels = [page.label for page in package.pages]
    assert len(set(labels)) == len(labels)
    assert labels[:4] == ["COVER", "INDEX-1", "SUMMARY-1", "B1-1"]
    for page in package.pages[1:]:
        assert page.label == f"{page.part}-{page.number}"
        assert page.number <= page.count == sum(other.part == page.part for other in package.pages)


def test_flexure_at_one_place_fits_one_sheet(package: Pages) -> None:
    assert [page.count for page in package.pages if page.part == "B1"] == [1]


def test_no_ink_outside_the_frame_but_the_revision_deltas(package: Pages, fonts: Fonts) -> None:
    sheet = sheet_of("letter" if package.width == 612 else "a4")
    assert (package.width, package.height) == (sheet.width, sheet.height)
    for page in package.pages:
        for ink in inked((*page.body, *page.title_block), fonts):
            if ink.right < sheet.left - 2.0:
                assert ink.left > 28.0  # a delta in the punching margin, well on the paper
                continue
            assert sheet.left - 1.1 <= ink.left and ink.right <= sheet.right + 1.1
            assert sheet.top - 1.1 <= ink.top and ink.foot <= sheet.foot + 1.1


def test_no_letters_overlap_and_none_is_under_six_points(package: Pages, fonts: Fonts) -> None:
    for page in package.pages:
        inks = inked((*page.body, *page.title_block), fonts)
        assert clashes(inks) == []
        words = [ink.size for ink in inks if re.search("[A-Za-z]{4}", ink.text)]
        assert min(words) >= 6.0


def test_every_sheet_shows_its_number_and_the_count_of_its_part(package: Pages) -> None:
    for page in package.pages[1:]:
        assert texts(page.title_block).endswith(f"{page.label}of{page.count}")
    assert texts(package.pages[0].body).endswith("COVER")


def test_a_failing_calculation_says_so_on_each_of_its_sheets(package: Pages) -> None:
    sheets = [page for page in package.pages if page.part == "B14"]
    assert len(sheets) > 1
    assert all(texts(page.body).startswith("1CHECKNGINTHISCALCULATION") for page in sheets)


def test_bookmarks_name_every_part_and_every_sheet(package: Pages) -> None:
    targets = [mark.target for mark in package.bookmarks if mark.level == 1]
    assert targets == [page.label for page in package.pages]
    parts = [mark.title for mark in package.bookmarks if mark.level == 0]
    assert parts[3] == "B1  Level 2 beam on grid B, 2 to 4"  # the mark is not said twice
    assert parts[-1] == "A  Input echo"


def test_every_link_leads_to_an_anchor_or_a_sheet(package: Pages) -> None:
    items = [item for page in package.pages for item in flat((*page.body, *page.title_block))]
    anchors = [item.name for item in items if isinstance(item, Anchor)]
    assert len(set(anchors)) == len(anchors)
    known = {*anchors, *(page.label for page in package.pages)}
    targets = {item.target for item in items if isinstance(item, Link)}
    assert targets - known == set()
    assert {"B14.13", "B1.18", "B14-1"} <= targets


def test_the_index_names_sheets_and_pages_and_the_cover_counts_them(package: Pages) -> None:
    labels = [page.label for page in package.pages]
    index = texts(package.pages[1].body)
    last = max(page.number for page in package.pages if page.part == "B14")
    assert f"B14-1toB14-{last}" in index
    assert index.endswith(f"{labels.index('A-1') + 1}")  # the last entry is the appendix, with its page
    assert f"SHEETSINPACKAGE{len(labels)}" in texts(package.pages[0].body)


def test_an_index_that_grows_moves_only_the_pages_behind_it(fonts: Fonts) -> None:
    entries = tuple(IndexEntry(f"C{n}", "A column on some grid", "B1", "", "1", "2 Nov 2026") for n in range(120))
    base = specimen.report()
    parts = tuple(replace(part, index=Index(entries)) if part.index else part for part in base.parts)
    pages = lay_out(replace(base, parts=parts), fonts)
    labels = [page.label for page in pages.pages]
    count = sum(label.startswith("INDEX") for label in labels)
    assert count > 1
    assert texts(pages.pages[1].body).count(f"Nov2026{labels.index('B1-1') + 1}") > 20
    assert [label for label in labels if label.startswith("B")] == [
        page.label for page in lay_out(base, fonts).pages if page.label.startswith("B")
    ]


def test_two_parts_of_one_mark_are_refused(fonts: Fonts) -> None:
    base = specimen.report()
    with pytest.raises(ValueError, match="two parts of one mark"):
        lay_out(replace(base, parts=(*base.parts, base.parts[-1])), fonts)


def test_the_same_report_gives_the_same_pages(letter: Pages, fonts: Fonts) -> None:
    assert lay_out(specimen.report(), fonts) == letter


def test_a_long_list_of_members_goes_on_a_second_cover_sheet(fonts: Fonts) -> None:
    labels = [page.label for page in lay_out(specimen.report(members=90), fonts).pages]
    assert labels[:3] == ["COVER", "COVER-2", "INDEX-1"]
