"""Formula and condition text to trees, by precedence climbing: one method a rule of the grammar, kept in one class.

The grammar is that of the template guide. Bounds: 400 characters, depth 40, numbers of 18 digits.
Text in, tree or None out; every mistake is a problem with its column. Evaluates nothing.
"""

from __future__ import annotations

from fractions import Fraction
from typing import Literal, cast

from calcreport.core.expression import (
    FUNCTIONS,
    OVER_FUNCTIONS,
    Attach,
    Binary,
    Call,
    Compare,
    Condition,
    Expression,
    Is,
    IsGiven,
    Logic,
    Name,
    Negate,
    Not,
    Number,
    Over,
    Strip,
)
from calcreport.core.problems import Problems
from calcreport.core.source import Span
from calcreport.core.tokens import KEYWORDS, RELATIONS, Cursor, Stop, Token
from calcreport.core.units import SPELLINGS, Unit, is_misspelled, make_unit, read_unit, say_unknown_unit

_NO_NAMES = (*FUNCTIONS, *sorted(OVER_FUNCTIONS - set(FUNCTIONS)), "num", "qty", "given")


def read_formula(text: str, span: Span, problems: Problems, place: int = 0) -> Expression | None:
    """Read a formula; `span` covers the text, `place` is the argument that `by_units` takes.

    Adds `bad-formula` (and unit problems) and returns None where the text is not a formula.
    """
    try:
        parser = _Parser(text, span, problems, place)
        tree = parser.sum()
        parser.finish("the formula")
        return tree
    except Stop:
        return None


def read_condition(text: str, span: Span, problems: Problems, place: int = 0) -> Condition | None:
    """Read a condition such as `s <= h/2 and ties is spiral`; as `read_formula` otherwise."""
    try:
        parser = _Parser(text, span, problems, place)
        tree = parser.condition()
        parser.finish("the condition")
        return tree
    except Stop:
        return None


