"""What may stand under a key, as JSON Schema (2020-12): the words the schemas of files are written in.

Key tables and shapes in, schemas as plain mappings out. The reader types every value itself, so text may be written
with or without quotes: numbers and yes or no are texts too.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any, TypeAlias

Schema: TypeAlias = dict[str, Any]

DIALECT = "https://json-schema.org/draft/2020-12/schema"
#: where a reader is told what a value is by something that no schema sees
ANY: Schema = {}


def text(pattern: str = "") -> Schema:
    """Return the schema of text; a pattern holds what is written as text."""
    return {"type": ["string", "number", "boolean"]} | ({"pattern": pattern} if pattern else {})


def texts() -> Schema:
    """Return the schema of a list of texts; one text alone counts as a list of one."""
    return {"type": ["string", "number", "boolean", "array"], "items": text()}


def choice(words: Iterable[str]) -> Schema:
    """Return the schema of one word of a closed list."""
    return {"enum": list(words)}


def whole(low: int, high: int) -> Schema:
    """Return the schema of a whole number between bounds, written as a number or in quotes."""
    return {"type": ["integer", "string"], "minimum": low, "maximum": high, "pattern": "^[0-9]{1,9}$"}


def items(of: Schema) -> Schema:
    """Return the schema of a list."""
    return {"type": "array", "items": of}


def mapping(of: Schema) -> Schema:
    """Return the schema of a mapping whose keys are the author's own."""
    return {"type": "object", "additionalProperties": of}


def named(name: str) -> Schema:
    """Return a reference to a definition of the same file."""
    return {"$ref": f"#/$defs/{name}"}


def maybe(schema: Schema) -> Schema:
    """Return a schema that also takes a key without a value, which counts as no key."""
    if "enum" in schema:
        return schema | {"enum": [*schema["enum"], None]}
    if isinstance(schema.get("type"), str):
        return schema | {"type": [schema["type"], "null"]}
    if "type" in schema:
        return schema | {"type": [*schema["type"], "null"]}
    # an editor then says what is wrong with the value, and not that it is neither this nor nothing
    return {"if": {"not": {"type": "null"}}, "then": schema} if schema else schema


def closed(
    keys: Iterable[str],
    shapes: dict[str, Schema],
    required: Iterable[str] = (),
    filled: Iterable[str] = (),
    **more: Any,
) -> Schema:
    """Return the schema of a mapping with these keys and no others.

    `keys` is the reader's own table. A key whose shape is not told takes anything; a shape for a key that the reader
    does not know is left out. Keys that are `filled` may be missing and, if they stand there, have a value.
    """
    needed = list(required)
    whole = {*needed, *filled}
    properties = {key: shapes.get(key, ANY) if key in whole else maybe(shapes.get(key, ANY)) for key in keys}
    found: Schema = {"type": "object", "additionalProperties": False, "properties": properties}
    return found | ({"required": needed} if needed else {}) | more


def when(condition: Schema, then: Schema, other: Schema | None = None) -> Schema:
    """Return a schema that holds where a condition does; editors then say what is wrong with that case alone."""
    return {"if": condition, "then": then} | ({"else": other} if other is not None else {})


def has(*keys: str) -> Schema:
    """Return the condition that keys stand in a mapping."""
    return {"required": list(keys)}


def schema_file(title: str, root: Schema, definitions: dict[str, Schema]) -> Schema:
    """Return a whole schema."""
    return {"$schema": DIALECT, "title": title, **root, "$defs": definitions}
