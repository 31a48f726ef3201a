"""All mutants of some templates put to the cases, and what became of them, in words.

A shelf, a list of equivalents and names in, a report out; no printing.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from multiprocessing import get_context
from time import process_time
from typing import TypeAlias

from .equivalents import Equivalents
from .handed import bar_mutants, worth_mutants
from .mutants import mutants_of
from .shelf import Shelf
from .sources import OUTSIDE
from .trial import Fate, Mutant, Trial

#: a file, and the number of the first of some of its mutants
Task: TypeAlias = tuple[str, int]
#: mutants put to the cases in one go
TASK = 25

_at_work: list[Callable[[Task], tuple[list[tuple[Fate, str]], float]]] = []


@dataclass(frozen=True, slots=True)
class Told:
    """One mutant with its fate, what noticed it, and why it is no other rule."""

    mutant: Mutant
    fate: Fate
    by: str
    reason: str

    @property
    def open(self) -> bool:
        """Tell whether neither an outside source nor a reason settles it."""
        return self.fate in ("own", "survived") and not self.reason

    @property
    def row(self) -> str:
        """The mutant in one line."""
        words = (self.mutant.file, self.mutant.line, self.mutant.formula, self.mutant.says)
        return " | ".join((self.fate, *words, self.reason or self.by))


@dataclass(frozen=True, slots=True)
class Sheet:
    """The mutants of one file."""

    file: str
    told: tuple[Told, ...]
    seconds: float

    def count(self, *fates: Fate) -> int:
        """Return how many mutants had one of these fates."""
        return sum(t.fate in fates for t in self.told)


@dataclass(frozen=True, slots=True)
class Report:
    """All files, and entries of the list of equivalents that have gone stale."""

    sheets: tuple[Sheet, ...]
    stale: tuple[str, ...]

    @property
    def open(self) -> tuple[Told, ...]:
        """The mutants that neither a case nor a reason settles."""
        return tuple(told for sheet in self.sheets for told in sheet.told if told.open)

    @property
    def sound(self) -> bool:
        """Tell whether nothing is left open."""
        return not self.open and not self.stale


def run(shelf: Shelf, equivalents: Equivalents, names: tuple[str, ...], jobs: int = 1) -> Report:
    """Put every mutant of the named files to the cases, in some processes; no names: all templates and bar tables."""
    bars = {file: [m for m in bar_mutants(shelf) if m.file == file] for file, _ in shelf.bars}
    mutants = {
        file: bars.get(file) or [*mutants_of(file, shelf), *worth_mutants(file, shelf)]
        for file in names or (*shelf.names, *bars)
    }
    found: dict[str, list[Told]] = {file: [] for file in mutants}
    seconds = dict.fromkeys(mutants, 0.0)
    for (file, first), (fates, spent) in _worked(shelf, mutants, jobs):
        seconds[file] += spent
        for mutant, fate in zip(mutants[file][first:], fates, strict=False):
            found[file].append(Told(mutant, *fate, equivalents.reason(mutant)))
    told = [t for file in found for t in found[file] if t.fate != "no mutant"]
    sheets = tuple(
        Sheet(file, tuple(t for t in found[file] if t.fate != "no mutant"), seconds[file]) for file in mutants
    )
    return Report(sheets, tuple(equivalents.stale([(t.mutant, t.fate) for t in told], set(mutants))))


def _worked(
    shelf: Shelf, mutants: dict[str, list[Mutant]], jobs: int
) -> Iterator[tuple[Task, tuple[list[tuple[Fate, str]], float]]]:
    """Yield the fates of a task's mutants, with the seconds they took, task by task in order."""
    tasks = [(file, first) for file, those in mutants.items() for first in range(0, len(those), TASK)]
    trial = Trial(shelf, {}, {}, {})

    def work(task: Task) -> tuple[list[tuple[Fate, str]], float]:
        start = process_time()
        file, first = task
        fates = [trial.fate(mutant) for mutant in mutants[file][first : first + TASK]]
        return fates, process_time() - start

    if jobs == 1:
        yield from ((task, work(task)) for task in tasks)
        return
    # a mutant holds functions, which no process can send to another: all are made before the processes part
    _at_work.append(work)
    with get_context("fork").Pool(jobs) as pool:
        yield from zip(tasks, pool.imap(_work, tasks), strict=True)
    _at_work.clear()


def _work(task: Task) -> tuple[list[tuple[Fate, str]], float]:
    return _at_work[-1](task)


def table(report: Report) -> list[str]:
    """Return the report as rows of a table."""
    rows = [f"{'':32}{'mutants':>9}{'killed':>9}{'refused':>9}{'own only':>9}{'equal':>9}{'open':>9}{'s':>8}"]
    for sheet in (*report.sheets, _total(report.sheets)):
        equal = sum(bool(t.reason) and t.fate == "survived" for t in sheet.told)
        counts = (len(sheet.told), sheet.count("killed"), sheet.count("refused"), sheet.count("own"), equal,
                  sum(t.open for t in sheet.told))  # fmt: skip
        rows.append(f"{sheet.file:32}" + "".join(f"{count:9}" for count in counts) + f"{sheet.seconds:8.1f}")
    return rows


def _total(sheets: tuple[Sheet, ...]) -> Sheet:
    return Sheet("all", tuple(t for sheet in sheets for t in sheet.told), sum(sheet.seconds for sheet in sheets))


def sources(shelf: Shelf) -> list[str]:
    """Return how many expectations rest on each kind of source, and those whose words name none."""
    kinds = Counter(kind for variant in shelf.variants for held in variant.cases for kind in held.kinds)
    rows = [", ".join(f"{kind} {count}" for kind, count in kinds.most_common())]
    for variant in shelf.variants:
        for held in variant.cases:
            for expected, kind in zip(held.case.expected, held.kinds, strict=True):
                if kind not in OUTSIDE and kind != "own":
                    rows.append(f"{variant.name}: {held.case.name}: {expected.name}: {expected.source}")
    return rows
