"""The World on a real disk: the project folder and the template library, each shut in. Writes by replacing.

The only module that opens files. A path that leaves its folder, through `..` or through a link, is refused.
"""

from __future__ import annotations

import os
import tempfile
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

from calcreport.core.source import Source

#: files larger than this are not read as text
LARGEST_TEXT, LARGEST_BYTES = 8_000_000, 100_000_000


def library_folder() -> Path:
    """Return the folder of the template library: inside the package as installed, beside it in a checkout."""
    inside = Path(__file__).parent / "templates"
    return inside if inside.is_dir() else Path(__file__).parent.parent / "templates"


@dataclass(frozen=True, slots=True)
class Disk:
    """Reads the files of one project folder and of the library."""

    folder: Path
    library: Path

    def project_text(self, path: str) -> Source | str:
        """Return a text file of the project folder, or why not."""
        return read_text(self.folder, path)

    def project_bytes(self, path: str) -> bytes | str:
        """Return the bytes of a file of the project folder, or why not."""
        found = inside(self.folder, path)
        return found if isinstance(found, str) else _read(found, LARGEST_BYTES)

    def template_text(self, name: str) -> Source | str:
        """Return a file of the library, else of the project folder."""
        found = read_text(self.library, name)
        if isinstance(found, Source):
            return Source("templates/" + name, found.text)
        return read_text(self.folder, name)

    def template_names(self) -> tuple[str, ...]:
        """Return the names of the library's templates."""
        names = []
        for path in sorted(self.library.rglob("*.yaml")):
            name = path.relative_to(self.library).with_suffix("").as_posix()
            table = path.name == "symbols.yaml" or path.name.startswith("bars-") or path.name.endswith(".cases.yaml")
            if "/" in name and not table:
                names.append(name)
        return tuple(names)


def inside(folder: Path, path: str) -> Path | str:
    """Return the real path of a file inside a folder, or why it may not be read."""
    if not path or len(path) > 300 or "\0" in path or "\\" in path or Path(path).is_absolute():
        return "not a path inside the folder"
    real = Path(os.path.realpath(folder / path))
    home = Path(os.path.realpath(folder))
    if home != real and home not in real.parents:
        return "it leads outside the folder"
    if not real.is_file():
        return "no such file"
    return real


def read_text(folder: Path, path: str) -> Source | str:
    """Return a UTF-8 text file with its line ends made alike, or why it cannot be read."""
    found = inside(folder, path)
    if isinstance(found, str):
        return found
    data = _read(found, LARGEST_TEXT)
    if isinstance(data, str):
        return data
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError as error:
        return f"it is not UTF-8 text (byte {error.start})"
    return Source(path, text.removeprefix("\ufeff").replace("\r\n", "\n"))


def _read(path: Path, largest: int) -> bytes | str:
    try:
        if path.stat().st_size > largest:
            return f"it is larger than {largest:,} bytes"
        return path.read_bytes()
    except OSError as error:
        return error.strerror or "it cannot be read"


def replace_file(path: Path, data: bytes) -> str:
    """Write a file whole or not at all: beside it first, then moved into place. Returns '' or why not."""
    try:
        handle, name = tempfile.mkstemp(prefix=f".{path.name}.", suffix=".part", dir=path.parent)
    except OSError as error:
        return error.strerror or "the folder cannot be written"
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        os.chmod(name, 0o644)
        os.replace(name, path)
    except OSError as error:
        with suppress(OSError):
            os.unlink(name)
        return error.strerror or "the file cannot be written"
    except BaseException:
        with suppress(OSError):
            os.unlink(name)
        raise
    return ""
