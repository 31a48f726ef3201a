"""The candidates of a calculation: joint choices in the engineer's order of preference, and the one that is pinned.

Nodes under `choose` and `pinned` in, `Candidate` records out. Which of them serves is for the calculation to find.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TypeAlias

from calcreport.core.problems import listed
from calcreport.core.quantity import Amount
from calcreport.core.record import record
from calcreport.core.source import Span
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import BarCallout, Candidate, Given, GivenPairs, GivenRows, GivenValue, LinkedValue
from calcreport.read.nodes import Mapping, Node, Sequence
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
    #: names of the values chosen, in the template's order
    names: frozenset[str]


NO_CHOICE = Choice((), -1, frozenset())


def read_choice(fields: Fields, givens: tuple[Given, ...], reader: ValueReader) -> Choice:
    """Return the candidates of a calculation, fewer of them where problems were added."""
    problems, node = reader.problems, fields.node_of("choose")
    if node is None:
        if fields.has("pinned"):
            at = next(key.span for key, _ in fields.node.entries if key.text == "pinned")
            problems.add("unknown-key", at, "`pinned` stands without candidates",
                         expected="`choose: [{…}, …]` beside it", found="no `choose`")  # fmt: skip
        return NO_CHOICE
    items = fields.items("choose")
    if not items or len(items) > MOST_CANDIDATES:
        if isinstance(node, Sequence):
            problems.add("row-count", node.span.part(0, 1), f"`choose` holds {len(items)} candidates",
                         expected=f"1 to {MOST_CANDIDATES}", found=f"{len(items)}")  # fmt: skip
        return NO_CHOICE
    mappings = [as_mapping(item, "a candidate", problems) for item in items]
    names = {key.text for mapping in mappings if mapping is not None for key, _ in mapping.entries}
    chosen = tuple(given for given in givens if given.name in names)
    found: list[Candidate] = []
    for number, mapping in enumerate(mappings, 1):
        if mapping is not None:
            candidate = _candidate(f"candidate {number}", mapping, chosen, givens, reader)
            found += [candidate] if candidate is not None else []
    pinned = _pinned(fields, found, chosen, givens, reader) if len(found) == len(items) else -1
    return Choice(tuple(found), pinned, frozenset(names))


def _candidate(
    what: str, node: Mapping, chosen: tuple[Given, ...], givens: tuple[Given, ...], reader: ValueReader
) -> Candidate | None:
    """Read one candidate, which names every value any other names."""
    known = [given.name for given in givens]
    before = reader.problems.met
    for key, _ in node.entries:
        if key.text not in known:
            reader.problems.add("unknown-given", key.span, f"{what} chooses `{key.text[:40]}`, which nobody asks for",
                                expected=listed(known), found=key.text[:40],
                                hint=reader.problems.near(key.text, known))  # fmt: skip
    own = Mapping(tuple(entry for entry in node.entries if entry[0].text in known), node.span)
    values = reader.read(chosen, own, what)
    if reader.problems.met > before or not is_complete(values, chosen):
        return None
    return Candidate(values, tuple(_text(value) for value in values), node.span)


def _pinned(
    fields: Fields,
    candidates: list[Candidate],
    chosen: tuple[Given, ...],
    givens: tuple[Given, ...],
    reader: ValueReader,
) -> int:
    """Return the place of the pinned candidate, -1 where none is pinned or a problem was added."""
    if not fields.has("pinned"):
        return -1
    node = fields.mapping("pinned", required=True)
    found = _candidate("`pinned`", node, chosen, givens, reader) if node is not None else None
    if node is None or found is None:
        return -1
    meant = [_meaning(value) for value in found.values]
    for place, candidate in enumerate(candidates):
        if [_meaning(value) for value in candidate.values] == meant:
            return place
    reader.problems.add("not-a-word", node.span.part(0, 1), "the pinned selection is none of the candidates",
                        expected="one of those under `choose`", found=" and ".join(found.texts),
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
