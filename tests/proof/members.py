"""The claims of a summary about like members on one calculation: each row repeats that member's row of the results.

In: a package and one of its calculations. Out: findings.
"""

from __future__ import annotations

import re
from collections.abc import Iterator

from .account import Finding
from .calculations import Calculation
from .tables import Table

_RATIO = re.compile(r"[\d.]+")


def results(calculation: Calculation) -> dict[str, dict[str, str]]:
    """Return the cells of every member in the table that has a ratio column a check, by member and check."""
    found: dict[str, dict[str, str]] = {}
    for here in calculation.tables:
        table = here.table
        if table.set_name != "member":
            continue
        checks = [(i, c.name) for i, c in enumerate(table.columns) if i and not c.math and not c.unit]
        for row in table.rows:
            cells = {
                name: row[i] for i, name in checks if _RATIO.fullmatch(row[i].split()[0] if row[i].split() else "")
            }
            if cells:
                found.setdefault(row[0], {}).update(cells)
    return found


def failing(calculation: Calculation) -> int:
    """Return how many checks of members are NG."""
    return sum("NG" in cell.split() for cells in results(calculation).values() for cell in cells.values())


def in_summary(calculation: Calculation, tables: list[Table]) -> Iterator[Finding]:
    """Every member stands in the summary with the ratios of its row, the greatest as the one that governs."""
    members = results(calculation)
    seen: dict[str, int] = dict.fromkeys(members, 0)
    for table in tables:
        names = [column.name for column in table.columns]
        for row in table.rows:
            cells = dict(zip(names, row, strict=True))
            own = members.get(cells.get("Mark", ""))
            if own is None:
                continue
            if "Governing check" in cells:
                seen[cells["Mark"]] += 1
                yield from _governs(calculation, cells, own)
            elif "What" not in cells:
                for name in own.keys() & cells.keys():
                    if cells[name].split() != own[name].split():
                        text = f"{cells['Mark']} {name}: {cells[name]!r}, in the results {own[name]!r}"
                        yield Finding("the summary repeats the ratios", calculation.mark, 0, text)
    told = [row for line in calculation.lines for s in line.statements for name, row in s.context if name == "member"]
    worst = {member: max(float(cell.split()[0]) for cell in cells.values()) for member, cells in members.items()}
    if told and worst.get(told[0]) != max(worst.values()):
        text = f"{told[0]}: {worst.get(told[0])}, greatest {max(worst.values())}"
        yield Finding("the member told in full is the worst", calculation.mark, 0, text)
    for member, count in seen.items():
        if count != 1:
            yield Finding("every member stands once in the summary", calculation.mark, 0, f"{member}: {count} rows")


def _governs(calculation: Calculation, cells: dict[str, str], own: dict[str, str]) -> Iterator[Finding]:
    greatest = max((cell.split()[0] for cell in own.values()), key=float)
    shown = cells.get("Ratio", "").split()
    # a heading may run over two lines, of which one is read
    failed = any("NG" in cell.split() for cell in own.values())
    if (
        not {cell.split()[0] for name, cell in own.items() if name in cells["Governing check"]} >= set(shown[:1])
        or ("NG" in shown) != failed
        or (not failed and shown[:1] != [greatest])
    ):
        yield Finding("the summary shows the governing ratio", calculation.mark, 0, f"{cells}, results {own}")
