"""Settles variants: any leaf may be a mapping keyed by unit system, edition year, or both.

Tree in, tree out, for one system and one year; lines marked `only` for another are left out.
"""

from __future__ import annotations

import re

from calcreport.core.problems import Problems
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told

KEY = re.compile(r"(us|si)|(?:(us|si) )?((?:19|20)[0-9]{2})")


def settle(node: Node, system: str, year: str, problems: Problems) -> Node:
    """Return the tree for one system and year; a variant without an entry for them is `variant-hole`."""
    return _Settler(system, year, problems).settle(node)


class _Settler:
    def __init__(self, system: str, year: str, problems: Problems) -> None:
        self.problems = problems
        self.wanted = tuple(key for key in (f"{system} {year}".strip(), system, year) if key)

    def settle(self, node: Node) -> Node:
        if isinstance(node, Sequence):
            return Sequence(tuple(self.settle(item) for item in node.items if self.belongs(item)), node.span)
        if not isinstance(node, Mapping):
            return node
        keyed = sum(KEY.fullmatch(key.text) is not None for key, _ in node.entries)
        if keyed and keyed == len(node.entries):
            return self.settle(self.choose(node))
        if keyed:
            return self.mixed(node)
        return Mapping(tuple((k, self.settle(v)) for k, v in node.entries if self.belongs(v)), node.span)

    def choose(self, node: Mapping) -> Node:
        for wanted in self.wanted:
            chosen = node.get(wanted)
            if chosen is not None:
                return chosen
        self.problems.add(
            "variant-hole", node.span.part(0, 1), "a unit system or year has nothing here",
            expected="an entry " + " or ".join(f"`{key}`" for key in self.wanted) + ", which the template serves",
            found="only " + ", ".join(key.text for key, _ in node.entries),
            hint=f"add `{self.wanted[-2:][0]}: …` beside what stands there",
        )  # fmt: skip
        return Told(node.span)

    def mixed(self, node: Mapping) -> Node:
        key = next(key for key, _ in node.entries if KEY.fullmatch(key.text) is None)
        self.problems.add(
            "unknown-key", key.span, f"`{key.text[:40]}` is neither a unit system nor a year",
            expected="us, si, a year, or both, as the keys beside it", found=key.text[:40],
            hint=self.problems.near(key.text, ("us", "si")),
        )  # fmt: skip
        return Told(node.span)

    def belongs(self, node: Node) -> bool:
        """Tell whether a mapping with `only` is meant for this system and year."""
        only = node.get("only") if isinstance(node, Mapping) else None
        if only is None:
            return True
        if not isinstance(only, Scalar) or KEY.fullmatch(only.text) is None:
            self.problems.add(
                "not-a-word",
                only.span,
                "`only` names no unit system and no year",
                expected="us, si, a year, or both, as in us 2019",
                found=only.text[:40] if isinstance(only, Scalar) else "a list or mapping",
            )
            return True
        return only.text in self.wanted
