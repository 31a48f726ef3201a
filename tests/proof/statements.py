"""Rows of work read into the statements of numbered lines: equations, checks, requirements, conditions, headings.

In: pieces of a page. Out: `NumberedLine` records with their `Statement`s in order. Works nothing out.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from .feet import Feet, part_feet
from .formulas import read_tokens
from .letters import Token, plain
from .pieces import Piece
from .tables import Table

VERDICTS = ("OK", "NG", "not evaluated")


@dataclass(slots=True)
class Statement:
    """One printed assertion of a line: an equation, a check, a requirement, a condition of an arm."""

    kind: str
    page: int
    y: float
    words: str = ""
    tokens: list[Token] = field(default_factory=list)
    #: what stands after "since" or "where", and that word
    because: str = ""
    condition: list[Token] = field(default_factory=list)
    ratio: str = ""
    verdict: str = ""
    #: what its result is in feet and inches
    feet: Feet | None = None
    #: ink that could not be read
    unread: str = ""
    #: (set, row) named by the heading above or by the words
    context: tuple[tuple[str, str], ...] = ()

    def __str__(self) -> str:
        return f"{self.words} {plain(self.tokens)}".strip()


@dataclass(slots=True)
class NumberedLine:
    """What stands under one line number."""

    number: int
    page: int
    y: float
    statements: list[Statement] = field(default_factory=list)
    words: list[str] = field(default_factory=list)
    tables: list[Table] = field(default_factory=list)
    source: list[str] = field(default_factory=list)
    #: "since" or "where" at the end of a row, before a condition on the next
    waiting: str = ""


@dataclass(slots=True)
class Row:
    """Pieces on one baseline, from left to right."""

    y: float
    pieces: list[Piece]


def rows_of(pieces: list[Piece]) -> list[Row]:
    """Gather pieces on one baseline, from the top down."""
    rows: list[Row] = []
    for piece in sorted(pieces, key=lambda p: -p.baseline):
        if rows and abs(rows[-1].y - piece.baseline) < 0.8:
            rows[-1].pieces.append(piece)
        else:
            rows.append(Row(piece.baseline, [piece]))
    for row in rows:
        row.pieces.sort(key=lambda p: p.left)
    return rows


def _condition(tokens: list[Token]) -> bool:
    """Tell a condition from words that go on after "where"."""
    return any(token.kind == "relation" or token.text == "is" for token in tokens)


class RowReader:
    """Reads rows into the statements of a line."""

    def __init__(self, line: NumberedLine, page: int, problems: list[str]) -> None:
        self.line, self.page, self.problems = line, page, problems

    def read(self, row: Row) -> None:
        """Add what a row says to the line."""
        because: tuple[str, list[Token]] | None = None
        joined, self.line.waiting = self.line.waiting, ""
        for piece in row.pieces:
            if piece.words:
                joined = self._words(piece, row.y)
                continue
            try:
                tokens = read_tokens(piece.glyphs, piece.rules)
            except ValueError as error:
                self._statement("unread", row.y).unread = f"{error}: {piece.text}"
                continue
            tokens, found = ([], (joined, tokens)) if joined and _condition(tokens) else self._because(tokens)
            joined = ""
            if found is not None:
                because = found
                if found[0] == "since":
                    self._statement("condition", row.y).condition = found[1]
                    self.line.statements[-1].because = "since"
                    because = None
            if tokens:
                self._math(tokens, row.y, because)
                because = None
        self.line.waiting = joined
        if because is not None:
            self._statement("condition", row.y).condition = because[1]
            self.line.statements[-1].because = because[0]

    def _statement(self, kind: str, y: float) -> Statement:
        words = " ".join(self.line.words)
        found = Statement(kind, self.page, y, words)
        self.line.statements.append(found)
        return found

    def _words(self, piece: Piece, y: float) -> str:
        """Read words; returns the "since" or "where" they end with, before a condition."""
        text, _, joined = piece.text.rpartition(" ")
        if joined not in ("since", "where"):
            text, joined = piece.text, ""
        checks = [s for s in self.line.statements if s.kind == "check"]
        if text in VERDICTS and checks:
            checks[-1].verdict = text
        elif checks and re.fullmatch(r"−?[\d,]*\.?\d+|NG", text):
            checks[-1].ratio = text
        elif re.match(r"CHECK\b", text):
            self.line.words = [text]
            self._statement("check", y)
        elif text == "Required":
            self.line.words = [text]
            self._statement("required", y)
        else:
            self.line.words.append(text)
            bold = all("Semibold" in g.font or "Bold" in g.font for g in piece.glyphs)
            if bold:
                self._statement("heading", y).words = text
                self.line.words = []
        return joined

    def _because(self, tokens: list[Token]) -> tuple[list[Token], tuple[str, list[Token]] | None]:
        """Part words and a condition after "since" or "where" from the mathematics that follows."""
        for place, token in reversed(list(enumerate(tokens))):
            if token.words and token.text in ("since", "where") and _condition(tokens[place + 1 :]):
                self.line.words += [plain(tokens[:place])] if place else []
                return [], (token.text, tokens[place + 1 :])
        if tokens and tokens[0].words and tokens[0].text == "Since" and tokens[-1].kind == "colon":
            return tokens[1:], None
        if tokens and tokens[0].words:
            self.line.words.append(plain(tokens))
            return [], None
        return tokens, None

    def _math(self, tokens: list[Token], y: float, because: tuple[str, list[Token]] | None) -> None:
        tokens, feet = part_feet(tokens)
        self._join(tokens, y, because)
        if feet is not None and self.line.statements:
            self.line.statements[-1].feet = feet

    def _join(self, tokens: list[Token], y: float, because: tuple[str, list[Token]] | None) -> None:
        statements = self.line.statements
        open_ = statements[-1] if statements and statements[-1].kind in ("formula", "check", "required") else None
        if tokens[-1].kind == "colon":
            self._statement("arm", y).condition = tokens[:-1]
            return
        waiting = open_ is not None and open_.kind != "formula" and not open_.tokens
        if not waiting and any(token.words and token.kind == "word" for token in tokens):
            self._statement("title", y).tokens = tokens
            return
        continues = tokens[0].kind == "relation" or (tokens[0].kind == "sign" and open_ is not None and open_.tokens)
        if open_ is not None and (continues or waiting):
            open_.tokens += tokens
            return
        if continues:
            for older in reversed(statements):
                if older.kind == "formula":
                    older.tokens += tokens
                    return
        found = self._statement("formula", y)
        found.tokens = tokens
        above = statements[-2] if len(statements) > 1 else None
        if above is not None and above.because == "where" and above.kind == "condition" and above.words == found.words:
            # the condition of an arm stands on the row above
            because = above.because, above.condition
            statements.remove(above)
        if because is not None:
            found.because, found.condition = because
        self.line.words = []
