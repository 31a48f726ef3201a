"""The values file against its schema, and the numbers in it against a hand sum."""

from __future__ import annotations

import json
from pathlib import Path

import jsonschema
import pytest

from calcreport.__main__ import main
from calcreport.commands.desk import Opened, open_project
from calcreport.history.accounts import placed_entries
from calcreport.publish import package_values, report
from calcreport.report import valuesfile

SCHEMA = Path(valuesfile.__file__).with_name("values.schema.json")


@pytest.fixture(scope="module")
def values(tmp_path_factory: pytest.TempPathFactory) -> dict:  # type: ignore[type-arg]
    from contextlib import redirect_stdout
    from io import StringIO

    out = StringIO()
    with redirect_stdout(out):
        assert main(["values", "samples/mill-lane", "--json"]) in (0, 1)
    found = json.loads(out.getvalue())
    assert isinstance(found, dict)
    return found


def test_schema(values: dict) -> None:  # type: ignore[type-arg]
    jsonschema.validate(values, json.loads(SCHEMA.read_text()))


def test_every_line_that_gives_a_number_shows_it(values: dict) -> None:  # type: ignore[type-arg]
    for calculation in values["calculations"].values():
        assert calculation["sheets"] >= 1
        for line in calculation["lines"]:
            if isinstance(line["value"], float) and "×" not in line["shown"]:
                shown = float(line["shown"].replace(",", "").replace("−", "-"))
                # half a unit of the last printed digit
                places = len(line["shown"].partition(".")[2])
                assert abs(shown - line["value"]) <= 0.5000001 * 10**-places, line


def test_ratio_is_demand_over_capacity(values: dict) -> None:  # type: ignore[type-arg]
    judged = 0
    for calculation in values["calculations"].values():
        for check in calculation["checks"]:
            if check["kind"] == "demand / capacity" and check["ratio"] is not None:
                assert check["ratio"] == pytest.approx(max(check["demand"], 0) / check["capacity"], rel=1e-12)
                judged += 1
    assert judged


def test_every_line_of_an_account_stands_in_the_file() -> None:
    """What `placed_entries` yields and what the file lists are one, however the sheets tell it."""
    opened = open_project("samples/mill-lane")
    assert isinstance(opened, Opened)
    package = report(opened.world, opened.source)
    assert package.worked is not None
    found = json.loads(package_values(package))["calculations"]
    for worked in package.worked.calculations:
        one = found[worked.calculation.mark]
        listed = [(line["kind"], line["path"], line.get("again", 1)) for line in one["lines"]]
        listed += [("check", check["path"], check.get("again", 1)) for check in one["checks"]]
        assert sorted(listed) == sorted(entry.identity for entry, _ in placed_entries(worked))
        assert len(set(listed)) == len(listed)
