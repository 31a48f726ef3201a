"""Figures of a template: their kind, and every input bound to a slot, a set, a formula or a word.

A `Drawing` line in, `PlannedFigure` out; what the kinds take is declared in `core.figures`.
"""

from __future__ import annotations

from calcreport.core.figures import FIGURES, needed_inputs
from calcreport.core.problems import listed
from calcreport.plan.handed import Binder
from calcreport.plan.model import PlannedFigure
from calcreport.plan.names import Names
from calcreport.plan.space import Context, Space
from calcreport.read.model import Drawing


def plan_figure(line: Drawing, names: Names, space: Space, at: Context) -> PlannedFigure:
    """Bind a figure; an unknown kind or input, or a missing one, is a problem."""
    kind, problems = line.kind, names.problems
    takes = FIGURES.get(kind.name)
    if takes is None:
        problems.add("not-a-word", kind.span, f"there is no figure `{kind.name[:40]}`", expected=listed(FIGURES),
                     found=kind.name[:40], hint=problems.near(kind.name, FIGURES))  # fmt: skip
        return PlannedFigure(kind.name, (), line.span)
    binder = Binder("figure", line.inputs, names, space, at)
    inputs = binder.bind_all(kind, takes, needed_inputs(kind.name))
    return PlannedFigure(kind.name, inputs, line.span)
