"""Editions of codes by name and year, and whether a template is written for the one a project states.

A code has a name in each unit system, so an edition that is written in one system serves no calculation in the other.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.read.model import System
from calcreport.read.nodes import Mapping

_CODE = re.compile(r"(.+?)-([0-9]{2}|[0-9]{4})")
#: stands among the editions where the newest edition a part offers may be taken: a template linted alone, a case
ANY = "*"
#: stands among the editions where a problem was told about the project's codes
INCOMPLETE = "?"
Editions = tuple[tuple[str, str], ...]


def split_code(text: str) -> tuple[str, str] | None:
    """Split 'ACI 318-19' into name and year '2019'; None where the text names no edition."""
    match = _CODE.fullmatch(text.strip())
    if match is None:
        return None
    return match[1], match[2] if len(match[2]) == 4 else f"20{match[2]}"


def code_label(name: str, year: str) -> str:
    """Return a code with its edition as the trade writes it: 'ACI 318-19'."""
    return f"{name}-{year[2:]}" if year else name


@dataclass(frozen=True, slots=True)
class TemplateHead:
    """What a template file offers before it is settled."""

    name: str
    title: str
    #: code name by system
    codes: tuple[tuple[System, str], ...]
    years: tuple[str, ...]
    systems: tuple[System, ...]
    tree: Mapping
    source: Source

    def code(self, system: System) -> str:
        """Return the code's name in one unit system."""
        return dict(self.codes)[system]


@dataclass(frozen=True, slots=True)
class StatedCodes:
    """Where a project states its unit system and its codes."""

    units: Span | None = None
    #: (key under `codes`, place) by code name
    codes: dict[str, tuple[str, Span]] = field(default_factory=dict)


NOWHERE = StatedCodes()


def hold_served(
    head: TemplateHead,
    system: System,
    editions: dict[str, str],
    stated: StatedCodes,
    at: Span,
    part: bool,
    problems: Problems,
) -> bool:
    """Tell whether a template serves a unit system and the edition adopted; adds `edition-mix`."""
    if system not in head.systems:
        problems.add("edition-mix", at, f"`{head.name}` does not serve {system} units",
                     expected=" and ".join(head.systems) + " units", found=f"{system} units",
                     hint="" if part else "a calculation may have `units` of its own")  # fmt: skip
        return False
    code = head.code(system)
    year = editions.get(code, "")
    if not head.years or year in head.years:
        return True
    if not year and INCOMPLETE in editions:
        return False
    offered = " or ".join(code_label(code, y) for y in head.years)
    other = next((name for _, name in head.codes if name != code and name in editions and name in stated.codes), "")
    if not year and other:
        _say_other_system(head, system, other, editions[other], stated, problems)
        return False
    problems.add(
        "edition-mix", at, f"`{head.name}` is written for another edition", expected=offered,
        found=code_label(code, year) if year else f"no edition of {code} among the codes",
    )  # fmt: skip
    return False


def _say_other_system(
    head: TemplateHead, system: System, other: str, year: str, stated: StatedCodes, problems: Problems
) -> None:
    """Say that a code is stated as it is written in the other unit system: told where it is stated, once."""
    key, place = stated.codes[other]
    home = next(one for one, name in head.codes if name == other)
    years = (year,) if year in head.years else head.years
    wanted = " or ".join(code_label(head.code(system), y) for y in years)
    label = code_label(other, year)
    problems.add(
        "edition-mix", place, f"{label} is written in {home} units, and the work is in {system}",
        expected=f"{wanted} for {system} units", found=label,
        hint=f"write {key}: {wanted}, or units: {home}",
        related=((stated.units, "the units are stated here"),) if stated.units else (),
    )  # fmt: skip
