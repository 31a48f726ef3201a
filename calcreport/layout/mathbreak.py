"""Where a long formula may part: before relations, before plus and minus, before multiplication signs.

In: the items of a row, widths of its lines, a way to measure items. Out: the items of each line. A
fraction, a root and a script never part; the body of a fence only when nothing else helps. Knows no fonts.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import TypeAlias

from calcreport.layout.mathatoms import flat
from calcreport.report.model import Fence, Formula, Letters, Operator, Row, Space

Items: TypeAlias = tuple[Formula, ...]

#: an empty item before the sign that begins a continued line: the sign keeps only the gap after it
STRUT = Letters("")
_PLUS_MINUS = ("+", "−", "-", "±", "∓")


def break_row(items: Items, width: float, hang: float, measure: Callable[[Items], float]) -> tuple[Items, ...]:
    """Part the items of a row into lines; all but the first are `hang` points shorter.

    A line wider than asked is left where nothing in it may part.
    """
    breaker = _Breaker(width, hang, measure)
    breaker.fill(flat(items), 0)
    return tuple(_trimmed(line) for line in breaker.lines if line)


class _Breaker:
    """Fills lines with parts, as many as go on each, parting more finely what is too wide for a line."""

    def __init__(self, width: float, hang: float, measure: Callable[[Items], float]) -> None:
        self.lines: list[Items] = [()]
        self._width, self._hang, self._measure = width, hang, measure

    def fill(self, items: Items, level: int) -> None:
        """Add items, parting them first at the level given, further only where they do not fit."""
        parted = False
        for part in _LEVELS[level](items):
            # after a side of many lines the next relation begins a line, so that it is found
            if self._fits(self.lines[-1] + part) and not (parted and level == 0):
                self.lines[-1] += part
                continue
            if self.lines[-1]:
                self.lines.append(())
            line = _continued(part) if len(self.lines) > 1 else part
            parted = not self._fits(line) and level + 1 < len(_LEVELS)
            if parted:
                self.fill(line, level + 1)
            else:
                self.lines[-1] = line

    def _fits(self, items: Items) -> bool:
        room = self._width - (self._hang if len(self.lines) > 1 else 0.0)
        return self._measure(_trimmed(items)) <= room


def _continued(items: Items) -> Items:
    """Put the strut before a sign that begins a continued line."""
    items = _trimmed(items)
    signs = bool(items) and isinstance(items[0], Operator) and items[0].kind in ("binary", "relation")
    return (STRUT, *items) if signs else items


def _trimmed(items: Items) -> Items:
    """Leave out gaps at either end of a line."""
    first, last = 0, len(items)
    while first < last and isinstance(items[first], Space):
        first += 1
    while last > first and isinstance(items[last - 1], Space):
        last -= 1
    return items[first:last]


def _before(items: Items, parts: Callable[[Operator], bool]) -> Iterator[Items]:
    """Part before each sign that is asked for, except one that begins the items."""
    start = 0
    for i, item in enumerate(items):
        begins = not items[start:i] or items[start:i] == (STRUT,)
        if isinstance(item, Operator) and parts(item) and not begins:
            yield items[start:i]
            start = i
    yield items[start:]


def _at_relations(items: Items) -> Iterator[Items]:
    return _before(items, lambda sign: sign.kind == "relation")


def _at_sums(items: Items) -> Iterator[Items]:
    return _before(items, lambda sign: sign.kind == "binary" and sign.text in _PLUS_MINUS)


def _at_products(items: Items) -> Iterator[Items]:
    return _before(items, lambda sign: sign.kind == "binary")


def _inside_fence(items: Items) -> Iterator[Items]:
    """Part the fence of most terms at its plus and minus signs."""
    fences = {i: item for i, item in enumerate(items) if isinstance(item, Fence)}
    terms = {i: list(_at_sums(flat((fence.body,)))) for i, fence in fences.items()}
    at = max(terms, key=lambda i: len(terms[i]), default=-1)
    if at < 0 or len(terms[at]) == 1:
        yield items
        return
    fence, parts = fences[at], terms[at]
    yield (*items[:at], Fence(fence.opening, Row(parts[0]), ""))
    yield from parts[1:-1]
    sign, *rest = parts[-1]
    yield (sign, Fence("", Row(tuple(rest)), fence.closing), *items[at + 1 :])


#: coarse to fine
_LEVELS: tuple[Callable[[Items], Iterator[Items]], ...] = (
    _at_relations,
    _at_sums,
    _at_products,
    _inside_fence,
)
