"""`calcreport trace`: the tree of lines behind one number."""

from __future__ import annotations

from argparse import Namespace

from calcreport.commands.desk import one_problem, open_project, say_problems
from calcreport.core.problems import nearest
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
    mark, _, symbol = arguments.value.partition(".")
    script = result.composed.scripts.get(mark)
    known = script.worked.plan.by_path if script else result.composed.scripts
    lines = (
        trace_lines(mark, symbol, result.composed.scripts, result.composed.forms) if script and symbol in known else ()
    )
    if not lines:
        hint = nearest(symbol if script else mark, known)
        return say_problems(one_problem("unknown-name", f"there is no value `{arguments.value}`",
                                        "MARK.SYMBOL, such as B1.phiM_n", arguments.value, hint))  # fmt: skip
    for line in lines:
        print(line)
    return 0
