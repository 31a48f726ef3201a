"""A calculation sheet taken apart: lanes, line numbers, statements, tables, figure labels, boxed results.

In: the ink of a page. Out: `SheetPage`, and calculations made of the pages of one mark. Places and sizes alone decide
what is what: number lane left, source lane right, title block at the foot, tables by their level rules, figures by
strokes that belong to nothing else. Works nothing out.
"""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Iterable
from dataclasses import dataclass, field

from .formulas import Token, plain, read_tokens
from .glyphs import Area, Glyph, Line, PageInk
from .pieces import Piece, Rule, find_pieces, find_rules, spaced
from .tables import Table, find_tables

#: type of labels in figures is no larger, in points
LABEL = 7.6
_VERDICTS = ("OK", "NG", "not evaluated")


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


@dataclass(slots=True)
class SheetPage:
    """One page with lanes."""

    name: str
    mark: str
    index: int
    lines: list[NumberedLine]
    #: what stands above the first number of the page and continues the sheet before
    carried: NumberedLine
    tables: list[Table]
    labels: list[tuple[str, list[Token]]]
    boxes: list[list[Token]]
    strip: str
    problems: list[str]


@dataclass(frozen=True, slots=True)
class Frame:
    """The frame of a page and its lanes, in points."""

    left: float
    right: float
    top: float
    foot: float
    #: top of the title block
    block: float
    #: right edge of the number lane and left edge of the source lane; None without lanes
    lanes: tuple[float, float] | None


def find_frame(ink: PageInk) -> Frame | None:
    """Find the frame, the title block and the lanes."""
    frames = [a for a in ink.areas if not a.filled and not a.curved and a.x1 - a.x0 > 0.7 * ink.width]
    if not frames:
        return None
    frame = max(frames, key=lambda a: (a.x1 - a.x0) * (a.y1 - a.y0))
    upright = [ln for ln in ink.lines if ln.x0 == ln.x1 and frame.x0 + 5 < ln.x0 < frame.x1 - 5]
    long = [
        (ln.x0, min(ln.y0, ln.y1))
        for ln in upright
        if max(ln.y0, ln.y1) > frame.y1 - 40 and frame.y0 + 20 < min(ln.y0, ln.y1) < frame.y0 + 150
    ]
    if len(long) >= 2:
        return Frame(frame.x0, frame.x1, frame.y1, frame.y0, long[0][1], (min(long)[0], max(long)[0]))
    tops = [round(max(ln.y0, ln.y1), 1) for ln in upright if min(ln.y0, ln.y1) < frame.y0 + 5]
    block = max((y for y in tops if tops.count(y) >= 2 and y < frame.y0 + 150), default=frame.y0)
    return Frame(frame.x0, frame.x1, frame.y1, frame.y0, block, None)


def sheet_name(ink: PageInk, frame: Frame) -> str:
    """Return the sheet number: the largest type in the right half of the title block."""
    below = [g for g in ink.glyphs if g.y < frame.block and g.left > (frame.left + frame.right) / 2 and g.text.strip()]
    if not below:
        return ""
    size = max(g.size for g in below)
    return spaced(g for g in below if g.size == size).replace(" ", "")


def read_sheet(ink: PageInk, index: int) -> SheetPage | None:
    """Take a page with lanes apart; None for a page without."""
    frame = find_frame(ink)
    if frame is None or frame.lanes is None:
        return None
    return _Page(ink, frame, frame.lanes, index).read()


@dataclass(slots=True)
class _Row:
    y: float
    pieces: list[Piece]


