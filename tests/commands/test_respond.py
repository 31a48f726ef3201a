"""`calcreport respond`: comments quoted word for word, answers at their sheet and line, nothing signed.

Expected sheets, lines and words are written by hand from the template below: its lines are counted one by one.
"""

from __future__ import annotations

import json
import re
from pathlib import Path

import pypdf
import pytest

from calcreport.core.explained_reviews import REVIEWS
from calcreport.layout.fonts import installed_fonts
from tests.commands.desk import HEAD, PROJECT, make, names, run

#: by hand: b is line 1, r line 2, A line 3, the checks lines 4 and 5
TEMPLATE = """\
template: trial
title: Trial
code: {name: OWN}
units: [us]
symbols:
  b: {unit: in, says: width}
  r: {unit: '1', says: ratio}
  A_g: {unit: in^2, says: area}
given: {b: }
lines:
  - {gives: r, formula: 'b/4 in', cite: geometry}
  - {gives: A_g, formula: 'b*b', cite: geometry}
  - {check: least width, holds: 'b >= 2 in', cite: geometry}
  - {check: ratio, holds: 'r <= 1', cite: geometry}
"""
LOG = """\
cycle: 2
received: 2026-12-07
reviewer: [building department, 'plan review engineer, structural']
application: B-100
date: 2026-12-18
comments:
"""
ONE = """\
  - number: 7
    discipline: structural
    reference: S-2
    says: 'Width of T1:  show "b" in in., not mm;  give the ratio (0.75?).'
    response: Both stand on the sheet.
    status: clarified
    answered: [T1.A_g, T1.least width, T1.ratio, SUMMARY, {drawing: S-301}]
"""


def write(folder: Path, log: str = LOG + ONE, project: str = PROJECT, template: str = TEMPLATE) -> Path:
    make(folder, project, template)
    path = folder / "comments.yaml"
    path.write_text(log, encoding="utf-8")
    return path


def texts(path: Path) -> list[str]:
    """Return the text of every sheet, no-break spaces as spaces."""
    return [page.extract_text().replace("\u00a0", " ") for page in pypdf.PdfReader(path).pages]


def joined(text: str) -> str:
    """Return text without its line ends and spaces: lines break where they are full."""
    return re.sub(r"\s", "", text)


def test_letter_and_matrix(tmp_path: Path) -> None:
    ran = run("respond", str(tmp_path), str(write(tmp_path)))
    assert ran.code == 0, ran.err
    target = tmp_path / "comments.pdf"
    assert pypdf.PdfReader(target).page_labels == ["LETTER-1", "MATRIX-1"]
    letter, matrix = texts(target)
    for words in ("building department, plan review engineer, structural", "18 December 2026", "B-100",
                  "Response to the 1 comment of review cycle 2, received 7 December 2026", "trial office",
                  "issue 1 of 16 November 2026, status preliminary", "PRELIMINARY", "Signature",
                  "not for permit, not for construction", "cycle 2"):  # fmt: skip
        assert joined(words) in joined(letter), words
    # by hand: the area is line 3, the checks lines 4 and 5, all on the one sheet of T1
    for words in ("T1-1, line 3: ", "T1-1, line 4: least width", "T1-1, line 5: ratio", "SUMMARY-1", "drawing S-301",
                  'Width of T1: show "b" in in., not mm; give the ratio (0.75?).', "Both stand on the sheet.",
                  "clarified", "S-2"):  # fmt: skip
        assert joined(words) in joined(matrix), words
    for word in ("certified", "approved", "checked", "compliant", "safe"):
        assert not re.search(rf"\b{word}\b", letter + matrix, re.I)


def test_the_space_for_the_signature_is_blank(tmp_path: Path) -> None:
    run("respond", str(tmp_path), str(write(tmp_path)))
    letter = texts(tmp_path / "comments.pdf")[0]
    after = letter[letter.index("Engineer in responsible charge") :]
    assert joined(after[: after.index("PROJECT")]) == "EngineerinresponsiblechargeLicenceno.SignatureDate"


def test_the_resolved_table_for_machines(tmp_path: Path) -> None:
    ran = run("respond", str(tmp_path), str(write(tmp_path)), "--json", "-o", str(tmp_path / "r.pdf"))
    assert ran.code == 0 and (tmp_path / "r.pdf").exists()
    found = json.loads(ran.out)
    assert (found["cycle"], found["received"], found["date"]) == (2, "2026-12-07", "2026-12-18")
    assert found["package"]["issue"] == "1" and found["package"]["status"] == "preliminary"
    (comment,) = found["comments"]
    assert comment["says"] == 'Width of T1:  show "b" in in., not mm;  give the ratio (0.75?).'
    assert [(at["at"], at["sheets"]) for at in comment["answered"]] == [
        ("T1.A_g", [{"sheet": "T1-1", "lines": [3]}]),
        ("T1.least width", [{"sheet": "T1-1", "lines": [4]}]),
        ("T1.ratio", [{"sheet": "T1-1", "lines": [5]}]),
        ("SUMMARY", [{"sheet": "SUMMARY-1", "lines": []}]),
        ("drawing S-301", []),
    ]


