"""Issue after issue of a small project: what the change report, the revisions and the marks on the sheets say of them.

What must differ follows from the project itself: T3 takes its load from T2, T1 stands alone, s = P/A. What does not
differ is held against the page content of the finished PDFs, read by another library.
"""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from calcreport.history.comparison import compare_issues
from calcreport.history.differences import differ
from calcreport.history.frozen import INPUTS, VALUES, Frozen
from calcreport.history.issued import issued, read_values
from calcreport.history.model import Account, Comparison, Difference, Issued
from calcreport.publish import Package, build
from calcreport.report.model import Table
from calcreport.report.moved import flip_words
from tests.reissued import CALCULATIONS, TEMPLATE, Project, revisions, sheets, values, words

FRONTS = {"COVER", "INDEX-1", "CHANGES-1", "CRITERIA-1", "SUMMARY-1", "A-1", "B-1"}


@pytest.fixture
def project(tmp_path: Path) -> Project:
    return Project(tmp_path)


def told(package: Package) -> Issued:
    found = read_values(package.files[VALUES])
    assert isinstance(found, dict)
    side = issued(found)
    assert isinstance(side, Issued)
    return side


def compared(first: Package, second: Package) -> Comparison:
    return compare_issues(told(first), told(second))


def rows(difference: Difference) -> list[tuple[str, tuple[str, ...]]]:
    return [(change.entry.path, change.differs) for change in difference.changes]


def marks(differences: tuple[Difference, ...]) -> list[str]:
    return [difference.mark for difference in differences]


def drawn_otherwise(first: Package, second: Package) -> set[str]:
    """Return the sheets whose page content differs, or that are in one package only."""
    one, two = sheets(first), sheets(second)
    return {label for label in one.keys() | two.keys() if one.get(label) != two.get(label)}


def triangles(package: Package, mark: str) -> dict[int, str]:
    """Return the revision beside each numbered line, from the blocks of a calculation."""
    assert package.composed is not None
    part = next(part for part in package.composed.report.parts if part.mark == mark)
    found = {}
    for block in part.blocks:
        for line in getattr(block, "rows", (block,)):
            if getattr(line, "delta", ""):
                found[getattr(line, "number", 0)] = line.delta
    return found


def test_one_load_changed(project: Project) -> None:
    first = project.issue()
    project.change("P: 30 kip", "P: 36 kip")
    second = project.issue()
    found = compared(first, second)
    # s = P/A: 30/2 = 15, 36/2 = 18; 30/4 = 7.5, 36/4 = 9; ratios over 20
    assert marks(found.changed) == ["T2", "T3"] and marks(found.unchanged) == ["T1"]
    for difference in found.changed:
        assert rows(difference) == [("P", ("value",)), ("s", ("value",)), ("stress", ("value",))]
    shown = [(c.first.shown, c.second.shown) for d in found.changed for c in d.changes if c.first and c.second]
    assert shown == [("30 kip", "36 kip"), ("15 ksi", "18 ksi"), ("0.750", "0.900"),
                     ("30 kip", "36 kip"), ("7.5 ksi", "9 ksi"), ("0.375", "0.450")]  # fmt: skip
    assert drawn_otherwise(first, second) <= FRONTS | {"T2-1", "T3-1"}
    assert revisions(second) == {"T1": ("1", "2026-11-16"), "T2": ("2", "2026-11-17"), "T3": ("2", "2026-11-17")}
    assert triangles(second, "T2") == {1: "2", 4: "2", 5: "2"} and triangles(second, "T1") == {}
    report = words(second, "CHANGES-1")
    assert "T2.1 P load 30 kip 36 kip +20.0 %" in report and "T1 (5)." in report
    assert "rev 1" in words(second, "T1-1") and "rev 2" in words(second, "T3-1")


def test_a_member_inserted(project: Project) -> None:
    first = project.issue()
    added = "  - {mark: T1A, title: New bar, template: bar, given: {P: 1 kip, A: 2 in^2, s_max: 20 ksi}}\n"
    project.calculations = CALCULATIONS.replace("  - {mark: T2", added + "  - {mark: T2")
    second = project.issue()
    found = compared(first, second)
    assert marks(found.added) == ["T1A"] and marks(found.unchanged) == ["T1", "T2", "T3"] and not found.changed
    assert drawn_otherwise(first, second) == FRONTS | {"T1A-1"}
    assert revisions(second)["T1A"] == ("2", "2026-11-17") and revisions(second)["T2"] == ("1", "2026-11-16")
    assert triangles(second, "T1A") == {}
    assert marks(compared(second, first).removed) == ["T1A"]