class _Page:
    """One page being read."""

    def __init__(self, ink: PageInk, frame: Frame, lanes: tuple[float, float], index: int) -> None:
        self.frame, self.index = frame, index
        self.left, self.right = lanes
        body = [g for g in ink.glyphs if g.text != " " and g.y > frame.block + 0.5]
        across = [ln.y0 for ln in ink.lines if ln.y0 == ln.y1 and ln.width >= 1.5 and ln.x0 <= frame.left + 0.5]
        strips = [y for y in across if y > frame.top - 30]
        self.roof = min(strips, default=frame.top)
        self.strip = spaced(g for g in ink.glyphs if g.y > self.roof and g.y < frame.top) if strips else ""
        body = [g for g in body if g.y < self.roof]
        self.numbers = [g for g in body if g.right <= self.left]
        self.sources = [g for g in body if g.left >= self.right]
        self.work = [g for g in body if self.left < g.left and g.right < self.right + 1]
        self.strokes = [
            line for line in ink.lines
            if min(line.x0, line.x1) >= self.left + 1 and max(line.x0, line.x1) <= self.right + 1
            and frame.block + 1 < min(line.y0, line.y1) and max(line.y0, line.y1) < self.roof
        ]  # fmt: skip
        self.areas = [
            a for a in ink.areas if a.x0 >= self.left + 1 and a.x1 <= self.right + 1 and frame.block < a.y0 and a.y1 < self.roof
        ]
        self.name = sheet_name(ink, frame)
        self.problems: list[str] = []

    def read(self) -> SheetPage:
        marks = self._line_numbers()
        rules, strokes = find_rules(self.work, self.strokes)
        tables, in_tables, strokes = find_tables(self.work, strokes, self.index)
        boxed, in_boxes, strokes = self._boxes(strokes)
        free = [g for g in self.work if id(g) not in in_tables and id(g) not in in_boxes]
        pieces = find_pieces(free, rules)
        labels, pieces = self._labels(pieces, strokes)
        lines = [NumberedLine(number, self.index, y) for number, y in marks]
        carried = NumberedLine(0, self.index, self.roof)
        self._sources(lines)
        for table in tables:
            _line_at(lines, carried, table.y).tables.append(table)
        for row in _rows(pieces):
            _RowReader(_line_at(lines, carried, row.y), self.index, self.problems).read(row)
        boxes = [self._tokens(piece.glyphs, piece.rules) for piece in boxed]
        mark = self.name.rpartition("-")[0] or self.name
        shown = [(piece.text, self._tokens(piece.glyphs, piece.rules)) for piece in labels]
        return SheetPage(
            self.name, mark, self.index, lines, carried, tables, shown, boxes, self.strip, self.problems
        )

    def _tokens(self, glyphs: Iterable[Glyph], rules: Iterable[Rule]) -> list[Token]:
        try:
            return read_tokens(glyphs, rules)
        except ValueError as error:
            text = spaced(glyphs)
            self.problems.append(f"{text!r} in a figure or box cannot be read: {error}")
            return []

    def _line_numbers(self) -> list[tuple[int, float]]:
        rows: dict[float, list[Glyph]] = defaultdict(list)
        for glyph in self.numbers:
            rows[round(glyph.y, 1)].append(glyph)
        found = []
        for row in rows.values():
            text = spaced(row).replace(" ", "")
            if text.isdigit():
                found.append((int(text), row[0].y))
            else:
                self.problems.append(f"{text!r} in the number lane")
        return sorted(found, key=lambda pair: -pair[1])

    def _sources(self, lines: list[NumberedLine]) -> None:
        rows: dict[float, list[Glyph]] = defaultdict(list)
        for glyph in self.sources:
            rows[round(glyph.y, 1)].append(glyph)
        for y in sorted(rows, reverse=True):
            above = [line for line in lines if line.y > y - 1]
            if above:
                above[-1].source.append(spaced(rows[y]))

    # ------------------------------------------------------------ boxes and figures

    def _boxes(self, strokes: list[Line]) -> tuple[list[Piece], set[int], list[Line]]:
        """Take the framed results: wide boxes round one or a few rows of words."""
        found: list[Piece] = []
        taken: set[int] = set()
        for area in self.areas:
            if area.filled or area.curved or area.x1 - area.x0 < 0.6 * (self.right - self.left) or area.y1 - area.y0 > 90:
                continue
            inside = [g for g in self.work if area.x0 < g.left and g.right < area.x1 and area.y0 < g.y < area.y1]
            if inside:
                rows: dict[float, list[Glyph]] = defaultdict(list)
                for glyph in inside:
                    rows[round(glyph.y / 11)].append(glyph)
                found += find_pieces(inside, [], reach=3.0)
                taken.update(map(id, inside))
                strokes = [ln for ln in strokes if not _on_edge(ln, area)]
        # the small frame of an NG
        for area in self.areas:
            if not area.filled and not area.curved and area.x1 - area.x0 < 60 and area.y1 - area.y0 < 20:
                inside = [g for g in self.work if area.x0 < g.left and g.right < area.x1 and area.y0 < g.y < area.y1]
                if spaced(inside) in _VERDICTS:
                    strokes = [ln for ln in strokes if not _on_edge(ln, area)]
        return found, taken, strokes

    def _labels(self, pieces: list[Piece], strokes: list[Line]) -> tuple[list[Piece], list[Piece]]:
        """Part the labels of figures from the work."""
        drawn = [s for s in strokes if not (s.x0 == s.x1 and s.x0 < self.left + 12)]
        curved = [a for a in self.areas if a.curved or a.filled]
        boxes = [(min(s.x0, s.x1), min(s.y0, s.y1), max(s.x0, s.x1), max(s.y0, s.y1)) for s in drawn]
        boxes += [(a.x0, a.y0, a.x1, a.y1) for a in curved]
        labels, rest = [], []
        for piece in pieces:
            near = piece.size <= LABEL and any(
                x0 - 70 < piece.right and piece.left < x1 + 70 and y0 - 30 < piece.top and piece.bottom < y1 + 30
                for x0, y0, x1, y1 in boxes
            )
            (labels if near else rest).append(piece)
        return labels, rest


