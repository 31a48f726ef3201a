"""Words of a template: citations, and texts with values shown in braces.

Text nodes in, `Citation` and pieces out.
"""

from __future__ import annotations

import re

from calcreport.core.expression import Name
from calcreport.core.problems import Problems
from calcreport.core.source import Citation
from calcreport.read.fields import Fields
from calcreport.read.nodes import Scalar

#: what a line may rest on beside a clause
PLAIN = ("geometry", "statics")
#: the same as a pattern: plain, with a number, or of a document named in front
CITED = rf"^\s*(?:{'|'.join(PLAIN)}|(?:(?!: ).)*[0-9](?:(?!: ).)*|.+: .+)\s*$"
_PIECE = re.compile(r"\{([A-Za-z][\w.]*)\}")
_BRACE = re.compile(r"\{[^{}]*\}?|\}")


def read_cite(fields: Fields, document: str, problems: Problems) -> Citation:
    """Read the citation a line must have; `document` stands before bare clauses."""
    scalar = fields.scalar("cite")
    if scalar is not None:
        return read_citation(scalar, document, problems)
    if fields.node_of("cite") is None:
        problems.add(
            "no-cite", fields.span.part(0, 1), f"{fields.what} has no citation",
            expected="`cite:` with a clause, geometry or statics", found="no `cite`",
        )  # fmt: skip
    return Citation("", "")


def read_citation(scalar: Scalar, document: str, problems: Problems) -> Citation:
    """Split 'ASCE/SEI 7: 2.3.1' into document and clause; a bare clause is of this file's code."""
    text = scalar.text.strip()
    if text in PLAIN:
        return Citation("", text)
    named, mark, clause = text.partition(": ")
    if mark and named and clause:
        return Citation(named, clause)
    if mark or not any(c.isdigit() for c in text):
        problems.add(
            "no-cite", scalar.span, f"`{text[:40]}` cites no clause", found=text[:40] or "nothing",
            expected="a clause, table or equation by its number, geometry or statics; another code as 'CODE: 2.3'",
            hint=problems.near(text, PLAIN),
        )  # fmt: skip
    return Citation(document, text)


def read_pieces(scalar: Scalar, problems: Problems) -> tuple[str | Name, ...]:
    """Split words at `{symbol}`; a brace that shows no value is a problem."""
    found: list[str | Name] = []
    at = 0
    for match in _BRACE.finditer(scalar.text):
        inner = _PIECE.fullmatch(match[0])
        if inner is None:
            problems.add(
                "bad-text", scalar.span.part(match.start(), match.end()), f"`{match[0][:40]}` shows no value",
                expected="a symbol in braces, such as {M_u}", found=match[0][:40],
                hint="a value is shown by its symbol alone; work a formula on a line of its own",
            )  # fmt: skip
            continue
        if match.start() > at:
            found.append(scalar.text[at : match.start()])
        found.append(Name(inner[1], scalar.span.part(match.start() + 1, match.end() - 1)))
        at = match.end()
    if at < len(scalar.text):
        found.append(scalar.text[at:])
    return tuple(found)
