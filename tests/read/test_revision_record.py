"""One row put into a project file: every other character stays where it was."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.read.model import Issue
from calcreport.read.nodes import Mapping, Scalar, Sequence, read_tree, written
from calcreport.read.revision_record import append_row, inserted_raw

ROW = Issue("2", "2026-12-01", "columns moved, grid C")
MADE = "{number: 2, date: 2026-12-01, why: 'columns moved, grid C'}"
FIRST = "{number: 1, date: 2026-11-16, why: first}"

#: the text, and the same text as it should stand; written out by hand
LAYOUTS = {
    "a row a line": (
        f"a: 1\nrevisions:   # newest last\n  - {FIRST}   # to the city\n\n# next\nb: 2\n",
        f"a: 1\nrevisions:   # newest last\n  - {FIRST}   # to the city\n  - {MADE}\n\n# next\nb: 2\n",
    ),
    "not indented, at the end, without a line end": (f"revisions:\n-  {FIRST}", f"revisions:\n-  {FIRST}\n-  {MADE}"),
    "one line": (f"revisions: [{FIRST}]  # x\nb: 2\n", f"revisions: [{FIRST}, {MADE}]  # x\nb: 2\n"),
    "one line with a comma": (f"revisions: [{FIRST} , ]\n", f"revisions: [{FIRST}, {MADE} , ]\n"),
    "none": ("revisions: []\nb: 2\n", f"revisions: [{MADE}]\nb: 2\n"),
    "brackets over lines": (
        f"revisions: [\n    {FIRST}   # one\n  ]\nb: 2\n", f"revisions: [\n    {FIRST},   # one\n    {MADE}\n  ]\nb: 2\n",
    ),
    "brackets over lines with a comma": (
        f"revisions: [\n    {FIRST},   # one\n]\n", f"revisions: [\n    {FIRST},   # one\n    {MADE},\n]\n",
    ),
    "all in braces": (f"{{a: 1, revisions: [{FIRST}], b: 2}}", f"{{a: 1, revisions: [{FIRST}, {MADE}], b: 2}}"),
    "keys on lines of their own": (
        "revisions:\n  - why: first\n    number: 1   # one\n    date: 2026-11-16   # a Monday\n  # after\nb: 2\n",
        "revisions:\n  - why: first\n    number: 1   # one\n    date: 2026-11-16   # a Monday\n"
        "  - why: 'columns moved, grid C'\n    number: 2\n    date: 2026-12-01\n  # after\nb: 2\n",
    ),
    "folded words": (
        "revisions:\n  - number: 1\n    date: 2026-11-16\n    why: >-\n      first\n      submittal\n\nb: 2\n",
        "revisions:\n  - number: 1\n    date: 2026-11-16\n    why: >-\n      first\n      submittal\n"
        "  - number: 2\n    date: 2026-12-01\n    why: 'columns moved, grid C'\n\nb: 2\n",
    ),
    "quoted words over lines": (
        "revisions:\n  - {number: 1, date: 2026-11-16, why: 'first\n     # submittal'}\nb: 2\n",
        f"revisions:\n  - {{number: 1, date: 2026-11-16, why: 'first\n     # submittal'}}\n  - {MADE}\nb: 2\n",
    ),
}  # fmt: skip


@pytest.mark.parametrize("layout", LAYOUTS)
def test_a_row_is_written_the_way_the_last_one_is(layout: str) -> None:
    text, expected = LAYOUTS[layout]
    found = append_row(Source("p.yaml", text), ROW)
    assert found is not None and found.text == expected
    # with a mark and line ends of another kind the same lines are put between the same lines
    raw = "\ufeff" + text.replace("\n", "\r\n")
    assert inserted_raw(raw, found.insertions) == "\ufeff" + expected.replace("\n", "\r\n")
    assert inserted_raw(text, found.insertions) == expected


def test_line_ends_of_both_kinds_stay_as_they_are() -> None:
    raw = f"a: 1\r\nb: 2\nrevisions:\r\n  - {FIRST}\r\nc: 3\n"
    found = append_row(Source("p.yaml", raw.replace("\r\n", "\n")), ROW)
    assert found is not None
    assert inserted_raw(raw, found.insertions) == f"a: 1\r\nb: 2\nrevisions:\r\n  - {FIRST}\r\n  - {MADE}\r\nc: 3\n"


@pytest.mark.parametrize(
    "text", ["a: 1\n", "revisions:\n", "revisions: {a: 1}\n", "revisions: [a]\n", "- a\n", "", "revisions:\n  -\n    # x\n    number: 1\n"],
)  # fmt: skip
def test_a_layout_that_cannot_be_written_into_is_left(text: str) -> None:
    assert append_row(Source("p.yaml", text), ROW) is None


@given(
    st.text(
        st.characters(exclude_categories=["Cc", "Cs", "Zl", "Zp"], exclude_characters="\ufeff\ufffe\uffff"), min_size=1
    )
    .map(str.strip)
    .filter(bool)
)
def test_any_words_are_read_as_they_were_written(words: str) -> None:
    text = f"a: {{b: {written(words)}, c: [{written(words)}]}}\n"
    tree = read_tree(Source("p.yaml", text), Problems())
    assert isinstance(tree, Mapping)
    node = tree.get("a")
    assert isinstance(node, Mapping)
    one, other = node.get("b"), node.get("c")
    assert isinstance(one, Scalar) and one.text == words
    assert isinstance(other, Sequence)
    item = other.items[0]
    assert isinstance(item, Scalar) and item.text == words
