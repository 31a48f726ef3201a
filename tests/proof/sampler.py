"""The reviewer's sampler held against the package it samples: the same lines, the highest ratios, margins that follow.

In: a `Package`. Out: findings. A line of the sampler belongs to the calculation named by the link above it; what the
line says must then stand under the same number on that calculation's own sheets, where it is worked again.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterator

from .account import Finding
from .calculations import Calculation
from .letters import plain
from .package import SAMPLER, Package
from .sheets import SheetPage
from .statements import NumberedLine, Statement

#: the link over an excerpt and in the table of margins: 'B1-2, line 31'
PLACE = re.compile(r"(\S+)-(\d+), line (\d+)")
_NUMBER = re.compile(r"[-−+]?[\d,]*\.?\d+")
Said = tuple[str, str, str, str, str]


def sampler(package: Package) -> list[Finding]:
    """Return what is wrong with the sampler; nothing where there is none."""
    pages = package.sampler
    if not pages:
        return []
    found = [] if len(pages) == 1 else [Finding("the sampler is one sheet", SAMPLER, 0, f"{len(pages)} sheets")]
    by_mark = {calculation.mark: calculation for calculation in package.calculations}
    for page in pages:
        found += [*_repeats(package, page, by_mark), *_margins(page, by_mark)]
    return [*found, *_highest(package, by_mark)]


def mark_of(package: Package, page: SheetPage, y: float) -> str:
    """Return the mark of the calculation an excerpt at a height belongs to, '' for none."""
    above = [link for link in package.pages[page.index].links if link.y > y - 1 and PLACE.fullmatch(link.text)]
    nearest = min(above, key=lambda link: link.y, default=None)
    match = PLACE.fullmatch(nearest.text) if nearest is not None else None
    return match[1] if match else ""


def _said(line: NumberedLine) -> list[Said]:
    """Return the assertions of a line, letter for letter."""
    kinds = ("formula", "check", "condition", "required")
    return [
        (s.kind, plain(s.tokens), plain(s.condition), s.ratio, s.verdict) for s in line.statements if s.kind in kinds
    ]


def _repeats(package: Package, page: SheetPage, by_mark: dict[str, Calculation]) -> Iterator[Finding]:
    if not page.lines:
        yield Finding("a sampler line is the line it repeats", page.name, 0, "there is no line")
    for line in page.lines:
        mark = mark_of(package, page, line.y)
        lines = by_mark[mark].lines if mark in by_mark else []
        original = next((other for other in lines if other.number == line.number), None)
        if original is None or _said(original) != _said(line) or original.source != line.source:
            words = f"{mark} {_said(original) if original else 'has no such line'}, here {_said(line)}"
            yield Finding("a sampler line is the line it repeats", page.name, line.number, words)


def _rank(statement: Statement) -> tuple[bool, float]:
    ratio = statement.ratio.replace(",", "")
    return statement.verdict == "NG", float(ratio) if ratio not in ("", "NG") else math.inf


def _checks(lines: list[NumberedLine]) -> list[tuple[int, Statement]]:
    return [
        (line.number, s) for line in lines for s in line.statements
        if s.kind == "check" and (s.verdict == "NG" or (s.verdict == "OK" and s.ratio))
    ]  # fmt: skip


def _highest(package: Package, by_mark: dict[str, Calculation]) -> Iterator[Finding]:
    """No check left out ranks above one that was taken."""
    taken = {
        (mark_of(package, page, line.y), line.number): _rank(s)
        for page in package.sampler for line in page.lines for _, s in _checks([line])
    }  # fmt: skip
    least = min(taken.values(), default=(False, math.inf))
    for mark, calculation in by_mark.items():
        for number, statement in _checks(calculation.lines):
            if (mark, number) not in taken and _rank(statement) > least:
                words = f"{mark} line {number} has {statement.ratio}, {least[1]} was taken"
                yield Finding("the sampler holds the highest ratios", SAMPLER, 0, words)


def _margins(page: SheetPage, by_mark: dict[str, Calculation]) -> Iterator[Finding]:
    """How far a given value moves follows from the two numbers beside it; the first is printed on its sheet."""
    for table in page.tables:
        if [column.name for column in table.columns][:2] != ["Where", "Check"]:
            continue
        for row in table.rows:
            place, numbers = PLACE.fullmatch(row[0]), [_NUMBER.match(cell.strip()) for cell in row[3:5]]
            moved = row[5].strip()
            limit = moved in ("any less", "any more")
            if place is None or place[1] not in by_mark or None in numbers or not (limit or _NUMBER.fullmatch(moved)):
                yield Finding("a margin follows from its numbers", page.name, 0, f"{row} cannot be read")
                continue
            given, flips = (_float(number[0]) for number in numbers if number is not None)
            share, half = 0.0 if limit else _float(moved), 0.5 * 10.0 ** -len(moved.rpartition(".")[2])
            if abs(100 * (flips - given) / abs(given) - share) > (1e-4 if limit else half) + 1e-9:
                yield Finding("a margin follows from its numbers", page.name, 0, f"{row}")
            text = row[3].strip()
            shown = {f"{number} {unit}".strip() for number, unit in by_mark[place[1]].shown}
            if text.replace(" ", "") not in {one.replace(" ", "") for one in shown}:
                yield Finding("one printed form of a value", page.name, 0, f"{text} of {row} is not on {place[1]}")


def _float(text: str) -> float:
    return float(text.replace(",", "").replace("−", "-"))
