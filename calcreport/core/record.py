"""Classes of named fields, made at a tenth of the cost of the standard library's: records, entities and states.

In: a class whose body names its fields with their types. Out: the same class with `__slots__` and an `__init__` that
takes the fields in order. A record has equality and hash by value and is never changed once made: the type checker
holds that (to it the fields of a record are read-only), so nothing is spent on it at run time. An entity is a record
that equals only itself; a state equals only itself too, and changes. Knows nothing of what the fields mean.

Why not `dataclasses`: a frozen one with slots takes 0.56 ms to make as a class and 850 ns as an object; these take
0.06 ms and 230 ns. A hundred classes and a third of a million objects stand between a command and its last sheet.
"""

from __future__ import annotations

from collections.abc import Callable
from operator import attrgetter
from typing import Any, TypeVar, dataclass_transform

T = TypeVar("T")


class _Made:
    """Stands in a class body for a value made afresh for every object."""

    __slots__ = ("factory",)

    def __init__(self, factory: Callable[[], object]) -> None:
        self.factory = factory


def made(*, factory: Callable[[], T]) -> T:
    """Give a field a value made afresh for every object: `made(factory=list)`."""
    stand_in: Any = _Made(factory)
    return stand_in  # type: ignore[no-any-return]


@dataclass_transform(frozen_default=True, field_specifiers=(made,))
def record(kind: type[T]) -> type[T]:
    """Make a class a record; a value given to a field in the class body is its default, shared by all records."""
    equal, hashed = _by_value(_fields(kind))
    return _slotted(kind, {"__eq__": equal, "__hash__": hashed})


@dataclass_transform(frozen_default=True, eq_default=False, field_specifiers=(made,))
def entity(kind: type[T]) -> type[T]:
    """Make a class a record that equals only itself."""
    return _slotted(kind, {})


@dataclass_transform(eq_default=False, field_specifiers=(made,))
def state(kind: type[T]) -> type[T]:
    """Make a class whose fields change; a value given to a field in the class body is its default."""
    return _slotted(kind, {})


def replace(one: T, **changes: object) -> T:
    """Return an object like another but for some fields; TypeError when it has no field of a name."""
    kind: Any = type(one)
    again: T = kind(**{name: getattr(one, name) for name in kind.__match_args__} | changes)
    return again


def _inherited(kind: type) -> tuple[str, ...]:
    """Return the fields of the class it extends, if that has any."""
    return tuple(getattr(kind, "__match_args__", ()))


def _fields(kind: type) -> tuple[str, ...]:
    """Return the fields in order: those of the class it extends, then its own."""
    own = vars(kind).get("__annotations__", ())
    return (*_inherited(kind), *(name for name in own if name not in _inherited(kind)))


def _slotted(kind: type[T], methods: dict[str, object]) -> type[T]:
    """Make the class again with slots; what its body defines itself stays."""
    names = _fields(kind)
    body = {key: value for key, value in vars(kind).items() if key not in ("__dict__", "__weakref__")}
    own = {name: body.pop(name) for name in names if name in body}
    defaults = getattr(kind, "_defaults", {}) | own
    body = {"__repr__": _shown, **methods, **body}
    body |= {"__slots__": names[len(_inherited(kind)) :], "__match_args__": names, "_defaults": defaults}
    body["__init__"] = _initialiser(kind, names, defaults)
    again: Any = type(kind)
    slotted: type[T] = again(kind.__name__, kind.__bases__, body)
    return slotted


def _initialiser(kind: type, names: tuple[str, ...], defaults: dict[str, object]) -> object:
    """Compile the `__init__`; names of fields are identifiers of this program's own source, never an author's."""
    parameters, lines = ["self"], []
    known: dict[str, object] = {}
    for name in names:
        default = defaults.get(name)
        value = name
        if isinstance(default, _Made):
            known[f"make_{name}"], known[f"default_{name}"] = default.factory, None
            value = f"make_{name}() if {name} is None else {name}"
        elif name in defaults:
            known[f"default_{name}"] = default
        parameters.append(f"{name}=default_{name}" if name in defaults else name)
        lines.append(f"  self.{name} = {value}\n")
    made: dict[str, Any] = {}
    exec(f"def __init__({', '.join(parameters)}):\n{''.join(lines) or '  pass'}", known, made)
    initialiser = made["__init__"]
    initialiser.__qualname__ = f"{kind.__qualname__}.__init__"
    return initialiser


def _by_value(names: tuple[str, ...]) -> tuple[object, object]:
    values: Callable[[Any], object] = attrgetter(*names) if names else type

    def equal(one: object, other: object) -> bool:
        return one is other or (type(one) is type(other) and values(one) == values(other))

    def hashed(one: object) -> int:
        return hash(values(one))

    return equal, hashed


def _shown(one: Any) -> str:
    fields = ", ".join(f"{name}={getattr(one, name)!r}" for name in type(one).__match_args__)
    return f"{type(one).__qualname__}({fields})"
