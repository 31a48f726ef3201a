"""Sets and pairs given from tables: names, values and places of every cell; from a schedule, a table for each row."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcreport.calculate.model import GivenPairs, GivenRows, Worked
from calcreport.core.quantity import Amount
from tests.read.tables import book
from tests.read.test_schedules import result, worked

FORCES = """\
Mark,Case,Axial (kip),Shear
N1,first,20,2 kip
N1,second,"1,030",
N2,first,8,1 kip
"""
PIER = """\
calculations:
  - mark: N1
    title: Pier
    template: demo/compression
    given: {b: 12 in, force: %s}
"""
WHOLE = "columns: {name: Case, P_u: Axial, V: {column: Shear, if empty: none}}"


def force(one: Worked) -> dict[str, list[str | None]]:
    """Return the texts of the cells by row name."""
    rows = next(v for v in one.calculation.given if isinstance(v, GivenRows))
    cells = [[c.value.text if isinstance(c.value, Amount) else None for c in row] for row in rows.cells]
    return dict(zip(rows.names, cells, strict=True))


def origin(one: Worked) -> str:
    given = next(v for v in one.calculation.given if isinstance(v, GivenRows | GivenPairs))
    return f"{given.origin.kind}: {given.origin.words}"


@pytest.mark.parametrize("data", [FORCES, book(rows=(("Mark", "Case", "Axial (kip)", "Shear"), ("N1", "first", 20, "2 kip"),
                                                     ("N1", "second", "1,030", None), ("N2", "first", 8, "1 kip")))])  # fmt: skip
def test_rows_of_a_set(tmp_path: Path, data: str | bytes) -> None:
    name = "forces.csv" if isinstance(data, str) else "forces.xlsx"
    found = worked(tmp_path, PIER % f"{{file: {name}, {WHOLE}, where: {{Mark: N1}}}}", forces=data)["N1"]
    assert force(found) == {"first": ["20 kip", "2 kip"], "second": ["1,030 kip", None]}
    # the headings are row 1, the two rows of N1 follow
    sheet = ", sheet Beams" if isinstance(data, bytes) else ""
    assert origin(found) == f"table: {name}{sheet} rows 2 to 3"
    # 12 in by 12 in at 3 ksi carries 432 kip
    assert [check.ratio for check in found.checks] == pytest.approx([20 / 432, 1030 / 432], rel=1e-12)


def test_rows_without_names_are_numbered_and_an_empty_cell_may_take_its_row_away(tmp_path: Path) -> None:
    columns = "columns: {P_u: Axial, V: {column: Shear, if empty: no row}}"
    found = worked(tmp_path, PIER % f"{{file: forces.csv, {columns}}}", forces=FORCES)["N1"]
    assert force(found) == {"1": ["20 kip", "2 kip"], "2": ["8 kip", "1 kip"]}


def test_stretches_of_rows_in_words(tmp_path: Path) -> None:
    rows = "".join(f"{'N1' if n % 2 or n in (4, 6) else 'X'},{n},1\n" for n in range(2, 15))
    found = worked(
        tmp_path,
        PIER % "{file: forces.csv, columns: {P_u: Axial, V: none}, where: {Mark: N1}}",
        forces="Mark,Case,Axial (kip)\n" + rows,
    )["N1"]
    # rows 3 to 7, then every odd one up to 13
    assert origin(found) == "table: forces.csv rows 3 to 7, 9, 11, 13"


def test_each_row_of_a_schedule_takes_its_own_rows(tmp_path: Path) -> None:
    project = """\
schedules:
  - file: piers.csv
    template: demo/compression
    mark: Mark
    columns: {b: Width}
    given: {force: {file: forces.csv, where: {Mark: {column: Mark}}, columns: {P_u: {column: Axial, unit: kip}, V: none}}}
