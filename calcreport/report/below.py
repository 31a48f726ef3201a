"""What stands in worked lines at any depth: checks, values, unknowns, figures, methods.

Worked lines in, lists of one kind out.
"""

from __future__ import annotations

import math

from calcreport.calculate.model import (
    WorkedBranches,
    WorkedCheck,
    WorkedEach,
    WorkedFigure,
    WorkedGives,
    WorkedLine,
    WorkedMethod,
    WorkedPart,
    WorkedUnknown,
)


def checks_below(lines: tuple[WorkedLine, ...]) -> list[WorkedCheck]:
    """Return every check worked in these lines, at any depth."""
    found: list[WorkedCheck] = []
    for line in lines:
        match line:
            case WorkedCheck():
                found.append(line)
            case WorkedPart() | WorkedBranches() | WorkedUnknown():
                found += checks_below(line.lines)
            case WorkedEach():
                for row in line.rows:
                    found += checks_below(row)
    return found


def severity(check: WorkedCheck) -> float:
    """Return a check's ratio for ranking; one that fails without a ratio outranks any ratio."""
    if check.ratio is not None:
        return check.ratio
    return math.inf if check.verdict == "NG" else -1.0


def gives_below(lines: tuple[WorkedLine, ...]) -> list[WorkedGives]:
    """Return every line worked in these lines, at any depth."""
    found: list[WorkedGives] = []
    for line in lines:
        match line:
            case WorkedGives():
                found.append(line)
            case WorkedPart() | WorkedBranches() | WorkedUnknown():
                found += gives_below(line.lines)
            case WorkedEach():
                for row in line.rows:
                    found += gives_below(row)
    return found


def unknowns_below(lines: tuple[WorkedLine, ...]) -> list[WorkedUnknown]:
    """Return every unknown found in these lines, at any depth."""
    found: list[WorkedUnknown] = []
    for line in lines:
        match line:
            case WorkedUnknown():
                found += [line, *unknowns_below(line.lines)]
            case WorkedPart() | WorkedBranches():
                found += unknowns_below(line.lines)
            case WorkedEach():
                for row in line.rows:
                    found += unknowns_below(row)
    return found


def figures_below(lines: tuple[WorkedLine, ...]) -> list[WorkedFigure]:
    """Return every figure in these lines, at any depth."""
    found: list[WorkedFigure] = []
    for line in lines:
        match line:
            case WorkedFigure():
                found.append(line)
            case WorkedPart() | WorkedBranches() | WorkedUnknown():
                found += figures_below(line.lines)
            case WorkedEach():
                for row in line.rows:
                    found += figures_below(row)
    return found


def methods_below(lines: tuple[WorkedLine, ...]) -> list[WorkedMethod]:
    """Return every method worked in these lines, at any depth."""
    found: list[WorkedMethod] = []
    for line in lines:
        match line:
            case WorkedMethod():
                found.append(line)
            case WorkedPart() | WorkedBranches():
                found += methods_below(line.lines)
            case WorkedEach():
                for row in line.rows:
                    found += methods_below(row)
    return found


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
