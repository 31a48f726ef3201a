"""A package held against what its own files give: which values, sheets and files are not what they would be.

What was found in the PDF and what was made again from it in, findings out, each naming one thing. Pure functions: what
is compared has been read before, and numbers count as equal only within what two machines may part by.
"""

from __future__ import annotations

import json
from collections.abc import Iterator, Mapping
from difflib import SequenceMatcher
from typing import Any, Literal, TypeAlias

from calcreport.core.record import record
from calcreport.history.package import SIGNED, PackageFile, PrintedSheet

Thing: TypeAlias = Literal["input", "number", "sheet", "template", "file", "second path"]
#: numbers of two machines may part in their last digits: as a share of the larger
ALIKE = 1e-12
#: what is said of a sheet that reads alike and does not show alike
DRESS = "its size, fonts or links are others"
#: words of a sheet that are compared one by one, and passages named of one sheet
MOST_WORDS, MOST_PASSAGES = 6_000, 5


@record
class Finding:
    """One thing that is not what it would be."""

    thing: Thing
    #: 'B1.phiM_n value', 'B1-2', 'templates/aci318/beam-flexure.yaml'
    where: str
    #: what the file holds, and what it would hold; '' where there is nothing
    found: str
    made: str
    words: str


class _Repeated(ValueError):
    """A key stands twice in an object."""


def read_values(data: bytes) -> Any:
    """Return the object of a values file, None where it is no object or says something twice."""
    try:
        return json.loads(data, object_pairs_hook=_once)
    except (ValueError, RecursionError):
        return None


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) < len(pairs):
        raise _Repeated
    return found


def altered_values(found: bytes, made: bytes) -> list[Finding]:
    """Return which values attached are not those made again; given values that no line hands over are inputs."""
    if found == made:
        return []
    one, other = read_values(found), read_values(made)
    if not isinstance(one, dict):
        return [Finding("file", "values.json", "", "", "cannot be read, or says something twice")]
    findings: dict[str, Finding] = {}
    near = False
    for path, was, would in _parted(one, other, ()):
        if _alike(was, would):
            near = near or was != would
            continue
        thing, where, lines = _named(path, one, other)
        shown = [_told(line) for line in lines]
        texts = (_told(was), _told(would)) if not all(lines) or shown[0] == shown[1] else shown
        findings.setdefault(where, Finding(thing, where, texts[0], texts[1], ""))
    if not findings and not near:
        return [Finding("file", "values.json", "", "", "says the same, written in another way than the program does")]
    return list(findings.values())


def _parted(one: Any, other: Any, path: tuple[str, ...]) -> Iterator[tuple[tuple[str, ...], Any, Any]]:
    """Yield every place at which two objects part; lines and checks are matched by kind and path."""
    if isinstance(one, dict) and isinstance(other, dict):
        for key in dict.fromkeys((*other, *one)):
            yield from _parted(one.get(key), other.get(key), (*path, key))
    elif isinstance(one, list) and isinstance(other, list):
        keys = [_keyed(one), _keyed(other)]
        for key in dict.fromkeys((*keys[1], *keys[0])):
            yield from _parted(keys[0].get(key), keys[1].get(key), (*path, key))
        if list(keys[0]) != list(keys[1]) and keys[0].keys() == keys[1].keys():
            yield (*path, "order"), "another order", ""
    elif type(one) is not type(other) or one != other:
        yield path, one, other


def _keyed(items: list[Any]) -> dict[str, Any]:
    found: dict[str, Any] = {}
    for place, item in enumerate(items):
        key = str(place)
        if isinstance(item, dict) and isinstance(item.get("path"), str):
            key = f"{item['path']}\n{item.get('kind')}\n{item.get('again', 1)}"
        found[key if key not in found else f"{key}\n{place}"] = item
    return found


def _alike(one: Any, other: Any) -> bool:
    if not (isinstance(one, float) and isinstance(other, float)):
        return False
    return abs(one - other) <= ALIKE * max(abs(one), abs(other))


def _named(path: tuple[str, ...], one: Any, other: Any) -> tuple[Thing, str, tuple[dict[str, Any], dict[str, Any]]]:
    """Return what a place in a values file is called, one name for all of a line, and that line in both files."""
    if path[0] != "calculations" or len(path) < 3:
        return "number", " ".join(("values.json", *path)), ({}, {})
    mark, group = path[1], path[2]
    if group not in ("lines", "checks") or len(path) < 4:
        return "number", f"{mark} {' '.join(path[2:])}", ({}, {})
    lines = _line(one, mark, group, path[3]), _line(other, mark, group, path[3])
    given = any(line.get("kind") == "given" and not line.get("from") for line in lines)
    name = path[3].partition("\n")[0]
    return "input" if given else "number", f"{mark}.{name}", lines


