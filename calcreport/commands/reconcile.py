"""`calcreport reconcile`: the schedule taken from the drawings against the calculations, in both directions."""

from __future__ import annotations

import json
import os
from argparse import Namespace
from collections import Counter
from pathlib import Path

from calcreport.calculate.model import Member, WorkedProject
from calcreport.commands.desk import Opened, open_project, say_problems
from calcreport.commands.reconciling import Columns, Reconciler, names_of, row_mark
from calcreport.core.problems import Problem, Problems, to_json
from calcreport.core.record import record
from calcreport.core.source import Source, Span
from calcreport.core.units import read_unit
from calcreport.driver import work
from calcreport.filesystem import Disk, library_folder
from calcreport.read.columns import Table, Use, make_table, read_use, text_use
from calcreport.read.fields import Fields
from calcreport.read.filled import schedule_columns
from calcreport.read.gathering import Gatherer
from calcreport.read.library import Library
from calcreport.read.nodes import Mapping, Scalar, read_tree
from calcreport.read.sheets import SheetRow, read_sheet


@record
class _Outcome:
    """What was found."""

    reconciler: Reconciler
    #: marks on the drawings alone, with their places
    not_calculated: tuple[tuple[str, str], ...]
    #: marks of calculations alone
    not_drawn: tuple[str, ...]
    #: calculations left aside, by template
    aside: Counter[str]


def run(arguments: Namespace) -> int:
    """Print what differs; 0 where nothing does, 1 where something does, 2 where something cannot be read."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json)
    result = work(opened.world, opened.source)
    if result.problems or result.worked is None:
        return say_problems(result.problems, arguments.json)
    problems = Problems()
    outcome = _reconcile(arguments, opened, result.worked, problems)
    if outcome is None:
        return say_problems(problems.sorted(), arguments.json)
    if arguments.json:
        print(json.dumps(_record(outcome, problems.sorted()), indent=1, ensure_ascii=False))
    else:
        for line in _lines(outcome):
            print(line)
        if problems:
            say_problems(problems.sorted())
    differs = outcome.reconciler.differences or outcome.not_calculated or outcome.not_drawn
    return 2 if problems else 1 if differs else 0


def _reconcile(arguments: Namespace, opened: Opened, project: WorkedProject, problems: Problems) -> _Outcome | None:
    table = _table(arguments, problems)
    if table is None:
        return None
    lengths = _told("--lengths", arguments.lengths or "")
    if lengths.text and read_unit(lengths.text, lengths.span, problems) is None:
        return None
    columns = _columns(arguments, opened, table, problems)
    if columns is None:
        return None
    found = Reconciler(table, columns, Library(opened.world, Problems()), lengths.text, problems)
    rows = found.rows(arguments.hidden or "")
    chosen, aside = _chosen(arguments, project, rows, problems)
    for member in chosen:
        if member.mark in rows:
            found.compare(member, rows[member.mark])
    _hold_compared(found, columns, chosen, table, problems)
    if arguments.hidden != "read":
        _hold_shown(found, problems)
    marks = {member.mark for member in project.members}
    alone = tuple((mark, row_mark(columns.mark, row).place) for mark, row in rows.items() if mark not in marks)
    return _Outcome(found, alone, tuple(member.mark for member in chosen if member.mark not in rows), aside)


def _table(arguments: Namespace, problems: Problems) -> Table | None:
    path = Path(arguments.schedule)
    name = _told(arguments.schedule, path.name)
    row = _told("--heading-row", arguments.heading_row or "")
    if not os.path.isfile(path):
        problems.add("no-file", None, f"{str(path)[:200]} cannot be read", expected="a schedule, CSV or XLSX",
                     found="no such file")  # fmt: skip
        return None
    if row.text and not (row.text.isascii() and row.text.isdecimal() and len(row.text) < 6):
        problems.add("not-a-number", row.span, "the row of the headings is a whole number", expected="1 or more",
                     found=row.text[:40])  # fmt: skip
        return None
    folder = path.parent.as_posix()
    home = Source("", "", "" if folder == "." else folder)
    sheet = _told("--sheet", arguments.sheet) if arguments.sheet is not None else None
    found = read_sheet(Disk(path.parent, library_folder()), name, sheet, home, problems)
    return make_table(found, int(row.text) if row.text else None, row.span, problems) if found is not None else None


def _told(name: str, text: str) -> Scalar:
    """Return text of the command line as a node with a place."""
    source = Source(name, text)
    return Scalar(text, Span(source, 0, len(text)), True)


def _columns(arguments: Namespace, opened: Opened, table: Table, problems: Problems) -> Columns | None:
    """Return what the columns hold: as told, else as the project's own schedules have them, else by their headings."""
    named: dict[str, Use] = {}
    for text in arguments.columns:
        whole = _told("--columns", text)
        name, sign, heading = text.partition("=")
        if not sign:
            problems.add("unknown-column", whole.span, "this says of no column what it holds",
                         expected="NAME=HEADING, such as b=Width", found=text[:40])  # fmt: skip
            return None
        at = whole.span.part(len(name) + 1, len(text))
        use = text_use(Scalar(heading, at, True), table, problems)
        if use is None:
            return None
        named[name.strip()] = use
    planned: dict[str, dict[str, Use]] = {}
    mark = named.pop("mark", None)
    for schedule in _schedules(opened):
        template = schedule.get("template")
        uses = planned.setdefault(template.text if isinstance(template, Scalar) else "", {})
        for name, node in schedule_columns(schedule).items():
            # a column that the drawings do not have is no mistake
            found = read_use(node, table, Problems())
            if found is not None and name == "mark":
                mark = mark or found
            elif found is not None:
                uses[name] = found
    mark = mark or text_use(_told("--columns", "Mark"), table, problems)
    return Columns(mark, named, planned) if mark is not None else None


