"""The candidates of a calculation: joint choices in the engineer's order of preference, and the one that is pinned.

Nodes under `choose` and `pinned` in, `Candidate` records out. Which of them serves is for the calculation to find.
A list among the candidates holds those of one preference.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TypeAlias

from calcreport.core.problems import listed
from calcreport.core.quantity import Amount
from calcreport.core.record import record
from calcreport.core.source import Span
from calcreport.read.chosen_cells import cells_of, is_cells, rows_with
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import BarCallout, Candidate, Given, GivenPairs, GivenRows, GivenValue, LinkedValue
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence
from calcreport.read.values import ValueReader, is_complete

#: candidates of one calculation at most: each is worked in full
MOST_CANDIDATES = 60
#: what a value is, however it was spelled
_Meaning: TypeAlias = "str | Fraction | tuple[object, ...] | None"


@record
class Choice:
    """What a calculation says of its candidates."""

    candidates: tuple[Candidate, ...]
    #: place of the pinned one, -1 for none
    pinned: int
    #: names of the values chosen
    names: frozenset[str]
    #: names of sets whose rows are given, and some of their cells chosen
    by_cells: frozenset[str] = frozenset()


NO_CHOICE = Choice((), -1, frozenset())


def read_choice(fields: Fields, givens: tuple[Given, ...], reader: ValueReader, given: Mapping, least: bool) -> Choice:
    """Return the candidates of a calculation, fewer of them where problems were added.

    `given` holds the rows that candidates choose cells of; `least` tells whether the template says what is to be least.
    """
    problems, node = reader.problems, fields.node_of("choose")
    if node is None:
        if fields.has("pinned"):
            at = next(key.span for key, _ in fields.node.entries if key.text == "pinned")
            problems.add("unknown-key", at, "`pinned` stands without candidates",
                         expected="`choose: [{…}, …]` beside it", found="no `choose`")  # fmt: skip
        return NO_CHOICE
    items = [one for place, item in enumerate(fields.items("choose")) for one in _of_one(place, item)]
    if not items or len(items) > MOST_CANDIDATES:
        if isinstance(node, Sequence):
            problems.add("row-count", node.span.part(0, 1), f"`choose` holds {len(items)} candidates",
                         expected=f"1 to {MOST_CANDIDATES}", found=f"{len(items)}")  # fmt: skip
        return NO_CHOICE
    shared = next((item for item in fields.items("choose") if isinstance(item, Sequence)), None)
    if shared is not None and not least:
        problems.add("wrong-shape", shared.span.part(0, 1), "nothing tells candidates of one preference apart",
                     expected="candidates one after the other, in order of preference", found="a list among them",
                     hint="a list needs a template that says what is to be `least`, and no members")  # fmt: skip
    mappings = [(place, as_mapping(item, "a candidate", problems)) for place, item in items]
    named = [entry for _, mapping in mappings if mapping is not None for entry in mapping.entries]
    names = {key.text for key, _ in named}
    chosen = tuple(one for one in givens if one.name in names)
    cells = tuple(dict.fromkeys(cell for key, value in named for cell, _ in cells_of(key.text, value)))
    table = _Table(chosen, givens, cells, given, reader)
    found: list[Candidate] = []
    for number, (place, mapping) in enumerate(mappings, 1):
        if mapping is not None:
            candidate = table.candidate(f"candidate {number}", mapping, place)
            found += [candidate] if candidate is not None else []
    pinned = _pinned(fields, found, table) if len(found) == len(items) else -1
    by_cells = frozenset(key.text for key, value in named if is_cells(value))
    return Choice(tuple(found), pinned, frozenset(names), by_cells)


def _of_one(place: int, item: Node) -> list[tuple[int, Node]]:
    return [(place, one) for one in item.items] if isinstance(item, Sequence) else [(place, item)]


@record
class _Table:
    """What every candidate of a calculation is read against."""

    chosen: tuple[Given, ...]
    givens: tuple[Given, ...]
    #: names of the cells that any candidate chooses, in the order first met
    cells: tuple[str, ...]
    given: Mapping
    reader: ValueReader

    def candidate(self, what: str, node: Mapping, preference: int) -> Candidate | None:
        """Read one candidate, which names every value and every cell any other names."""
        problems, known = self.reader.problems, [given.name for given in self.givens]
        before = problems.met
        own: list[tuple[Scalar, Node]] = []
        texts: dict[str, str] = {}
        for key, value in node.entries:
            if key.text not in known:
                problems.add("unknown-given", key.span, f"{what} chooses `{key.text[:40]}`, which nobody asks for",
                             expected=listed(known), found=key.text[:40],
                             hint=problems.near(key.text, known))  # fmt: skip
            elif isinstance(value, Mapping) and is_cells(value):
                rows = rows_with(key, value, self.given.get(key.text), what, problems)
                own += [(key, rows)] if rows is not None else []
                texts.update(cells_of(key.text, value))
            else:
                own.append((key, value))
        missing = [cell for cell in self.cells if cell not in texts]
        if missing and problems.met == before:
            problems.add("missing-value", node.span.part(0, 1), f"{what} lacks a cell that another candidate chooses",
                         expected=listed(missing), found="not there")  # fmt: skip
        values = self.reader.read(self.chosen, Mapping(tuple(own), node.span), what) if problems.met == before else ()
        if problems.met > before or not is_complete(values, self.chosen):
            return None
        by_cells = {key.text for key, value in node.entries if is_cells(value)}
        whole = {value.given.name: _text(value) for value in values if value.given.name not in by_cells}
        return Candidate(values, (*whole.items(), *((cell, texts[cell]) for cell in self.cells)), preference, node.span)


def _pinned(fields: Fields, candidates: list[Candidate], table: _Table) -> int:
    """Return the place of the pinned candidate, -1 where none is pinned or a problem was added."""
    if not fields.has("pinned"):
        return -1
    node, reader = fields.mapping("pinned", required=True), table.reader
    found = table.candidate("`pinned`", node, -1) if node is not None else None
    if node is None or found is None:
        return -1
    meant = [_meaning(value) for value in found.values]
    for place, candidate in enumerate(candidates):
        if [_meaning(value) for value in candidate.values] == meant:
            return place
    reader.problems.add("not-a-word", node.span.part(0, 1), "the pinned selection is none of the candidates",
                        expected="one of those under `choose`", found=" and ".join(text for _, text in found.named),
                        related=((_place(fields.node_of("choose")), "the candidates"),),
                        hint="put it back among them, or pin another and say so on the next issue")  # fmt: skip
    return -1


def _place(node: Node | None) -> Span:
    assert node is not None
    return node.span.part(0, 1)


def _text(value: GivenValue | GivenRows | GivenPairs) -> str:
    """Return a given value as it was typed, rows after one another."""
    match value:
        case GivenValue(_, handed):
            return _typed(handed)
        case GivenRows(_, names, cells):
            rows = (", ".join(_text(cell) for cell in row) for row in cells)
            return "; ".join(f"{name}: {row}" if len(names) > 1 else row for name, row in zip(names, rows, strict=True))
        case GivenPairs(_, pairs):
            return "; ".join(f"{' '.join(names)}: {_text(cell)}" for names, cell in pairs)


def _typed(handed: object) -> str:
    match handed:
        case Amount(text=text) | BarCallout(text=text):
            return text
        case LinkedValue(mark, path):
            return f"{mark}.{path}"
        case None:
            return "none"
        case _:
            return str(handed)


def _meaning(value: GivenValue | GivenRows | GivenPairs) -> _Meaning:
    match value:
        case GivenValue(_, Amount(value=amount)):
            return amount
        case GivenValue(_, BarCallout(groups, spacing)):
            sizes = tuple(sorted((group.size, group.count) for group in groups))
            return (sizes, spacing.value if spacing is not None else None)
        case GivenValue(_, handed):
            return _typed(handed)
        case GivenRows(_, names, cells):
            return (names, tuple(tuple(_meaning(cell) for cell in row) for row in cells))
        case GivenPairs(_, pairs):
            return tuple((names, _meaning(cell)) for names, cell in pairs)
