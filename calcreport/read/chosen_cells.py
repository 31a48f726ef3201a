"""A candidate that chooses cells of a set: `group: {A: {steel: 4-#8}}` puts new cells into the rows that `given` holds.

Nodes in, the rows as one node out, with the names of the cells and the text of each. Rows stay those of `given`.
"""

from __future__ import annotations

from collections.abc import Iterator

from calcreport.core.problems import Problems, listed
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence


def is_cells(node: Node) -> bool:
    """Tell whether a candidate gives cells by row, and not a whole set: that is a list, a table or a link."""
    return isinstance(node, Mapping) and bool(node.entries) and all(isinstance(v, Mapping) for _, v in node.entries)


def cells_of(name: str, node: Node) -> Iterator[tuple[str, str]]:
    """Yield (name of the cell, as typed) for every cell: ('group A steel', '4-#8'); nothing for a whole set."""
    for row, cells in node.entries if isinstance(node, Mapping) and is_cells(node) else ():
        for column, cell in cells.entries if isinstance(cells, Mapping) else ():
            yield f"{name} {row.text} {column.text}", cell.text if isinstance(cell, Scalar) else "a link"


def rows_with(name: Scalar, changed: Mapping, given: Node | None, what: str, problems: Problems) -> Node | None:
    """Return the rows of a set with the cells changed; None after adding a problem."""
    if not isinstance(given, Sequence) or not all(isinstance(item, Mapping) for item in given.items):
        problems.add("wrong-shape", name.span, f"{what} chooses cells of `{name.text[:40]}`, which has no rows",
                     expected=f"rows of `{name.text[:40]}` under `given`", found="no list there")  # fmt: skip
        return None
    rows = [item for item in given.items if isinstance(item, Mapping)]
    names = [_name(row, number) for number, row in enumerate(rows, 1)]
    for row, cells in changed.entries:
        if row.text not in names:
            problems.add("unknown-given", row.span, f"{what} chooses cells of `{row.text[:40]}`, which is no row",
                         expected=listed(names), found=row.text[:40], hint=problems.near(row.text, names))  # fmt: skip
            return None
        assert isinstance(cells, Mapping)
        place, new = names.index(row.text), {column.text for column, _ in cells.entries}
        kept = tuple(entry for entry in rows[place].entries if entry[0].text not in new)
        rows[place] = Mapping((*kept, *cells.entries), rows[place].span)
    return Sequence(tuple(rows), given.span)


def _name(row: Mapping, number: int) -> str:
    found = row.get("name")
    return found.text if isinstance(found, Scalar) else f"{number}"
