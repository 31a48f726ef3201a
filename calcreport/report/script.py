"""The order in which a calculation is told, with its line numbers: what stands in full, what in a table.

`Worked` in, a flat list of numbered items out. Both the sheets and the values file follow it. Knows neither
digits nor formulas.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcreport.calculate.model import (
    Key,
    PlannedGiven,
    PlannedGives,
    Worked,
    WorkedBranches,
    WorkedCheck,
    WorkedEach,
    WorkedFigure,
    WorkedGives,
    WorkedLine,
    WorkedMethod,
    WorkedPart,
    WorkedRequire,
    WorkedRows,
    WorkedText,
    WorkedUnknown,
)
from calcreport.report.alike import alike
from calcreport.report.below import below, only_words, severity
from calcreport.report.items import (
    Item,
    SayAlike,
    SayBranch,
    SayCheck,
    SayChoice,
    SayEquation,
    SayFigure,
    SayFormula,
    SayGivens,
    SayHeading,
    SayLine,
    SayMade,
    SayMethod,
    SayOutput,
    SayOutputs,
    SayProof,
    SayRequire,
    SayRows,
    SayStop,
    SayTable,
    SayText,
    SayUnknown,
    SayUnseen,
    Script,
)


@dataclass(slots=True)
class _Writer:
    worked: Worked
    items: list[Item] = field(default_factory=list)
    line_of: dict[tuple[int, Key], int] = field(default_factory=dict)
    check_line: dict[int, int] = field(default_factory=dict)
    number: int = 0

    def next(self) -> int:
        self.number += 1
        return self.number


def write_script(worked: Worked) -> Script:
    """Return the items of a calculation in printed order."""
    writer = _Writer(worked)
    _givens(writer)
    if worked.selection is not None:
        writer.items.append(SayChoice(writer.next(), worked.selection))
    _lines(writer, worked.lines)
    if worked.stop is not None:
        unreached: dict[str, list[WorkedCheck]] = {}
        for check in worked.checks:
            if check.verdict == "not evaluated":
                unreached.setdefault(check.line.name, []).append(check)
        left = tuple((writer.next(), tuple(checks)) for checks in unreached.values())
        writer.check_line.update((id(check), number) for number, checks in left for check in checks)
        writer.items.append(SayStop(worked.stop, left))
    return Script(worked, tuple(writer.items), writer.line_of, writer.check_line)


def _givens(writer: _Writer) -> None:
    joined = alike(writer.worked)
    own = [given for given in writer.worked.plan.givens if given.rows < 0 and not given.over]
    rows = []
    for given in own:
        if any(given in givens for givens in joined.values()):
            continue
        number = writer.next()
        rows.append((number, given))
        for slot in (given.slot, *given.outputs):
            writer.line_of[slot, ()] = number
    if rows:
        writer.items.append(SayGivens(tuple(rows)))
    for word, givens in joined.items():
        number = writer.next()
        writer.items.append(SayAlike(number, word, givens))
        for given in givens:
            for slot in (given.slot, *given.outputs):
                writer.line_of[slot, ()] = number
    for given in writer.worked.plan.givens:
        if given.rows >= 0 or given.over:
            _given_table(writer, given)


def _given_table(writer: _Writer, given: PlannedGiven) -> None:
    number = writer.next()
    writer.items.append(SayRows(number, given))
    columns = given.columns if given.rows >= 0 else (given,)
    for column in columns:
        if column.rows < 0:
            _number_column(writer, column, number)
            continue
        alone = is_single(column, writer.worked)
        own = number if alone else writer.next()
        if not alone:
            writer.items.append(SayRows(own, column, given))
        for inner in column.columns:
            _number_column(writer, inner, own)


def _number_column(writer: _Writer, column: PlannedGiven, number: int) -> None:
    for slot in (column.slot, *column.outputs):
        for key in writer.worked.values.rows[slot]:
            writer.line_of[slot, key] = number


def is_single(column: PlannedGiven, worked: Worked) -> bool:
    """Tell whether every member has one row of a set, so that the table of members can show it."""
    return all(len(names) == 1 for names in worked.values.names[column.rows].values())


def _lines(writer: _Writer, lines: tuple[WorkedLine, ...]) -> None:
    for line in lines:
        match line:
            case WorkedGives():
                number = writer.next()
                writer.items.append(SayLine(number, line))
                writer.line_of[line.line.slot, line.key] = number
            case WorkedText():
                writer.items.append(SayText(line))
            case WorkedPart():
                title = ": ".join(words for words in (line.line.title, line.line.stem) if words)
                if title and not only_words(line.lines):
                    writer.items.append(SayHeading(title, 3))
                _lines(writer, line.lines)
            case WorkedBranches():
                if line.lines:
                    writer.items.append(SayBranch(line))
                _lines(writer, line.lines)
            case WorkedEach():
                _each(writer, line)
            case WorkedUnknown():
                equation, number = writer.next(), writer.next()
                writer.items.append(SayUnknown(equation, number, line))
                writer.line_of[line.line.slot, line.key] = number
                _lines(writer, line.lines)
                writer.items.append(SayEquation(writer.next(), line, "left"))
                writer.items.append(SayEquation(writer.next(), line, "right"))
            case WorkedRows():
                number = writer.next()
                writer.items.append(SayMade(number, line))
                for column in line.line.columns:
                    for key in writer.worked.values.rows[column.slot]:
                        writer.line_of.setdefault((column.slot, key), number)
            case WorkedCheck():
                number = writer.next()
                writer.items.append(SayCheck(number, line))
                writer.check_line[id(line)] = number
            case WorkedRequire():
                writer.items.append(SayRequire(writer.next(), line))
            case WorkedFigure():
                writer.items.append(SayFigure(line))
            case WorkedMethod():
                _method(writer, line)


def _method(writer: _Writer, line: WorkedMethod) -> None:
    """Number a method, every value it gives, every set, and every sum that proves them."""
    values, number = writer.worked.values, writer.next()
    writer.items.append(SayMethod(number, line))
    rows, made = dict(line.open), [index for index, _ in line.line.sets]
    for slot, _ in line.line.outputs:
        if not set(values.sets[slot]) & set(made):
            key = tuple(rows[index] for index in values.sets[slot])
            writer.items.append(SayOutput(writer.next(), number, slot, key))
            writer.line_of[slot, key] = writer.number
    for index in made:
        columns = tuple(slot for slot, _ in line.line.outputs if index in values.sets[slot])
        writer.items.append(SayOutputs(writer.next(), number, line, index, columns))
        for slot, key in line.places(values):
            if index in values.sets[slot]:
                writer.line_of[slot, key] = writer.number
    for place in range(len(line.result.proofs)):
        writer.items.append(SayProof(writer.next(), number, line, place))


def _plain(lines: tuple[WorkedLine, ...]) -> bool:
    """Tell whether a row holds single lines only, so that a table can tell it."""
    return all(isinstance(line, WorkedGives | WorkedText) for line in lines)


def _each(writer: _Writer, each: WorkedEach) -> None:
    rows = each.rows
    name = writer.worked.plan.sets[each.line.rows].name
    if each.line.show == "figure":
        _figures_only(writer, each)
    elif each.line.show == "every" or len(rows) <= 1:
        _rows_in_full(writer, each, name, range(len(rows)))
    elif any(below(row, WorkedCheck) for row in rows):
        governing = max(range(len(rows)), key=lambda row: _worst(rows[row]))
        _rows_in_full(writer, each, name, [governing])
        _number_rest(writer, each)
        _table(writer, each, governing)
    elif all(_plain(row) for row in rows):
        _formulas_once(writer, each)
        _table(writer, each, -1)
    else:
        _rows_in_full(writer, each, name, range(len(rows)))
        if each.line.table:
            _table(writer, each, -1)


def _figures_only(writer: _Writer, each: WorkedEach) -> None:
    """Tell the figures alone; what they rest on is in the values file, under the line before them."""
    for row in each.rows:
        for line in below(row, WorkedGives):
            writer.line_of.setdefault((line.line.slot, line.key), writer.number)
        for unknown in below(row, WorkedUnknown):
            writer.line_of.setdefault((unknown.line.slot, unknown.key), writer.number)
        writer.items.extend(SayFigure(figure) for figure in below(row, WorkedFigure))
    writer.items.append(SayUnseen(each))


def _worst(lines: tuple[WorkedLine, ...]) -> tuple[bool, float]:
    """Rank a row by its worst check: NG first, then by ratio."""
    checks = below(lines, WorkedCheck)
    failed = any(check.verdict == "NG" for check in checks)
    return failed, max((severity(check) for check in checks), default=-1.0)


def _rows_in_full(writer: _Writer, each: WorkedEach, name: str, rows: range | list[int]) -> None:
    governs = ", which governs" if len(rows) < len(each.rows) else ""
    for row in rows:
        if len(each.rows) > 1:
            writer.items.append(SayHeading(f"{name} {each.names[row]}{governs}", 3))
        _lines(writer, each.rows[row])


def _number_rest(writer: _Writer, each: WorkedEach) -> None:
    """Give the lines of rows told only in the table the number of the row told in full."""
    told = {slot: number for (slot, _), number in writer.line_of.items()}
    checks = {
        check.line.name: writer.check_line.get(id(check))
        for row in each.rows
        for check in below(row, WorkedCheck)
        if id(check) in writer.check_line
    }
    for row in each.rows:
        given = [(line.line.slot, line.key) for line in below(row, WorkedGives)]
        given += [(line.line.slot, line.key) for line in below(row, WorkedUnknown)]
        given += [place for method in below(row, WorkedMethod) for place in method.places(writer.worked.values)]
        for slot, key in given:
            writer.line_of.setdefault((slot, key), told.get(slot, writer.number))
        for check in below(row, WorkedCheck):
            writer.check_line.setdefault(id(check), checks.get(check.line.name) or writer.number)


def _formulas_once(writer: _Writer, each: WorkedEach) -> None:
    for place, line in enumerate(each.rows[0]):
        if isinstance(line, WorkedText):
            writer.items.append(SayText(line))
            continue
        worked = [row[place] for row in each.rows]
        gives = [one for one in worked if isinstance(one, WorkedGives)]
        arms = tuple({one.arm: one for one in reversed(gives)}[arm] for arm in sorted({one.arm for one in gives}))
        number = writer.next()
        writer.items.append(SayFormula(number, arms))
        for one in gives:
            writer.line_of[one.line.slot, one.key] = number


def _table(writer: _Writer, each: WorkedEach, governing: int) -> None:
    columns = each.line.table or tuple(_slots_given(each))
    checks = tuple(dict.fromkeys(check.line.name for row in each.rows for check in below(row, WorkedCheck)))
    writer.items.append(SayTable(writer.next(), each, columns, checks, governing))


def _slots_given(each: WorkedEach) -> list[int]:
    planned = [line for line in each.line.lines if isinstance(line, PlannedGives)]
    return [line.slot for line in planned]
