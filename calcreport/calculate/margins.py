"""How far each given value may move, one at a time, before the verdict of a check flips.

A worked calculation in, margins out. The values are moved and the whole calculation is worked again each time, so
that whatever depends on them follows; other calculations are left alone. Nothing here is printed.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from fractions import Fraction

from calcreport.calculate.evaluate import Program
from calcreport.calculate.handing import empty_values
from calcreport.calculate.model import Key, Margin, Member, PlannedGiven, Values, Worked, WorkedProject

#: a value is moved down to a quarter and up to four times itself
WIDEST = 4.0
#: steps in which each way is searched, and halvings of the step in which a verdict flips
STEPS, HALVINGS = 24, 30
#: values of a calculation worked anew for its margins at most, where nobody asked for them by its mark
MOST_TRIED = 250_000


def find_margins(worked: Worked, *, rows: bool = True) -> tuple[Margin, ...]:
    """Return the margins of every judged check against every given number that is not zero; `rows`: those in rows too.

    Like members have checks of their own, named with their marks; what one of them is given moves its checks alone.
    """
    program = Program(worked.plan)
    base = _verdicts(worked)
    found: list[Margin] = []
    for slot, key, value in _movable(worked):
        if key and not rows:
            continue
        own = _moved_by(worked, slot, key, base)
        one, place = _own_work(worked, slot, key)
        ways = [_flips(one, program, (slot, place, value), own, way) for way in (1 / WIDEST, WIDEST)]
        for check in own:
            found.append(Margin(check, slot, value, ways[0].get(check), ways[1].get(check), key))
    return tuple(found)


def _movable(worked: Worked) -> list[tuple[int, Key, float]]:
    """Return every given number that may move."""
    found = []
    for slot, key in sorted(worked.values.given):
        value = worked.values.get(slot, key)
        if isinstance(value, float) and value != 0.0 and worked.plan.slots[slot].symbol.kind != "count":
            found.append((slot, key, value))
    return found


def is_searched(worked: Worked) -> bool:
    """Tell whether the margins of a calculation's own values are among the least of a project.

    Those of like members are not, and where there is too much to work for every trial they are not either.
    """
    alone = sum(1 for _, key, _ in _movable(worked) if not key)
    return not worked.calculation.members and alone * len(worked.values.worked) * 2 * STEPS <= MOST_TRIED


def _moved_by(worked: Worked, slot: int, key: Key, base: dict[str, bool]) -> dict[str, bool]:
    """Return the checks that a given value can move: those of its member, where it is of one."""
    owner = _owner(worked, slot, key)
    return {name: ok for name, ok in base.items() if name.startswith(f"{owner.mark} ")} if owner else base


def _owner(worked: Worked, slot: int, key: Key) -> Member | None:
    """Return the one of like members that a value belongs to."""
    rows = tuple(zip(worked.values.sets[slot], key, strict=True))
    return next((member for member in worked.members if member.place in rows), None)


def _own_work(worked: Worked, slot: int, key: Key) -> tuple[Worked, Key]:
    """Return the calculation as though it had only the member a value belongs to, and the value's key in it.

    What one member is given changes nothing for the others, so a trial need not work them.
    """
    owner = _owner(worked, slot, key)
    if owner is None:
        return worked, key
    old, (index, row) = worked.values, owner.place

    def alone(sets: tuple[int, ...], key: Key) -> Key | None:
        pairs = tuple(zip(sets, key, strict=True))
        theirs = any(one == index and there != row for one, there in pairs)
        return None if theirs else tuple(0 if one == index else there for one, there in pairs)

    values = empty_values(worked.plan)
    values.plain[:] = old.plain
    for place, sets in enumerate(old.sets):
        kept = ((alone(sets, there), value) for there, value in old.rows[place].items())
        values.rows[place] = {there: value for there, value in kept if there is not None}
    for place, outer in enumerate(old.outer):
        named = ((alone(outer, there), names) for there, names in old.names[place].items())
        values.names[place] = {there: names for there, names in named if there is not None}
    values.names[index] = {(): (owner.mark,)}
    for (place, there), amount in old.given.items():
        kept_key = alone(old.sets[place], there)
        if kept_key is not None:
            values.given[place, kept_key] = amount
    own = replace(worked, calculation=replace(worked.calculation, members=(owner.mark,)), values=values)
    moved = alone(old.sets[slot], key)
    assert moved is not None
    return own, moved


def least_margins(project: WorkedProject, progress: Callable[[int, int], None]) -> tuple[tuple[str, Margin], ...]:
    """Return the narrowest margin of every check with the mark of its calculation, the narrowest check first.

    A way on which the check is no longer judged, since the calculation stops or takes another branch, flips nothing.
    """
    found: list[tuple[str, Margin]] = []
    for done, worked in enumerate(project.calculations, 1):
        narrowest: dict[str, Margin] = {}
        program = Program(worked.plan)
        # a value in rows, or of one of like members, has no place of its own in a table of margins
        for margin in find_margins(worked, rows=False) if worked.checks and is_searched(worked) else ():
            before = narrowest.get(margin.check)
            judged = _judged(margin, worked, program) if before is None or margin.share < before.share else None
            if judged is not None and (before is None or judged.share < before.share):
                narrowest[margin.check] = judged
        found += [(worked.calculation.mark, margin) for margin in narrowest.values()]
        progress(done, len(project.calculations))
    return tuple(sorted(found, key=lambda pair: pair[1].share))


def is_judged(margin: Margin, end: float, worked: Worked) -> bool:
    """Tell whether the check has a verdict where a value is moved to; False where the calculation stops before it."""
    one, key = _own_work(worked, margin.slot, margin.key)
    return margin.check in _moved(one, Program(worked.plan), (margin.slot, key), end)


def _judged(margin: Margin, worked: Worked, program: Program) -> Margin | None:
    """Return a margin without the ways that end in no verdict; None where neither is left."""
    ways = [
        end if end is not None and margin.check in _moved(worked, program, (margin.slot, margin.key), end) else None
        for end in (margin.lower, margin.upper)
    ]
    return replace(margin, lower=ways[0], upper=ways[1]) if ways != [None, None] else None


def _flips(
    worked: Worked, program: Program, given: tuple[int, Key, float], base: dict[str, bool], end: float
) -> dict[str, float]:
    """Return the value at which each check flips on the way from the value to `end` times it."""
    slot, key, value = given
    waiting = dict(base)
    found: dict[str, float] = {}
    inner = 1.0
    for step in range(1, STEPS + 1):
        outer = end ** (step / STEPS)
        there = _moved(worked, program, (slot, key), value * outer)
        for check in [c for c in waiting if there.get(c) != waiting[c]]:
            found[check] = value * _halved(worked, program, given, (check, base[check]), (inner, outer))
            del waiting[check]
        if not waiting:
            break
        inner = outer
    return found


def _halved(
    worked: Worked,
    program: Program,
    given: tuple[int, Key, float],
    check: tuple[str, bool],
    ends: tuple[float, float],
) -> float:
    """Return the factor at which one check flips between two factors, on the side where it has flipped."""
    inner, outer = ends
    for _ in range(HALVINGS):
        middle = (inner + outer) / 2
        if _moved(worked, program, given[:2], given[2] * middle).get(check[0]) == check[1]:
            inner = middle
        else:
            outer = middle
    return outer


def _moved(worked: Worked, program: Program, place: tuple[int, Key], value: float) -> dict[str, bool]:
    """Return the verdicts with one given value moved; a check that is not reached is missing."""
    values, (slot, key) = _given_again(worked), place
    values.given[slot, key] = Fraction(value)
    if values.sets[slot]:
        values.rows[slot][key] = value
    else:
        values.plain[slot] = value
    return _verdicts(program.run(worked.calculation, values, ""))


def _given_again(worked: Worked) -> Values:
    """Return fresh values holding what the calculation was given."""
    values = empty_values(worked.plan)
    for (slot, key), amount in worked.values.given.items():
        values.given[slot, key] = amount
        if values.sets[slot]:
            values.rows[slot][key] = worked.values.get(slot, key)
        else:
            values.plain[slot] = worked.values.get(slot, key)
    for planned in worked.plan.givens:
        _copy_rows(planned, worked, values)
    return values


def _copy_rows(planned: PlannedGiven, worked: Worked, values: Values) -> None:
    """Copy words and row names, of sets that each member has for itself too."""
    if planned.slot >= 0 and worked.plan.slots[planned.slot].symbol.unit is None:
        _copy_words(worked.values, values, planned.slot)
    if planned.rows >= 0:
        values.names[planned.rows] = dict(worked.values.names[planned.rows])
    for column in planned.columns:
        _copy_rows(column, worked, values)


def _copy_words(old: Values, new: Values, slot: int) -> None:
    if old.sets[slot]:
        new.rows[slot] = dict(old.rows[slot])
    else:
        new.plain[slot] = old.plain[slot]


def _verdicts(worked: Worked) -> dict[str, bool]:
    """Return whether each judged check is OK in every row; unreached and inapplicable ones are missing."""
    found: dict[str, bool] = {}
    for member in worked.members:
        mark = f"{member.mark} " if worked.calculation.members else ""
        for check in member.checks:
            if check.verdict in ("OK", "NG"):
                name = mark + check.line.name
                found[name] = found.get(name, True) and check.verdict == "OK"
    return found
