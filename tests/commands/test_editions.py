"""`calcreport editions`: which lines must differ between two editions, derived by hand from their clauses.

The two editions of ACI 318 differ for a beam in (common practice; the limits as in the published codes):
the tension-controlled limit of Table 21.2.2, 0.005 in 318-14 and eps_ty + 0.003 in 318-19; and the bar strength that
20.2.2.4 lets flexure count on, 80 ksi in 318-14 and 100 ksi in 318-19, in tables numbered 20.2.2.4a and 20.2.2.4(a).
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pypdf
import pytest

from tests.commands.desk import run

HEAD = """\
project: {title: Two Editions, number: E-1, address: none}
office: {name: (office)}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: IBC, year: 2024, amendments: none}, concrete: ACI 318-19, loads: ASCE/SEI 7-22}
criteria: {risk category: II, seismic design category: A}
revisions: [{number: 1, date: 2026-11-16, why: first}]
materials:
  C4: {f_c: 4000 psi}
  G60: {f_y: 60 ksi, E_s: 29000 ksi}
  G100: {f_y: 100 ksi, E_s: 29000 ksi}
calculations:
"""
SECTION = (
    "  - {{mark: {mark}, title: section, template: aci318/flexure-strength, concrete: C4, bars: {bars}, "
    "given: {{b: 12 in, d: 20 in, d_t: 20 in, d_in: 20 in, A_s: {steel}, rounded_eps_ty: no}}}}\n"
)
OWN = "  - {mark: X1, title: own, template: own, given: {b: 3 in}}\n"
OWN_TEMPLATE = """\
template: own
title: Own rules
code: {name: ACI 318, years: ['2014', '2019']}
units: [us]
covers: [width]
excludes: []
symbols:
  b: {unit: in, says: width}
  k: {unit: '1', says: factor}
  m: {unit: in, says: least width}
given: {b: }
lines:
  - {gives: k, formula: '1', cite: {'2014': 9.9.9.1, '2019': 9.9.9.2}}
  - {only: '2014', gives: m, formula: '4 in', cite: 9.9.9.3}
  - {only: '2014', check: least width, holds: 'b >= m', cite: 9.9.9.3}
  - {check: width, holds: 'b <= by_units(6 in, 150 mm)', cite: 9.9.9.4}