def test_lines_move_with_the_template(tmp_path: Path) -> None:
    """By hand: a line before the others makes the area line 4."""
    more = TEMPLATE.replace("lines:\n", "lines:\n  - {gives: p, formula: '4*b', cite: geometry}\n")
    more = more.replace("symbols:\n", "symbols:\n  p: {unit: in, says: girth}\n")
    ran = run("respond", str(tmp_path), str(write(tmp_path, template=more)))
    assert "T1-1, line 4; T1-1, line 5; T1-1, line 6; SUMMARY-1; drawing S-301" in ran.out


def test_a_calculation_of_several_sheets(tmp_path: Path) -> None:
    rows = "".join(f"  - {{gives: p{n}, formula: '{n}*b', cite: geometry}}\n" for n in range(1, 121))
    symbols = "".join(f"  p{n}: {{unit: in, says: girth {n}}}\n" for n in range(1, 121))
    template = TEMPLATE.replace("lines:\n", "lines:\n" + rows).replace("symbols:\n", "symbols:\n" + symbols)
    log = LOG + ONE.replace("[T1.A_g,", "[T1, T1.p120, T1.A_g,")
    run_it = run("respond", str(tmp_path), str(write(tmp_path, log, template=template)), "--json")
    first, second, *_ = json.loads(run_it.out)["comments"][0]["answered"]
    sheets = [one["sheet"] for one in first["sheets"]]
    assert len(sheets) > 2 and sheets == [f"T1-{n}" for n in range(1, len(sheets) + 1)]
    assert first["text"] == f"T1-1 to T1-{len(sheets)}"
    # by hand: b is line 1, so p120 is line 121; the sheet it is said to stand on prints that line
    assert second["sheets"][0]["lines"] == [121]
    assert run("build", str(tmp_path), "-o", str(tmp_path / "p.pdf")).code == 0
    package = pypdf.PdfReader(tmp_path / "p.pdf")
    sheet = package.pages[package.page_labels.index(second["sheets"][0]["sheet"])].extract_text()
    assert re.search(r"\bgirth 120\b", sheet)


def test_long_comments_flow_over_sheets_and_are_quoted_whole(tmp_path: Path) -> None:
    words = " ".join(f"word{n}" for n in range(1500))
    entries = (
        ONE.replace("Both stand on the sheet.", "Short.")
        + f"""\
  - {{number: 8, discipline: structural, says: '{words}', response: Done., status: revised, answered: T1}}
  - {{number: 9, discipline: structural, says: Last., response: 'So it is.', status: no change, answered: T1.b}}
"""
    )
    ran = run("respond", str(tmp_path), str(write(tmp_path, LOG + entries)))
    assert ran.code == 0, ran.err
    _, *sheets = texts(tmp_path / "comments.pdf")
    assert len(sheets) > 3
    for sheet in sheets:
        assert "Comment as received" in sheet and "Where answered" in sheet
    assert ["8, continued" in sheet for sheet in sheets] == [False] + [True] * (len(sheets) - 1)
    # every word once and in order: the lines of the one column, read over all sheets
    assert re.findall(r"word\d+", "\n".join(sheets)) == words.split()
    assert "Last." in sheets[-1] and "So it is." in sheets[-1]


def test_line_ends_and_signs_of_a_comment_stand_as_written(tmp_path: Path) -> None:
    says = "    says: |-\n      (a) f'c ≥ 4,000 psi;\n      (b) <b>bold?</b> & 50 % – “quoted” {x} \\n\n\n      (c)   end\n"
    entry = re.sub(r"    says: .*\n", lambda _: says, ONE)
    ran = run("respond", str(tmp_path), str(write(tmp_path, LOG + entry)), "--json")
    written = "(a) f'c ≥ 4,000 psi;\n(b) <b>bold?</b> & 50 % – “quoted” {x} \\n\n\n(c)   end"
    assert json.loads(ran.out)["comments"][0]["says"] == written
    matrix = texts(tmp_path / "comments.pdf")[1]
    assert joined(written) in joined(matrix)
    begins = [line.strip()[:3] for line in matrix.split("\n")]
    assert [at for at in begins if at in ("(a)", "(b)", "(c)")] == ["(a)", "(b)", "(c)"]


