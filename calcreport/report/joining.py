"""Blocks that share a row: short lines of one number, headings that follow one another, the condition under a heading.

Blocks of a calculation in, fewer blocks out. Says nothing new and leaves nothing out.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.report.model import Block, Heading, Line, Lines, Paragraph, SourceLane, Statement


def joined(blocks: tuple[Block, ...]) -> tuple[Block, ...]:
    """Return the blocks with those joined that share a row."""
    found: list[Block] = []
    for block in blocks:
        both = _both(found[-1], block) if found else None
        if both is None:
            found.append(block)
        else:
            found[-1] = both
    return tuple(found)


def _both(above: Block, block: Block) -> Block | None:
    """Return two blocks as one, or None where each stands by itself."""
    match above, block:
        case (Line() | Lines(), Line()) if block.number and block.number == above.number:
            lines = above.lines if isinstance(above, Lines) else (above,)
            ordered = (*above.source.comes_from, *block.source.comes_from)
            comes_from = tuple(sorted(dict.fromkeys(ordered), key=lambda one: int(one.text)))
            source = SourceLane(above.source.citation, comes_from)
            return Lines(above.number, above.anchor, (*lines, block), source, above.delta or block.delta)
        case Statement(), Statement(number=0) if above.number:
            # a change in one form is one of the line
            return replace(above, others=(*above.others, block), delta=above.delta or block.delta)
        case Heading(level=3, since=()), Heading(level=3):
            return replace(above, then=(*above.then, block.text, *block.then), since=block.since)
        case Heading(level=3, since=()), Paragraph() if is_condition(block):
            return replace(above, since=block.words)
        case Paragraph(), Heading(level=3, since=()) if is_condition(above):
            return replace(block, since=above.words)
        case _:
            return None


def is_condition(block: Block) -> bool:
    """Tell whether a block is the condition that chose the lines below it: `Since b_f > b_w:`."""
    return isinstance(block, Paragraph) and block.kind == "plain" and block.words[:1] == ("Since ",)
