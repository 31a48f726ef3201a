"""Issues: what is frozen, what is refused, whole or not at all, and the same package again out of the frozen files.

Digests are held by the standard library's SHA-256; PDFs are read by pypdf; expected texts are written out by hand.
"""

from __future__ import annotations

import json
import os
import shutil
import signal
import subprocess
import sys
from hashlib import sha256
from io import BytesIO
from pathlib import Path

import pypdf
import pytest
import xlsxwriter
import yaml

from calcreport import filesystem
from calcreport.commands.record_row import number_after
from calcreport.filesystem import put_folder, replace_file
from tests.commands.desk import CALCULATION, EARLIER, HEAD, PROJECT, Ran, make, names, run

SAMPLES = Path(__file__).parents[2] / "samples"
ROW = "revisions: [{number: 1, date: 2026-11-16, why: trial}]\n"
PLACE = str(Path(__file__).parents[2])


def tree(folder: Path) -> dict[str, bytes]:
    """Return every file beneath a folder."""
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in sorted(folder.rglob("*")) if p.is_file()}


def edit(path: Path, old: str, new: str) -> None:
    """Change a text file in one place."""
    text = path.read_text("utf-8")
    assert text.count(old) == 1
    path.write_text(text.replace(old, new), "utf-8")


def issue(folder: Path, *arguments: str) -> Ran:
    return run("issue", str(folder), *arguments)


def test_what_is_frozen(tmp_path: Path) -> None:
    make(tmp_path)
    ran = issue(tmp_path)
    assert ran.code == 0, ran.err
    frozen = tree(tmp_path / "issues" / "1")
    assert {"inputs/project.yaml", "templates/trial.yaml", "values.json", "package.pdf", "issue.yaml"} <= frozen.keys()
    assert frozen["inputs/project.yaml"] == PROJECT.encode() == (tmp_path / "project.yaml").read_bytes()
    assert frozen["templates/trial.yaml"] == (tmp_path / "trial.yaml").read_bytes()
    record = yaml.load(frozen["issue.yaml"], yaml.BaseLoader)
    assert (record["number"], record["date"], record["why"]) == ("1", "2026-11-16", "trial")
    assert record["status"] == "preliminary" and record["program"].startswith("calcreport ")
    assert record["files"] == {n: sha256(d).hexdigest() for n, d in frozen.items() if n != "issue.yaml"}
    carried = pypdf.PdfReader(BytesIO(frozen["package.pdf"])).attachments
    assert {n: d[0] for n, d in carried.items()} == {
        n: d for n, d in frozen.items() if n not in ("issue.yaml", "package.pdf")
    }
    # told: what, and where; and the package that stood beside the project is not touched
    assert "issue 1 of 2026-11-16, preliminary: trial" in ran.out and "of the project: trial.yaml" in ran.out
    assert (tmp_path / "project.pdf").read_bytes() == EARLIER


@pytest.mark.parametrize("sample", ["mill-lane", "canal-shelter"])
def test_an_issue_is_built_again_from_its_own_files_alone(tmp_path: Path, sample: str) -> None:
    """With includes, tables, and templates beside the project; the project itself is gone by then."""
    shutil.copytree(SAMPLES / sample, tmp_path / "project")
    assert issue(tmp_path / "project").code == 0
    shutil.move(tmp_path / "project" / "issues" / "1", tmp_path / "archived")
    shutil.rmtree(tmp_path / "project")
    before = tree(tmp_path / "archived")
    ran = run("build", str(tmp_path / "archived"))
    assert ran.code == 0 and "issue 1: the same bytes as issued" in ran.out
    assert (tmp_path / "archived.pdf").read_bytes() == before["package.pdf"]
    assert tree(tmp_path / "archived") == before


