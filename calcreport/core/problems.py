"""Problems an author can cause: one record, one collector, one text form and one JSON form.

Every stage adds to a `Problems`; nothing is raised for an author's mistake. What a slug means is told
by `core.explanations`.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from difflib import get_close_matches
from itertools import islice

from calcreport.core.source import Source, Span, TableSource

#: problems kept of one run, and those among them that may ask for near spellings: bounds against files made to exhaust
MOST_KEPT, MOST_HINTED = 500, 60
#: names a near spelling is looked for among
MOST_NAMES = 1000


@dataclass(frozen=True, slots=True)
class Problem:
    """One mistake: where, what was expected and why, what was found, and one thing to try."""

    #: stable name, explained by `calcreport explain`
    slug: str
    #: None only where no file is at fault (a missing folder, say)
    span: Span | None
    message: str
    expected: str = ""
    found: str = ""
    hint: str = ""
    #: further places with a word on each
    related: tuple[tuple[Span, str], ...] = ()


class Problems:
    """Collects problems; the same words at the same place are kept once, and no more than `MOST_KEPT` in all."""

    def __init__(self) -> None:
        self._kept: list[Problem] = []
        self._seen: set[tuple[str, str, str]] = set()
        self._sources: set[Source] = set()
        #: problems met so far, those met before and those beyond the bound among them: whether a step went well
        self.met = 0

    def add(
        self,
        slug: str,
        span: Span | None,
        message: str,
        *,
        expected: str = "",
        found: str = "",
        hint: str = "",
        related: tuple[tuple[Span, str], ...] = (),
    ) -> None:
        """Keep a problem unless it is kept already: what is read for two unit systems is found twice."""
        self.met += 1
        if span is not None:
            self._sources.add(span.source)
        key = (slug, message, span.place if span else "")
        if key not in self._seen and len(self._kept) < MOST_KEPT:
            self._seen.add(key)
            self._kept.append(Problem(slug, span, message, expected, found, hint, related))

    def __bool__(self) -> bool:
        return bool(self._kept)

    def __len__(self) -> int:
        return len(self._kept)

    def stand_in(self, sources: Iterable[Source]) -> bool:
        """Tell whether a problem was added in one of these files."""
        return not self._sources.isdisjoint(sources)

    def close(self, name: str, names: Iterable[str]) -> list[str]:
        """Return `meant`, or nothing once many problems are kept: looking for spellings takes its time."""
        return meant(name, names) if len(self._kept) < MOST_HINTED else []

    def near(self, name: str, names: Iterable[str]) -> str:
        """Return a hint naming the spellings nearest to `name`, or ''."""
        return _hint(self.close(name, names))

    def sorted(self) -> tuple[Problem, ...]:
        """Return the problems by file and place, those without a place first."""
        return tuple(
            sorted(self._kept, key=lambda p: (p.span.source.shown, p.span.start, p.span.end) if p.span else ("", 0, 0))
        )


def meant(name: str, names: Iterable[str]) -> list[str]:
    """Return the spellings nearest to `name`, best first."""
    return get_close_matches(name[:60], list(islice(names, MOST_NAMES)), n=3, cutoff=0.6)


def nearest(name: str, names: Iterable[str]) -> str:
    """Return a hint naming the spellings nearest to `name`, or ''."""
    return _hint(meant(name, names))


def _hint(close: list[str]) -> str:
    return "did you mean " + " or ".join(close) + "?" if close else ""


def listed(words: Iterable[str], most: int = 24) -> str:
    """Return words as `one of a, b, c`, cut short where there are many."""
    kept = list(islice(words, most + 1))
    if not kept:
        return "nothing"
    return ("one of " if len(kept) > 1 else "") + ", ".join(kept[:most]) + (", …" if len(kept) > most else "")


def render(problem: Problem) -> str:
    """Return a problem as a terminal shows it: place, message, the line with a mark, then the rest."""
    head = f"error[{problem.slug}]: {problem.message}"
    rows: list[str] = []
    if problem.span is None:
        rows.append(head)
    else:
        span = problem.span
        line, column = span.source.place(span.start)
        rows.append(f"{span.place}: {head}")
        text, shift = _window(span.source.line_text(line), column)
        rows.append(f"{line:>5} | {text}")
        length = max(1, min(span.end - span.start, len(text) - (column - 1 - shift)))
        rows.append("      | " + " " * (column - 1 - shift) + "^" * length)
    for label, words in (("expected", problem.expected), ("found", problem.found), ("hint", problem.hint)):
        if words:
            rows.append(f"  {label:<9} {words}")
    for place, words in problem.related:
        rows.append(f"  {'see':<9} {place.place}  {words}")
    return "\n".join(_plain(row) for row in rows)


def to_json(problem: Problem) -> dict[str, object]:
    """Return a problem for machines."""
    place: dict[str, object] = {}
    if problem.span is not None:
        line, column = problem.span.source.place(problem.span.start)
        place = {"file": problem.span.source.shown, "line": line, "column": column}
        if isinstance(problem.span.source, TableSource) and problem.span.source.sheet:
            place["cell"] = problem.span.source.where(problem.span.start)
    return {
        "slug": problem.slug,
        **place,
        "message": problem.message,
        "expected": problem.expected,
        "found": problem.found,
        "hint": problem.hint,
        "related": [{"place": span.place, "says": words} for span, words in problem.related],
    }


def _window(text: str, column: int) -> tuple[str, int]:
    """Cut a long line down to 150 characters about `column`; return it and how much was cut in front."""
    text = text.replace("\t", " ")
    if len(text) <= 150:
        return text, 0
    start = max(0, column - 76)
    return text[start : start + 150], start


def _plain(text: str) -> str:
    """Keep a stranger's control characters off the terminal."""
    return "".join(c if c == "\n" or c.isprintable() else "\N{REPLACEMENT CHARACTER}" for c in text)
