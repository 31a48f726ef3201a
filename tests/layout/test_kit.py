"""The kit: rules across lanes, columns of equals signs, formulas in rows."""

from __future__ import annotations

import pytest
from specimen import m

from calcreport.layout.kit import EQUALS_GAP, HANG, INDENT, Kit
from calcreport.layout.sheet import Lane
from calcreport.report.model import Letters


def test_a_rule_runs_from_lane_rule_to_lane_rule_or_to_a_figure(kit: Kit) -> None:
    text = kit.sheet.text
    assert kit.rule(text, 3.0).points == ((kit.sheet.work, 3.0), (kit.sheet.source, 3.0))
    assert kit.rule(Lane(text.left, 300.0), 3.0).points[1][0] == 306.0  # clear of the figure beside it


def test_equals_signs_stand_behind_the_symbol_column(kit: Kit) -> None:
    assert kit.equals_at(Lane(100.0, 300.0)) == 100.0 + INDENT + 24.0 + EQUALS_GAP


@pytest.mark.parametrize("width", [300.0, 150.0, 90.0, 60.0])
def test_rows_of_a_formula_keep_to_the_width(kit: Kit, width: float) -> None:
    rows = kit.rows(m("1.2 V_D + 1.6 V_L + 0.5 V_S + 1.2 V_{SDL} + 1.6 V_{corridor}"), width)
    for place, row in enumerate(rows):
        assert row.width + (HANG if place else 0.0) <= width + 0.1


def test_letters_get_smaller_only_where_nothing_can_part(kit: Kit) -> None:
    word = Letters("averylongwordwithoutanybreakinit")
    whole = kit.math(word)
    (row,) = kit.rows(word, 0.75 * whole.width)
    assert row.width < 0.75 * whole.width
    assert kit.rows(word, whole.width)[0] is whole
