"""A formula written and read again is the same formula; places lie inside the text."""

from __future__ import annotations

from typing import Any

from hypothesis import assume, given, settings

from calcreport.core.expression import Node, walk
from calcreport.core.grammar import read_condition, read_formula
from calcreport.core.problems import Problems, render
from calcreport.core.source import Source, Span
from calcreport.core.tokens import LONGEST
from tests.properties.formulas import CONDITIONS, FORMULAS, shape, written

SETTINGS = settings(max_examples=300, deadline=None, derandomize=True)


def _read_again(text: str, reader: Any) -> Node:
    assume(len(text) <= LONGEST)
    problems = Problems()
    source = Source("formula", "x: '" + text + "'")
    found = reader(text, Span(source, 4, 4 + len(text)), problems)
    assert found is not None, "\n".join(render(problem) for problem in problems.sorted())
    return found  # type: ignore[no-any-return]


@SETTINGS
@given(FORMULAS)
def test_formula(tree: Node) -> None:
    text = written(tree)
    again = _read_again(text, read_formula)
    assert shape(again) == shape(tree)
    assert written(again) == text


@SETTINGS
@given(CONDITIONS)
def test_condition(tree: Node) -> None:
    text = written(tree)
    again = _read_again(text, read_condition)
    assert shape(again) == shape(tree)
    assert written(again) == text


@SETTINGS
@given(FORMULAS)
def test_every_node_has_its_own_text(tree: Node) -> None:
    """What a node's place covers, read alone, is that node: marks under mistakes stand right."""
    again = _read_again(written(tree), read_formula)
    for node in walk(again):
        if type(node).__name__ not in ("Compare", "Logic", "Not", "Is", "IsGiven"):
            inner = read_formula(node.span.text, node.span, Problems())
            assert inner is not None and shape(inner) == shape(node)
