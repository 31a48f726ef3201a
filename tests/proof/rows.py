"""The claims of tables: formulas printed once for all rows, rows beside the one in full, columns of ratios.

In: a `Desk`. Out: findings on it. Every cell is worked with the printed cells of its row and the values of the sheet.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence
from decimal import Decimal, DivisionByZero, InvalidOperation

from .account import Desk
from .arithmetic import Drawn, Mixed, NoRows, Unknown, valued
from .calculations import Calculation, TableHere, is_arm
from .conditions import in_unit, judge, matches
from .equations import symbol_of
from .expressions import Node, Over, Unread, parse, split, symbols, walk
from .forms import juxtaposed, left_symbol, short
from .letters import Token
from .scope import Scope, within
from .statements import NumberedLine, Statement
from .tables import Table
from .units import Printed, is_number


def is_row_formula(calculation: Calculation, statement: Statement) -> bool:
    """Tell whether a formula stands without result, for the rows of a table."""
    parts, relations = split(statement.tokens, "relation")
    name = symbol_of(parts[0])
    if relations != ["="] or name is None or not calculation.belongs(name):
        return False
    if is_arm(statement):
        return True
    try:
        return bool(symbols(parse(parts[1])))
    except Unread:
        return True


def row_formula(desk: Desk, name: str, arms: list[Statement], line: NumberedLine) -> int:
    """Work a formula for each row of the tables after it that print its results."""
    done = 0
    for here in desk.calculation.tables:
        table = here.table
        place = table.column(name)
        if place is None or (table.page, -table.y) < (line.page, -line.y) or here.open != arms[0].context:
            continue
        for row in table.rows:
            if is_number(row[place]):
                _cell(desk, name, arms, here, place, row, line)
                done += 1
    if not done:
        raise Unread(f"no table prints {name}")
    return done


def _cell(
    desk: Desk, name: str, arms: list[Statement], here: TableHere, place: int, row: list[str], line: NumberedLine
) -> None:
    table = here.table
    for arm in arms:
        open_ = (*arm.context, *table.named(row))
        scope = within(Scope(desk.calculation, open_, beside=here.line.number), line)
        if not arm.condition or judge(arm.condition, scope):
            _work(
                desk,
                split(arm.tokens, "relation")[0][1],
                name,
                scope,
                Printed(row[place], 0, table.columns[place].unit),
            )
            return
    raise Unread(f"no arm of {name} holds for row {row[0]}")


def _work(desk: Desk, formula: list[Token], name: str, scope: Scope, shown: Printed) -> None:
    node = parse(formula)
    if not symbols(node):
        node = juxtaposed(desk, name) or node
    desk.count("table cells")
    try:
        value = valued(node, scope)
    except NoRows:
        desk.count("extremes over no rows")
        return
    if not matches(value, shown):
        if _told_once(desk, node, scope):
            desk.count("cells that rest on what one row alone tells")
            return
        text = f"{name}, row {scope.open[-1][1]}: worth {short(in_unit(value, shown.unit))}, printed {shown}"
        desk.found("a row formula gives its cells", text)


def _told_once(desk: Desk, node: Node, scope: Scope) -> bool:
    """Tell whether a formula takes a symbol that is told of one row alone, in full, and stands in no table of all."""
    sets = {set_name for set_name, _ in scope.open}
    names = symbols(node) | {t.text for over in walk(node) if isinstance(over, Over) for t in over.where}
    if "member" in sets:
        # of like members the tables show results, and not all that leads to them
        pair = next(pair for pair in scope.open if pair[0] == "member")
        return not all(any(pair in key.rows for key in desk.calculation.keys.get(name, [])) for name in names)
    return any(desk.calculation.told_once.get(name, set()) & sets for name in names)


def row_named(desk: Desk, statement: Statement, formula: Node, shown: Printed, scope: Scope) -> None:
    """The row that the words of an extreme name is the one it is taken from: `greatest moment, combination 2`."""
    if not isinstance(formula, Over) or formula.name not in ("max", "min", "pick"):
        return
    named = re.search(rf", {re.escape(formula.rows)} (\S.*)$", statement.words)
    if named is None:
        return
    taken = [row for row in scope.rows(formula.rows, formula.where) if row.open[-1][1] == named[1]]
    desk.count("rows named")
    if not taken or not matches(valued(formula.body, taken[0]), shown):
        desk.found("the row named is the row taken", f"{statement.words}: {shown} is not of {named[1]}")


def _in_full(calculation: Calculation, table: Table) -> list[tuple[Statement, NumberedLine]]:
    """Return the statements that stand in full for one row of a table's set."""
    return [
        (statement, line)
        for line in calculation.lines
        for statement in line.statements
        if any(set_name in table.sets for set_name, _ in statement.context)
    ]


