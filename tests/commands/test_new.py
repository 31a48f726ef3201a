"""`new --template`: a template and its cases that lint clean, never over a file that stands there."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.commands.desk import names, run


def test_a_new_template_lints_clean_and_its_cases_reach_all_of_it(tmp_path: Path) -> None:
    file = tmp_path / "deep-footing.yaml"
    ran = run("new", "--template", str(file))
    assert ran.code == 0
    assert ran.out == f"{file} and deep-footing.cases.yaml are ready: edit both, then run  calcreport lint {file}\n"
    assert names(tmp_path) == ["deep-footing.cases.yaml", "deep-footing.yaml"]
    assert "\ntemplate: deep-footing  " in file.read_text()
    ran = run("lint", str(file), "--strict")
    assert ran.code == 0 and ran.out == "deep-footing: no problems in us 2019; 3 cases agree\n"


@pytest.mark.parametrize("there", ["foot.yaml", "foot.cases.yaml"])
def test_nothing_is_overwritten_and_nothing_half_written(tmp_path: Path, there: str) -> None:
    (tmp_path / there).write_text("mine")
    ran = run("new", "--template", str(tmp_path / "foot.yaml"))
    assert ran.code == 2 and f"{there} stands there already" in ran.err and "nothing was written" in ran.err
    assert names(tmp_path) == [there] and (tmp_path / there).read_text() == "mine"


def test_a_link_is_not_followed(tmp_path: Path) -> None:
    (tmp_path / "foot.cases.yaml").symlink_to(tmp_path / "elsewhere.yaml")
    assert run("new", "--template", str(tmp_path / "foot.yaml")).code == 2
    assert names(tmp_path) == ["foot.cases.yaml"]


@pytest.mark.parametrize("name", ["foot.yml", "foot.cases.yaml", "my foot.yaml", "1.yaml", ".yaml", "foot"])
def test_names_that_no_project_could_write(tmp_path: Path, name: str) -> None:
    ran = run("new", "--template", str(tmp_path / name))
    assert ran.code == 2 and "a file name of letters, digits and hyphens that ends in .yaml" in ran.err
    assert names(tmp_path) == []


def test_a_folder_that_is_not_there(tmp_path: Path) -> None:
    ran = run("new", "--template", str(tmp_path / "rules" / "foot.yaml"))
    assert ran.code == 2 and "make the folder first" in ran.err
    assert names(tmp_path) == []


def test_one_of_the_two_must_be_told(tmp_path: Path) -> None:
    assert run("new").code == 2
    assert run("new", str(tmp_path / "a"), "--template", str(tmp_path / "b.yaml")).code == 2
    assert names(tmp_path) == []
