"""The second path agrees on every sample and case, and finds twelve faults planted in the first path."""

from __future__ import annotations

import math
from collections.abc import Callable
from fractions import Fraction
from pathlib import Path

import pytest

from calcreport.calculate import compile as compiled
from calcreport.calculate import evaluate, handing
from calcreport.calculate.model import Worked, WorkedProject
from calcreport.commands.desk import Opened, open_project
from calcreport.core import quantity, units
from calcreport.core.expression import Attach, Expression
from calcreport.core.problems import Problems
from calcreport.driver import make_plan, work
from calcreport.filesystem import Disk, library_folder
from calcreport.read.cases import read_cases
from calcreport.read.library import Library
from calcreport.second.agreement import Agreement, compare_paths
from calcreport.second.quantities import make_quantities

SAMPLES = [path for path in sorted(Path("samples").iterdir()) if (path / "project.yaml").exists()]


def agreement(folder: Path) -> Agreement:
    opened = open_project(str(folder))
    assert isinstance(opened, Opened)
    result = work(opened.world, opened.source)
    assert not result.problems, result.problems
    assert result.worked is not None
    return compare_paths(result.worked)


@pytest.mark.parametrize("folder", SAMPLES, ids=lambda path: path.name)
def test_samples_agree(folder: Path) -> None:
    found = agreement(folder)
    assert found.differences == ()
    assert found.largest < 1e-9
    assert found.values > 50 and found.verdicts >= 4


def test_every_case_of_the_library_agrees() -> None:
    disk = Disk(Path("."), library_folder())
    compared, make = 0, make_quantities()
    for name in disk.template_names():
        source = disk.template_text(f"{name}.cases.yaml")
        assert not isinstance(source, str), name
        problems = Problems()
        library = Library(disk, problems)
        plans = {}
        project = None
        for case in read_cases(name, source, library, problems).cases:
            template = case.calculation.template
            if id(template) not in plans:
                plans[id(template)] = make_plan(template, problems)
            plan = plans[id(template)]
            assert plan is not None
            values = handing.hand_values(case.calculation, plan, {}, problems)
            worked: Worked = evaluate.Program(plan).run(case.calculation, values, "")
            project = WorkedProject(project, (worked,), (0,), "")  # type: ignore[arg-type]
            found = compare_paths(project, make)
            assert found.differences == () and found.largest < 1e-9, (name, case.name)
            compared += found.values
            project = None
        assert not problems
    assert compared > 3000


# ---------------------------------------------------------------- planted faults