def _schedules(opened: Opened) -> list[Mapping]:
    """Return the schedules of a project that was read without a problem."""
    tree = read_tree(opened.source, Problems())
    gatherer = Gatherer(opened.world, opened.source, Problems())
    if isinstance(tree, Mapping):
        gatherer.gather(Fields(tree, [key.text for key, _ in tree.entries], "", Problems()))
    return gatherer.gathered.schedules


def _chosen(
    arguments: Namespace, project: WorkedProject, rows: dict[str, SheetRow], problems: Problems
) -> tuple[list[Member], Counter[str]]:
    """Return the members compared: of the template told, else of every template the drawings name a mark of."""
    templates = {worked.calculation.template.name for worked in project.calculations}
    if arguments.template is not None and arguments.template not in templates:
        told = _told("--template", arguments.template)
        problems.add("no-template", told.span, f"no calculation is made by `{told.text[:60]}`",
                     expected=" or ".join(sorted(templates)), found=told.text[:60],
                     hint=problems.near(told.text, templates))  # fmt: skip
    drawn = (w for w in project.calculations if any(member.mark in rows for member in w.members))
    own = {worked.calculation.template.name for worked in drawn}
    own = own if arguments.template is None else {arguments.template}
    compared = (worked for worked in project.calculations if worked.calculation.template.name in own)
    chosen = [member for worked in compared for member in worked.members]
    aside = Counter(w.calculation.template.name for w in project.calculations)
    return chosen, Counter({name: count for name, count in aside.items() if name not in own})


def _hold_compared(found: Reconciler, columns: Columns, chosen: list[Member], table: Table, problems: Problems) -> None:
    """Add a problem for a column told that no calculation has, and where nothing but marks could be compared."""
    known = found.known | {name for member in chosen for name in names_of(member)} | {"size", "bars"}
    for name, use in columns.named.items():
        if name not in known:
            place = Span(use.span.source, 0, len(name))
            problems.add("unknown-name", place, f"no calculation compared is given `{name[:40]}`",
                         expected="mark, size, bars, or a given value", found=name[:40] or "nothing",
                         hint=problems.near(name, known))  # fmt: skip
    if found.marks and not found.values and not problems:
        problems.add("unknown-column", table.headings[0].cell.span, "no column but the mark can be compared",
                     expected="a heading named as a given value is, or --columns NAME=HEADING",
                     found=", ".join(heading.cell.text for heading in table.headings)[:200])  # fmt: skip


def _hold_shown(found: Reconciler, problems: Problems) -> None:
    """Add `hidden-rows` for a hidden sheet, or a hidden column that was compared."""
    sheet = found.table.sheet
    hidden = [heading for heading in found.table.headings if heading.index in sheet.hidden_columns & found.used]
    if sheet.is_hidden:
        hidden = [*hidden, found.table.headings[0]]
    for heading in hidden:
        problems.add("hidden-rows", heading.cell.span, "this stands in a hidden column or sheet, and it is compared",
                     expected="what is shown, or `--hidden read`", found=heading.cell.text)  # fmt: skip


def _unused(outcome: _Outcome) -> list[str]:
    used = outcome.reconciler.used | {p.index for p in outcome.reconciler.columns.mark.pieces if not isinstance(p, str)}
    return [heading.cell.text for heading in outcome.reconciler.table.headings if heading.index not in used]


def _lines(outcome: _Outcome) -> list[str]:
    found = outcome.reconciler
    lines = [
        f"{d.mark:<12} {d.what}: {d.drawings} on the drawings, {d.calculations} calculated  ({d.place})"
        for d in found.differences
    ]
    lines += [f"{mark:<12} on the drawings, not calculated  ({place})" for mark, place in outcome.not_calculated]
    lines += [f"{mark:<12} calculated, not on the drawings" for mark in outcome.not_drawn]
    lines.append(
        f"{_counted(found.marks, 'mark')} and {_counted(found.values, 'value')} compared: "
        f"{_counted(len(found.differences), 'value')} different, {_counted(len(outcome.not_calculated), 'mark')} not "
        f"calculated, {_counted(len(outcome.not_drawn), 'mark')} not on the drawings"
    )
    unused = _unused(outcome)
    lines += [f"columns not compared: {', '.join(unused)}"] if unused else []
    aside = ", ".join(f"{count} by {name}" for name, count in sorted(outcome.aside.items()))
    return lines + ([f"calculations not compared: {aside}"] if aside else [])


def _counted(number: int, noun: str) -> str:
    return f"{number:,} {noun}{'' if number == 1 else 's'}"


def _record(outcome: _Outcome, problems: tuple[Problem, ...]) -> dict[str, object]:
    found = outcome.reconciler
    return {
        "marks": found.marks,
        "values": found.values,
        "differences": [
            {"mark": d.mark, "what": d.what, "drawings": d.drawings, "calculations": d.calculations, "place": d.place}
            for d in found.differences
        ],
        "not_calculated": [{"mark": mark, "place": place} for mark, place in outcome.not_calculated],
        "not_drawn": list(outcome.not_drawn),
        "columns_not_compared": _unused(outcome),
        "calculations_not_compared": dict(sorted(outcome.aside.items())),
        "problems": [to_json(problem) for problem in problems],
    }
