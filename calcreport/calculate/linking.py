"""What links of one calculation find in another that is worked: a value by its path, the rows of a set.

Paths and finished values in, places of values and rows of links out; what is not there is a problem.
"""

from __future__ import annotations

from dataclasses import replace

from calcreport.calculate.model import (
    GivenRows,
    GivenValue,
    Key,
    LinkedRows,
    LinkedValue,
    ValueOrigin,
    Worked,
    split_path,
)
from calcreport.core.problems import Problems, listed
from calcreport.core.rows import fits, wanted
from calcreport.core.source import Span


def find_path(worked: Worked, path: str, span: Span, problems: Problems) -> tuple[int, Key] | None:
    """Find `combination[4 W+].P_u` among a calculation's values; adds a problem where it cannot."""
    plan, values, mark = worked.plan, worked.values, worked.calculation.mark
    steps, symbol = split_path(path)
    slot = plan.by_path.get(symbol)
    if slot is None:
        problems.add("unknown-name", span, f"{mark} gives no `{symbol[:40]}`", expected="a symbol of that calculation",
                     found=symbol[:40], hint=problems.near(symbol, plan.by_path))  # fmt: skip
        return None
    sets = values.sets[slot]
    names = [plan.sets[index].name for index in sets]
    unknown = next((name for name, _ in steps if name not in names), None)
    if unknown is not None and not any(rows.name == unknown for rows in plan.sets):
        known = names or [rows.name for rows in plan.sets]
        problems.add("not-a-row", span, f"{mark} has no set `{unknown[:40]}`", expected="a set of that calculation",
                     found=unknown[:40], hint=problems.near(unknown, known))  # fmt: skip
        return None
    if [name for name, _ in steps] != names:
        rows = f"has a value for every row of {' and '.join(names)}" if names else "is one value, without rows"
        problems.add("row-leak", span, f"`{symbol}` of {mark} {rows}",
                     expected=("the row, as in " if names else "") + "".join(f"{n}[ROW]." for n in names) + symbol,
                     found=path[:40])  # fmt: skip
        return None
    key: list[int] = []
    for index, (name, row) in zip(sets, steps, strict=True):
        known_rows = values.names[index].get(tuple(key[: len(values.outer[index])]), ())
        if row not in known_rows:
            problems.add("not-a-row", span, f"{mark} has no row `{row[:40]}` in `{name}`",
                         expected=listed(known_rows) if known_rows else "rows made on its sheets",
                         found=row[:40], hint=problems.near(row, known_rows))  # fmt: skip
            return None
        key.append(known_rows.index(row))
    place = slot, tuple(key)
    if values.get(*place) is None:
        problems.add("unknown-name", span, f"`{symbol}` of {mark} was not worked", expected="a value on its sheets",
                     found=f"{mark} stopped: {worked.stop.told}" if worked.stop else
                     "a branch not taken, or a value that may be absent")  # fmt: skip
        return None
    return place


def resolve_rows(rows: GivenRows, linked: LinkedRows, worked: Worked, problems: Problems) -> GivenRows | None:
    """Return rows taken from another calculation: its row names, and a link in every cell."""
    plan, given = worked.plan, rows.given
    at = {name.name: row for name, row in linked.at}
    slots = [plan.slots[plan.by_path[name.name]] for _, name in linked.columns]
    index = next(
        (i for slot in slots for i in slot.sets if plan.sets[i].name == linked.rows.name),
        next(s.index for s in plan.sets if s.name == linked.rows.name),
    )
    outer: list[int] = []
    for other in plan.sets[index].outer:
        owner, row = plan.sets[other].name, at.get(plan.sets[other].name)
        known = worked.values.names[other].get(tuple(outer[: len(plan.sets[other].outer)]), ())
        if row is None or row.name not in known:
            problems.add("not-a-row", row.span if row else linked.span, f"{linked.mark} needs a row of `{owner}`",
                         expected=listed(known), found=row.name[:40] if row else "no row named",
                         hint=problems.near(row.name, known) if row else "")  # fmt: skip
            return None
        outer.append(known.index(row.name))
    names = worked.values.names[index].get(tuple(outer))
    if names is None:
        problems.add("unknown-name", linked.rows.span, f"{linked.mark} made no rows of `{linked.rows.name}`",
                     expected="rows on its sheets", found=f"it stopped: {worked.stop.told}" if worked.stop else
                     "a branch not taken")  # fmt: skip
        return None
    if not _count_fits(rows, names, problems) or not _names_fit(rows, names, problems):
        return None
    cells: list[tuple[GivenValue, ...]] = []
    same = {value.given.name: value for value in linked.same}
    for row_name in names:
        found = dict(same)
        for (column, name), slot in zip(linked.columns, slots, strict=True):
            taken = [(plan.sets[i].name, row_name if i == index else at[plan.sets[i].name].name) for i in slot.sets]
            path = "".join(f"{s}[{r}]." for s, r in taken) + name.name
            link = LinkedValue(linked.mark, path, name.span)
            found[column.name] = GivenValue(column, link, ValueOrigin("line", f"{linked.mark}.{path}"), name.span)
        cells.append(tuple(found[column.name] for column in given.columns))
    return replace(rows, names=names, cells=tuple(cells))


def hold_at(linked: LinkedRows, worked: Worked, problems: Problems) -> bool:
    """Tell whether the rows named under `at` are there; told once for all columns and rows."""
    for name, row in linked.at:
        plan = worked.plan
        sets = [i for _, value in linked.columns for i in plan.slots[plan.by_path[value.name]].sets]
        index = next((i for i in sets if plan.sets[i].name == name.name and not plan.sets[i].outer), None)
        known = worked.values.names[index].get((), ()) if index is not None else (row.name,)
        if row.name not in known:
            problems.add("not-a-row", row.span, f"{linked.mark} has no row `{row.name[:40]}` in `{name.name}`",
                         expected=listed(known), found=row.name[:40], hint=problems.near(row.name, known))  # fmt: skip
            return False
    return True


def _count_fits(rows: GivenRows, names: tuple[str, ...], problems: Problems) -> bool:
    given = rows.given
    if given.least <= len(names) <= given.most:
        return True
    problems.add("row-count", rows.linked.span if rows.linked else rows.span,
                 f"`{given.name}` would have {len(names)} rows",
                 expected=wanted(given.least, given.most), found=f"{len(names)}")  # fmt: skip
    return False


def _names_fit(rows: GivenRows, names: tuple[str, ...], problems: Problems) -> bool:
    patterns = rows.given.row_names
    stray = next((name for name in names if patterns and not fits(name, patterns, patterns)), None)
    if stray is None:
        return True
    problems.add("not-a-row", rows.linked.rows.span if rows.linked else rows.span,
                 f"`{rows.given.name}` has no row named `{stray[:40]}`", expected=listed(patterns),
                 found=stray[:40])  # fmt: skip
    return False