TEMPLATE = """\
template: many
title: Many constructs
code: {name: ACI 318, years: ['2019']}
units: [us]
covers: [all]
excludes: []
symbols:
  x: {unit: in, says: a length}
  y: {unit: ft, says: a length}
  f: {unit: psi, says: a stress}
  g: {unit: ksi, says: a stress}
  r: {unit: psi, says: a root}
  s: {unit: in, says: a sum}
  m: {unit: in, says: a maximum}
  p: {unit: in, says: a pick}
  q: {unit: in, says: a difference}
  v: {unit: in^3, says: a power}
  w: {unit: in, says: a rounded length}
  t: {unit: in, says: a length by cases}
  u: {unit: '1', says: a ratio of stresses}
given:
  row: {rows: {x: }, says: rows}
  y:
  f:
  g:
lines:
  - {gives: u, formula: 'f/g', cite: geometry}
  - {gives: r, formula: 'qty(sqrt(num(f, psi)), psi)', cite: geometry}
  - {gives: s, formula: 'sum(x over row)', cite: geometry}
  - {gives: m, formula: 'max(x over row)', cite: geometry}
  - {gives: p, formula: 'pick(x over row where x >= 3 in)', cite: geometry}
  - {gives: q, formula: 'y - s', cite: geometry}
  - {gives: v, formula: 's^3', cite: geometry}
  - {gives: w, formula: 'rounddown(s, 0.5 in)', cite: geometry}
  - {gives: t, cite: geometry, branches: [{when: 's < y', formula: 's/2'}, {otherwise: 's/3'}]}
  - {check: tie, holds: 's <= 12.75 in', cite: geometry}
"""
PROJECT = """\
project: {title: Faults, number: F-1, address: none}
office: {name: (office)}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: IBC, year: 2024, amendments: none}, concrete: ACI 318-19, loads: ASCE/SEI 7-22}
criteria: {risk category: II, seismic design category: A}
revisions: [{number: 1, date: 2026-11-16, why: first}]
calculations:
  - {mark: M1, title: first, template: many, given: {row: [{x: 2.5 in}, {x: 3.25 in}, {x: 7 in}], y: 2 ft, f: 4000 psi, g: 60 ksi}}
  - {mark: M2, title: second, template: many, given: {row: [{x: 2.5 in}, {x: 3.25 in}, {x: 7 in}], y: {from: M1.y}, f: {from: M1.r}, g: 60 ksi}}
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "project.yaml").write_text(PROJECT)
    (tmp_path / "many.yaml").write_text(TEMPLATE)
    return tmp_path


def test_without_a_fault_there_is_no_difference(folder: Path) -> None:
    assert agreement(folder).differences == ()


def _forget() -> None:
    """Let units and amounts be read anew."""
    units.make_unit.cache_clear()
    quantity._known.cache_clear()


def _factor(patch: pytest.MonkeyPatch) -> None:
    table = dict(units._TABLE)
    table["ksi"] = (table["ksi"][0] * Fraction(1001, 1000), table["ksi"][1])
    patch.setattr(units, "_TABLE", table)
    _forget()


def _unit(patch: pytest.MonkeyPatch) -> None:
    real = compiled.formula

    def formula(node: Expression, sets: tuple[tuple[int, ...], ...]) -> object:
        return real(node.body, sets) if isinstance(node, Attach) else real(node, sets)

    patch.setattr(compiled, "formula", formula)
    patch.setattr(evaluate, "formula", formula)


def _branch(patch: pytest.MonkeyPatch) -> None:
    real = compiled.holds
    patch.setattr(
        compiled, "holds", lambda node, a, b, v: not real(node, a, b, v) if node.op == "<" else real(node, a, b, v)
    )


def _over(change: Callable[[str, list[float]], float]) -> Callable[[pytest.MonkeyPatch], None]:
    def plant(patch: pytest.MonkeyPatch) -> None:
        real = compiled._over

        def over(node: object, sets: tuple[tuple[int, ...], ...]) -> object:
            function = node.function  # type: ignore[attr-defined]
            body = compiled.formula(node.body, sets)  # type: ignore[attr-defined]
            usual = real(node, sets)  # type: ignore[arg-type]

            def work(values: object) -> float:
                before = values.open[node.bound]  # type: ignore[attr-defined]
                rows = []
                for row in range(len(values.row_names(node.bound))):  # type: ignore[attr-defined]
                    values.open[node.bound] = row  # type: ignore[attr-defined]
                    rows.append(body(values))  # type: ignore[arg-type]
                values.open[node.bound] = before  # type: ignore[attr-defined]
                changed = change(function, rows)
                return usual(values) if math.isnan(changed) else changed  # type: ignore[arg-type]

            return work

        patch.setattr(compiled, "_over", over)

    return plant


def _sign(patch: pytest.MonkeyPatch) -> None:
    real = compiled._binary
    patch.setattr(compiled, "_binary", lambda op, a, b: real("+" if op == "-" else op, a, b))


def _stale(patch: pytest.MonkeyPatch) -> None:
    real = handing._Hander.link

    def link(self: object, slot: int, linked: object, key: tuple[int, ...]) -> None:
        real(self, slot, linked, key)  # type: ignore[arg-type]
        self.store(slot, key, 0.999 * self.values.get(slot, key))  # type: ignore[attr-defined]

    patch.setattr(handing._Hander, "link", link)


NAN = math.nan
FAULTS: dict[str, tuple[Callable[[pytest.MonkeyPatch], None], str]] = {
    # fault: (how it is planted, the value or check on which the paths must part)
    "factor": (_factor, "M1.u"),
    "unit": (_unit, "M1.r"),
    "branch": (_branch, "M1.t"),
    "look-up row": (_over(lambda f, rows: rows[-1] if f == "pick" else NAN), "M1.p"),
    "sign": (_sign, "M1.q"),
    "power": (lambda p: p.setattr(compiled, "_power", lambda base, exponent: base ** (exponent + 1e-6)), "M1.v"),
    "sum": (_over(lambda f, rows: sum(rows[:-1]) if f == "sum" else NAN), "M1.s"),
    "root": (lambda p: p.setitem(compiled._PLAIN, "sqrt", lambda value: value**0.500001), "M1.r"),
    "governing row": (_over(lambda f, rows: sorted(rows)[-2] if f == "max" else NAN), "M1.m"),
    "rounding": (lambda p: p.setattr(compiled, "_round", lambda value, step, up: math.ceil(value / step) * step), "M1.w"),
    "stale link": (_stale, "M2.y"),
    "tie": (lambda p: p.setattr(compiled, "holds_exactly", lambda node, values: False), "M1.tie"),
}  # fmt: skip


@pytest.mark.parametrize("fault", FAULTS)
def test_a_planted_fault_is_found(fault: str, folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    plant, where = FAULTS[fault]
    with monkeypatch.context() as patch:
        plant(patch)
        try:
            found = agreement(folder)
        finally:
            _forget()
    assert where in {difference.name for difference in found.differences}