def _line(side: Any, mark: str, group: str, key: str) -> dict[str, Any]:
    items = side.get("calculations", {}).get(mark, {}).get(group, []) if isinstance(side, dict) else []
    found = _keyed(items).get(key) if isinstance(items, list) else None
    return found if isinstance(found, dict) else {}


def _told(value: Any) -> str:
    """Return a value, a line or a check in words."""
    if isinstance(value, dict):
        unit = value.get("verdict", value.get("unit"))
        parts = [str(part) for part in (value.get("shown"), "" if unit in (None, "1") else unit) if part]
        return " ".join(parts)[:80] or "a line"
    if isinstance(value, list):
        return "; ".join(map(_told, value))[:80] or "nothing"
    return "nothing" if value is None else str(value)[:80]


def altered_files(found: Mapping[str, bytes], made: Mapping[str, bytes]) -> list[Finding]:
    """Return files that nothing reads, and such as are not carried as the program carries them."""
    findings = []
    for name, data in found.items():
        if not name.startswith(("inputs/", "templates/")):
            continue
        if name not in made:
            findings.append(Finding("file", name, "", "", "is carried, and nothing of the package reads it"))
        elif data != made[name]:
            findings.append(Finding("file", name, "", "", "is not written as the program carries it: its line ends"))
    return findings


def parted_sheets(found: PackageFile, made: PackageFile) -> list[tuple[int, int]]:
    """Return the places of sheets that are not alike, in the file and as made again; -1 for one that is not there."""
    labels = [_labelled(sheets) for sheets in (found.sheets, made.sheets)]
    pairs = [(labels[0].get(label, -1), labels[1].get(label, -1)) for label in dict.fromkeys((*labels[1], *labels[0]))]
    return [(a, b) for a, b in pairs if a < 0 or b < 0 or _differ(found.sheets[a], made.sheets[b])]


def _labelled(sheets: tuple[PrintedSheet, ...]) -> dict[str, int]:
    found: dict[str, int] = {}
    for place, sheet in enumerate(sheets):
        label = sheet.label or f"sheet {place + 1} without a label"
        found[label if label not in found else f"{label} (sheet {place + 1})"] = place
    return found


def _differ(one: PrintedSheet, other: PrintedSheet) -> bool:
    return one.content != other.content or one.dress != other.dress


def altered_sheet(one: PrintedSheet, other: PrintedSheet, words: list[str], would: list[str]) -> list[Finding]:
    """Return what of one sheet is not what would be printed: its words, else what lies on it or how it is drawn."""
    findings = []
    if len(words) > MOST_WORDS or (words == [] and would):
        findings.append(Finding("sheet", other.label, "", "", "its text cannot be told apart"))
    elif words != would:
        findings += _passages(other.label, words, would)
    over = [kind for kind in one.laid_over if kind != "signature" and kind not in other.laid_over]
    if over:
        findings.append(Finding("sheet", other.label, "", "", f"something is laid over it: {', '.join(over)[:80]}"))
    if not findings and one.dress != other.dress:
        findings.append(Finding("sheet", other.label, "", "", DRESS))
    elif not findings:
        findings.append(Finding("sheet", other.label, "", "", "is drawn otherwise, though its words read alike"))
    return findings


def _passages(label: str, words: list[str], would: list[str]) -> Iterator[Finding]:
    """Yield the passages in which the words of a sheet differ, with the words before them."""
    changes = [o for o in SequenceMatcher(None, would, words, autojunk=False).get_opcodes() if o[0] != "equal"]
    for _, a, b, c, d in changes[:MOST_PASSAGES]:
        before = " ".join(would[max(0, a - 4) : a])
        yield Finding("sheet", label, " ".join(words[c:d])[:120], " ".join(would[a:b])[:120],
                      f"after `{before}`" if before else "")  # fmt: skip
    if len(changes) > MOST_PASSAGES:
        yield Finding("sheet", label, "", "", f"and {len(changes) - MOST_PASSAGES} more of its passages")


def altered_catalog(found: PackageFile, made: PackageFile) -> list[Finding]:
    """Return what the file does besides showing its sheets; what a signature adds is none of it."""
    more = sorted(found.catalog - made.catalog - SIGNED)
    return [Finding("file", name, "", "", "the file holds this, and a package does not") for name in more]
