"""The JSON Schema of project files and of the files they include, from the key tables of their readers.

The library in, a schema out: its closed list of criteria, and for every template of it the values that must be given.
"""

from __future__ import annotations

from calcreport.core.record import record
from calcreport.read import (
    calculations,
    candidates,
    codes,
    columns,
    gathering,
    links,
    project,
    row_tables,
    schedules,
    single_values,
    tables,
    together,
)
from calcreport.read.criteria import CRITERIA
from calcreport.read.editions import ANY as ANY_EDITION
from calcreport.read.library import Library
from calcreport.read.model import SYSTEMS, Given
from calcreport.read.nodes import Mapping, Scalar, Sequence
from calcreport.read.roles import roles_of
from calcreport.read.shapes import (
    ANY,
    Schema,
    choice,
    closed,
    has,
    items,
    mapping,
    named,
    schema_file,
    text,
    texts,
    when,
    whole,
)

#: the key under which a row has its name
ROW_NAME = "name"
_DATE = f"^{project.DATE.pattern}$"
_MARK = f"^({calculations.MARK.pattern})$"


def project_schema(library: Library) -> Schema:
    """Return the schema of a project file; a file with none of a project's own keys is an included one."""
    shapes = _gathered() | {
        "project": named("project"), "office": named("office"), "status": choice(project.STATUSES),
        "date": text(_DATE), "units": choice(SYSTEMS), "paper": choice(project.PAPERS), "codes": named("codes"),
        "criteria": named("criteria"), "elsewhere": items(named("elsewhere")),
        "dispositions": items(named("disposition")), "revisions": items(named("revision")),
    }  # fmt: skip
    some = [has("calculations"), has("schedules")]
    needed = ("project", "office", "status", "date", "units", "codes", "criteria", "revisions")
    filled = when({"not": has("schedules")}, {"properties": {"calculations": {"minItems": 1}}})
    whole_project = closed(project.KEYS, shapes, needed, anyOf=some, **filled)
    included = closed(gathering.KEYS, _gathered(), anyOf=some)
    own = [key for key in project.KEYS if key not in gathering.KEYS]
    root = when({"anyOf": [has(key) for key in own]}, named("project file"), named("included file"))
    definitions = _definitions(library) | {"project file": whole_project, "included file": included}
    return schema_file(
        "calcreport project",
        {"type": "object", "properties": dict.fromkeys(project.KEYS, ANY), **root},
        definitions,
    )


def _gathered() -> dict[str, Schema]:
    include = closed(("include",), {"include": text()}, ("include",))
    return {
        "materials": mapping(mapping(text())),
        "assumptions": items(named("assumption")),
        "calculations": items(when(has("include"), include, named("calculation"))),
        "schedules": items(named("schedule")),
    }


