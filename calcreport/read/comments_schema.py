"""The JSON Schema of comment logs, from the key tables of their reader."""

from __future__ import annotations

from calcreport.read import comments
from calcreport.read.project import DATE
from calcreport.read.shapes import Schema, choice, closed, items, named, schema_file, text, texts, whole


def comments_schema() -> Schema:
    """Return the schema of a comment log."""
    date = text(f"^{DATE.pattern}$")
    shapes = {
        "cycle": whole(1, comments.MOST_CYCLES), "received": date, "reviewer": texts(), "application": text(),
        "date": date, "comments": items(named("comment")) | {"minItems": 1},
    }  # fmt: skip
    comment = {
        "number": text(f"^({comments.NUMBER.pattern})$"), "discipline": text(), "reference": text(), "says": text(),
        "response": text(), "status": choice(comments.STATUSES), "answered": named("answered"),
    }  # fmt: skip
    place = [text(f"^({comments.POINTER.pattern})$"), named("other place")]
    other = closed(comments.OTHER_KEYS, dict.fromkeys(comments.OTHER_KEYS, text()), minProperties=1, maxProperties=1)
    definitions = {
        "comment log": closed(comments.KEYS, shapes, [key for key in comments.KEYS if key != "application"]),
        "comment": closed(comments.COMMENT_KEYS, comment, [key for key in comments.COMMENT_KEYS if key != "reference"]),
        "answered": {"anyOf": [*place, items({"anyOf": place}) | {"minItems": 1}]},
        "other place": other,
    }
    return schema_file("calcreport comment log", named("comment log"), definitions)
