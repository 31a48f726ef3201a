"""What was built otherwise than designed, as typed: `b=15in`, `FL1.l-=2in`, `layer[first].steel=3-#9`.

Texts in, changes with their places out; `read/as_built` puts them into the inputs of a project.
"""

from __future__ import annotations

import re
from collections.abc import Mapping

from calcreport.core.problems import Problems
from calcreport.core.record import record
from calcreport.core.source import Source, Span
from calcreport.read.nodes import Scalar

_CHANGE = re.compile(
    r"\s*(?:(?P<mark>[A-Za-z][A-Za-z0-9]*)\.)?(?P<path>(?:[A-Za-z]\w*\[[^\]=]{1,40}\]\.)*[A-Za-z]\w*)\s*(?P<sign>[+-]?)="
    r"\s*(?P<value>.*\S)\s*"
)
_FORMS = "NAME=VALUE, NAME+=DIFFERENCE or NAME-=DIFFERENCE, such as b=15in or h-=1in; MARK.NAME for another calculation"


@record
class Change:
    """One value built otherwise."""

    mark: str
    #: sets with their rows, and the name
    steps: tuple[tuple[str, str], ...]
    name: str
    #: '+' or '-' where the text is a difference
    sign: str
    scalar: Scalar
    #: the place of mark, rows and name
    span: Span

    @property
    def path(self) -> str:
        """The name with its rows."""
        return "".join(f"{name}[{row}]." for name, row in self.steps) + self.name


@record
class AsBuilt:
    """What a project is worked with to answer a question from the site."""

    changes: tuple[Change, ...]
    #: place of the candidate the design takes, by mark: what was chosen is not chosen anew
    taken: Mapping[str, int]
    #: symbols that lines of a calculation give, by mark: they cannot be set
    worked: Mapping[str, frozenset[str]]
    #: where a value built otherwise was taken from
    source: str


def read_changes(texts: list[str], mark: str, problems: Problems) -> tuple[Change, ...]:
    """Read changes of the calculation or member `mark`; adds `not-a-change` and `given-twice`."""
    source = Source("changes", "\n".join(texts))
    found: list[Change] = []
    start = 0
    for text in texts:
        match = _CHANGE.fullmatch(text[:300])
        whole = Span(source, start, start + len(text))
        if match is None or "\n" in text:
            problems.add("not-a-change", whole, f"`{text[:40]}` is no change", expected=_FORMS,
                         found=text[:40] or "nothing")  # fmt: skip
        else:
            *rows, name = match["path"].split("].")
            steps = tuple((step.partition("[")[0], step.partition("[")[2]) for step in rows)
            scalar = Scalar(match["value"], whole.part(match.start("value"), match.end("value")), False)
            at = whole.part(match.start("mark") if match["mark"] else match.start("path"), match.end("path"))
            change = Change(match["mark"] or mark, steps, name, match["sign"], scalar, at)
            twice = next((c for c in found if (c.mark, c.path) == (change.mark, change.path)), None)
            if twice is not None:
                first = ((twice.span, "first here"),)
                problems.add("given-twice", at, f"`{change.mark}.{change.path}` is changed twice",
                             expected="every value once", found="twice", related=first)  # fmt: skip
            found.append(change)
        start += len(text) + 1
    return tuple(found)
