"""Printed forms: one for each value wherever it stands, in substitutions, tables, figures and boxed results.

In: a `Desk`. Out: findings on it, and the count of significant digits. Bar callouts are held against nominal sizes.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from decimal import Decimal

from .account import Desk
from .calculations import Key, Place
from .equations import assignments, printed_of, symbol_of
from .expressions import Node, Number, Over, Symbol, Work, as_printed, numbers, split, symbols, walk
from .letters import Token, plain
from .scope import Scope
from .statements import Statement
from .units import Printed

#: what a visible unit factor may be: inches in a foot, its square and cube, powers of ten
FACTORS = frozenset({"12", "144", "1,728", "10", "100", "1,000", "1,000,000", "1,000,000,000", "0.001",
                     "1,728,000"})  # fmt: skip
#: nominal area and diameter of deformed bars, ASTM A615/A615M Table 1 (from memory): in.² and in., mm² and mm
BARS = {
    "#3": ("0.11", "0.375"), "#4": ("0.20", "0.500"), "#5": ("0.31", "0.625"), "#6": ("0.44", "0.750"),
    "#7": ("0.60", "0.875"), "#8": ("0.79", "1.000"), "#9": ("1.00", "1.128"), "#10": ("1.27", "1.270"),
    "#11": ("1.56", "1.410"), "#14": ("2.25", "1.693"), "#18": ("4.00", "2.257"),
    "No. 10": ("71", "9.5"), "No. 13": ("129", "12.7"), "No. 16": ("199", "15.9"), "No. 19": ("284", "19.1"),
    "No. 22": ("387", "22.2"), "No. 25": ("510", "25.4"), "No. 29": ("645", "28.7"), "No. 32": ("819", "32.3"),
    "No. 36": ("1006", "35.8"), "No. 43": ("1452", "43.0"), "No. 57": ("2581", "57.3"),
}  # fmt: skip
_CALLOUT = re.compile(r"(?:(\d+)\s*[-–]?\s*)?(#\s?\d+|No\s?\.\s?\d+)")


def short(value: Decimal) -> str:
    """Return a number for a report."""
    return f"{value:.12g}"


def juxtaposed(desk: Desk, name: str) -> Node | None:
    """Return a symbol that reads as the product of two known ones, φM_n, as that product."""
    known = desk.calculation.keys
    for cut in range(1, len(name)):
        if name[:cut] in known and name[cut:] in known:
            return Work("*", (Symbol(name[:cut]), Symbol(name[cut:])))
    return None


def left_symbol(statement: Statement) -> str:
    """Return the symbol before the first equals sign, or nothing."""
    return symbol_of(split(statement.tokens, "relation")[0][0]) or ""


def substituted_forms(desk: Desk, formula: Node, substitution: Node, scope: Scope) -> None:
    """Each number substituted is the printed form of a symbol of the formula, or stands in the formula."""
    allowed = {shown.text.lstrip("−") for shown in numbers(formula)} | FACTORS | {"0"}
    inside = {name for node in walk(formula) if isinstance(node, Over) for name in symbols(node)}
    places = {t.text for n in walk(formula) if isinstance(n, Over) and n.name == "read" for t in n.where}
    inside |= places
    for name in symbols(formula) | {"√" + name for name in symbols(formula)} | places:
        found = scope.printed(name)
        allowed |= {found.text.lstrip("−")} if found is not None else set()
        if name in inside:
            forms = desk.calculation.forms
            allowed |= {form.text.lstrip("−") for key in desk.calculation.keys.get(name, []) for form, _ in forms[key]}
            allowed |= set(scope.factors(name))
    for shown in numbers(substitution):
        if shown.text.lstrip("−") not in allowed:
            text = f"{shown} in a substitution is no printed value of {', '.join(sorted(symbols(formula)))}"
            desk.found("one printed form of a value", text)
    for literal, number in _literals(formula, substitution):
        if literal.text != number.text:
            desk.found("a substitution is its formula", f"{literal} in the formula, {number} in the substitution")


def _literals(formula: Node, substitution: Node) -> list[tuple[Printed, Printed]]:
    """Pair the literals of a formula with what stands in their places, as far as both have the same shape."""
    if isinstance(formula, Number):
        shown = as_printed(substitution)
        return [(formula.printed, shown)] if shown is not None else []
    if not isinstance(formula, Work) or not isinstance(substitution, Work) or formula.name != substitution.name:
        return []
    if len(formula.inputs) != len(substitution.inputs):
        return []
    pairs = zip(formula.inputs, substitution.inputs, strict=True)
    return [pair for one, other in pairs for pair in _literals(one, other)]


def one_form(desk: Desk) -> None:
    """Report symbols printed in more than one form."""
    for key, forms in desk.calculation.forms.items():
        kinds: dict[tuple[str, int, str], list[str]] = {}
        for shown, place in forms:
            kinds.setdefault((shown.text, shown.power, shown.unit), []).append(str(place))
        if len(kinds) > 1 and not _several(desk, key, forms):
            row = " ".join(sorted(row for _, row in key.rows))
            text = "; ".join(f"{Printed(*kind)} at {', '.join(places[:3])}" for kind, places in kinds.items())
            desk.sheet, desk.line = forms[0][1].sheet, forms[0][1].line
            desk.found("one printed form of a value", f"{key.name} {row}".strip() + f": {text}")


def _several(desk: Desk, key: Key, forms: Sequence[tuple[Printed, Place]]) -> bool:
    """Tell whether lines of their own give a symbol in several senses: parts of a calculation name what they use.

    Every other place then repeats one of them; a figure repeats any row.
    """
    given: dict[int, set[Printed]] = {}
    for shown, place in forms:
        if place.kind == "formula":
            given.setdefault(place.line, set()).add(shown)
    told = {shown for one in given.values() for shown in one}
    rows = {shown for other in desk.calculation.keys[key.name] for shown, _ in desk.calculation.forms[other]}
    if not told or any(len(one) > 1 for one in given.values()):
        return False
    repeated = all(
        shown in told or (place.kind == "figure" and shown in rows) for shown, place in forms if place.kind != "formula"
    )
    return repeated


def digits_used(desk: Desk) -> None:
    """Count the significant digits of values that are neither given nor zero, each once."""
    given = _given(desk)
    for key, forms in desk.calculation.forms.items():
        shown, place = forms[0]
        if key.name in given or not shown.number:
            continue
        desk.account.digits[shown.digits] += 1
        if shown.digits >= 7:
            row = " ".join(sorted(row for _, row in key.rows))
            desk.account.long.append(f"{place}: {key.name} {row}".strip() + f" = {shown}")


def _given(desk: Desk) -> set[str]:
    """Return the symbols whose values are given: stated in the table of givens, not worked."""
    found = {item.name for item in desk.calculation.inline}
    found |= {name for name, words in desk.calculation.words.items() if "none" in [word for word, _ in words]}
    for line in desk.calculation.lines:
        for statement in line.statements:
            parts, _ = split(statement.tokens, "relation")
            stated = len(parts) == 2 and printed_of(parts[1]) is not None
            if statement.kind == "formula" and (stated or any(t.kind == "colon" for t in statement.tokens)):
                found |= {name for name, _ in assignments(statement)}
        if any("project file" in text or text.startswith(("material", "schedule")) for text in line.source):
            found |= {column.name for table in line.tables for column in table.columns}
    return found | {here.pairs[0] for here in desk.calculation.tables if here.pairs is not None}


def shown_elsewhere(desk: Desk, claim: str, tokens: Sequence[Token]) -> None:
    """Each number with a unit in a figure or a boxed result stands on the sheets in that form."""
    for before, token, following in zip([None, *tokens], tokens, tokens[1:], strict=False):
        if token.kind != "number" or following.kind != "unit":
            continue
        minus = "−" if before is not None and before.text == "-" else ""
        if (minus + token.text, following.text) not in desk.calculation.shown:
            text = f"{claim}: {minus}{token.text} {following.text} stands nowhere else"
            desk.found("one printed form of a value", text)


# ---------------------------------------------------------------- bars


def callouts(desk: Desk) -> None:
    """The area, diameter and count printed beside a bar callout are those of its bars."""
    for here in desk.calculation.tables:
        table = here.table
        desk.sheet, desk.line = desk.calculation.sheet(table.page), here.line.number
        for row in table.rows:
            callout = next((m for m in map(_CALLOUT.fullmatch, row) if m and m[1]), None)
            if callout is not None:
                cells = {
                    c.name: Decimal(v.replace(",", "")) for c, v in zip(table.columns, row, strict=True) if _plain(v)
                }
                _bars(desk, callout, cells)
    for line in desk.calculation.lines:
        for statement in line.statements:
            match = _CALLOUT.search(plain(statement.tokens)) if statement.kind == "formula" else None
            values = {
                item.name: printed_of(item.tokens) for item in desk.calculation.inline if item.statement is statement
            }
            if not values and match is not None:
                values = {name: printed_of(tokens) for name, tokens in assignments(statement)}
            if match is not None:
                desk.sheet, desk.line = desk.calculation.sheet(statement.page), line.number
                _bars(desk, match, {name: shown.number for name, shown in values.items() if shown is not None})


def _plain(text: str) -> bool:
    return re.fullmatch(r"[\d,]*\.?\d+", text) is not None


def _bars(desk: Desk, callout: re.Match[str], values: dict[str, Decimal]) -> None:
    size = re.sub(r"No\s?\.\s?", "No. ", callout[2]).replace("# ", "#")
    count = Decimal(callout[1] or "1")
    if size not in BARS:
        desk.found("bars are what they are called", f"{size} is no bar size")
        return
    area, diameter = map(Decimal, BARS[size])
    wanted = {"n": count, "d_b": diameter, "d_s": diameter, "A_s,i": area * count}
    for name, value in values.items():
        if name in wanted:
            desk.count("bars")
            if value != wanted[name]:
                desk.found(
                    "bars are what they are called",
                    f"{callout[0]}: {name} = {value}, nominally {wanted[name]}",
                )
