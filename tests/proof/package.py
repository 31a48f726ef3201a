"""The package as a file: sheet numbers, index, bookmarks, labels, links, fonts, seal area, words, marks of failure.

In: the path of a PDF. Out: `Package` with its pages read once, and findings about the whole. What a single calculation
claims is judged in `claims`.
"""

from __future__ import annotations

import re
from collections import Counter, defaultdict
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from pypdf import PdfReader

from .calculations import Calculation, assemble
from .claims import Finding
from .glyphs import PageInk, Reader
from .pieces import spaced
from .sheets import Frame, NumberedLine, SheetPage, Statement, find_frame, read_sheet, sheet_name
from .tables import Table, find_tables

FORBIDDEN = re.compile(r"\b(certified|approved|checked|compliant|safe|stamp-ready)\b", re.I)
#: a square of 2.5 in. (submittal rules of several boards; `submittal-practice`, 1.3)
SEAL = 180.0


@dataclass(slots=True)
class Page:
    """One page of the package."""

    index: int
    ink: PageInk
    frame: Frame
    name: str
    label: str
    text: str
    tables: list[Table]
    #: (text inside the area, page index, height) of every link
    links: list[Link]


@dataclass(frozen=True, slots=True)
class Link:
    """A link: the text it stands on, its place, and where it leads."""

    text: str
    x: float
    y: float
    page: int
    top: float | None


@dataclass(slots=True)
class Package:
    """A finished PDF, read once."""

    path: Path
    reader: PdfReader
    pages: list[Page]
    sheets: list[SheetPage]
    calculations: list[Calculation]
    fonts: list[tuple[str, bool]]
    annotations: Counter[str] = field(default_factory=Counter)


def read_package(path: Path) -> Package:
    """Read a package; every page once."""
    reader = PdfReader(path)
    glyphs = Reader()
    numbers = {page.indirect_reference.idnum: i for i, page in enumerate(reader.pages) if page.indirect_reference}
    pages, sheets = [], []
    annotations: Counter[str] = Counter()
    for index, page in enumerate(reader.pages):
        ink = glyphs.read(page)
        frame = find_frame(ink) or Frame(0, ink.width, ink.height, 0, 0, None)
        links = list(_links(page, ink, numbers, annotations))
        sheet = read_sheet(ink, index)
        if sheet is not None:
            sheets.append(sheet)
        body = [g for g in ink.glyphs if g.text != " " and g.y > frame.block]
        tables = [] if sheet is not None else find_tables(body, ink.lines, index)[0]
        label = reader.page_labels[index]
        pages.append(Page(index, ink, frame, sheet_name(ink, frame), label, page_text(ink), tables, links))
    fonts = [(face.name, face.embedded) for face in glyphs.faces]
    return Package(path, reader, pages, sheets, assemble(sheets), fonts, annotations)


def page_text(ink: PageInk) -> str:
    """Return the text of a page by rows, for a search of words."""
    rows: dict[float, list[Any]] = defaultdict(list)
    for glyph in ink.glyphs:
        rows[round(glyph.y, 1)].append(glyph)
    return "\n".join(re.sub(r" +", " ", spaced(rows[y])) for y in sorted(rows, reverse=True))


def _links(page: Any, ink: PageInk, numbers: dict[int, int], kinds: Counter[str]) -> Iterator[Link]:
    for reference in page.get("/Annots", []):
        annotation = reference.get_object()
        kinds[annotation["/Subtype"]] += 1
        if annotation["/Subtype"] != "/Link":
            continue
        x0, y0, x1, y1 = (float(v) for v in annotation["/Rect"])
        inside = [g for g in ink.glyphs if x0 - 0.5 <= (g.left + g.right) / 2 <= x1 + 0.5 and y0 - 0.5 <= g.y <= y1 + 0.5]
        target = annotation.get("/Dest") or annotation["/A"]["/D"]
        top = float(target[3]) if target[1] == "/XYZ" and target[3] is not None else None
        yield Link(spaced(inside).strip(), x0, y0, numbers[target[0].idnum], top)


def examine_package(package: Package) -> list[Finding]:
    """Return all findings about the package as a whole."""
    found: list[Finding] = []
    for examine in (_names, _index, _bookmarks, _links_lead, _file, _seal, _words, _failures, _handed, _title_blocks):
        found += examine(package)
    return found


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
        groups[page.name.rpartition("-")[0]].append(page)
    for stem, pages in groups.items():
        for place, page in enumerate(pages, start=1):
            if stem and (page.name != f"{stem}-{place}" or f"of {len(pages)}" not in page.text):
                yield Finding("sheets are counted", page.name, 0, f"sheet {place} of {len(pages)}")


