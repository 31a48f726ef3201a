"""The change report: what differs from the issue before, calculation by calculation, and what does not.

A comparison with the revisions that follow from it in, blocks out; and what the cover says of it.
"""

from __future__ import annotations

from calcreport.calculate.model import Worked, WorkedCheck, WorkedGives, WorkedProject, WorkedRequire, split_path
from calcreport.core.record import record
from calcreport.history.model import Change, Comparison, Difference, Entry, Identity, Place, Revisions
from calcreport.report.deltas import NO_DELTAS, Deltas, Shown, deltas
from calcreport.report.display import row_words, show_symbol
from calcreport.report.fronts import counted, date_words
from calcreport.report.model import (
    Block,
    Column,
    Emphasis,
    Heading,
    Paragraph,
    Reference,
    Strong,
    Table,
    TableRow,
    Words,
)
from calcreport.report.moved import (
    count_words,
    flip_words,
    headline,
    kind_words,
    listed,
    move_words,
    package_words,
    value_words,
)


@record
class Changes:
    """What has changed since the issue before."""

    comparison: Comparison
    revisions: Revisions
    project: WorkedProject
    #: the lines of every calculation with where they stand
    lines: dict[str, tuple[tuple[Entry, Place], ...]]
    marks: Shown

    def deltas(self, mark: str) -> Deltas:
        """Return the lines of a calculation that carry a mark."""
        now, since = self.revisions.now.number, self.revisions.since[mark]
        if self.marks == "none" or not since:
            return NO_DELTAS
        found = next(d for d in self.comparison.differences if d.second is not None and d.second.mark == mark)
        shown = {one: number for one, number in since.items() if self.marks == "all" or number == now}
        order = tuple(dict.fromkeys((*sorted(set(since.values()) - {now}, key=_numbered), now)))
        places = {entry.identity: place for entry, place in self.lines[mark]}
        return deltas(shown, places, _formulas(found), now, order, _candidates(found), found.other("closures"))


def _numbered(number: str) -> tuple[int, str]:
    """Order revisions by their number where they have one, else as letters."""
    return (int(number), "") if number.isdecimal() and len(number) < 9 else (0, number)


def _formulas(difference: Difference) -> frozenset[Identity]:
    """Return the lines that go by another formula, case or source now."""
    told = {"formula", "case", "citation"}
    return frozenset(
        change.second.identity for change in difference.changes if change.second is not None
        and (change.first is None or told & set(change.differs))
    )  # fmt: skip


def _candidates(difference: Difference) -> tuple[int, ...]:
    """Return the rows of the table of candidates that were not there before as they are, counted from 0."""
    first, second = difference.first, difference.second
    if first is None or second is None or first.selection == second.selection:
        return ()
    # the candidate used and what the sheet says of it stand before the rows
    rows = second.selection[2:]
    used = first.selection[:1] != second.selection[:1]
    return tuple(place for place, row in enumerate(rows) if used or row not in first.selection[2:])


def change_blocks(changes: Changes) -> tuple[Block, ...]:
    """Return the change report."""
    comparison, now = changes.comparison, changes.revisions.now.number
    first = comparison.first
    opening: Words = (
        f"Held against issue {first.revision} of {date_words(first.revision_date)}, {first.status}. ",
        Strong(headline(comparison)),
    )
    # a revision that is not in the record yet is no issue
    unissued = "These changes have not been issued; they are marked as " if now.endswith("+") else ""
    blocks: list[Block] = [Paragraph(opening, "plain")]
    blocks += [Paragraph((f"{unissued}{now}.",), "caution")] if unissued else []
    blocks += [Paragraph((_key(changes),), "note")] if changes.marks != "none" else []
    facts = [f"{words[:1].upper()}{words[1:]}." for words in package_words(comparison)]
    if facts:
        blocks += [Heading("The package", 2), *(Paragraph((words,), "plain") for words in facts)]
    blocks += _overview(comparison)
    for difference in comparison.changed:
        blocks += _calculation(difference, changes)
    blocks += _same(comparison)
    return tuple(blocks)


def _key(changes: Changes) -> str:
    """Say how changes are marked on the sheets."""
    words = (
        "On the sheets a triangle in the left margin carries the revision a line last changed in; a cloud runs round "
        f"the lines of revision {changes.revisions.now.number}."
    )
    older = " Lines that last changed in an earlier revision keep its triangle without a cloud."
    return words + older if changes.marks == "all" else words


