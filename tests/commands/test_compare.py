"""`calcreport compare`: issues, projects and packages, in any pairing; what it prints and how it ends."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from pypdf import PdfWriter

from calcreport.history.frozen import VALUES
from tests.commands.desk import run
from tests.reissued import Project


@pytest.fixture
def issues(tmp_path: Path) -> Project:
    """Two issues with one load changed: T2 and T3, which takes it from T2, differ; T1 does not."""
    project = Project(tmp_path)
    project.issue()
    project.change("P: 30 kip", "P: 45 kip")
    project.issue()
    return project


def test_every_kind_of_side_gives_one_comparison(issues: Project) -> None:
    one, two = (str(issues.folder / "issues" / number) for number in "12")
    packages = [str(issues.folder / f"{number}.pdf") for number in "12"]
    said = [run("compare", first, second) for first, second in
            ((one, two), (packages[0], packages[1]), (one, packages[1]), (packages[0], str(issues.folder)))]  # fmt: skip
    assert [ran.code for ran in said] == [1, 1, 1, 1]
    assert len({ran.out for ran in said}) == 1


def test_what_the_terminal_says(issues: Project) -> None:
    out = run("compare", str(issues.folder / "1.pdf"), str(issues.folder / "2.pdf")).out.splitlines()
    # 45/2 = 22.5 over 20 is 1.125, NG; 45/4 = 11.25
    assert out[0].endswith("issue 1 of 16 Nov 2026, for review, against issue 2 of 17 Nov 2026, for review")
    assert out[1] == "2 of 3 calculations differ; another verdict: T2 (OK, now NG)."
    assert "    T2.1      P  30 kip, now 45 kip  (+50.0 %)" in out
    assert "    T2.5      check stress  0.750 OK, now 1.125 NG  (+50.0 %)" in out
    assert out[-2] == "sheets affected: T2-1, T3-1, and COVER, INDEX, SUMMARY"
    assert out[-1] == "not affected, every printed value of 5 lines compared and equal: T1 (5)"


def test_the_object_holds_unrounded_values(issues: Project) -> None:
    ran = run("compare", str(issues.folder / "1.pdf"), str(issues.folder / "2.pdf"), "--json")
    found = json.loads(ran.out)
    assert ran.code == 1 and found["differs"] and list(found["changed"]) == ["T2", "T3"]
    assert found["not_affected"] == {"T1": 5} and found["added"] == found["removed"] == []
    second = found["changed"]["T2"]
    assert second["verdict"] == ["OK", "NG"] and second["governing"] is None and second["equal"] == 2
    assert [(c["path"], c["first"]["value"], c["second"]["value"]) for c in second["changes"]] == [
        ("P", 30.0, 45.0), ("s", 15.0, pytest.approx(22.5)), ("stress", 0.75, pytest.approx(1.125)),
    ]  # fmt: skip


def test_nothing_differs(issues: Project) -> None:
    ran = run("compare", str(issues.folder / "2.pdf"), str(issues.folder / "issues" / "2"))
    assert ran.code == 0 and "sheets affected" not in ran.out
    assert "every printed value of 15 lines compared and equal: T1 (5), T2 (5), T3 (5)" in ran.out


@pytest.mark.parametrize(
    ("values", "found"),
    [
        (b"{}", "it holds no values of calculations"),
        (b'{"calculations": {}, "format": 7}', "its format is 7"),
        (b'{"calculations": {"B1": 1}, "format": 2, "project": {}}', "is not what a values file holds there"),
        (b"[" * 100_000, "it is no JSON"),
        (None, "a PDF that carries no values.json"),
    ],
)
def test_a_package_whose_values_cannot_be_read(issues: Project, values: bytes | None, found: str) -> None:
    writer = PdfWriter(clone_from=issues.folder / "1.pdf")
    kept = {name: data[0] for name, data in writer.attachments.items()} | {VALUES: values}
    writer._root_object["/Names"].get_object().pop("/EmbeddedFiles")  # type: ignore[attr-defined]
    for name, data in kept.items():
        if data is not None:
            writer.add_attachment(name, data)
    writer.write(issues.folder / "p.pdf")
    ran = run("compare", str(issues.folder / "p.pdf"), str(issues.folder / "2.pdf"))
    assert ran.code == 2 and "error[no-values]" in ran.err and found in ran.err and not ran.out


def test_a_file_cut_short(issues: Project) -> None:
    (issues.folder / "p.pdf").write_bytes(b"%PDF-1.7 cut short")
    ran = run("compare", str(issues.folder / "p.pdf"), str(issues.folder / "2.pdf"))
    assert ran.code == 2 and "error[no-values]" in ran.err and "a damaged file" in ran.err


def test_an_issue_that_was_altered(issues: Project) -> None:
    place = issues.folder / "issues" / "1" / VALUES
    place.write_text(place.read_text().replace("30.0", "31.0"))
    ran = run("compare", str(issues.folder / "issues" / "1"), str(issues.folder / "2.pdf"))
    assert ran.code == 2 and "error[issue-altered]" in ran.err


def test_a_side_that_is_not_there(issues: Project) -> None:
    assert run("compare", str(issues.folder / "9.pdf"), str(issues.folder)).code == 2
