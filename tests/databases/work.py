"""Works a template for given values, by the engine: values as typed in, results out in the units asked for."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

from calcreport.calculate.evaluate import Program
from calcreport.calculate.handing import hand_values
from calcreport.calculate.linking import find_path
from calcreport.calculate.model import Plan
from calcreport.core.problems import Problems, render
from calcreport.core.source import Source
from calcreport.driver import make_plan
from calcreport.filesystem import Disk
from calcreport.read.cases import read_cases
from calcreport.read.library import Library

#: given values and properties of materials as a project would type them
Typed: TypeAlias = str


@dataclass(frozen=True, slots=True)
class Asked:
    """One working of a template in SI: what is given, and the path and unit size of what is wanted."""

    template: str
    year: str
    given: Typed
    materials: Typed
    #: path of a value, and its unit in base units: 0.001 for mm
    wanted: tuple[tuple[str, float], ...]


class Refused(Exception):
    """The template stops; the message is its requirement."""


class Bench:
    """The library, and each template planned once."""

    def __init__(self, world: Disk) -> None:
        self.problems = Problems()
        self.library = Library(world, self.problems)
        self.plans: dict[tuple[str, str], Plan] = {}

    def work(self, asked: Asked) -> tuple[float, ...]:
        """Return what is wanted; raises `Refused` where the template stops, ValueError where it is asked wrongly."""
        text = (
            f"- case: a specimen\n  units: si\n  year: '{asked.year}'\n  given: {{{asked.given}}}\n"
            f"  materials: {{{asked.materials}}}\n  stops: {{line: none, source: none}}\n"
        )
        source = Source("specimen", text)
        cases = read_cases(asked.template, source, self.library, self.problems).cases
        self._hold()
        calculation = cases[0].calculation
        key = (asked.template, asked.year)
        plan = self.plans.get(key) or make_plan(calculation.template, self.problems)
        self._hold()
        assert plan is not None
        self.plans[key] = plan
        worked = Program(plan).run(calculation, hand_values(calculation, plan, {}, self.problems), "")
        if worked.stop:
            raise Refused(worked.stop.words)
        found: list[float] = []
        for path, size in asked.wanted:
            place = find_path(worked, path, cases[0].span, self.problems)
            self._hold()
            value = worked.values.get(*place) if place is not None else None
            assert isinstance(value, float), path
            found.append(value / size)
        return tuple(found)

    def _hold(self) -> None:
        if self.problems:
            raise ValueError(render(self.problems.sorted()[0]))
