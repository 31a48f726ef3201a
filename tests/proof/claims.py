"""The claims of numbered lines, each worked again from what is printed: equations, checks, requirements, conditions.

In: a `Desk`. Out: findings on it. `examine` runs these and the claims of tables and printed forms over a calculation.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from decimal import Decimal, DivisionByZero, InvalidOperation, localcontext
from fractions import Fraction

from .account import Account, Desk
from .arithmetic import NONE, PRECISE, Drawn, Mixed, NoRows, Unknown, bare, valued, with_unit
from .calculations import Calculation
from .conditions import chain, compare, in_unit, judge
from .equations import printed_of, symbol_of
from .expressions import Node, Number, Symbol, Unread, Work, as_printed, parse, split, symbols
from .feet import agrees
from .forms import callouts, digits_used, juxtaposed, left_symbol, one_form, short, shown_elsewhere, substituted_forms
from .letters import Token, plain
from .rows import is_row_formula, other_rows, ratio_columns, row_formula, row_named
from .scope import Scope, within
from .sources import sources
from .statements import NumberedLine, Statement
from .units import Printed, rounds_to, unit

#: what keeps a line from being worked
UNWORKED = (Unread, Unknown, Mixed, ValueError, DivisionByZero, InvalidOperation)
#: marks of feet and inches
_MARKS = {"′": "ft", "″": "in."}
#: two routes with the same printed numbers may differ in the 30th digit
SLACK = Decimal("1e-30")


def examine(calculation: Calculation) -> Account:
    """Work everything in a calculation again."""
    desk = Desk(calculation)
    for line in calculation.lines:
        desk.line, desk.sheet = line.number, calculation.sheet(line.page)
        desk.account.lines += 1
        _line(desk, line)
    for here in calculation.tables:
        desk.line, desk.sheet = here.line.number, calculation.sheet(here.table.page)
        other_rows(desk, here)
        of_line = [other.table for other in calculation.tables if other.line.number == here.line.number]
        if of_line[0] is here.table:
            ratio_columns(desk, of_line)
    one_form(desk)
    digits_used(desk)
    callouts(desk)
    sources(desk)
    for page in calculation.pages:
        desk.sheet, desk.line = page.name, 0
        for problem in page.problems:
            desk.found("readable ink", problem)
        for tokens in page.boxes:
            shown_elsewhere(desk, "boxed result", tokens)
        for _, tokens in page.labels:
            shown_elsewhere(desk, "figure label", tokens)
    return desk.account


def _line(desk: Desk, line: NumberedLine) -> None:
    account = desk.account
    before = len(account.findings), len(account.unread)
    proved = 0
    arms = [s for s in line.statements if s.kind == "formula" and is_row_formula(desk.calculation, s)]
    for statement in line.statements:
        desk.sheet = desk.calculation.sheet(statement.page)
        if statement in arms or statement.kind in ("heading", "title"):
            continue
        try:
            proved += _statement(desk, statement, line)
        except Drawn:
            desk.count("values of stations, drawn")
        except UNWORKED as error:
            desk.unread(f"{type(error).__name__} {error}: {statement}")
    for name in dict.fromkeys(left_symbol(s) for s in arms):
        try:
            proved += row_formula(desk, name, [s for s in arms if left_symbol(s) == name], line)
        except Drawn:
            desk.count("values of stations, drawn")
        except UNWORKED as error:
            desk.unread(f"{type(error).__name__} {error}: rows of {name}")
    after = len(account.findings), len(account.unread)
    if proved or after != before:
        account.worked += 1
        account.confirmed += after == before


def _statement(desk: Desk, statement: Statement, line: NumberedLine) -> int:
    """Work one statement; returns how much was proved."""
    scope = within(Scope(desk.calculation, statement.context), line)
    if statement.unread:
        raise Unread(statement.unread)
    if any(item.statement is statement for item in desk.calculation.inline):
        return 0
    if statement.feet is not None:
        last = printed_of(split(statement.tokens, "relation")[0][-1])
        if last is None:
            raise Unread("feet and inches of no length")
        desk.count("feet and inches")
        inch = Fraction(with_unit(Printed("1", 0, last.unit)).number) / Fraction(
            with_unit(Printed("1", 0, "in.")).number
        )
        if not agrees(statement.feet, last, inch):
            desk.found("two spellings of a given value agree", str(statement))
    if statement.kind == "formula":
        return _formula(desk, statement, scope)
    if statement.kind == "check":
        return _check(desk, statement, scope)
    tokens = statement.condition or statement.tokens
    if not tokens:
        raise Unread("a comparison without text")
    desk.count("comparisons")
    try:
        if not judge(tokens, scope):
            desk.found("printed comparisons are true", plain(tokens))
    except Drawn:
        desk.count("values of stations, drawn")
    except NoRows:
        desk.count("extremes over no rows")
    except Unknown as error:
        desk.found("a condition names what the sheet shows", f"{error} stands nowhere: {plain(tokens)}")
    return 1


# ---------------------------------------------------------------- equations


def _formula(desk: Desk, statement: Statement, scope: Scope) -> int:
    tokens = statement.tokens
    parts, relations = split(tokens, "relation")
    if set(relations) - {"="}:
        desk.count("comparisons")
        for holds, text in chain(tokens, scope):
            if not holds:
                desk.found("printed comparisons are true", text)
        return 1
    if tokens[0].kind == "relation" and any(token.kind == "word" and token.text == "of" for token in tokens):
        _closure(desk, tokens)
        return 1
    if len(parts) < 2:
        if all(token.kind in ("word", "comma", "sign", "number") for token in tokens):
            return 0  # a yes or no that is given, or the rows of a set
        raise Unread("no equals sign")
    if any(token.kind == "colon" for token in tokens) or (len(parts) == 2 and _is_value(desk, parts[1])):
        _two_spellings(desk, parts[1])
        return 0
    nodes = [parse(part) for part in parts[1:]]
    if statement.words.endswith("so that"):
        desk.count("equations")  # both sides follow with their numbers, and are worked there
        return 0
    first = next((i for i, node in enumerate(nodes) if not symbols(node)), None)
    if first is None:
        # a formula for rows that no table prints: a later line follows it
        valued(nodes[0], scope)
        raise Unread("no result")
    if any(symbols(node) for node in nodes[first:]):
        raise Unread("symbols after numbers")
    _chain(desk, nodes[first:], parts[1 + first :])
    formula = nodes[first - 1] if first else juxtaposed(desk, symbol_of(parts[0]) or "")
    if formula is not None:
        _compare_formula(desk, formula, nodes[first:], scope)
        last = as_printed(nodes[-1])
        if last is not None:
            row_named(desk, statement, formula, last, scope)
    return int(formula is not None or len(nodes) > first + 1)


def _is_value(desk: Desk, tokens: Sequence[Token]) -> bool:
    known = desk.calculation.keys
    words = all(t.kind == "word" and t.text not in known and _word(t.text) for t in tokens)
    return words or printed_of(tokens) is not None


def _word(text: str) -> bool:
    """Tell a word, with a low line of its own, from a symbol with a subscript."""
    return "_" not in text or re.fullmatch(r"[a-z]{3,}_[a-z]+", text) is not None


def _closure(desk: Desk, tokens: Sequence[Token]) -> None:
    """A sum that proves a method comes to nothing beside its largest term: = 0.0000 kip of 180.0 kip."""
    numbers = [Decimal(token.text.replace(",", "")) for token in tokens if token.kind == "number"]
    units = [token.text for token in tokens if token.kind == "unit"]
    desk.count("closures")
    if len(numbers) != 2 or len(set(units)) > 1 or abs(numbers[0]) * 1000 > abs(numbers[1]):
        desk.found("a method closes", plain(tokens))


def _two_spellings(desk: Desk, tokens: Sequence[Token]) -> None:
    """A value given with a second spelling in parentheses is worth the same: 28.5 ft (28 ft 6 in)."""
    if len(tokens) > 4 and tokens[0].kind == "number" and tokens[1].kind == "unit" and tokens[2].kind == "open":
        total = _spelled(tokens[3:-1])
        one = with_unit(Printed("1", 0, tokens[1].text)).number
        if not rounds_to(total / one, Printed(tokens[0].text)):
            desk.found("two spellings of a given value agree", plain(tokens))


def _spelled(tokens: Sequence[Token]) -> Decimal:
    """Return the worth of a value spelled by hand, in metres and newtons: 28 ft 6 in, 1 7/8 in."""
    total, number = Decimal(0), Decimal(0)
    row = list(tokens)
    with localcontext(PRECISE):
        while row:
            token = row.pop(0)
            if token.kind == "number" and len(row) > 1 and row[0].text == "/" and row[1].kind == "number":
                number += Decimal(token.text) / Decimal(row[1].text)
                row = row[2:]
            elif token.kind == "number":
                number += Decimal(token.text.replace(",", ""))
            elif (name := _MARKS.get(token.text, token.text)) and unit(name) is not None:
                total += number * with_unit(Printed("1", 0, name)).number
                number = Decimal(0)
            elif token.text != "-":
                raise Unread(f"a value spelled {plain(tokens)}")
    return total


def _chain(desk: Desk, nodes: Sequence[Node], parts: Sequence[Sequence[Token]]) -> None:
    """Each number of a chain of equals gives the next to its last printed digit."""
    for at, shown in enumerate(map(as_printed, nodes[1:])):
        before = as_printed(nodes[at])
        if shown is None:
            if bare(nodes[at]) != bare(nodes[at + 1]):
                desk.found("a substitution gives its result", f"{plain(parts[at])} = {plain(parts[at + 1])}")
            continue
        if before is not None and before.unit and shown.unit and before.unit != shown.unit:
            value = in_unit(with_unit(before), shown.unit)
        else:
            value = bare(nodes[at])
        desk.count("substitutions")
        if not rounds_to(value, shown):
            desk.found("a substitution gives its result", f"{plain(parts[at])} is {short(value)}, printed {shown}")


def _compare_formula(desk: Desk, formula: Node, numeric: Sequence[Node], scope: Scope) -> None:
    """The formula with the printed values of its symbols gives the substitution, or else the result."""
    substituted = as_printed(numeric[0]) is None or (len(numeric) > 1 and _plain_substitution(formula, numeric))
    if substituted:
        substituted_forms(desk, formula, numeric[0], scope)
    result = numeric[1:2] if substituted else numeric[:1]
    shown = as_printed(result[0]) if result else None
    if shown is None:
        raise Unread("no printed result")
    try:
        worth = in_unit(valued(formula, scope), shown.unit)
    except Mixed:
        if not substituted:
            raise
        desk.count("empirical formulas, by substitution only")
        return
    except NoRows:
        desk.count("extremes over no rows")
        if shown.number:
            desk.found("a formula gives its result", f"there are no rows, printed {shown}")
        return
    desk.count("formulas with symbols")
    if not substituted:
        if not rounds_to(worth, shown):
            desk.found("a formula gives its result", f"worth {short(worth)}, printed {shown}")
        return
    number = bare(numeric[0])
    with localcontext(PRECISE):
        if abs(worth - number) > abs(number) * SLACK:
            text = f"formula {short(worth)}, substitution {short(number)} {shown.unit}"
            desk.found("a substitution is its formula", text)


def _plain_substitution(formula: Node, numeric: Sequence[Node]) -> bool:
    """Tell whether a lone number is what was substituted for a lone symbol, not a result before its unit is changed."""
    return isinstance(formula, Symbol) and isinstance(numeric[0], Number) and not numeric[0].printed.unit


# ---------------------------------------------------------------- checks


def _ratio_check(desk: Desk, statement: Statement, tokens: Sequence[Token], scope: Scope) -> int:
    """Hold a check whose symbol is the ratio itself against the value of that symbol."""
    shown = Printed(statement.ratio)
    desk.count("ratios")
    value = valued(parse(tokens), scope)
    if value.dimension != NONE or not rounds_to(value.number, shown):
        desk.found("a ratio is its quotient", f"{plain(tokens)} is {short(value.number)}, printed {statement.ratio}")
    if (shown.number > 1) != (statement.verdict == "NG"):
        desk.found("a verdict follows from print", f"{plain(tokens)} = {statement.ratio} {statement.verdict}")
    return 1


def _check(desk: Desk, statement: Statement, scope: Scope) -> int:
    if statement.verdict not in ("OK", "NG"):
        raise Unread(f"verdict {statement.verdict!r}")
    failed = statement.verdict == "NG"
    colon = next((i for i, token in enumerate(statement.tokens) if token.kind == "colon"), None)
    if colon is not None:
        return _stated_check(desk, statement.tokens[colon + 1 :], failed)
    parts, relations = split(statement.tokens, "relation")
    if not relations and statement.ratio:
        return _ratio_check(desk, statement, parts[0], scope)
    if relations != ["="] or not statement.ratio:
        raise Unread(f"a check of another form: {statement}")
    formula, numeric = parse(parts[0]), parse(parts[1])
    shown = Printed(statement.ratio)
    if not shown.number and bare_demand(numeric) == 0:
        desk.count("ratios")
        return 1  # what asks for nothing is held by any capacity, by none too
    ratio = bare(numeric)
    desk.count("ratios")
    if not rounds_to(ratio, shown):
        desk.found("a ratio is its quotient", f"{plain(parts[1])} is {short(ratio)}, printed {statement.ratio}")
    if (shown.number > 1) != failed or (ratio > 1) != failed:
        desk.found("a verdict follows from print", f"{plain(parts[1])} = {statement.ratio} {statement.verdict}")
    value = valued(formula, scope)
    with localcontext(PRECISE):
        if value.dimension != NONE or abs(value.number - ratio) > abs(ratio) * SLACK:
            desk.found("a substitution is its formula", f"ratio {short(value.number)}, substitution {short(ratio)}")
    substituted_forms(desk, formula, numeric, scope)
    return 1


def bare_demand(node: Node) -> Decimal | None:
    """Return the number above a fraction bar; None where there is none."""
    return bare(node.inputs[0]) if isinstance(node, Work) and node.name == "/" else None


def _stated_check(desk: Desk, shown: Sequence[Token], failed: bool) -> int:
    """A check without ratio states a comparison, which reads true if OK and false if NG."""
    parts, relations = split(shown, "relation")
    values = [bare(parse(part)) for part in parts]
    desk.count("comparisons")
    for left, relation, right in zip(values, relations, values[1:], strict=False):
        if compare(left, relation, right) is failed:
            desk.found("a verdict follows from print", f"{plain(shown)} {'NG' if failed else 'OK'}")
    return 1
