"""Comment logs of plan review: text in, `CommentLog` out. Where answers stand is held later, against the package.

A comment that is not answered, or does not say where, is a problem: a letter with gaps comes back unread.
"""

from __future__ import annotations

import re

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.read.calculations import MARK
from calcreport.read.fields import Fields, as_mapping, as_scalar, is_empty
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, read_tree
from calcreport.read.project import read_date
from calcreport.read.review_model import AnsweredAt, Comment, CommentLog, OtherPlace, Pointer

KEYS = ("cycle", "received", "reviewer", "application", "date", "comments")
COMMENT_KEYS = ("number", "discipline", "reference", "says", "response", "status", "answered")
#: places outside the package
OTHER_KEYS = ("drawing", "document")
#: what became of a comment, and what each word says
STATUSES = {
    "revised": "calculation, drawing or document changed",
    "clarified": "explained, nothing changed",
    "no change": "not followed, for the reason given",
    "deferred": "answered with a deferred submittal",
    "by others": "answered in work by others",
}
NUMBER = re.compile(r"[A-Za-z0-9][A-Za-z0-9.()/-]{0,11}")
MOST_CYCLES = 99
POINTER = re.compile(rf"({MARK.pattern})(?:\.(\S.*))?")
_SHEET = re.compile(rf"({MARK.pattern})-[0-9]+")


def read_comments(source: Source, problems: Problems) -> CommentLog | None:
    """Return a comment log, or None where it has problems."""
    before = problems.met
    root = read_tree(source, problems)
    tree = as_mapping(root, "a comment log", problems) if root is not None else None
    if tree is None:
        return None
    fields = Fields(tree, KEYS, "a comment log", problems)
    cycle = fields.whole("cycle", low=1, high=MOST_CYCLES, required=True)
    received = read_date(fields.scalar("received", required=True), problems)
    sent = fields.scalar("date", required=True)
    date = read_date(sent, problems)
    if received and date and sent is not None and date < received:
        problems.add("answered-before", sent.span, "the letter is dated before the comments it answers",
                     expected=f"{received} or later", found=date)  # fmt: skip
    before_reviewer = problems.met
    reviewer = tuple(line.text for line in fields.texts("reviewer") if line.text.strip())
    if not reviewer and problems.met == before_reviewer:
        fields.say_missing("reviewer")
    comments = _comments(fields, problems)
    if problems.met > before or cycle is None:
        return None
    return CommentLog(cycle, received, date, reviewer, fields.text("application"), comments)


def _comments(fields: Fields, problems: Problems) -> tuple[Comment, ...]:
    found: list[Comment] = []
    seen: dict[str, Span] = {}
    nodes = fields.items("comments", required=True)
    if not nodes and fields.node_of("comments") is not None and not problems:
        at = fields.span_of("comments").part(0, 1)
        problems.add("missing-key", at, "the log holds no comment", expected="one or more", found="an empty list")
    for node in nodes:
        mapping = as_mapping(node, "a comment", problems)
        if mapping is not None:
            comment = _comment(Fields(mapping, COMMENT_KEYS, "a comment", problems), seen, problems)
            found += [comment] if comment is not None else []
    return tuple(found)


def _comment(entry: Fields, seen: dict[str, Span], problems: Problems) -> Comment | None:
    number, says = entry.scalar("number", required=True), entry.scalar("says", required=True)
    discipline = entry.text("discipline", required=True)
    status = entry.choice("status", tuple(STATUSES), required=True)
    called = f"comment {number.text[:20]}" if number is not None else "a comment"
    if number is not None:
        _hold_number(number, seen, problems)
    if says is not None and not says.text.strip():
        problems.add("missing-key", says.span, f"{called} says nothing", expected="the reviewer's own words",
                     found="empty text")  # fmt: skip
    response = entry.scalar("response")
    if (response is None and "response" not in entry.mistaken and _is_bare(entry.node, "response")) or (
        response is not None and not response.text.strip()
    ):
        problems.add("not-answered", _at(entry, "response", number), f"{called} has no answer",
                     expected="`response: …`", found="nothing")  # fmt: skip
    answered = _answered(entry, called, number, problems)
    if number is None or says is None:
        return None
    return Comment(number.text, discipline, entry.text("reference"), says.text.rstrip("\n"),
                   response.text.rstrip("\n") if response is not None else "", status, answered, says.span)  # fmt: skip


def _is_bare(node: Mapping, key: str) -> bool:
    """Tell whether a key is missing or has no value."""
    value = node.get(key)
    return value is None or is_empty(value)


def _at(entry: Fields, key: str, number: Scalar | None) -> Span:
    """Return the place of a key, else of the comment's number."""
    at = next((name.span for name, _ in entry.node.entries if name.text == key), None)
    return at or (number.span if number is not None else entry.span.part(0, 1))


def _hold_number(number: Scalar, seen: dict[str, Span], problems: Problems) -> None:
    if not NUMBER.fullmatch(number.text):
        problems.add("bad-comment-number", number.span, f"`{number.text[:40]}` cannot number a comment",
                     expected="up to twelve letters, digits and signs, such as 4, S-12 or 3.1",
                     found=number.text[:40] or "nothing")  # fmt: skip
    elif number.text in seen:
        problems.add("given-twice", number.span, f"comment {number.text} stands twice", expected="every number once",
                     found=number.text, related=((seen[number.text], "first here"),))  # fmt: skip
    else:
        seen[number.text] = number.span


def _answered(entry: Fields, called: str, number: Scalar | None, problems: Problems) -> tuple[AnsweredAt, ...]:
    node = entry.node.get("answered")
    listed = node.items if isinstance(node, Sequence) else (node,) if node is not None and not is_empty(node) else ()
    if not listed and "answered" not in entry.mistaken:
        problems.add(
            "not-answered", _at(entry, "answered", number), f"{called} does not say where it is answered",
            expected="`answered:` with marks and symbols, front sheets, drawings or documents", found="nothing",
            hint="such as answered: [B1.phiM_n, B1.flexure, SUMMARY, {drawing: S-301}]; where the letter alone "
            "answers, {document: this letter}",
        )  # fmt: skip
    places = (_place(item, problems) for item in listed)
    return tuple(place for place in places if place is not None)


def _place(node: Node, problems: Problems) -> AnsweredAt | None:
    if isinstance(node, Mapping):
        other = Fields(node, OTHER_KEYS, "an entry of `answered`", problems)
        told = [(key, scalar) for key in OTHER_KEYS if (scalar := other.scalar(key)) is not None]
        if len(told) == 1 and told[0][1].text.strip():
            return OtherPlace(told[0][0], told[0][1].text)
        if not other.mistaken:
            problems.add("wrong-shape", node.span.part(0, 1), "this names no single place",
                         expected="{drawing: …} or {document: …}",
                         found="both" if len(told) > 1 else "neither")  # fmt: skip
        return None
    scalar = as_scalar(node, "an entry of `answered`", problems)
    if scalar is None:
        return None
    match = POINTER.fullmatch(scalar.text)
    if match is None:
        sheet = _SHEET.fullmatch(scalar.text)
        hint = (
            f"sheet and line are found in the package: write {sheet[1]}, or {sheet[1]}. and a symbol or check"
            if (sheet)
            else "a drawing or another document is written {drawing: …} or {document: …}"
        )
        problems.add("not-a-place", scalar.span, f"`{scalar.text[:40]}` names no place in a package",
                     expected="a mark, or mark and symbol or check, such as B1.phiM_n", found=scalar.text[:40] or
                     "nothing", hint=hint)  # fmt: skip
        return None
    return Pointer(match[1], match[2] or "", scalar.span)