def test_rows_and_members(tmp_path: Path) -> None:
    """By hand: the table of rows is line 1, its area line 2 in full for the governing row, the check line 3."""
    template = """\
template: trial
title: Trial
code: {name: OWN}
units: [us]
symbols: {b: {unit: in, says: width}, r: {unit: '1', says: ratio}}
given: {strip: {rows: {b: }, least: 1, says: strips}}
lines:
  - each: strip
    show: every
    lines:
      - {gives: r, formula: 'b/4 in', cite: geometry}
      - {check: ratio, holds: 'r <= 1', cite: geometry}
"""
    calculation = "  - {mark: T1, title: Trial, template: trial, given: {strip: [{name: left, b: 2 in}, {name: right, b: 3 in}]}}\n"
    project = HEAD + "calculations:\n" + calculation
    at = "['T1.strip[right].r', 'T1.strip[right].ratio', T1.ratio]"
    log = LOG + re.sub(r"answered: .*", f"answered: {at}", ONE)
    ran = run("respond", str(tmp_path), str(write(tmp_path, log, project, template)), "--json")
    assert ran.code == 0, ran.err + ran.out
    answered = json.loads(ran.out)["comments"][0]["answered"]
    assert [one["text"] for one in answered] == ["T1-1, line 4", "T1-1, line 5", "T1-1, lines 3 and 5"]
    assert "T1-1,line5:ratio(stripright)" in joined(texts(tmp_path / "comments.pdf")[1])


#: a tie of P on A: what stands for every member is a row, what governs is set out in full
TIES = """\
template: trial
title: Trial
code: {name: OWN}
units: [us]
symbols: {P: {unit: kip, says: force}, A: {unit: in^2, says: area}, f: {unit: ksi, says: stress}}
given: {A: , P: }
lines:
  - {gives: f, formula: 'P/A', cite: statics}
  - {check: stress, holds: 'f <= 10 ksi', cite: statics}
"""


def test_like_members_are_found_in_full_or_in_their_table(tmp_path: Path) -> None:
    """By hand: A is line 1, the table of members line 2; B2, at 8/2 = 4 against 6/2 = 3 ksi, is told on 3 and 4; the
    table of all is line 5.
    """
    shared = "  - {mark: BB, title: ties, template: trial, given: {A: 2 in^2}, members: "
    project = HEAD + "calculations:\n" + shared + "[{mark: B1, P: 6 kip}, {mark: B2, P: 8 kip}]}\n"
    at = "[BB, B1.P, B1.A, B2.f, B2.stress, B1.stress, BB.stress]"
    log = LOG + re.sub(r"answered: .*", f"answered: {at}", ONE)
    ran = run("respond", str(tmp_path), str(write(tmp_path, log, project, TIES)), "--json")
    assert ran.code == 0, ran.err + ran.out
    answered = json.loads(ran.out)["comments"][0]["answered"]
    assert {one["at"]: one["text"] for one in answered} == {
        "BB": "BB-1", "B1.P": "BB-1, line 2", "B1.A": "BB-1, line 1", "B2.f": "BB-1, line 3",
        "B2.stress": "BB-1, line 4", "B1.stress": "BB-1, line 5", "BB.stress": "BB-1, lines 4 and 5",
    }  # fmt: skip
    matrix = joined(texts(tmp_path / "comments.pdf")[1])
    assert "BB-1,line5:stressofB1" in matrix and "BB-1,line4:stressofB2" in matrix


def test_a_failing_check_is_told_in_the_letter(tmp_path: Path) -> None:
    # by hand: 5/4 > 1
    ran = run("respond", str(tmp_path), str(write(tmp_path, project=PROJECT.replace("3 in", "5 in"))))
    assert ran.code == 1
    assert joined("The package holds 1 NG (T1 ratio), 0 not evaluated") in joined(texts(tmp_path / "comments.pdf")[0])


@pytest.mark.parametrize(
    ("change", "slug", "says"),
    [
        (("T1.A_g", "T1.A_s"), "unknown-name", "did you mean A_g"),
        (("T1.least width", "T1.least widht"), "unknown-name", "did you mean least width"),
        (("T1.A_g", "T2.A_g"), "unknown-name", "the package holds no `T2`"),
        (("response: Both stand on the sheet.", "response:"), "not-answered", "comment 7 has no answer"),
        (("answered: [T1.A_g, T1.least width, T1.ratio, SUMMARY, {drawing: S-301}]", "answered: []"), "not-answered",
         "comment 7 does not say where it is answered"),
    ],
)  # fmt: skip
def test_nothing_is_written_beside_problems(tmp_path: Path, change: tuple[str, str], slug: str, says: str) -> None:
    path = write(tmp_path, LOG + ONE.replace(*change))
    before = names(tmp_path)
    ran = run("respond", str(tmp_path), str(path))
    assert (
        ran.code == 2 and f"comments.yaml:{13 if 'answered' in change[0] or '.' in change[0][:3] else 11}:" in ran.err
    )
    assert f"error[{slug}]" in ran.err and says in ran.err and names(tmp_path) == before


