"""A package in the making held against the issue before it: which one that is, and what has changed since.

A World and the values the package comes to in, the comparison with the revisions that follow from it out. Of the past
it reads one values file; that file is then among the inputs of the package, so that the package can be made again.
"""

from __future__ import annotations

import re
from typing import Any

from calcreport.calculate.model import WorkedProject
from calcreport.core.problems import Problems
from calcreport.core.record import record
from calcreport.core.world import NO_SUCH_FILE, World
from calcreport.history.comparison import compare_issues
from calcreport.history.frozen import VALUES, stated
from calcreport.history.issued import issued, read_values
from calcreport.history.model import Comparison, Issued, Revised, Revisions
from calcreport.history.revisions import revise

#: what a revision is called by where it has a folder of its own
_NUMBER = re.compile(r"\w[\w.-]*")


@record
class Reissue:
    """What has changed since the issue before."""

    comparison: Comparison
    revisions: Revisions
    #: name of the earlier values file inside the project folder, and its bytes
    name: str
    data: bytes


def since_last_issue(
    world: World, project: WorkedProject, values: dict[str, Any], problems: Problems
) -> Reissue | None:
    """Hold a package against the last issue beside its project; None where there is none.

    A revision that is frozen already and has changed since is no longer that revision: it is marked `1+`. One that
    has not changed is held against the issue before it, as it was when it was issued.
    """
    now = issued(values)
    assert isinstance(now, Issued)
    row = project.project.last_issue
    numbers = [one.number for one in project.project.issues]
    for number in dict.fromkeys(reversed(numbers)):
        if not _NUMBER.fullmatch(number):
            continue
        name = f"issues/{number}/{VALUES}"
        data = world.project_bytes(name)
        if data == NO_SUCH_FILE:
            continue
        if isinstance(data, bytes) and _of_another(world, data, project):
            continue
        before = _read(data)
        if isinstance(before, str):
            problems.add("no-values", None, f"{name[:200]} cannot be compared with",
                         expected="the values of the issue before", found=before)  # fmt: skip
            return None
        comparison = compare_issues(before, now)
        if number != row.number:
            made = Revised(row.number, row.date)
        elif comparison.differs:
            made = Revised(f"{row.number}+", project.project.date)
        else:
            continue
        assert isinstance(data, bytes)
        return Reissue(comparison, revise(comparison, made), name, data)
    return None


def _of_another(world: World, data: bytes, project: WorkedProject) -> bool:
    """Tell whether an issue was made from another project file of the same folder, one that is still there."""
    name = stated({VALUES: data}).get("file", "")
    return bool(name) and name != project.project.files[0].name and isinstance(world.project_bytes(name), bytes)


def _read(data: bytes | str) -> Issued | str:
    found = read_values(data) if isinstance(data, bytes) else data
    return issued(found) if isinstance(found, dict) else found
