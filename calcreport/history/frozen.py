"""The files an issue consists of, by name, and a World over them: a project read from what was frozen with it.

Names and bytes in, the same names wherever they stand: in a folder of `issues/`, inside a PDF. Text is frozen as it was
read, in UTF-8 with plain line ends, so that the same project gives the same files on every machine. Nothing is looked
for anywhere else, neither in the library as installed nor beside the project.
"""

from __future__ import annotations

import json
import posixpath
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from calcreport.core.source import Source
from calcreport.core.world import NO_SUCH_FILE

#: where the files of a project, and those a template is asked for by, stand among the frozen ones
INPUTS, TEMPLATES = "inputs/", "templates/"
VALUES = "values.json"
#: the package itself, in the folder of an issue
PACKAGE = "package.pdf"


def frozen_files(inputs: Mapping[str, bytes], templates: Mapping[str, bytes]) -> dict[str, bytes]:
    """Return the files a package is made from under the names they are frozen by, sorted."""
    files = {INPUTS + posixpath.normpath(name): data for name, data in inputs.items()}
    files |= {TEMPLATES + posixpath.normpath(name): data for name, data in templates.items()}
    return dict(sorted(files.items()))


def stated(files: Mapping[str, bytes]) -> dict[str, str]:
    """Return what the frozen values say of their project, such as its `file` and `status`; {} for nothing."""
    try:
        found = json.loads(files.get(VALUES, b""))
    except (ValueError, RecursionError):
        return {}
    facts = found.get("project") if isinstance(found, dict) else None
    return {key: one for key, one in facts.items() if isinstance(one, str)} if isinstance(facts, dict) else {}


def marks_of(files: Mapping[str, bytes]) -> Literal["last", "all", "none"]:
    """Return which changes the sheets were marked by, as the frozen values say."""
    found = stated(files).get("marks")
    return "all" if found == "all" else "none" if found == "none" else "last"


@dataclass(frozen=True, slots=True)
class Frozen:
    """A World whose files are given beforehand."""

    files: Mapping[str, bytes]
    #: folder that problems name before the name of a file, '' for none
    folder: str = ""

    def project(self) -> Source | str:
        """Return the project file, or why there is none."""
        name = stated(self.files).get("file", "")
        return self.project_text(name) if name else f"{VALUES} names no project file"

    def project_text(self, path: str) -> Source | str:
        """Return a text file of the project, or why not."""
        return self._text(INPUTS, path, path)

    def project_bytes(self, path: str) -> bytes | str:
        """Return the bytes of a file of the project, or why not."""
        return self.files.get(INPUTS + posixpath.normpath(path), NO_SUCH_FILE)

    def template_text(self, name: str) -> Source | str:
        """Return a template or what stands beside one, or why not."""
        return self._text(TEMPLATES, name, TEMPLATES + name)

    def template_names(self) -> tuple[str, ...]:
        """Return the names of the templates frozen; notation, bars and closed lists are not told from them."""
        ending = ".yaml"
        found = (name.removeprefix(TEMPLATES) for name in self.files if name.startswith(TEMPLATES))
        return tuple(sorted(name.removesuffix(ending) for name in found if name.endswith(ending)))

    def _text(self, kind: str, path: str, shown: str) -> Source | str:
        data = self.files.get(kind + posixpath.normpath(path))
        if data is None:
            return NO_SUCH_FILE
        try:
            text = data.decode("utf-8")
        except UnicodeDecodeError as error:
            return f"it is not UTF-8 text: see line {data.count(10, 0, error.start) + 1}"
        folder = f"{self.folder}/{INPUTS}".rstrip("/") if self.folder and kind == INPUTS else self.folder
        return Source(shown, text.removeprefix("\ufeff").replace("\r\n", "\n"), folder)
