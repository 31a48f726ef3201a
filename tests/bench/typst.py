"""A report as Typst source: the same words, formulas, tables, figures and links.

`report.model.Report` in, the text of a document out. Written to be quick: one block a line with its number and its
sources placed at their lanes, widths of columns given, tables and bookmarks in the typesetter's own way.
"""

from __future__ import annotations

from pathlib import Path

from calcreport.report.model import (
    Big,
    Block,
    CheckLine,
    CoverFacts,
    Fence,
    FigureBlock,
    Formula,
    Fraction,
    Givens,
    Heading,
    Index,
    IndexEntry,
    Letters,
    Line,
    Listing,
    Operator,
    Paragraph,
    Part,
    Reference,
    Report,
    ResultBox,
    Root,
    Row,
    Script,
    SourceLane,
    Space,
    Stack,
    Statement,
    Strong,
    Table,
    Words,
)
from tests.bench.content import Drawer, Label, Ring, column_widths, is_tall
from tests.bench.sheet import FRAME, LANE, ROOM, TITLES, title_words

_SIZES = {"tiny": 5, "scriptsize": 7, "small": 9, "normalsize": 10}
_HEAD = Path(__file__).with_name("head.typ")


def typst(report: Report) -> str:
    """Return the source of a whole package."""
    frame = " ".join(
        f"place(dx: {_n(x)}pt, dy: {_n(-y - h)}pt, rect(width: {_n(w)}pt, height: {_n(h)}pt, fill: black));"
        for x, y, w, h in FRAME
    )
    head = (
        _HEAD.read_text("utf-8")
        .replace("@LANE@", _n(LANE))
        .replace("@FRAME@", frame)
        .replace("@TITLE@", _s(report.title))
    )
    writer = _Typst()
    return head + "".join(map(writer.part, report.parts))


