"""`calcreport field`: what a member built otherwise comes to, against sums by hand; and what is left as it was."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

import pypdf
import pytest

from tests.commands.desk import Ran, run

SAMPLE = Path(__file__).parents[2] / "samples" / "mill-lane"
BANNED = ("certified", "approved", "checked", "compliant", "safe")


@pytest.fixture
def mill(tmp_path: Path) -> Path:
    shutil.copytree(SAMPLE, tmp_path / "mill")
    return tmp_path / "mill"


def asked(folder: Path, mark: str, *changes: str, reply: str = "RFI-031", name: str = "answer.pdf") -> Ran:
    return run("field", str(folder), mark, *changes, "--reply", reply, "-o", str(folder.parent / name), "--json")


def answered(folder: Path, mark: str, *changes: str, code: int = 0) -> dict[str, Any]:
    ran = asked(folder, mark, *changes)
    assert ran.code == code, ran.err + ran.out
    found: dict[str, Any] = json.loads(ran.out)
    return found


def rows(told: dict[str, Any], kind: str) -> dict[str, dict[str, Any]]:
    return {f"{one['mark']}.{one['path']}": one for one in told[kind]}


def test_a_beam_built_narrower_of_weaker_concrete(mill: Path) -> None:
    told = answered(mill, "B1", "b=15in", "f_c=3600psi")
    changed = rows(told, "changed")
    assert [(one["as_designed"]["shown"], one["as_built"]["shown"]) for one in changed.values()] == [
        ("16 in.", "15 in."), ("4,000 psi", "3,600 psi"),
    ]  # fmt: skip
    # by hand: d = 28 - 1.5 - 0.5 - 1.128/2 = 25.436; A_s f_y = 240 kip
    # a = 240/(0.85(4)(16)) = 4.41176 and 240/(0.85(3.6)(15)) = 5.22876; both sections are tension-controlled
    # phi M_n = 0.9(240)(25.436 - a/2)/12; M_u = w l^2/8, w = 1.2(0.95 + 16(28)(0.15)/144) + 1.6(1.25) = 3.7 kip/ft
    designed, built = (0.9 * 240 * (25.436 - a / 2) / 12 for a in (240 / 54.4, 240 / 45.9))
    flexure, strength = rows(told, "checks")["B1.flexure"], rows(told, "values")["B1.phiM_n"]
    moment = 3.7 * 28.5**2 / 8
    for side, by_hand in (("as_designed", designed), ("as_built", built)):
        assert strength[side]["value"] == pytest.approx(by_hand, rel=1e-9)
        assert flexure[side]["value"] == pytest.approx(moment / by_hand, rel=1e-9)
        assert flexure[side]["verdict"] == "OK"
    # by hand, 9.6.1.2: 3 sqrt(4000) = 189.7 is below 200, so A_smin = 200 b d/60000
    least = rows(told, "values")["B1.A_smin"]
    assert least["as_designed"]["value"] == pytest.approx(200 * 16 * 25.436 / 60000, rel=1e-9)
    assert least["as_built"]["value"] == pytest.approx(200 * 15 * 25.436 / 60000, rel=1e-9)
    # nothing takes a value from B1; its loads and its seat give the same width on their own, others the same concrete
    assert "B1" not in told["unaffected"] and len(told["unaffected"]) == 13
    assert any("in FL1, SE1 too" in words and words.startswith("b ") for words in told["not_reached"])
    assert any(words.startswith("f_c of the material C4") for words in told["not_reached"])


def test_a_longer_span_is_followed_down_to_the_seat(mill: Path) -> None:
    # by hand: reactions w l/2 of 1.416667 and 1.25 kip/ft; on the pad of 5 by 10 in: 31 ft gives 41.33/50 = 0.8267 ksi,
    # above the 0.8 ksi allowed; as designed 38/50 = 0.76
    told = answered(mill, "FL1", "l=31ft", code=1)
    marks = {one["mark"] for one in told["checks"]}
    assert marks == {"B1", "B2", "SE1"} and told["unaffected"] == ["FL3", "B3", "FL4", "B4", "CN1", "B5", "LC1", "B6",
                                                                   "B7"]  # fmt: skip
    pad = rows(told, "checks")["SE1.pad stress"]
    assert pad["as_designed"]["value"] == pytest.approx(0.76 / 0.8, rel=1e-9) and pad["as_designed"]["verdict"] == "OK"
    assert pad["as_built"]["value"] == pytest.approx((1.25 + 0.95 + 7 / 15) * 15.5 / 50 / 0.8, rel=1e-9)
    assert pad["as_built"]["verdict"] == "NG" and ["SE1", "pad stress", "NG"] in told["not_ok"]
    assert rows(told, "values")["B1.M_u"]["as_built"]["value"] == pytest.approx(3.7 * 31**2 / 8, rel=1e-9)
    assert all(one["mark"] == "FL1" for one in told["changed"])


def test_differences_rows_and_other_calculations(mill: Path) -> None:
    told = answered(mill, "B1", "h-=1in", "layer[first].steel=3-#9", "FL1.l+=6in", code=1)
    changed = rows(told, "changed")
    # by hand: 28 - 1; 28.5 ft and half a foot; three bars of 1.00 in^2
    assert changed["B1.h"]["as_built"]["value"] == 27
    assert changed["FL1.l"]["as_built"]["value"] == pytest.approx(29, rel=1e-12)
    assert changed["B1.layer[first].A_si"]["as_built"]["value"] == pytest.approx(3, rel=1e-12)
    assert set(changed) == {"FL1.l", "B1.h", "B1.layer[first].steel", "B1.layer[first].A_si", "B1.layer[first].n"}


def test_the_candidate_of_the_design_stays(mill: Path) -> None:
    # the girder takes its third candidate, three and two No. 9; two inches shallower it is not chosen anew
    told = answered(mill, "B2", "h-=2in", code=1)
    assert set(rows(told, "changed")) == {"B2.h"}
    (mill.parent / "answer.pdf").unlink()
    told = answered(mill, "B2", "layer[second].steel=1-#9", code=1)
    assert "B2.layer[second].A_si" in rows(told, "changed")


def test_beyond_the_range_of_a_template_there_is_no_number(mill: Path) -> None:
    # by hand: the pad of 5 in. leaves 2.5 in. on both sides of a wall of 10 in.; of 9 in. it does not
    told = answered(mill, "SE1", "t_w=9in", code=1)
    assert "near edge distance" in told["stopped"]["SE1"]
    ran = run("field", str(mill), "SE1", "t_w=9in", "--reply", "RFI-032")
    after = [line.strip() for line in ran.out.split("\n") if line.strip().startswith("as built  ")]
    assert after.count("as built     not met") == 1 and "as built     not reached" in after
    assert all(one["as_built"] is None or one["as_built"]["verdict"] == "not evaluated" for one in told["checks"])


@pytest.mark.parametrize(
    ("mark", "change", "said"),
    [
        ("B9", "b=15in", "error[unknown-name]: there is no calculation `B9`"),
        ("B1", "FL9.l=3ft", "error[unknown-name]: there is no calculation `FL9`"),
        ("B1", "M_u=300kip*ft", "`B1.M_u` is taken from FL1.M_u"),
        ("B1", "phiM_n=300kip*ft", "`phiM_n` is worked by a line of B1, not given"),
        ("B1", "d-=1in", "`d` is worked by a line of B1, not given"),
        ("B1", "width=15in", "error[unknown-given]: B1 is given no `width`"),
        ("B1", "steel=3-#9", "error[unknown-given]: B1 is given no `steel`"),
        ("B1", "layer[third].steel=3-#9", "error[not-a-row]: `layer` has no row named `third`"),
        ("B1", "b=15", "error[bare-number]"),
        ("B1", "b=-1in", "error[out-of-range]"),
        ("B1", "b=15kip", "error[unit-mismatch]"),
        ("B1", "face=left", "error[not-a-word]"),
        ("B1", "face-=1in", "`B1.face` is no quantity to add to"),
        ("B1", "b=none", "error[not-none]"),
        ("B1", "b=16in", "`B1.b` is 16 in as designed too"),
        ("B1", "b=1'-4\"", "as designed too"),
        ("B1", "b-=0in", "as designed too"),
        ("B1", "sdc=C", "`B1.sdc` is a criterion of the whole project"),
        ("B1", "b", "`b` is no change"),
        ("B1", "", "is no change"),
        ("B1", "b=", "is no change"),
        ("B1", "b==15in", "error[not-a-quantity]"),
        ("LC1", "M=3kip*ft", "error[unknown-given]"),
        ("LC1", "section[midspan].M=3kip*ft", "`M` has a value for pairs of rows"),
        ("LC1", "section[midspan].load[S].M=3kip*ft", "error[not-a-row]"),
    ],
)
def test_what_is_refused(mill: Path, mark: str, change: str, said: str) -> None:
    ran = run("field", str(mill), mark, change, "--reply", "RFI-031")
    assert ran.code == 2 and said in ran.err, ran.err
    assert not (mill / "RFI-031.pdf").exists()


def test_a_value_is_changed_once(mill: Path) -> None:
    ran = run("field", str(mill), "B1", "b=15in", "B1.b=14in", "--reply", "RFI-031")
    assert ran.code == 2 and "changes:2:1: error[given-twice]" in ran.err


@pytest.mark.parametrize("reply", ["", "../x", "a/b", "x" * 41, "-1", "one\ntwo"])
def test_a_reply_is_a_plain_name(mill: Path, reply: str) -> None:
    ran = run("field", str(mill), "B1", "b=15in", f"--reply={reply}")
    assert ran.code == 2 and "error[not-a-change]" in ran.err


def test_pairs_of_rows(mill: Path) -> None:
    told = answered(mill, "LC1", "section[midspan].load[D].M=60kip*ft", code=0)
    assert rows(told, "changed")["LC1.section[midspan].load[D].M"]["as_built"]["value"] == pytest.approx(60, rel=1e-12)
    # by hand: 1.2 D + 1.6 L governs at midspan, 1.2(52) + 1.6(36) = 120 and 1.2(60) + 57.6 = 129.6 kip-ft
    moment = rows(told, "values")["B7.M_u"]
    assert moment["as_designed"]["value"] == pytest.approx(120, rel=1e-9)
    assert moment["as_built"]["value"] == pytest.approx(129.6, rel=1e-9)


def test_nothing_that_stands_there_is_touched(mill: Path) -> None:
    assert run("build", str(mill)).code == 0
    before = {path: path.read_bytes() for path in mill.iterdir()}
    assert run("field", str(mill), "B1", "b=15in", "--reply", "RFI 031").code == 0
    assert {path: path.read_bytes() for path in before} == before
    assert sorted(set(mill.iterdir()) - set(before)) == [mill / "RFI-031.pdf"]
    again = run("field", str(mill), "B1", "b=14in", "--reply", "RFI 031")
    assert again.code == 2 and "error[cannot-write]" in again.err and "stands there already" in again.err
    over = run("field", str(mill), "B1", "b=14in", "--reply", "RFI-032", "-o", str(mill / "project.pdf"))
    assert over.code == 2 and (mill / "project.pdf").read_bytes() == before[mill / "project.pdf"]


def test_as_designed_is_what_was_issued(mill: Path) -> None:
    assert run("issue", str(mill)).code == 0
    issue = mill / "issues" / "1"
    frozen = {path: path.read_bytes() for path in issue.rglob("*") if path.is_file()}
    # the project goes on: the beam is 18 in. wide in the next issue
    text = (mill / "level-2.yaml").read_text(encoding="utf-8")
    (mill / "level-2.yaml").write_text(text.replace("      b: 16 in\n", "      b: 18 in\n"), encoding="utf-8")
    ran = run("field", str(issue), "B1", "b=15in", "--reply", "RFI-031", "--json")
    width = rows(json.loads(ran.out), "changed")["B1.b"]
    assert ran.code == 0 and [width[side]["shown"] for side in ("as_designed", "as_built")] == ["16 in.", "15 in."]
    assert (mill / "issues" / "RFI-031.pdf").exists()
    inside = run("field", str(issue), "B1", "b=15in", "--reply", "RFI-032", "-o", str(issue / "RFI-032.pdf"))
    assert inside.code == 2 and "it would stand in a frozen issue" in inside.err
    assert {path: path.read_bytes() for path in issue.rglob("*") if path.is_file()} == frozen
    assert run("verify", str(issue / "package.pdf")).code == 0


@pytest.mark.parametrize(("mark", "change"), [("B1", "b=15in"), ("FL1", "l=31ft"), ("SE1", "t_w=9in")])
def test_the_sheet(mill: Path, mark: str, change: str) -> None:
    asked(mill, mark, change)
    pages = pypdf.PdfReader(mill.parent / "answer.pdf").pages
    assert len(pages) == 1
    text = " ".join(pages[0].extract_text().split())
    for words in ("As designed", "As built", "Reply to RFI-031", "no verdict on acceptance", "engineer of record's",
                  "FIELD QUESTION", "Disposition of the engineer of record", "ORIGINATOR"):  # fmt: skip
        assert words in text, words
    assert not any(word in text.casefold() for word in BANNED)
    # a comparison that does not hold says so, and a requirement that stops a calculation
    assert (" not met" in text) == (mark != "B1")
    first = (mill.parent / "answer.pdf").read_bytes()
    asked(mill, mark, change, name="again.pdf")
    assert (mill.parent / "again.pdf").read_bytes() == first


MEMBERS = """\
project: {title: Posts, number: P-1, address: none}
office: {name: (office)}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: IBC, year: 2024, amendments: none}, concrete: ACI 318-19, loads: ASCE/SEI 7-22}
criteria: {risk category: II, seismic design category: A}
revisions: [{number: 1, date: 2026-11-16, why: first}]
calculations:
  - mark: GP
    title: Posts alike
    template: post
    given: {p: 3 ksi}
    members: [{mark: P1, b: 10 in, P: 120 kip}, {mark: P2, b: 12 in, P: 120 kip}]
  - {mark: X1, title: from a post, template: after, given: {q: {from: P1.s}}}