def test_old_issues_marked_superseded(tmp_path: Path) -> None:
    """The first, and a second whose sheets tell what has changed since: as it was then, whatever became of it."""
    shutil.copytree(SAMPLES / "canal-shelter", tmp_path, dirs_exist_ok=True)
    assert issue(tmp_path).code == 0
    edit(tmp_path / "project.yaml", "status: preliminary\n", "status: for review\n")
    assert issue(tmp_path, "--why", "posts settled").code == 0
    for number, place_of_changes in (("1", ()), ("2", ("CHANGES-1",))):
        assert run("build", str(tmp_path / "issues" / number), "--superseded").code == 0
        issued = pypdf.PdfReader(tmp_path / "issues" / number / "package.pdf")
        marked = pypdf.PdfReader(tmp_path / "issues" / f"{number}-superseded.pdf")
        assert issued.page_labels == marked.page_labels and set(place_of_changes) <= set(issued.page_labels)
        for place, (one, other) in enumerate(zip(issued.pages, marked.pages, strict=True)):
            (body, block), (marked_body, marked_block) = (
                [part.get_object().get_data() for part in page["/Contents"]]  # type: ignore[union-attr, attr-defined]
                for page in (one, other)
            )
            # the cover names the status in its body; of every other sheet what stands round the body alone differs
            assert (body == marked_body and block != marked_block) if place else body != marked_body
            assert "SUPERSEDED" in other.extract_text() and "SUPERSEDED" not in one.extract_text()
        # what it was made from is carried unchanged
        for name, data in issued.attachments.items():
            assert name == "values.json" or marked.attachments[name] == data
        assert json.loads(marked.attachments["values.json"][0])["project"]["status"] == "superseded"


def test_an_issue_with_other_marks_than_its_own_is_not_held_against_it(tmp_path: Path) -> None:
    make(tmp_path)
    assert issue(tmp_path).code == 0
    edit(tmp_path / "project.yaml", "3 in", "2 in")
    assert issue(tmp_path, "--why", "narrower").code == 0
    folder = str(tmp_path / "issues" / "2")
    # what it was compared with stands among its own inputs
    assert (tmp_path / "issues" / "2" / "inputs" / "issues" / "1" / "values.json").is_file()
    assert "the same bytes as issued" in run("build", folder).out
    ran = run("build", folder, "--marks", "none")
    assert ran.code == 0 and "as issued" not in ran.out and "differs" not in ran.out


def test_only_an_issue_is_marked_superseded_and_no_issue_is_watched_or_issued(tmp_path: Path) -> None:
    make(tmp_path)
    ran = run("build", str(tmp_path), "--superseded")
    assert ran.code == 2 and "error[not-an-issue]" in ran.err and (tmp_path / "project.pdf").read_bytes() == EARLIER
    assert issue(tmp_path).code == 0
    for command in ("watch", "issue"):
        ran = run(command, str(tmp_path / "issues" / "1"))
        assert ran.code == 2 and "error[not-an-issue]" in ran.err


def test_the_next_issue_puts_one_row_into_the_project_file(tmp_path: Path) -> None:
    raw = ("\ufeff# ours\n" + PROJECT.replace(ROW, f"{ROW.rstrip()}   # to the city\n")).replace("\n", "\r\n").encode()
    make(tmp_path, raw)
    assert issue(tmp_path, "--why", " trial ").code == 0
    assert (tmp_path / "project.yaml").read_bytes() == raw
    raw = raw.replace(b"date: 2026-11-16\r\n", b"date: 2026-12-01\r\n")
    (tmp_path / "project.yaml").write_bytes(raw)
    (tmp_path / "project.yaml").chmod(0o640)
    ran = issue(tmp_path, "--why", "b widened, see O'Hara's note: 3 in", "--json")
    assert ran.code == 0, ran.err
    told = json.loads(ran.out)
    assert (told["issue"], told["row_added"]) == ("2", True)
    row = b", {number: 2, date: 2026-12-01, why: 'b widened, see O''Hara''s note: 3 in'}]   # to the city"
    expected = raw.replace(b"]   # to the city", row)
    assert (tmp_path / "project.yaml").read_bytes() == expected
    assert (tmp_path / "project.yaml").stat().st_mode & 0o777 == 0o640
    # as it was read: without the mark, with plain line ends; and the issue before is what it was
    frozen = (tmp_path / "issues" / "2" / "inputs" / "project.yaml").read_bytes()
    assert frozen == expected.decode("utf-8-sig").replace("\r\n", "\n").encode()
    assert run("build", str(tmp_path / "issues" / "1")).code == run("build", str(tmp_path / "issues" / "2")).code == 0
    words = pypdf.PdfReader(tmp_path / "issues" / "2.pdf").pages[1].extract_text()
    assert "rev 2" in words and "1 Dec 2026" in words


