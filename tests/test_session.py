"""A project kept open gives the bytes of a build that begins with nothing, whatever was changed before.

The expected bytes and problems are those of a fresh build of the same files, by a process of reading, planning, working
and laying out in which nothing is kept.
"""

from __future__ import annotations

import gc
import re
import shutil
from collections.abc import Callable, Iterator
from pathlib import Path
from random import Random

import pytest

from calcreport.core.kept import FRESH, Kept, same
from calcreport.core.problems import render
from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder
from calcreport.publish import Package, build
from calcreport.session import Reading, Session

SAMPLE = Path(__file__).parents[1] / "samples" / "mill-lane"
_NUMBER = re.compile(r"(?<![\w.#-])[1-9][0-9]?(?![\w.,-])")


class _Project:
    """A copy of a sample with a library of its own, built both ways after every change."""

    def __init__(self, folder: Path) -> None:
        self.folder, self.library = folder / "project", folder / "library"
        shutil.copytree(SAMPLE, self.folder)
        shutil.copytree(library_folder(), self.library)
        self.session = Session()

    def reading(self) -> Reading:
        return Reading(self.folder / "project.yaml", Disk(self.folder, self.library))

    def both(self) -> Package:
        """Build in the session and afresh; hold problems and bytes against one another."""
        reading = self.reading()
        source, other = reading.project(), self.reading().project()
        assert isinstance(source, Source) and isinstance(other, Source)
        found = self.session.build(reading, source)
        fresh = build(Disk(self.folder, self.library), other)
        assert [render(p) for p in found.problems] == [render(p) for p in fresh.problems]
        assert found.data == fresh.data
        return found

    def edit(self, file: str, change: Callable[[str], str]) -> None:
        path = (self.library if "/" in file else self.folder) / file
        text = path.read_text("utf-8")
        changed = change(text)
        assert changed != text
        path.write_text(changed, "utf-8")

    def swap(self, file: str, old: str, new: str) -> None:
        self.edit(file, lambda text: text.replace(old, new, 1))


@pytest.fixture
def project(tmp_path: Path) -> Iterator[_Project]:
    # as the command line does: packages are large trees without circles, and are kept here by the dozen
    gc.disable()
    yield _Project(tmp_path)
    gc.enable()


def _slip(random: Random, text: str) -> str:
    """Change a number, or move, double or drop a line: what happens while a file is edited."""
    lines = text.split("\n")
    place = random.randrange(len(lines))
    match random.choice(("number", "number", "number", "number", "blank", "drop", "double", "move")):
        case "number":
            found = random.choice([*_NUMBER.finditer(text), *re.finditer("$", text)])
            if not found[0]:
                return f"{text}# a remark\n"
            return f"{text[: found.start()]}{int(found[0]) + random.choice((1, 2))}{text[found.end() :]}"
        case "blank":
            return "\n".join([*lines[:place], "", "# a remark", *lines[place:]])
        case "drop":
            return "\n".join([*lines[:place], *lines[place + 1 :], ""])
        case "double":
            return "\n".join([*lines[: place + 1], lines[place], *lines[place + 1 :]])
        case _:
            rest = [*lines[:place], *lines[place + 1 :]]
            rest.insert(random.randrange(len(rest)), lines[place])
            return "\n".join([*rest, ""])


@pytest.mark.parametrize("seed", range(2))
def test_any_sequence_of_edits_gives_the_bytes_of_a_fresh_build(project: _Project, seed: int) -> None:
    random = Random(seed)
    files = ("project.yaml", "project.yaml", "project.yaml", "level-2.yaml", "beam-seat.yaml",
             "aci318/beam-flexure.yaml", "aci318/symbols.yaml", "aci318/bars-us.yaml", "codes.yaml")  # fmt: skip
    assert project.both().data
    built = spared = 0
    for _ in range(7):
        file = random.choice(files)
        path = (project.library if "/" in file or file == "codes.yaml" else project.folder) / file
        before = path.read_text("utf-8")
        path.write_text(_slip(random, before), "utf-8")
        found = project.both()
        if found.data:
            built += 1
            assert found.worked is not None
            spared += len(project.session.worked) < len(found.worked.calculations)
        else:
            # the save that mends it
            path.write_text(before, "utf-8")
            assert project.both().data
    # neither may pass by seeing nothing
    assert built >= 2 and spared >= 1


