"""The mutation tool on two small invented templates: what it alters, what notices, and what it says of the rest."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from pathlib import Path

import pytest

from calcreport.calculate.cases import run_case
from calcreport.core.expression import Attach, Binary, Call, Compare, Logic, Number, Over, Strip
from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.filesystem import Disk, library_folder
from calcreport.read.model import Drawing
from tests.mutation.equivalents import Equivalents, read_equivalents
from tests.mutation.handed import bar_mutants
from tests.mutation.judge import missed
from tests.mutation.mutants import mutants_of
from tests.mutation.run import Report, run, sources, table
from tests.mutation.shelf import Shelf, Unsound, read_shelf
from tests.mutation.sources import kind_of
from tests.mutation.trial import planned

HEAD = "code: {name: DEMO, years: ['2020']}\nunits: [us]\ncovers: []\nexcludes: []\n"
SYMBOLS = """\
A: {unit: in^2, says: area}
A_1: {unit: in^2, says: steel of a row}
R: {unit: kip, says: resistance}
b: {unit: in, says: width}
f: {unit: ksi, says: stress}
g: {unit: '1', says: load factor}
h: {unit: in, says: depth}
k: {unit: '1', says: size factor}
q: {unit: kip, says: load}
Q: {unit: kip, says: factored load}
"""
FACTOR = f"""\
template: factor
title: Size factor
{HEAD}given: {{h: {{range: '> 0'}}}}
lines:
  - gives: k
    cite: 1.2
    branches:
      - {{when: 'h <= 10 in', formula: '1'}}
      - {{otherwise: '10 in/h'}}
"""
PLATE = f"""\
template: plate
title: Plate
{HEAD}given:
  b: {{range: '> 0'}}
  h: {{range: '> 0'}}
  f:
  q: {{if none: 0 kip}}
  row: {{rows: {{steel: {{kind: bars, gives: {{A_1: area}}, says: bars}}}}, names: [upper, lower], says: rows}}
lines:
  - {{part: factor, same: [h]}}
  - {{gives: A, formula: 'b*h - sum(A_1 over row)', cite: geometry}}
  - {{gives: R, formula: 'k*f*A', cite: 1.3}}
  - rows: combination
    cite: 1.4
    columns: {{g: }}
    list:
      - {{name: one, g: '1.4'}}
      - {{name: two, when: 'q > 50 kip', g: '1.6'}}
  - {{gives: Q, formula: 'q*max(g over combination)', cite: 1.4}}
  - {{check: resistance, holds: 'Q <= R', cite: 1.3}}
"""
BARS = """\
bars: us
source: DEMO Table 1
sizes:
  - {name: '#3', area: 0.5 in^2, diameter: 0.8 in}
  - {name: '#4', area: 1 in^2, diameter: 1.1 in}
