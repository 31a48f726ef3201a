"""Works all calculations of a project in the order their links ask for.

`Inputs` and plans in, `WorkedProject` out. A link that is missing, in the wrong unit or in a circle is a problem
and poisons the calculations that stand on it, not the others.
"""

from __future__ import annotations

import hashlib
import re
from collections.abc import Callable
from dataclasses import replace
from functools import partial

from calcreport.calculate.basis import fingerprint, links_of, rests_on
from calcreport.calculate.evaluate import Program
from calcreport.calculate.exact import exact_or_float
from calcreport.calculate.handing import hand_values
from calcreport.calculate.linking import find_path, hold_at, resolve_rows
from calcreport.calculate.model import (
    Calculation,
    GivenPairs,
    GivenRows,
    GivenValue,
    Inputs,
    Key,
    LinkedRows,
    LinkedValue,
    Plan,
    Worked,
    WorkedProject,
)
from calcreport.calculate.selection import select
from calcreport.core.kept import FRESH, Fresh
from calcreport.core.problems import Problems, listed
from calcreport.core.source import Span
from calcreport.core.units import dimension_words


def work_project(
    inputs: Inputs,
    plans: dict[int, Plan],
    problems: Problems,
    progress: Callable[[int, int], None],
    kept: Fresh = FRESH,
) -> WorkedProject:
    """Work every calculation; `plans` are by the identity of the template."""
    calculations = inputs.calculations
    by_mark = {calculation.mark: place for place, calculation in enumerate(calculations)}
    order = _order(calculations, by_mark, problems)
    programs: dict[int, Program] = {}
    worked: dict[str, Worked] = {}
    for number, place in enumerate(order, 1):
        calculation = calculations[place]
        plan = plans.get(id(calculation.template))
        if plan is None or not _hold_marks(calculation, worked, by_mark, inputs.poisoned, problems):
            continue
        before = problems.met
        calculation = _with_rows(calculation, worked, problems)
        if problems.met > before or not _hold_links(calculation, worked, problems):
            continue
        program = programs.get(id(plan)) or kept.of("program", id(plan), (plan,), partial(Program, plan))
        programs[id(plan)] = program
        found = kept.of("work", calculation.mark, (program, *rests_on(calculation, worked)),
                        partial(_work, calculation, program, worked, problems))  # fmt: skip
        if found is not None:
            worked[calculation.mark] = _placed(found, calculation)
        progress(number, len(order))
    done = tuple(worked[c.mark] for c in calculations if c.mark in worked)
    place_of = {w.calculation.mark: place for place, w in enumerate(done)}
    places = tuple(place_of[calculations[p].mark] for p in order if calculations[p].mark in worked)
    _hold_dispositions(inputs, done, problems)
    whole = hashlib.sha256("\n".join(w.fingerprint for w in done).encode())
    for source in inputs.project.files:
        whole.update(source.text.encode())
    return WorkedProject(inputs.project, done, places, whole.hexdigest()[:16])


def _work(calculation: Calculation, program: Program, worked: dict[str, Worked], problems: Problems) -> Worked | None:
    """Work one calculation, with the candidate that serves where there are some; None after adding a problem."""

    def run(settled: Calculation) -> Worked | None:
        before = problems.met
        values = hand_values(settled, program.plan, worked, problems)
        if problems.met > before:
            return None
        return program.run(settled, values, fingerprint(settled, calculation, worked))

    return select(calculation, run, program.plan.least) if calculation.candidates else run(calculation)


def _placed(found: Worked, calculation: Calculation) -> Worked:
    """Return what was worked at the calculation's place in the file: it may have moved though nothing it says has."""
    selection = found.selection
    return replace(found, calculation=calculation.taking(selection.used) if selection is not None else calculation)


def _order(calculations: tuple[Calculation, ...], by_mark: dict[str, int], problems: Problems) -> list[int]:
    """Return the places in an order in which every link points back; circles are problems."""
    order: list[int] = []
    state: dict[int, int] = {}

    def visit(place: int, path: list[int]) -> None:
        stack = [(place, iter(_needed(calculations[place], by_mark)))]
        state[place] = 1
        path.append(place)
        while stack:
            at, needed = stack[-1]
            step = next(needed, None)
            if step is None:
                state[at] = 2
                order.append(at)
                stack.pop()
                path.pop()
            elif state.get(step[0]) == 1:
                circle = [calculations[p].mark for p in path[path.index(step[0]) :]]
                problems.add(
                    "link-loop",
                    step[1],
                    "links go in a circle",
                    expected="links that lead back to given values",
                    found=" → ".join([*circle, circle[0]]),
                )
            elif step[0] not in state:
                state[step[0]] = 1
                path.append(step[0])
                stack.append((step[0], iter(_needed(calculations[step[0]], by_mark))))

    for place in range(len(calculations)):
        if place not in state:
            visit(place, [])
    return order


def _asked(calculation: Calculation) -> list[LinkedValue | LinkedRows]:
    """Return all that a calculation takes from others: values, and whole sets of rows."""
    rows = [value.linked for value in calculation.handed if isinstance(value, GivenRows) and value.linked is not None]
    return [*(link for _, link in links_of(calculation)), *rows]