def test_only_what_rests_on_a_change_is_worked_again(project: _Project) -> None:
    project.both()
    assert len(project.session.worked) == 14
    project.both()
    assert project.session.worked == ()
    project.swap("project.yaml", "calculations:\n", "# a line that moves all places\ncalculations:\n")
    project.both()
    assert project.session.worked == ()
    # the girder FL2 and the seat SE1 carry the beam FL1, B1 and B2 are sections: links of the sample, read in its file
    project.swap("level-2.yaml", "l: 28 ft 6 in", "l: 28 ft 9 in")
    project.both()
    assert set(project.session.worked) == {"FL1", "B1", "FL2", "B2", "SE1"}


def test_a_template_changed_works_its_calculations_again(project: _Project) -> None:
    project.both()
    project.swap("beam-seat.yaml", "title: ", "title: New ")
    found = project.both()
    assert found.worked is not None
    marks = {w.calculation.mark for w in found.worked.calculations}
    seats = {w.calculation.mark for w in found.worked.calculations if w.calculation.template.name == "beam-seat"}
    # a change in any file of the library is a library read anew
    assert seats <= set(project.session.worked) <= marks


def test_problems_stand_where_the_text_stands_now(project: _Project) -> None:
    """A status that lets nothing open pass tells of calculations that were not worked again."""
    project.both()
    project.swap("project.yaml", "calculations:\n", "\n\n\ncalculations:\n")
    project.swap("project.yaml", "status: for review", "status: for permit")
    assert project.both().problems


def test_a_reading_sees_a_save_and_tells_it_from_a_touch(project: _Project) -> None:
    reading = project.reading()
    source = reading.project()
    assert isinstance(source, Source)
    Session().build(reading, source)
    assert reading.touched() == []
    (project.folder / "level-2.yaml").touch()
    assert [path.name for path in reading.touched()] == ["level-2.yaml"]
    assert reading.agrees(reading.again())
    project.swap("level-2.yaml", " in", " mm")
    assert not reading.agrees(reading.again())
    # a template that stood in the library alone now stands beside the project too
    (project.folder / "statics").mkdir()
    (project.folder / "statics" / "simple-beam.yaml").write_text("x", "utf-8")
    assert "simple-beam.yaml" in {path.name for path in reading.touched()}


def test_names_that_lead_outside_are_not_looked_at(project: _Project) -> None:
    reading = project.reading()
    for name in ("../secret.yaml", "/etc/hostname", "a\0b", ""):
        assert isinstance(reading.project_text(name), str)
    assert reading.stamps == {}


def test_kept_hands_out_what_has_the_same_inputs_and_gives_up_what_is_not_asked_for() -> None:
    kept, made = Kept(), []

    def make() -> object:
        made.append(1)
        return object()

    one = object()
    first = kept.of("step", "A", (one, "text", (1, None)), make)
    assert kept.of("step", "A", (one, "text", (1, None)), make) is first
    assert kept.of("step", "A", (object(), "text", (1, None)), make) is not first
    kept.begin()
    kept.end()
    assert kept.of("step", "A", (one, "text", (1, None)), make) is not first
    assert len(made) == 3
    assert FRESH.of("step", "A", (), make) is not FRESH.of("step", "A", (), make)


def test_only_plain_values_are_the_same_by_value() -> None:
    assert same((1, ("a", None)), (1, ("a", None)))
    assert not same((1,), (True,))
    assert not same((1,), (1.0,))
    assert not same((0.0,), (-0.0,))
    assert not same(([],), ([],))
    assert not same((1,), (1, 2))
