"""Links to other calculations as a project writes them: `{from: FL2.M_u}`, with `at` for a row, or a whole set.

Nodes in, `LinkedValue` and `GivenRows` without rows out. What they name is held when plans are at hand.
"""

from __future__ import annotations

import re

from calcreport.core.expression import Name
from calcreport.core.problems import Problems, listed
from calcreport.read.fields import Fields
from calcreport.read.model import MEMBER, Given, GivenRows, GivenValue, LinkedRows, LinkedValue, ValueOrigin
from calcreport.read.nodes import Mapping, Scalar

_VALUE = re.compile(r"([A-Za-z][A-Za-z0-9]*)\.([A-Za-z][\w.\[\]+ /-]*)")
_SET = re.compile(r"([A-Za-z][A-Za-z0-9]*)\.([A-Za-z]\w*)")
ROWS_KEYS = ("from", "at", "columns")


def read_link(
    given: Given, scalar: Scalar, at: tuple[tuple[Name, Name], ...], problems: Problems, shared: dict[str, str]
) -> LinkedValue | None:
    """Read the name of another calculation's line; `at` names rows, and then the name has none in brackets.

    `shared` names the calculation of members that have none of their own, by their marks.
    """
    match = _VALUE.fullmatch(scalar.text)
    if match is None or given.kind not in ("value", "pairs"):
        bars = given.kind in ("bars", "spaced bars")
        problems.add("not-a-link", scalar.span, f"`{scalar.text[:40]}` cannot be linked here",
                     expected="bars written out" if bars else "mark and symbol, such as FL2.M_u",
                     found="a link" if bars else scalar.text[:40] or "nothing")  # fmt: skip
        return None
    if at and "[" in match[2]:
        problems.add("not-a-link", scalar.span, "rows are named in brackets and under `at` too",
                     expected="the symbol alone beside `at`", found=scalar.text[:40])  # fmt: skip
        return None
    mark, path = match[1], match[2]
    if mark not in shared:
        return LinkedValue(mark, path, scalar.span, at)
    if at:
        return LinkedValue(shared[mark], path, scalar.span, (_member(mark, scalar), *at))
    return LinkedValue(shared[mark], f"{MEMBER}[{mark}].{path}", scalar.span)


def _member(mark: str, scalar: Scalar) -> tuple[Name, Name]:
    at = scalar.span.part(0, len(mark))
    return Name(MEMBER, at), Name(mark, at)


def read_at(fields: Fields) -> tuple[tuple[Name, Name], ...]:
    """Read `at: {section: C3 foot}`: the row to take of each set."""
    mapping = fields.mapping("at")
    if mapping is None:
        return ()
    rows = Fields(mapping, [key.text for key, _ in mapping.entries], "`at`", fields.problems)
    found = ((key, rows.scalar(key.text, required=True)) for key, _ in mapping.entries)
    return tuple((Name(key.text, key.span), Name(row.text, row.span)) for key, row in found if row is not None)


def read_linked_rows(given: Given, node: Mapping, problems: Problems, shared: dict[str, str]) -> GivenRows | None:
    """Read `{from: LC1.combination, at: {section: C3 foot}, columns: {P_u: P_u, M_u: M_u}}`."""
    before = problems.met
    fields = Fields(node, ROWS_KEYS, f"the rows of `{given.name}`", problems)
    scalar, at = fields.scalar("from", required=True), read_at(fields)
    columns, same = _columns(given, fields)
    match = _SET.fullmatch(scalar.text) if scalar is not None else None
    if scalar is not None and match is None:
        problems.add("not-a-link", scalar.span, f"`{scalar.text[:40]}` names no set of another calculation",
                     expected="mark and set, such as LC1.combination", found=scalar.text[:40] or "nothing")  # fmt: skip
    if scalar is None or match is None or problems.met > before:
        return None
    rows = Name(match[2], scalar.span.part(match.start(2), match.end(2)))
    mark = match[1]
    at = (_member(mark, scalar), *at) if mark in shared else at
    linked = LinkedRows(shared.get(mark, mark), rows, at, columns, same, scalar.span)
    words = ", ".join([f"{match[1]} {match[2]}", *(row.name for _, row in at)])
    return GivenRows(given, (), (), ValueOrigin("line", words), node.span, linked)


def _columns(given: Given, fields: Fields) -> tuple[tuple[tuple[Given, Name], ...], tuple[GivenValue, ...]]:
    """Return columns taken from the other calculation, and those of which the project says `none` for every row."""
    mapping = fields.mapping("columns", required=bool(given.columns))
    entries = hold_columns(given, mapping, fields) if mapping is not None else {}
    names = Fields(mapping, [key.text for key, _ in mapping.entries], "`columns`", fields.problems) if mapping else None
    found: list[tuple[Given, Name]] = []
    same: list[GivenValue] = []
    for column in given.columns:
        scalar = names.scalar(column.name, required=True) if names is not None and column.name in entries else None
        if scalar is None:
            continue
        if scalar.text == "none" and column.if_none is not None:
            worth = None if column.if_none == "absent" else column.if_none
            same.append(GivenValue(column, worth, ValueOrigin("none", ""), scalar.span))
        elif column.kind != "value":
            fields.problems.add("not-a-link", scalar.span, f"`{column.name}` cannot be linked",
                                expected="rows with the bars written out", found="a link")  # fmt: skip
        else:
            found.append((column, Name(scalar.text, scalar.span)))
    return tuple(found), tuple(same)


def hold_columns(given: Given, mapping: Mapping, fields: Fields, *more: str) -> dict[str, Scalar]:
    """Return the keys of `columns` that a set takes; adds `unknown-given` and `missing-value`, each once."""
    problems = fields.problems
    wanted = (*more, *(column.name for column in given.columns))
    found: dict[str, Scalar] = {}
    meant: set[str] = set()
    for key, _ in mapping.entries:
        if key.text in wanted:
            found[key.text] = key
            continue
        problems.add("unknown-given", key.span, f"`{given.name}` has no column `{key.text[:40]}`",
                     expected=listed(wanted), found=key.text[:40], hint=problems.near(key.text, wanted))  # fmt: skip
        meant.update(problems.close(key.text, wanted))
    missing = [c.name for c in given.columns if c.name not in found and c.name not in meant and not c.elsewhere()]
    if missing:
        problems.add("missing-value", mapping.span.part(0, 1), f"`{given.name}` needs more columns",
                     expected=", ".join(missing), found="not under `columns`")  # fmt: skip
    return found
