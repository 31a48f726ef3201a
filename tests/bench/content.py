"""What the contestants share: the report of a project, counts of lines, figures as plain shapes, widths of columns.

A project's text in, the program's own report tree out, the same tree from which its sheets are laid. Knows neither of
the two markups.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder
from calcreport.layout.figures import draw
from calcreport.layout.fonts import installed_fonts
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Circle, Item, Placed, Run, Stroke
from calcreport.publish import report as compose_report
from calcreport.report.model import (
    CheckLine,
    Figure,
    Formula,
    Fraction,
    Givens,
    Line,
    Listing,
    Part,
    Reference,
    Report,
    ResultBox,
    Root,
    Row,
    Script,
    Stack,
    Statement,
    Strong,
    Table,
    Words,
)


@dataclass(frozen=True, slots=True)
class Shape:
    """A polyline; `fill` paints inside it."""

    points: tuple[tuple[float, float], ...]
    width: float
    closed: bool
    fill: float | None
    dash: tuple[float, ...]


@dataclass(frozen=True, slots=True)
class Ring:
    """A circle about a point."""

    x: float
    y: float
    radius: float
    width: float
    fill: float | None


@dataclass(frozen=True, slots=True)
class Label:
    """A word at its place."""

    x: float
    y: float
    size: float
    text: str


@dataclass(frozen=True, slots=True)
class Drawing:
    """A figure as shapes and labels; origin top left, y downwards."""

    width: float
    height: float
    shapes: tuple[Shape | Ring | Label, ...]


def report_of(path: Path) -> Report:
    """Return the report of a project file; RuntimeError when it has problems."""
    package = compose_report(Disk(path.parent, library_folder()), Source(path.name, path.read_text("utf-8")))
    if package.composed is None:
        raise RuntimeError(f"{path}: {package.problems[0]}")
    return package.composed.report


def count_lines(report: Report) -> int:
    """Count what a reader sees as lines: numbered lines, given values, rows of tables, lines of a listing."""
    return sum(_lines_of(part) for part in report.parts)


def _lines_of(part: Part) -> int:
    count = len(part.index.entries) if part.index is not None else 0
    for block in part.blocks:
        match block:
            case Line() | Statement() | CheckLine() | ResultBox():
                count += 1
            case Givens() | Table():
                count += len(block.rows)
            case Listing(lines):
                count += len(lines)
            case _:
                pass
    return count


class Drawer:
    """Draws figures as the program does, and gives their shapes one by one."""

    def __init__(self) -> None:
        self.formulas = Formulas(installed_fonts())

    def drawing(self, figure: Figure) -> Drawing:
        """Return the shapes of a figure of the width that stands beside lines."""
        box = draw(self.formulas, figure, 206.0)
        return Drawing(box.width, box.ascent + box.descent, tuple(_shapes(box.items, 0.0, box.ascent)))


def _shapes(items: tuple[Item, ...], x: float, y: float) -> Iterator[Shape | Ring | Label]:
    for item in items:
        match item:
            case Placed():
                yield from _shapes(item.box.items, x + item.x, y + item.y)
            case Run():
                if item.text.strip():
                    yield Label(x + item.x, y + item.y, item.size, item.text)
            case Stroke():
                moved = tuple((x + px, y + py) for px, py in item.points)
                yield Shape(moved, item.width, item.closed, item.fill, item.dash)
            case Circle():
                yield Ring(x + item.x, y + item.y, item.radius, item.width, item.fill)
            case _:
                pass


def is_tall(formula: Formula) -> bool:
    """Tell whether brackets round a formula have to grow."""
    match formula:
        case Fraction() | Root() | Stack():
            return True
        case Row(items):
            return any(is_tall(item) for item in items)
        case Script(base, below, above):
            return any(part is not None and is_tall(part) for part in (base, below, above))
        case _:
            return False


def column_widths(table: Table, room: float) -> tuple[float, ...]:
    """Return widths of columns from the count of their letters; they fill the room where one of them stretches."""
    heads = [len(_letters(column.heading)) for column in table.columns]
    wide = [
        4.6 * max([head, *(len(_letters(row.cells[place])) for row in table.rows)]) + 8.0
        for place, head in enumerate(heads)
    ]
    total = sum(wide)
    stretched = any(column.stretch for column in table.columns)
    if total <= room and not stretched:
        return tuple(wide)
    if total <= room:
        share = (room - total) / sum(1 for column in table.columns if column.stretch)
        return tuple(w + (share if c.stretch else 0.0) for w, c in zip(wide, table.columns, strict=True))
    # the narrow columns keep what they need; the wide ones share what is left and break their words
    capped = [min(w, room / len(wide)) for w in wide]
    left, need = room - sum(capped), sum(w - c for w, c in zip(wide, capped, strict=True))
    return tuple(c + (w - c) * left / need for w, c in zip(wide, capped, strict=True))


def _letters(words: Words) -> str:
    found = []
    for word in words:
        match word:
            case str():
                found.append(word)
            case Strong() | Reference():
                found.append(word.text)
            case _:
                found.append("mmm")
    return "".join(found)
