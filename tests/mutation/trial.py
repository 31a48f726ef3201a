"""One mutant put to the cases: refused by the planner, noticed by a case with an outside source, or not.

A mutant and the shelf in, its fate out. A mutant lives in every template that holds the rule; its own cases come
first, and only those in which an altered line comes to something else are worked.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal, TypeAlias

from calcreport.calculate.evaluate import Program
from calcreport.calculate.handing import hand_values
from calcreport.calculate.model import Calculation
from calcreport.core.problems import Problems
from calcreport.core.record import replace
from calcreport.driver import make_plan
from calcreport.plan.dimensions import hold_dimensions
from calcreport.plan.link import link
from calcreport.plan.model import Plan
from calcreport.plan.proofs import prove_cited
from calcreport.read.model import Template

from .formulas import Apply
from .judge import STOP, missed
from .places import Key, altered
from .shelf import Held, Shelf, Variant
from .sources import OUTSIDE
from .standing import Standing

#: 'own' is noticed only by expectations whose source is no outside one; 'no mutant' names a thing not visible there
Fate: TypeAlias = Literal["killed", "refused", "own", "survived", "no mutant"]

#: what the planner says of a name that is not visible, wherever in a stretch of a formula it stands
_HIDDEN = ("used-before-given", "row-leak")


@dataclass(frozen=True, slots=True)
class Mutant:
    """One slip at one place of one file."""

    #: template whose file it stands in
    file: str
    key: Key
    line: str
    formula: str
    says: str
    apply: Apply
    #: it names another thing: where the planner refuses, that thing is not visible
    renames: bool = False
    #: it alters an equation cited, which no case sees: the planner proves it
    cited: bool = False
    #: it alters what a case hands over, not a rule: `apply` takes a calculation
    handed: bool = False
    #: where its formula begins in its file
    start: int = 0


@dataclass(slots=True)
class Trial:
    """Puts mutants to the cases of a shelf; the case that noticed last is asked first."""

    shelf: Shelf
    last: dict[str, Held]
    standing: dict[int, Standing]
    #: names that a stretch of a formula does not see
    hidden: dict[tuple[object, ...], str]

    def fate(self, mutant: Mutant) -> tuple[Fate, str]:
        """Return what became of a mutant, and the case or problem that noticed it."""
        own, stretch = "", _stretch(mutant)
        if stretch in self.hidden:
            return "no mutant", self.hidden[stretch]
        readers = self.shelf.readers(mutant.file) if mutant.handed else self.shelf.users(mutant.file, mutant.key)
        for variant in readers:
            plan, why = planned(variant, mutant)
            if plan is None:
                if stretch and why in _HIDDEN:
                    self.hidden[stretch] = why
                return ("no mutant" if mutant.renames else "refused"), why
            program, standing = Program(plan), self.standing_of(variant)
            pairs = None if mutant.handed else standing.altered(plan)
            for held in self.ordered(variant):
                seen = "perhaps" if mutant.handed else standing.seen(held, pairs, program)
                if seen == "no":
                    continue
                if seen == "missed":
                    self.last[variant.words + variant.name] = held
                    return "killed", f"{variant.name}: {held.case.name}"
                handed = mutant.apply(held.case.calculation) if mutant.handed else held.case.calculation
                if mutant.handed and handed is held.case.calculation:
                    continue
                kind = noticed(held, handed, program)
                if kind in OUTSIDE:
                    self.last[variant.words + variant.name] = held
                    return "killed", f"{variant.name}: {held.case.name}"
                own = own or (f"{variant.name}: {held.case.name}" if kind else "")
        return ("own", own) if own else ("survived", "")

    def standing_of(self, variant: Variant) -> Standing:
        """Return a variant as it stands, planned when first asked for."""
        found = self.standing.get(id(variant))
        if found is None:
            found = self.standing[id(variant)] = Standing(variant)
        return found

    def ordered(self, variant: Variant) -> Iterator[Held]:
        """Yield the cases of a variant, the one that noticed last first."""
        first = self.last.get(variant.words + variant.name)
        if first is not None:
            yield first
        yield from (held for held in variant.cases if held is not first)


def _stretch(mutant: Mutant) -> tuple[object, ...]:
    """Return what all names of one stretch of a formula share, with the name taken; () for what names nothing else.

    What such a stretch sees does not depend on which of its names is taken for another: a stretch is what stands
    under the same rows.
    """
    file, _, _, kind, steps = mutant.key
    if not mutant.renames or kind != "Name":
        return ()
    parts = [number for number, step in enumerate(steps) if step in ("body", "where", "otherwise")]
    other = mutant.says.split(" → ")[1].split()[0]
    return file, mutant.start, steps[: parts[-1] + 1] if parts else (), other


def planned(variant: Variant, mutant: Mutant) -> tuple[Plan | None, str]:
    """Return the plan of a template with a mutant in it, or the problem that the planner finds."""
    if mutant.handed:
        return make_plan(variant.template, Problems()), ""
    body = variant.template.body
    for steps in variant.steps[mutant.key]:
        body = altered(body, steps, mutant.apply)
    template: Template = replace(variant.template, body=body)
    problems = Problems()
    plan = link(template, problems)
    if not problems:
        hold_dimensions(plan, problems)
    if mutant.cited and not problems:
        prove_cited(plan, problems)
    found = problems.sorted()
    return (None, found[0].slug) if found else (plan, "")


def noticed(held: Held, calculation: Calculation, program: Program) -> str:
    """Return the kind of source that notices, an outside one if any does, or ''."""
    problems = Problems()
    values = hand_values(calculation, program.plan, {}, problems)
    assert not problems, "what a case gives does not depend on the rules"
    worked = program.run(calculation, values, "")
    best = ""
    for number in missed(held.case, worked):
        kind = held.stop_kind if number == STOP else held.kinds[number]
        if kind in OUTSIDE:
            return kind
        best = kind
    return best
