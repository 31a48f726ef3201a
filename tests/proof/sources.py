"""The source lane: the lines that a formula takes its values from stand beside it.

In: a `Desk`. Out: findings on it. A symbol may be given by several lines, of which one must be named.
"""

from __future__ import annotations

from collections import defaultdict

from .account import Desk
from .calculations import LEFT_OUT, Calculation
from .equations import assignments, symbol_of
from .expressions import Unread, parse, split, symbols
from .source_lane import source_numbers
from .statements import Statement


def sources(desk: Desk) -> None:
    """Report symbols of formulas, checks and requirements whose line is not named in the source lane."""
    givers = _givers(desk.calculation)
    for line in desk.calculation.lines:
        named = set(source_numbers(line)) | {line.number}
        for statement in line.statements:
            for name in sorted(_taken(statement)):
                base = name.rpartition(",")[0]
                lines = givers.get(name) or (givers.get(base, set()) if base else set())
                lines = lines | givers.get("√" + name, set())
                earlier = {number for number in lines if number <= line.number}
                desk.count("sources")
                if earlier and not earlier & named:
                    desk.sheet, desk.line = desk.calculation.sheet(statement.page), line.number
                    numbers = ", ".join(map(str, sorted(earlier)))
                    desk.found("the source lane names what a formula takes", f"{name} is of line {numbers}, not named")


def _givers(calculation: Calculation) -> dict[str, set[int]]:
    """Return the numbers of the lines that give each symbol a value."""
    found: dict[str, set[int]] = defaultdict(set)
    for line in calculation.lines:
        for statement in line.statements:
            for name in _given(calculation, statement):
                found[name].add(line.number)
        for table in line.tables:
            for column in table.columns[1:]:
                if column.math:
                    found[column.name].add(line.number)
    return found


def _given(calculation: Calculation, statement: Statement) -> set[str]:
    found = {item.name for item in calculation.inline if item.statement is statement}
    if statement.kind != "formula" or found:
        return found
    if LEFT_OUT.fullmatch(statement.words):
        return {symbol_of(part) or "" for part in split(statement.tokens, "comma")[0]}
    found = {name for name, _ in assignments(statement)}
    parts, relations = split(statement.tokens, "relation")
    name = symbol_of(parts[0])
    return found | {name} if name is not None and relations else found


def _taken(statement: Statement) -> set[str]:
    """Return the symbols that the formula of a statement takes."""
    if statement.kind not in ("formula", "check", "required"):
        return set()
    parts, relations = split(statement.tokens, "relation")
    wanted = parts[1:2] if statement.kind == "formula" else parts
    found: set[str] = set()
    for part in wanted if relations else ():
        try:
            found |= symbols(parse(part))
        except Unread:
            continue
    return found