def _index_rows(package: Package) -> Iterator[tuple[Page, list[str], dict[str, str]]]:
    for page in package.pages:
        if page.name.startswith("INDEX"):
            for table in page.tables:
                for row in table.rows:
                    yield page, row, dict(zip((c.name for c in table.columns), row, strict=True))


def _index(package: Package) -> Iterator[Finding]:
    """Every sheet stands in the index once, with its mark and its page."""
    at = {page.name: page.index for page in package.pages}
    listed: Counter[str] = Counter()
    for page, row, cells in _index_rows(package):
        first, _, last = cells.get("Sheets", "").partition(" to ")
        names = _range(first, last)
        listed.update(names)
        for name in names:
            if name not in at:
                yield Finding("index names sheets that are there", page.name, 0, f"{name} in {row}")
        if first in at and cells.get("Page", "") != str(at[first] + 1):
            yield Finding("index gives the page", page.name, 0, f"{first} is page {at[first] + 1}, printed {cells.get('Page')}")
    if not listed:
        yield Finding("index names every sheet", "INDEX", 0, "no index could be read")
    for name in at:
        if listed[name] != 1:
            yield Finding("index names every sheet", name, 0, f"stands {listed[name]} times in the index")


def _range(first: str, last: str) -> list[str]:
    if not last:
        return [first] if first else []
    stem, _, low = first.rpartition("-")
    high = last.rpartition("-")[2]
    return [f"{stem}-{n}" for n in range(int(low), int(high) + 1)] if low.isdigit() and high.isdigit() else [first, last]


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


def _lines(package: Package) -> dict[tuple[str, int], tuple[int, float, NumberedLine]]:
    found = {}
    for calculation in package.calculations:
        for line in calculation.lines:
            found[calculation.mark, line.number] = (line.page, line.y, line)
    return found


def _links_lead(package: Package) -> Iterator[Finding]:
    """Links in index, summary and source lane lead to the sheet and line they name."""
    lines = _lines(package)
    at = {page.name: page.index for page in package.pages}
    for page in package.pages:
        stem = page.name.rpartition("-")[0]
        for link in page.links:
            text = link.text
            line = re.fullmatch(r"(?:(\S+) )?(?:line )?(\d+)", text)
            if line and not page.name.startswith("INDEX"):
                mark = line[1] or stem
                aim = lines.get((mark, int(line[2])))
                if aim is None:
                    yield Finding("links lead to lines that are there", page.name, 0, f"{text!r}: no line {mark} {line[2]}")
                elif aim[0] != link.page or (link.top is not None and not -8 < link.top - aim[1] < 40):
                    yield Finding("links lead to what they name", page.name, 0, f"{text!r} leads to {package.pages[link.page].name}")
            elif text in at:
                if at[text] != link.page:
                    yield Finding("links lead to what they name", page.name, 0, f"{text!r} leads to {package.pages[link.page].name}")
            elif not text:
                yield Finding("links stand on text", page.name, 0, f"an empty link at {link.x:.0f}, {link.y:.0f}")
    for page, row, cells in _index_rows(package):
        first = cells.get("Sheets", "").partition(" to ")[0]
        aims = {link.page for link in page.links if link.text and link.text in " ".join(row)}
        if first in at and not any(link.text.startswith(first) and link.page == at[first] for link in page.links):
            yield Finding("index entries are links", page.name, 0, f"{first}: {sorted(aims)}")
    for calculation in package.calculations:
        for line_ in calculation.lines:
            linked = {link.text for link in package.pages[line_.page].links}
            for word in source_numbers(line_):
                if str(word) not in linked:
                    yield Finding("source lane numbers are links", calculation.sheet(line_.page), line_.number, str(word))


def source_numbers(line: NumberedLine) -> list[int]:
    """Return the line numbers that stand in the source lane after the citation."""
    found = []
    for text in line.source:
        numbers = re.search(r"((?:(?<=\s)|^)\d{1,3}(?:\s+\d{1,3})*)$", text)
        if numbers and not re.search(r"line \d+$", text) and not re.search(r"(material|row) \S*$", text):
            found += [int(word) for word in numbers[1].split()]
    return found


def _file(package: Package) -> Iterator[Finding]:
    """Fonts are embedded; nothing is encrypted; links are the only annotations; pages have one size."""
    for name, embedded in package.fonts:
        if not embedded:
            yield Finding("fonts are embedded", "", 0, name)
    if package.reader.is_encrypted:
        yield Finding("no encryption", "", 0, "the file is encrypted")
    for kind, count in package.annotations.items():
        if kind != "/Link":
            yield Finding("links are the only annotations", "", 0, f"{count} of {kind}")
    sizes = {(page.ink.width, page.ink.height) for page in package.pages}
    rotated = {page.get("/Rotate", 0) for page in package.reader.pages}
    if len(sizes) > 1 or len(rotated) > 1:
        yield Finding("one page size", "", 0, f"{sorted(sizes)}, turned {sorted(rotated)}")
    size = package.path.stat().st_size / max(1, len(package.pages))
    if size > 10e6 / 200 and len(package.pages) > 20:
        yield Finding("under 10 MB for 200 sheets", "", 0, f"{size:.0f} bytes a sheet")


