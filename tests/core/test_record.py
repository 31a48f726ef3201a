"""Records against the behaviour of the standard library's frozen dataclasses with slots, which they stand for."""

from __future__ import annotations

import pickle
from dataclasses import dataclass

import pytest

from calcreport.core.record import entity, made, record, replace, state


@record
class Point:
    """A place."""

    x: float
    y: float = 0.0

    @property
    def sum(self) -> float:
        return self.x + self.y


@dataclass(frozen=True, slots=True)
class Standard:
    x: float
    y: float = 0.0


@record
class Other:
    x: float
    y: float = 0.0


@record
class Nothing:
    """A record without fields."""


@record
class Solid(Point):
    """A record that extends another."""

    z: float = 9.0


@entity
class Style:
    size: float


@state
class Tally:
    name: str
    counts: list[int] = made(factory=list)


@pytest.mark.parametrize("values", [(1.0,), (1.0, 2.0)])
def test_fields_are_taken_in_order_with_their_defaults(values: tuple[float, ...]) -> None:
    one, standard = Point(*values), Standard(*values)
    assert (one.x, one.y) == (standard.x, standard.y)
    assert Point(x=1.0, y=2.0) == Point(1.0, 2.0)
    assert one.sum == sum((one.x, one.y))


def test_a_missing_or_unknown_field_is_refused() -> None:
    with pytest.raises(TypeError):
        Point()  # type: ignore[call-arg]
    with pytest.raises(TypeError):
        Point(1.0, z=2.0)  # type: ignore[call-arg]
    with pytest.raises(TypeError):
        replace(Point(1.0), z=2.0)


def test_records_are_equal_by_class_and_value() -> None:
    assert Point(1.0, 2.0) == Point(1.0, 2.0) != Point(1.0, 3.0)
    assert Point(1.0, 2.0) != Other(1.0, 2.0)
    assert len({Point(1.0), Point(1.0), Point(2.0), Other(1.0)}) == 3
    assert Nothing() == Nothing() and hash(Nothing()) == hash(Nothing())


def test_entities_and_states_equal_only_themselves() -> None:
    style, tally = Style(9.0), Tally("a")
    assert style == style != Style(9.0)
    assert tally == tally != Tally("a")
    assert len({style, Style(9.0)}) == 2


def test_values_made_afresh_are_not_shared() -> None:
    one, other = Tally("a"), Tally("b", [7])
    one.counts.append(1)
    assert (one.counts, other.counts, Tally("c").counts) == ([1], [7], [])


def test_replace_changes_what_is_named() -> None:
    assert replace(Point(1.0, 2.0), y=5.0) == Point(1.0, 5.0)


def test_records_have_slots_match_by_place_and_show_themselves() -> None:
    match Point(1.0, 2.0):
        case Point(x, y):
            assert (x, y) == (1.0, 2.0)
    assert not hasattr(Point(1.0), "__dict__")
    assert repr(Point(1.0, 2.0)) == repr(Standard(1.0, 2.0)).replace("Standard", "Point")
    assert Point.__doc__ == "A place."


def test_a_record_may_extend_another() -> None:
    solid = Solid(1.0)
    assert (solid.x, solid.y, solid.z, solid.sum) == (1.0, 0.0, 9.0, 1.0)
    assert Solid(1.0, 2.0, 3.0) == replace(solid, y=2.0, z=3.0) != Point(1.0, 2.0)
    assert not hasattr(solid, "__dict__")


def test_records_go_to_other_processes() -> None:
    assert pickle.loads(pickle.dumps(Point(1.0, 2.0))) == Point(1.0, 2.0)
