"""The limit states of every calculation by template: ratio, not applicable and why, or covered elsewhere.

A worked project in, blocks of the check summary out.
"""

from __future__ import annotations

from collections.abc import Callable

from calcreport.calculate.model import Member, Worked, WorkedCheck, WorkedProject
from calcreport.report.governing import governing, worst_checks
from calcreport.report.model import Block, Column, Emphasis, Formula, Heading, Paragraph, Strong, Table, TableRow, Words
from calcreport.report.notation import Notation

#: checks that stand side by side; a template of more has a row a check, and so many marks side by side
MOST_CHECKS, MOST_MARKS = 9, 10


def limit_states(project: WorkedProject, ratio: Callable[[WorkedCheck, str], str]) -> list[Block]:
    """Return every check of every calculation by template, and who covers what a template leaves out."""
    blocks: list[Block] = []
    groups: dict[str, list[Member]] = {}
    for member in project.members:
        if member.checks:
            groups.setdefault(member.worked.calculation.template.title, []).append(member)
    for title, members in groups.items():
        names = list(dict.fromkeys(check.line.name for member in members for check in worst_checks(member)))
        notes: dict[Formula, str] = {}
        cells = [_cells(member, names, notes, ratio) for member in members]
        blocks.append(Heading(title, 2))
        if len(names) <= MOST_CHECKS:
            blocks.append(_by_mark(names, members, cells))
        else:
            blocks += _by_check(names, members, cells)
        for condition, note in notes.items():
            blocks.append(Paragraph((f"{note} not applicable: ", condition, " does not hold."), "note"))
    said = [d for d in project.project.dispositions if d.limit_state]
    if said:
        rows = [TableRow(((d.limit_state,), (d.says,))) for d in said]
        blocks.append(Heading("Limit states covered elsewhere, by the engineer's word", 2))
        blocks.append(Table((Column(("Limit state",)), Column(("Covered by",), stretch=1.0)), tuple(rows)))
    return blocks


def _by_mark(names: list[str], members: list[Member], cells: list[list[Words]]) -> Table:
    columns = (Column(("Mark",)), *(Column((name,), "right", 1.0) for name in names))
    rows = [
        TableRow(((member.mark,), *own), "loud" if member.verdict == "NG" else "")
        for member, own in zip(members, cells, strict=True)
    ]
    return Table(columns, tuple(rows))


def _by_check(names: list[str], members: list[Member], cells: list[list[Words]]) -> list[Block]:
    blocks: list[Block] = []
    for start in range(0, len(members), MOST_MARKS):
        some = slice(start, start + MOST_MARKS)
        failed = {c.line.name for member in members[some] for c in worst_checks(member) if c.verdict == "NG"}
        rows = []
        for place, name in enumerate(names):
            emphasis: Emphasis = "loud" if name in failed else ""
            rows.append(TableRow(((name,), *(own[place] for own in cells[some])), emphasis))
        columns = (Column(("Check",)), *(Column((member.mark,), "right") for member in members[some]))
        blocks.append(Table(columns, tuple(rows)))
    return blocks


def _cells(
    member: Member, names: list[str], notes: dict[Formula, str], ratio: Callable[[WorkedCheck, str], str]
) -> list[Words]:
    mark, chief = member.worked.calculation.mark, governing(member)
    cells: list[Words] = []
    by_name = {check.line.name: check for check in worst_checks(member)}
    for name in names:
        check = by_name.get(name)
        if check is None:
            cells.append(("–",))
            continue
        text = ratio(check, mark) or check.verdict
        if check.verdict == "NG":
            cells.append((Strong(f"{text} NG"),))
        elif check is chief:
            cells.append((Strong(text),))
        else:
            cells.append((text if check.verdict != "not applicable" else _not_applicable(member.worked, check, notes),))
    return cells


def _not_applicable(worked: Worked, check: WorkedCheck, notes: dict[Formula, str]) -> str:
    """Return the mark of the note that says why a check is not applicable."""
    if check.excluded_by is None:
        return "n.a."
    condition = Notation(worked.plan.slots).condition(check.excluded_by)
    return notes.setdefault(condition, f"n{len(notes) + 1}")
