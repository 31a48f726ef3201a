"""The revision record of a project file as text: its rows, and one more row put after the last.

A project file in, what is inserted where out. Nothing else of the text moves: comments, order, quotes and line ends
stay the author's. The new row is written the way the last one is, and what was made is read again: where it does not
say what the old text says and the new row besides, nothing is inserted.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TypeAlias

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.read.model import Issue
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, read_tree, written

_KEY = "revisions"
_KEYS = ("number", "date", "why")
#: texts by the offsets they are put at, in order
Insertions: TypeAlias = tuple[tuple[int, str], ...]
#: a tree without its places
_Plain: TypeAlias = "str | tuple[object, ...]"


@dataclass(frozen=True, slots=True)
class Appended:
    """A row put after the last of a record."""

    insertions: Insertions
    text: str


def append_row(source: Source, row: Issue) -> Appended | None:
    """Return the project file with a row more; None where its layout is not one this program can write into."""
    tree = read_tree(source, Problems())
    node = tree.get(_KEY) if isinstance(tree, Mapping) else None
    if not isinstance(tree, Mapping) or not isinstance(node, Sequence):
        return None
    insertions = _insertions(source.text, node, row)
    text = inserted(source.text, insertions) if insertions is not None else source.text
    again = read_tree(Source(source.name, text), Problems())
    if insertions is None or again is None or _plain(again) != _with_row(tree, node, row):
        return None
    return Appended(insertions, text)


def inserted(text: str, insertions: Insertions) -> str:
    """Return a text with others put into it."""
    for at, piece in reversed(insertions):
        text = text[:at] + piece + text[at:]
    return text


def inserted_raw(raw: str, insertions: Insertions) -> str:
    """Return a text as it stands in its file, with what was to be put into it as it was read.

    It was read without the mark at its beginning and with line ends made alike.
    """
    mark = raw.startswith("\ufeff")
    starts: list[tuple[int, int, bool]] = []
    read_at, raw_at, carried = 0, int(mark), False
    lines = raw[mark:].split("\n")
    for place, line in enumerate(lines):
        # a last line without an end takes that of the line before
        carried = line.endswith("\r") if place < len(lines) - 1 else carried
        starts.append((read_at, raw_at, carried))
        read_at += len(line) + 1 - carried
        raw_at += len(line) + 1
    moved = []
    for at, piece in insertions:
        read, real, carried = next(start for start in reversed(starts) if start[0] <= at)
        moved.append((real + at - read, piece.replace("\n", "\r\n") if carried else piece))
    return inserted(raw, tuple(moved))


def row_text(row: Issue) -> str:
    """Return a row as one line in braces."""
    return "{" + ", ".join(f"{key}: {text}" for key, text in _entries(row, _KEYS)) + "}"


def _entries(row: Issue, keys: tuple[str, ...]) -> list[tuple[str, str]]:
    texts = {"number": row.number, "date": row.date, "why": row.why}
    return [(key, written(texts[key])) for key in keys]


def _insertions(text: str, node: Sequence, row: Issue) -> Insertions | None:
    flow = text.startswith("[", node.span.start)
    if not node.items:
        return ((node.span.start + 1, row_text(row)),) if flow else None
    last = node.items[-1]
    if not isinstance(last, Mapping):
        return None
    end = _end(last)
    newline = text.find("\n", end)
    line_end = newline if newline >= 0 else len(text)
    begun = text.rfind("\n", 0, last.span.start) + 1
    before = text[begun : last.span.start]
    if flow:
        return _after_flow_row(text, end, line_end, before, row)
    dash = re.fullmatch(r"( *)-( +)", before)
    if dash is None:
        return None
    if text.startswith("{", last.span.start):
        made = before + row_text(row)
    else:
        keys = tuple(key.text for key, _ in last.entries if key.text in _KEYS)
        lines = [f"{key}: {value}" for key, value in _entries(row, keys)]
        made = before + ("\n" + " " * len(before)).join(lines)
    return ((line_end, "\n" + made),)


def _after_flow_row(text: str, end: int, line_end: int, before: str, row: Issue) -> Insertions:
    """Put a row after the last one of a list in brackets: on a line of its own where that one has its own."""
    comma = re.compile(r"[ \t]*,").match(text, end)
    rest = text[comma.end() if comma else end : line_end].strip()
    if before.strip() or (rest and not rest.startswith("#")):
        return ((end, f", {row_text(row)}"),)
    parted = () if comma else ((end, ","),)
    return (*parted, (line_end, f"\n{before}{row_text(row)}{',' if comma else ''}"))


def _end(node: Node) -> int:
    """Return where the text of a node ends, without the lines after it that its reader counts to it."""
    text = node.span.source.text
    match node:
        case Scalar(_, span, quoted):
            return span.end + 1 if quoted else len(text[: span.end].rstrip())
        case Mapping(entries, span) if not text.startswith("{", span.start) and entries:
            return _end(entries[-1][1])
        case Sequence(items, span) if not text.startswith("[", span.start) and items:
            return _end(items[-1])
    return node.span.end


def _with_row(tree: Mapping, record: Sequence, row: Issue) -> _Plain:
    keys: tuple[str, ...] = _KEYS
    if record.items and isinstance(last := record.items[-1], Mapping) and not _is_flow(last.span):
        keys = tuple(key.text for key, _ in last.entries if key.text in _KEYS)
    texts = {"number": row.number, "date": row.date, "why": row.why}
    added = tuple((key, texts[key]) for key in keys)
    return tuple(
        (key.text, (*(_plain(item) for item in record.items), added) if node is record else _plain(node))
        for key, node in tree.entries
    )


def _is_flow(span: Span) -> bool:
    return span.source.text.startswith("{", span.start)


def _plain(node: Node) -> _Plain:
    match node:
        case Scalar(text):
            return text
        case Mapping(entries):
            return tuple((key.text, _plain(value)) for key, value in entries)
        case Sequence(items):
            return tuple(_plain(item) for item in items)
    return ()