"""
    found = worked(tmp_path, project, piers="Mark,Width (in)\nN1,12\nN2,10\n", forces=FORCES)
    assert {mark: force(one) for mark, one in found.items()} == {
        "N1": {"1": ["20 kip", None], "2": ["1,030 kip", None]},
        "N2": {"1": ["8 kip", None]},
    }
    assert origin(found["N2"]) == "table: forces.csv row 4"


PAIRS = """\
calculations:
  - mark: LC1
    title: Combinations
    template: demo/loads
    given:
      section: [{name: foot}, {name: head}]
      load: [{name: D}, {name: W1}]
      P: {file: loads.csv, columns: {section: Place, load: Case, P: Axial}}
      Q: {file: loads.csv, columns: {section: Place, load: Case, Q: {column: Shear, if empty: no row}}}
"""
LOADS = "Place,Case,Axial (kip),Shear (kip)\nfoot,D,10,1\nfoot,W1,4,\nhead,D,9,\nhead,W1,-4,2\n"


def test_pairs(tmp_path: Path) -> None:
    found = worked(tmp_path, PAIRS, loads=LOADS)["LC1"]
    slot = found.plan.by_path["P_u"]
    unit = found.plan.slots[slot].symbol.unit
    assert unit is not None
    factored = {key: value / unit.size for key, value in found.values.rows[slot].items() if isinstance(value, float)}
    # foot: 1.4(10); 1.2(10) + 4; head: 1.4(9); 1.2(9) - 4
    assert factored == pytest.approx({(0, 0): 14, (0, 1): 16, (1, 0): 12.6, (1, 1): 6.8}, rel=1e-12)
    shears = found.plan.by_path["Q"]
    taken = {key: value / unit.size for key, value in found.values.rows[shears].items() if isinstance(value, float)}
    assert taken == pytest.approx({(0, 0): 1, (0, 1): 0, (1, 0): 0, (1, 1): 2})


def test_a_table_is_echoed_once_however_often_it_is_named(tmp_path: Path) -> None:
    found = result(tmp_path, PAIRS, loads=LOADS)
    assert found.worked is not None
    assert [source.name for source in found.worked.project.files] == ["project.yaml", "loads.csv"]


def test_hidden_rows_are_refused_with_their_numbers(tmp_path: Path) -> None:
    def hide(sheet: object) -> None:
        sheet.row_dimensions[3].hidden = True  # type: ignore[attr-defined]

    rows = (("Mark", "Axial (kip)"), ("N1", 20), ("N1", 30), ("N1", 40))
    told = result(
        tmp_path, PIER % "{file: forces.xlsx, columns: {P_u: Axial, V: none}}", forces=book(hide, rows)
    ).problems
    assert [(p.slug, p.found) for p in told] == [("hidden-rows", "row 3")]
    taken = worked(
        tmp_path, PIER % "{file: forces.xlsx, hidden: skip, columns: {P_u: Axial, V: none}}", forces=book(hide, rows)
    )
    assert force(taken["N1"]) == {"1": ["20 kip", None], "2": ["40 kip", None]}


def test_many_choices_from_a_long_table_go_through_it_once(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    from calcreport.read.sheets import SheetRow

    asked = 0
    plain = SheetRow.cell

    def counted(row: SheetRow, index: int) -> object:
        nonlocal asked
        asked += 1
        return plain(row, index)

    monkeypatch.setattr(SheetRow, "cell", counted)
    marks = [f"N{n}" for n in range(1, 201)]
    project = """\
schedules:
  - {file: piers.csv, template: demo/compression, mark: Mark, columns: {b: Width},
     given: {force: {file: forces.csv, where: {Mark: {column: Mark}}, columns: {P_u: Axial, V: none}}}}
"""
    piers = "Mark,Width (in)\n" + "".join(f"{m},12\n" for m in marks)
    forces = "Mark,Axial (kip)\n" + "".join(f"{m},{n}\n" for m in marks for n in (10, 20))
    assert len(worked(tmp_path, project, piers=piers, forces=forces)) == 200
    # 200 calculations from 400 rows: far from 200 times 400 looks
    assert asked < 20_000