"""


def case(name: str, given: str, expect: Iterable[tuple[str, str]], source: str) -> str:
    rows = "".join(f"    {path}: {{{value}, source: '{source}'}}\n" for path, value in expect)
    return f"- case: {name}\n  units: us\n  given: {{{given}}}\n  expect:\n{rows}"


UPPER, LOWER = "{name: upper, steel: '1#3'}", "{name: lower, steel: '2#4'}"


def cases(source: str = "hand: a sum written out") -> str:
    """Return cases that leave one limit without a tie, and nothing else."""
    exact = ", tol: 0.0000001"
    return "".join(
        (
            case("wide", f"b: 21 in, h: 5 in, f: 2 ksi, q: none, row: [{UPPER}, {LOWER}]",
                 (("k", f"value: 1{exact}"), ("A", f"value: 102.5 in^2{exact} in^2"),
                  ("R", f"value: 205 kip{exact} kip"), ("Q", f"value: 0 kip{exact} kip"),
                  ("combination[one].g", f"value: 1.4{exact}"),
                  ("resistance", "outcome: OK")), source),
            case("hardly deep", f"b: 21 in, h: 10.05 in, f: 2 ksi, q: 60 kip, row: [{UPPER}]",
                 (("k", f"value: 0.9950249{exact}"), ("combination[two].g", f"value: 1.6{exact}"),
                  ("Q", f"value: 96 kip{exact} kip")), source),
            case("deep", f"b: 41 in, h: 20 in, f: 0.2 ksi, q: 50 kip, row: [{UPPER}, {LOWER}]",
                 (("k", f"value: 0.5{exact}"), ("R", f"value: 81.75 kip{exact} kip"),
                  ("Q", f"value: 70 kip{exact} kip"), ("resistance", "ratio: 0.8562691, tol: 0.0000001")), source),
            case("too much", "b: 14.5 in, h: 10 in, f: 0.5 ksi, q: 50.5 kip, row: [{name: upper, steel: '1#3'}]",
                 (("Q", f"value: 80.8 kip{exact} kip"), ("resistance", "outcome: NG")), source),
            case("all used", "b: 14.5 in, h: 10 in, f: 0.5 ksi, q: 45 kip, row: [{name: upper, steel: '2#3'}]",
                 (("R", f"value: 72 kip{exact} kip"), ("resistance", "outcome: OK")), source),
            case("just used", "b: 14.1 in, h: 10 in, f: 0.5 ksi, q: 50 kip, row: [{name: upper, steel: '1#4'}]",
                 (("resistance", "outcome: OK"),), source),
        )
    )  # fmt: skip


def shelf(folder: Path, cases_text: str, plate: str = PLATE) -> Shelf:
    demo = folder / "demo"
    demo.mkdir()
    files = {"symbols": SYMBOLS, "factor": FACTOR, "plate": plate, "plate.cases": cases_text, "bars-us": BARS}
    for name, text in files.items():
        (demo / f"{name}.yaml").write_text(text, encoding="utf-8")
    return read_shelf(Disk(folder, folder))


def left(report: Report) -> list[str]:
    return [f"{t.fate}: {t.mutant.line}: {t.mutant.formula}: {t.mutant.says}" for t in report.open]


TEMPLATES = ("demo/factor", "demo/plate")
#: the part gives 1 at its limit by either arm
SLOPE = "survived: k: h <= 10 in: <= → < in h <= 10 in"


def test_what_notices_and_what_does_not(tmp_path: Path) -> None:
    found = shelf(tmp_path, cases())
    report = run(found, Equivalents({}), TEMPLATES)
    assert left(report) == [SLOPE]
    fates = {t.fate for sheet in report.sheets for t in sheet.told}
    assert fates == {"killed", "refused", "survived"}
    part = next(sheet for sheet in report.sheets if sheet.file == "demo/factor")
    assert part.count("killed") > 5, "the cases of the template that uses it hold a part"
    assert table(report)[-1].split()[0] == "all"
    assert sources(found)[0].startswith("hand ")
    bars = run(found, Equivalents({}), ("demo/bars-us",))
    assert {t.mutant.formula for t in bars.open} == {"diameter"}, "no template reads it, so no case holds it"
    assert bars.sheets[0].count("killed") == 4


def test_a_case_that_is_missing_leaves_its_mutants_open(tmp_path: Path) -> None:
    text = "- case".join(cases().split("- case")[:-1])
    assert set(left(run(shelf(tmp_path, text), Equivalents({}), ("demo/plate",)))) == {
        "survived: check resistance: Q <= R: <= → < in Q <= R",
    }


def test_own_computations_do_not_count(tmp_path: Path) -> None:
    report = run(shelf(tmp_path, cases("own computation: another program")), Equivalents({}), ("demo/plate",))
    assert {t.fate for t in report.open} == {"own"}
    assert not report.sound
    assert sum(sheet.count("killed") for sheet in report.sheets) == 0


def test_equivalents_explain_and_go_stale(tmp_path: Path) -> None:
    entry = "- file: demo/factor\n  line: k\n  formula: 'h <= 10 in'\n  mutations: [{}]\n  reason: {}\n"
    listed = read_equivalents(entry.format("'<= → < in h <= 10 in'", "both arms give 1 at the limit"))
    found = shelf(tmp_path, cases())
    assert run(found, listed, TEMPLATES).sound
    wrong = read_equivalents(entry.format("'<= → > in h <= 10 in', 'h → nothing'", "no reason"))
    assert run(found, wrong, ("demo/factor",)).stale == (
        "demo/factor | k | h <= 10 in | <= → > in h <= 10 in: it is killed",
        "demo/factor | k | h <= 10 in | h → nothing: there is no such mutant",
    )
    assert not run(found, wrong, ("demo/plate",)).stale, "entries of other files are not judged"


@pytest.mark.parametrize("text", ["- {file: a}", "- {file: a, line: b, formula: c, mutations: [d], reason: ' '}"])
def test_an_equivalent_needs_every_key(text: str) -> None:
    with pytest.raises(ValueError, match="an entry needs"):
        read_equivalents(text)


def test_what_is_altered(tmp_path: Path) -> None:
    found = shelf(tmp_path, cases())
    said = {(m.line, m.formula, m.says) for m in mutants_of("demo/plate", found)}
    area = "b*h - sum(A_1 over row)"
    assert {says for line, formula, says in said if formula == area} == {
        "sign flipped", "- → + before sum(A_1 over row)", "* → / before h", "sum → max over row", "b → h", "h → b",
        "A_1 → A",
    }  # fmt: skip
    assert {says for line, formula, says in said if line == "check resistance"} == {
        "line left out", "<= → < in Q <= R", "<= → >= in Q <= R", "<= → > in Q <= R", "Q → R", "R → Q", "Q → q",
        "R → q",
    }  # fmt: skip
    assert ("rows combination", "", "row 1, one, with the cells of row 2") in said
    assert ("rows combination: two", "q > 50 kip", "1.01 × 50 kip") in said
    assert ("Q", "q*max(g over combination)", "max → min over combination") in said
    assert all(m.file == "demo/plate" for m in mutants_of("demo/plate", found))
    factor = {(m.formula, m.says) for m in mutants_of("demo/factor", found)}
    assert {("", "arms 1 and 2 exchange what they give"), ("", "arm 1 left out")} <= factor
    bars = {f"{m.line} {m.formula} {m.says}" for m in bar_mutants(found)}
    assert {"bar #3 area 1.01 × 0.5 in^2", "bar #3 area that of #4", "bar #4 diameter that of #3"} <= bars


def test_the_judge_agrees_with_lint(tmp_path: Path) -> None:
    found = shelf(tmp_path, cases())
    (variant,) = found.of("demo/plate")
    for mutant in mutants_of("demo/plate", found):
        plan, _ = planned(variant, mutant)
        for held in variant.cases if plan is not None else ():
            assert plan is not None
            problems = Problems()
            worked = run_case(held.case, plan, problems)
            assert worked is not None
            assert bool(list(missed(held.case, worked))) == bool(problems), (mutant.says, held.case.name)


def test_a_mutant_leaves_the_template_as_it_was(tmp_path: Path) -> None:
    found = shelf(tmp_path, cases())
    before = [repr(variant.template.body) for variant in found.variants]
    run(found, Equivalents({}), ())
    assert [repr(variant.template.body) for variant in found.variants] == before


def formula_nodes(record: object) -> Iterator[tuple[str, int, int, str]]:
    """Yield every node of every formula below a record, by its own fields: figures and names alone are left out."""
    if isinstance(record, tuple):
        for item in record:
            yield from formula_nodes(item)
    elif not isinstance(record, Drawing | Span | Source):
        if isinstance(record, Number | Binary | Compare | Logic | Call | Over | Strip | Attach):
            yield record.span.source.name, record.span.start, record.span.end, type(record).__name__
        for field in getattr(record, "__match_args__", ()):
            yield from formula_nodes(getattr(record, field))


def test_no_formula_of_the_library_is_passed_over() -> None:
    found = read_shelf(Disk(Path(), library_folder()))
    for variant in found.variants:
        missing = set(formula_nodes(variant.template.body)) - {key[:4] for key in variant.steps}
        assert not missing, (variant.name, variant.words, sorted(missing)[:3])


def test_a_method_and_its_twin_are_altered_too() -> None:
    """Inputs of a method, the words that choose, the line as a whole; outputs of one dimension exchanged."""
    found = mutants_of("aci318/flexure-layers", read_shelf(Disk(Path(), library_folder())))
    said = {(mutant.line, mutant.says) for mutant in found}
    assert ("section in bands by fibres", "displaced is kept") in said
    assert ("section in bands by fibres", "line left out") in said
    assert ("f of section in bands by fibres", "1.01 × 0.85") in said
    assert ("M_n by another method", "1.01 × 0.005") in said


def test_a_template_that_is_wrong_already_is_refused(tmp_path: Path) -> None:
    with pytest.raises(Unsound, match="differs"):
        shelf(tmp_path, cases(), PLATE.replace("k*f*A", "k*f*A*1.1"))


@pytest.mark.parametrize(
    ("words", "kind"),
    [
        ("ACI 318-19 Table 21.2.2 (from memory)", "publication"),
        ("ASCE/SEI 7-22 2.3.1", "publication"),
        ("an author, A Book on Beams, 9th ed., Example 3.2", "publication"),
        ("hand: 1.2(100) + 1.6(80)", "hand"),
        ("hand: factors of ASCE/SEI 7-22 2.3.1 on 50 and -20", "hand"),
        ("1020 is below 1500", "hand"),
        ("geometry: 20.1 ft is more than 20 ft", "exact"),
        ("own computation from ACI 318-19 Table 21.2.2", "own"),
        ("independent computation, 30 digits", "own"),
        ("midspan", "unstated"),
        ("either", "unstated"),
    ],
)
def test_sources_by_their_words(words: str, kind: str) -> None:
    assert kind_of(words) == kind
