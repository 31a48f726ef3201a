"""Places in files: quotes, folded lines, other scripts, line ends; what stays text."""

from __future__ import annotations

import pytest

from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, read_tree


def _tree(text: str) -> Mapping:
    problems = Problems()
    root = read_tree(Source("f", text), problems)
    assert not problems and isinstance(root, Mapping)
    return root


def _scalar(node: Node | None) -> Scalar:
    assert isinstance(node, Scalar)
    return node


@pytest.mark.parametrize("written", ["b*h", "'b*h'", '"b*h"'])
def test_the_place_covers_the_text_between_quotes(written: str) -> None:
    scalar = _scalar(_tree(f"formula: {written}\n").get("formula"))
    assert scalar.text == scalar.span.text == "b*h"
    assert scalar.span.part(2, 3).text == "h"


def test_columns_count_characters_not_bytes() -> None:
    text = "note: é√漢𝄞 {x}\nb: 1\n"
    assert _scalar(_tree(text).get("note")).span.text == "é√漢𝄞 {x}"
    assert _scalar(_tree(text).get("b")).span.place == "f:2:4"


@pytest.mark.parametrize("written", ["'it''s'", "a\n  b", "'a\n  b'", "|\n  a\n  b", ">\n  a\n  b"])
def test_text_that_is_not_as_written_has_one_place(written: str) -> None:
    scalar = _scalar(_tree(f"note: {written}\n").get("note"))
    assert scalar.span.whole and scalar.span.part(1, 2) == scalar.span
    assert scalar.span.place == ("f:1:8" if written.startswith("'") else "f:1:7")


@pytest.mark.parametrize(
    "text", ["010", "12:30", "no", "on", "1e3", "~", "null", "2026-11-16", "0x1F", "1_000", ".inf"]
)
def test_nothing_is_typed(text: str) -> None:
    assert _scalar(_tree(f"a: {text}\n").get("a")).text == text


def test_comments_of_the_usual_kind_are_comments() -> None:
    tree = _tree("# head\na: 16 in  # width\nb: [1, 2] # two\nc: '#4'\nd: 4#8\n#end\n")
    assert [_scalar(tree.get(key)).text for key in "acd"] == ["16 in", "#4", "4#8"]
    assert isinstance(tree.get("b"), Sequence)


@pytest.mark.parametrize(
    "text", ["a: 2 legs #4\n", "a: #4\n", "a: [2 #4, 3]\n", "a: [#4, #5]\nb: 1\n", "- #4\n", "a: {b: #4, c: 1}"]
)
def test_a_value_cut_by_a_comment_sign_is_one_problem(text: str) -> None:
    problems = Problems()
    read_tree(Source("f", text), problems)
    assert [problem.slug for problem in problems.sorted()] == ["comment-cut"]
    span = problems.sorted()[0].span
    assert span is not None and span.text.startswith("#4")
