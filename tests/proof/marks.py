"""The file as a whole and what must be seen on it: fonts, size, seal area, words, marks of failure, title blocks.

In: a `Package`. Out: findings.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterator
from typing import Any

from .account import Finding
from .calculations import Calculation
from .equations import assignments, printed_of
from .letters import plain
from .members import failing, in_summary, results
from .numbering import index_rows, lines_by_number
from .package import Package, Page
from .pieces import spaced
from .statements import NumberedLine, Statement
from .tables import Table

#: what only a person may say (design, section 6)
FORBIDDEN = re.compile(r"\b(certified|approved|checked|compliant|safe|stamp-ready)\b", re.I)
#: a square of 2.5 in., in points (submittal practice, 1.3 and 7.11)
SEAL = 180.0


def marks(package: Package) -> list[Finding]:
    """Return what is wrong with the package as a whole."""
    found: list[Finding] = []
    for examine in (_file, _seal, _words, _failures, _handed, _title_blocks):
        found += examine(package)
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
        glyphs = [
            g for g in ink.glyphs if g.x1 > area.x0 + 0.5 and g.x0 < area.x1 - 0.5 and g.y1 > area.y0 and g.y0 < area.y1
        ]
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
    rows = [(row, cells) for _, row, cells in index_rows(package)]
    total = 0
    for calculation in package.calculations:
        failed = failed_checks(calculation)
        shared = results(calculation)
        total += failing(calculation) if shared else len(failed)
        titles = [s.words.removeprefix("CHECK").strip() for _, s in failed]
        for sheet in calculation.pages:
            if bool(failed) != ("NG" in sheet.strip):
                yield Finding(
                    "NG on every sheet of the calculation",
                    sheet.name,
                    0,
                    f"strip {sheet.strip!r}, failed {titles}",
                )
            for (line, _), title in zip(failed, titles, strict=True):
                if f"line {line.number}" not in sheet.strip or title not in sheet.strip:
                    yield Finding("the strip names what fails", sheet.name, line.number, sheet.strip)
        entry = [row for row, cells in rows if cells.get("Mark") == calculation.mark]
        if not entry or any("NG" in " ".join(row).split() for row in entry) != bool(failed):
            yield Finding("NG in the index", calculation.mark, 0, f"{entry}, failed {titles}")
        if shared:
            yield from in_summary(calculation, _summary_tables(package))
        else:
            yield from _in_summary(package, calculation, failed)
    cover = package.pages[0].text
    counted = re.search(r"(\d+) NG", cover)
    if counted is None or int(counted[1]) != total:
        yield Finding(
            "the cover counts what fails",
            package.pages[0].name,
            0,
            f"{counted and counted[0]}, on the sheets {total}",
        )


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
            elif "What" in cells:
                yield from _attention(calculation, cells, checks)
            else:
                yield from _grid(calculation, cells, checks)
    marked = [r for t in tables for r in t.rows if r and r[0] == calculation.mark and "NG" in " ".join(r).split()]
    listed = {row[-1] for t in tables if t.column("What") for row in t.rows}
    for line, check in failed:
        if f"{calculation.mark} line {line.number}" not in listed:
            yield Finding("NG stands first in the summary", calculation.mark, line.number, check.words)
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
    ratios = [_severity(s) for _, s in checks]
    if not found:
        yield Finding("the summary names a check", calculation.mark, int(where[1]), f"{cells}")
        return
    words = cells.get("Ratio", "").split()
    ratio = _severity(found[0])
    if (found[0].ratio and words[:1] != [found[0].ratio]) or ratio != max(ratios):
        yield Finding(
            "the summary shows the governing ratio",
            calculation.mark,
            int(where[1]),
            f"{cells}, ratios {ratios}",
        )
    for column in ("Demand or required", "Capacity or provided"):
        number, _, unit = cells.get(column, "").partition(" ")
        if number and (number, unit) not in calculation.shown and not _stands(number, found[0]):
            yield Finding("one printed form of a value", calculation.mark, int(where[1]), f"summary: {number} {unit}")


def _severity(check: Statement) -> float:
    """Rank a check: one that fails without a ratio first, a condition that holds last."""
    if check.ratio:
        return float(check.ratio)
    return -1.0 if check.verdict == "OK" else float("inf")


def _attention(
    calculation: Calculation, cells: dict[str, str], checks: list[tuple[NumberedLine, Statement]]
) -> Iterator[Finding]:
    """What needs eyes is told with the figures of the sheet."""
    where = re.search(r"line (\d+)", cells.get("Where", ""))
    found = [s for line, s in checks if where is not None and line.number == int(where[1])]
    if where is None or not found:
        return
    if found[0].ratio and cells.get("Ratio", "").split()[:1] != [found[0].ratio]:
        yield Finding("the summary repeats the ratios", calculation.mark, int(where[1]), f"{cells}")
    pair = re.search(r"(\S+) (\S+) against (\S+) (\S+)", cells.get("State", ""))
    for number, unit in ((pair[1], pair[2]), (pair[3], pair[4])) if pair else ():
        forms = {(number, unit), (number, unit.rstrip(".,;"))}
        if not forms & calculation.shown and not _stands(number, found[0]):
            text = f"summary: {number} {unit}"
            yield Finding("one printed form of a value", calculation.mark, int(where[1]), text)


def _stands(number: str, statement: Statement) -> bool:
    return number.lstrip("−") in re.findall(r"[\d.,]*\d", plain(statement.tokens))


def _grid(
    calculation: Calculation, cells: dict[str, str], checks: list[tuple[NumberedLine, Statement]]
) -> Iterator[Finding]:
    """Each ratio of the grid is that of the worst check of that name."""
    for name, cell in cells.items():
        title = [s for _, s in checks if s.words.removeprefix("CHECK").strip() == name]
        if not title:
            continue
        worst = max(title, key=_severity)
        words = cell.split()
        # the row in full is the worst by all its checks: another row of the table may be worse by this one
        ratios = [worst.ratio, *_tabled(calculation, name)] if worst.ratio else []
        shown = max(ratios, key=float) if ratios else worst.verdict
        if shown not in words or ("NG" in words) != any(s.verdict == "NG" for s in title):
            yield Finding(
                "the summary repeats the ratios",
                calculation.mark,
                0,
                f"{name}: {cell!r}, on the sheet {worst.ratio} {worst.verdict}",
            )


def _tabled(calculation: Calculation, name: str) -> list[str]:
    """Return the ratios of a check in the tables of a calculation."""
    tables = [here.table for here in calculation.tables]
    cells = [r[i] for t in tables for r in t.rows for i, c in enumerate(t.columns) if not c.math and c.name == name]
    return [cell.split()[0] for cell in cells if re.fullmatch(r"[\d.]+", cell.split()[0] if cell.split() else "")]


def _handed(package: Package) -> Iterator[Finding]:
    """A value taken from another calculation has the printed form it has there."""
    lines = lines_by_number(package)
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
    about = package.reader.metadata
    title = about.title or "" if about is not None else ""
    repeated = {sheet.name for sheet in package.sampler}
    for page in package.pages[1:]:
        below = page_text_below(page)
        for wanted in (
            title,
            "ORIGINATOR",
            "CHECKER",
            "BACK-CHECKER",
            "REVISION",
            "rev ",
            "calcreport",
            "SHEET",
        ):
            if wanted.replace(" ", "") not in below.replace(" ", "").replace("\n", ""):
                yield Finding("title block", page.name, 0, f"{wanted!r} is missing")
        if page.frame.lanes and page.name not in repeated and not re.search(r"input ?[0-9a-f]{4} ?[0-9a-f]{4}", below):
            yield Finding("title block", page.name, 0, "no fingerprint of the input")


def page_text_below(page: Page) -> str:
    """Return the text of the title block."""
    rows: dict[float, list[Any]] = defaultdict(list)
    for glyph in page.ink.glyphs:
        if glyph.y < page.frame.block:
            rows[round(glyph.y, 1)].append(glyph)
    return "\n".join(spaced(rows[y]) for y in sorted(rows, reverse=True))
