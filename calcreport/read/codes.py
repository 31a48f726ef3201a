"""Adopted codes of a project, held against a closed list that is data of the library.

Mappings in, editions and rows for the front sheets out. `codes.yaml` says which editions an adopted code refers to.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from calcreport.core.problems import Problems
from calcreport.core.source import Span
from calcreport.read.editions import INCOMPLETE, split_code
from calcreport.read.fields import Fields
from calcreport.read.library import Library
from calcreport.read.nodes import Mapping, Scalar, Sequence

#: file of the library that says which editions belong together
CODES = "codes.yaml"
#: fields a code is named for beside the two every package names
OTHER_FIELDS = ("masonry", "steel", "timber", "soil", "bars")
KEYS, ADOPTED_KEYS = ("adopted", "concrete", "loads", *OTHER_FIELDS), ("name", "year", "amendments")


@dataclass(frozen=True, slots=True)
class Codes:
    """The codes a project states."""

    #: edition year by code name
    editions: dict[str, str]
    #: (field, code) as printed, the adopted code first
    rows: tuple[tuple[str, str], ...]
    amendments: str
    #: what the adopted code refers to instead of an edition asked for to compare with; '' where it refers to that
    foreign: str = ""
    #: (key, place) by code name
    places: dict[str, tuple[str, Span]] = field(default_factory=dict)


def read_codes(
    node: Mapping | None, library: Library, problems: Problems, instead: tuple[str, str] | None = None
) -> Codes:
    """Read the adopted code and the codes by field; pairs that do not belong together are `edition-mix`.

    `instead` is a field and another edition of its code, taken for comparison: whether the adopted code refers to
    that one is said, and is no problem.
    """
    before = problems.met
    if node is None:
        return Codes({INCOMPLETE: ""}, (), "")
    fields = Fields(node, KEYS, "`codes`", problems)
    adopted = fields.mapping("adopted", required=True)
    name = year = amendments = ""
    if adopted is not None:
        entry = Fields(adopted, ADOPTED_KEYS, "`adopted`", problems)
        name, year = entry.text("name", required=True), entry.text("year", required=True)
        amendments = entry.text("amendments", required=True)
    rows = [("adopted code", f"{name} {year}")]
    editions: dict[str, str] = {}
    places: dict[str, tuple[str, Span]] = {}
    for key in ("concrete", "loads", *OTHER_FIELDS):
        scalar = fields.scalar(key, required=key in ("concrete", "loads"))
        if scalar is None:
            continue
        parts = split_code(scalar.text)
        if parts is None:
            problems.add("no-edition", scalar.span, f"`{scalar.text[:40]}` names no edition",
                         expected="name and edition, such as NAME-19", found=scalar.text[:40])  # fmt: skip
            continue
        text = scalar.text
        if instead is not None and instead[0] == key:
            other = _other_edition(key, parts, instead[1], library, problems)
            text, parts = (instead[1], other) if other is not None else (text, parts)
        editions[parts[0]] = parts[1]
        rows.append((key, text))
        places[parts[0]] = key, scalar.span
    for code in _mixed(f"{name} {year}", node, library, problems):
        editions.pop(code, None)
    if problems.met > before:
        editions[INCOMPLETE] = ""
    return Codes(editions, tuple(rows), amendments, _foreign(f"{name} {year}", library, instead), places)


def _other_edition(
    key: str, parts: tuple[str, str], asked: str, library: Library, problems: Problems
) -> tuple[str, str] | None:
    """Return name and year of the edition asked for; None after adding why it is no other edition of the code.

    It was asked for on the command line: no file is at fault.
    """
    found = split_code(asked)
    if found is not None and found[0] == parts[0] and found != parts:
        return found
    what = "is the edition the project states" if found == parts else f"is no edition of {parts[0][:40]}"
    known = [text for text in _known(key, library) if (named := split_code(text)) and named[0] == parts[0]]
    others = [text for text in known if split_code(text) != parts]
    such = f", such as {' or '.join(others)}" if others else ""
    problems.add("edition-mix", None, f"`{asked[:40]}` {what}",
                 expected=f"another edition of {parts[0][:40]}{such}", found=f"--{key} '{asked[:40]}'")  # fmt: skip
    return None


def _known(key: str, library: Library) -> list[str]:
    """Return every edition that some adopted code refers to in a field."""
    tree = library.tree(CODES)
    known = tree.get("adopted") if tree else None
    adopted = [name.text for name, _ in known.entries] if isinstance(known, Mapping) else []
    return list(dict.fromkeys(text for name in adopted for text in _permitted(name, library).get(key, ())))


def _permitted(adopted: str, library: Library) -> dict[str, tuple[str, ...]]:
    """Return the editions an adopted code refers to, by field."""
    tree = library.tree(CODES)
    known = tree.get("adopted") if tree else None
    refers = known.get(adopted) if isinstance(known, Mapping) else None
    return {
        key.text: tuple(s.text for s in value.items if isinstance(s, Scalar)) if isinstance(value, Sequence) else ()
        for key, value in (refers.entries if isinstance(refers, Mapping) else ())
    }


def _foreign(adopted: str, library: Library, instead: tuple[str, str] | None) -> str:
    """Return the editions that stand where an adopted code does not refer to the one asked for."""
    permitted = _permitted(adopted, library).get(instead[0], ()) if instead is not None else ()
    return " or ".join(permitted) if instead is not None and instead[1] not in permitted else ""


def _mixed(adopted: str, node: Mapping, library: Library, problems: Problems) -> list[str]:
    """Hold the codes named against the editions an adopted code refers to; return those that do not belong to it."""
    mixed: list[str] = []
    for key, permitted in _permitted(adopted, library).items():
        stated = node.get(key)
        named = split_code(stated.text) if isinstance(stated, Scalar) else None
        if isinstance(stated, Scalar) and named and permitted and stated.text not in permitted:
            mixed.append(named[0])
            problems.add(
                "edition-mix", stated.span, f"{adopted} does not refer to {stated.text[:40]}",
                expected=" or ".join(permitted), found=stated.text[:40],
                hint="where a local amendment adopts another edition, name that code as the adopted one",
            )  # fmt: skip
    return mixed