def _overview(comparison: Comparison) -> list[Block]:
    """Return a row a calculation that changed, came or went: what needs eyes, and how many lines differ."""
    rows: list[TableRow] = []
    for difference in (*comparison.changed, *comparison.added, *comparison.removed):
        first, second = difference.first, difference.second
        account = second or first
        assert account is not None
        mark: Words = (Reference(account.mark, f"{account.mark}-1"),) if second is not None else (account.mark,)
        if first is None:
            how = f"added; {account.verdict}"
        elif second is None:
            how = "removed"
        else:
            how = "; ".join((*flip_words(difference), count_words(difference)))
        loud = second is not None and difference.verdict_flipped and second.verdict != "OK"
        emphasis: Emphasis = "loud" if loud else ""
        rows.append(TableRow((mark, (account.title,), (f"{how[:1].upper()}{how[1:]}.",)), emphasis))
    if not rows:
        return []
    columns = (Column(("Mark",)), Column(("Calculation",), stretch=1.0), Column(("What differs",), stretch=2.0))
    return [Heading("Calculations affected", 2), Table(columns, tuple(rows))]


def _calculation(difference: Difference, changes: Changes) -> list[Block]:
    """Return a row a line that differs, in the order of the sheets."""
    second, rows, now = difference.second, listed(difference), changes.revisions.now.number
    assert second is not None
    if not rows:
        return []
    columns = (
        Column(("Line",)),
        Column(("Value or check",), stretch=1.0),
        Column((f"Issue {changes.comparison.first.revision}",), "right"),
        Column((f"Issue {now}" if not now.endswith("+") else "Now",), "right"),
        Column(("Change",), "right"),
    )
    worked = next(w for w in changes.project.calculations if w.calculation.mark == second.mark)
    places = {entry.identity: place for entry, place in changes.lines[second.mark]}
    table = Table(columns, tuple(_row(worked, places, change) for change in rows))
    return [Heading(f"{second.mark}  {second.title}", 3), table]


def _row(worked: Worked, places: dict[Identity, Place], change: Change) -> TableRow:
    first, second, mark = change.first, change.second, worked.calculation.mark
    line: Words = ("–",)
    if second is not None and second.line:
        line = (Reference(f"{mark}.{second.line}", f"{mark}.{second.line}"),)
    name = [*(_name(worked, places[second.identity], second) if second is not None else (kind_words(change.entry),))]
    if first is not None and second is not None:
        name += [f"; {first.formula}, now {second.formula}"] if "formula" in change.differs else []
        if "citation" in change.differs:
            name.append(f"; {first.cite or 'no source'}, now {second.cite or 'no source'}")
    loud = second is not None and "verdict" in change.differs and second.verdict in ("NG", "not evaluated")
    cells: tuple[Words, ...] = (
        line, tuple(name), (value_words(first) if first else "–",), (value_words(second) if second else "–",),
        (move_words(change),),
    )  # fmt: skip
    return TableRow(cells, "loud" if loud else "")


def _name(worked: Worked, place: Place, entry: Entry) -> Words:
    """Return `combination 2: M_0  moment at the support`: the rows a value is of, its symbol, what it is."""
    if isinstance(place, WorkedRequire):
        return (kind_words(entry),)
    steps, path = split_path(entry.path)
    rows = [f"{name} {row_words(row)}" for name, row in steps]
    if isinstance(place, WorkedCheck):
        return (f"{', '.join(rows)}: " if rows else "", f"check {path}")
    slot = place.line.slot if isinstance(place, WorkedGives) else place[0]
    symbol = worked.plan.slots[slot].symbol
    stem = path.rpartition(".")[0]
    of = [*rows, stem] if stem else rows
    return (f"{', '.join(of)}: " if of else "", show_symbol(symbol), f"  {symbol.says}")


def _same(comparison: Comparison) -> list[Block]:
    """Say what does not differ, and that every line was looked at."""
    same = comparison.unchanged
    if not same:
        return []
    lines = sum(d.equal for d in same)
    words: Words = (
        f"In these calculations every printed value of {counted(lines, 'line')} was compared and found equal, to the "
        "last bit before rounding and as printed; each keeps the revision it last changed in: ",
        ", ".join(f"{d.mark} ({d.equal})" for d in same) + ".",
    )
    return [Heading("Calculations not affected", 2), Paragraph(words, "plain")]


def cover_words(changes: Changes | None) -> tuple[Words, ...]:
    """Return what the cover says of the changes."""
    if changes is None:
        return ()
    comparison = changes.comparison
    return ((f"Since issue {comparison.first.revision}: {headline(comparison)}",),)
