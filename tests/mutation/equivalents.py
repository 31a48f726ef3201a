"""Mutants known to change nothing that a case could see, each with the reason; a list that may not go stale.

The text of the list in, reasons by mutant out; an entry whose mutant is gone, or is noticed after all, is stale.
"""

from __future__ import annotations

from dataclasses import dataclass

import yaml

from .trial import Fate, Mutant

_KEYS = {"file", "line", "formula", "mutations", "reason"}


@dataclass(frozen=True, slots=True)
class Equivalents:
    """Reasons by file, line, formula and words of the slip."""

    reasons: dict[tuple[str, str, str, str], str]

    def reason(self, mutant: Mutant) -> str:
        """Return why a mutant is no other rule, or ''."""
        return self.reasons.get(named(mutant), "")

    def stale(self, fates: list[tuple[Mutant, Fate]], files: set[str]) -> list[str]:
        """Return what is wrong with the entries of some files, given the fates of all their mutants."""
        by_name = {named(mutant): fate for mutant, fate in fates}
        found: list[str] = []
        for name in self.reasons:
            fate = by_name.get(name)
            if name[0] in files and fate != "survived":
                why = "there is no such mutant" if fate is None or fate == "no mutant" else f"it is {fate}"
                found.append(f"{' | '.join(name)}: {why}")
        return found


def named(mutant: Mutant) -> tuple[str, str, str, str]:
    """Return what names a mutant in the list."""
    return mutant.file, mutant.line, mutant.formula, mutant.says


def read_equivalents(text: str) -> Equivalents:
    """Read the list; raises `ValueError` for an entry that lacks a key, or names a mutant a second time."""
    reasons: dict[tuple[str, str, str, str], str] = {}
    for entry in yaml.safe_load(text) or ():
        if set(entry) != _KEYS or not str(entry["reason"]).strip():
            raise ValueError(f"an entry needs {', '.join(sorted(_KEYS))} and nothing else: {entry}")
        for says in entry["mutations"]:
            name = str(entry["file"]), str(entry["line"]), str(entry["formula"]), str(says)
            if name in reasons:
                raise ValueError(f"listed twice: {' | '.join(name)}")
            reasons[name] = str(entry["reason"])
    return Equivalents(reasons)
