"""The JSON Schema of template files and of the case files beside them, from the key tables of their readers.

Nothing in, schemas out. Which names are known and which formulas hold is beyond a schema: `lint` tells.
"""

from __future__ import annotations

from calcreport.core.figures import FIGURES, needed_inputs
from calcreport.core.methods import METHODS, rests_on
from calcreport.core.rows import MOST_ROWS
from calcreport.read import bodies, cases, given, library, lines, made_rows, symbols, words
from calcreport.read.model import SYSTEMS
from calcreport.read.shapes import (
    ANY,
    Schema,
    choice,
    closed,
    has,
    items,
    mapping,
    maybe,
    named,
    schema_file,
    text,
    texts,
    when,
    whole,
)
from calcreport.read.variants import KEY

#: a key of a mapping by system, by year, or by both
_VARIANT = f"^({KEY.pattern})$"
_YEAR = f"^({library.YEAR.pattern})$"
_NAME = f"^({symbols.NAME.pattern})$"


def template_schema() -> Schema:
    """Return the schema of a template file."""
    shapes = {
        "template": text(), "title": text(), "code": named("code"), "units": _served(),
        "covers": _settled_texts(), "excludes": _settled_texts(), "gives": _each(texts()), "least": _each(text()),
        "notation": text(),
        "symbols": _each(mapping(_each(named("symbol")))),
        "given": _each(mapping(_each(maybe(named("given"))))),
        "parts": _each(mapping(_each(named("part")))),
        "lines": _LINES,
    }  # fmt: skip
    root = closed(bodies.TEMPLATE_KEYS, shapes, ("template", "title", "code", "units", "lines"))
    return schema_file("calcreport template", root, _definitions())


def cases_schema() -> Schema:
    """Return the schema of a case file."""
    expected = closed(
        cases.EXPECTED_KEYS,
        {"value": text(), "tol": text(), "outcome": choice(cases.VERDICTS), "ratio": text(), "source": text()},
        ("source",),
        anyOf=[has("value"), has("ratio"), has("outcome")],
    )
    case = closed(
        cases.KEYS,
        {
            "case": text(), "units": choice(SYSTEMS), "year": text(), "given": mapping(ANY),
            "materials": mapping(mapping(ANY)), "expect": mapping(named("expected")), "stops": named("stops"),
        },
        ("case", "units"),
        anyOf=[has("expect"), has("stops")],
    )  # fmt: skip
    stops = closed(cases.STOPS_KEYS, {"line": text(), "source": text()}, cases.STOPS_KEYS)
    reason = closed(cases.REASON_KEYS, {"no case": text(), "because": text()}, cases.REASON_KEYS)
    entry = when(has("no case"), named("reason"), named("case"))
    found = {"case": case, "expected": expected, "stops": stops, "reason": reason}
    return schema_file("calcreport cases", items(entry), found)


def _each(schema: Schema) -> Schema:
    """Return a schema for a place that may be settled by system, year or both, also by one inside the other."""
    keyed = {"type": "object", "minProperties": 1, "propertyNames": {"pattern": _VARIANT}}
    return when(keyed, {"additionalProperties": when(keyed, {"additionalProperties": schema}, schema)}, schema)


def _settled_texts() -> Schema:
    """Return the schema of a list of texts, whole or each of them settled by system and year."""
    return _each(texts() | {"items": _each(text())})


def _served() -> Schema:
    """Return the schema of the unit systems a template serves."""
    return {"anyOf": [choice(SYSTEMS), items(choice(SYSTEMS)) | {"minItems": 1}]}


def _only() -> Schema:
    return text(_VARIANT)


_FORMULA, _WORDS, _NAMES, _HANDED, _LINES = map(named, ("formula", "words", "names", "handed", "lines"))
_SYMBOL: dict[str, Schema] = {
    "unit": _WORDS, "one of": _NAMES, "kind": _each(choice(symbols.KINDS)), "says": _WORDS,
    "shows": _WORDS, "places": _each(whole(0, 8)),
    "feet and inches": _each(choice(symbols.INCHES)),
}  # fmt: skip


