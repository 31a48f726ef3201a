"""The order in which a calculation is told, with its line numbers: what stands in full, what in a table.

`Worked` in, a flat list of numbered items out. Both the sheets and the values file follow it. Knows neither
digits nor formulas.
"""

from __future__ import annotations

from calcreport.calculate.model import (
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
from calcreport.report.alike import runs_on
from calcreport.report.below import below, only_words
from calcreport.report.governing import governing_row, telling_rows
from calcreport.report.items import (
    SayBranch,
    SayCheck,
    SayChoice,
    SayEquation,
    SayFigure,
    SayFormula,
    SayHeading,
    SayLine,
    SayMade,
    SayRequire,
    SayStop,
    SayTable,
    SayText,
    SayUnknown,
    SayUnseen,
    Script,
)
from calcreport.report.writer import Writer, tell_givens, tell_method


def write_script(worked: Worked) -> Script:
    """Return the items of a calculation in printed order."""
    writer = Writer(worked)
    tell_givens(writer)
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


def _lines(writer: Writer, lines: tuple[WorkedLine, ...]) -> None:
    before: WorkedLine | None = None
    for line in lines:
        follows, before = before, line
        match line:
            case WorkedGives():
                number = writer.number if runs_on(follows, line) else writer.next()
                writer.items.append(SayLine(number, line))
                writer.line_of[line.line.slot, line.key] = number
            case WorkedText():
                writer.items.append(SayText(line))
            case WorkedPart() if only_words(line.lines) and _stands(writer, line):
                # a part of a part that says what another said: once is enough
                pass
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
                tell_method(writer, line)


def _stands(writer: Writer, part: WorkedPart) -> bool:
    """Tell whether the words a part comes to, without values in them, stand above already; keep them if not."""
    said = tuple((text.line.kind, text.line.pieces) for text in below(part.lines, WorkedText))
    if any(isinstance(piece, int) for _, pieces in said for piece in pieces):
        return False
    stands = said in writer.said
    writer.said.add(said)
    return stands


def _plain(lines: tuple[WorkedLine, ...]) -> bool:
    """Tell whether a row holds single lines only, so that a table can tell it."""
    return all(isinstance(line, WorkedGives | WorkedText) for line in lines)


def _each(writer: Writer, each: WorkedEach) -> None:
    rows = each.rows
    name = writer.worked.plan.sets[each.line.rows].name
    if each.line.show == "figure":
        _figures_only(writer, each)
    elif each.line.show == "every" or len(rows) <= 1:
        _rows_in_full(writer, each, name, range(len(rows)))
    elif any(below(row, WorkedCheck) for row in rows):
        governing = governing_row(each)
        _rows_in_full(writer, each, name, [governing])
        _number_rest(writer, each)
        _table(writer, each, governing)
    elif all(_plain(row) for row in rows):
        _formulas_once(writer, each)
        _table(writer, each, -1)
    elif each.line.show == "first":
        _rows_in_full(writer, each, name, [0])
        _number_rest(writer, each)
        _table(writer, each, 0)
    else:
        _rows_in_full(writer, each, name, range(len(rows)))
        if each.line.table:
            _table(writer, each, -1)


def _figures_only(writer: Writer, each: WorkedEach) -> None:
    """Tell the figures alone; what they rest on is in the values file, under the line before them."""
    for row in each.rows:
        for line in below(row, WorkedGives):
            writer.line_of.setdefault((line.line.slot, line.key), writer.number)
        for unknown in below(row, WorkedUnknown):
            writer.line_of.setdefault((unknown.line.slot, unknown.key), writer.number)
        writer.items.extend(SayFigure(figure) for figure in below(row, WorkedFigure))
    writer.items.append(SayUnseen(each))


def _rows_in_full(writer: Writer, each: WorkedEach, name: str, rows: range | list[int]) -> None:
    told = any(below(row, WorkedCheck) for row in each.rows)
    governs = ", which governs" if told and len(rows) < len(each.rows) else ""
    for row in rows:
        if len(each.rows) > 1:
            writer.items.append(SayHeading(f"{name} {each.names[row]}{governs}", 3))
        _lines(writer, each.rows[row])


def _number_rest(writer: Writer, each: WorkedEach) -> None:
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


def _formulas_once(writer: Writer, each: WorkedEach) -> None:
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


def _table(writer: Writer, each: WorkedEach, governing: int) -> None:
    columns = each.line.table or tuple(_slots_given(each))
    checks = tuple(dict.fromkeys(check.line.name for row in each.rows for check in below(row, WorkedCheck)))
    if not columns and not checks:
        # guards that are met leave nothing to tell
        return
    rows = telling_rows(each)
    number = writer.next() if len(rows) > 1 else writer.number
    writer.items.append(SayTable(number, each, columns, checks, governing, rows))


def _slots_given(each: WorkedEach) -> list[int]:
    planned = [line for line in each.line.lines if isinstance(line, PlannedGives)]
    return [line.slot for line in planned]
