"""Readers of mapping fields: required, optional, one of a list; unknown keys with a near-miss hint.

Nodes in, plain values out; every mistake is a problem, and a value already told of is passed over in silence.
Knows no key names of its own.
"""

from __future__ import annotations

from collections.abc import Iterable

from calcreport.core.problems import Problems, listed
from calcreport.core.source import Span
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told


class Fields:
    """A mapping whose keys are known beforehand; anything else in it is a problem."""

    def __init__(
        self, node: Mapping, allowed: Iterable[str], what: str, problems: Problems, later: Iterable[str] = ()
    ) -> None:
        self.node, self.problems, self.what = node, problems, what
        self.span = node.span
        keys, coming = tuple(allowed), tuple(later)
        #: allowed keys that an unknown one seems to mean: they are not missing besides
        self.mistaken: set[str] = set()
        for key, _ in node.entries:
            if key.text in coming:
                say_not_yet(key, problems)
            elif key.text not in keys:
                problems.add(
                    "unknown-key", key.span, f"{what} has no key `{key.text[:40]}`",
                    expected=listed(keys), found=key.text[:40], hint=problems.near(key.text, keys),
                )  # fmt: skip
                self.mistaken.update(problems.close(key.text, keys))

    def node_of(self, key: str) -> Node | None:
        """Return the node under a key, or None where the key is missing or empty."""
        node = self.node.get(key)
        return None if node is not None and is_empty(node) else node

    def has(self, key: str) -> bool:
        """Tell whether a key stands there, empty or not."""
        return self.node.get(key) is not None

    def span_of(self, key: str) -> Span:
        """Return the place of a key's value, or of the mapping."""
        node = self.node.get(key)
        return node.span if node is not None else self.span.part(0, 1)

    def scalar(self, key: str, *, required: bool = False) -> Scalar | None:
        """Return the text under a key; a list or mapping there is a problem."""
        node = self.node_of(key)
        if node is None:
            if required:
                self.say_missing(key)
            return None
        return as_scalar(node, f"`{key}`", self.problems)

    def text(self, key: str, *, required: bool = False) -> str:
        """Return the text under a key, or ''."""
        scalar = self.scalar(key, required=required)
        return scalar.text if scalar else ""

    def choice(self, key: str, words: tuple[str, ...], *, required: bool = False) -> str:
        """Return one of `words`, or '' where the key is missing or wrong."""
        scalar = self.scalar(key, required=required)
        if scalar is None:
            return ""
        if scalar.text not in words:
            say_not_a_word(scalar, words, f"`{key}`", self.problems)
            return ""
        return scalar.text

    def whole(self, key: str, *, low: int, high: int, required: bool = False) -> int | None:
        """Return a whole number between bounds, or None."""
        scalar = self.scalar(key, required=required)
        if scalar is None:
            return None
        text = scalar.text
        if not (text.isascii() and text.isdecimal() and len(text) <= 9 and low <= int(text) <= high):
            self.problems.add("not-a-number", scalar.span, f"`{key}` is a whole number",
                              expected=f"a whole number from {low} to {high}", found=text[:40])  # fmt: skip
            return None
        return int(text)

    def mapping(self, key: str, *, required: bool = False) -> Mapping | None:
        """Return the mapping under a key, or None."""
        node = self.node_of(key)
        if node is None:
            if required:
                self.say_missing(key)
            return None
        return as_mapping(node, f"`{key}`", self.problems)

    def items(self, key: str, *, required: bool = False) -> tuple[Node, ...]:
        """Return the items of a list under a key; missing is an empty list."""
        node = self.node_of(key)
        if node is None:
            if required:
                self.say_missing(key)
            return ()
        return as_items(node, f"`{key}`", self.problems)

    def texts(self, key: str) -> tuple[Scalar, ...]:
        """Return a list of texts; one text alone counts as a list of one."""
        node = self.node_of(key)
        if node is None:
            return ()
        if isinstance(node, Scalar):
            return (node,)
        items = as_items(node, f"`{key}`", self.problems)
        found = (as_scalar(item, f"an entry of `{key}`", self.problems) for item in items)
        return tuple(scalar for scalar in found if scalar is not None)

    def say_missing(self, key: str) -> None:
        """Add `missing-key`, at the key where it stands without a value."""
        if key in self.mistaken:
            return
        at = next((name.span for name, _ in self.node.entries if name.text == key), None)
        self.problems.add(
            "missing-key", at or self.span.part(0, 1), f"{self.what} needs `{key}`", expected=f"`{key}: …`",
            found="the key without a value" if at else "no such key",
        )  # fmt: skip


def is_empty(node: Node) -> bool:
    """Tell whether nothing stands after the key."""
    return isinstance(node, Scalar) and not node.text and not node.quoted


def as_scalar(node: Node, what: str, problems: Problems) -> Scalar | None:
    """Return a node that must be text."""
    if isinstance(node, Scalar):
        return node
    if not isinstance(node, Told):
        found = "a list" if isinstance(node, Sequence) else "a mapping"
        problems.add("wrong-shape", node.span.part(0, 1), f"{what} must be text", expected="text", found=found,
                     hint="text that begins with { or [ needs quotes")  # fmt: skip
    return None


def as_mapping(node: Node, what: str, problems: Problems) -> Mapping | None:
    """Return a node that must be a mapping."""
    if isinstance(node, Mapping):
        return node
    if not isinstance(node, Told):
        problems.add("wrong-shape", node.span.part(0, 1), f"{what} must be a mapping",
                     expected="key: value pairs, one a line or {in: braces}", found=_words(node))  # fmt: skip
    return None


def as_items(node: Node, what: str, problems: Problems) -> tuple[Node, ...]:
    """Return the items of a node that must be a list."""
    if isinstance(node, Sequence):
        return node.items
    if not isinstance(node, Told):
        problems.add("wrong-shape", node.span.part(0, 1), f"{what} must be a list",
                     expected="entries that begin with `- `, or [in, brackets]", found=_words(node))  # fmt: skip
    return ()


def _words(node: Node) -> str:
    if isinstance(node, Scalar):
        return f"the text `{node.text[:40]}`" if node.text else "nothing"
    return "a list" if isinstance(node, Sequence) else "a mapping"


def say_not_a_word(scalar: Scalar, words: tuple[str, ...], what: str, problems: Problems) -> None:
    """Add `not-a-word` for text outside a closed list."""
    problems.add("not-a-word", scalar.span, f"`{scalar.text[:40]}` is not a word of {what}",
                 expected=listed(words), found=scalar.text[:40] or "nothing",
                 hint=problems.near(scalar.text, words))  # fmt: skip


def say_not_yet(key: Scalar, problems: Problems) -> None:
    """Add `not-yet` for what the template or project language has and this version does not read."""
    problems.add("not-yet", key.span, f"`{key.text[:40]}` is not read by this version",
                 expected="the work written out without it", found=key.text[:40],
                 hint="what it says would be missing from the sheets, so it is refused, not passed over")  # fmt: skip
