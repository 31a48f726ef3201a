"""What problems of issues mean and how to mend them, by slug."""

from __future__ import annotations

ISSUES: dict[str, str] = {
    "bad-revision": """The revision record does not allow this issue, or needs more to be told.
An issue has a row in the record: the last one while it has not been issued yet, else a new one with the next number.
Its date is the date of the project, which may not lie before the last row. The words of a row that stands there are
not changed by a command.

    calcreport issue tower --why 'columns on grid C moved'""",
    "issue-altered": """A file of a frozen issue is not the file that was issued, or could not be frozen as it was.
The record of an issue holds the SHA-256 digest of every file in it. Put the file back from the office's archive, or
out of the package issued: the PDF carries inputs, templates and values. What has changed belongs in the next issue.

    calcreport build issues/1""",
    "issue-exists": """An issue of this number stands beside the project.
What left the office is kept as it is and never written over. Leave --number out to take the next one.

    calcreport issue tower --why 'columns on grid C moved'""",
    "not-an-issue": """A frozen issue is needed here, or a project that is still worked on, and the other was given.
A folder of `issues` can be built again and marked superseded, and nothing else: it is not watched and not issued twice.

    calcreport build issues/1 --superseded""",
}
