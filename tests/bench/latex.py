"""A report as LaTeX source: the same words, formulas, tables, figures, links and bookmarks.

`report.model.Report` in, the text of a document for pdflatex out. Written to be quick: plain TeX boxes for lines, links
and bookmarks by primitives of the engine, the ring and the frame saved once, drawings as PDF operators. Two passes are
needed, for the sheets of each part and the pages of the index.
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

_MATH = {
    "ε": r"\varepsilon ", "φ": r"\phi ", "β": r"\beta ", "∑": r"\sum ", "−": "-",
    "≤": r"\le ", "≥": r"\ge ", "≠": r"\ne ",
    "·": r"\cdot ", "×": r"\times ", "′": r"\prime ", "²": "{}^2", "³": "{}^3", "⁴": "{}^4", " ": r"\ ", "\xa0": r"\ ",
    ",": "{,}", "#": r"\#", "%": r"\%", "&": r"\&", "_": r"\_", "$": r"\$", "–": r"\mbox{--}", "{": r"\{", "}": r"\}",
    "°": r"{}^\circ ", "\u200b": "", "\\": r"\backslash ", "^": r"\hat{}", "~": r"\sim ",
}  # fmt: skip
_WORDS = {
    "#": r"\#", "%": r"\%", "&": r"\&", "_": r"\_", "$": r"\$", "{": r"\{", "}": r"\}", "~": r"\~{}", "^": r"\^{}",
    "\\": r"\textbackslash{}", "\xa0": "~", "–": "--", "|": "$|$", "<": "$<$", ">": "$>$", "′": "$'$", "\u200b": "",
    **{sign: f"${text}$" for sign, text in _MATH.items() if sign in "−≤≥≠·×²³⁴εφβ∑°"},
}  # fmt: skip
_HEAD = Path(__file__).with_name("head.tex")


def latex(report: Report) -> str:
    """Return the source of a whole package."""
    frame = "".join(rf"\put({_n(x0)},{_n(y0)}){{\rule{{{_n(w)}bp}}{{{_n(h)}bp}}}}" for x0, y0, w, h in FRAME)
    head = _HEAD.read_text("utf-8").replace("@LANE@", _n(LANE)).replace("@FRAME@", frame)
    writer = _Latex()
    return head + "".join(map(writer.part, report.parts)) + "\\end{document}\n"


class _Latex:
    def __init__(self) -> None:
        self.drawer = Drawer()

    # ------------------------------------------------------------ parts

    def part(self, part: Part) -> str:
        facts = "".join(
            rf"\put({x},{y}){{\{size}{chr(92) + 'bfseries' if bold else ''} {self.text(words)}}}"
            for (x, y, size, bold), words in zip(TITLES, title_words(part.facts), strict=True)
        )
        body = self.cover(part.cover) if part.cover is not None else ""
        body += self.index(part.index) if part.index is not None else ""
        body += "".join(map(self.block, part.blocks))
        return (
            f"\\def\\facts{{{facts}}}\\Part{{{part.mark}}}{{{self.text(part.title)}}}\n{body}"
            f"\\label{{last-{part.mark}}}\\clearpage\n"
        )

    def cover(self, facts: CoverFacts) -> str:
        lines = [rf"\vskip30pt{{\Huge\bfseries {self.text(facts.title)}\par}}"]
        lines += [self.text(line) for line in (*facts.header, facts.issue, facts.date, facts.status, facts.status_note)]
        for pairs in (facts.scope, facts.elsewhere):
            lines += [
                rf"\hbox{{\vtop{{\hsize=150bp\bfseries {self.text(a)}\par}}\vtop{{\hsize=340bp {self.text(b)}\par}}}}"
                for a, b in pairs
            ]
        lines += [self.text(line) for line in facts.basis]
        lines += [self.words(words) for words in facts.result]
        lines += [self.text(line) for line in (*facts.cautions, facts.seal_words, *facts.office, facts.fingerprint)]
        return "\n\n".join(lines) + "\n\n"

    def index(self, index: Index) -> str:
        rows = "".join(map(self.index_row, index.entries))
        columns = "@{}p{90bp}p{160bp}p{20bp}p{90bp}p{30bp}p{80bp}r@{}"
        heads = "\\bfseries Mark&Subject&&Sheets&Rev.&Last changed&Page"
        table = f"\\begin{{longtable}}{{{columns}}}\n{heads}\\\\\\hline\\endhead\n{rows}\\end{{longtable}}"
        return f"\\hd{{Index of sheets}}\n{{\\small{table}}}\n"

    def index_row(self, entry: IndexEntry) -> str:
        part = entry.part
        cells = (
            rf"\lk{{{part}-1}}{{{self.text(entry.mark)}}}",
            rf"\lk{{{part}-1}}{{{self.text(entry.title)}}}",
            self.text(entry.flag),
            rf"\lk{{{part}-1}}{{{part}-1 to {part}-\pageref{{last-{part}}}}}",
            self.text(entry.revision),
            self.text(entry.date),
            rf"\pageref{{abs-{part}}}",
        )
        return "&".join(cells) + "\\\\\\hline\n"

    # ------------------------------------------------------------ blocks

    def block(self, block: Block) -> str:
        match block:
            case Heading(text, level):
                return rf"\{'hd' if level < 3 else 'hh'}{{{self.text(text)}}}" + "\n"
            case Paragraph(words):
                return rf"\pp{{{self.words(words)}}}" + "\n"
            case Givens(rows):
                return "".join(
                    rf"\row{{{self.number(r.number, r.anchor)}}}{{${self.math(r.symbol)}$}}{{${self.math(r.value)}$}}"
                    rf"{{{self.words(r.says)}}}{{{self.words(r.source)}}}" + "\n"
                    for r in rows
                )
            case Line():
                return self.line(block)
            case Statement(number, anchor, says, formula, source):
                return self.numbered(number, anchor, rf"{self.words(says)}\quad${self.math(formula)}$", source)
            case CheckLine():
                return self.check(block)
            case ResultBox(number, anchor, words, source):
                return self.numbered(number, anchor, rf"\fbox{{{self.words(words)}}}", source)
            case Table():
                return self.table(block)
            case Listing(lines):
                return "".join(rf"\li{{{n}}}{{{self.listed(line)}}}" + "\n" for n, line in enumerate(lines, start=1))
            case FigureBlock():
                return self.figure(block)

    def listed(self, line: str) -> str:
        """Return a line of a text file; its leading spaces are kept."""
        text = line.lstrip(" ")
        return rf"\kern{4 * (len(line) - len(text))}bp {self.text(text)}"

    def line(self, line: Line) -> str:
        sides = [self.math(side) for side in (line.symbol, line.formula, line.substitution, line.coherent) if side]
        because = rf"\quad{{\footnotesize ${self.math(line.because)}$}}" if line.because else ""
        content = rf"{self.words(line.says)}{because}\quad${'='.join(sides)}$\re{{{self.math(line.result)}}}"
        return self.numbered(line.number, line.anchor, content, line.source)

    def check(self, check: CheckLine) -> str:
        sides = "=".join(self.math(side) for side in (check.formula, check.substitution) if side)
        verdict = rf"\hfil\textbf{{{check.ratio}}}\quad {check.verdict}"
        name = rf"{{\footnotesize CHECK}} \textbf{{{self.text(check.name)}}}"
        content = rf"{name}\quad${sides}${verdict} {self.words(check.reason)}"
        return self.numbered(check.number, check.anchor, content, check.source)

    def numbered(self, number: int, anchor: str, content: str, source: SourceLane) -> str:
        lane = rf"\textbf{{{self.text(source.citation)}}}" if source.citation else ""
        lane += "".join(rf" \lk{{{one.target}}}{{{self.text(one.text)}}}" for one in source.comes_from)
        return rf"\ln{{{self.number(number, anchor)}}}{{{content}}}{{{lane}}}" + "\n"

    def number(self, number: int, anchor: str) -> str:
        return (rf"\an{{{anchor}}}" if anchor else "") + (str(number) if number else "")

    def table(self, table: Table) -> str:
        aligned = {"left": r"\raggedright", "right": r"\raggedleft", "centre": r"\centering"}
        widths = column_widths(table, LANE if table.number else ROOM)
        columns = "".join(
            rf">{{{aligned[c.align]}\arraybackslash}}p{{{_n(w - 4)}bp}}"
            for c, w in zip(table.columns, widths, strict=True)
        )
        head = "&".join(rf"\bfseries {self.words(c.heading)}" for c in table.columns) + r"\\\hline"
        rows = []
        for row in table.rows:
            bold = r"\bfseries " if row.emphasis else ""
            cells = "&".join(bold + self.words(cell) for cell in row.cells)
            rows.append((rf"\an{{{row.anchor}}}" if row.anchor else "") + cells + r"\\\hline")
        body = "\n".join(rows)
        title = rf"\textbf{{{self.words(table.title)}}}\\" if table.title else ""
        if table.number:
            inside = rf"{title}\small\begin{{tabular}}[t]{{@{{}}{columns}@{{}}}}{head}" + f"\n{body}\\end{{tabular}}"
            return self.numbered(table.number, table.anchor, inside, table.source)
        long = f"\\begin{{longtable}}{{@{{}}{columns}@{{}}}}{head}\\endhead\n{body}\n\\end{{longtable}}"
        return f"{title}{{\\small{long}}}\n"

    def figure(self, block: FigureBlock) -> str:
        drawing = self.drawer.drawing(block.figure)
        ink: list[str] = []
        labels: list[str] = []
        for shape in drawing.shapes:
            match shape:
                case Label(x, y, size, text):
                    labels.append(
                        rf"\put({_n(x)},{_n(-y)}){{\fontsize{{{_n(size)}}}{{{_n(size)}}}\selectfont {self.text(text)}}}"
                    )
                case Ring(x, y, radius, width, fill):
                    ink.append(_circle(x, -y, radius, width, fill))
                case _:
                    path = " l ".join(f"{_n(x)} {_n(-y)}" for x, y in shape.points).replace(" l ", " m ", 1)
                    dash = f"[{' '.join(map(_n, shape.dash))}] 0 d " if shape.dash else ""
                    ink.append(f"{dash}{_n(shape.width)} w {path} l {_paint(shape.width, shape.fill, shape.closed)}")
                    ink.append("[] 0 d" if dash else "")
        content = rf"\pdfliteral{{q {' '.join(ink)} Q}}" + "".join(labels)
        picture = rf"\begin{{picture}}(0,0){content}\end{{picture}}"
        extent = f"{{{_n(drawing.width)}}}{{{_n(drawing.height)}}}"
        return rf"\fig{'beside' if block.beside else ''}{extent}{{{picture}}}" + "\n"

    # ------------------------------------------------------------ words and formulas

    def text(self, text: str) -> str:
        return "".join(_WORDS.get(c, c) for c in text)

    def words(self, words: Words) -> str:
        found = []
        for word in words:
            match word:
                case str():
                    found.append(self.text(word))
                case Strong(text):
                    found.append(rf"\textbf{{{self.text(text)}}}")
                case Reference(text, target):
                    found.append(rf"\lk{{{target}}}{{{self.text(text)}}}")
                case _:
                    found.append(f"${self.math(word)}$")
        return "".join(found)

    def math(self, formula: Formula) -> str:
        match formula:
            case Letters(text, style):
                letters = "".join(_MATH.get(c, c) for c in text)
                plain = style == "italic" or not any(c.isalpha() for c in text)
                return letters if plain else rf"\mathrm{{{letters}}}"
            case Operator(text):
                return "," if text == "," else _MATH.get(text, text)
            case Space(kind):
                return r"\;" if kind == "unit" else r"\,"
            case Row(items):
                return "".join(map(self.math, items))
            case Fraction(above, below):
                return rf"\frac{{{self.math(above)}}}{{{self.math(below)}}}"
            case Root(body, index):
                return rf"\sqrt{f'[{self.math(index)}]' if index else ''}{{{self.math(body)}}}"
            case Script(base, below, above):
                return "{" + self.math(base) + "}" + self.limits(below, above)
            case Big(sign, below, above):
                return rf"\mathop{{{self.math(sign)}}}\limits{self.limits(below, above)}"
            case Fence(opening, body, closing):
                return self.fence(opening, body, closing)
            case Stack(rows):
                return r"\begin{array}{@{}l@{}}" + r"\\".join(map(self.math, rows)) + r"\end{array}"

    def limits(self, below: Formula | None, above: Formula | None) -> str:
        return (f"_{{{self.math(below)}}}" if below else "") + (f"^{{{self.math(above)}}}" if above else "")

    def fence(self, opening: str, body: Formula, closing: str) -> str:
        if not is_tall(body):
            return f"{_MATH.get(opening, opening)}{self.math(body)}{_MATH.get(closing, closing)}"
        signs = (_MATH.get(sign, sign) or "." for sign in (opening, closing))
        return rf"\left{next(signs)}{self.math(body)}\right{next(signs)}"


def _paint(width: float, fill: float | None, closed: bool) -> str:
    if fill is not None:
        return f"{_n(fill)} g {'b' if width else 'f'} 0 g"
    return "s" if closed else "S"


def _circle(x: float, y: float, r: float, width: float, fill: float | None) -> str:
    k = 0.5523 * r
    points = (
        (x + r, y + k, x + k, y + r, x, y + r), (x - k, y + r, x - r, y + k, x - r, y),
        (x - r, y - k, x - k, y - r, x, y - r), (x + k, y - r, x + r, y - k, x + r, y),
    )  # fmt: skip
    curves = " ".join(" ".join(map(_n, point)) + " c" for point in points)
    return f"{_n(width)} w {_n(x + r)} {_n(y)} m {curves} {_paint(width, fill, True)}"


def _n(value: float) -> str:
    """Write a number to hundredths."""
    return f"{value:.2f}".rstrip("0").rstrip(".") or "0"
