"""A method and a value found by another method, from the template to the sheet: numbers by hand, printed text by hand."""

from __future__ import annotations

import json
from contextlib import redirect_stdout
from io import StringIO
from pathlib import Path

import pytest
from pypdf import PdfReader

from calcreport.__main__ import main
from calcreport.calculate.margins import find_margins
from calcreport.commands.desk import Opened, open_project
from calcreport.core.record import replace
from calcreport.driver import work
from calcreport.second.agreement import compare_paths
from tests.proof.package import read_package
from tests.proof.prove import Proof, look
from tests.small import number, verdicts, work_or_problems, work_small, write_small

#: width 14 in., depth 24 in., 3 in.^2 of steel at 21.5 in., 4 ksi concrete under 0.85 of it
TEMPLATE = """\
symbols:
  b: {unit: in, says: width}
  h: {unit: in, says: depth}
  y: {unit: in, says: depth of a layer}
  A_s: {unit: in^2, says: area of a layer}
  P_u: {unit: kip, says: axial force}
  f_c: {unit: psi, says: concrete strength}
  f_y: {unit: ksi, says: bar strength}
  c: {unit: in, says: neutral axis}
  C_c: {unit: kip, says: force in the concrete}
  M_n: {unit: kip*ft, says: strength}
  M_0: {unit: kip*ft, says: strength without axial force}
  a: {unit: in, says: depth of the block}
given: {b: , h: , f_c: , f_y: , P_u: , layer: {rows: {y: , A_s: }, says: layers}}
lines:
  - method: section by fibres
    with: {b: b, h: h, layers: layer, y: y, A_s: A_s, P: P_u, stress: uniform, f: '0.85*f_c', share: '0.85',
      eps_cu: '0.003', f_y: f_y, E_s: '29000 ksi', displaced: deducted, fibres: '200'}
    gives: {c: c, C_c: C, M_n: M}
    as: fibre
    cite: '22.2'
  - {gives: a, formula: 'sum(A_s over layer)*f_y/(0.85*f_c*b)', cite: statics}
  - {gives: M_0, formula: 'sum(A_s over layer)*f_y*(max(y over layer) - a/2)', cite: statics}
  - by another method: M_0
    method: section by fibres
    with: {b: b, h: h, layers: layer, y: y, A_s: A_s, P: '0 kip', stress: STRESS, f: '0.85*f_c', SHAPE,
      eps_cu: '0.003', f_y: f_y, E_s: '29000 ksi', displaced: deducted, fibres: '200'}
    within: 0.005
    cite: '22.2'
"""
UNIFORM = TEMPLATE.replace("STRESS", "uniform").replace("SHAPE", "share: '0.85'")
#: a parabola without a level: two thirds of the stress on average, so more depth and less arm
SLOPE = TEMPLATE.replace("STRESS", "parabola").replace("SHAPE", "eps_0: '0.003'")
GIVEN = "{b: 14 in, h: 24 in, f_c: 4000 psi, f_y: 60 ksi, P_u: 100 kip, layer: [{y: 21.5 in, A_s: 3 in^2}]}"


def test_values_by_hand(tmp_path: Path) -> None:
    worked = work_small(tmp_path, UNIFORM, GIVEN)
    # C = 3(60) + 100 = 280 kip; a = 280/(0.85(4)(14)) = 5.88235 in.; c = a/0.85 = 6.92042 in.
    assert number(worked, "fibre.C_c") == pytest.approx(280)
    assert number(worked, "fibre.c") == pytest.approx(6.920415, abs=1e-6)
    # M = 280(12 - 5.88235/2) + 180(21.5 - 12) = 4246.471 kip-in = 353.8725 kip-ft
    assert number(worked, "fibre.M_n") == pytest.approx(353.8725, abs=1e-4)
    assert number(worked, "M_0.twin") == pytest.approx(3529.664 / 12, abs=1e-4)
    assert verdicts(worked) == {"strength without axial force by another method": ("OK", None)}


def test_beyond_the_bound_is_ng(tmp_path: Path) -> None:
    # the parabola's area is 2/3 f c and its middle at 3/8 c: c = 180/(2/3(3.4)(14)) = 5.67227 in.;
    # M = 180(21.5 - 0.375(5.67227)) = 3487.122 kip-in, 1.205 percent below 3529.664
    worked = work_small(tmp_path, SLOPE, GIVEN)
    assert number(worked, "M_0.difference") == pytest.approx(0.012053, abs=2e-5)
    assert verdicts(worked)["strength without axial force by another method"] == ("NG", None)
    assert worked.verdict == "NG"


