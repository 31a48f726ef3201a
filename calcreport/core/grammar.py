"""Formula and condition text to trees, by precedence climbing.

The grammar is that of the template guide. Bounds: 400 characters, depth 40, numbers of 18 digits.
Text in, tree or None out; every mistake is a problem with its column. Evaluates nothing.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
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
from calcreport.core.problems import Problems, nearest
from calcreport.core.source import Span
from calcreport.core.units import SPELLINGS, Unit, make_unit, read_unit

LONGEST, DEEPEST = 400, 40

_TOKEN = re.compile(
    r"\s*(?:(?P<number>\d+(?:\.\d*)?(?:[eE][+-]?\d{1,2})?|\.\d+)"
    r"|(?P<name>[A-Za-z][A-Za-z0-9_]*(?:\.[A-Za-z][A-Za-z0-9_]*)*)"
    r"|(?P<sign><=|>=|!=|==|[-+*/^(),<>=%]))"
)
_KEYWORDS = frozenset({"and", "or", "not", "is", "given", "over", "where", "otherwise"})
_RELATIONS = frozenset({"<", "<=", ">", ">=", "=", "!="})


class _Stop(Exception):
    """Leaves the parser after a problem was added."""


@dataclass(slots=True)
class _Token:
    kind: Literal["number", "name", "sign", "end"]
    text: str
    start: int
    end: int


def read_formula(text: str, span: Span, problems: Problems, place: int = 0) -> Expression | None:
    """Read a formula; `span` covers the text, `place` is the argument that `by_units` takes.

    Adds `bad-formula` (and unit problems) and returns None where the text is not a formula.
    """
    try:
        parser = _Parser(text, span, problems, place)
        tree = parser.sum()
        parser.finish("a formula")
        return tree
    except _Stop:
        return None


def read_condition(text: str, span: Span, problems: Problems, place: int = 0) -> Condition | None:
    """Read a condition such as `s <= h/2 and ties is spiral`; as `read_formula` otherwise."""
    try:
        parser = _Parser(text, span, problems, place)
        tree = parser.condition()
        parser.finish("a condition")
        return tree
    except _Stop:
        return None


class _Parser:
    def __init__(self, text: str, span: Span, problems: Problems, place: int) -> None:
        self.text, self.span, self.problems, self.place = text, span, problems, place
        self.depth = 0
        if len(text) > LONGEST:
            self.stop(0, len(text), "the formula is too long", f"{LONGEST} characters at most", f"{len(text)}")
        if not text.strip():
            self.stop(0, 1, "the formula is empty", "a formula", "nothing")
        self.tokens = self.split()
        self.at = 0

    # -------------------------------------------------------- tokens

    def split(self) -> list[_Token]:
        tokens: list[_Token] = []
        at, end = 0, len(self.text.rstrip())
        while at < end:
            match = _TOKEN.match(self.text, at)
            if match is None:
                start = at + len(self.text[at:]) - len(self.text[at:].lstrip())
                self.stop(start, start + 1, "this character has no meaning in a formula",
                          "numbers, symbols, + - * / ^ ( ) and comparisons", self.text[start])  # fmt: skip
            assert match is not None and match.lastgroup is not None
            kind = cast(Literal["number", "name", "sign"], match.lastgroup)
            tokens.append(_Token(kind, match[kind], match.start(kind), match.end(kind)))
            at = match.end()
        tokens.append(_Token("end", "", len(self.text), len(self.text)))
        return tokens

    @property
    def next(self) -> _Token:
        return self.tokens[self.at]

    def take(self) -> _Token:
        token = self.tokens[self.at]
        self.at += token.kind != "end"
        return token

    def accept(self, *texts: str) -> str:
        if self.next.kind in ("sign", "name") and self.next.text in texts:
            return self.take().text
        return ""

    def expect(self, text: str, why: str) -> None:
        if not self.accept(text):
            found = self.next.text or "the end"
            self.stop(self.next.start, self.next.end, f"`{text}` is missing {why}", f"`{text}`", found)

    def finish(self, what: str) -> None:
        if self.next.kind == "end":
            return
        hint = ""
        before = self.tokens[self.at - 1]
        if self.next.kind in ("number", "name") or self.next.text == "(":
            hint = "a product needs its sign: write *"
        if self.next.text in ("<", "<=", ">", ">=", "=", "!="):
            hint = "a comparison belongs in `when`, `holds` or `require`"
        if self.next.text == "==":
            hint = "write ="
        self.stop(self.next.start, self.next.end, f"{what} ends after `{before.text}`, but more follows",
                  "an operator or the end", f"`{self.next.text}`", hint)  # fmt: skip

    def stop(self, start: int, end: int, message: str, expected: str, found: str, hint: str = "") -> None:
        self.problems.add("bad-formula", self.span.part(start, max(end, start + 1)), message,
                          expected=expected, found=found, hint=hint)  # fmt: skip
        raise _Stop

    def since(self, start: int) -> Span:
        return self.span.part(start, self.tokens[self.at - 1].end)

    def deeper(self) -> None:
        self.depth += 1
        if self.depth > DEEPEST:
            self.stop(self.next.start, self.next.end, "the formula is nested too deeply",
                      f"{DEEPEST} levels at most", "more")  # fmt: skip

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
        self.expect("(", "")
        body = self.condition()
        self.expect(")", "after the condition")
        return body

    def opens_condition(self) -> bool:
        """Tell whether a parenthesis here holds a condition: a relation stands inside at depth one."""
        if self.next.text != "(":
            return False
        depth = 0
        for token in self.tokens[self.at :]:
            depth += (token.text == "(") - (token.text == ")")
            if depth == 0:
                return False
            if token.text in _RELATIONS or token.text in ("is", "and", "or", "not", "given"):
                return not self.inside_over(token)
        return False

    def inside_over(self, inner: _Token) -> bool:
        """Tell whether a token stands inside `… over S where …`."""
        return any(t.text == "over" for t in self.tokens[self.at : self.tokens.index(inner)])

    def test(self) -> Condition:
        start = self.next.start
        if self.next.text == "given" and self.tokens[self.at + 1].text == "(":
            self.take()
            self.take()
            name = self.name()
            self.expect(")", "after given(")
            return IsGiven(name, self.since(start))
        if self.next.kind == "name" and self.tokens[self.at + 1].text == "is":
            name = self.name()
            self.take()
            word = self.take()
            if word.kind not in ("name", "number"):
                self.stop(word.start, word.end, "a word is missing after `is`", "a word", word.text or "the end")
            end = word
            while self.next.kind in ("name", "number") and self.next.text not in _KEYWORDS:
                end = self.take()
            return Is(name, self.text[word.start : end.end], self.since(start))
        left = self.sum()
        relation = self.accept(*_RELATIONS)
        if not relation:
            hint = "write =" if self.next.text == "==" else ""
            self.stop(self.next.start, self.next.end, "a comparison is missing",
                      "one of < <= > >= = !=, or `is`", self.next.text or "the end", hint)  # fmt: skip
        right = self.sum()
        if self.next.text in _RELATIONS:
            self.stop(self.next.start, self.next.end, "two comparisons stand in one",
                      "one comparison", self.next.text, "join two with `and`")  # fmt: skip
        return Compare(cast(Literal["<"], relation), left, right, self.since(start))

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
        if token.kind == "name" and token.text not in _KEYWORDS:
            if self.tokens[self.at + 1].text == "(":
                return self.call()
            return self.name()
        if self.accept("("):
            body = self.sum()
            self.expect(")", "after the bracket")
            return body
        self.stop(token.start, token.end, "a value is missing here", "a number, a symbol or a bracket",
                  f"`{token.text}`" if token.text else "the end")  # fmt: skip
        raise AssertionError

    def name(self) -> Name:
        token = self.take()
        if token.kind != "name" or token.text in _KEYWORDS:
            self.stop(token.start, token.end, "a symbol is missing here", "a symbol", token.text or "the end")
        return Name(token.text, self.span.part(token.start, token.end))

    def number(self) -> Number:
        token = self.take()
        if sum(c.isdigit() for c in token.text) > 18:
            self.stop(token.start, token.end, "the number is too long", "18 digits at most", token.text[:30])
        unit: Unit | None = None
        follows = self.next
        if follows.text == "%" or (follows.kind == "name" and follows.text not in _KEYWORDS):
            unit = self.number_unit()
        return Number(Fraction(token.text), token.text, unit, self.since(token.start))

    def number_unit(self) -> Unit:
        token = self.take()
        if token.text not in SPELLINGS:
            self.stop(token.start, token.end, "a number and a symbol stand side by side",
                      "an operator, or a listed unit", f"`{token.text}`",
                      "a product needs its sign: write *; a compound unit needs qty(3, kip/ft)")  # fmt: skip
        power = 1
        if self.next.text == "^" and re.fullmatch(r"\d", self.tokens[self.at + 1].text):
            self.take()
            power = int(self.take().text)
        return make_unit(((token.text, power),))

    def call(self) -> Expression:
        token = self.take()
        self.expect("(", "after the function")
        self.deeper()
        if token.text in ("num", "qty"):
            result = self.unit_call(token)
        else:
            result = self.function_call(token)
        self.depth -= 1
        return result

    def unit_call(self, token: _Token) -> Expression:
        body = self.sum()
        self.expect(",", f"between value and unit of {token.text}(…)")
        start = self.next.start
        depth = 0
        while self.next.kind != "end" and not (depth == 0 and self.next.text == ")"):
            depth += (self.next.text == "(") - (self.next.text == ")")
            self.take()
        end = self.next.start
        self.expect(")", f"after the unit of {token.text}(…)")
        unit = read_unit(self.text[start:end], self.span.part(start, end), self.problems)
        if unit is None:
            raise _Stop
        span = self.since(token.start)
        return Strip(body, unit, span) if token.text == "num" else Attach(body, unit, span)

    def function_call(self, token: _Token) -> Expression:
        if token.text not in FUNCTIONS and token.text not in OVER_FUNCTIONS:
            known = [*FUNCTIONS, *OVER_FUNCTIONS, "num", "qty", "given"]
            self.stop(token.start, token.end, f"`{token.text}` is not a function", "a listed function",
                      token.text, nearest(token.text, known))  # fmt: skip
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
            self.stop(token.start, span.end - self.span.start, f"`{token.text}` takes other arguments",
                      f"{fewest} to {most}" if most > fewest else f"{fewest}", f"{len(arguments)}")  # fmt: skip
        if token.text == "by_units":
            return arguments[min(self.place, 1)]
        return Call(token.text, tuple(arguments), span)

    def over(self, token: _Token, body: Expression) -> Expression:
        self.take()
        if token.text not in OVER_FUNCTIONS:
            self.stop(token.start, token.end, f"`{token.text}` does not work over a set",
                      "one of " + " ".join(sorted(OVER_FUNCTIONS)), token.text)  # fmt: skip
        rows = self.name()
        where = self.condition() if self.accept("where") else None
        otherwise = self.sum() if self.accept("otherwise") else None
        self.expect(")", f"after {token.text}(… over {rows.name}")
        if token.text == "linear" and not (isinstance(where, Compare) and where.op == "="):
            self.stop(token.start, token.end, "`linear` needs the place to read at",
                      "linear(y over S where x = e)", "no such condition")  # fmt: skip
        return Over(token.text, body, rows.name, where, otherwise, self.since(token.start))
