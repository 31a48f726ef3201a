"""A composed calculation as plain text, a row for every printed row: what a person would copy off the sheet by hand.

Blocks of the report in, rows of text out. A fraction is `(above)/(below)`, a subscript follows `_`, a power `^`.
"""

from __future__ import annotations

from calcreport.report.model import (
    Big,
    Block,
    CheckLine,
    Fence,
    FigureBlock,
    Formula,
    Fraction,
    Givens,
    Heading,
    Letters,
    Line,
    Operator,
    Paragraph,
    Reference,
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


def rows(blocks: tuple[Block, ...]) -> list[str]:
    """Return the rows of a calculation as text."""
    found: list[str] = []
    for block in blocks:
        match block:
            case Heading(title):
                found.append(title)
            case Paragraph(said, _, source):
                found.append(words(said) + lane(source))
            case Givens(rows=givens):
                found += [
                    f"{g.number} {text(g.symbol)} = {text(g.value)}, {words(g.says)} [{words(g.source)}]"
                    for g in givens
                ]
            case Line():
                sides = [block.symbol, block.formula, block.substitution, block.coherent, block.result]
                why = f"{text(block.because)}: " if block.because is not None else ""
                equation = " = ".join(text(side) for side in sides if side is not None)
                found.append(f"{block.number} {words(block.says)}: {why}{equation}{lane(block.source)}")
            case Statement():
                found.append(f"{block.number} {words(block.says)}: {text(block.formula)}{lane(block.source)}")
            case CheckLine():
                shown = text(block.formula) + (f" = {text(block.substitution)}" if block.substitution else "")
                rest = " ".join(one for one in (shown, block.ratio, block.verdict, words(block.reason)) if one)
                found.append(f"{block.number} {block.name}: {rest}{lane(block.source)}")
            case ResultBox():
                number = f"{block.number} " if block.number else ""
                found.append(f"{number}{words(block.words)}{lane(block.source)}")
            case Table():
                number = f"{block.number} " if block.number else ""
                heads = " | ".join(words(column.heading) for column in block.columns)
                named = words(block.title) + ": " if block.title else ""
                found.append(number + named + heads + lane(block.source))
                found += [" | ".join(words(cell) for cell in row.cells) for row in block.rows]
            case FigureBlock():
                found.append("(figure)")
            case _:
                found.append(f"({type(block).__name__})")
    return [" ".join(row.split()) for row in found]


def lane(source: SourceLane) -> str:
    """Return what stands right of a line, in brackets."""
    parts = [source.citation, *(one.text for one in source.comes_from)]
    told = " ".join(part for part in parts if part)
    return f" [{told}]" if told else ""


def words(given: Words) -> str:
    """Return running text."""
    return "".join(
        one if isinstance(one, str) else one.text if isinstance(one, Strong | Reference) else text(one) for one in given
    )


def text(formula: Formula | None) -> str:
    """Return a formula on one row."""
    match formula:
        case None:
            return ""
        case Letters(letters):
            return letters
        case Operator(sign, kind):
            return f" {sign} " if kind in ("binary", "relation") else f"{sign} " if kind == "punctuation" else sign
        case Space():
            return " "
        case Row(items):
            return "".join(text(item) for item in items)
        case Fraction(above, below):
            return f"{_whole(above)}/{_whole(below)}"
        case Root(body, index):
            return f"{text(index)}√({text(body)})"
        case Script(base, below, above):
            raised = text(above)
            mark = raised if raised in ("′", "'") else f"^{raised}" if raised else ""
            return text(base) + (f"_{text(below)}" if below is not None else "") + mark
        case Fence(opening, body, closing):
            return f"{opening}{text(body)}{closing}"
        case Stack(lines):
            return "; ".join(text(line) for line in lines)
        case Big(sign, below, above):
            return f"{text(sign)}_{text(below)}^{text(above)} ".replace("^ ", " ").replace("_ ", " ")


def _whole(formula: Formula) -> str:
    shown = text(formula)
    return f"({shown})" if " " in shown or "(" in shown else shown