def test_the_sheet(tmp_path: Path) -> None:
    project, pdf = write_small(tmp_path, UNIFORM, GIVEN), tmp_path / "x.pdf"
    with redirect_stdout(StringIO()):
        assert main(["build", str(project), "-o", str(pdf)]) == 0
    text = "\n".join(page.extract_text() for page in PdfReader(pdf).pages)
    flat = "".join(text.split())
    for line in (
        "Section by fibres: width b, depth h, steel layer at y from the compressed face of area As, axial force Pu, "
        "concrete stress uniform of 0.85 fc over 0.85 c, strain 0.003 at the compressed face, steel strength fy and "
        "modulus 29,000 ksi, displaced concrete deducted, 200 fibres.",
        "Cc = 280 kip",
        "c = 6.920 in.",
        "Mn = 353.9 kip·ft",
        "equilibrium: force in the concrete + force in the steel − axial force = 0.0000 kip of 280.0 kip",
        "equilibrium: force in the concrete + force in the steel − axial force = 0.0000 kip of 180.0 kip",
        "strength without axial force, by another method M0,2 = 294.1 kip·ft",
        "|294.1 − 294.1|/|294.1| = 0.000",
        "strength without axial force by another method Δ ≤ 0.005 : 0.000 ≤ 0.005 OK",
    ):
        assert "".join(line.split()) in flat, line
    found = Proof("small", pdf, 0, "")
    look(found, read_package(pdf), 9)
    assert found.account.counts["closures"] == 2
    assert [*found.account.findings, *found.account.unread, *found.marks, *found.order["pdfium"]] == []


def test_values_file_and_trace(tmp_path: Path) -> None:
    project, out = write_small(tmp_path, UNIFORM, GIVEN), StringIO()
    with redirect_stdout(out):
        assert main(["values", str(project), "--json"]) == 0
    found = json.loads(out.getvalue())["calculations"]["T1"]
    lines = {line["gives"]: line for line in found["lines"]}
    # givens take lines 1 to 6, the method 7, its three values 8 to 10, its sum 11
    assert (lines["fibre.c"]["line"], lines["fibre.c"]["method"], lines["fibre.c"]["from"]) == (
        8, "section by fibres", ["T1.7"],
    )  # fmt: skip
    first = found["closures"][0]
    assert (first["line"], first["name"], first["unit"]) == (11, "equilibrium", "kip")
    assert first["of"] == pytest.approx(280) and abs(first["residual"]) < 1e-9
    out = StringIO()
    with redirect_stdout(out):
        assert main(["trace", str(project), "T1.fibre.M_n"]) == 0
    assert "T1.10  fibre.M_n = 353.9 kip*ft  by the method section by fibres" in out.getvalue()
    assert "T1.5  P_u = 100 kip  [project file]" in out.getvalue()


def test_the_second_path_confirms_by_residual(tmp_path: Path) -> None:
    opened = open_project(str(write_small(tmp_path, UNIFORM, GIVEN)))
    assert isinstance(opened, Opened)
    project = work(opened.world, opened.source).worked
    assert project is not None
    assert compare_paths(project).differences == ()
    for output, share in (("c", 1e-7), ("M", 1e-7), ("C", 1e-7)):
        values = project.calculations[0].values
        key, result = next(iter(values.results.items()))
        wrong = {**result.outputs, output: result.outputs[output] * (1 + share)}
        values.results[key] = replace(result, outputs=wrong)
        told = compare_paths(project).differences
        values.results[key] = result
        assert any("section by fibres" in difference.second for difference in told), output


def test_a_method_without_a_result_stops(tmp_path: Path) -> None:
    worked = work_small(tmp_path, UNIFORM, GIVEN.replace("100 kip", "9000 kip"))
    assert worked.stop is not None and "beyond what the section bears" in worked.stop.words
    assert [check.verdict for check in worked.checks] == ["not evaluated"]


def test_margins_go_through_a_method(tmp_path: Path) -> None:
    worked = work_small(tmp_path, UNIFORM, GIVEN)
    # a layer outside the depth is no section: below 21.5 in. nothing is left to judge
    found = {worked.plan.slots[margin.slot].symbol.name: margin for margin in find_margins(worked)}
    assert found["h"].lower == pytest.approx(21.5 * 0.0254, rel=1e-6)


