"""YAML text to a tree of strings with places; refuses the dangerous subset. The only module that knows YAML.

Refused: aliases, anchors, tags, merge keys, several documents, repeated keys, odd characters, a value
cut short by a comment sign. Nothing is typed here: `no`, `010` and `12:30` stay the text they are.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TypeAlias

import yaml

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span

#: bounds against files made to exhaust: characters, nodes, depth
LARGEST, MOST_NODES, DEEPEST = 2_000_000, 200_000, 30


@dataclass(frozen=True, slots=True)
class Scalar:
    """A piece of text; `span` covers the characters between the quotes."""

    text: str
    span: Span
    quoted: bool


@dataclass(frozen=True, slots=True)
class Sequence:
    """A list."""

    items: tuple[Node, ...]
    span: Span


@dataclass(frozen=True, slots=True)
class Mapping:
    """Keys and values in written order, every key once."""

    entries: tuple[tuple[Scalar, Node], ...]
    span: Span

    def get(self, key: str) -> Node | None:
        """Return the value under a key, or None."""
        for name, node in self.entries:
            if name.text == key:
                return node
        return None


Node: TypeAlias = Scalar | Sequence | Mapping

_ODD = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\u2028\u2029\ufeff\ud800-\udfff\ufffe\uffff]")
_CUT = re.compile(r"[ \t]*#\d")
_LOADER = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


class _Stop(Exception):
    """Leaves the reader after a problem was added."""


def read_tree(source: Source, problems: Problems) -> Node | None:
    """Return the tree of a file, or None after adding what is wrong with it."""
    text = source.text
    if len(text) > LARGEST:
        problems.add("file-too-large", Span(source, 0, 1), "the file is too large",
                     expected=f"{LARGEST:,} characters at most", found=f"{len(text):,}")  # fmt: skip
        return None
    odd = _ODD.search(text)
    if odd:
        at = Span(source, odd.start(), odd.end())
        problems.add("odd-character", at, "a character that has no place in a text file",
                     expected="printable text and line ends", found=f"U+{ord(odd[0]):04X}")  # fmt: skip
        return None
    try:
        return _Reader(source, problems).read()
    except _Stop:
        return None
    except yaml.YAMLError as error:
        mark = getattr(error, "problem_mark", None) or getattr(error, "context_mark", None)
        at = _offset(source, mark.line, mark.column) if mark else 0
        words = str(getattr(error, "problem", None) or getattr(error, "reason", None) or "it cannot be read")
        problems.add("not-yaml", Span(source, at, at + 1), f"the file is not well formed: {words}",
                     expected="YAML: `key: value`, lists with `- `, steady indents",
                     found="see the place", hint="quote text that holds `: `, ` #`, or begins with a sign")  # fmt: skip
        return None


def _offset(source: Source, line: int, column: int) -> int:
    """Return the character offset of a line and column counted from 0."""
    return min(source.line_start(line + 1) + column, max(len(source.text), 0))


class _Reader:
    def __init__(self, source: Source, problems: Problems) -> None:
        self.source, self.problems = source, problems
        self.events = yaml.parse(source.text, Loader=_LOADER)
        self.count = 0

    def read(self) -> Node | None:
        root: Node | None = None
        for event in self.events:
            if isinstance(event, yaml.DocumentStartEvent):
                if root is not None:
                    self.stop("not-yaml", event, "a second document begins here", "one document", "`---`")
                root = self.node(next(self.events), 0)
        if root is None:
            self.problems.add("not-yaml", Span(self.source, 0, 1), "the file is empty",
                              expected="a mapping of keys", found="nothing")  # fmt: skip
        return root

    def span(self, event: yaml.Event) -> Span:
        start = _offset(self.source, event.start_mark.line, event.start_mark.column)
        end = _offset(self.source, event.end_mark.line, event.end_mark.column)
        return Span(self.source, start, max(end, start))

    def stop(self, slug: str, event: yaml.Event, message: str, expected: str, found: str, hint: str = "") -> None:
        self.problems.add(slug, self.span(event), message, expected=expected, found=found, hint=hint)
        raise _Stop

    def node(self, event: yaml.Event, depth: int) -> Node:
        self.count += 1
        if depth > DEEPEST or self.count > MOST_NODES:
            self.stop("file-too-large", event, "the file is nested too deeply or holds too much",
                      f"{DEEPEST} levels and {MOST_NODES:,} values at most", "more")  # fmt: skip
        if isinstance(event, yaml.AliasEvent) or getattr(event, "anchor", None):
            self.stop("yaml-feature", event, "anchors and aliases are not read", "the value itself", "an anchor or alias",
                      "write the value out, or share it through materials or criteria")  # fmt: skip
        if getattr(event, "tag", None):
            self.stop("yaml-feature", event, "tags are not read", "plain text", f"`{event.tag}`")
        if isinstance(event, yaml.ScalarEvent):
            return self.scalar(event)
        if isinstance(event, yaml.SequenceStartEvent):
            return self.sequence(event, depth)
        return self.mapping(event, depth)

    def scalar(self, event: yaml.ScalarEvent) -> Scalar:
        span, quoted = self.span(event), event.style in ("'", '"')
        text = event.value
        if quoted:
            span = Span(self.source, span.start + 1, max(span.end - 1, span.start + 1))
            if event.style == '"' and "\\" in span.text:
                self.stop("yaml-feature", event, "escapes are not read", "plain quoted text", "a backslash")
        elif event.style is None:
            self.look_for_cut(span)
        return Scalar(text, span, quoted)

    def look_for_cut(self, span: Span) -> None:
        """Refuse `2 legs #4` unquoted: the reader of YAML takes ` #4` for a comment."""
        cut = _CUT.match(self.source.text, span.end)
        if cut and (cut[0][0] in " \t" or span.end == span.start):
            start = cut.end() - 2
            end = self.source.text.find("\n", start)
            tail = self.source.text[start : end if end >= 0 else None].rstrip(" ,}]")
            self.problems.add(
                "comment-cut", Span(self.source, start, start + len(tail)), "the rest of this value is read as a comment",
                expected="text that holds # after a space, or begins with it, in quotes", found=tail[:60],
                hint=f"write '{(span.text + cut[0][:-2] + tail).strip()[:60]}'",
            )  # fmt: skip

    def sequence(self, start: yaml.Event, depth: int) -> Sequence:
        items: list[Node] = []
        while not isinstance(event := next(self.events), yaml.SequenceEndEvent):
            items.append(self.node(event, depth + 1))
        return Sequence(tuple(items), self.closed(start, event))

    def mapping(self, start: yaml.Event, depth: int) -> Mapping:
        entries: list[tuple[Scalar, Node]] = []
        seen: dict[str, Span] = {}
        while not isinstance(event := next(self.events), yaml.MappingEndEvent):
            key = self.node(event, depth + 1)
            if not isinstance(key, Scalar):
                self.stop("not-yaml", event, "a key must be a word", "a word", "a list or mapping")
            assert isinstance(key, Scalar)
            if key.text == "<<" and not key.quoted:
                self.stop("yaml-feature", event, "merge keys are not read", "the keys themselves", "`<<`")
            value = self.node(next(self.events), depth + 1)
            if key.text in seen:
                self.problems.add("repeated-key", key.span, f"`{key.text[:40]}` stands twice",
                                  expected="every key once", found="a second value",
                                  related=((seen[key.text], "first here"),))  # fmt: skip
                continue
            seen[key.text] = key.span
            entries.append((key, value))
        return Mapping(tuple(entries), self.closed(start, event))

    def closed(self, start: yaml.Event, end: yaml.Event) -> Span:
        first, last = self.span(start), self.span(end)
        return Span(self.source, first.start, max(last.end, first.start))
