"""What stands in worked lines at any depth: lines of one kind, or the arms taken.

Worked lines in, lists out.
"""

from __future__ import annotations

import math
from typing import TypeVar

from calcreport.calculate.model import (
    WorkedBranches,
    WorkedCheck,
    WorkedEach,
    WorkedGives,
    WorkedLine,
    WorkedPart,
    WorkedText,
    WorkedUnknown,
)

T = TypeVar("T")


def below(lines: tuple[WorkedLine, ...], kind: type[T]) -> list[T]:
    """Return every line of one kind worked in these lines, at any depth, in page order."""
    found: list[T] = []
    for line in lines:
        if isinstance(line, kind):
            found.append(line)
        match line:
            case WorkedPart() | WorkedBranches() | WorkedUnknown():
                found += below(line.lines, kind)
            case WorkedEach():
                for row in line.rows:
                    found += below(row, kind)
            case _:
                pass
    return found


def only_words(lines: tuple[WorkedLine, ...]) -> bool:
    """Tell whether lines come to words alone, which say by themselves what they are of."""
    inner = (only_words(x.lines) if isinstance(x, WorkedBranches) else isinstance(x, WorkedText) for x in lines)
    return bool(lines) and all(inner)


def severity(check: WorkedCheck) -> float:
    """Return a check's ratio for ranking; one that fails without a ratio outranks any ratio."""
    if check.ratio is not None:
        return check.ratio
    return math.inf if check.verdict == "NG" else -1.0


def arms_below(lines: tuple[WorkedLine, ...]) -> tuple[tuple[int, int], ...]:
    """Return the arm taken by every line and block that has several, in page order: alike where the path is."""
    found: list[tuple[int, int]] = []
    for line in lines:
        match line:
            case WorkedGives() if len(line.line.arms) > 1:
                found.append((id(line.line), line.arm))
            case WorkedBranches():
                found += [(id(line.line), line.arm), *arms_below(line.lines)]
            case WorkedPart() | WorkedUnknown():
                found += arms_below(line.lines)
            case WorkedEach():
                for row in line.rows:
                    found += arms_below(row)
            case _:
                pass
    return tuple(found)
