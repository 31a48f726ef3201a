"""A table beside a template: the cells of the columns a set takes, each with its place, unit and name of its row.

Text and names of columns in, texts of cells out. A cell holds a number or a word, never a formula.
"""

from __future__ import annotations

import re

from calcreport.core.problems import Problems
from calcreport.core.rows import MOST_ROWS
from calcreport.core.source import Source
from calcreport.read.columns import make_table, take, text_use
from calcreport.read.nodes import Scalar
from calcreport.read.sheets import read_text_table

_BESIDE = re.compile(r"[A-Za-z0-9][\w.-]*\.csv")


def is_beside(file: Scalar, problems: Problems) -> bool:
    """Tell whether a text names a table in the template's own folder; adds `no-file`."""
    if _BESIDE.fullmatch(file.text):
        return True
    problems.add("no-file", file.span, f"`{file.text[:60]}` is not a table beside the template",
                 expected="the name of a CSV file in the template's own folder",
                 found=file.text[:40] or "nothing")  # fmt: skip
    return False


def read_cells(
    source: Source | str, file: Scalar, names: tuple[Scalar, ...], problems: Problems
) -> tuple[dict[str, Scalar], ...] | None:
    """Return the cells of each row by column, `name` among them where the table has such a column."""
    if isinstance(source, str):
        problems.add("no-file", file.span, f"`{file.text[:60]}` cannot be read", expected="a file beside the template",
                     found=source)  # fmt: skip
        return None
    sheet = read_text_table(source, "", problems)
    table = make_table(sheet, None, file.span, problems) if sheet is not None else None
    if table is None:
        return None
    if len(table.rows) > MOST_ROWS or not table.rows:
        problems.add("row-count", file.span, f"`{file.text[:60]}` has {len(table.rows):,} rows",
                     expected=f"1 to {MOST_ROWS:,} rows under the headings", found=f"{len(table.rows):,}")  # fmt: skip
        return None
    before = problems.met
    uses = {name.text: text_use(name, table, problems) for name in names}
    if table.named("name"):
        uses["name"] = text_use(Scalar("name", file.span, False), table, problems)
    found: list[dict[str, Scalar]] = []
    for row in table.rows:
        cells = {key: take(use, row, table, problems) for key, use in uses.items() if use is not None}
        found.append({key: cell for key, cell in cells.items() if isinstance(cell, Scalar)})
    return tuple(found) if problems.met == before else None
