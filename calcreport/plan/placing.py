"""Lines that have no place among those of an `unknown`, or in a block of which only the figure is shown.

Lines of a template in, the misplaced ones out.
"""

from __future__ import annotations

from collections.abc import Iterator

from calcreport.read.model import Branches, Check, Drawing, Each, Line, Method, PartBody, PartUse, Text, Twin, Unknown


def once_only(lines: tuple[Line, ...]) -> Iterator[Line]:
    """Yield the lines, at any depth and in parts, that have no place in the trials of an unknown."""
    for line in lines:
        match line:
            case Check() | Drawing() | Method() | Twin():
                yield line
            case Branches(arms):
                for arm in arms:
                    yield from once_only(arm.lines)
            case Each(_, inner) | Unknown(lines=inner) | PartUse(PartBody(lines=inner)):
                yield from once_only(inner)


def needs_paper(lines: tuple[Line, ...]) -> Iterator[Check | Text | Method | Twin]:
    """Yield the lines, at any depth and in parts, that must be read on a sheet."""
    for line in lines:
        match line:
            case Check() | Method() | Twin() | Text(kind="caution" | "assume" | "use"):
                yield line
            case Branches(arms):
                for arm in arms:
                    yield from needs_paper(arm.lines)
            case Each(_, inner) | Unknown(lines=inner) | PartUse(PartBody(lines=inner)):
                yield from needs_paper(inner)
