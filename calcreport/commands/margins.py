"""`calcreport margins`: how far each given value may move, one at a time, before a verdict flips."""

from __future__ import annotations

import json
from argparse import Namespace

from calcreport.calculate.margins import find_margins, is_judged
from calcreport.calculate.model import MEMBER, Margin, Worked
from calcreport.commands.desk import one_problem, open_project, say_problems
from calcreport.core.problems import nearest
from calcreport.driver import work

#: margins of a check printed, the narrowest first
SHOWN = 4


def run(arguments: Namespace) -> int:
    """Print the narrowest margins of every check."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json)
    result = work(opened.world, opened.source)
    if result.problems or result.worked is None:
        return say_problems(result.problems, arguments.json)
    mark = arguments.mark
    marks = [member.mark for member in result.worked.members]
    marks += [w.calculation.mark for w in result.worked.calculations if w.calculation.members]
    if mark is not None and mark not in marks:
        return say_problems(one_problem("unknown-name", f"there is no calculation `{mark[:40]}`",
                                        "the mark of a calculation or a member", mark[:40],
                                        nearest(mark, marks)), arguments.json)  # fmt: skip
    chosen = [w for w in result.worked.calculations if mark in (None, w.calculation.mark, *w.calculation.members)]
    found = {worked.calculation.mark: (worked, _of(mark, worked)) for worked in chosen}
    if arguments.json:
        print(json.dumps({mark: [_record(m, w) for m in margins] for mark, (w, margins) in found.items()}, indent=1))
    else:
        for mark, (worked, margins) in found.items():
            for line in _lines(mark, worked, margins):
                print(line)
    return 0 if all(worked.verdict == "OK" for worked, _ in found.values()) else 1


def _of(mark: str | None, worked: Worked) -> tuple[Margin, ...]:
    """Return the margins of a calculation, or of the one member asked for."""
    found = find_margins(worked)
    if mark is None or mark not in worked.calculation.members:
        return found
    return tuple(margin for margin in found if margin.check.partition(" ")[0] == mark)


def _lines(mark: str, worked: Worked, margins: tuple[Margin, ...]) -> list[str]:
    lines: list[str] = [] if margins else [f"{mark}  has no check that a given value could flip"]
    for check in dict.fromkeys(margin.check for margin in margins):
        narrow = sorted((m for m in margins if m.check == check and m.share < float("inf")), key=lambda m: m.share)
        own, _, name = check.partition(" ") if worked.calculation.members else (mark, "", check)
        lines.append(f"{own}.{name}" + ("" if narrow else "  no value at hand flips it alone"))
        for margin in narrow[:SHOWN]:
            ways = [_way(worked, margin, end) for end in (margin.lower, margin.upper) if end is not None]
            lines.append(f"  {_name(worked, margin):<12} {' or '.join(ways)}")
    return lines


def _name(worked: Worked, margin: Margin) -> str:
    """Return what a value is called in links and `trace`: 'b', 'layer[first].y'."""
    sets, names = worked.values.sets[margin.slot], ""
    for place, index in enumerate(sets):
        outer = margin.key[: len(worked.values.outer[index])]
        names += f"{worked.plan.sets[index].name}[{worked.values.names[index][outer][margin.key[place]]}]."
    # a member's value stands under its mark
    own = f"{MEMBER}[{margin.check.partition(' ')[0]}]." if worked.calculation.members else ""
    return (names + worked.plan.slots[margin.slot].path).removeprefix(own)


def _way(worked: Worked, margin: Margin, end: float) -> str:
    unit = worked.plan.slots[margin.slot].symbol.unit
    size, name = (unit.size, unit.text) if unit is not None else (1.0, "")
    to = f"to {end / size:.4g}{'' if name == '1' else ' ' + name}"
    # beyond it the template gives no number: no verdict of this check, and no margin either
    to += "" if is_judged(margin, end, worked) else ", where it is no longer judged"
    return f"{(end - margin.value) / abs(margin.value):+.1%} ({to})"


def _record(margin: Margin, worked: Worked) -> dict[str, object]:
    slot = worked.plan.slots[margin.slot]
    size = slot.symbol.unit.size if slot.symbol.unit is not None else 1.0
    ends = [None if end is None else end / size for end in (margin.lower, margin.upper)]
    return {"check": margin.check, "given": _name(worked, margin), "value": margin.value / size,
            "lower": ends[0], "upper": ends[1],
            "unit": slot.symbol.unit.text if slot.symbol.unit is not None else ""}  # fmt: skip
