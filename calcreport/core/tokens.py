"""Formula text to tokens, and the cursor the grammar walks over them.

Text in, tokens out; a character that has no meaning, or text beyond the bounds, is a problem with its column.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Literal, NoReturn, cast

from calcreport.core.problems import Problems
from calcreport.core.source import Span

LONGEST, DEEPEST = 400, 40
KEYWORDS = frozenset({"and", "or", "not", "is", "given", "over", "where", "otherwise"})
RELATIONS = frozenset({"<", "<=", ">", ">=", "=", "!="})

_TOKEN = re.compile(
    r"\s*(?:(?P<number>[0-9]+(?:\.[0-9]*)?(?:[eE][+-]?[0-9]{1,2})?|\.[0-9]+)"
    r"|(?P<name>[A-Za-z][A-Za-z0-9_]*(?:\.[A-Za-z][A-Za-z0-9_]*)*)"
    r"|(?P<sign><=|>=|!=|==|[-+*/^(),<>=%]))"
)
#: signs of print, and what a formula writes for them
_PRINTED = {
    "×": "*",
    "·": "*",
    "⋅": "*",
    "÷": "/",
    "−": "-",
    "–": "-",
    "≤": "<=",
    "≥": ">=",
    "≠": "!=",
    "²": "^2",
    "³": "^3",
    "√": "sqrt(…)",
    "[": "(",
    "]": ")",
    "&": "and",
    "|": "or",
    "!": "not",
    "'": "ft and in for feet and inches, words without quotes",
    '"': "words without quotes",
    "π": "3.14159265359",
}


class Stop(Exception):
    """Leaves the parser after a problem was added."""


@dataclass(slots=True)
class Token:
    """A number, a name, a sign, or the end, with its place in the text."""

    kind: Literal["number", "name", "sign", "end"]
    text: str
    start: int
    end: int


class Cursor:
    """The tokens of one text, the place reached in them, and how deep the parser stands."""

    def __init__(self, text: str, span: Span, problems: Problems) -> None:
        self.text, self.span, self.problems = text, span, problems
        self.depth = 0
        if len(text) > LONGEST:
            self.stop(0, len(text), "the formula is too long", f"{LONGEST} characters at most",
                      f"{len(text)} characters", "give part of it a line of its own")  # fmt: skip
        if not text.strip():
            self.stop(0, 1, "the formula is empty", "a formula", "nothing")
        self.tokens = self._split()
        self.at = 0

    def _split(self) -> list[Token]:
        tokens: list[Token] = []
        at, end = 0, len(self.text.rstrip())
        while at < end:
            match = _TOKEN.match(self.text, at)
            if match is None:
                self._refuse(at + len(self.text[at:]) - len(self.text[at:].lstrip()))
            assert match.lastgroup is not None
            kind = cast(Literal["number", "name", "sign"], match.lastgroup)
            tokens.append(Token(kind, match[kind], match.start(kind), match.end(kind)))
            at = match.end()
        tokens.append(Token("end", "", len(self.text), len(self.text)))
        return tokens

    def _refuse(self, at: int) -> NoReturn:
        character = self.text[at]
        meant = _PRINTED.get(character, "")
        self.stop(at, at + 1, f"`{character}` has no meaning in a formula",
                  "numbers, symbols, + - * / ^ ( ) and comparisons", f"`{character}`",
                  f"write {meant}" if meant else "")  # fmt: skip

    # -------------------------------------------------------- moving

    @property
    def next(self) -> Token:
        """The token the cursor stands at."""
        return self.tokens[self.at]

    @property
    def after(self) -> str:
        """The text of the token behind the next."""
        return self.tokens[self.at + 1].text if self.at + 1 < len(self.tokens) else ""

    def take(self) -> Token:
        """Return the next token and go on; the end is never passed."""
        token = self.tokens[self.at]
        self.at += token.kind != "end"
        return token

    def accept(self, *texts: str) -> str:
        """Take the next token if it is one of these; return its text or ''."""
        if self.next.kind in ("sign", "name") and self.next.text in texts:
            return self.take().text
        return ""

    def expect(self, text: str, why: str, hint: str = "") -> None:
        """Take a token that must stand here."""
        if not self.accept(text):
            self.stop(self.next.start, self.next.end, f"`{text}` is missing {why}", f"`{text}`", self.found(), hint)

    def found(self) -> str:
        """Return the next token in words."""
        return f"`{self.next.text}`" if self.next.text else "the end"

    def since(self, start: int) -> Span:
        """Return the stretch from an offset to the last token taken."""
        return self.span.part(start, self.tokens[self.at - 1].end)

    def deeper(self) -> None:
        """Go one level down; no deeper than the bound."""
        self.depth += 1
        if self.depth > DEEPEST:
            self.stop(self.next.start, self.next.end, "the formula is nested too deeply",
                      f"{DEEPEST} levels at most", "more", "give part of it a line of its own")  # fmt: skip

    def stop(self, start: int, end: int, message: str, expected: str, found: str, hint: str = "") -> NoReturn:
        """Add `bad-formula` and leave the parser."""
        self.problems.add("bad-formula", self.span.part(start, max(end, start + 1)), message,
                          expected=expected, found=found, hint=hint)  # fmt: skip
        raise Stop
