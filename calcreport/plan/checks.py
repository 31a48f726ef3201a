"""Names of checks: one name, one check, save in different branches of one block; adds `check-twice`.

A project, a case and the summary name a check by its name, so two of them could not be told apart.
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager

from calcreport.core.problems import Problems
from calcreport.core.source import Span


class CheckNames:
    """Check names taken so far, with the place of each."""

    def __init__(self, problems: Problems) -> None:
        self.problems = problems
        self.taken: dict[str, Span] = {}
        #: uses of parts that the lines being read stand in, outermost first: (name, place)
        self._parts: list[tuple[str, Span]] = []

    @contextmanager
    def part(self, name: str, span: Span) -> Iterator[None]:
        """Tell of what stands inside at the use of a part: its file may serve others well."""
        self._parts.append((name, span))
        yield
        self._parts.pop()

    def take(self, name: str, span: Span) -> None:
        """Take a name for a check."""
        part, at = self._parts[0] if self._parts else ("", span.part(0, 1))
        first = self.taken.get(name)
        self.taken.setdefault(name, at)
        if first is not None and name:
            self.problems.add(
                "check-twice",
                at,
                f"the part `{part[:40]}` brings a second check `{name[:60]}`" if part
                else f"two checks are named `{name[:60]}`",
                expected="a name of its own for every check, or one in each branch of one block",
                found=f"a second check {name[:60]}",
                hint="write `as: name`, and the check is name." + name[:60] if part else "say what this check is of",
                related=((first, "first here"),),
            )  # fmt: skip