def _on_edge(line: Line, area: Area) -> bool:
    return (
        min(line.x0, line.x1) >= area.x0 - 0.1 and max(line.x0, line.x1) <= area.x1 + 0.1
        and min(line.y0, line.y1) >= area.y0 - 0.1 and max(line.y0, line.y1) <= area.y1 + 0.1
        and (line.x0 == line.x1 and min(abs(line.x0 - area.x0), abs(line.x0 - area.x1)) < 0.1
             or line.y0 == line.y1 and min(abs(line.y0 - area.y0), abs(line.y0 - area.y1)) < 0.1)
    )  # fmt: skip


def _line_at(lines: list[NumberedLine], carried: NumberedLine, y: float) -> NumberedLine:
    """Return the line a baseline belongs to: the nearest number at its height or above."""
    above = [line for line in lines if line.y > y - 1.2]
    return above[-1] if above else carried


def _rows(pieces: list[Piece]) -> list[_Row]:
    rows: list[_Row] = []
    for piece in sorted(pieces, key=lambda p: -p.baseline):
        if rows and abs(rows[-1].y - piece.baseline) < 0.8:
            rows[-1].pieces.append(piece)
        else:
            rows.append(_Row(piece.baseline, [piece]))
    for row in rows:
        row.pieces.sort(key=lambda p: p.left)
    return rows


class _RowReader:
    """Reads rows into the statements of a line."""

    def __init__(self, line: NumberedLine, page: int, problems: list[str]) -> None:
        self.line, self.page, self.problems = line, page, problems

    def read(self, row: _Row) -> None:
        because: tuple[str, list[Token]] | None = None
        for piece in row.pieces:
            if piece.words:
                self._words(piece, row.y)
                continue
            try:
                tokens = read_tokens(piece.glyphs, piece.rules)
            except ValueError as error:
                self._statement("unread", row.y).unread = f"{error}: {piece.text}"
                continue
            tokens, found = self._because(tokens)
            if found is not None:
                because = found
                if found[0] == "since":
                    self._statement("condition", row.y).condition = found[1]
                    self.line.statements[-1].because = "since"
                    because = None
            if tokens:
                self._math(tokens, row.y, because)
                because = None
        if because is not None:
            self._statement("condition", row.y).condition = because[1]
            self.line.statements[-1].because = because[0]

    def _statement(self, kind: str, y: float) -> Statement:
        words = " ".join(self.line.words)
        found = Statement(kind, self.page, y, words)
        self.line.statements.append(found)
        return found

    def _words(self, piece: Piece, y: float) -> None:
        text = piece.text
        checks = [s for s in self.line.statements if s.kind == "check"]
        if text in _VERDICTS and checks:
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

    def _because(self, tokens: list[Token]) -> tuple[list[Token], tuple[str, list[Token]] | None]:
        """Part words and a condition after "since" or "where" from the mathematics that follows."""
        for place, token in enumerate(tokens):
            if token.words and token.text in ("since", "where"):
                self.line.words += [plain(tokens[:place])] if place else []
                return [], (token.text, tokens[place + 1 :])
        if tokens and tokens[0].words and tokens[0].text == "Since" and tokens[-1].kind == "colon":
            return tokens[1:], None
        if tokens and tokens[0].words:
            self.line.words.append(plain(tokens))
            return [], None
        return tokens, None

    def _math(self, tokens: list[Token], y: float, because: tuple[str, list[Token]] | None) -> None:
        statements = self.line.statements
        open_ = statements[-1] if statements and statements[-1].kind in ("formula", "check", "required") else None
        if tokens[-1].kind == "colon":
            self._statement("arm", y).condition = tokens[:-1]
            return
        if any(token.words for token in tokens):
            self._statement("title", y).tokens = tokens
            return
        continues = tokens[0].kind == "relation" or (tokens[0].kind == "sign" and open_ is not None and open_.tokens)
        if open_ is not None and (continues or (not open_.tokens and open_.kind != "formula")):
            open_.tokens += tokens
            return
        if continues:
            for older in reversed(statements):
                if older.kind == "formula":
                    older.tokens += tokens
                    return
        found = self._statement("formula", y)
        found.tokens = tokens
        if because is not None:
            found.because, found.condition = because
        self.line.words = []