def test_in_every_row_of_a_set(tmp_path: Path) -> None:
    text = UNIFORM.split("  - {gives: a")[0].replace("P_u: ,", "force: {rows: {P_u: }, says: forces},", 1)
    head, lines = text.split("lines:\n")
    inner = "".join("      " + line + "\n" for line in lines.rstrip().split("\n"))
    check = "        - {check: bending, holds: 'fibre.M_n >= qty(300, kip*ft)', cite: statics}\n"
    given = GIVEN.replace("P_u: 100 kip", "force: [{P_u: 0 kip}, {P_u: 100 kip}]")
    worked = work_small(
        tmp_path, f"{head}lines:\n  - each: force\n    table: [P_u, fibre.M_n]\n    lines:\n{inner}{check}", given
    )
    slot = worked.plan.by_path["fibre.M_n"]
    found = [worked.values.rows[slot][row,] / worked.plan.slots[slot].symbol.unit.size for row in (0, 1)]  # type: ignore
    assert found == pytest.approx([3529.664 / 12, 353.8725], abs=1e-4)  # both by hand above
    assert [check.verdict for check in worked.checks] == ["NG", "OK"]
    project, pdf = tmp_path / "project.yaml", tmp_path / "x.pdf"
    with redirect_stdout(StringIO()):
        assert main(["build", str(project), "-o", str(pdf)]) == 1
    flat = "".join("".join(page.extract_text() for page in PdfReader(pdf).pages).split())
    assert "2100353.90.848" in flat  # the row of 100 kip in the table: 300/353.9 = 0.848


# ---------------------------------------------------------------- a method that makes sets

BEAM = """\
symbols:
  l: {unit: ft, says: span}
  w: {unit: kip/ft, says: load}
  EI: {unit: kip*ft^2, says: stiffness, shows: EI}
  hold: {one of: [pinned, fixed, spring, free], says: how it holds}
  placing: {one of: [everywhere, patterned], says: how it lies}
  n: {unit: '1', says: number of the span}
  a: {unit: ft, says: place}
  P: {unit: kip, says: point load}
  x: {unit: ft, says: place}
  M: {unit: kip*ft, says: moment}
  M_lo: {unit: kip*ft, says: least moment}
  R: {unit: kip, says: reaction}
  R_hi: {unit: kip, says: greatest reaction}
  R_most: {unit: kip, says: largest reaction}
  R_r: {unit: kip, says: resistance}
given:
  EI:
  R_r:
  span: {rows: {l: }, says: spans}
  support: {rows: {hold: }, says: supports}
  load: {rows: {placing: }, says: load cases}
  w: {over: [span, load]}
  point: {rows: {n: , a: }, least: 0, says: point loads}
  P: {over: [point, load]}
lines:
  - method: member on supports
    with: {spans: span, l: l, EI: EI, cut: '0', supports: support, hold: hold, k: '0', face: '0', cases: load, placing: placing,
      w: w, points: point, n_P: n, s_P: a, P: P, parts: '2'}
    gives: {station: stations, x: x, M: M, M_lo: M_lo, R: R, R_hi: R_hi}
    table: [R, R_hi]
    cite: statics
  - each: load
    table: [R_most]
    lines:
      - {gives: R_most, formula: 'max(R_hi over support)', cite: statics}
      - {check: bearing, holds: 'R_most <= R_r', cite: statics}
"""
#: two spans of 20 ft and an overhang of 4 ft under 1 kip/ft, dead and, wherever it is worse, live
SPANS = """{EI: 90000 kip*ft^2, R_r: 30 kip, span: [{name: a, l: 20 ft}, {name: b, l: 20 ft}, {name: c, l: 4 ft}],
  support: [{name: A, hold: pinned}, {name: B, hold: pinned}, {name: C, hold: pinned}, {name: D, hold: free}],
  load: [{name: D, placing: everywhere}, {name: L, placing: patterned}], point: [], P: {},
  w: {a: {D: 1 kip/ft, L: 1 kip/ft}, b: {D: 1 kip/ft, L: 1 kip/ft}, c: {D: 1 kip/ft, L: 1 kip/ft}}}"""


def test_sets_handed_and_made_by_a_method(tmp_path: Path) -> None:
    worked = work_small(tmp_path, BEAM, SPANS)
    # overhang: M = -1(4)^2/2 = -8; three moments: 80 M_2 + 20(-8) = -(8000 + 8000)/4, so M_2 = -48 kip-ft
    # R_1 = 10 - 48/20 = 7.6; R_2 = 12.4 + 10 + (48 - 8)/20 = 24.4; R_3 = 10 - 2 + 4 = 12 kip; sum 44 = 1(44)
    slot = worked.plan.by_path["R"]
    size = worked.plan.slots[slot].symbol.unit.size  # type: ignore[union-attr]
    found = [worked.values.rows[slot][node, 0] / size for node in range(4)]  # type: ignore[operator]
    assert found == pytest.approx([7.6, 24.4, 12.0, 0.0])
    # live on both spans and not on the overhang: 80 M_2 = -4000, so -50 kip-ft
    slot = worked.plan.by_path["M_lo"]
    size = worked.plan.slots[slot].symbol.unit.size  # type: ignore[union-attr]
    assert worked.values.rows[slot][0, 6, 1] / size == pytest.approx(-50)  # type: ignore[operator]
    # and 10 + 10 + 2(50)/20 = 25 kip at the middle support
    assert verdicts(worked)["bearing"] == ("OK", pytest.approx(25 / 30))
    names = {worked.plan.sets[index].name: found for index, found in enumerate(worked.values.names)}
    assert names["station"][2,] == ("start", "left", "left_d", "middle", "right_d", "right", "end")


