"""A schedule taken from the drawings against the calculations: what differs, in both directions.

A table, worked calculations and what the columns hold in, differences out. Quantities are compared exactly, whatever
their units; bars by what they are, however they are spelled. What cannot be read is a problem, never an agreement.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator
from fractions import Fraction

from calcreport.calculate.model import BarCallout, Key, Member
from calcreport.core.problems import Problems
from calcreport.core.quantity import Amount, read_in_unit
from calcreport.core.record import made, record, state
from calcreport.core.source import Span
from calcreport.core.units import LENGTH, Unit
from calcreport.read.bars import read_callout
from calcreport.read.columns import Heading, Table, Use, take, with_unit
from calcreport.read.library import Library
from calcreport.read.nodes import Scalar
from calcreport.read.sheets import SheetRow
from calcreport.report.members import Taken, callouts, exact, sizes, taken, typed

_TIMES = re.compile(r"\s*(?:[xX×]|\bby\b)\s*")
_UNIT_BEHIND = re.compile(r"[0-9./ -]*[0-9.]\s*([A-Za-z'\"].*)")


@record
class Difference:
    """One value that differs."""

    mark: str
    #: 'size', 'bars', or the given value's name
    what: str
    drawings: str
    calculations: str
    #: where it stands in the schedule
    place: str


@record
class Columns:
    """What the columns of the schedule hold: the mark, and by name what is compared."""

    mark: Use
    #: columns named on the command line, for every calculation
    named: dict[str, Use]
    #: columns of the project's own schedules, by template
    planned: dict[str, dict[str, Use]]


@state
class Reconciler:
    """Compares one table with the calculations of a project."""

    table: Table
    columns: Columns
    library: Library
    #: unit of lengths without one, '' for none
    lengths: str
    problems: Problems
    differences: list[Difference] = made(factory=list)
    #: marks and values compared
    marks: int = 0
    values: int = 0
    used: set[int] = made(factory=set)
    #: names asked for that some calculation has
    known: set[str] = made(factory=set)

    def rows(self, hidden: str) -> dict[str, SheetRow]:
        """Return the rows by mark; a mark that stands twice, or a row that is hidden, is a problem."""
        found: dict[str, SheetRow] = {}
        for row in self.table.rows:
            if row.hidden and hidden == "skip":
                continue
            if row.hidden and hidden != "read":
                self.problems.add("hidden-rows", row.cell(0).span, f"row {row.number} is hidden",
                                  expected="`--hidden skip` or `--hidden read`", found="a hidden row",
                                  hint="a filter hides rows too")  # fmt: skip
                continue
            mark = take(self.columns.mark, row, self.table, self.problems)
            if not isinstance(mark, Scalar):
                continue
            if mark.text in found:
                first = row_mark(self.columns.mark, found[mark.text])
                self.problems.add("given-twice", mark.span, f"the mark `{mark.text[:40]}` stands twice",
                                  expected="every mark once", found=mark.text[:40],
                                  related=((first, "first here"),))  # fmt: skip
                continue
            found[mark.text] = row
        return found

    def compare(self, member: Member, row: SheetRow) -> None:
        """Compare one member with its row."""
        self.marks += 1
        names = names_of(member)
        done: set[tuple[int, Key]] = set()
        for name, one in names.items():
            use = self.use(member, name, one)
            # a value asked for by a short name too is compared once
            if use is not None and (one.slot, one.key) not in done:
                done.add((one.slot, one.key))
                self.value(member, one, use, row)
        for name, compared in (("size", self.size), ("bars", self.bars)):
            use = self.columns.named.get(name) or self.headed(name)
            if use is not None:
                self.known.add(name)
                compared(member, use, row)
        self.known |= names.keys()

    def use(self, member: Member, name: str, one: Taken) -> Use | None:
        """Return the column of a given value: as told, as the project's own schedule has it, or by its heading."""
        planned = self.columns.planned.get(member.worked.calculation.template.name, {})
        told = self.columns.named.get(name) or planned.get(name)
        if told is not None or name != one.path:
            return told
        return self.headed(one.path) or (self.headed(one.value.given.says) if "." not in one.path else None)

    def headed(self, name: str) -> Use | None:
        """Return the one column whose heading is a name, whatever its capitals."""
        exactly = [h for h in self.table.headings if h.stem == name]
        found = exactly or [h for h in self.table.headings if len(name) > 2 and h.stem.casefold() == name.casefold()]
        return Use((found[0],), found[0].unit, None, found[0].cell.span) if len(found) == 1 else None

    def value(self, member: Member, one: Taken, use: Use, row: SheetRow) -> None:
        """Compare a given value with its cell."""
        shown = self.cell(use, row)
        if shown is None:
            return
        text, span, place = shown
        given, own = one.value.given, one.value.value
        self.values += 1
        if own is None or one.value.origin.kind == "none":
            self.tell(member, one.path, text in ("", "none"), text, "none", place)
        elif isinstance(own, BarCallout):
            drawn = self.callout(member, text, span, use.unit, given.kind == "spaced bars") if text else None
            if drawn is not None or not text:
                self.tell(member, one.path, drawn is not None and meaning(drawn) == meaning(own), text, own.text, place)
        elif given.symbol is not None and given.symbol.unit is not None:
            unit = use.unit or (self.lengths if given.symbol.unit.dimension == LENGTH else "")
            amount = read_in_unit(with_unit(text, unit), span, self.problems, given.symbol.unit) if text else None
            if amount is not None or not text:
                agrees = amount is not None and amount.value == exact(one, member.worked)
                self.tell(member, one.path, agrees, amount.text if amount else text, typed(one, member.worked), place)
        else:
            word = str(member.worked.values.get(one.slot, one.key))
            self.tell(member, one.path, text.casefold() == word.casefold(), text, word, place)

    def size(self, member: Member, use: Use, row: SheetRow) -> None:
        """Compare `16 x 28 in` with the lengths of the result line, in their order."""
        own, shown = sizes(member), self.cell(use, row)
        if shown is None or not own:
            return
        text, span, place = shown
        symbol = own[0].value.given.symbol
        assert symbol is not None and symbol.unit is not None
        drawn = list(self.lengths_in(text, span, use.unit, symbol.unit))
        if text and None in drawn:
            return
        self.values += 1
        agrees = [amount.value for amount in drawn if amount] == [exact(one, member.worked) for one in own]
        self.tell(member, "size", agrees, text, " × ".join(typed(one, member.worked) for one in own), place)

    def lengths_in(self, text: str, span: Span, unit: str, like: Unit) -> Iterator[Amount | None]:
        """Read lengths apart by `x`; a unit that stands behind the last is that of all."""
        pieces = _TIMES.split(text)
        behind = _UNIT_BEHIND.fullmatch(pieces[-1])
        unit = unit or (behind[1] if behind and len(pieces) > 1 else self.lengths)
        for piece in pieces if text else ():
            yield read_in_unit(with_unit(piece, unit), span, self.problems, like)

    def bars(self, member: Member, use: Use, row: SheetRow) -> None:
        """Compare `first: 4-#9; stirrup: #4 @ 8 in` with all bars of the calculation, whatever their order."""
        own, shown = callouts(member), self.cell(use, row)
        if shown is None or not own:
            return
        text, span, place = shown
        pieces = [piece.rpartition(":")[2].strip() for piece in re.split(r"[;,]", text) if piece.strip()]
        drawn = [self.callout(member, piece, span, use.unit, "@" in piece) for piece in pieces]
        if None in drawn:
            return
        self.values += 1
        agrees = Counter(meaning(one) for one in drawn if one) == Counter(meaning(one) for _, one in own)
        self.tell(member, "bars", agrees, text, "; ".join(f"{label}: {one.text}" for label, one in own), place)

    def cell(self, use: Use, row: SheetRow) -> tuple[str, Span, str] | None:
        """Return text, span and place of a cell, '' for an empty one; None after adding a problem."""
        heading = use.pieces[0]
        if len(use.pieces) == 1 and isinstance(heading, Heading):
            self.used.add(heading.index)
            found = row.cell(heading.index)
            if found.is_empty:
                return "", found.span, found.span.place
        # a number stays as it is drawn until it is known what it is
        scalar = take(Use(use.pieces, "", None, use.span), row, self.table, self.problems)
        self.used |= {piece.index for piece in use.pieces if isinstance(piece, Heading)}
        return (scalar.text, scalar.span, scalar.span.place) if isinstance(scalar, Scalar) else None

    def callout(self, member: Member, text: str, span: Span, unit: str, spaced: bool) -> BarCallout | None:
        template = member.worked.calculation.template
        table = self.library.bar_table(template.name, template.system)
        if table is None:
            return None
        whole = Span(span.source, span.start, span.end, True)
        full = with_unit(text, unit or self.lengths)
        return read_callout(full, whole, table, spaced=spaced, problems=self.problems)

    def tell(self, member: Member, what: str, agrees: bool, drawn: str, own: str, place: str) -> None:
        if not agrees:
            self.differences.append(Difference(member.mark, what, drawn or "nothing", own, place))


def names_of(member: Member) -> dict[str, Taken]:
    """Return the given values of a calculation by all names they may be asked for by.

    Where a set has bars once a row, `layer.first` is short for `layer.first.steel`; where it has them once, `layer` is.
    """
    found = list(taken(member))
    names = {one.path: one for one in found}
    bars = [one for one in found if "." in one.path and isinstance(one.value.value, BarCallout)]
    for depth in (1, 0):
        stems = Counter(".".join(one.path.split(".")[: depth + 1]) for one in bars)
        for one in bars:
            stem = ".".join(one.path.split(".")[: depth + 1])
            if stems[stem] == 1:
                names.setdefault(stem, one)
    return names


def meaning(callout: BarCallout) -> tuple[frozenset[tuple[str, int]], Fraction | None]:
    """Return what a callout is: how many bars of each size, at which spacing."""
    counts: Counter[str] = Counter()
    for group in callout.groups:
        counts[group.size] += group.count
    return frozenset(counts.items()), callout.spacing.value if callout.spacing else None


def row_mark(mark: Use, row: SheetRow) -> Span:
    """Return the place of a row's mark."""
    index = next((piece.index for piece in mark.pieces if isinstance(piece, Heading)), 0)
    return row.cell(index).span
