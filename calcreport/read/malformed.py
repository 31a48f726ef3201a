"""Words for text that is no YAML: what the parser stumbled over, in terms of the file.

A parser's error and the source in, one problem out. Knows the error's marks and phrases, imports no YAML.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Protocol

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span


class _Mark(Protocol):
    """A place of the parser's, counted from 0."""

    line: int
    column: int


@dataclass(frozen=True, slots=True)
class _Words:
    message: str
    expected: str
    hint: str = ""


_TWICE = "a quote inside quotes is written twice: ''"
#: phrase of the parser: our words for it
_KNOWN: tuple[tuple[str, _Words], ...] = (
    ("mapping values are not allowed", _Words(
        "`: ` has no place here", "one key and its value on a line, keys of one mapping under one another",
        "text that holds `: ` needs quotes")),
    ("find expected ':'", _Words("a key without its `: `", "`key: value`", "text of several lines needs quotes")),
    ("nesting depth", _Words("brackets are nested too deeply", "a few levels")),
    ("tab character", _Words("a tab stands in the indent", "spaces", "replace tabs by spaces")),
    ("cannot start any token", _Words(
        "text cannot begin with this character", "a letter, a digit or a quote", "put the text in quotes")),
    ("expected ',' or ']'", _Words(
        "the list is not closed before this", "`,` or `]`",
        "close the bracket; text that holds , [ ] { } needs quotes")),
    ("expected ',' or '}'", _Words(
        "the mapping is not closed before this", "`,` or `}`",
        "close the brace; text that holds , [ ] { } needs quotes")),
    ("unexpected end of stream", _Words("a quote is opened and not closed", "the closing quote")),
    ("expected '-' indicator", _Words(
        "an entry of the list is missing its `- `", "`- `, indented like the entries above")),
    ("expected key", _Words(
        "a key is missing here", "`key: value`, indented like the keys above",
        _TWICE)),
    ("expected <block end>", _Words(
        "the indent does not fit what stands above", "`key: value` or `- `, indented like the lines above")),
    ("sequence entries are not allowed", _Words(
        "a list begins on the line of its key", "each `- ` on a line of its own, under the key")),
    ("expected <document start>", _Words("the indent is less than that of the first line", "lines that begin alike")),
    ("expected node content", _Words("a value is missing here", "text, a list or a mapping",
                                     "text that begins with , ] } needs quotes")),
    ("expected whitespace or line break", _Words("tags are not read", "the value without a tag",
                                                 "text that begins with ! needs quotes")),
    ("escape character", _Words("escapes are not read", "plain text", "write the text in single quotes")),
    ("block scalar", _Words("more text follows a | or > on its line", "the text on the lines below, indented",
                            "text that begins with | or > needs quotes")),
)  # fmt: skip
#: a quote where a value may begin, outside a comment; and a quoted text
_OPEN = re.compile(r"(?:^|(?<=[\s\[{,]))(?<!# )(?P<quote>['\"])")
_CLOSED = re.compile(r"'(?:[^'\n]|'')*'(?!')|\"[^\"\n]*\"")
_LOST = re.compile(r"[\s\[{,]#(?=\w)")
#: a text parted by commas inside braces, up to the next entry with a key; numbers with commas, for thousands or not
_PARTED = re.compile(r"[^,{}\[\]]*(?:,[^,:{}\[\]]+(?=[,}]))+")
_THOUSANDS = re.compile(r"[+-]?[0-9]{1,3}(?:,[0-9]{3})+(?![0-9,])[^,]*")
_DECIMALS = re.compile(r"[+-]?[0-9]+,[0-9]")


def say_parted(source: Source, start: int, key: Span, problems: Problems) -> None:
    """Add `comma-in-braces`: in `{f_c: 4,000 psi}` the comma ends the entry, and the key `000 psi` has no value.

    The text cut in two begins at `start`.
    """
    match = _PARTED.match(source.text, start)
    end = start + len(match[0].rstrip()) if match else key.end
    whole = " ".join(source.text[start:end].split())[:60]
    hint = f"write '{whole}'"
    if _THOUSANDS.fullmatch(whole):
        hint = f"write {whole.replace(',', '')}, or '{whole}'"
    elif _DECIMALS.match(whole):
        hint = "write decimals with a point, thousands without a sign"
    problems.add("comma-in-braces", Span(source, start, end), "a comma inside braces ends the entry",
                 expected="`key: value` after each comma, or the text in quotes",
                 found=f"`{key.text[:40]}`, which has no value", hint=hint)  # fmt: skip


