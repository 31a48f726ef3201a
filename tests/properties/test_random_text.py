"""Text of any kind put into the readers: a value or problems with a place inside the text, never an exception."""

from __future__ import annotations

from hypothesis import example, given, settings
from hypothesis import strategies as st

from calcreport.core.grammar import read_condition, read_formula
from calcreport.core.problems import Problems, render, to_json
from calcreport.core.quantity import Amount, read_amount
from calcreport.core.source import Source, Span
from calcreport.core.units import make_unit, read_unit
from calcreport.read.bars import BarSize, BarTable, read_callout
from calcreport.read.nodes import Scalar, read_tree
from calcreport.read.words import read_citation, read_pieces

SETTINGS = settings(max_examples=300, deadline=None, derandomize=True)
_PIECES = [
    "a",
    "f_c",
    "0",
    "1",
    "2.5",
    "1e9",
    "9" * 20,
    "+",
    "-",
    "*",
    "/",
    "^",
    "(",
    ")",
    "<=",
    "=",
    "==",
    "!=",
    "is",
    "and",
    "or",
    "not",
    "given(",
    "over",
    "where",
    "otherwise",
    "sum(",
    "min(",
    "num(",
    "qty(",
    ",",
    " ",
    "in",
    "kip",
    "kn",
    "%",
    "'",
    '"',
    "#",
    "#8",
    "@",
    "{",
    "}",
    "[",
    "]",
    ":",
    ": ",
    "\n",
    "\t",
    "- ",
    "&x",
    "*x",
    "!t",
    "|",
    ">",
    "?",
    "<<",
    "...",
    "---",
    "\u2212",
    "\u00b2",
    "\u0663",
    "\ufeff",
    "\x00",
    "\u202e",
    "\U0001d54f",
    "e\u0301",
    "//",
    "1/0",
    "ft",
    "legs",
    "No. 8",
    "25M",
]
TEXTS = st.one_of(st.text(max_size=60), st.lists(st.sampled_from(_PIECES), max_size=25).map("".join))
TABLE = BarTable(
    "us",
    "drawn",
    (BarSize("#8", *(Amount(make_unit((("in", n),)).scale, make_unit((("in", n),)), "1") for n in (2, 1))),),
)


def _hold(problems: Problems, text: str) -> None:
    for problem in problems.sorted():
        assert problem.span is not None
        assert 0 <= problem.span.start <= len(text) + 1
        assert problem.message and problem.expected and problem.found
        assert all(c == "\n" or c.isprintable() for c in render(problem))
        to_json(problem)


@SETTINGS
@given(TEXTS)
@example("(" * 200)
@example("-" * 200)
@example("not " * 90)
@example("2^" * 100)
@example("given(" * 50)
@example("a is " * 50)
@example("1" * 400)
def test_formulas(text: str) -> None:
    for reader in (read_formula, read_condition):
        problems = Problems()
        found = reader(text, Span(Source("text", text), 0, len(text)), problems)
        assert (found is None) == bool(problems)
        _hold(problems, text)


@SETTINGS
@given(TEXTS)
def test_amounts_units_and_callouts(text: str) -> None:
    span = Span(Source("text", text), 0, len(text))
    amounts, units, bars = Problems(), Problems(), Problems()
    assert (read_amount(text, span, amounts) is None) == bool(amounts)
    assert (read_unit(text, span, units) is None) == bool(units)
    for spaced in (False, True):
        read_callout(text, span, TABLE, spaced=spaced, problems=bars)
    for problems in (amounts, units, bars):
        _hold(problems, text)


@SETTINGS
@given(TEXTS)
def test_trees(text: str) -> None:
    problems = Problems()
    found = read_tree(Source("text", text), problems)
    assert found is not None or problems
    _hold(problems, text)


@SETTINGS
@given(TEXTS)
def test_words(text: str) -> None:
    scalar = Scalar(text, Span(Source("text", text), 0, len(text)), True)
    problems = Problems()
    read_pieces(scalar, problems)
    read_citation(scalar, "", problems)
    _hold(problems, text)
