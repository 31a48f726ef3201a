"""What a method hands back: its outputs, the sets it makes, and the sums that prove them. All in base units."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any, TypeAlias

#: by name: a number; a word; the row names of a set; for numbers and words by row a tuple, for those by pairs of rows
#: of two sets a tuple of tuples
Handed: TypeAlias = "dict[str, Any]"
#: rows of the sets an output or a made set belongs to, in the order the signature names them
Key: TypeAlias = tuple[int, ...]
#: counts work against a bound; raises where there is too much
Spend: TypeAlias = Callable[[int], None]


class NoResult(ArithmeticError):
    """The method has no result for what it was handed; the words say why."""


@dataclass(frozen=True, slots=True)
class Proof:
    """A sum that must come to nothing, and the largest of its terms."""

    residual: float
    of: float


@dataclass(frozen=True, slots=True)
class Result:
    """The result of one method; proofs in the order its signature names them."""

    outputs: dict[str, float]
    proofs: tuple[Proof, ...]
    #: row names of the sets it makes, by the rows they lie inside
    sets: dict[str, dict[Key, tuple[str, ...]]] = field(default_factory=dict)
    #: outputs over rows
    by_row: dict[str, dict[Key, float]] = field(default_factory=dict)


def rows_of(handed: Handed, name: str) -> tuple[Any, ...]:
    """Return the row names of a set, or an input by row; nothing where the set is left out."""
    found = handed.get(name, ())
    assert isinstance(found, tuple)
    return found


def number(handed: Handed, name: str) -> float:
    """Return an input that is one number."""
    found = handed[name]
    assert isinstance(found, float)
    return found


def numbers(handed: Handed, name: str) -> tuple[float, ...]:
    """Return an input that has a number for every row."""
    found = handed[name]
    assert isinstance(found, tuple)
    return found