def test_the_sheet_of_sets(tmp_path: Path) -> None:
    project, pdf = write_small(tmp_path, BEAM, SPANS), tmp_path / "x.pdf"
    with redirect_stdout(StringIO()):
        assert main(["build", str(project), "-o", str(pdf)]) == 0
    flat = "".join("".join(page.extract_text() for page in PdfReader(pdf).pages).split())
    for line in (
        "each point in the span numbered n at a with P, 2 parts a span.",
        # live on both spans and not on the overhang: 10 + 10 + 2(50/20) = 25; dead as above
        "A, D 7.6 7.6",
        "B, D 24.4 24.4",
        "B, L 24.4 25",
        "forces: reactions − loads = 0.00000 kip of",
        "moments about the left end: of reactions − of loads",
        "continuity: largest gap between the slopes left and right of a support",
        "0.833 OK",
    ):
        assert "".join(line.split()) in flat, line
    assert "middle" not in flat
    found = Proof("small", pdf, 0, "")
    look(found, read_package(pdf), 9)
    assert found.account.counts["closures"] == 3
    assert [*found.account.findings, *found.account.unread, *found.marks, *found.order["pdfium"]] == []


def test_values_that_are_not_printed_name_the_method(tmp_path: Path) -> None:
    project, out = write_small(tmp_path, BEAM, SPANS), StringIO()
    with redirect_stdout(out):
        assert main(["values", str(project), "--json"]) == 0
    lines = {line.get("path"): line for line in json.loads(out.getvalue())["calculations"]["T1"]["lines"]}
    # givens take lines 1 to 8, the method 9
    hidden, shown = lines["span[b].station[middle].load[L].M"], lines["support[B].load[L].R_hi"]
    assert (hidden["line"], hidden["from"], hidden["method"]) == (9, ["T1.9"], "member on supports")
    assert (shown["line"], shown["from"], shown["value"]) == (10, ["T1.9"], pytest.approx(25))


def test_the_trace_of_a_value_by_rows(tmp_path: Path) -> None:
    project, out = write_small(tmp_path, BEAM, SPANS), StringIO()
    with redirect_stdout(out):
        assert main(["trace", str(project), "T1.span[b].station[middle].load[L].M"]) == 0
    found = out.getvalue()
    assert "by the method member on supports" in found
    for line in ("l = 4 ft", "w = 1 kip/ft", "hold = free", "placing = patterned"):
        assert line in found, line


def test_the_second_path_works_a_member_by_forces(tmp_path: Path) -> None:
    opened = open_project(str(write_small(tmp_path, BEAM, SPANS)))
    assert isinstance(opened, Opened)
    project = work(opened.world, opened.source).worked
    assert project is not None and compare_paths(project).differences == ()
    values = project.calculations[0].values
    ((key, result),) = values.results.items()

    def told(output: str, by: float) -> str:
        changed = {row: value + by for row, value in result.by_row[output].items()}
        values.results[key] = replace(result, by_row={**result.by_row, output: changed})
        found = " ".join(difference.second for difference in compare_paths(project).differences)
        values.results[key] = result
        return found

    assert "R of a support is out" in told("R", 1.0)
    assert "M_lo at a station is out" in told("M_lo", 10.0)


@pytest.mark.parametrize(
    ("line", "other", "slug"),
    [
        ("cases: load", "cases: span", "row-leak"),
        ("points: point, n_P: n, s_P: a, P: P, ", "n_P: '1', ", "unknown-key"),
        ("hold: hold", "hold: placing", "wrong-shape"),
        ("hold: hold", "hold: l", "row-leak"),
        ("table: [R, R_hi]", "table: [R, EI]", "unknown-name"),
        ("station: stations, x: x", "x: x", "unknown-name"),
        ("w: w, ", "w: 'w*l', ", "unit-mismatch"),
        ("k: '0'", "k: EI", "unit-mismatch"),
    ],
)
def test_mistakes_in_what_a_method_is_handed(tmp_path: Path, line: str, other: str, slug: str) -> None:
    assert line in BEAM
    _, problems = work_or_problems(tmp_path, BEAM.replace(line, other), SPANS)
    assert slug in {problem.slug for problem in problems}, problems


def test_a_set_whose_row_is_open_is_not_handed_over(tmp_path: Path) -> None:
    head, lines = BEAM.split("lines:\n", 1)
    method = lines.split("  - each: load")[0]
    inner = "".join("    " + line + "\n" for line in method.rstrip().split("\n"))
    _, problems = work_or_problems(tmp_path, f"{head}lines:\n  - each: load\n    lines:\n{inner}", SPANS)
    assert any(p.slug == "row-leak" and "a row of it is open here" in p.message for p in problems), problems
