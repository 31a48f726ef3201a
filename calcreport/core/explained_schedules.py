"""What problems of schedules, of the tables they stand in, mean and how to mend them, by slug."""

from __future__ import annotations

SCHEDULES: dict[str, str] = {
    "bad-cell": """A cell cannot be taken as it stands.
It holds a date (spreadsheet programs turn 3-5 into one), an error, a formula whose value was never stored, or it is
part of merged cells, of which only the first holds anything. What is meant would be a guess.

    3-May      wrong: format the cell as text and type 3-#5 again""",
    "bad-table": """A file cannot be read as a table.
Tables are comma-, semicolon- or tab-separated text in UTF-8, or XLSX workbooks of ordinary size without a password.
In text, a cell in quotes ends before the next column, and a mark of quotation inside it is doubled.

    B1,"16 x 28,4-#8      wrong: the quotation mark is not closed
    B1,"16 x 28",4-#8     right""",
    "empty-cell": """A cell is empty, and the calculation of its row needs a value from it.
No value is ever assumed. Fill the cell, or say beside the column what an empty one means: a value, `none` where the
template allows that, or `no row` inside a list of rows.

    layer: [{name: second, steel: {column: Bottom 2, if empty: no row}}]""",
    "hidden-rows": """A spreadsheet hides a row, a column or a sheet that would be read.
A filter hides rows too. Reading what nobody sees, or passing it over, would both surprise; say which is meant.

    - {file: beams.xlsx, hidden: skip, template: demo/beam, mark: Mark, columns: {b: Width}}""",
    "no-rows": """A schedule, or a set given from a table, takes no row of it.
Either the table has headings alone, or no row holds what `where` asks for. Texts are compared as they stand.

    where: {Level: Two}      wrong where the column holds 2
    where: {Level: 2}        right""",
    "no-sheet": """It is not told which sheet of a workbook is meant, or there is none of that name.
A workbook of one sheet needs no `sheet`; a text file has none.

    file: members.xlsx
    sheet: Beams""",
    "unknown-column": """A column is named that the table does not have, or a name fits two of its columns.
Columns are named by their headings, with or without the unit that stands in them. The headings are in the first row
that holds anything; where titles stand above, `heading row` tells the row. Nothing but marks to compare is a case of
this too: say with --columns what the others hold.

    columns: {b: Widht}       wrong where the heading is Width (in)
    columns: {b: Width}       right""",
}