#: project file, arguments, what stands in issues before, slug, words of the message
REFUSED = {
    "no words": (PROJECT, [], ["1"], "bad-revision", "needs to say why"),
    "blank words": (PROJECT, ["--why", "  "], ["1"], "bad-revision", "needs to say why"),
    "control character": (PROJECT, ["--why", "a\x07"], ["1"], "bad-revision", "do not fit"),
    "too many words": (PROJECT, ["--why", "a" * 401], ["1"], "bad-revision", "do not fit"),
    "same number": (PROJECT, ["--why", "x", "--number", "1"], ["1"], "issue-exists", "issue 1 is there already"),
    "same number in capitals": (PROJECT, ["--why", "x", "--number", "b"], ["B"], "issue-exists", "issue b is there"),
    "other words": (PROJECT, ["--why", "x"], [], "bad-revision", "another reason"),
    "two dates": (PROJECT.replace("date: 2026-11-16\n", "date: 2026-11-17\n"), [], [], "bad-revision", "two dates"),
    "too early": (
        PROJECT.replace("date: 2026-11-16\n", "date: 2026-11-15\n"), ["--why", "x"], ["1"],
        "bad-revision", "dated before the last row",
    ),
    "an earlier number": (
        PROJECT.replace("trial}]", "trial}, {number: 2, date: 2026-11-16, why: x}]"), ["--number", "1", "--why", "x"],
        [], "bad-revision", "goes on after it",
    ),
    "no number after it": (PROJECT.replace("number: 1,", "number: final,"), ["--why", "x"], ["final"], "bad-revision", "comes after"),
    "no name for a folder": (PROJECT, ["--why", "x", "--number", "../2"], [], "bad-revision", "cannot name"),
    "a device": (PROJECT, ["--why", "x", "--number", "nul"], [], "bad-revision", "cannot name"),
    "no name in the record": (PROJECT.replace("number: 1,", "number: a/b,"), [], [], "bad-revision", "cannot name"),
    "no layout": (
        PROJECT.replace(ROW, "revisions:\n  -\n    # x\n    number: 1\n    date: 2026-11-16\n    why: trial\n"),
        ["--why", "x"], ["1"], "bad-revision", "laid out like this one",
    ),
    "not ready": (PROJECT.replace("preliminary", "for permit").replace("3 in", "4 in"), [], [], "not-ready", "is NG"),
    "a mistake": (PROJECT.replace("3 in", "3 inn"), [], [], "unknown-unit", "inn"),
}  # fmt: skip


@pytest.mark.parametrize("name", REFUSED)
def test_what_is_refused_leaves_all_as_it_was(tmp_path: Path, name: str) -> None:
    project, arguments, there, slug, words = REFUSED[name]
    make(tmp_path, project)
    for number in there:
        (tmp_path / "issues" / number).mkdir(parents=True)
        (tmp_path / "issues" / number / "issue.yaml").write_text("number: 1\n")
    before = tree(tmp_path)
    ran = issue(tmp_path, *arguments)
    assert ran.code == 2 and f"error[{slug}]" in ran.err and words in ran.err, ran.err
    assert tree(tmp_path) == before
    assert (tmp_path / "issues").exists() == bool(there)