def test_status_alone(project: Project) -> None:
    first = project.issue()
    project.status = "for permit"
    second = project.issue()
    found = compared(first, second)
    assert found.status_changed and found.differs and not found.calculations_differ and not found.facts
    assert set(revisions(second).values()) == {("1", "2026-11-16")}
    assert "Status for review, now for permit; nothing else differs." in words(second, "CHANGES-1")


def test_a_line_inserted_in_the_template(project: Project) -> None:
    first = project.issue()
    project.template = TEMPLATE.replace("  - {check", "  - {gives: t, formula: '2*s', cite: statics}\n  - {check")
    second = project.issue()
    for difference in compared(first, second).changed:
        assert rows(difference) == [("t", ("only in second",))]
        assert difference.equal == 5 and difference.files == ("bar.yaml",)
    # the check has moved from line 5 to line 6, which is no change of it
    assert triangles(second, "T1") == {5: "2"}
    report = words(second, "CHANGES-1")
    assert "T1.5 t twice the stress – 10 ksi inserted" in report and "T1.6" not in report


def test_a_template_changed(project: Project) -> None:
    first = project.issue()
    project.template = TEMPLATE.replace("'P/A'", "'1.0*P/A'")
    second = project.issue()
    found = compared(first, second)
    assert marks(found.changed) == ["T1", "T2", "T3"]
    assert all(rows(d) == [("s", ("formula",))] and d.files == ("bar.yaml",) for d in found.changed)
    assert "P/A, now 1.0*P/A" in words(second, "CHANGES-1")
    # words alone: no line differs, and yet the sheet is not the same
    project.template = project.template.replace("says: load}", "says: axial load}")
    third = project.issue()
    found = compared(second, third)
    assert marks(found.changed) == ["T1", "T2", "T3"] and all(not d.changes for d in found.changed)
    assert set(revisions(third).values()) == {("3", "2026-11-18")}
    assert "Template text changed: bar.yaml; 0 lines differ, 5 equal." in words(third, "CHANGES-1")


def test_a_selection_changed(project: Project) -> None:
    choice = "choose: [{A: 1 in^2}, {A: 2 in^2}, {A: 3 in^2}]"
    project.change("given: {P: 10 kip, A: 2 in^2, s_max: 20 ksi}", f"{choice}, given: {{P: 10 kip, s_max: 20 ksi}}")
    first = project.issue()
    project.change("P: 10 kip", "P: 25 kip")
    second = project.issue()
    # 10/1 = 10 and 25/1 = 25 > 20, so the second is taken: 25/2 = 12.5
    (difference,) = compared(first, second).changed
    assert ("A", ("value", "citation")) in rows(difference)
    assert "Selection A 1 in^2, now A 2 in^2" in words(second, "CHANGES-1")


def test_a_mark_renamed(project: Project) -> None:
    first = project.issue()
    project.change("mark: T2,", "mark: T2A,")
    project.change("from: T2.P", "from: T2A.P")
    second = project.issue()
    found = compared(first, second)
    assert not found.added and not found.removed and marks(found.unchanged) == ["T1"]
    renamed, third = found.changed
    assert renamed.renamed and not renamed.differs and renamed.equal == 5
    # the third bar names its source: another mark is printed there, and nothing else differs
    assert rows(third) == [("P", ("citation", "link"))]
    assert "Mark T2, now T2A" in words(second, "CHANGES-1")
    assert revisions(second)["T2A"] == ("2", "2026-11-17")


def test_a_rename_that_is_not_certain_is_none(project: Project) -> None:
    twin = "  - {mark: T4, title: First bar, template: bar, given: {P: 10 kip, A: 2 in^2, s_max: 20 ksi}}\n"
    project.calculations += twin
    first = project.issue()
    project.change("mark: T1,", "mark: U1,")
    project.change("mark: T4,", "mark: U4,")
    found = compared(first, project.issue())
    assert marks(found.added) == ["U1", "U4"] and marks(found.removed) == ["T1", "T4"]


def test_a_change_taken_back(project: Project) -> None:
    first = project.issue()
    project.change("P: 10 kip", "P: 12 kip")
    project.issue()
    project.change("P: 12 kip", "P: 10 kip")
    third = project.issue()
    # it changed between the second issue and the third, so the third is its revision, equal to the first as it is
    assert revisions(third)["T1"] == ("3", "2026-11-18") and revisions(third)["T2"] == ("1", "2026-11-16")
    assert triangles(third, "T1") == {1: "3", 4: "3", 5: "3"}
    found = compared(first, third)
    assert not found.calculations_differ and marks(found.returned) == ["T1"]


def test_a_calculation_keeps_the_revision_it_last_changed_in(project: Project) -> None:
    project.issue()
    project.change("P: 10 kip", "P: 12 kip")
    project.issue()
    project.change("P: 30 kip", "P: 36 kip")
    third = project.issue()
    assert revisions(third) == {"T1": ("2", "2026-11-17"), "T2": ("3", "2026-11-18"), "T3": ("3", "2026-11-18")}
    assert "rev 2" in words(third, "T1-1") and "17 Nov 2026" in words(third, "T1-1")


