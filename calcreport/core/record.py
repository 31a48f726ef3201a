"""Records: classes of named fields on the standard library's dataclasses, without what costs and is not used.

A record is equal and hashed by value and is never changed once made: to the type checker its fields are read-only,
so nothing is spent on that at run time. An entity is a record that equals only itself; a state changes.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field, replace
from operator import attrgetter
from typing import Any, TypeVar, dataclass_transform

T = TypeVar("T")


def made(*, factory: Callable[[], T]) -> T:
    """Give a field a value made afresh for every object: `made(factory=list)`."""
    return field(default_factory=factory)


@dataclass_transform(frozen_default=True, field_specifiers=(field, made))
def record(kind: type[T]) -> type[T]:
    """Make a class a record; a value given to a field in the class body is its default."""
    slotted: Any = dataclass(slots=True, eq=False, repr=False)(kind)
    names: tuple[str, ...] = slotted.__match_args__
    values: Callable[[Any], object] = attrgetter(*names) if names else type

    def equal(one: object, other: object) -> bool:
        return one is other or (type(one) is type(other) and values(one) == values(other))

    def hashed(one: object) -> int:
        return hash(values(one))

    own = vars(kind)
    if "__eq__" not in own:
        slotted.__eq__, slotted.__hash__ = equal, hashed
    if "__repr__" not in own:
        slotted.__repr__ = _shown
    return slotted  # type: ignore[no-any-return]


@dataclass_transform(frozen_default=True, eq_default=False, field_specifiers=(field, made))
def entity(kind: type[T]) -> type[T]:
    """Make a class a record that equals only itself."""
    return _bare(kind)


@dataclass_transform(eq_default=False, field_specifiers=(field, made))
def state(kind: type[T]) -> type[T]:
    """Make a class whose fields change."""
    return _bare(kind)


def _bare(kind: type[T]) -> type[T]:
    slotted: Any = dataclass(slots=True, eq=False, repr=False)(kind)
    if "__repr__" not in vars(kind):
        slotted.__repr__ = _shown
    return slotted  # type: ignore[no-any-return]


def _shown(one: Any) -> str:
    fields = ", ".join(f"{name}={getattr(one, name)!r}" for name in type(one).__match_args__)
    return f"{type(one).__qualname__}({fields})"


__all__ = ["entity", "made", "record", "replace", "state"]
