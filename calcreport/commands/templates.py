"""`calcreport templates`: what there is; what one needs, gives, decides and leaves out."""

from __future__ import annotations

from argparse import Namespace
from pathlib import Path

from calcreport.commands.desk import say_problems
from calcreport.core.problems import Problems
from calcreport.driver import make_plan
from calcreport.filesystem import Disk, library_folder
from calcreport.plan.model import Plan, PlannedGiven
from calcreport.read.editions import TemplateHead
from calcreport.read.library import Library


def run(arguments: Namespace) -> int:
    """List the library, or describe one template."""
    disk = Disk(Path("."), library_folder())
    problems = Problems()
    library = Library(disk, problems)
    if arguments.name is None:
        for name in disk.template_names():
            head = library.head(name, None)
            if head is not None:
                print(f"{name:<34} {_editions(head):<28} {head.title}")
        return say_problems(problems.sorted()) if problems else 0
    head = library.head(arguments.name, None)
    if head is None:
        return say_problems(problems.sorted())
    for line in _described(head, library, problems):
        print(line)
    return say_problems(problems.sorted()) if problems else 0


def _editions(head: TemplateHead) -> str:
    code = head.codes[0][1] if head.codes else ""
    return f"{code} {', '.join(head.years)} {'/'.join(head.systems)}"


def _described(head: TemplateHead, library: Library, problems: Problems) -> list[str]:
    system, code = head.codes[0]
    editions = tuple(sorted(((code, head.years[-1] if head.years else ""), ("*", ""))))
    template = library.template(head.name, system, editions, None)
    plan = make_plan(template, problems) if template is not None else None
    if template is None or plan is None:
        return []
    lines = [
        f"{head.name}: {head.title}",
        f"  code      {_editions(head)}",
        f"  decides   {', '.join(plan.covers) or 'nothing; a part of others'}",
        f"  leaves    {', '.join(plan.leaves) or 'nothing named'}",
        "  needs",
    ]
    for given in plan.givens:
        lines += _given(given, plan, "    ")
    gives = [slot.path for slot in plan.slots if not slot.sets]
    lines.append(f"  gives     {', '.join(gives)}")
    return lines


def _given(planned: PlannedGiven, plan: Plan, indent: str) -> list[str]:
    given = planned.given
    if given.kind == "rows":
        inner = [line for column in planned.columns for line in _given(column, plan, indent + "  ")]
        return [f"{indent}{given.name:<14} rows: {given.says}", *inner]
    symbol = plan.slots[planned.slot].symbol
    kind = (
        given.kind
        if given.kind in ("bars", "spaced bars")
        else ", ".join(symbol.words) or (symbol.unit.text if symbol.unit else "")
    )
    notes = [given.range.text] if given.range else []
    notes += ["may be none"] if given.if_none is not None else []
    notes += [f"from material: {given.material}"] if given.material else []
    notes += [f"from the criteria: {given.criterion.name}"] if given.criterion is not None else []
    return [f"{indent}{given.name:<14} {kind:<14} {given.says}{'  (' + '; '.join(notes) + ')' if notes else ''}"]