def test_older_marks_are_shown_on_request(project: Project) -> None:
    project.issue()
    project.change("P: 10 kip", "P: 12 kip")
    project.issue()
    project.change("A: 2 in^2", "A: 3 in^2")
    assert triangles(project.build(), "T1") == {2: "3", 4: "3", 5: "3"}
    every = project.build(marks="all")
    assert triangles(every, "T1") == {1: "2", 2: "3", 4: "3", 5: "3"}
    assert triangles(project.build(marks="none"), "T1") == {}
    # the cloud runs round the lines of the last revision alone: the load has a triangle and no cloud
    assert every.composed is not None
    assert next(p.clouded for p in every.composed.report.parts if p.mark == "T1") == "3"


def test_an_issue_changed_since_is_no_longer_that_issue(project: Project) -> None:
    project.issue()
    project.number = 1
    same = project.build()
    assert "CHANGES-1" not in sheets(same)
    project.change("P: 10 kip", "P: 12 kip")
    changed = project.build()
    assert revisions(changed)["T1"][0] == "1+" and "rev 1+" in words(changed, "T1-1")
    assert "have not been issued" in words(changed, "CHANGES-1") and "Issue 1+" in words(changed, "COVER")


def test_a_package_is_made_again_from_its_files_with_its_changes(project: Project) -> None:
    project.issue()
    project.change("P: 10 kip", "P: 12 kip")
    second = project.issue()
    assert f"{INPUTS}issues/1/{VALUES}" in second.files
    frozen = Frozen(second.files)
    source = frozen.project()
    assert not isinstance(source, str)
    assert build(frozen, source).data == second.data


def test_values_of_the_issue_before_that_cannot_be_read(project: Project) -> None:
    project.issue()
    earlier = project.folder / "issues" / "1" / VALUES
    whole = earlier.read_text()
    for text in (
        "",
        "[]",
        "{}",
        whole.replace('"format": 2', '"format": 1'),
        whole.replace('"kind": "given"', '"kind": 1'),
    ):
        earlier.write_text(text)
        with pytest.raises(AssertionError, match="no-values"):
            project.build()


def test_every_line_equal_in_the_file_is_equal_on_paper(project: Project) -> None:
    """A comparison that calls a calculation unaffected is right: the sheet is drawn the same, title block and all."""
    first = project.issue()
    for old, new in (("P: 10 kip", "P: 10.0 kip"), ("P: 10.0 kip", "P: 10000 lb"), ("Second bar", "Bar two"),
                     ("{from: T2.P}", "30 kip")):  # fmt: skip
        project.change(old, new)
        project.number = 2
        second = project.build()
        same = {f"{d.mark}-1" for d in compared(first, second).unchanged}
        assert not same & drawn_otherwise(first, second)


def test_values_file_tells_the_marks(project: Project) -> None:
    project.issue()
    project.change("P: 10 kip", "P: 12 kip")
    found = json.loads(project.build(marks="all").files[VALUES])["project"]
    assert found["since"] == "1" and found["marks"] == "all"
    assert [line.get("changed") for line in values(project.build())["T1"]["lines"]] == ["2", None, None, "2"]


def test_rows_of_candidates_are_marked(project: Project) -> None:
    choice = "choose: [{A: 1 in^2}, {A: 2 in^2}]"
    project.change("given: {P: 10 kip, A: 2 in^2, s_max: 20 ksi}", f"{choice}, given: {{P: 30 kip, s_max: 20 ksi}}")
    project.issue()
    # 30/1 and 36/1 are over 20, 30/2 and 36/2 are not: the same one is used, and both rows have other ratios
    project.change("P: 30 kip", "P: 36 kip")
    second = project.issue()
    assert second.composed is not None
    part = next(part for part in second.composed.report.parts if part.mark == "T1")
    (table,) = (block for block in part.blocks if isinstance(block, Table))
    assert [row.delta for row in table.rows] == ["2", "2"]
    assert "Selection A 2 in^2 as before, candidates' outcomes changed" in words(second, "CHANGES-1")


def test_another_row_told_in_full_is_said() -> None:
    """Of like members the governing one is told in full: where another governs, other lines are printed."""
    one, two = (account("member G9, which governs"), account("member G4, which governs"))
    found = differ(one, two)
    assert found.differs and not found.changes
    assert flip_words(found) == ("told in full now: member G4, which governs",)


def account(*headings: str) -> Account:
    return Account("B1", "Beam", "beam", "", "OK", "flexure", "", (), headings=headings)
