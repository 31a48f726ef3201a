"""YAML text to a tree of strings with places; refuses the dangerous subset. The only module that knows YAML.

Refused: aliases, anchors, tags, merge keys, escapes, several documents, repeated keys, odd characters, a value
cut short by a comment sign. Nothing is typed here: `no`, `010` and `12:30` stay the text they are.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import NoReturn, TypeAlias

import yaml

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.read.malformed import say_malformed, say_parted

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


@dataclass(frozen=True, slots=True)
class Told:
    """A value about which a problem was told already; who reads it finds nothing and says nothing."""

    span: Span


Node: TypeAlias = Scalar | Sequence | Mapping | Told

_ODD = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\u2028\u2029\ufeff\ud800-\udfff\ufffe\uffff]")
_ODD_WORDS = {
    "\r": "a carriage return without a line feed",
    "\x00": "a null byte",
    "\ufeff": "a byte order mark inside the text",
    "\x85": "a next-line sign",
    "\u2028": "a line separator",
    "\u2029": "a paragraph separator",
}
_CUT = re.compile(r"[ \t]*#\w")
#: text that is the same with quotes and without
_PLAIN = re.compile(r"[^\W_](?:[\w /.()+;–-]*[\w.)])?")
_COLON = re.compile(r"\s*:")
_LOADER = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


class _Stop(Exception):
    """Leaves the reader after a problem was added."""


def read_tree(source: Source, problems: Problems) -> Node | None:
    """Return the tree of a file, or None after adding what is wrong with it."""
    text = source.text
    if len(text) > LARGEST:
        problems.add("file-too-large", Span(source, 0, 1), "the file is too large",
                     expected=f"{LARGEST:,} characters at most", found=f"{len(text):,}",
                     hint="share the work between files by `include`")  # fmt: skip
        return None
    if say_odd(source, problems):
        return None
    reader = _Reader(source, text, problems)
    try:
        root = reader.read()
    except (_Stop, yaml.YAMLError) as error:
        _tell_all(error, reader, problems)
        return None
    if root is None:
        problems.add("not-yaml", Span(source, 0, 1), "the file is empty", expected="a mapping of keys", found="nothing")
    return root


def _tell_all(error: Exception, reader: _Reader, problems: Problems) -> None:
    """Add what stopped a reader, then read on without the lines at fault: one run tells of all that is no YAML."""
    source, text, spent = reader.source, reader.text, 0
    while True:
        at = reader.stopped
        if isinstance(error, yaml.YAMLError):
            at = say_malformed(error, source, text, reader.cuts, problems)
        without, spent = _without(text, at), spent + len(text)
        if without == text or spent > LARGEST:
            return
        text = without
        reader = _Reader(source, text, problems)
        try:
            reader.read()
            return
        except (_Stop, yaml.YAMLError) as another:
            error = another


def _without(text: str, at: int) -> str:
    """Return a text of the same length with a line blank, and those that stand under it."""
    start = text.rfind("\n", 0, at) + 1
    end = text.find("\n", start) % (len(text) + 1)
    column = _indent(text[start:end])
    if "\t" in text[start : start + column + 1]:
        # how deep a tab was meant to be is told by the line above
        above = text[:start].rstrip().rpartition("\n")[2]
        column = _indent(above) + 2 * above.endswith(":")
    for line in text[end:].splitlines(keepends=True):
        if line.strip() and _indent(line) <= column:
            break
        end += len(line)
    return text[:start] + re.sub(r"[^\n]", " ", text[start:end]) + text[end:]


def _indent(line: str) -> int:
    return len(line) - len(line.lstrip(" "))


def written(text: str) -> str:
    """Return text as it is written in a file: plain where nothing in it could be read otherwise, else in quotes.

    For text on one line; it may stand in brackets and braces too.
    """
    return text if _PLAIN.fullmatch(text) else "'" + text.replace("'", "''") + "'"


def say_odd(source: Source, problems: Problems) -> bool:
    """Tell whether a text holds a character that no text file may hold; adds `odd-character`."""
    odd = _ODD.search(source.text)
    if odd is None:
        return False
    problems.add(
        "odd-character",
        Span(source, odd.start(), odd.end()),
        "this character has no place in a text file",
        expected="printable text and line ends",
        found=f"{_ODD_WORDS.get(odd[0], 'a control character')} (U+{ord(odd[0]):04X})",
        hint="delete it, or save the file as plain UTF-8 text",
    )
    return True


class _Reader:
    def __init__(self, source: Source, text: str, problems: Problems) -> None:
        self.source, self.text, self.problems = source, text, problems
        self.events = yaml.parse(text, Loader=_LOADER)
        self.count = 0
        #: where values are cut short by a comment sign, and where reading stopped
        self.cuts: list[int] = []
        #: brackets and braces that are open
        self.flow = 0
        self.stopped = 0

    def read(self) -> Node | None:
        root: Node | None = None
        for event in self.events:
            if isinstance(event, yaml.DocumentStartEvent):
                if root is not None:
                    self.stop("not-yaml", event, "a second document begins here", "one document a file", "`---`")
                root = self.node(next(self.events), 0)
        return root

    def span(self, event: yaml.Event) -> Span:
        first, last = event.start_mark, event.end_mark
        assert first is not None and last is not None
        return Span(self.source, first.index, max(min(last.index, len(self.source.text)), first.index))

    def stop(self, slug: str, event: yaml.Event, message: str, expected: str, found: str, hint: str = "") -> NoReturn:
        span = self.span(event)
        self.problems.add(slug, span, message, expected=expected, found=found, hint=hint)
        self.stopped = span.start
        raise _Stop

    def node(self, event: yaml.Event, depth: int) -> Node:
        self.count += 1
        if depth > DEEPEST or self.count > MOST_NODES:
            self.stop("file-too-large", event, "the file is nested too deeply or holds too much",
                      f"{DEEPEST} levels and {MOST_NODES:,} values at most", "more")  # fmt: skip
        if isinstance(event, yaml.AliasEvent) or getattr(event, "anchor", None):
            self.stop(
                "yaml-feature",
                event,
                "anchors and aliases are not read",
                "the value itself",
                "an anchor or alias",
                "write the value out; text that begins with & or * needs quotes",
            )
        if tag := getattr(event, "tag", None):
            self.stop("yaml-feature", event, "tags are not read", "the value without a tag", f"`{str(tag)[:40]}`",
                      "text that begins with ! needs quotes")  # fmt: skip
        if isinstance(event, yaml.ScalarEvent):
            return self.scalar(event)
        in_flow = bool(getattr(event, "flow_style", False))
        self.flow += in_flow
        inner = (
            self.sequence(event, depth) if isinstance(event, yaml.SequenceStartEvent) else self.mapping(event, depth)
        )
        self.flow -= in_flow
        return inner

    def scalar(self, event: yaml.ScalarEvent) -> Scalar | Told:
        span, quoted = self.span(event), event.style in ("'", '"')
        text = event.value
        if quoted:
            span = Span(self.source, span.start + 1, max(span.end - 1, span.start + 1))
            if event.style == '"' and "\\" in span.text:
                self.stop("yaml-feature", event, "escapes are not read", "plain quoted text", "a backslash",
                          "write the text in single quotes")  # fmt: skip
        elif not event.style and self.is_cut(span):
            return Told(span)
        # folded lines and doubled quotes: no part of the text has a place of its own
        return Scalar(text, Span(span.source, span.start, span.end, span.text != text), quoted)

    def is_cut(self, span: Span) -> bool:
        """Refuse `2 legs #4` unquoted: the reader of YAML takes ` #4` for a comment."""
        cut = _CUT.match(self.source.text, span.end)
        if cut is None or (cut[0][0] not in " \t" and span.end != span.start):
            return False
        start = cut.end() - 2
        end = self.source.text.find("\n", start)
        tail = self.source.text[start : end if end >= 0 else None].rstrip()
        lost = re.split(r"[,}\]]", tail)[0].rstrip() if self.flow else tail
        self.cuts.append(start)
        self.problems.add(
            "comment-cut", Span(self.source, start, start + len(tail)), "the rest of this line is read as a comment",
            expected="text that holds # after a space, or begins with it, in quotes", found=tail[:60],
            hint=f"write '{(span.text + cut[0][:-2] + lost).strip()[:60]}', or put a space after # in a comment",
        )  # fmt: skip
        return True

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
                self.stop("not-yaml", event, "a key must be a word", "a word", "a list or mapping",
                          "text that begins with { or [ needs quotes")  # fmt: skip
            if key.text == "<<" and not key.quoted:
                self.stop("yaml-feature", event, "merge keys are not read", "the keys themselves", "`<<`")
            value = self.node(next(self.events), depth + 1)
            if self.is_parted(entries, key, value):
                entries[-1] = (entries[-1][0], Told(entries[-1][1].span))
                continue
            if key.text in seen:
                self.problems.add("repeated-key", key.span, f"`{key.text[:40]}` stands twice",
                                  expected="every key once", found="a second value",
                                  hint="keep one of the two", related=((seen[key.text], "first here"),))  # fmt: skip
                continue
            seen[key.text] = key.span
            entries.append((key, value))
        return Mapping(tuple(entries), self.closed(start, event))

    def is_parted(self, entries: list[tuple[Scalar, Node]], key: Scalar, value: Node) -> bool:
        """Refuse `{f_c: 4,000 psi}`, once for all commas of a text."""
        before = entries[-1][1] if entries and self.flow else None
        if not isinstance(before, Scalar | Told) or key.quoted or not isinstance(value, Scalar) or value.quoted:
            return False
        if value.text or before.span.start == before.span.end or _COLON.match(self.source.text, key.span.end):
            return False
        if isinstance(before, Scalar):
            if before.quoted:
                return False
            say_parted(self.source, before.span.start, key.span, self.problems)
        return True

    def closed(self, start: yaml.Event, end: yaml.Event) -> Span:
        first, last = self.span(start), self.span(end)
        return Span(self.source, first.start, max(last.end, first.start))