def test_places_of_problems_are_those_of_the_file_as_it_stands(tmp_path: Path) -> None:
    """A row that is not there yet moves nothing: NG is told at the line of the calculation in the author's text."""
    project = HEAD.replace(ROW, "revisions:\n  - {number: 1, date: 2026-11-16, why: trial}\n")
    project = project.replace("preliminary", "for permit") + "calculations:\n" + CALCULATION.replace("3 in", "4 in")
    make(tmp_path, project)
    ran = issue(tmp_path, "--number", "2", "--why", "x")
    line = project.split("\n").index(CALCULATION.rstrip().replace("3 in", "4 in")) + 1
    assert ran.code == 2 and f"project.yaml:{line}:" in ran.err


def test_a_row_written_by_hand_for_the_next_issue_is_taken(tmp_path: Path) -> None:
    make(tmp_path)
    assert issue(tmp_path).code == 0
    edit(tmp_path / "project.yaml", "trial}]", "trial}, {number: P03, date: 2026-11-16, why: second  try}]")
    before = (tmp_path / "project.yaml").read_bytes()
    assert issue(tmp_path, "--why", "second try").code == 0
    assert (tmp_path / "project.yaml").read_bytes() == before
    assert issue(tmp_path, "--why", "third").code == 0
    assert names(tmp_path / "issues") == ["1", "P03", "P04"]


@pytest.mark.parametrize(
    ("number", "after"),
    [
        ("1", "2"),
        ("9", "10"),
        ("09", "10"),
        ("P02", "P03"),
        ("2.9", "2.10"),
        ("B", "C"),
        ("y", "z"),
        ("Z", ""),
        ("AB", ""),
    ],
)
def test_the_number_after(number: str, after: str) -> None:
    assert number_after(number) == after


@pytest.mark.parametrize("column", ["b: Width", "b: {column: Width, unit: in}"])
def test_a_workbook_is_frozen_as_it_is(tmp_path: Path, column: str) -> None:
    sheet = "[{file: sub/rows.xlsx, template: trial, mark: Mark, title: 'Beam {Mark}', columns: {" + column + "}}]"
    make(tmp_path, HEAD + "schedules: " + sheet + "\ncalculations:\n  - include: ./sub/more.yaml\n")
    (tmp_path / "sub").mkdir()
    (tmp_path / "sub" / "more.yaml").write_text("calculations:\n" + CALCULATION)
    book = xlsxwriter.Workbook(tmp_path / "sub" / "rows.xlsx")
    page = book.add_worksheet("A")
    for row, cells in enumerate((["Mark", "Width"], ["W1", "2 in"], ["W2", "3 in"])):
        page.write_row(row, 0, cells)
    book.close()
    ran = issue(tmp_path)
    assert ran.code == 0, ran.err
    frozen = tree(tmp_path / "issues" / "1")
    assert frozen["inputs/sub/rows.xlsx"] == (tmp_path / "sub" / "rows.xlsx").read_bytes()
    assert "inputs/sub/more.yaml" in frozen
    assert "the same bytes as issued" in run("build", str(tmp_path / "issues" / "1")).out


CHOICE = (
    HEAD
    + "calculations:\n  - mark: T1\n    title: Trial\n    template: trial\n    choose: [{b: 4 in}, {b: 3 in}, {b: 2 in}]\n"
)


def test_a_selection_stays_on_record_and_a_build_says_what_has_changed(tmp_path: Path) -> None:
    make(tmp_path, CHOICE)
    assert "selection   T1: b 3 in" in issue(tmp_path).out
    record = yaml.load((tmp_path / "issues" / "1" / "issue.yaml").read_bytes(), yaml.BaseLoader)
    assert record["selections"] == {"T1": {"b": "3 in"}}
    assert "issue 1 has" not in run("build", str(tmp_path)).out
    # the limit of the template is drawn tighter, and another candidate serves
    edit(tmp_path / "trial.yaml", "r <= 1'", "r <= 0.8'")
    ran = run("build", str(tmp_path))
    assert ran.code == 0 and "T1       selection: b 2 in; issue 1 has b 3 in" in ran.out
    told = json.loads(run("build", str(tmp_path), "--json").out)
    assert told["selections_changed"] == [{"mark": "T1", "issued": {"b": "3 in"}, "now": {"b": "2 in"}}]
    assert (told["issue"], told["as_issued"]) == ("1", None)
    # the issue takes its own template, and its own candidate
    assert "the same bytes as issued" in run("build", str(tmp_path / "issues" / "1")).out
    (tmp_path / "issues" / "1" / "issue.yaml").write_text("number: 1\n")
    assert "selections are not compared with issue 1: " in run("build", str(tmp_path)).out