def _definitions() -> dict[str, Schema]:
    found: dict[str, Schema] = {
        "code": closed(library.CODE_KEYS, {"name": _each(text()), "years": _years()}, ("name",)),
        "symbol": closed(symbols.KEYS, {**_SYMBOL, "only": _only()}),
        "given": _given(),
        "column given": _column_given(),
        "part": closed(
            bodies.PART_KEYS,
            {"title": _WORDS, "gives": _NAMES, "given": _each(mapping(_each(maybe(named("given"))))), "lines": _LINES},
            ("lines",),
        ),
        "line": _line(),
        "lines": _each(items(_each(named("line")))),
        "formula": _each(text()),
        "words": _each(text()),
        "names": _each(texts()),
        "handed": _each(mapping(_FORMULA)),
        "arm": _arms(lines.ARM_KEYS, "formula", {"when": _FORMULA, "formula": _FORMULA, "otherwise": _FORMULA}),
        "branch": _arms(
            lines.BRANCH_KEYS, "lines", {"when": _FORMULA, "lines": _LINES, "otherwise": _LINES, "says": _WORDS}
        ),
        "column": closed(made_rows.COLUMN_KEYS, {**_SYMBOL, "over": _WORDS, "else": _FORMULA}),
        "row": _row(),
    }
    return found | {f"{kind} line": _kind(kind) for kind in lines.KINDS}


def _years() -> Schema:
    year = text(_YEAR)
    return {"anyOf": [year, items(year)]}


def _given() -> Schema:
    shapes: dict[str, Schema] = {
        **_SYMBOL, "only": _only(), "kind": _each(choice(given.GIVEN_KINDS)), "range": _WORDS, "if none": _WORDS,
        "material": _WORDS, "property": _WORDS, "criterion": _WORDS,
        "rows": _each(mapping(_each(maybe(named("column given"))))),
        "names": _NAMES, "least": _each(whole(0, MOST_ROWS)), "most": _each(whole(1, MOST_ROWS)),
        "over": _NAMES, "gives": _each(mapping(_each(choice(given.OUTPUTS)))),
    }  # fmt: skip
    # a criterion is one value from one place
    return closed(given.KEYS, shapes) | when(has("criterion"), {"not": {"anyOf": list(map(has, given.NO_CRITERION))}})


def _column_given() -> Schema:
    """Return the schema of a column: a declaration that holds no rows of its own."""
    return {"allOf": [named("given"), {"not": {"anyOf": [has("rows"), has("over"), has("criterion")]}}]}


def _row() -> Schema:
    """Return the schema of a row made in a template: its columns are the author's own names."""
    own = {"name": _WORDS, "for": _each(mapping(_WORDS)), "when": _FORMULA}
    cell = {"anyOf": [_FORMULA, _HANDED]}
    return {
        "type": "object",
        "properties": {key: maybe(own.get(key, ANY)) for key in made_rows.ROW_KEYS},
        "additionalProperties": cell,
    }


def _arms(keys: tuple[str, ...], body: str, shapes: dict[str, Schema]) -> Schema:
    """Return the schema of one case: `otherwise` alone, or `when` with its own key."""
    other = {"required": ["otherwise"], "not": has("when")}
    return closed(keys, shapes, filled=("when", body, "otherwise"), **when(has("otherwise"), other, has("when", body)))


def _cases(name: str) -> Schema:
    """Return the schema of cases that leave none open; that `otherwise` stands last is the reader's to hold."""
    return items(_each(named(name))) | {"contains": _each(has("otherwise"))}