"""


def make(folder: Path, *sections: str) -> str:
    (folder / "project.yaml").write_text(HEAD + "".join(sections), encoding="utf-8")
    (folder / "own.yaml").write_text(OWN_TEMPLATE.replace("by_units(6 in, 150 mm)", "6 in"), encoding="utf-8")
    return str(folder)


def section(mark: str, steel: str, bars: str = "G60") -> str:
    return SECTION.format(mark=mark, steel=steel, bars=bars)


def compared(folder: str, mark: str = "all", edition: str = "ACI 318-14") -> tuple[int, dict[str, Any]]:
    ran = run("editions", folder, mark, "--concrete", edition, "--json")
    return ran.code, json.loads(ran.out)


def changes(told: dict[str, Any], mark: str) -> dict[str, dict[str, Any]]:
    return {change["path"]: change for change in told["calculations"][mark]["changes"]}


REQUIRED = "bar strength beyond what design may count on"


def test_a_section_between_the_two_limits(tmp_path: Path) -> None:
    # by hand: a = 4.30(60)/(0.85(4)(12)) = 6.323529; c = a/0.85 = 7.439446; eps_t = 0.003(20 - c)/c = 0.00506515
    # eps_ty = 60/29000 = 0.00206897, so eps_t is above 0.005 and below eps_ty + 0.003 = 0.00506897
    # 318-19: phi = 0.65 + 0.25(0.00506515 - 0.00206897)/0.003 = 0.899682; 318-14: 0.90
    # M_n = 4.30(60)(20 - a/2)/12 = 362.022 kip-ft
    code, told = compared(make(tmp_path, section("B1", "4.30 in^2")))
    found = changes(told, "B1")
    assert code == 1
    assert list(found) == [REQUIRED, "eps_tl", "phi", "phiM_n"]
    # by hand, on both sides alike: nine given values; beta_1, eps_cu, eps_ty, a, c, eps_t, M_n; steel yields
    assert told["calculations"]["B1"]["equal"] == 9 + 7 + 1
    limit, phi, strength = found["eps_tl"], found["phi"], found["phiM_n"]
    assert limit["differs"] == ["value", "formula"]
    assert limit["design"]["value"] == pytest.approx(60 / 29000 + 0.003, rel=1e-12)
    assert limit["compared"]["value"] == 0.005
    assert phi["differs"] == ["value", "formula", "case"]
    assert phi["design"]["value"] == pytest.approx(0.89968, abs=1e-5) and phi["compared"]["value"] == 0.9
    assert phi["design"]["case"] == "otherwise" and phi["compared"]["case"] == "eps_t >= eps_tl"
    assert strength["differs"] == ["value"]
    assert strength["design"]["value"] == pytest.approx(0.899682 * 362.022, abs=2e-3)
    assert strength["compared"]["value"] == pytest.approx(0.9 * 362.022, abs=2e-3)
    assert found[REQUIRED]["differs"] == ["formula", "citation"]


def test_the_terminal_reads_as_the_sheets_do(tmp_path: Path) -> None:
    # values as in the section between the two limits above; symbols as the notation of the trade has them
    ran = run("editions", make(tmp_path, section("B1", "4.30 in^2")), "B1", "--concrete", "ACI 318-14")
    rows = [" ".join(row.split()) for row in ran.out.split("\n")]
    at = next(i for i, row in enumerate(rows) if row.endswith("ε_tl −1.4 %"))
    assert rows[at + 1 : at + 3] == ["ACI 318-19 0.005069 = ε_ty + 0.003", "ACI 318-14 0.005"]
    # (0.9 - 0.899682)/0.899682 is 0.035 %
    assert any(row.endswith("φM_n under 0.1 %") for row in rows)
    assert "eps_t" not in ran.out and "phi" not in ran.out and "*" not in ran.out, "no template spelling"


def test_a_section_beyond_both_limits_keeps_its_strength(tmp_path: Path) -> None:
    # by hand: a = 2(60)/(0.85(4)(12)) = 2.941; c = 3.460; eps_t = 0.003(20 - c)/c = 0.0143: phi is 0.90 by both limits
    _, told = compared(make(tmp_path, section("B1", "2 in^2")))
    assert list(changes(told, "B1")) == [REQUIRED, "eps_tl"]


def test_a_stronger_bar_stops_the_earlier_edition(tmp_path: Path) -> None:
    # 100 ksi is above the 80 ksi of 318-14 and at the 100 ksi of 318-19
    folder = make(tmp_path, section("B1", "2 in^2", "G100"))
    code, told = compared(folder)
    stopped = told["calculations"]["B1"]["stopped"]
    assert code == 1 and stopped[0] is None and REQUIRED in stopped[1]
    ran = run("editions", folder, "all", "--concrete", "ACI 318-14")
    assert "to ACI 318-14 stopped" in ran.out and "M_n" not in ran.out, "lines not reached are counted, not listed"


def test_lines_and_checks_of_one_edition_and_a_verdict_that_flips(tmp_path: Path) -> None:
    # by hand: 3 in is below the 6 in of both and below the 4 in that only the earlier edition asks for
    code, told = compared(make(tmp_path, OWN))
    found = changes(told, "X1")
    assert code == 1 and told["calculations"]["X1"]["verdicts"] == ["OK", "NG"]
    assert told["calculations"]["X1"]["governing"] == ["width", "least width"]
    assert found["k"]["differs"] == ["citation"]
    for name in ("m", "least width"):
        assert found[name]["differs"] == ["only in second"] and found[name]["design"] is None
    assert found["least width"]["compared"]["verdict"] == "NG"
    # b and the check of width
    assert told["calculations"]["X1"]["equal"] == 2


def test_both_editions_take_the_candidate_of_the_design(tmp_path: Path) -> None:
    # by hand: the design takes 3 in, below the 6 in it asks for; the earlier edition alone would go on to 5 in
    chosen = OWN.replace("given: {b: 3 in}", "given: {}, choose: [{b: 3 in}, {b: 5 in}]")
    _, told = compared(make(tmp_path, chosen))
    assert told["calculations"]["X1"]["verdicts"] == ["OK", "NG"]
    assert "b" not in changes(told, "X1") and told["calculations"]["X1"]["equal"] == 2


def test_the_design_is_named_and_the_pair_held_against_the_adopted_code(tmp_path: Path) -> None:
    ran = run("editions", make(tmp_path, section("B1", "4.30 in^2")), "B1", "--concrete", "ACI 318-14")
    assert ran.out.startswith("ACI 318-19 is the design; ACI 318-14 is worked from the same given values, for compar")
    # the code of 2024 refers to 318-19 (its chapter of referenced standards)
    assert "IBC 2024, the adopted code, does not refer to ACI 318-14 but to ACI 318-19" in ran.out


def test_no_difference_is_exit_code_0(tmp_path: Path) -> None:
    folder = make(tmp_path, section("B1", "4.30 in^2"))
    ran = run("editions", folder, "all", "--loads", "ASCE/SEI 7-16")
    assert ran.code == 0 and "0 lines differ, 21 equal" in ran.out
    assert "not written to ASCE/SEI 7-22: B1 (21 lines)" in ran.out


def test_what_cannot_be_worked_is_said_and_never_called_equal(tmp_path: Path) -> None:
    own = OWN_TEMPLATE.replace("['2014', '2019']", "['2019']").replace("{'2014': 9.9.9.1, '2019': 9.9.9.2}", "9.9.9.2")
    folder = make(tmp_path, OWN, section("B1", "2 in^2"))
    (tmp_path / "own.yaml").write_text(own.replace("by_units(6 in, 150 mm)", "6 in"), encoding="utf-8")
    code, told = compared(folder)
    assert code == 1 and list(told["calculations"]) == ["B1"]
    assert told["not_compared"] == {"X1": "`own` is written for another edition: ACI 318-19"}
    alone = run("editions", folder, "X1", "--concrete", "ACI 318-14")
    assert alone.code == 2 and "error[edition-mix]" in alone.err and alone.err.count("error[") == 1


@pytest.mark.parametrize(
    ("mark", "edition", "said"),
    [
        ("B9", "ACI 318-14", "there is no calculation `B9`"),
        ("B1", "ACI 318-19", "`ACI 318-19` is the edition the project states"),
        ("B1", "ACI 318M-14", "`ACI 318M-14` is no edition of ACI 318"),
        ("B1", "ACI 318", "`ACI 318` is no edition of ACI 318"),
        ("B1", "ACI 318-11", "is written for another edition"),
    ],
)
def test_what_is_no_comparison(tmp_path: Path, mark: str, edition: str, said: str) -> None:
    folder = make(tmp_path, section("B1", "2 in^2"))
    target = tmp_path / "out.pdf"
    ran = run("editions", folder, mark, "--concrete", edition, "-o", str(target))
    assert ran.code == 2 and said in ran.err, ran.err
    assert not target.exists()


def test_an_edition_that_is_none_is_a_mistake_of_the_command_line(tmp_path: Path) -> None:
    # what the codes of templates/codes.yaml refer to: ACI 318 of 2014 and 2019
    folder = make(tmp_path, section("B1", "2 in^2"))
    for asked, what in (("foo", "is no edition of ACI 318"), ("ACI 318-19", "is the edition the project states")):
        ran = run("editions", folder, "B1", "--concrete", asked)
        assert ran.code == 2
        assert ran.err.splitlines()[:3] == [
            f"error[edition-mix]: `{asked}` {what}",
            "  expected  another edition of ACI 318, such as ACI 318-14",
            f"  found     --concrete '{asked}'",
        ]


def test_a_beam_under_an_earlier_edition(tmp_path: Path) -> None:
    # by hand, d = 19.01 - 1.5 - 0.375 - 0.635 = 16.5 in: a = 3.81(60)/(0.85(4)(12)) = 5.603, c = 6.592,
    # eps_t = 0.003(16.5 - 6.592)/6.592 = 0.00451: above the least of 0.004 (318-14, 9.3.3.1), below 0.00507 (318-19)
    # phi = 0.65 + 0.25(0.00451 - 0.00207)/(limit - 0.00207): 0.858 with the limit 0.005, 0.853 with 0.00507
    beam = (
        "  - {mark: B1, title: beam, template: aci318/beam-flexure, concrete: C4, bars: G60, given: {b: 12 in, "
        "h: 19.01 in, c_c: 1.5 in, stirrup: '#3', face: bottom, layer: [{name: first, steel: '3#10'}], c_l: none, "
        "M_u: 200 kip*ft, d_agg: 0.75 in, rounded_eps_ty: no, third_more: no, in_sfrs: no}}\n"
    )
    code, told = compared(make(tmp_path, beam))
    found = changes(told, "B1")
    assert code == 1 and told["calculations"]["B1"]["verdicts"] == ["NG", "OK"]
    assert told["calculations"]["B1"]["governing"] == ["tension-controlled section", "flexure"]
    assert found["tension-controlled section"]["differs"] == ["only in first"]
    assert found["tension-controlled section"]["design"]["verdict"] == "NG"
    assert found["least tension strain"]["differs"] == ["only in second"]
    assert found["least tension strain"]["compared"]["verdict"] == "OK"
    assert [found["phi"][side]["value"] for side in ("design", "compared")] == pytest.approx([0.853, 0.858], abs=5e-4)
    # the cap on f_y in 9.6.1.2 is of the later edition: another formula, and no other value below 80 ksi
    assert found["A_smin"]["differs"] == ["case"]
    assert {name for name, change in found.items() if "value" in change["differs"]} == {
        "eps_tl", "phi", "phiM_n", "flexure",
    }  # fmt: skip


def test_sheets_say_which_edition_is_not_the_design(tmp_path: Path) -> None:
    target = tmp_path / "out.pdf"
    folder = make(tmp_path, *(section(f"B{n}", "4.30 in^2") for n in range(1, 12)), OWN)
    assert run("editions", folder, "all", "--concrete", "ACI 318-14", "-o", str(target)).code == 1
    pages = [page.extract_text() for page in pypdf.PdfReader(target).pages]
    assert len(pages) > 1
    for number, text in enumerate(pages, 1):
        assert "NOT THE DESIGN: ACI 318-19 AGAINST ACI 318-14" in text and f"EDITIONS-{number}" in text
        assert "ACI 318-14, not the design" in text
    before = target.read_bytes()
    run("editions", folder, "all", "--concrete", "ACI 318-14", "-o", str(target))
    assert target.read_bytes() == before


def test_a_file_that_is_no_pdf_is_kept(tmp_path: Path) -> None:
    folder = make(tmp_path, section("B1", "2 in^2"))
    ran = run("editions", folder, "all", "--concrete", "ACI 318-14", "-o", str(tmp_path / "own.yaml"))
    assert ran.code == 2 and "error[cannot-write]" in ran.err