def say_malformed(error: Exception, source: Source, text: str, cuts: Iterable[int], problems: Problems) -> int:
    """Add the problem behind a parser's error: `not-yaml`, or `comment-cut` where a # swallowed a bracket.

    `text` is the source's without the lines told of already, `cuts` the comment signs told of.
    Returns an offset in the line at fault.
    """
    mark: _Mark | None = getattr(error, "problem_mark", None)
    opened: _Mark | None = getattr(error, "context_mark", None)
    start = _offset(source, opened or mark)
    at = _offset(source, mark or opened)
    context = str(getattr(error, "context", None) or "")
    within = start < at and ("flow" in context or "quoted" in context)
    first = start if within else text.rfind("\n", 0, max(at - 1, 0)) + 1
    # a value cut short by a comment sign takes its closing bracket with it: one cause, one problem
    cut = next((place for place in cuts if first <= place < at), None)
    if cut is not None:
        return cut
    phrase = str(getattr(error, "problem", None) or getattr(error, "reason", None) or "it cannot be read")
    lost = _lost(text, first, at)
    if lost is not None:
        tail = source.text[lost:].partition("\n")[0]
        problems.add("comment-cut", Span(source, lost, lost + len(tail)), "the rest of this line is read as a comment",
                     expected="text that holds # after a space, or begins with it, in quotes", found=tail[:60],
                     hint="put the text in quotes, or a space after # in a comment")  # fmt: skip
        return lost
    above = text.rfind("\n", 0, max(text.rfind("\n", 0, at), 0)) + 1
    quote = _open_quote(text, min(first, above), at)
    if quote is not None:
        told = dict(_KNOWN)["unexpected end of stream"]
        problems.add("not-yaml", Span(source, quote, quote + 1), told.message, expected=told.expected,
                     found="the end of the line", hint=_TWICE)  # fmt: skip
        return quote
    about = f"{phrase} {context}"
    words = next((words for known, words in _KNOWN if known in about), None)
    if words is None:
        words = _Words(f"the file is not well formed: {phrase}", "`key: value`, lists with `- `, steady indents")
    found = source.text[at : at + 1]
    if "cannot start any token" in phrase and found == "\t":
        words = dict(_KNOWN)["tab character"]
    if "quoted scalar" in about:
        at = start
    problems.add(
        "not-yaml", Span(source, at, at + 1), words.message, expected=words.expected, hint=words.hint,
        found={"": "the end of the file", "\n": "the end of the line", "\t": "a tab"}.get(found, f"`{found}`"),
        related=((Span(source, start, start + 1), "opened here"),) if "closed" in words.message and start != at else (),
    )  # fmt: skip
    return start if "closed" in words.message else at


def _offset(source: Source, mark: _Mark | None) -> int:
    """Return the character offset of a mark."""
    return min(source.line_start(mark.line + 1) + mark.column, len(source.text)) if mark else 0


def _lost(text: str, start: int, end: int) -> int | None:
    """Return where a # hides text between what was opened and the place where the parser missed its end."""
    for match in _LOST.finditer(text, start, end):
        line = text.rfind("\n", 0, match.end() - 1) + 1
        before = text[line : match.end() - 1]
        if before.strip() and before.count("'") % 2 == 0 and before.count('"') % 2 == 0 and "# " not in before:
            return match.end() - 1
    return None


def _open_quote(text: str, start: int, end: int) -> int | None:
    """Return where a quote is opened and not closed on its line, in the lines from `start` to `end`."""
    line_start = text.rfind("\n", 0, start) + 1
    for line in text[line_start:].splitlines(keepends=True):
        opened, at = _OPEN.search(line), 0
        while opened is not None and (closed := _CLOSED.match(line, opened.start(1))) is not None:
            at = closed.end()
            opened = _OPEN.search(line, at)
        if opened is not None and line_start + opened.start(1) < end:
            return line_start + opened.start(1)
        line_start += len(line)
        if line_start > end:
            break
    return None
