"""What a build says of issues: whether an issue came out as it was issued, whose selections differ from the last one's.

A package and what was opened in, words and facts for machines out.
"""

from __future__ import annotations

from hashlib import sha256

from calcreport.calculate.model import WorkedProject
from calcreport.commands.desk import Opened, open_record
from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.core.version import PROGRAM
from calcreport.filesystem import ISSUES, read_text, stands
from calcreport.history.frozen import PACKAGE, VALUES, stated
from calcreport.publish import Package
from calcreport.read.issued import IssueRecord


def selections(project: WorkedProject) -> dict[str, dict[str, str]]:
    """Return the candidate taken for each mark, its values as typed."""
    found: dict[str, dict[str, str]] = {}
    for worked in project.calculations:
        if worked.selection is not None:
            candidate = worked.selection.candidates[worked.selection.used]
            found[worked.calculation.mark] = dict(candidate.named)
    return found


def selection_words(values: dict[str, str]) -> str:
    """Return a selection as one line."""
    return ", ".join(f"{name} {text}" for name, text in values.items())


def other_project(opened: Opened, number: str) -> str:
    """Return the name of the project file an issue was made from where it is another one of the same folder, or ''.

    A file that is no longer there has been renamed: then the issue is of this project.
    """
    home = opened.path.parent
    found = read_text(home / ISSUES / number, VALUES)
    name = stated({VALUES: found.text.encode()}).get("file", "") if isinstance(found, Source) else ""
    return name if name and name != opened.path.name and stands(home / name) else ""


class Since:
    """A package beside what was issued before."""

    def __init__(self, opened: Opened, package: Package, plain: bool) -> None:
        """Hold a package against the issue it was built from, if `plain`, or against the last issue of its project."""
        assert package.worked is not None
        #: whether the bytes are those issued; None where they are not compared
        self.as_issued: bool | None = None
        #: selections that differ: mark, as issued, as taken now
        self.selected: list[tuple[str, dict[str, str], dict[str, str]]] = []
        self.last, self.unread = (opened.issue, "") if opened.issue else _last_issue(opened, package.worked)
        if self.last is not None:
            now = selections(package.worked)
            issued = self.last.selections
            self.selected = [(m, issued[m], now[m]) for m in issued if m in now and issued[m] != now[m]]
        if opened.issue is not None and plain:
            self.as_issued = sha256(package.data).hexdigest() == opened.issue.files.get(PACKAGE)

    @property
    def differs(self) -> bool:
        """Whether a frozen issue did not come out as it was issued."""
        return self.as_issued is False

    def words(self) -> list[str]:
        """Return what a person is told."""
        found = [self.unread] if self.unread else []
        if self.last is not None:
            number = self.last.issue.number
            found += [
                f"{mark:<8} selection: {selection_words(now)}; issue {number} has {selection_words(then)}"
                for mark, then, now in self.selected
            ]
            if self.as_issued is not None:
                by = self.last.program
                other = f"made by {by}, this is {PROGRAM}" if by != PROGRAM else f"made by {by} as well"
                same = "the same bytes as issued" if self.as_issued else f"differs from the package issued, {other}"
                found.append(f"issue {number}: {same}")
        return found

    def facts(self) -> dict[str, object]:
        """Return the same for machines; nothing where nothing was issued."""
        if self.last is None:
            return {}
        changed = [{"mark": mark, "issued": then, "now": now} for mark, then, now in self.selected]
        return {"issue": self.last.issue.number, "as_issued": self.as_issued, "selections_changed": changed}


def _last_issue(opened: Opened, project: WorkedProject) -> tuple[IssueRecord | None, str]:
    """Return the record of the newest row that was issued, or None and why it cannot be read, '' where none was."""
    folder = opened.path.parent / ISSUES
    number = next((row.number for row in reversed(project.project.issues) if stands(folder / row.number)), "")
    if not number or other_project(opened, number):
        return None, ""
    problems = Problems()
    record = open_record(folder / number, problems)
    why = "; ".join(problem.message for problem in problems.sorted()[:1])
    return record, f"selections are not compared with issue {number}: {why}" if record is None else ""