class _Parser(Cursor):
    def __init__(self, text: str, span: Span, problems: Problems, place: int) -> None:
        super().__init__(text, span, problems)
        self.place = place

    def finish(self, what: str) -> None:
        if self.next.kind == "end":
            return
        before, hint = self.tokens[self.at - 1], ""
        if self.next.kind in ("number", "name") or self.next.text == "(":
            hint = "a product needs its sign: write *"
        if self.next.text in RELATIONS:
            hint = "a comparison belongs in `when`, `holds`, `require` or `where`"
        if self.next.text == "=" and what == "the formula":
            hint = "write the right side alone: the symbol stands under `gives`"
        if self.next.text == "==":
            hint = "write ="
        if self.next.text == ")":
            hint = "this bracket was not opened"
        self.stop(self.next.start, self.next.end, f"{what} ends after `{before.text}`, but more follows",
                  "an operator, or the end", self.found(), hint)  # fmt: skip

    # -------------------------------------------------------- conditions

    def condition(self) -> Condition:
        self.deeper()
        start = self.next.start
        left = self.conjunction()
        while self.accept("or"):
            right = self.conjunction()
            left = Logic("or", left, right, self.since(start))
        self.depth -= 1
        return left

    def conjunction(self) -> Condition:
        start = self.next.start
        left = self.negation()
        while self.accept("and"):
            right = self.negation()
            left = Logic("and", left, right, self.since(start))
        return left

    def negation(self) -> Condition:
        start = self.next.start
        if self.accept("not"):
            body = self.bracketed() if self.opens_condition() else self.test()
            return Not(body, self.since(start))
        return self.bracketed() if self.opens_condition() else self.test()

    def bracketed(self) -> Condition:
        self.take()
        body = self.condition()
        self.expect(")", "after the condition")
        return body

    def opens_condition(self) -> bool:
        """Tell whether a parenthesis here holds a condition: a relation stands inside, outside any `over`."""
        if self.next.text != "(":
            return False
        depth, within = 0, 0
        for token in self.tokens[self.at :]:
            depth += (token.text == "(") - (token.text == ")")
            if depth == 0:
                return False
            if depth < within:
                within = 0
            elif token.text == "over":
                within = within or depth
            elif not within and (token.text in RELATIONS or token.text in ("is", "and", "or", "not", "given")):
                return True
        return False

    def test(self) -> Condition:
        start = self.next.start
        if self.next.text == "given" and self.after == "(":
            self.take()
            self.take()
            name = self.name()
            self.expect(")", "after given(")
            return IsGiven(name, self.since(start))
        if self.next.kind == "name" and self.next.text not in KEYWORDS and self.after == "is":
            return self.word_test(start)
        left = self.sum()
        relation = self.accept(*RELATIONS)
        if not relation:
            hint = f"a yes/no value is asked with `is`: {left.name} is yes" if isinstance(left, Name) else ""
            hint = "write =" if self.next.text == "==" else hint
            self.stop(self.next.start, self.next.end, "a comparison is missing",
                      "one of < <= > >= = !=, or `is`", self.found(), hint)  # fmt: skip
        right = self.sum()
        if self.next.text in RELATIONS:
            self.stop(self.next.start, self.next.end, "two comparisons stand in one",
                      "one comparison", self.found(), "join two with `and`")  # fmt: skip
        return Compare(cast(Literal["<"], relation), left, right, self.since(start))

    def word_test(self, start: int) -> Condition:
        name = self.name()
        self.take()
        word = self.take()
        if word.kind not in ("name", "number") or word.text in KEYWORDS:
            hint = f"write `not {name.name} is …`" if word.text == "not" else ""
            self.stop(word.start, word.end, "a word is missing after `is`", "a word of its list",
                      f"`{word.text}`" if word.text else "the end", hint)  # fmt: skip
        end = word
        while self.next.kind in ("name", "number") and self.next.text not in KEYWORDS:
            end = self.take()
        return Is(name, self.text[word.start : end.end], self.since(start))

    # -------------------------------------------------------- formulas

    def sum(self) -> Expression:
        self.deeper()
        start = self.next.start
        left = self.term()
        while op := self.accept("+", "-"):
            right = self.term()
            left = Binary(cast(Literal["+"], op), left, right, self.since(start))
        self.depth -= 1
        return left

    def term(self) -> Expression:
        start = self.next.start
        left = self.signed()
        while op := self.accept("*", "/"):
            right = self.signed()
            left = Binary(cast(Literal["*"], op), left, right, self.since(start))
        return left

    def signed(self) -> Expression:
        start = self.next.start
        if self.accept("-"):
            self.deeper()
            body = self.signed()
            self.depth -= 1
            return Negate(body, self.since(start))
        return self.power()

    def power(self) -> Expression:
        start = self.next.start
        base = self.atom()
        if self.accept("^"):
            self.deeper()
            exponent = self.signed()
            self.depth -= 1
            return Binary("^", base, exponent, self.since(start))
        return base

    def atom(self) -> Expression:
        token = self.next
        if token.kind == "number":
            return self.number()
        if token.kind == "name" and token.text not in KEYWORDS:
            return self.call() if self.after == "(" else self.name()
        if self.accept("("):
            body = self.sum()
            inside = self.text[token.start : self.next.start].rstrip()
            self.expect(")", "after the bracket", f"it closes the bracket of `{inside[:40]}`")
            return body
        hint = ""
        if token.text in RELATIONS or token.text in ("is", "and", "or", "not", "given"):
            hint = "a condition belongs in `when`, `holds`, `require` or `where`"
        self.stop(token.start, token.end, "a value is missing here", "a number, a symbol or a bracket",
                  self.found(), hint)  # fmt: skip

    def name(self) -> Name:
        token = self.take()
        if token.kind != "name" or token.text in KEYWORDS:
            self.stop(token.start, token.end, "a symbol is missing here", "a symbol",
                      f"`{token.text}`" if token.text else "the end")  # fmt: skip
        return Name(token.text, self.span.part(token.start, token.end))

    def number(self) -> Number:
        token = self.take()
        if sum(c.isdigit() for c in token.text) > 18:
            self.stop(token.start, token.end, "the number is too long", "18 digits at most", token.text[:30])
        unit: Unit | None = None
        follows = self.next
        if follows.text == "%" or (follows.kind == "name" and follows.text not in KEYWORDS):
            unit = self.number_unit(token)
        return Number(Fraction(token.text), token.text, unit, self.since(token.start))

    def number_unit(self, number: Token) -> Unit:
        token = self.take()
        if is_misspelled(token.text) and token.text not in SPELLINGS:
            say_unknown_unit(token.text, self.span.part(token.start, token.end), self.problems)
            raise Stop
        if token.text not in SPELLINGS or self.next.text == "(":
            self.stop(token.start, token.end, "a number and a symbol stand side by side",
                      "an operator, or a listed unit", f"`{token.text}`",
                      f"a product needs its sign: write {number.text}*{token.text[:40]}")  # fmt: skip
        power = 1
        if self.accept("^"):
            digit = self.take()
            if digit.text not in set("123456789"):
                self.stop(digit.start, digit.end, "the power may be meant of the unit or of the value",
                          "a unit with a whole power, such as 2 in^2", f"`{digit.text}`",
                          f"write qty({number.text}, {token.text}^…), or ({number.text} {token.text})^…")  # fmt: skip
            power = int(digit.text)
        return make_unit(((token.text, power),))

    def call(self) -> Expression:
        token = self.take()
        self.take()
        self.deeper()
        result = self.unit_call(token) if token.text in ("num", "qty") else self.function_call(token)
        self.depth -= 1
        return result

    def unit_call(self, token: Token) -> Expression:
        body = self.sum()
        self.expect(",", f"between value and unit of {token.text}(…)")
        start = self.next.start
        while self.next.kind != "end" and self.next.text != ")":
            self.take()
        end = self.next.start
        self.expect(")", f"after the unit of {token.text}(…)")
        unit = read_unit(self.text[start:end], self.span.part(start, end), self.problems)
        if unit is None:
            raise Stop
        span = self.since(token.start)
        return Strip(body, unit, span) if token.text == "num" else Attach(body, unit, span)

    def function_call(self, token: Token) -> Expression:
        if token.text not in FUNCTIONS and token.text not in OVER_FUNCTIONS:
            hint = self.problems.near(token.text, _NO_NAMES) or "a product needs its sign: write * before the bracket"
            self.stop(token.start, token.end, f"`{token.text}` is not a function",
                      "one of " + ", ".join(_NO_NAMES), f"`{token.text}(`", hint)  # fmt: skip
        arguments = [self.sum()]
        if self.next.text == "over":
            return self.over(token, arguments[0])
        while self.accept(","):
            arguments.append(self.sum())
        self.expect(")", f"after the arguments of {token.text}")
        span = self.since(token.start)
        if token.text not in FUNCTIONS:
            self.stop(token.start, token.end, f"`{token.text}` needs a set", f"{token.text}(… over SET)", "no `over`")
        fewest, most = FUNCTIONS[token.text]
        if not fewest <= len(arguments) <= most:
            wanted = f"{fewest} to {most} values" if most > fewest else f"{fewest} value{'s' if fewest > 1 else ''}"
            hint = f"over the rows of a set, write {token.text}(… over SET)" if token.text in OVER_FUNCTIONS else ""
            if token.text == "by_units":
                hint = "one for each unit system, in the order of `units`"
            self.stop(token.start, token.start + span.end - span.start, f"`{token.text}` takes {wanted}",
                      wanted, f"{len(arguments)}", hint)  # fmt: skip
        if token.text == "by_units":
            return arguments[min(self.place, 1)]
        return Call(token.text, tuple(arguments), span)

    def over(self, token: Token, body: Expression) -> Expression:
        self.take()
        if token.text not in OVER_FUNCTIONS:
            self.stop(token.start, token.end, f"`{token.text}` does not work over a set",
                      "one of " + ", ".join(sorted(OVER_FUNCTIONS)), f"`{token.text}`")  # fmt: skip
        rows = self.name()
        where = self.condition() if self.accept("where") else None
        otherwise = self.sum() if self.accept("otherwise") else None
        self.expect(")", f"after {token.text}(… over {rows.name}")
        if token.text == "linear" and not (isinstance(where, Compare) and where.op == "="):
            self.stop(token.start, token.end, "`linear` needs the place to read at",
                      "linear(y over S where x = e)", "no such condition")  # fmt: skip
        return Over(token.text, body, rows.name, where, otherwise, self.since(token.start), rows.span)
