"""A project kept open: built again after a save, with all that no change has touched taken from the build before.

What is kept and when it is given up is decided here and nowhere else; `core.kept` is the means, and the stages name
their steps to it. Also knows which files a project reads, how they looked before they were read, and what stood in
them: a look at their stamps says when to read again, and only what stands in them decides what is made anew.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from pathlib import Path

from calcreport.core.kept import Kept
from calcreport.core.source import Source
from calcreport.driver import Progress, silent
from calcreport.filesystem import Disk, Stamp, read_text, stamp
from calcreport.publish import Package, build


@dataclass(slots=True)
class Reading:
    """The world of one build: reads through a disk, and notes every file asked for before it is read."""

    path: Path
    disk: Disk
    #: how every file that matters looked before it was first read, None for none: a template may stand in two folders
    stamps: dict[Path, Stamp | None] = field(default_factory=dict)
    #: what each question was answered, by its kind and name
    answers: dict[tuple[str, str], Source | bytes | str] = field(default_factory=dict)

    def project(self) -> Source | str:
        """Return the project file, or why it cannot be read."""
        self._note(self.path)
        return self._answer("project", self.path.name, read_text(self.path.parent, self.path.name))

    def project_text(self, path: str) -> Source | str:
        """Return a text file of the project folder, or why not."""
        self._note(_beneath(self.disk.folder, path))
        return self._answer("text", path, self.disk.project_text(path))

    def project_bytes(self, path: str) -> bytes | str:
        """Return the bytes of a file of the project folder, or why not."""
        self._note(_beneath(self.disk.folder, path))
        found = self.disk.project_bytes(path)
        self.answers["bytes", path] = found
        return found

    def template_text(self, name: str) -> Source | str:
        """Return a file of the library, else of the project folder."""
        self._note(_beneath(self.disk.library, name))
        self._note(_beneath(self.disk.folder, name))
        return self._answer("template", name, self.disk.template_text(name))

    def template_names(self) -> tuple[str, ...]:
        """Return the names of the library's templates."""
        return self.disk.template_names()

    def _note(self, path: Path | None) -> None:
        if path is not None and path not in self.stamps:
            self.stamps[path] = stamp(path)

    def _answer(self, kind: str, name: str, found: Source | str) -> Source | str:
        self.answers[kind, name] = found
        return found

    def touched(self) -> list[Path]:
        """Return the files that look different from before they were read."""
        return [path for path, looked in self.stamps.items() if stamp(path) != looked]

    def stamps_now(self) -> dict[Path, Stamp | None]:
        """Return how the same files look now."""
        return {path: stamp(path) for path in self.stamps}

    def again(self) -> Reading:
        """Ask every question once more."""
        other = Reading(self.path, self.disk)
        for kind, name in self.answers:
            match kind:
                case "project":
                    other.project()
                case "text":
                    other.project_text(name)
                case "bytes":
                    other.project_bytes(name)
                case _:
                    other.template_text(name)
        return other

    def agrees(self, other: Reading) -> bool:
        """Tell whether another reading found the same in every file."""
        return _plain(self.answers.values()) == _plain(other.answers.values())


def _beneath(folder: Path, name: str) -> Path | None:
    """Return where a file is looked for; None for a name that leads out of the folder and is not read."""
    parts = Path(name)
    return None if not name or "\0" in name or parts.is_absolute() or ".." in parts.parts else folder / parts


def _plain(answers: Iterable[Source | bytes | str]) -> list[tuple[str, bytes | str]]:
    return [("text", one.text) if isinstance(one, Source) else (type(one).__name__, one) for one in answers]


class Session:
    """Builds one project again and again; the bytes are those of a build that begins with nothing."""

    def __init__(self) -> None:
        self._kept = Kept()

    def build(self, reading: Reading, source: Source, progress: Progress = silent) -> Package:
        """Build from what a reading finds; after problems all is kept for the save that mends them."""
        self._kept.begin()
        package = build(reading, source, progress, kept=self._kept)
        if package.data:
            self._kept.end()
        return package

    @property
    def worked(self) -> tuple[str, ...]:
        """The marks of the calculations that the last build worked anew."""
        return tuple(str(name) for step, name in self._kept.made if step == "work")