def _seal(package: Package) -> Iterator[Finding]:
    """The cover keeps an empty square for the seal."""
    ink = package.pages[0].ink
    for area in ink.areas:
        wide, high = area.x1 - area.x0, area.y1 - area.y0
        if area.filled or area.curved or min(wide, high) < SEAL or max(wide, high) > 1.3 * SEAL:
            continue
        glyphs = [g for g in ink.glyphs if g.x1 > area.x0 + 0.5 and g.x0 < area.x1 - 0.5 and g.y1 > area.y0 and g.y0 < area.y1]
        strokes = [
            s for s in ink.lines
            if max(s.x0, s.x1) > area.x0 + 0.5 and min(s.x0, s.x1) < area.x1 - 0.5
            and max(s.y0, s.y1) > area.y0 + 0.5 and min(s.y0, s.y1) < area.y1 - 0.5
        ]  # fmt: skip
        if not [g for g in glyphs if g.text.strip()] and not strokes:
            return
        yield Finding("the seal area is empty", package.pages[0].name, 0, spaced(glyphs) or f"{len(strokes)} strokes")
        return
    yield Finding("the seal area is empty", package.pages[0].name, 0, "no square of 180 pt is free")


def _words(package: Package) -> Iterator[Finding]:
    """Words that only a person may say stand nowhere but in the echo of the input."""
    for page in package.pages:
        if "input echo" in page.text.lower() and not page.frame.lanes and not page.name.startswith(("INDEX", "COVER")):
            continue
        for match in FORBIDDEN.finditer(page.text):
            line = next(row for row in page.text.split("\n") if match[0] in row)
            yield Finding("forbidden words", page.name, 0, f"{match[0]!r} in {line!r}")


def failed_checks(calculation: Calculation) -> list[tuple[NumberedLine, Statement]]:
    """Return the checks of a calculation that are NG."""
    return [(line, s) for line in calculation.lines for s in line.statements if s.kind == "check" and s.verdict == "NG"]


def _failures(package: Package) -> Iterator[Finding]:
    """A failing check shows on its sheets' strip, in index, summary and on the cover; a passing one nowhere."""
    rows = [(row, cells) for _, row, cells in _index_rows(package)]
    total = 0
    for calculation in package.calculations:
        failed = failed_checks(calculation)
        total += len(failed)
        titles = [s.words.removeprefix("CHECK").strip() for _, s in failed]
        for sheet in calculation.pages:
            if bool(failed) != ("NG" in sheet.strip):
                yield Finding("NG on every sheet of the calculation", sheet.name, 0, f"strip {sheet.strip!r}, failed {titles}")
            for (line, _), title in zip(failed, titles, strict=True):
                if f"line {line.number}" not in sheet.strip or title not in sheet.strip:
                    yield Finding("the strip names what fails", sheet.name, line.number, sheet.strip)
        entry = [row for row, cells in rows if cells.get("Mark") == calculation.mark]
        if not entry or any("NG" in " ".join(row).split() for row in entry) != bool(failed):
            yield Finding("NG in the index", calculation.mark, 0, f"{entry}, failed {titles}")
        yield from _in_summary(package, calculation, failed)
    cover = package.pages[0].text
    counted = re.search(r"(\d+) NG", cover)
    if counted is None or int(counted[1]) != total:
        yield Finding("the cover counts what fails", package.pages[0].name, 0, f"{counted and counted[0]}, on the sheets {total}")


def _summary_tables(package: Package) -> list[Table]:
    return [table for page in package.pages if page.name.startswith("SUMMARY") for table in page.tables]


def _in_summary(
    package: Package, calculation: Calculation, failed: list[tuple[NumberedLine, Statement]]
) -> Iterator[Finding]:
    checks = [(line, s) for line in calculation.lines for s in line.statements if s.kind == "check"]
    tables = _summary_tables(package)
    for table in tables:
        names = [c.name for c in table.columns]
        for row in table.rows:
            cells = dict(zip(names, row, strict=True))
            if cells.get("Mark") != calculation.mark:
                continue
            if "Governing check" in cells:
                yield from _governing(calculation, cells, checks)
            elif "What" not in cells:
                yield from _grid(calculation, cells, checks)
    marked = [r for t in tables for r in t.rows if r and r[0] == calculation.mark and "NG" in " ".join(r).split()]
    if bool(marked) != bool(failed):
        yield Finding("NG in the summary", calculation.mark, 0, f"{len(marked)} rows, failed {len(failed)}")


