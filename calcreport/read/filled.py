"""What of a schedule's entry changes from row to row: prepared once a table, filled once a row.

Nodes with `{column: …}` in them and a table in, nodes with texts of that row out. Knows nothing of calculations.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from calcreport.core.problems import Problems
from calcreport.core.record import record
from calcreport.read.columns import NO_ROW, Table, Use, is_use, read_use, take
from calcreport.read.nodes import Mapping, Node, Scalar, Sequence, Told
from calcreport.read.sheets import SheetRow


@record
class Filled:
    """A mapping or list of a schedule's entry, with what its places take from a row."""

    node: Mapping | Sequence
    #: in the order of the entries or items: a node that is the same for every row, or what to fill
    inner: tuple[Node | Use | Filled, ...]


def prepare(node: Node, table: Table, problems: Problems, in_list: bool = False) -> Node | Use | Filled:
    """Return a node as it is, or what has to be filled in it for every row."""
    if is_use(node):
        return prepare_use(node, table, problems, in_list)
    if isinstance(node, Mapping):
        # the columns of a set that is given from another table are that table's
        theirs = ("columns",) if node.get("file") is not None else ()
        inner = tuple(
            value if key.text in theirs else prepare(value, table, problems, in_list) for key, value in node.entries
        )
    elif isinstance(node, Sequence):
        inner = tuple(prepare(item, table, problems, True) for item in node.items)
    else:
        return node
    return Filled(node, inner) if any(isinstance(one, Use | Filled) for one in inner) else node


def prepare_use(node: Node, table: Table, problems: Problems, in_list: bool = False) -> Use | Told:
    """Return what a place takes from a row; `no row` has a meaning only where a list can lose one."""
    use = read_use(node, table, problems)
    if use is None:
        return Told(node.span)
    if use.if_empty is not None and use.if_empty.text == NO_ROW and not in_list:
        problems.add("wrong-shape", use.if_empty.span, "`no row` stands outside a list of rows",
                     expected="`if empty: none`, or a value", found=NO_ROW)  # fmt: skip
    return use


def fill(value: Node | Use | Filled, row: SheetRow, table: Table, problems: Problems) -> Node | None:
    """Return a node with the cells of a row in it; None where an empty cell takes its row of a set away."""
    if isinstance(value, Use):
        return take(value, row, table, problems)
    if not isinstance(value, Filled):
        return value
    if isinstance(value.node, Mapping):
        entries = []
        for (key, _), inner in zip(value.node.entries, value.inner, strict=True):
            found = fill(inner, row, table, problems)
            if found is None:
                return None
            entries.append((key, found))
        return Mapping(tuple(entries), value.node.span)
    items = (fill(inner, row, table, problems) for inner in value.inner)
    return Sequence(tuple(item for item in items if item is not None), row.cell(0).span)


def uses(values: Iterable[Node | Use | Filled]) -> Iterator[Use]:
    """Return all that is taken from a row."""
    for value in values:
        if isinstance(value, Use):
            yield value
        elif isinstance(value, Filled):
            yield from uses(value.inner)


def schedule_columns(schedule: Mapping) -> dict[str, Node]:
    """Return what a schedule takes from columns, by the name of the value: 'mark', 'b', 'layer.first.steel'."""
    found: dict[str, Node] = {}
    mark, columns, given = (schedule.get(key) for key in ("mark", "columns", "given"))
    if mark is not None:
        found["mark"] = mark
    for key, value in columns.entries if isinstance(columns, Mapping) else ():
        found[key.text] = value
    if given is not None:
        _collect(given, "", found)
    return found


def _collect(node: Node, path: str, found: dict[str, Node]) -> None:
    if is_use(node):
        found[path] = node
    elif isinstance(node, Mapping):
        theirs = node.get("file") is not None
        for key, value in node.entries:
            if theirs and key.text in ("columns", "where"):
                continue
            # `{value: {column: …}, source: …}` is the value itself
            _collect(value, path if key.text == "value" else f"{path}.{key.text}".lstrip("."), found)
    elif isinstance(node, Sequence):
        for number, item in enumerate(node.items, 1):
            name = item.get("name") if isinstance(item, Mapping) else None
            _collect(item, f"{path}.{name.text if isinstance(name, Scalar) else number}", found)