"""
POST = """\
template: post
title: Post
code: {name: OWN}
units: [us]
covers: []
excludes: []
symbols: {b: {unit: in, says: width}, P: {unit: kip, says: load}, p: {unit: ksi, says: stress allowed}, s: {unit: ksi, says: stress}}
given: {b: {range: '> 0'}, P: , p: }
lines:
  - {gives: s, formula: 'P/b^2', cite: statics}
  - {check: stress, holds: 's <= p', cite: statics}
"""
AFTER = """\
template: after
title: After
code: {name: OWN}
units: [us]
covers: []
excludes: []
symbols: {q: {unit: ksi, says: stress}, r: {unit: ksi, says: twice}}
given: {q: }
lines:
  - {gives: r, formula: '2*q', cite: statics}
  - {check: stress, holds: 'r <= 4 ksi', cite: statics}
"""


@pytest.fixture
def posts(tmp_path: Path) -> Path:
    folder = tmp_path / "posts"
    folder.mkdir()
    for name, text in (("project", MEMBERS), ("post", POST), ("after", AFTER)):
        (folder / f"{name}.yaml").write_text(text, encoding="utf-8")
    return folder


def test_one_of_like_members(posts: Path) -> None:
    # by hand: P1 at 9 in. 120/81 = 1.4815 ksi against 1.2 as designed; X1 takes twice that; P2 stays at 120/144
    told = answered(posts, "P1", "b=9in")
    assert set(rows(told, "changed")) == {"GP.member[P1].b"}
    checks = rows(told, "checks")
    assert set(checks) == {"GP.member[P1].stress", "X1.stress"}
    assert checks["GP.member[P1].stress"]["as_built"]["value"] == pytest.approx(120 / 81 / 3, rel=1e-12)
    assert checks["X1.stress"]["as_built"]["value"] == pytest.approx(2 * 120 / 81 / 4, rel=1e-12)
    same = answered_by_path(posts)
    assert rows(same, "checks") == checks


def answered_by_path(posts: Path) -> dict[str, Any]:
    ran = asked(posts, "GP", "member[P1].b=9in", name="by-path.pdf")
    found: dict[str, Any] = json.loads(ran.out)
    return found


def test_what_members_share_is_changed_for_all_of_them(posts: Path) -> None:
    ran = asked(posts, "P1", "p=2ksi")
    assert ran.code == 2 and "`p` is common to all members of GP" in ran.err + ran.out
    told = answered(posts, "GP", "p=2ksi")
    # by hand: 1.2 and 0.8333 over 2
    found = [one["as_built"]["value"] for one in rows(told, "checks").values()]
    assert found == pytest.approx([0.6, 120 / 144 / 2], rel=1e-12)