ALTERED = {
    "an input": "inputs/project.yaml", "a template": "templates/trial.yaml", "the values": "values.json",
    "the package": "package.pdf",
}  # fmt: skip


@pytest.mark.parametrize("name", ALTERED)
@pytest.mark.parametrize("how", ["changed", "gone", "link"])
def test_a_file_of_an_issue_that_is_not_as_issued_is_named(tmp_path: Path, name: str, how: str) -> None:
    make(tmp_path)
    assert issue(tmp_path).code == 0
    folder = tmp_path / "issues" / "1"
    path = folder / ALTERED[name]
    data = path.read_bytes()
    path.unlink()
    if how == "changed":
        path.write_bytes(data + b" ")
    elif how == "link":
        (tmp_path / "outside").write_bytes(data)
        path.symlink_to(tmp_path / "outside")
    ran = run("build", str(folder))
    line = (folder / "issue.yaml").read_text().split("\n").index(f"  {ALTERED[name]}: {sha256(data).hexdigest()}") + 1
    assert ran.code == 2 and f"issue.yaml:{line}:" in ran.err and "error[issue-altered]" in ran.err, ran.err
    assert f"`{ALTERED[name]}` is not the file that was issued" in ran.err
    assert names(tmp_path / "issues") == ["1"]


@pytest.mark.parametrize("text", ["", "- a\n", "number: 1\n", "files: {a: b}\n", "files: [a]\n", "x: &a 1\n"])
def test_a_record_that_says_something_else_is_a_problem_with_its_place(tmp_path: Path, text: str) -> None:
    make(tmp_path)
    assert issue(tmp_path).code == 0
    (tmp_path / "issues" / "1" / "issue.yaml").write_text(text)
    ran = run("build", str(tmp_path / "issues" / "1"))
    assert ran.code == 2 and "issue.yaml:1:" in ran.err and "Traceback" not in ran.err


def test_a_package_that_comes_out_otherwise_is_exit_code_1(tmp_path: Path) -> None:
    """As under another version of the program: the digest of the record is that of another package."""
    make(tmp_path)
    assert issue(tmp_path).code == 0
    folder = tmp_path / "issues" / "1"
    was = sha256((folder / "package.pdf").read_bytes()).hexdigest()
    (folder / "package.pdf").write_bytes(EARLIER)
    edit(folder / "issue.yaml", was, sha256(EARLIER).hexdigest())
    ran = run("build", str(folder), "--json")
    assert ran.code == 1 and json.loads(ran.out)["as_issued"] is False
    assert "differs from the package issued" in run("build", str(folder)).out


@pytest.mark.parametrize("target", ["package.pdf", "inputs/project.pdf", "new.pdf", "../1/package.pdf"])
def test_nothing_is_written_into_an_issue(tmp_path: Path, target: str) -> None:
    make(tmp_path)
    assert issue(tmp_path).code == 0
    folder = tmp_path / "issues" / "1"
    before = tree(folder)
    for built in (tmp_path, folder):
        ran = run("build", str(built), "-o", str(folder / target))
        assert ran.code == 2 and "it would stand in a frozen issue" in ran.err
    assert tree(folder) == before


