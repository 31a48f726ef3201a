"""Whether text taken out of a PDF reads in order: number, words, formula, result, source, line after line.

In: the text of a page as another program takes it out, and the lines that stand on the page. Out: what is missing or
out of order. Blanks and line breaks are not heeded, for each program sets its own.
"""

from __future__ import annotations

import re
from collections.abc import Sequence

from .equations import symbol_of
from .expressions import split
from .letters import Token, plain
from .statements import NumberedLine, Statement


def squeeze(text: str) -> str:
    """Return text without blanks; a low line stands in names of words, and is written for a subscript here."""
    return re.sub("[\\s\u200b_]", "", text)


def out_of_order(text: str, lines: Sequence[NumberedLine], page: int) -> list[str]:
    """Return what is missing or out of order on a page, with the line number."""
    text = squeeze(text)
    found: list[str] = []
    heads: list[tuple[NumberedLine, int]] = []
    at = 0
    for line in lines:
        head = _head(line)
        place = text.find(head, at)
        if place < 0:
            found.append(f"line {line.number}: {head!r} is not found after the line before")
            continue
        heads.append((line, place))
        at = place + len(head)
    ends = [place for _, place in heads[1:]] + [len(text)]
    for (line, start), end in zip(heads, ends, strict=False):
        for piece in _missing(line, page, text[start:end]):
            found.append(f"line {line.number}: {piece!r} is missing or out of order")
    return found


def _head(line: NumberedLine) -> str:
    """Return the number with what stands first beside it."""
    title = next((s for s in line.statements if s.kind == "heading" and abs(s.y - line.y) < 2), None)
    if title is not None and title.page == line.page:
        return f"{line.number}{_said(title.words)}"
    first = next((s for s in line.statements if s.kind not in ("heading", "arm")), None)
    table = line.tables[0] if line.tables else None
    if table is not None and (first is None or table.y > first.y):
        return f"{line.number}{squeeze(table.set_name)}" if abs(table.y - line.y) < 2 else str(line.number)
    if first is None:
        return str(line.number)
    if first.words:
        return f"{line.number}{_said(first.words)}"
    name = symbol_of(split(first.tokens, "relation")[0][0]) if first.tokens else None
    return f"{line.number}{squeeze((name or '').replace('_', ''))}"


def _missing(line: NumberedLine, page: int, text: str) -> list[str]:
    """Return the words, results and sources of a line that do not follow each other in its text."""
    missing: list[str] = []
    at = 0
    for statement in line.statements:
        if statement.page == page and statement.kind in ("formula", "check"):
            for piece in _pieces(statement):
                place = text.find(piece, at)
                if place < 0:
                    missing.append(piece)
                at = max(at, place + len(piece))
    source = line.source[0].split()[0].rstrip(",") if line.source else ""
    if source and len([s for s in line.statements if s.kind == "formula"]) <= 1 and source not in text[at:]:
        missing.append(source)
    return missing


def _pieces(statement: Statement) -> list[str]:
    found = [_said(statement.words)] if statement.words else []
    parts, _ = split(statement.tokens, "relation")
    result = _flat(parts[-1]) if len(parts) > 1 and statement.kind == "formula" and not statement.feet else None
    found += ["=" + result] if result else []
    if statement.kind == "check":
        found += [piece for piece in (statement.ratio, statement.verdict) if piece]
    return found


def _said(words: str) -> str:
    """Return words as programs take them out: a symbol among them has its subscript on the line."""
    return squeeze(re.sub(r"(?<=\b\w)_(?=\w)", "", words))


def _flat(tokens: Sequence[Token]) -> str | None:
    """Return a row as programs take it out; None where some of it is stacked or raised."""
    if any(
        token.text in ("″", "′") or token.kind in ("fraction", "stack", "over", "root") or token.raised or token.power
        for token in tokens
    ):
        return None
    return squeeze(plain(list(tokens)).replace("_", "").replace("*", "×")).replace("-", "−") or None
