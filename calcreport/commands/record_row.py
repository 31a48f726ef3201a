"""Which row of the revision record an issue has: the last one where it was not issued yet, or a new one after it.

A project's record and what the person asked for in, a row out, or problems. The date is the project's, as no clock is
read.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.read.model import Issue, Project
from calcreport.read.nodes import Mapping, Sequence, read_tree
from calcreport.read.revision_record import Insertions, append_row, row_text

#: a number that can name a folder on every system
_NAME = re.compile(r"[A-Za-z0-9](?:[A-Za-z0-9._-]{0,18}[A-Za-z0-9])?")
_DEVICES = re.compile(r"(?i:con|prn|aux|nul|(?:com|lpt)[0-9])(?:\..*)?")
_COUNTED = re.compile(r"(.*?)([0-9]+)")
_LONGEST = 400


@dataclass(frozen=True, slots=True)
class Row:
    """The row of an issue, and the project file as it stands with it."""

    issue: Issue
    text: str
    #: () where the record has the row
    insertions: Insertions


def choose_row(
    source: Source,
    project: Project,
    why: str | None,
    number: str | None,
    issued: Callable[[str], str],
    problems: Problems,
) -> Row | None:
    """Return the row, or None after adding why there is none.

    `issued` returns the name of what stands where an issue of that number would, '' for nothing.
    """
    chosen = _number(source, project, number, issued, problems)
    if chosen is None:
        return None
    last = project.issues[-1] if project.issues else None
    at = _places(source)
    if standing := issued(chosen):
        problems.add("issue-exists", None, f"issue {chosen} is there already", expected="a number not yet issued",
                     found=f"issues/{standing}", hint="an issue is kept as it is; give the next one a number of its own"
                     )  # fmt: skip
    elif last is not None and chosen == last.number:
        _hold_row(last, project, why, at, problems)
        return Row(last, source.text, ()) if not problems else None
    elif chosen in [row.number for row in project.issues]:
        problems.add("bad-revision", at[0], f"the record holds {chosen} and goes on after it",
                     expected="the number of the last row, or a new one", found=chosen)  # fmt: skip
    elif last is not None and project.date < last.date:
        problems.add("bad-revision", at[1], "the project is dated before the last row of its record",
                     expected=f"{last.date} or later", found=project.date,
                     hint="give the project the date of this issue")  # fmt: skip
    elif words := _words(why, problems):
        return _new_row(source, Issue(chosen, project.date, words), at[0], problems)
    return None


def _number(
    source: Source, project: Project, asked: str | None, issued: Callable[[str], str], problems: Problems
) -> str | None:
    last = project.issues[-1].number if project.issues else ""
    found = asked if asked is not None else "1" if not last else last if not issued(last) else number_after(last)
    if found and _NAME.fullmatch(found) and not _DEVICES.fullmatch(found):
        return found
    at = _places(source)[0] if asked is None else None
    if not found:
        problems.add("bad-revision", at, f"nobody knows what comes after `{last[:40]}`", expected="`--number`",
                     found="no number")  # fmt: skip
    else:
        problems.add("bad-revision", at, f"`{found[:40]}` cannot name the folder of an issue",
                     expected="up to twenty letters, digits, dots and hyphens, such as 2, B or 2.1",
                     found=found[:40], hint="`--number` gives this issue another one")  # fmt: skip
    return None


def number_after(number: str) -> str:
    """Return the number after another: 3 after 2, P03 after P02, C after B; '' where nobody knows."""
    if counted := _COUNTED.fullmatch(number):
        return counted[1] + str(int(counted[2]) + 1).zfill(len(counted[2]))
    if len(number) == 1 and number.isascii() and number.isalpha() and number not in "zZ":
        return chr(ord(number) + 1)
    return ""


def _hold_row(last: Issue, project: Project, why: str | None, at: tuple[Span, Span], problems: Problems) -> None:
    """Hold a row that stands in the record against the project and against what the person typed."""
    if last.date != project.date:
        problems.add("bad-revision", at[0], f"the record and the project give issue {last.number} two dates",
                     expected=f"{project.date}, the date of the project", found=last.date,
                     hint="mend one of the two; a row that left the office long ago is followed by a new one with "
                     "`--number`", related=((at[1], "the date of the project"),))  # fmt: skip
    elif why is not None and why.split() != last.why.split():
        problems.add("bad-revision", at[0], f"the record gives issue {last.number} another reason",
                     expected=f"--why '{last.why[:60]}', or no --why", found=why[:60],
                     hint="leave --why out to issue it in the words of the record, or put yours there")  # fmt: skip


def _words(why: str | None, problems: Problems) -> str:
    words = " ".join((why or "").split())
    if not words:
        problems.add("bad-revision", None, "the revision record needs to say why", expected="`--why TEXT`",
                     found="no words", hint="what changed and why, as a reviewer would read it")  # fmt: skip
    elif len(words) > _LONGEST or not words.isprintable():
        problems.add("bad-revision", None, "these words do not fit a row of the revision record",
                     expected=f"up to {_LONGEST} letters that can be printed",
                     found=f"{len(words)} letters" if words.isprintable() else "a control character")  # fmt: skip
    else:
        return words
    return ""


def _new_row(source: Source, issue: Issue, at: Span, problems: Problems) -> Row | None:
    found = append_row(source, issue)
    if found is not None:
        return Row(issue, found.text, found.insertions)
    problems.add("bad-revision", at, "a row cannot be put into a record laid out like this one",
                 expected=f"the row {row_text(issue)} after the last", found="no place for it",
                 hint="write it there, then issue without --why")  # fmt: skip
    return None


def _places(source: Source) -> tuple[Span, Span]:
    """Return the place of the last row of the record, or of the record, and that of the project's date."""
    tree = read_tree(source, Problems())
    assert isinstance(tree, Mapping)
    record, date = tree.get("revisions"), tree.get("date")
    whole = record.span if record is not None else tree.span
    last = record.items[-1].span if isinstance(record, Sequence) and record.items else whole
    return last.part(0, 1), date.span if date is not None else whole.part(0, 1)
