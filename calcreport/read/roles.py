"""Which materials fill the roles of a template: the marks a calculation names, held against what roles are read for.

A role is a key such as `concrete`; what a material is for is told by who names it and by the properties it has, so no
role or property is known here by name.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from calcreport.core.problems import Problems, listed
from calcreport.read.fields import Fields
from calcreport.read.model import Given
from calcreport.read.nodes import Mapping, Scalar
from calcreport.read.single_values import Material

#: properties a problem names at most
_MOST_NAMED = 6


def roles_of(givens: tuple[Given, ...]) -> tuple[str, ...]:
    """Return the material roles of a template, once each."""
    return tuple(dict.fromkeys(given.material for given in _all(givens) if given.material))


@dataclass(frozen=True, slots=True)
class RoleReader:
    """Reads which materials a calculation names."""

    #: (mark, its properties) by mark; None for properties that could not be read
    known: dict[str, tuple[Scalar, dict[str, Scalar | None] | None]]
    #: every calculation as written, and the keys of one that are no roles
    calculations: list[Mapping]
    keys: tuple[str, ...]
    problems: Problems

    def named(self, fields: Fields, roles: tuple[str, ...], givens: tuple[Given, ...]) -> dict[str, Material | None]:
        """Return the materials a calculation names, by role; None for one that is not there or cannot serve."""
        found: dict[str, Material | None] = {}
        for role in roles:
            scalar = fields.scalar(role)
            if scalar is None:
                if fields.node_of(role) is not None or role in fields.mistaken:
                    found[role] = None
                continue
            if scalar.text not in self.known:
                self.problems.add("unknown-name", scalar.span, f"there is no material `{scalar.text[:40]}`",
                                  expected="a mark of `materials`", found=scalar.text[:40],
                                  hint=self.problems.near(scalar.text, self.known))  # fmt: skip
                found[role] = None
                continue
            key, properties = self.known[scalar.text]
            fits = properties is not None and not self.is_for_another(role, scalar, givens)
            found[role] = (key, properties) if properties is not None and fits else None
        return found

    def is_for_another(self, role: str, scalar: Scalar, givens: tuple[Given, ...]) -> bool:
        """Tell whether a material has nothing of what a role is read for and serves another; adds `wrong-material`."""
        wanted = _properties(role, givens)
        key, properties = self.known[scalar.text]
        if not properties or not wanted or not wanted.keys().isdisjoint(properties):
            return False
        others = [other for other in roles_of(givens) if not _properties(other, givens).keys().isdisjoint(properties)]
        others += [
            name.text
            for node in self.calculations
            for name, value in node.entries
            if isinstance(value, Scalar) and value.text == scalar.text and name.text not in (*self.keys, role)
        ]
        if not others:
            return False
        serve = [mark for mark, (_, has) in self.known.items() if has is not None and wanted.keys() <= has.keys()]
        needs = " and ".join(list(wanted)[:_MOST_NAMED])
        hint = f"add one under `materials`, and write its mark after `{role}: `"
        if serve:
            hint = f"write {role}: {serve[0]}" if len(serve) == 1 else ""
        self.problems.add(
            "wrong-material", scalar.span, f"`{scalar.text[:40]}` is a material for `{others[0]}`, not for `{role}`",
            expected=f"a material with {needs}: {listed(serve) if serve else '`materials` has none'}",
            found=f"{scalar.text[:40]} with {', '.join(list(properties)[:_MOST_NAMED])}",
            hint=hint,
            related=((key.span, f"{scalar.text[:40]} stands here"),),
        )  # fmt: skip
        return True


def _all(givens: Iterable[Given]) -> Iterable[Given]:
    return (one for given in givens for one in (given, *given.columns))


def _properties(role: str, givens: Iterable[Given]) -> dict[str, None]:
    """Return the properties a role is read for, in the order they are declared."""
    return {given.property: None for given in _all(givens) if given.material == role}
