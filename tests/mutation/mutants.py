"""Every mutant of a template: each slip of each place of its own file, found in whatever system and year shows it.

The shelf and a template's name in, mutants out, in page order. Two slips that read alike in one formula are numbered.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from calcreport.core.record import replace

from .formulas import Change, formula_changes
from .places import Key, Place, places
from .shelf import Shelf
from .structure import record_changes
from .symbols import Names, names_of, symbol_changes
from .trial import Mutant


def mutants_of(name: str, shelf: Shelf) -> list[Mutant]:
    """Return the mutants of one template's own lines; a part's lines belong to the part."""
    found: dict[tuple[Key, str], Mutant] = {}
    for variant in shelf.of(name):
        own, names = variant.template.source.name, names_of(variant.template.body)
        for place in places(variant.template.body):
            # the cells of a table beside the template are rules of its own too
            if place.key[0] == own or place.key[0].endswith(".csv"):
                for mutant in _at(place, name, names):
                    found.setdefault((mutant.key, mutant.says), mutant)
    return _numbered(sorted(found.values(), key=lambda mutant: mutant.key[1]))


def _at(place: Place, name: str, names: Names) -> Iterator[Mutant]:
    for change, renames in _changes(place, names):
        yield Mutant(
            name,
            place.key,
            place.line,
            place.formula,
            change.says,
            change.apply,
            renames,
            place.use == "cited",
            start=place.start,
        )


def _changes(place: Place, names: Names) -> Iterator[tuple[Change, bool]]:
    if place.use == "record":
        yield from ((change, False) for change in record_changes(place.node))
    else:
        yield from ((change, False) for change in formula_changes(place.node, whole=place.whole, use=place.use))
    yield from ((change, True) for change in symbol_changes(place.node, names, use=place.use))


def _numbered(mutants: list[Mutant]) -> list[Mutant]:
    """Give a number to every slip after the first that has the same words in the same formula of the same line."""
    seen: Counter[tuple[str, str, str]] = Counter()
    found: list[Mutant] = []
    for mutant in mutants:
        told = mutant.line, mutant.formula, mutant.says
        seen[told] += 1
        number = seen[told]
        says = mutant.says if number == 1 else f"{mutant.says} ({number})"
        found.append(replace(mutant, says=says))
    return found
