"""`calcreport schema`: the JSON Schema of a kind of file, for editors and other programs."""

from __future__ import annotations

import json
from argparse import Namespace
from pathlib import Path

from calcreport.core.problems import Problems
from calcreport.core.source import Source
from calcreport.filesystem import Disk, library_folder, read_text
from calcreport.read.comments_schema import comments_schema
from calcreport.read.library import Library
from calcreport.read.project_schema import project_schema
from calcreport.read.shapes import Schema
from calcreport.read.template_schema import cases_schema, template_schema
from calcreport.report import valuesfile

KINDS = ("project", "template", "cases", "values", "comments")


def run(arguments: Namespace) -> int:
    """Print one schema."""
    print(json.dumps(schema_of(arguments.kind), indent=1, ensure_ascii=False))
    return 0


def schema_of(kind: str) -> Schema:
    """Return the schema of one of `KINDS`."""
    if kind == "values":
        found = read_text(Path(valuesfile.__file__).parent, "values.schema.json")
        assert isinstance(found, Source)
        schema: Schema = json.loads(found.text)
        return schema
    if kind == "comments":
        return comments_schema()
    if kind == "project":
        folder = library_folder()
        return project_schema(Library(Disk(folder, folder), Problems()))
    return template_schema() if kind == "template" else cases_schema()