def test_issues_that_lead_elsewhere_are_refused(tmp_path: Path) -> None:
    (tmp_path / "project").mkdir()
    (tmp_path / "elsewhere").mkdir()
    make(tmp_path / "project")
    (tmp_path / "project" / "issues").symlink_to(tmp_path / "elsewhere")
    ran = issue(tmp_path / "project")
    assert ran.code == 2 and "leads elsewhere" in ran.err and names(tmp_path / "elsewhere") == []


def test_a_link_to_a_project_file_stays_a_link(tmp_path: Path) -> None:
    make(tmp_path)
    (tmp_path / "project.yaml").rename(tmp_path / "real.yaml")
    (tmp_path / "project.yaml").symlink_to("real.yaml")
    assert issue(tmp_path, "--number", "2", "--why", "x").code == 0
    assert (tmp_path / "project.yaml").is_symlink() and "number: 2" in (tmp_path / "real.yaml").read_text()


def test_two_projects_of_one_folder_do_not_share_issues(tmp_path: Path) -> None:
    make(tmp_path)
    assert issue(tmp_path).code == 0
    (tmp_path / "garage.yaml").write_text(PROJECT)
    before = tree(tmp_path)
    ran = run("issue", str(tmp_path / "garage.yaml"))
    assert ran.code == 2 and "is of another project" in ran.err and "issues of project.yaml" in ran.err
    assert tree(tmp_path) == before
    # a project file under a new name keeps its issues
    (tmp_path / "project.yaml").unlink()
    assert run("issue", str(tmp_path / "garage.yaml"), "--why", "x").code == 0
    assert names(tmp_path / "issues") == ["1", "2"]
    assert "the same bytes as issued" in run("build", str(tmp_path / "issues" / "2")).out


def test_other_commands_read_an_issue_too(tmp_path: Path) -> None:
    make(tmp_path)
    assert issue(tmp_path).code == 0
    before = tree(tmp_path)
    edit(tmp_path / "trial.yaml", "b/3 in", "b/4 in")
    folder = str(tmp_path / "issues" / "1")
    assert run("values", folder, "--json").out.encode() == before["issues/1/values.json"]
    assert "3 in" in run("trace", folder, "T1.r").out
    assert run("values", str(tmp_path), "--json").out.encode() != before["issues/1/values.json"]
    # the sheet stands beside the issue, and nothing is in it that was not
    assert run("sampler", folder).code == 0
    assert [name for name in names(tmp_path / "issues") if name != "1"] == ["1.sampler.pdf"]
    assert tree(tmp_path / "issues" / "1") == {n[9:]: d for n, d in before.items() if n.startswith("issues/1/")}


# -------------------------------------------------------- writes that fail


def _second(tmp_path: Path) -> dict[str, bytes]:
    """Make a project whose first issue is out; return its files."""
    make(tmp_path)
    assert issue(tmp_path).code == 0
    return tree(tmp_path)


