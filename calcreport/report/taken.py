"""Which rows of a set a formula takes its value from: the one that fits, or is extreme; of a sum, all that fit.

A formula over a set and values with the outer rows open in, numbers of rows out.
"""

from __future__ import annotations

from collections.abc import Callable

from calcreport.calculate.model import NoValue, Test, Values, Work
from calcreport.core.expression import Condition, Expression, Over


def rows_taken(
    node: Over, values: Values, work: Callable[[Expression], Work], test: Callable[[Condition], Test]
) -> tuple[int, ...]:
    """Return the row a pick or an extreme takes, the rows a sum adds up; none where no row fits."""
    before = values.open[node.bound]
    try:
        return _fitting(node, values, work, test)
    except (NoValue, ArithmeticError):
        return ()
    finally:
        values.open[node.bound] = before


def _fitting(
    node: Over, values: Values, work: Callable[[Expression], Work], test: Callable[[Condition], Test]
) -> tuple[int, ...]:
    fits = test(node.where) if node.where is not None else None
    body = work(node.body)
    found: list[tuple[float, int]] = []
    for row in range(len(values.row_names(node.bound))):
        values.open[node.bound] = row
        if fits is not None and not fits(values):
            continue
        if node.function == "pick":
            return (row,)
        found.append((body(values), row))
    if not found:
        return ()
    if node.function == "sum":
        return tuple(row for _, row in found)
    best = min(found, key=lambda one: (one[0], one[1]) if node.function == "min" else (-one[0], one[1]))
    return (best[1],)
