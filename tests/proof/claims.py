"""The claims a calculation makes in print, each worked again from what is printed.

In: `Calculation` records. Out: `Account`: what was confirmed, what could not be read, and every finding. A finding names
the sheet, the line and what is wrong.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from decimal import Decimal, DivisionByZero, InvalidOperation, localcontext

from .calculations import Calculation, Scope, printed_of, symbol_of
from .conditions import chain, compare, in_unit, judge, matches
from .expressions import (
    PRECISE,
    Mixed,
    Node,
    Over,
    Unknown,
    Unread,
    as_printed,
    bare,
    numbers,
    parse,
    split,
    symbols,
    valued,
    walk,
    with_unit,
)
from .formulas import Token, plain
from .sheets import NumberedLine, Statement
from .tables import Table
from .units import Printed, is_number, rounds_to, unit

#: what a visible unit factor may be: inches in a foot, its square and cube, thousands
FACTORS = {"12", "144", "1,728", "1,000", "1,000,000", "1,000,000,000", "0.001", "100", "10"}


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing wrong in print."""

    claim: str
    sheet: str
    line: int
    text: str

    def __str__(self) -> str:
        return f"{self.sheet} line {self.line}: {self.claim}: {self.text}"


@dataclass(slots=True)
class Account:
    """What the reader saw of calculations."""

    lines: int = 0
    #: numbered lines with something to work: a formula, a check, a comparison
    worked: int = 0
    confirmed: int = 0
    unread: list[Finding] = field(default_factory=list)
    findings: list[Finding] = field(default_factory=list)
    #: substitutions, comparisons, ratios, table cells confirmed
    counts: Counter[str] = field(default_factory=Counter)
    #: significant digits of computed values, once a value
    digits: Counter[int] = field(default_factory=Counter)
    #: values with seven figures or more
    long: list[str] = field(default_factory=list)

    def add(self, other: Account) -> None:
        """Take in another account."""
        self.lines += other.lines
        self.worked += other.worked
        self.confirmed += other.confirmed
        self.unread += other.unread
        self.findings += other.findings
        self.counts.update(other.counts)
        self.digits.update(other.digits)
        self.long += other.long


def examine(calculation: Calculation) -> Account:
    """Work every line of a calculation again."""
    return _Examiner(calculation).run()


