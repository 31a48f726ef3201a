"""Results of pure steps, kept from one run to the next beside what they were made from.

A step names itself and its inputs; where nothing among the inputs has changed, the earlier result is handed out again.
`FRESH` keeps nothing: one build is the plain case of many. Knows no steps; what is worth keeping is decided where it
is made, and how long in `session`.
"""

from __future__ import annotations

from collections.abc import Callable, Hashable
from fractions import Fraction
from typing import TypeVar

T = TypeVar("T")

#: kinds of values that are the same where they are equal; any other object is the same only as itself
_PLAIN = frozenset((str, int, bool, Fraction, bytes, type(None)))


class Fresh:
    """Makes everything anew."""

    #: whether a result may be asked for again
    keeps = False

    def of(self, step: str, name: Hashable, inputs: tuple[object, ...], make: Callable[[], T]) -> T:
        """Return what `make` gives; `inputs` must be all that it rests on."""
        return make()

    def last(self, step: str) -> object | None:
        """Return what `put` was given last under this name."""
        return None

    def put(self, step: str, result: object) -> None:
        """Keep one result whose validity the step judges by itself."""


FRESH = Fresh()


class Kept(Fresh):
    """Keeps the last result of every step by its name; None is never kept, so that a step may fail every time."""

    keeps = True

    def __init__(self) -> None:
        self._results: dict[tuple[str, Hashable], tuple[tuple[object, ...], object]] = {}
        self._asked: set[tuple[str, Hashable]] = set()
        self._last: dict[str, object] = {}
        #: steps whose results were made in this run, with their names
        self.made: list[tuple[str, Hashable]] = []

    def begin(self) -> None:
        """Begin a run."""
        self._asked.clear()
        self.made.clear()

    def end(self) -> None:
        """End a run that came to its end: what it did not ask for is given up."""
        self._results = {key: found for key, found in self._results.items() if key in self._asked}

    def of(self, step: str, name: Hashable, inputs: tuple[object, ...], make: Callable[[], T]) -> T:
        """Return the result kept under a step and name if its inputs are the same, else make and keep it."""
        key = step, name
        self._asked.add(key)
        found = self._results.get(key)
        if found is not None and same(found[0], inputs):
            return found[1]  # type: ignore[return-value]
        # a step that fails half way leaves no earlier result behind
        self._results.pop(key, None)
        made = make()
        self.made.append(key)
        if made is not None:
            self._results[key] = inputs, made
        return made

    def last(self, step: str) -> object | None:
        """Return what `put` was given last under this name."""
        return self._last.get(step)

    def put(self, step: str, result: object) -> None:
        """Keep one result whose validity the step judges by itself."""
        self._last[step] = result


def same(one: object, other: object) -> bool:
    """Tell whether two inputs are one: plain values by value, tuples by their entries, all else by identity.

    The inputs kept hold the objects themselves, so that no new object can take the identity of one.
    """
    if one is other:
        return True
    if type(one) is tuple and type(other) is tuple:
        return len(one) == len(other) and all(map(same, one, other))
    return type(one) is type(other) and type(one) in _PLAIN and one == other