def _definitions(library: Library) -> dict[str, Schema]:
    takes = _takes(library)
    calculation = {
        "mark": text(_MARK), "title": text(), "member": text(_MARK), "template": _template(takes),
        "units": choice(SYSTEMS), "given": mapping(named("value")), "choose": _chosen(mapping(named("value"))),
        "pinned": mapping(named("value")), "members": items(mapping(named("value"))), "table": texts(),
    }  # fmt: skip
    table = {
        "file": text(), "sheet": text(), "heading row": whole(1, 1000), "where": mapping(texts()),
        "hidden": choice(tables.HIDDEN), "columns": mapping({"anyOf": [text(), named("column")]}),
    }  # fmt: skip
    role, role_of_row = text(), {"anyOf": [text(), named("column")]}
    linked = {"from": text(), "at": mapping(text()), "columns": mapping(text())}
    schedule = table | {
        "template": _template(takes), "mark": text(), "title": text(), "member": role_of_row, "units": choice(SYSTEMS),
        "given": mapping(ANY), "choose": _chosen(mapping(ANY)), "pinned": mapping(ANY),
        "together": text(), "table": texts(),
    }  # fmt: skip
    return {
        "project": closed(project.HEAD_KEYS, _texts(project.HEAD_KEYS), ("title", "number", "address")),
        "office": closed(project.OFFICE_KEYS, _texts(project.OFFICE_KEYS), ("name",)),
        "codes": closed(codes.KEYS, {**_texts(codes.KEYS), "adopted": named("adopted")},
                        ("adopted", "concrete", "loads")),
        "adopted": closed(codes.ADOPTED_KEYS, _texts(codes.ADOPTED_KEYS), codes.ADOPTED_KEYS),
        "criteria": _criteria(library),
        "assumption": closed(
            gathering.ASSUMPTION_KEYS, {"says": text(), "by": text(), "to be verified": choice(("yes", "no"))},
            ("says", "to be verified"),
            **when({"properties": {"to be verified": {"const": "yes"}}, "required": ["to be verified"]}, has("by")),
        ),
        "elsewhere": closed(project.ELSEWHERE_KEYS, _texts(project.ELSEWHERE_KEYS), project.ELSEWHERE_KEYS),
        "disposition": closed(project.DISPOSITION_KEYS, _texts(project.DISPOSITION_KEYS),
                              **when(has("check"), has("says"), has("limit state", "covered by"))),
        "revision": closed(project.REVISION_KEYS, {**_texts(project.REVISION_KEYS), "date": text(_DATE)},
                           project.REVISION_KEYS),
        "one value": {"anyOf": [text(), named("told value")]},
        "value": {"anyOf": [text(), named("told value"), {"type": "array", "items": mapping(named("value"))},
                            mapping(named("value"))]},
        "told value": _told(),
        "rows of a table": closed(row_tables.KEYS, table, ("file", "columns")),
        "rows of another": closed(links.ROWS_KEYS, linked, ("from",)),
        "column": closed(columns.USE_KEYS, _texts(columns.USE_KEYS), ("column",)),
        # a key that is none of these is a role of the template, with the mark of a material
        "calculation": closed(calculations.KEYS, calculation, ("mark", "title", "template"),
            dependentRequired={"pinned": ["choose"], "table": ["members"]}, allOf=[
            _calculation_of(name, found) for name, found in takes.items()
        ]) | {"additionalProperties": role},
        # like members on one calculation have one title, which no column gives
        "schedule": closed(schedules.KEYS, schedule, ("file", "template", "mark"), allOf=[
            _schedule_of(name, found) for name, found in takes.items()
        ], **when(has("together"), {"properties": {"title": {"pattern": "^[^{]*$"}}})) | {
            "additionalProperties": role_of_row
        },
    }  # fmt: skip


def _texts(keys: tuple[str, ...]) -> dict[str, Schema]:
    return {key: text() for key in keys}


def _chosen(candidate: Schema) -> Schema:
    """Return a list of candidates, among them lists of those of one preference."""
    return items({"anyOf": [candidate, items(candidate) | _few()]}) | _few()


def _few() -> Schema:
    return {"minItems": 1, "maxItems": candidates.MOST_CANDIDATES}


def _template(takes: dict[str, _Takes]) -> Schema:
    """Return the schema of a template's name: one of the library's, or of a file beside the project."""
    return {"anyOf": [choice(takes), text()]}


def _told() -> Schema:
    """Return the schema of a value with its source, or of a link."""
    shapes = {**_texts(single_values.VALUE_KEYS), "at": mapping(text())}
    return closed(single_values.VALUE_KEYS, shapes, anyOf=[has("value"), has("from")])


def _criteria(library: Library) -> Schema:
    """Return the schema of the criteria, which are data of the library."""
    tree = library.tree(CRITERIA)
    known = tree.get("criteria") if tree is not None else None
    shapes: dict[str, Schema] = {}
    required: list[str] = []
    for key, entry in known.entries if isinstance(known, Mapping) else ():
        words, needed = (entry.get("one of"), entry.get("required")) if isinstance(entry, Mapping) else (None, None)
        listed = [one.text for one in words.items if isinstance(one, Scalar)] if isinstance(words, Sequence) else []
        shapes[key.text] = choice(listed) if listed else text()
        if isinstance(needed, Scalar) and needed.text == "yes":
            required.append(key.text)
    return closed(tuple(shapes), shapes, required)


@record
class _Takes:
    """What a template must be given, in whichever system and year it serves."""

    givens: tuple[Given, ...]
    #: names asked for in every one of them and read from no material or criterion
    needed: tuple[str, ...]


def _takes(library: Library) -> dict[str, _Takes]:
    """Return what every template of the library must be given."""
    found: dict[str, _Takes] = {}
    for name in library.world.template_names():
        head = library.head(name, None)
        variants: list[tuple[Given, ...]] = []
        for system, code in head.codes if head else ():
            for year in (head.years if head else ()) or ("",):
                editions = tuple(sorted(((code, year), (ANY_EDITION, ""))))
                template = library.template(name, system, editions, None)
                variants += [template.body.given] if template is not None else []
        if variants:
            givens = {one.name: one for variant in reversed(variants) for one in variant}
            always = set.intersection(*({one.name for one in variant if not one.elsewhere()} for variant in variants))
            found[name] = _Takes(tuple(givens.values()), tuple(one for one in givens if one in always))
    return found