class _Examiner:
    def __init__(self, calculation: Calculation) -> None:
        self.calculation = calculation
        self.account = Account()
        self.sheet, self.line = "", 0

    def run(self) -> Account:
        for line in self.calculation.lines:
            self.account.lines += 1
            self.line = line.number
            self.sheet = self.calculation.sheet(line.page)
            self._line(line)
        for here in self.calculation.tables:
            self.line, self.sheet = here.line.number, self.calculation.sheet(here.table.page)
            self._other_rows(here.table)
            self._ratios(here.table)
        self._one_form()
        self._digits()
        for page in self.calculation.pages:
            self.sheet, self.line = page.name, 0
            for problem in page.problems:
                self.found("readable ink", problem)
            for tokens in page.boxes:
                self._shown("boxed result", tokens)
            for _, tokens in page.labels:
                self._shown("figure label", tokens)
        return self.account

    def found(self, claim: str, text: str) -> None:
        self.account.findings.append(Finding(claim, self.sheet, self.line, text))

    # ------------------------------------------------------------ lines

    def _line(self, line: NumberedLine) -> None:
        work = [s for s in line.statements if s.kind != "heading"]
        before = len(self.account.findings)
        unread: list[str] = []
        proved = 0
        arms = [s for s in work if s.kind == "formula" and self._is_row_formula(s)]
        for statement in work:
            self.sheet = self.calculation.sheet(statement.page)
            if statement in arms:
                continue
            try:
                proved += self._statement(statement)
            except (Unread, Unknown, Mixed, ValueError, DivisionByZero, InvalidOperation) as error:
                unread.append(f"{type(error).__name__} {error}: {statement}")
        for name in dict.fromkeys(self._left(s) for s in arms):
            try:
                proved += self._row_formula(name, [s for s in arms if self._left(s) == name], line)
            except (Unread, Unknown, Mixed, ValueError, DivisionByZero, InvalidOperation) as error:
                unread.append(f"{type(error).__name__} {error}: rows of {name}")
        if proved or unread or len(self.account.findings) > before:
            self.account.worked += 1
            if unread:
                self.account.unread += [Finding("unread", self.sheet, line.number, text) for text in unread]
            elif len(self.account.findings) == before:
                self.account.confirmed += 1

    def _statement(self, statement: Statement) -> int:
        """Work one statement; returns how much was proved."""
        scope = Scope(self.calculation, statement.context)
        if statement.unread:
            raise Unread(statement.unread)
        if statement.kind == "title" or any(item.statement is statement for item in self.calculation.inline):
            return 0
        if statement.kind == "formula":
            return self._formula(statement, scope)
        if statement.kind == "check":
            return self._check(statement, scope)
        tokens = statement.condition or statement.tokens
        if statement.kind == "condition" and statement.because == "where":
            raise Unread(f"a condition without formula: {plain(tokens)}")
        if not tokens:
            raise Unread("a comparison without text")
        self.account.counts["comparisons"] += 1
        if not judge(tokens, scope):
            self.found("printed comparisons are true", plain(tokens))
        return 1

    def _formula(self, statement: Statement, scope: Scope) -> int:
        parts, relations = split(statement.tokens, "relation")
        if set(relations) - {"="}:
            for holds, text in chain(statement.tokens, scope):
                if not holds:
                    self.found("printed comparisons are true", text)
            self.account.counts["comparisons"] += 1
            return 1
        if len(parts) < 2:
            if all(token.kind in ("word", "comma") for token in statement.tokens):
                return 0  # a yes or no that is given, or the rows of a set
            raise Unread("no equals sign")
        if any(token.kind == "colon" for token in statement.tokens) or self._is_given(parts):
            return self._given(parts)
        nodes = [parse(part) for part in parts[1:]]
        first = next((i for i, node in enumerate(nodes) if not symbols(node)), None)
        if first is None:
            return 0 if len(nodes) == 1 and symbol_of(parts[1]) and self._is_word(parts[1]) else self._no_result(statement)
        for node in nodes[first:]:
            if symbols(node):
                raise Unread("symbols after numbers")
        self._chain(nodes[first:], parts[1 + first :])
        formula = nodes[first - 1] if first else None
        if formula is None:
            return int(len(nodes) - first > 1)
        self._compare_formula(formula, nodes[first:], scope)
        return 1

    def _is_given(self, parts: Sequence[Sequence[Token]]) -> bool:
        return len(parts) == 2 and (printed_of(parts[1]) is not None or self._is_word(parts[1]))

    def _given(self, parts: Sequence[Sequence[Token]]) -> int:
        """A value stated; a second spelling in parentheses must be worth the same."""
        tokens = parts[1]
        if len(tokens) > 4 and tokens[0].kind == "number" and tokens[2].kind == "open":
            total = _spelled(tokens[3:-1])
            stated = with_unit(Printed(tokens[0].text, 0, tokens[1].text))
            if not rounds_to(total / (stated.number / Decimal(tokens[0].text.replace(",", ""))), Printed(tokens[0].text)):
                self.found("two spellings of a given value agree", plain(tokens))
        return 0

    def _is_word(self, tokens: Sequence[Token]) -> bool:
        return all(token.kind == "word" for token in tokens) and not any(
            token.text in self.calculation.keys or "_" in token.text for token in tokens
        )

    def _no_result(self, statement: Statement) -> int:
        raise Unread(f"no result: {statement}")

    def _chain(self, nodes: Sequence[Node], parts: Sequence[Sequence[Token]]) -> None:
        """Each number of a chain of equals must give the next to its last printed digit."""
        for one, other, left, right in zip(nodes, nodes[1:], parts, parts[1:], strict=False):
            shown, before = as_printed(other), as_printed(one)
            if shown is None:
                if bare(one) != bare(other):
                    self.found("a substitution gives its result", f"{plain(left)} = {plain(right)}")
                continue
            if before is not None and before.unit and shown.unit and before.unit != shown.unit:
                value = in_unit(with_unit(before), shown.unit)
            else:
                value = bare(one)
            self.account.counts["substitutions"] += 1
            if not rounds_to(value, shown):
                self.found("a substitution gives its result", f"{plain(left)} is {_short(value)}, printed {shown}")

    def _compare_formula(self, formula: Node, chain_: Sequence[Node], scope: Scope) -> None:
        """The formula, with the printed values of its symbols, must give the substitution, or else the result."""
        substituted = as_printed(chain_[0]) is None or len(chain_) > 1 and not self._units_only(chain_)
        if substituted:
            self._numbers(formula, chain_[0], scope)
        try:
            value = valued(formula, scope)
        except Mixed:
            if not substituted:
                raise
            self.account.counts["empirical formulas, substitution only"] += 1
            return
        shown = as_printed(chain_[1] if substituted else chain_[0])
        if shown is None:
            raise Unread("no printed result")
        self.account.counts["formulas with symbols"] += 1
        try:
            worth = in_unit(value, shown.unit)
        except Mixed:
            if not substituted:
                raise
            self.account.counts["empirical formulas, substitution only"] += 1
            return
        if not substituted:
            if not rounds_to(worth, shown):
                self.found("a formula gives its result", f"worth {_short(worth)}, printed {shown}")
            return
        number = bare(chain_[0])
        with localcontext(PRECISE):
            if abs(worth - number) > abs(number) * Decimal("1e-30"):
                self.found("a substitution is its formula", f"formula {_short(worth)}, substitution {_short(number)} {shown.unit}")

    def _units_only(self, chain_: Sequence[Node]) -> bool:
        return all(as_printed(node) is not None for node in chain_)

    def _numbers(self, formula: Node, substitution: Node, scope: Scope) -> None:
        """Each number substituted must be the printed form of a symbol of the formula, or stand in the formula."""
        allowed = {shown.text.lstrip("−") for shown in numbers(formula)} | FACTORS | {"0"}
        inside = {name for node in walk(formula) if isinstance(node, Over) for name in symbols(node)}
        for name in symbols(formula) | {"√" + name for name in symbols(formula)}:
            keys = self.calculation.keys.get(name, []) if name in inside else []
            allowed |= {self.calculation.forms[key][0][0].text.lstrip("−") for key in keys}
            found = scope.printed(name)
            allowed |= {found.text.lstrip("−")} if found is not None else set()
            allowed |= set(scope.factors(name)) if name in inside else set()
        for shown in numbers(substitution):
            if shown.text.lstrip("−") not in allowed:
                self.found("one printed form of a value", f"{shown} in a substitution is no printed value of {sorted(symbols(formula))}")

    # ------------------------------------------------------------ checks

    def _check(self, statement: Statement, scope: Scope) -> int:
        text, colon, shown = _parted(statement.tokens)
        if statement.verdict not in ("OK", "NG"):
            raise Unread(f"verdict {statement.verdict!r}")
        failed = statement.verdict == "NG"
        if colon:
            return self._stated_check(shown, failed, statement)
        parts, relations = split(text, "relation")
        if relations != ["="]:
            raise Unread(f"a check of another form: {statement}")
        formula, numeric = parse(parts[0]), parse(parts[1])
        if not statement.ratio:
            raise Unread("a check without ratio")
        ratio = bare(numeric)
        self.account.counts["ratios"] += 1
        if not rounds_to(ratio, Printed(statement.ratio)):
            self.found("a ratio is its quotient", f"{plain(parts[1])} is {_short(ratio)}, printed {statement.ratio}")
        printed = Printed(statement.ratio).number
        if (printed > 1) != failed or (ratio > 1) != failed:
            self.found("a verdict follows from print", f"{plain(parts[1])} = {statement.ratio} {statement.verdict}")
        value = valued(formula, scope)
        with localcontext(PRECISE):
            if value.dimension != (0, 0) or abs(value.number - ratio) > abs(ratio) * Decimal("1e-30"):
                self.found("a substitution is its formula", f"check ratio {_short(value.number)}, substitution {_short(ratio)}")
        self._numbers(formula, numeric, scope)
        return 1

    def _stated_check(self, shown: list[Token], failed: bool, statement: Statement) -> int:
        parts, relations = split(shown, "relation")
        values = [bare(parse(part)) for part in parts]
        self.account.counts["comparisons"] += 1
        for left, relation, right in zip(values, relations, values[1:], strict=False):
            if compare(left, relation, right) is failed:
                self.found("a verdict follows from print", f"{plain(shown)} {statement.verdict}")
        return 1

    # ------------------------------------------------------------ rows

    def _left(self, statement: Statement) -> str:
        return symbol_of(split(statement.tokens, "relation")[0][0]) or ""

    def _is_row_formula(self, statement: Statement) -> bool:
        """Tell whether a formula stands without result, for the rows of a table."""
        parts, relations = split(statement.tokens, "relation")
        name = symbol_of(parts[0])
        if relations != ["="] or name is None or not self.calculation.belongs(name):
            return False
        try:
            return bool(symbols(parse(parts[1])))
        except Unread:
            return True

    def _row_formula(self, name: str, arms: list[Statement], line: NumberedLine) -> int:
        """Work a formula for each row of the tables that print its results, with the printed cells."""
        done = 0
        for here in self.calculation.tables:
            table = here.table
            place = table.column(name)
            if place is None or (table.page, -table.y) < (line.page, -line.y) or here.open != arms[0].context:
                continue
            for row in table.rows:
                done += self._cell(name, arms, table, place, row)
        if not done:
            raise Unread(f"no table prints {name}")
        return done

    def _cell(self, name: str, arms: list[Statement], table: Table, place: int, row: list[str]) -> int:
        if not is_number(row[place]):
            return 0
        shown = Printed(row[place], 0, table.columns[place].unit)
        for arm in arms:
            scope = Scope(self.calculation, (*arm.context, (table.set_name, row[0])))
            if arm.condition and not judge(arm.condition, scope):
                continue
            value = valued(parse(split(arm.tokens, "relation")[0][1]), scope)
            self.account.counts["table cells"] += 1
            if not matches(value, shown):
                text = f"{name}, row {row[0]}: worth {_short(in_unit(value, shown.unit))}, printed {shown}"
                self.found("a row formula gives its cells", text)
            return 1
        raise Unread(f"no arm of {name} holds for row {row[0]}")

    def _shown_rows(self, table: Table) -> Iterator[tuple[Statement, NumberedLine]]:
        """Yield the statements that stand in full for one row of a table's set."""
        for line in self.calculation.lines:
            for statement in line.statements:
                if any(set_name == table.set_name for set_name, _ in statement.context):
                    yield statement, line

    def _other_rows(self, table: Table) -> None:
        """Rows in a table follow the formula printed in full for one of them, unless that one says `since`."""
        shown = list(self._shown_rows(table))
        names = Counter(self._left(s) for s, _ in shown if s.kind == "formula" and s.tokens)
        for statement, line in shown:
            name = self._left(statement) if statement.kind == "formula" and statement.tokens else ""
            if names[name] > 1:
                continue  # every row says its own formula
            place = table.column(name) if name else None
            parts = split(statement.tokens, "relation")[0]
            if place is None or len(parts) < 3 or any(s.because == "since" for s in line.statements):
                continue
            for row in table.rows:
                if is_number(row[place]) and (table.set_name, row[0]) not in statement.context:
                    try:
                        self._cell_by(parts[1], name, table, place, row)
                    except (Unread, Unknown, Mixed) as error:
                        self.account.unread.append(Finding("unread", self.sheet, self.line, f"row {row[0]} of {name}: {error}"))

    def _cell_by(self, formula: list[Token], name: str, table: Table, place: int, row: list[str]) -> None:
        shown = Printed(row[place], 0, table.columns[place].unit)
        value = valued(parse(formula), Scope(self.calculation, ((table.set_name, row[0]),)))
        self.account.counts["table cells"] += 1
        if not matches(value, shown):
            text = f"{name}, row {row[0]}: worth {_short(in_unit(value, shown.unit))}, printed {shown}"
            self.found("a row formula gives its cells", text)

    def _ratios(self, table: Table) -> None:
        """Ratios in a table follow the check printed in full for one row, and that row is the worst."""
        for statement, _ in list(self._shown_rows(table)):
            title = statement.words.removeprefix("CHECK").strip()
            columns = [i for i, c in enumerate(table.columns) if not c.math and c.name == title]
            if statement.kind != "check" or not columns:
                continue
            parts, _ = split(_parted(statement.tokens)[0], "relation")
            rated = {row[0]: self._rated(parts, statement, table, row, row[columns[0]]) for row in table.rows}
            shown = next(row for set_name, row in statement.context if set_name == table.set_name)
            worst = max((rate for rate in rated.values() if rate is not None), default=None)
            if worst is not None and rated.get(shown) != worst:
                self.found("the row shown in full is the worst", f"{title}: shown {shown}, ratios {rated}")

    def _rated(
        self, parts: list[list[Token]], statement: Statement, table: Table, row: list[str], cell: str
    ) -> Decimal | None:
        """Return the ratio of a row as printed, infinite where there is none above zero; hold it against its formula."""
        words = cell.split()
        if not words or words[0] in ("–", "n.a."):
            return None
        scope = Scope(self.calculation, ((table.set_name, row[0]),))
        if not is_number(words[0]):
            return Decimal("Infinity")
        self.account.counts["ratios"] += 1
        shown = Printed(words[0])
        if (shown.number > 1) != ("NG" in words):
            self.found("a verdict follows from print", f"row {row[0]}: {cell}")
        if len(parts) == 2 and parts[0] and any(token.kind in ("fraction", "sign") for token in parts[0]):
            if not matches(valued(parse(parts[0]), scope), shown):
                self.found("a ratio is its quotient", f"row {row[0]}: {cell}")
        return shown.number

    # ------------------------------------------------------------ forms

    def _one_form(self) -> None:
        """Report symbols printed in more than one form."""
        for key, forms in self.calculation.forms.items():
            name, row = key.name, " ".join(sorted(row for _, row in key.rows))
            kinds: dict[tuple[str, int, str], list[str]] = {}
            for shown, place in forms:
                kinds.setdefault((shown.text, shown.power, shown.unit), []).append(str(place))
            if len(kinds) > 1:
                text = "; ".join(f"{Printed(*kind)} at {', '.join(places[:3])}" for kind, places in kinds.items())
                self.sheet, self.line = forms[0][1].sheet, forms[0][1].line
                self.found("one printed form of a value", f"{name}{' ' + row if row else ''}: {text}")

    def _digits(self) -> None:
        """Count the significant digits of computed values."""
        for name, forms in self._computed():
            shown = forms[0][0]
            self.account.digits[shown.digits] += 1
            if shown.digits >= 7:
                self.account.long.append(f"{forms[0][1]}: {name} = {shown}")

    def _computed(self) -> Iterator[tuple[str, list[tuple[Printed, object]]]]:
        given = self._given_names()
        for key, forms in self.calculation.forms.items():
            if key.name not in given:
                yield " ".join((key.name, *sorted(row for _, row in key.rows))), list(forms)

    def _given_names(self) -> set[str]:
        found = set()
        for line in self.calculation.lines:
            handed = any("project file" in text or text.startswith(("material", "schedule")) for text in line.source)
            for statement in line.statements:
                if statement.kind == "formula":
                    parts, _ = split(statement.tokens, "relation")
                    if len(parts) == 2 and printed_of(parts[1]) is not None or any(t.kind == "colon" for t in statement.tokens):
                        found |= {token.text for token in statement.tokens if token.kind == "word"}
            if handed:
                found |= {column.name for table in line.tables for column in table.columns}
        return found

    def _shown(self, claim: str, tokens: Sequence[Token]) -> None:
        """Each number with a unit in a figure or a boxed result must stand on the sheets in that form."""
        for before, token, following in zip([None, *tokens], tokens, tokens[1:], strict=False):
            if token.kind != "number" or following.kind != "unit":
                continue
            minus = "−" if before is not None and before.text == "-" else ""
            if (minus + token.text, following.text) not in self.calculation.shown:
                self.found("one printed form of a value", f"{claim}: {minus}{token.text} {following.text} stands nowhere else")


def _parted(tokens: list[Token]) -> tuple[list[Token], bool, list[Token]]:
    at = next((i for i, token in enumerate(tokens) if token.kind == "colon"), None)
    return (tokens, False, []) if at is None else (tokens[:at], True, tokens[at + 1 :])


def _spelled(tokens: Sequence[Token]) -> Decimal:
    """Return the worth of a value spelled by hand: 28 ft 6 in, 1 7/8 in, in metres."""
    total, number = Decimal(0), Decimal(0)
    row = list(tokens)
    with localcontext(PRECISE):
        while row:
            token = row.pop(0)
            if token.kind == "number" and len(row) > 1 and row[0].text == "/":
                number += Decimal(token.text) / Decimal(row[1].text)
                row = row[2:]
            elif token.kind == "number":
                number += Decimal(token.text.replace(",", ""))
            elif unit(token.text) is not None:
                total += number * with_unit(Printed("1", 0, token.text)).number
                number = Decimal(0)
            elif token.text != "-":
                raise Unread(f"a value spelled {plain(tokens)}")
    return total


def _short(value: Decimal) -> str:
    return f"{value:.12g}"