@pytest.mark.parametrize("reviewer", ["", " []", " ['']"])
def test_a_letter_needs_whom_it_answers(tmp_path: Path, reviewer: str) -> None:
    log = re.sub(r"reviewer:.*", f"reviewer:{reviewer}", LOG + ONE)
    ran = run("respond", str(tmp_path), str(write(tmp_path, log)))
    assert ran.code == 2 and "a comment log needs `reviewer`" in ran.err


def test_a_letter_the_faces_lack_is_no_box_on_paper(tmp_path: Path) -> None:
    for sign in "\u6881\U0001f3d7\u2009":
        ran = run("respond", str(tmp_path), str(write(tmp_path, LOG + ONE.replace("not mm", f"not {sign}"))))
        lacking = installed_fonts().missing(sign)
        assert (ran.code == 2 and f"U+{ord(sign):04X}" in ran.err) is bool(lacking), sign
    assert installed_fonts().missing("\u6881\U0001f3d7") == "\u6881\U0001f3d7"


def test_no_log_no_letter(tmp_path: Path) -> None:
    write(tmp_path)
    ran = run("respond", str(tmp_path), str(tmp_path / "none.yaml"))
    assert ran.code == 2 and "error[no-file]" in ran.err
    kept = tmp_path / "notes.pdf"
    kept.write_text("not a PDF")
    assert run("respond", str(tmp_path), str(tmp_path / "comments.yaml"), "-o", str(kept)).code == 2
    assert kept.read_text() == "not a PDF"


def test_a_frozen_issue_answers_for_itself(tmp_path: Path) -> None:
    """The letter to issue 1 names the lines of issue 1, whatever becomes of the project."""
    path = write(tmp_path)
    assert run("issue", str(tmp_path)).code == 0
    made = [run("respond", str(tmp_path / "issues" / "1"), str(path), "-o", str(tmp_path / "1.pdf")).code]
    before = (tmp_path / "1.pdf").read_bytes()
    more = TEMPLATE.replace("lines:\n", "lines:\n  - {gives: p, formula: '4*b', cite: geometry}\n")
    more = more.replace("symbols:\n", "symbols:\n  p: {unit: in, says: girth}\n")
    (tmp_path / "trial.yaml").write_text(more, encoding="utf-8")
    made += [run("respond", str(tmp_path / "issues" / "1"), str(path), "-o", str(tmp_path / "1.pdf")).code]
    assert made == [0, 0] and (tmp_path / "1.pdf").read_bytes() == before
    # by hand: in the project as it is now a line stands before the area
    assert "T1-1, line 4;" in run("respond", str(tmp_path), str(path), "-o", str(tmp_path / "2.pdf")).out


def test_the_same_log_gives_the_same_bytes(tmp_path: Path) -> None:
    path = write(tmp_path)
    assert run("respond", str(tmp_path), str(path)).code == 0
    first = (tmp_path / "comments.pdf").read_bytes()
    assert run("respond", str(tmp_path), str(path)).code == 0
    assert (tmp_path / "comments.pdf").read_bytes() == first


def test_problems_of_project_and_log_are_told_together(tmp_path: Path) -> None:
    path = write(tmp_path, LOG + ONE.replace("status: clarified", "status: closed"), PROJECT.replace("3 in", "3"))
    ran = run("respond", str(tmp_path), str(path), "--json")
    assert {problem["slug"] for problem in json.loads(ran.out)["problems"]} == {"bare-number", "not-a-word"}


def test_the_samples_answers_stand_where_the_letter_says(tmp_path: Path) -> None:
    """Every check the letter names is found on that sheet with that number, by another reader of the package's PDF."""
    folder = Path(__file__).parents[2] / "samples" / "mill-lane"
    package = tmp_path / "package.pdf"
    assert run("build", str(folder), "-o", str(package)).code == 0
    reader = pypdf.PdfReader(package)
    log = str(folder / "comments-1.yaml")
    ran = run("respond", str(folder), log, "--json", "-o", str(tmp_path / "r.pdf"))
    assert ran.code == 0, ran.err
    told = 0
    for comment in json.loads(ran.out)["comments"]:
        for at in comment["answered"]:
            for one in at["sheets"]:
                text = reader.pages[reader.page_labels.index(one["sheet"])].extract_text()
                name = at["at"].partition(".")[2]
                for line in one["lines"]:
                    assert re.search(rf"^{line}\b", text, re.M), (at, line)
                    if " " in name:
                        told += 1
                        assert re.search(rf"^{line}\s*CHECK {name}", text, re.M), (at, line)
    assert told == 3, "minimum steel, pad stress, bearing on the wall"


def test_every_problem_of_logs_is_explained() -> None:
    assert {"not-answered", "not-a-place", "answered-before", "bad-comment-number"} == REVIEWS.keys()