def _calculation_of(name: str, takes: _Takes) -> Schema:
    """Return what a calculation of one template may hold: its roles, and its given values by their names."""
    values = {one.name: _value(one) | {"description": _says(one)} for one in takes.givens}
    # candidates may choose cells of rows that stand under given
    sets = {one.name: values[one.name] for one in takes.givens if one.kind == "rows"}
    parted = {one.name: _value(one, whole=False) | {"description": _says(one)} for one in takes.givens}
    given = {"properties": values | parted, "propertyNames": {"enum": list(values)}}
    cells = mapping(mapping(named("value")))
    either = {one.name: {"anyOf": [values[one.name], cells]} for one in takes.givens if one.kind == "rows"}
    chosen = _chosen(given | {"properties": values | either})
    # a member has its mark, and roles of its own where the calculation names none for all
    member = {"propertyNames": {"enum": [together.MARK, *values, *roles_of(takes.givens)]},
              "properties": values, "required": [together.MARK]}  # fmt: skip
    then = _roles(calculations.KEYS, takes) | {
        "properties": {"given": given, "choose": chosen, "pinned": given, "members": items(member)}
    }
    if takes.needed:
        # candidates may choose what is needed, and members have it for themselves
        all_given = {"required": list(takes.needed)} | ({"properties": sets} if sets else {})
        needed = {"required": ["given"], "properties": {"given": all_given}}
        then |= when({"not": {"anyOf": [has("choose"), has("members")]}}, needed)
    return _where_template(name, then)


def _schedule_of(name: str, takes: _Takes) -> Schema:
    """Return what a schedule of one template may hold; every value may come from a column."""
    given = {"properties": {one.name: {"description": _says(one)} for one in takes.givens},
             "propertyNames": {"enum": [one.name for one in takes.givens]}}  # fmt: skip
    return _where_template(
        name, _roles(schedules.KEYS, takes) | {"properties": {"given": given, "columns": given, "pinned": given}}
    )


def _where_template(name: str, then: Schema) -> Schema:
    return when({"properties": {"template": {"const": name}}, "required": ["template"]}, then)


def _roles(keys: tuple[str, ...], takes: _Takes) -> Schema:
    return {"propertyNames": {"enum": [*keys, *roles_of(takes.givens)]}}


def _value(given: Given, *, whole: bool = True) -> Schema:
    """Return what may be given: one value, rows of a set, or values for pairs of rows as deep as there are sets.

    Rows that are not `whole` may lack cells.
    """
    if given.kind == "rows":
        columns = {one.name: named("one value") | {"description": _says(one)} for one in given.columns}
        row = closed((ROW_NAME, *columns), {ROW_NAME: text(), **columns}, columns if whole else ())
        needed = [one.name for one in given.columns if not one.elsewhere()]
        linked = _with_columns("rows of another", needed, list(columns))
        taken = when(has("from"), linked, _with_columns("rows of a table", needed, [ROW_NAME, *columns]))
        return _by_shape(items(row), taken)
    if given.kind == "pairs":
        shape = named("one value")
        sides = [*(one.name for one in given.over), given.name]
        for _ in given.over:
            shape = mapping(shape)
        return _by_shape({"const": "none"}, when(has("file"), _with_columns("rows of a table", sides, sides), shape))
    return named("one value")


def _with_columns(name: str, needed: list[str], known: list[str]) -> Schema:
    """Return a definition whose `columns` name what is taken for a set or for pairs."""
    taken: Schema = {"propertyNames": {"enum": known}} | ({"required": needed} if needed else {})
    return named(name) | {"properties": {"columns": taken}}


def _by_shape(listed: Schema, mapped: Schema) -> Schema:
    """Return the schema of what may be a list, a mapping, or the word none."""
    return when({"type": "array"}, listed, when({"type": "object"}, mapped, {"const": "none"}))


def _says(given: Given) -> str:
    """Return what an editor tells of a given value."""
    unit = given.symbol.unit.text if given.symbol is not None and given.symbol.unit is not None else ""
    words = ", ".join(given.symbol.words) if given.symbol is not None else ""
    range_words = given.range.text if given.range is not None else ""
    none = "or none" if given.if_none is not None else ""
    material = f"from the material named under {given.material}" if given.material else ""
    criterion = f"from the criterion {given.criterion.name}" if given.criterion is not None else ""
    told = [given.says, f"in {unit}" if unit and unit != "1" else "", words, range_words, none, material, criterion]
    return "; ".join(word for word in told if word)
