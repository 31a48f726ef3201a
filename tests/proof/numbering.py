"""Sheet numbers, index, bookmarks, page labels and links: one name for each sheet, wherever it stands.

In: a `Package`. Out: findings.
"""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from collections.abc import Iterator
from functools import partial
from typing import Any

from .account import Finding
from .package import Package, Page
from .sampler import mark_of
from .source_lane import source_numbers
from .statements import NumberedLine


def numbering(package: Package) -> list[Finding]:
    """Return what is wrong with names of sheets and with what leads to them."""
    return [
        *_names(package),
        *_index(package),
        *_bookmarks(package),
        *_links_lead(package),
        *_links_there(package),
    ]


def _names(package: Package) -> Iterator[Finding]:
    """The printed sheet number is the page label, and there is one of each."""
    names = Counter(page.name for page in package.pages)
    for page in package.pages:
        if page.name != page.label:
            yield Finding("sheet number is page label", page.name, 0, f"label {page.label!r}")
        if names[page.name] > 1:
            yield Finding("sheet numbers are unique", page.name, 0, f"stands on {names[page.name]} sheets")
    groups: dict[str, list[Page]] = defaultdict(list)
    for page in package.pages:
        groups[page.name.rpartition("-")[0] or page.name].append(page)
    for stem, pages in groups.items():
        for place, page in enumerate(pages, start=1):
            lone = page.name == stem and place == 1
            if not lone and (page.name != f"{stem}-{place}" or f"of {len(pages)}" not in page.text):
                yield Finding("sheets are counted", page.name, 0, f"sheet {place} of {len(pages)}")


def index_rows(package: Package) -> Iterator[tuple[Page, list[str], dict[str, str]]]:
    """Yield the rows of the index: page, cells, and cells by the head of their column."""
    for page in package.pages:
        if page.name.startswith("INDEX"):
            for table in page.tables:
                for row in table.rows:
                    yield page, row, dict(zip((c.name for c in table.columns), row, strict=True))


def _index(package: Package) -> Iterator[Finding]:
    """Every sheet stands in the index once, with its mark and its page."""
    at = {page.name: page.index for page in package.pages}
    listed: Counter[str] = Counter()
    for page, row, cells in index_rows(package):
        first, _, last = _sheets(cells).partition(" to ")
        names = _range(first, last)
        listed.update(names)
        for name in names:
            if name not in at:
                yield Finding("index names sheets that are there", page.name, 0, f"{name} in {row}")
        if first in at and cells.get("Page", "") != str(at[first] + 1):
            yield Finding(
                "index gives the page",
                page.name,
                0,
                f"{first} is page {at[first] + 1}, printed {cells.get('Page')}",
            )
    if not listed:
        yield Finding("index names every sheet", "INDEX", 0, "no index could be read")
    for name in at:
        if listed[name] != 1:
            yield Finding("index names every sheet", name, 0, f"stands {listed[name]} times in the index")


def _sheets(cells: dict[str, str]) -> str:
    """Return the sheets of an index row; an NG has no column of its own."""
    return re.sub(r"\bNG\b ?", "", cells.get("Sheets", ""))


def _range(first: str, last: str) -> list[str]:
    if not last:
        return [first] if first else []
    stem, _, low = first.rpartition("-")
    high = last.rpartition("-")[2]
    return (
        [f"{stem}-{n}" for n in range(int(low), int(high) + 1)] if low.isdigit() and high.isdigit() else [first, last]
    )


def _bookmarks(package: Package) -> Iterator[Finding]:
    """Every sheet has one bookmark of its number, which leads to it; those above lead to their first sheet."""
    seen: Counter[str] = Counter()
    groups: list[tuple[str, int]] = []

    def walk(items: Any, depth: int) -> Iterator[Finding]:
        for item in items:
            if isinstance(item, list):
                yield from walk(item, depth + 1)
                continue
            at = package.reader.get_destination_page_number(item)
            if depth == 0:
                groups.append((item.title, at or 0))
                continue
            seen[item.title] += 1
            if at is None or package.pages[at].name != item.title:
                yield Finding("bookmark leads to its sheet", item.title, 0, f"leads to page {at}")

    yield from walk(package.reader.outline, 0)
    for page in package.pages:
        if seen[page.name] != 1:
            yield Finding("every sheet has a bookmark", page.name, 0, f"has {seen[page.name]}")
    for title, at in groups:
        stem = package.pages[at].name.rpartition("-")[0] or package.pages[at].name
        if not re.match(rf"{re.escape(stem)}\b", title):
            yield Finding("bookmarks name the mark", package.pages[at].name, 0, title)


def lines_by_number(package: Package) -> dict[tuple[str, int], tuple[int, float, NumberedLine]]:
    """Return page, height and line by mark and line number."""
    found = {}
    for calculation in package.calculations:
        for line in calculation.lines:
            found[calculation.mark, line.number] = (line.page, line.y, line)
    return found


def _links_lead(package: Package) -> Iterator[Finding]:
    """Links in index, summary and source lane lead to the sheet and line they name."""
    lines = lines_by_number(package)
    at = {page.name: page.index for page in package.pages}
    sampled = {sheet.index: partial(mark_of, package, sheet) for sheet in package.sampler}
    for page in package.pages:
        stem = page.name.rpartition("-")[0]
        for link in page.links:
            text = link.text
            line = re.fullmatch(r"(?:(\S+?)(?:-\d+,)? )?(?:line )?(\d+)", text)
            if line and not page.name.startswith("INDEX"):
                mark = line[1] or (sampled[page.index](link.y) if page.index in sampled else stem)
                aim = lines.get((mark, int(line[2])))
                if aim is None:
                    yield Finding(
                        "links lead to lines that are there",
                        page.name,
                        0,
                        f"{text!r}: no line {mark} {line[2]}",
                    )
                elif aim[0] != link.page or (link.top is not None and not -8 < link.top - aim[1] < 40):
                    yield Finding(
                        "links lead to what they name",
                        page.name,
                        0,
                        f"{text!r} leads to {package.pages[link.page].name}",
                    )
            elif text in at:
                if at[text] != link.page:
                    yield Finding(
                        "links lead to what they name",
                        page.name,
                        0,
                        f"{text!r} leads to {package.pages[link.page].name}",
                    )
            elif not text:
                yield Finding("links stand on text", page.name, 0, f"an empty link at {link.x:.0f}, {link.y:.0f}")


def _links_there(package: Package) -> Iterator[Finding]:
    """Index entries, and line numbers in the source lane, are links."""
    at = {page.name: page.index for page in package.pages}
    for page, row, cells in index_rows(package):
        first = _sheets(cells).partition(" to ")[0]
        if first in at and not any(link.text.startswith(first) and link.page == at[first] for link in page.links):
            yield Finding("index entries are links", page.name, 0, " ".join(row))
    for calculation in package.calculations:
        for line_ in calculation.lines:
            linked = {link.text for link in package.pages[line_.page].links}
            for word in source_numbers(line_):
                if str(word) not in linked:
                    yield Finding(
                        "source lane numbers are links",
                        calculation.sheet(line_.page),
                        line_.number,
                        str(word),
                    )
