"""What the answers of a comment log point at in a worked project; what is gone is a problem.

`WorkedProject`, a comment log and the marks of the front sheets in, one place a pointer out. Knows no sheets.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass

from calcreport.calculate.answer_model import AnswerPlace
from calcreport.calculate.linking import find_path
from calcreport.calculate.model import MEMBER, Member, WorkedCheck, WorkedProject, split_path
from calcreport.core.problems import Problems, listed
from calcreport.core.source import Span
from calcreport.read.review_model import CommentLog, Pointer


def find_answers(
    project: WorkedProject, log: CommentLog, fronts: Collection[str], problems: Problems
) -> dict[Pointer, AnswerPlace]:
    """Find what every pointer of a log names; `fronts` are the marks of the sheets round the calculations."""
    members = {member.mark: member for worked in project.calculations for member in worked.members}
    for worked in project.calculations:
        # what like members share is found whole under its own mark
        mark = worked.calculation.mark
        members.setdefault(mark, Member(mark, worked, (-1, -1), worked.checks))
    finder = _Finder(members, tuple(fronts), problems)
    pointers = [p for comment in log.comments for p in comment.answered if isinstance(p, Pointer)]
    found = {pointer: finder.find(pointer) for pointer in pointers}
    return {pointer: place for pointer, place in found.items() if place is not None}


@dataclass(slots=True)
class _Finder:
    #: members, and calculations that like members share, by mark
    members: dict[str, Member]
    fronts: tuple[str, ...]
    problems: Problems

    def find(self, pointer: Pointer) -> AnswerPlace | None:
        mark, path = pointer.mark, pointer.path
        at = pointer.span.part(0, len(mark))
        if mark in self.fronts:
            if not path:
                return AnswerPlace(mark)
            self.problems.add("unknown-name", pointer.span, f"`{mark}` has no lines of its own", expected=mark,
                              found=f"{mark}.{path}"[:40])  # fmt: skip
            return None
        if mark in self.members:
            return self.within(pointer, self.members[mark])
        known = list(dict.fromkeys([*self.members, *self.fronts]))
        # an appendix has a letter alone, which is near to every mark
        near = self.problems.near(mark, [name for name in known if len(name) > 1])
        self.problems.add("unknown-name", at, f"the package holds no `{mark}`",
                          expected=listed(known, 12), found=mark, hint=near)  # fmt: skip
        return None

    def within(self, pointer: Pointer, member: Member) -> AnswerPlace | None:
        """Find the value or the checks of a path of one member."""
        worked, path = member.worked, pointer.path
        mark = worked.calculation.mark
        if not path:
            return AnswerPlace(mark)
        tail = pointer.span.part(len(pointer.mark) + 1, len(pointer.mark) + 1 + len(path))
        steps, name = split_path(path)
        named = [check for check in member.checks if check.line.name == name]
        slot = worked.plan.by_path.get(name)
        if slot is None and not named:
            known = [*worked.plan.by_path, *(check.line.name for check in member.checks)]
            self.problems.add("unknown-name", tail, f"`{pointer.mark}` has neither a value nor a check `{name[:40]}`",
                              expected="a symbol or a check of that calculation", found=name[:40],
                              hint=self.problems.near(name, dict.fromkeys(known)))  # fmt: skip
            return None
        if named:
            return self.checks(tail, member, steps, named)
        shared = member.place[0] >= 0 and slot is not None and bool(worked.plan.slots[slot].sets)
        found = find_path(worked, f"{MEMBER}[{member.mark}].{path}" if shared else path, tail, self.problems)
        return AnswerPlace(mark, found) if found is not None else None

    def checks(
        self, at: Span, member: Member, steps: list[tuple[str, str]], named: list[WorkedCheck]
    ) -> AnswerPlace | None:
        """Return the checks of a name in the rows that are named; all of them where none is."""
        worked = member.worked
        rows = [(check, _rows(check, member)) for check in named]
        found = tuple(check for check, opened in rows if all(opened.get(rows_of) == row for rows_of, row in steps))
        if found:
            return AnswerPlace(worked.calculation.mark, None, found)
        known = ["".join(f"{name}[{row}]." for name, row in opened.items()) + check.line.name for check, opened in rows]
        typed = "".join(f"{name}[{row}]." for name, row in steps) + named[0].line.name
        self.problems.add("not-a-row", at, f"`{member.mark}` has no such row of the check `{named[0].line.name}`",
                          expected=listed(dict.fromkeys(known), 12), found=typed[:60],
                          hint=self.problems.near(typed, known))  # fmt: skip
        return None


def _rows(check: WorkedCheck, member: Member) -> dict[str, str]:
    """Return the rows a check was worked in, by the names of their sets; the row of a shared member goes unsaid."""
    opened, worked = dict(check.open), member.worked
    found: dict[str, str] = {}
    for index, row in check.open:
        rows = worked.plan.sets[index]
        names = worked.values.names[index].get(tuple(opened[outer] for outer in rows.outer), ())
        if index != member.place[0] and row < len(names):
            found[rows.name] = names[row]
    return found
