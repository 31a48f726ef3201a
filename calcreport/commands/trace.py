"""`calcreport trace`: the tree of lines behind one number."""

from __future__ import annotations

from argparse import Namespace

from calcreport.calculate.linking import find_path
from calcreport.calculate.model import MEMBER
from calcreport.commands.desk import one_problem, open_project, say_problems
from calcreport.core.problems import Problems, nearest
from calcreport.core.source import Source, Span
from calcreport.publish import report
from calcreport.report.traced import trace_lines


def run(arguments: Namespace) -> int:
    """Print the tree for MARK.SYMBOL."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened)
    result = report(opened.world, opened.source)
    if result.composed is None:
        return say_problems(result.problems)
    composed = result.composed
    mark, _, path = arguments.value.partition(".")
    if mark not in composed.scripts:
        shared = next((m for s in composed.scripts.values() for m in s.worked.members if m.mark == mark), None)
        known = [member.mark for script in composed.scripts.values() for member in script.worked.members]
        if shared is None:
            return _say_none(arguments.value, nearest(mark, known))
        plan = shared.worked.plan
        slot = plan.by_path.get(path.rpartition("].")[2])
        # what like members have in common has no rows
        path = path if slot is not None and not plan.slots[slot].sets else f"{MEMBER}[{mark}].{path}"
        mark = shared.worked.calculation.mark
    worked = composed.scripts[mark].worked
    typed = Span(Source("MARK.SYMBOL", arguments.value), 0, len(arguments.value))
    problems = Problems()
    place = find_path(worked, path, typed, problems)
    if place is None:
        return say_problems(problems.sorted())
    for line in trace_lines(mark, *place, composed.scripts, composed.forms):
        print(line)
    return 0


def _say_none(value: str, hint: str) -> int:
    expected = "MARK.SYMBOL, such as B1.phiM_n"
    return say_problems(one_problem("unknown-name", f"there is no value `{value}`", expected, value, hint))