@pytest.mark.parametrize("call", ["rename", "fsync", "replace"])
def test_a_write_that_fails_leaves_neither_issue_nor_row(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, call: str
) -> None:
    """The disk is full, or the folder may not be written to: at the first file, at the row, at the last step."""
    before = _second(tmp_path)

    def fail(*arguments: object, **options: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(filesystem.os, call, fail)
    ran = issue(tmp_path, "--why", "again")
    assert ran.code == 2 and "no space left on device; " not in ran.err and "no space left" in ran.err, ran.err
    monkeypatch.undo()
    assert tree(tmp_path) == before
    assert names(tmp_path / "issues") == ["1"]
    assert issue(tmp_path, "--why", "again").code == 0


def test_a_file_where_the_folder_of_issues_would_be(tmp_path: Path) -> None:
    make(tmp_path)
    (tmp_path / "issues").write_text("notes", encoding="utf-8")
    before = tree(tmp_path)
    ran = issue(tmp_path)
    assert ran.code == 2 and "error[cannot-write]" in ran.err
    assert tree(tmp_path) == before


def test_a_folder_that_may_not_be_written_to(tmp_path: Path) -> None:
    make(tmp_path)
    tmp_path.chmod(0o555)
    if os.access(tmp_path, os.W_OK):
        pytest.skip("whoever runs this is kept out of no folder")
    ran = issue(tmp_path)
    tmp_path.chmod(0o755)
    assert (
        ran.code == 2
        and "error[cannot-write]" in ran.err
        and names(tmp_path) == ["project.pdf", "project.yaml", "trial.yaml"]
    )


def test_a_file_where_the_folder_of_issues_would_stand(tmp_path: Path) -> None:
    make(tmp_path)
    (tmp_path / "issues").write_text("a list")
    ran = issue(tmp_path)
    assert ran.code == 2 and "error[cannot-write]" in ran.err and (tmp_path / "issues").read_text() == "a list"


_KILLED = """
import os, signal, sys
sys.path.insert(0, {root!r})
def die(*arguments, **options):
    os.kill(os.getpid(), signal.SIGKILL)
os.{call} = die
from calcreport.__main__ import main
main(["issue", {folder!r}, "--why", "again"])
"""


@pytest.mark.parametrize("call", ["fsync", "replace", "rename"])
def test_a_killed_issue_leaves_no_half_and_can_be_made_again(tmp_path: Path, call: str) -> None:
    before = _second(tmp_path)
    script = _KILLED.format(root=PLACE, call=call, folder=str(tmp_path))
    ran = subprocess.run([sys.executable, "-c", script], cwd=PLACE, capture_output=True, check=False)
    assert ran.returncode == -signal.SIGKILL, ran.stderr
    assert [name for name in names(tmp_path / "issues") if not name.startswith(".")] == ["1"]
    rest = {n: d for n, d in tree(tmp_path).items() if "/." not in n and not n.startswith(".")}
    row = call == "rename"  # killed at the last step: the row is entered, and not issued yet
    assert (rest.pop("project.yaml") == before.pop("project.yaml")) is not row
    assert rest == before
    for left in (tmp_path / "issues").glob(".*.part"):
        os.utime(left, (0, 0))
    again = issue(tmp_path, "--why", "again")
    assert again.code == 0, again.err
    assert names(tmp_path / "issues") == ["1", "2"], "what was left behind is swept"
    assert (tmp_path / "project.yaml").read_text().count("number: 2") == 1
    assert "the same bytes as issued" in run("build", str(tmp_path / "issues" / "2")).out


def test_a_project_saved_while_it_is_issued(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    before = _second(tmp_path)
    real = filesystem.shutil.rmtree

    def save(*arguments: object, **options: object) -> None:
        # the folder is about to be written
        (tmp_path / "project.yaml").write_text(PROJECT + "# saved\n")
        real(*arguments, **options)  # type: ignore[arg-type]

    monkeypatch.setattr(filesystem.shutil, "rmtree", save)
    ran = issue(tmp_path, "--why", "again")
    assert ran.code == 2 and "was saved meanwhile" in ran.err
    assert tree(tmp_path) == before | {"project.yaml": (PROJECT + "# saved\n").encode()}


def test_a_folder_is_put_where_nothing_stands(tmp_path: Path) -> None:
    place = tmp_path / "a" / "b"
    assert put_folder(place, {"x/y": b"1"}, lambda: "no") == "no" and names(tmp_path) == []
    assert put_folder(place, {"x/y": b"1"}, lambda: "") == "" and tree(place) == {"x/y": b"1"}
    assert put_folder(place, {"z": b"2"}, lambda: "") == "something stands there" and tree(place) == {"x/y": b"1"}
    assert put_folder(tmp_path / "a" / "B", {"z": b"2"}, lambda: "") == "something stands there"
    assert names(tmp_path / "a") == ["b"]


def test_a_folder_of_another_kind_is_written_to(tmp_path: Path) -> None:
    (tmp_path / "issues" / "notes").mkdir(parents=True)
    assert replace_file(tmp_path / "issues" / "notes" / "a.pdf", b"%PDF-") == ""