def other_rows(desk: Desk, here: TableHere) -> None:
    """Rows in a table follow the formula printed in full for one of them, unless that one says `since`."""
    table = here.table
    shown = [(s, line) for s, line in _in_full(desk.calculation, table) if s.kind == "formula" and s.tokens]
    names = Counter(left_symbol(s) for s, _ in shown)
    elsewhere = _other_branches(desk.calculation)
    for statement, line in shown:
        name, parts = left_symbol(statement), split(statement.tokens, "relation")[0]
        place = table.column(name) if name else None
        if place is None or len(parts) < 3 or names[name] > 1 or any(s.because == "since" for s in line.statements):
            continue
        for row in table.rows:
            set_out = row[0] in elsewhere or set(table.named(row)) <= set(statement.context)
            if is_number(row[place]) and not set_out:
                try:
                    unit = table.columns[place].unit
                    scope = within(Scope(desk.calculation, tuple(table.named(row)), beside=here.line.number), line)
                    _work(desk, parts[1], name, scope, Printed(row[place], 0, unit))
                except Drawn:
                    desk.count("values of stations, drawn")
                except (Unread, Unknown, Mixed) as error:
                    _unread(desk, table, f"row {row[0]} of {name}: {error}")


def _other_branches(calculation: Calculation) -> set[str]:
    """Return the rows that a note below their table says go by other branches than the one set out in full."""
    words = " ".join(page.text.replace("\n", " ") for page in calculation.pages)
    return {name.strip() for said in re.findall(r"By other branches than [^:]+: ([^.]+)\.", words)
            for name in said.split(",")}  # fmt: skip


def _unread(desk: Desk, table: Table, text: str) -> None:
    """Note what could not be worked; of like members the table shows results, and not all that leads to them."""
    if table.set_name != "member":
        desk.unread(text)


def ratio_columns(desk: Desk, tables: Sequence[Table]) -> None:
    """Ratios in a table, over however many sheets, follow the check printed in full for one row.

    That row is the worst by its worst check.
    """
    rates: dict[str, list[Decimal]] = {}
    shown = ""
    for statement, line in _in_full(desk.calculation, tables[0]):
        title = statement.words.removeprefix("CHECK").strip()
        if statement.kind != "check" or not any(not c.math and c.name == title for c in tables[0].columns):
            continue
        formula = split(statement.tokens, "relation")[0][0]
        shown = next(row for set_name, row in statement.context if set_name in tables[0].sets)
        for table in tables:
            place = next(i for i, c in enumerate(table.columns) if not c.math and c.name == title)
            for row in table.rows:
                rate = _rated(desk, formula, table, row, row[place], line)
                rates.setdefault(row[0], []).extend([rate] if rate is not None else [])
    worst = max((rate for row in rates.values() for rate in row), default=None)
    # headings of checks over two lines are read in part: like members are held in `members`
    if worst is not None and worst not in rates.get(shown, []) and tables[0].set_name != "member":
        text = ", ".join(f"{row} {max(found)}" for row, found in rates.items() if found)
        desk.found("the row shown in full is the worst", f"shown {shown}, ratios {text}")


def _rated(
    desk: Desk, formula: Sequence[Token], table: Table, row: list[str], cell: str, line: NumberedLine
) -> Decimal | None:
    """Return a printed ratio held against its formula; infinite where there is none above zero; None without check."""
    words = cell.split()
    if not words or words[0] in ("–", "n.a."):
        return None
    if not is_number(words[0]):
        return Decimal("Infinity")
    shown = Printed(words[0])
    desk.count("ratios")
    if (shown.number > 1) != ("NG" in words):
        desk.found("a verdict follows from print", f"row {row[0]}: {cell}")
    if any(token.kind == "fraction" or token.text == "/" for token in formula):
        try:
            node, scope = parse(formula), within(Scope(desk.calculation, tuple(table.named(row))), line)
            value = valued(node, scope)
            # a demand at or below zero is ratio zero
            if matches(value, shown) or (value.number < 0 and shown.number == 0):
                return shown.number
            if _told_once(desk, node, scope):
                desk.count("cells that rest on what one row alone tells")
            else:
                desk.found("a ratio is its quotient", f"row {row[0]}: worth {short(value.number)}, printed {cell}")
        except (DivisionByZero, InvalidOperation):
            # what asks for nothing is held by any capacity, by none too
            if shown.number:
                desk.found("a ratio is its quotient", f"row {row[0]}: of a capacity of nothing, printed {cell}")
        except (Unread, Unknown, Mixed) as error:
            _unread(desk, table, f"ratio of row {row[0]}: {error}")
    return shown.number