#: what stands under the keys of lines
_SHAPES: dict[str, dict[str, Schema]] = {
    "heading": {"heading": _WORDS}, "note": {"note": _WORDS}, 
    "caution": {"caution": _WORDS, "leaves out": _NAMES},
    "assume": {"assume": _WORDS}, "use": {"use": _WORDS},
    "gives": {"gives": _each(text(_NAME)), "formula": _FORMULA, "branches": _each(_cases("arm")),
              "as cited": _FORMULA},
    "branches": {"branches": _each(_cases("branch"))},
    "rows": {"rows": _each(text(_NAME)), "columns": _each(mapping(_each(maybe(named("column"))))),
             "list": _each(items(_each(named("row")))), "file": _each(text(r"[A-Za-z0-9][\w.-]*\.csv")),
             "spaced": _each(closed(made_rows.SPACED_KEYS, {**_SYMBOL, "symbol": text(_NAME), "from": _FORMULA,
                                    "to": _FORMULA}, required=("symbol", "from", "to", "count")))},
    "each": {"each": _WORDS, "lines": _LINES, "table": _NAMES, "show": _each(choice(lines.SHOWN))},
    "part": {"part": _WORDS, "as": _each(text(_NAME)), "same": _NAMES, "with": _HANDED},
    "check": {"check": _WORDS, "holds": _FORMULA},
    "require": {"require": _FORMULA, "show": _each(choice(lines.REQUIRED_SHOWN))},
    "figure": {"figure": choice(FIGURES), "with": _HANDED},
    "method": {"method": choice(METHODS), "with": _HANDED, "gives": _each(mapping(_WORDS)), "as": _each(text(_NAME)),
               "table": _NAMES},
    "by another method": {"by another method": _WORDS, "method": choice(METHODS), "with": _HANDED, "output": _WORDS,
                          "within": _FORMULA},
    "unknown": {"unknown": _each(text(_NAME)), "satisfies": _FORMULA, "lines": _LINES,
                "between": _each(items(_FORMULA) | {"minItems": 2, "maxItems": 2})},
}  # fmt: skip
#: keys a line cannot do without, beside the one it begins with
_NEEDED: dict[str, tuple[str, ...]] = {
    "gives": ("cite",), "rows": ("cite",), "each": ("lines",), "check": ("holds", "cite"),
    "require": ("says", "cite"), "unknown": ("between", "satisfies"),
    "method": ("with", "gives", "cite"), "by another method": ("method", "with", "within", "cite"),
}  # fmt: skip
#: kinds whose first key is also a key of another kind, which then has it
_GIVES_WAY = {"branches": "gives", "gives": "method", "method": "by another method"}


def _kind(kind: str) -> Schema:
    """Return the schema of one kind of line."""
    shapes = {**_SYMBOL, "says": _WORDS, "cite": _each(text(words.CITED)), "only": _only(), **_SHAPES.get(kind, {})}
    found = closed((kind, *lines.KINDS[kind], "only"), shapes, (kind, *_NEEDED.get(kind, ())))
    if kind == "figure":
        found |= {"allOf": [_drawn(name) for name in FIGURES]}
    if kind in ("method", "by another method"):
        found |= {"allOf": [_analysed(name) for name in METHODS]}
    if kind == "gives":
        found |= {"oneOf": [has("formula"), has("branches")]}
    return found


def _drawn(name: str) -> Schema:
    """Return what a kind of figure must be handed."""
    inputs = closed(FIGURES[name], dict.fromkeys(FIGURES[name], _FORMULA), needed_inputs(name))
    return when({"properties": {"figure": {"const": name}}}, {"properties": {"with": _each(inputs)}} | has("with"))


def _analysed(name: str) -> Schema:
    """Return what a method must be handed; what goes with a word is the planner's to hold."""
    takes = METHODS[name].takes
    needed = tuple(key for key, wanted in takes.items() if wanted.where is None and not rests_on(takes, key))
    inputs = closed(tuple(takes), dict.fromkeys(takes, _FORMULA), needed)
    return when({"properties": {"method": {"const": name}}}, {"properties": {"with": _each(inputs)}} | has("with"))


def _line() -> Schema:
    """Return the schema of a line: by the key that says its kind, where that is no key of another kind."""
    kinds = []
    for kind in lines.KINDS:
        condition = has(kind) | ({"not": has(_GIVES_WAY[kind])} if kind in _GIVES_WAY else {})
        kinds.append(when(condition, named(f"{kind} line")))
    return {"type": "object", "anyOf": [has(kind) for kind in lines.KINDS], "allOf": kinds}