def _needed(calculation: Calculation, by_mark: dict[str, int]) -> list[tuple[int, Span]]:
    return [(by_mark[link.mark], link.span) for link in _asked(calculation) if link.mark in by_mark]


def _hold_marks(
    calculation: Calculation,
    worked: dict[str, Worked],
    by_mark: dict[str, int],
    poisoned: frozenset[str],
    problems: Problems,
) -> bool:
    """Tell whether every calculation that values are taken from is there, and was worked."""
    good = True
    for link in _asked(calculation):
        if link.mark in by_mark or link.mark in poisoned:
            good = good and link.mark in worked
            continue
        problems.add("unknown-name", link.span, f"there is no calculation `{link.mark[:40]}`",
                     expected="the mark of a calculation of this project", found=link.mark[:40],
                     hint=problems.near(link.mark, by_mark))  # fmt: skip
        good = False
    return good


def _with_rows(calculation: Calculation, worked: dict[str, Worked], problems: Problems) -> Calculation:
    """Return a calculation whose rows taken from others stand as links, cell by cell."""

    def resolved(value: GivenValue | GivenRows | GivenPairs) -> GivenValue | GivenRows | GivenPairs:
        linked = value.linked if isinstance(value, GivenRows) else None
        if isinstance(value, GivenRows) and linked is not None and hold_at(linked, worked[linked.mark], problems):
            return resolve_rows(value, linked, worked[linked.mark], problems) or value
        return value

    return calculation.changed(resolved)


def _hold_links(calculation: Calculation, worked: dict[str, Worked], problems: Problems) -> bool:
    """Tell whether every link of a calculation leads to a value of the right dimension."""
    good = True
    for value, link in links_of(calculation):
        source = worked[link.mark]
        place = find_path(source, link.path, link.span, problems)
        good = place is not None and _fits(value, link, source, place, problems) and good
    return good


def _fits(value: GivenValue, link: LinkedValue, source: Worked, place: tuple[int, Key], problems: Problems) -> bool:
    """Hold a linked value against the declaration it fills: dimension or words, count, range."""
    given, found = value.given, source.values.get(*place)
    wanted, symbol = given.symbol, source.plan.slots[place[0]].symbol
    name = f"`{link.mark}.{link.path}`"
    if wanted is None or wanted.unit is None or symbol.unit is None:
        words = wanted.words if wanted else ()
        if isinstance(found, str) and found in words:
            return True
        expected = listed(words) if words else dimension_words(wanted.unit.dimension) if wanted and wanted.unit else ""
        shown = found if isinstance(found, str) else "a quantity"
        problems.add(
            "unit-mismatch", link.span, f"{name} is not what `{given.name}` takes", expected=expected, found=shown
        )
        return False
    if wanted.unit.dimension != symbol.unit.dimension:
        problems.add(
            "unit-mismatch",
            link.span,
            f"{name} is not what `{given.name}` takes",
            expected=f"{dimension_words(wanted.unit.dimension)} for {given.name}",
            found=dimension_words(symbol.unit.dimension),
        )
        return False
    exact = exact_or_float(*place, source.values)
    if wanted.kind == "count" and (exact < 0 or exact.denominator != 1):
        problems.add(
            "not-a-number", link.span, f"`{given.name}` is a count", expected="a whole number, 0 or more", found=name
        )
        return False
    if given.range is None or given.range.holds(exact):
        return True
    problems.add(
        "out-of-range",
        link.span,
        f"{name} is outside what the template covers",
        expected=given.range.words(given.name),
        found=f"{float(exact / symbol.unit.scale):.6g} {symbol.unit.text}",
        related=((given.range.span, "the template states the range"),),
    )
    return False


def _hold_dispositions(inputs: Inputs, kept: tuple[Worked, ...], problems: Problems) -> None:
    """Hold every word of the engineer against a check or a limit state that is there."""
    whole = not inputs.poisoned and len(kept) == len(inputs.calculations)
    members = tuple(member for w in kept for member in w.members)
    marks = {mark for w in kept for mark in (w.calculation.mark, *(member.mark for member in w.members))}
    checks = {f"{member.mark}.{check.line.name}" for member in members for check in member.checks}
    states = {state for w in kept for state in w.plan.leaves}
    states |= {f"{w.calculation.mark} {state}" for w in kept for state in w.plan.leaves}
    states |= {f"{w.calculation.member} {state}" for w in kept for state in w.plan.leaves}
    for disposition in inputs.project.dispositions:
        name, known = (disposition.check, checks) if disposition.check else (disposition.limit_state, states)
        # a calculation that was not worked may hold what is named
        if not whole and re.split(r"[. ]", name, maxsplit=1)[0] not in marks:
            continue
        if name and name not in known:
            problems.add(
                "unknown-name",
                disposition.span.part(0, 1),
                f"nothing here is called `{name[:60]}`",
                expected="MARK.check, or a limit state a template leaves out, alone or after a mark",
                found=name[:60],
                hint=problems.near(name, known),
            )
