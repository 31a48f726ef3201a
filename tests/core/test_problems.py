"""The collector, and a problem as text: whole outputs, long lines, files shown as they were typed."""

from __future__ import annotations

from calcreport.core.problems import MOST_HINTED, MOST_KEPT, Problem, Problems, listed, nearest, render, to_json
from calcreport.core.source import Source, Span

TEXT = "given:\n  b: 16\n  h: 28 in\n"
SOURCE = Source("project.yaml", TEXT, "samples/mill")


def _span(text: str, source: Source = SOURCE) -> Span:
    start = source.text.index(text)
    return Span(source, start, start + len(text))


def test_rendered_whole() -> None:
    problem = Problem("bare-number", _span("16"), "`16` has no unit", "a length with its unit", "a bare number",
                      "write 16 in", ((_span("28 in"), "as here"),))  # fmt: skip
    assert render(problem) == (
        "samples/mill/project.yaml:2:6: error[bare-number]: `16` has no unit\n"
        "    2 |   b: 16\n"
        "      |      ^^\n"
        "  expected  a length with its unit\n"
        "  found     a bare number\n"
        "  hint      write 16 in\n"
        "  see       samples/mill/project.yaml:3:6  as here"
    )


def test_without_a_place() -> None:
    assert render(Problem("no-file", None, "x cannot be read", "a file", "none")).startswith("error[no-file]: x cannot")


def test_a_long_line_is_cut_about_the_place() -> None:
    source = Source("a", "x" * 500 + "HERE" + "y" * 500)
    place, line, mark, *_ = render(Problem("bad-text", _span("HERE", source), "m", "e", "f")).split("\n")
    assert place.startswith("a:1:501:")
    assert len(line) <= 160 and line[mark.index("^") : mark.index("^") + 4] == "HERE" and mark.count("^") == 4


def test_a_mark_at_the_end_of_a_file() -> None:
    source = Source("a", "b: [1")
    lines = render(Problem("not-yaml", Span(source, 5, 6), "m", "e", "f")).split("\n")
    assert lines[1:3] == ["    1 | b: [1", "      |      ^"]


def test_tabs_and_control_characters_are_harmless() -> None:
    source = Source("a", "b:\t\x1b[31mred")
    text = render(Problem("odd-character", Span(source, 3, 4), "m", "e", "\x07"))
    assert all(c == "\n" or c.isprintable() for c in text)
    assert text.split("\n")[2] == "      |    ^"


def test_for_machines() -> None:
    told = to_json(Problem("bare-number", _span("16"), "m", "e", "f", "h"))
    assert told == {
        "slug": "bare-number", "file": "samples/mill/project.yaml", "line": 2, "column": 6, "message": "m",
        "expected": "e", "found": "f", "hint": "h", "related": [],
    }  # fmt: skip


def test_the_same_words_at_the_same_place_are_kept_once_and_counted_twice() -> None:
    problems = Problems()
    for _ in range(2):
        problems.add("bad-text", _span("16"), "m", expected="e", found="f")
    problems.add("bad-text", _span("16"), "other words", expected="e", found="f")
    assert len(problems) == 2 and problems.met == 3


def test_sorted_by_file_and_place() -> None:
    problems = Problems()
    other = Source("a.yaml", TEXT)
    for span in (_span("28"), _span("16"), _span("28", other), None):
        problems.add("bad-text", span, "m")
    places = [p.span.place if p.span else "" for p in problems.sorted()]
    assert places == ["", "a.yaml:3:6", "samples/mill/project.yaml:2:6", "samples/mill/project.yaml:3:6"]


def test_problems_are_bounded_and_files_remembered() -> None:
    problems = Problems()
    for number in range(MOST_KEPT + 10):
        assert problems.near("phy", ["phi"]) == ("did you mean phi?" if number < MOST_HINTED else "")
        problems.add("bad-text", _span("16"), f"m{number}")
    assert len(problems) == MOST_KEPT and problems.met == MOST_KEPT + 10
    assert problems.stand_in([SOURCE]) and not problems.stand_in([Source("project.yaml", TEXT)])


def test_spellings() -> None:
    assert nearest("phiM", ["phiM_n", "phi", "M_u"]) == "did you mean phi or phiM_n?"
    assert nearest("zzz", ["phi"]) == ""
    assert listed(["a"]) == "a"
    assert listed([]) == "nothing"
    assert listed("abc") == "one of a, b, c"
    assert listed(map(str, range(30))).endswith("23, …")
