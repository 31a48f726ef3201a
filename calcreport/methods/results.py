"""What a method hands back: its outputs, the sets it makes, and the sums that prove them. All in base units."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import TypeAlias

#: number by name, or numbers by row for a row number; a word; the rows of a set handed are their number
Handed: TypeAlias = "dict[str, float | str | tuple[float, ...]]"
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
class MadeSet:
    """Rows a method makes, with their columns."""

    names: tuple[str, ...]
    columns: dict[str, tuple[float, ...]]


@dataclass(frozen=True, slots=True)
class Result:
    """The result of one method; proofs in the order its signature names them."""

    outputs: dict[str, float]
    proofs: tuple[Proof, ...]
    sets: dict[str, MadeSet] = field(default_factory=dict)


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