def _governing(
    calculation: Calculation, cells: dict[str, str], checks: list[tuple[NumberedLine, Statement]]
) -> Iterator[Finding]:
    """The governing check is the worst on the sheets, with the same figures."""
    where = re.search(r"line (\d+)", cells.get("Where", ""))
    if where is None:
        if checks:
            yield Finding("the summary governs", calculation.mark, 0, f"{cells}")
        return
    found = [s for line, s in checks if line.number == int(where[1])]
    ratios = [float(s.ratio) if s.ratio else float("inf") for _, s in checks]
    if not found:
        yield Finding("the summary names a check", calculation.mark, int(where[1]), f"{cells}")
        return
    words = cells.get("Ratio", "").split()
    ratio = float(found[0].ratio) if found[0].ratio else float("inf")
    if (found[0].ratio and words[:1] != [found[0].ratio]) or ratio != max(ratios):
        yield Finding("the summary shows the governing ratio", calculation.mark, int(where[1]), f"{cells}, ratios {ratios}")
    for column in ("Demand or required", "Capacity or provided"):
        number, _, unit = cells.get(column, "").partition(" ")
        if number and (number, unit) not in calculation.shown and not _stands(number, found[0]):
            yield Finding("one printed form of a value", calculation.mark, int(where[1]), f"summary: {number} {unit}")


def _stands(number: str, statement: Statement) -> bool:
    from .formulas import plain

    return number.lstrip("−") in re.findall(r"[\d.,]*\d", plain(statement.tokens))


def _grid(
    calculation: Calculation, cells: dict[str, str], checks: list[tuple[NumberedLine, Statement]]
) -> Iterator[Finding]:
    """Each ratio of the grid is that of the worst check of that name."""
    for name, cell in cells.items():
        title = [s for _, s in checks if s.words.removeprefix("CHECK").strip() == name]
        if not title:
            continue
        worst = max(title, key=lambda s: float(s.ratio) if s.ratio else float("inf"))
        words = cell.split()
        shown = worst.ratio or "NG"
        if shown not in words or ("NG" in words) != any(s.verdict == "NG" for s in title):
            yield Finding("the summary repeats the ratios", calculation.mark, 0, f"{name}: {cell!r}, on the sheet {worst.ratio} {worst.verdict}")


def _handed(package: Package) -> Iterator[Finding]:
    """A value taken from another calculation has the printed form it has there."""
    lines = _lines(package)
    for calculation in package.calculations:
        for line in calculation.lines:
            source = re.search(r"(\S+) line (\d+)$", " ".join(line.source))
            if source is None or not line.statements:
                continue
            other = lines.get((source[1], int(source[2])))
            if other is None:
                yield Finding("sources are there", calculation.mark, line.number, source[0])
                continue
            yield from _same_form(calculation, line, other[2], source[0])


def _same_form(calculation: Calculation, line: NumberedLine, other: NumberedLine, name: str) -> Iterator[Finding]:
    from .calculations import assignments, printed_of

    def values(one: NumberedLine) -> list[str]:
        shown = [printed_of(tokens) for s in one.statements for _, tokens in assignments(s)]
        return [str(value) for value in shown if value is not None]

    here, there = values(line), values(other)
    cells = [cell for table in other.tables for row in table.rows for cell in row]
    for value in here:
        if there and value not in there and value.split(" ")[0] not in cells:
            yield Finding("one printed form of a value", calculation.mark, line.number, f"{value}, at {name} {there}")


def _title_blocks(package: Package) -> Iterator[Finding]:
    """Every sheet but the cover carries the project, its own revision, boxes for initials and the program."""
    title = str((package.reader.metadata or {}).get("/Title", ""))
    for page in package.pages[1:]:
        below = page_text_below(page)
        for wanted in (title, "ORIGINATOR", "CHECKER", "BACK-CHECKER", "REVISION", "rev ", "calcreport", "SHEET"):
            if wanted.replace(" ", "") not in below.replace(" ", "").replace("\n", ""):
                yield Finding("title block", page.name, 0, f"{wanted!r} is missing")
        if page.frame.lanes and not re.search(r"input ?[0-9a-f]{4} ?[0-9a-f]{4}", below):
            yield Finding("title block", page.name, 0, "no fingerprint of the input")


def page_text_below(page: Page) -> str:
    """Return the text of the title block."""
    rows: dict[float, list[Any]] = defaultdict(list)
    for glyph in page.ink.glyphs:
        if glyph.y < page.frame.block:
            rows[round(glyph.y, 1)].append(glyph)
    return "\n".join(spaced(rows[y]) for y in sorted(rows, reverse=True))
