"""Where every anchor of laid-out pages stands: the printed number of its sheet.

`Pages` in, sheet by anchor out: what a sheet composed afterwards may name.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from calcreport.layout.model import Anchor, Item, Pages, Placed


def sheets_of(pages: Pages) -> dict[str, str]:
    """Return the label of the sheet each anchor stands on."""
    return {name: page.label for page in pages.pages for name in _anchors(page.body)}


def _anchors(items: Iterable[Item]) -> Iterator[str]:
    for item in items:
        if isinstance(item, Anchor):
            yield item.name
        elif isinstance(item, Placed):
            yield from _anchors(item.box.items)
