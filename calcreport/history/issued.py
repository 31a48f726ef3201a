"""A values file as the accounts it tells: what a package came to, without the project that gave it.

An object read from JSON in, `Issued` out, or why it cannot be read. The file may be a stranger's: nothing in it is
taken for granted, and nothing of it runs.
"""

from __future__ import annotations

import json
from collections.abc import Iterator
from typing import Any

from calcreport.history.model import Account, Entry, Fact, Issued, Kind

#: the format of values files that holds all that a comparison needs
FORMAT = 2
_KINDS: tuple[Kind, ...] = ("given", "value", "requirement")


class _Malformed(Exception):
    """The object is not what a values file holds there."""


def read_values(data: bytes) -> dict[str, Any] | str:
    """Return the object of a values file, or why it is none."""
    try:
        found = json.loads(data)
    except (ValueError, RecursionError):
        return "it is no JSON"
    if not isinstance(found, dict) or "calculations" not in found:
        return "it holds no values of calculations"
    if found.get("format") != FORMAT:
        return f"its format is {str(found.get('format'))[:20]}, and this program compares format {FORMAT}"
    return found


def issued(found: dict[str, Any]) -> Issued | str:
    """Return what a values file tells, or where it is not one."""
    try:
        return _issued(found)
    except _Malformed as malformed:
        return f"{malformed} is not what a values file holds there"


def _issued(found: dict[str, Any]) -> Issued:
    project = _mapping(found, "project")
    calculations = _mapping(found, "calculations")
    accounts = tuple(_account(mark, _as_mapping(one, f"calculation {mark[:40]}")) for mark, one in calculations.items())
    rows = [_as_mapping(row, "a revision") for row in _list(project, "revisions")]
    last = rows[-1] if rows else {"number": "1", "date": _text(project, "date")}
    facts = [Fact("project", name, _text(project, name)) for name in ("title", "number")]
    for fact in _list(project, "facts"):
        if not isinstance(fact, list) or len(fact) != 3 or not all(isinstance(text, str) for text in fact):
            raise _Malformed("a fact of the project")
        facts.append(Fact(*fact))
    return Issued(
        _text(found, "program"), _text(project, "title"), _text(project, "number"), _text(last, "number"),
        _text(last, "date"), _text(project, "date"), _text(project, "status"), tuple(facts), accounts,
        _text(project, "since", none=True),
    )  # fmt: skip


def _account(mark: str, one: dict[str, Any]) -> Account:
    lines = [_line(_as_mapping(line, "a line")) for line in _list(one, "lines")]
    lines += [_check(_as_mapping(check, "a check")) for check in _list(one, "checks")]
    files = _mapping(one, "template_files")
    closures = (_as_mapping(closure, "a closure") for closure in _list(one, "closures"))
    return Account(
        mark, _text(one, "title"), _text(one, "template"), "", _text(one, "verdict"),
        _text(one, "governing", none=True), _text(one, "stopped", none=True), tuple(lines), _text(one, "fingerprint"),
        tuple((name, str(digest)) for name, digest in sorted(files.items())),
        tuple(_selection(one.get("selection"))),
        tuple(_texts(one, "dispositions")), tuple(_plain({k: v for k, v in c.items() if k in _SUM}) for c in closures),
        tuple(_texts(one, "headings")),
        _whole(one, "sheets"), _text(one, "revision"), _text(one, "changed"),
    )  # fmt: skip


#: what of a closure is printed; its line number may move
_SUM = ("method", "name", "residual", "of", "unit")


def _line(line: dict[str, Any]) -> Entry:
    kind = line.get("kind")
    if kind not in _KINDS:
        raise _Malformed("the kind of a line")
    unit, shown, typed = (_text(line, key, none=True) for key in ("unit", "shown", "typed"))
    shown = " ".join(text for text in (shown, "" if unit == "1" else unit, f"({typed})" if typed else "") if text)
    inputs = line.get("shown_inputs", {})
    taken = tuple(f"{name} {text}" for name, text in _as_mapping(inputs, "the inputs of a line").items())
    linked = _texts(line, "from") if kind == "given" else []
    return Entry(
        kind, _text(line, "path"), _again(line), _value(line.get("value")), unit or "1", 1.0,
        _text(line, "formula", none=True), _text(line, "case", none=True), _text(line, "cite"), "", shown,
        tuple(_texts(line, "beside")), taken, " ".join(linked), _whole(line, "line"), _text(line, "changed", none=True),
    )  # fmt: skip


def _check(check: dict[str, Any]) -> Entry:
    return Entry(
        "check", _text(check, "path"), _again(check), _value(check.get("ratio")), "1", 1.0, _text(check, "formula"), "",
        _text(check, "cite"), _text(check, "verdict"), _text(check, "shown"), tuple(_texts(check, "beside")), (), "",
        _whole(check, "line"), _text(check, "changed", none=True),
    )  # fmt: skip


def _selection(found: object) -> Iterator[str]:
    """Yield the candidate used in words, then one text a row of the table and one for what the sheet says of them."""
    if found is None:
        return
    one = _as_mapping(found, "a selection")
    used = one.get("used")
    tried = [_as_mapping(row, "a candidate") for row in _list(one, "tried")]
    chosen = next((row for row in tried if row.get("number") == used), {})
    values = _as_mapping(chosen.get("values", {}), "a candidate")
    yield ", ".join(f"{name} {text}" for name, text in values.items())
    yield _plain({key: value for key, value in one.items() if key != "tried"})
    yield from (_plain(row) for row in tried)


def _plain(found: object) -> str:
    return json.dumps(found, ensure_ascii=False, sort_keys=True)


def _value(value: object) -> float | str | None:
    if value is None or isinstance(value, str):
        return value
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise _Malformed("the value of a line")
    try:
        return float(value)
    except OverflowError:
        raise _Malformed("the value of a line") from None


def _again(line: dict[str, Any]) -> int:
    return _whole(line, "again") if "again" in line else 1


def _text(of: dict[str, Any], key: str, *, none: bool = False) -> str:
    """Return a text; with `none` one that may be missing is ''."""
    found = of.get(key)
    if found is None and none:
        return ""
    if not isinstance(found, str):
        raise _Malformed(f"`{key}`")
    return found


def _texts(of: dict[str, Any], key: str) -> list[str]:
    found = of.get(key, [])
    if not isinstance(found, list) or not all(isinstance(text, str) for text in found):
        raise _Malformed(f"`{key}`")
    return found


def _whole(of: dict[str, Any], key: str) -> int:
    found = of.get(key)
    if not isinstance(found, int) or isinstance(found, bool):
        raise _Malformed(f"`{key}`")
    return found


def _list(of: dict[str, Any], key: str) -> list[Any]:
    found = of.get(key)
    if not isinstance(found, list):
        raise _Malformed(f"`{key}`")
    return found


def _mapping(of: dict[str, Any], key: str) -> dict[str, Any]:
    return _as_mapping(of.get(key), f"`{key}`")


def _as_mapping(found: object, what: str) -> dict[str, Any]:
    if not isinstance(found, dict):
        raise _Malformed(what)
    return found