class _Typst:
    def __init__(self) -> None:
        self.drawer = Drawer()

    # ------------------------------------------------------------ parts

    def part(self, part: Part) -> str:
        facts = "; ".join(
            f"at({x}, {y}, {_SIZES[size]}, {_s(words)}{', weight: ' + chr(34) + 'bold' + chr(34) if bold else ''})"
            for (x, y, size, bold), words in zip(TITLES, title_words(part.facts), strict=True)
        )
        body = self.cover(part.cover) if part.cover is not None else ""
        body += self.index(part.index) if part.index is not None else ""
        body += "".join(map(self.block, part.blocks))
        return f"#part({_s(part.mark)}, {_s(part.title)}, {{ {facts} }})[\n{body}]\n"

    def cover(self, facts: CoverFacts) -> str:
        lines = [f'#v(30pt)#text(size: 24pt, weight: "bold", {_s(facts.title)})']
        lines += [self.text(line) for line in (*facts.header, facts.issue, facts.date, facts.status, facts.status_note)]
        for pairs in (facts.scope, facts.elsewhere):
            lines += [f"#grid(columns: (150pt, 340pt), strong({_s(a)}), {_s(b)})" for a, b in pairs]
        lines += [self.text(line) for line in facts.basis]
        lines += [self.words(words) for words in facts.result]
        lines += [self.text(line) for line in (*facts.cautions, facts.seal_words, *facts.office, facts.fingerprint)]
        return "\n\n".join(lines) + "\n\n"

    def index(self, index: Index) -> str:
        rows = "".join(map(self.index_row, index.entries))
        heads = ", ".join(f"strong({_s(h)})" for h in ("Mark", "Subject", "", "Sheets", "Rev.", "Last changed", "Page"))
        return (
            "#hd[Index of sheets]\n#pad(left: -30pt, table(columns: (90pt, 160pt, 20pt, 90pt, 30pt, 80pt, 30pt), "
            f"table.header({heads}),\n{rows}))\n"
        )

    def index_row(self, entry: IndexEntry) -> str:
        part, place = _s(entry.part), f"label({_s(entry.part + '-1')})"
        cells = (
            f"link({place}, {_s(entry.mark)})",
            f"link({place}, {_s(entry.title)})",
            _s(entry.flag),
            f"link({place}, sheets({part}))",
            _s(entry.revision),
            _s(entry.date),
            f"whole({part})",
        )
        return ", ".join(cells) + ",\n"

    # ------------------------------------------------------------ blocks

    def block(self, block: Block) -> str:
        match block:
            case Heading(text, level):
                return f"#{'hd' if level < 3 else 'hh'}({_s(text)})\n"
            case Paragraph(words):
                return f"#pp[{self.words(words)}]\n"
            case Givens(rows):
                return "".join(
                    f"#row({self.number(r.number, r.anchor)}, ${self.math(r.symbol)}$, ${self.math(r.value)}$, "
                    f"[{self.words(r.says)}], [{self.words(r.source)}])\n"
                    for r in rows
                )
            case Line():
                return self.line(block)
            case Statement(number, anchor, says, formula, source):
                return self.numbered(number, anchor, f"{self.words(says)}#h(1em)${self.math(formula)}$", source)
            case CheckLine():
                return self.check(block)
            case ResultBox(number, anchor, words, source):
                return self.numbered(number, anchor, f"#box(stroke: 1pt, inset: 3pt)[{self.words(words)}]", source)
            case Table():
                return self.table(block)
            case Listing(lines):
                return "".join(f"#li({_s(str(n))}, {_s(line)})\n" for n, line in enumerate(lines, start=1))
            case FigureBlock():
                return self.figure(block)

    def line(self, line: Line) -> str:
        sides = [self.math(side) for side in (line.symbol, line.formula, line.substitution, line.coherent) if side]
        because = f"#h(1em)#text(size: 8pt, ${self.math(line.because)}$)" if line.because else ""
        content = f"{self.words(line.says)}{because}#h(1em)${' = '.join(sides)}$#re($= {self.math(line.result)}$)"
        return self.numbered(line.number, line.anchor, content, line.source)

    def check(self, check: CheckLine) -> str:
        sides = " = ".join(self.math(side) for side in (check.formula, check.substitution) if side)
        content = (
            f"#text(size: 7pt)[CHECK] *{self.text(check.name)}*#h(1em)${sides}$#h(1fr)*{self.text(check.ratio)}*#h(1em)"
            f"{check.verdict}#h(1fr) {self.words(check.reason)}"
        )
        return self.numbered(check.number, check.anchor, content, check.source)

    def numbered(self, number: int, anchor: str, content: str, source: SourceLane) -> str:
        lane = f"*{self.text(source.citation)}* " if source.citation else ""
        lane += " ".join(f"#link(label({_s(one.target)}), {_s(one.text)})" for one in source.comes_from)
        return f"#ln({self.number(number, anchor)}, [{lane}])[{content}]\n"

    def number(self, number: int, anchor: str) -> str:
        return f"[{number or ''}{f'#metadata(none)#label({_s(anchor)})' if anchor else ''}]"

    def table(self, table: Table) -> str:
        widths = column_widths(table, LANE if table.number else ROOM)
        align = ", ".join({"centre": "center"}.get(c.align, c.align) for c in table.columns)
        heads = ", ".join(f"strong[{self.words(c.heading)}]" for c in table.columns)
        rows = []
        for row in table.rows:
            cells = [f"strong[{self.words(c)}]" if row.emphasis else f"[{self.words(c)}]" for c in row.cells]
            if row.anchor:
                cells[0] = (
                    f"[{cells[0] if row.emphasis else self.words(row.cells[0])}#metadata(none)#label({_s(row.anchor)})]"
                )
            rows.append(", ".join(cells))
        body = ",\n".join(rows)
        columns = ", ".join(f"{_n(w)}pt" for w in widths)
        made = f"table(columns: ({columns},), align: ({align},), table.header({heads},),\n{body})"
        title = f"*{self.words(table.title)}*" if table.title else ""
        if table.number:
            return self.numbered(table.number, table.anchor, f"{title}#{made}", table.source)
        return f"{title}\n#pad(left: -30pt, {made})\n"

    def figure(self, block: FigureBlock) -> str:
        drawing = self.drawer.drawing(block.figure)
        ink: list[str] = []
        for shape in drawing.shapes:
            match shape:
                case Label(x, y, size, text):
                    ink.append(f"at({_n(x)}, {_n(-y)}, {_n(size)}, {_s(text)})")
                case Ring(x, y, r, width, fill):
                    circle = f"circle(radius: {_n(r)}pt, {_pen(width, fill, ())})"
                    ink.append(f"place(dx: {_n(x - r)}pt, dy: {_n(y - r)}pt, {circle})")
                case _:
                    (x0, y0), *others = shape.points
                    path = f"curve.move(({_n(x0)}pt, {_n(y0)}pt)), "
                    path += ", ".join(f"curve.line(({_n(x)}pt, {_n(y)}pt))" for x, y in others)
                    path += ", curve.close()" if shape.closed else ""
                    ink.append(f"place(curve({_pen(shape.width, shape.fill, shape.dash)}, {path}))")
        extent = f"width: {_n(drawing.width)}pt, height: {_n(drawing.height)}pt"
        drawn = f"align(right, box({extent}, align(left + top, {{ {'; '.join(ink)} }})))"
        return (
            f"#place(block(width: {_n(LANE)}pt, {drawn}))\n"
            if block.beside
            else f"#block(width: {_n(LANE)}pt, {drawn})\n"
        )

    # ------------------------------------------------------------ words and formulas

    def text(self, text: str) -> str:
        return "".join(f"\\{c}" if c in r"\#$*_`<>@[]~/=-+" else c for c in text)

    def words(self, words: Words) -> str:
        found = []
        for word in words:
            match word:
                case str():
                    found.append(self.text(word))
                case Strong(text):
                    found.append(f"#strong[{self.text(text)}]")
                case Reference(text, target):
                    found.append(f"#link(label({_s(target)}), {_s(text)})")
                case _:
                    found.append(f"${self.math(word)}$")
        return "".join(found)

    def math(self, formula: Formula) -> str:
        match formula:
            case Letters(text, style):
                return f"{text} " if style == "italic" and len(text) == 1 else f"{_s(text)} "
            case Operator(text):
                return f"{text} " if text not in "()[]|,;/\\" else f"\\{text} "
            case Space():
                return "thin "
            case Row(items):
                return "".join(map(self.math, items))
            case Fraction(above, below):
                return f"frac({self.math(above)}, {self.math(below)}) "
            case Root(body, index):
                return f"root({self.math(index)}, {self.math(body)}) " if index else f"sqrt({self.math(body)}) "
            case Script(base, below, above):
                return f"attach({self.math(base)}{self.limits(below, above)}) "
            case Big(sign, below, above):
                return f"attach(limits({self.math(sign)}){self.limits(below, above)}) "
            case Fence(opening, body, closing):
                return self.fence(opening, body, closing)
            case Stack(rows):
                return f"mat(delim: #none, align: #left, {'; '.join(map(self.math, rows))}) "

    def limits(self, below: Formula | None, above: Formula | None) -> str:
        return (f", b: {self.math(below)}" if below else "") + (f", t: {self.math(above)}" if above else "")

    def fence(self, opening: str, body: Formula, closing: str) -> str:
        left, right = (f"\\{sign}" if sign else "" for sign in (opening, closing))
        inside = f"{left} {self.math(body)}{right} "
        return f"lr({inside}) " if is_tall(body) else inside


def _pen(width: float, fill: float | None, dash: tuple[float, ...]) -> str:
    pattern = f", dash: ({', '.join(f'{_n(d)}pt' for d in dash)},)" if dash else ""
    stroke = f"(thickness: {_n(width)}pt{pattern})" if width else "none"
    return f"stroke: {stroke}" + (f", fill: luma({round(255 * fill)})" if fill is not None else "")


def _s(text: str) -> str:
    """Write a string of the language."""
    return '"' + text.replace("\\", "\\\\").replace('"', '\\"') + '"'


def _n(value: float) -> str:
    """Write a number to hundredths."""
    return f"{value:.2f}".rstrip("0").rstrip(".") or "0"
