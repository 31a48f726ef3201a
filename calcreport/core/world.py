"""What the program may ask of the outside: files by name, nothing else. No clock, no network."""

from __future__ import annotations

from typing import Protocol

from calcreport.core.source import Source

#: why a file cannot be read, where nothing stands under its name
NO_SUCH_FILE = "no such file"


class World(Protocol):
    """Reads files of the project folder and of the template library."""

    def project_text(self, path: str) -> Source | str:
        """Return a text file inside the project folder, or why it cannot be read, in words."""

    def project_bytes(self, path: str) -> bytes | str:
        """Return the bytes of a file inside the project folder, or why it cannot be read."""

    def template_text(self, name: str) -> Source | str:
        """Return a template or table such as 'aci318/beam-flexure.yaml': library first, then project.

        Where neither holds it the words are `NO_SUCH_FILE`.
        """

    def template_names(self) -> tuple[str, ...]:
        """Return the names of all templates of the library, sorted."""
