"""What a body says of the names it gives, held against those its lines give.

A body and its name space in; `unknown-name` and `wrong-shape` out, and the slot that candidates are told apart by.
"""

from __future__ import annotations

from calcreport.core.problems import Problems
from calcreport.plan.model import Slot
from calcreport.plan.space import Space
from calcreport.read.model import PartBody


def hold_gives(body: PartBody, space: Space, problems: Problems) -> None:
    """Hold the names a body says it gives against those its lines give."""
    for name in body.gives:
        if name.name not in space.names and not space.is_told(name.name):
            problems.add("unknown-name", name.span, f"no line gives `{name.name[:40]}`",
                         expected="a name that the lines give in every branch", found=name.name[:40],
                         hint=problems.near(name.name, space.names))  # fmt: skip


def least_slot(body: PartBody, space: Space, problems: Problems) -> int:
    """Return the slot of the value that is to be least among candidates of one preference, -1 for none."""
    name = body.least
    if name is None or space.is_told(name.name):
        return -1
    found = space.names.get(name.name)
    if isinstance(found, Slot) and found.symbol.unit is not None and not found.sets and not found.may_be_absent:
        return found.index
    problems.add("wrong-shape", name.span, f"`{name.name[:40]}` cannot be the least among candidates",
                 expected="one number that the lines give in every branch", found=name.name[:40],
                 hint=problems.near(name.name, space.names) if found is None else "")  # fmt: skip
    return -1
