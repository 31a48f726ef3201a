"""Settles variants: any leaf may be a mapping keyed by unit system, edition year, or both.

Tree in, tree out, for one system and one year; lines marked `only` for another are left out.
"""

from __future__ import annotations

import re

from calcreport.core.problems import Problems
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence

_KEY = re.compile(r"(us|si)|(?:(us|si) )?((?:19|20)\d\d)")


def settle(node: Node, system: str, year: str, problems: Problems) -> Node:
    """Return the tree for one system and year; a variant without an entry for them is `variant-hole`."""
    if isinstance(node, Scalar):
        return node
    if isinstance(node, Sequence):
        kept = (item for item in node.items if _belongs(item, system, year))
        return Sequence(tuple(settle(item, system, year, problems) for item in kept), node.span)
    if node.entries and all(_KEY.fullmatch(key.text) for key, _ in node.entries):
        return settle(_choose(node, system, year, problems), system, year, problems)
    return Mapping(
        tuple((k, settle(v, system, year, problems)) for k, v in node.entries if _belongs(v, system, year)),
        node.span,
    )


def _choose(node: Mapping, system: str, year: str, problems: Problems) -> Node:
    for wanted in (f"{system} {year}", system, year):
        chosen = node.get(wanted)
        if chosen is not None:
            return chosen
    problems.add(
        "variant-hole", node.span.part(0, 1), f"nothing here for {system} {year}",
        expected=f"an entry {system}, '{year}' or {system} {year}",
        found="only " + ", ".join(key.text for key, _ in node.entries),
    )  # fmt: skip
    return Scalar("", node.span, False)


def _belongs(node: Node, system: str, year: str) -> bool:
    """Tell whether a mapping with `only` is meant for this system and year."""
    if not isinstance(node, Mapping):
        return True
    only = node.get("only")
    return not isinstance(only, Scalar) or only.text in (system, year, f"{system} {year}")
