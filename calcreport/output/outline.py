"""Bookmarks as the outline tree of a PDF.

In: bookmarks in order with their levels. Out: the bytes of numbered objects, the root first. Entries below
the first level start closed. Knows no pages: where a bookmark leads is handed in.
Method: ISO 32000-1 clause 12.3.3.
"""

from __future__ import annotations

from collections.abc import Callable
from itertools import pairwise

from calcreport.layout.model import Bookmark
from calcreport.output.syntax import reference, text_string

_ROOT = -1


def outline_objects(bookmarks: tuple[Bookmark, ...], root: int, place: Callable[[str], bytes]) -> tuple[bytes, ...]:
    """Write the root, which will have the number `root`, and one entry a bookmark, numbered on from it.

    ValueError when a bookmark lies more than one level below the one before.
    """
    parents, children = _tree(bookmarks)

    def link(key: bytes, i: int) -> bytes:
        return key + reference(root + 1 + i)

    def ends(i: int) -> bytes:
        return link(b"/First ", children[i][0]) + link(b"/Last ", children[i][-1])

    before = {b: a for own in children.values() for a, b in pairwise(own)}
    after = {a: b for b, a in before.items()}
    objects = [b"<</Type/Outlines%b/Count %d>>" % (ends(_ROOT), len(children[_ROOT]))]
    for i, bookmark in enumerate(bookmarks):
        objects.append(
            b"<</Title%b/Dest%b" % (text_string(bookmark.title), place(bookmark.target))
            + link(b"/Parent ", parents[i])
            + (link(b"/Prev ", before[i]) if i in before else b"")
            + (link(b"/Next ", after[i]) if i in after else b"")
            + (ends(i) + b"/Count %d" % -len(children[i]) if i in children else b"")
            + b">>"
        )
    return tuple(objects)


def _tree(bookmarks: tuple[Bookmark, ...]) -> tuple[list[int], dict[int, list[int]]]:
    """Give the parent of each bookmark and the children of each parent; -1 is the root."""
    parents: list[int] = []
    children: dict[int, list[int]] = {}
    path = [_ROOT]
    for i, bookmark in enumerate(bookmarks):
        if bookmark.level > len(path) - 1:
            raise ValueError(f"the bookmark {bookmark.title!r} skips a level")
        del path[bookmark.level + 1 :]
        parents.append(path[-1])
        children.setdefault(path[-1], []).append(i)
        path.append(i)
    return parents, children
