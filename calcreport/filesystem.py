"""The World on a real disk: the project folder and the template library, each shut in. Writes by replacing.

The only module that opens files. A path that leaves its folder, through `..` or through a link, is refused.
"""

from __future__ import annotations

import glob
import os
import shutil
from collections.abc import Callable, Mapping
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path
from typing import TypeAlias

from calcreport.core.source import Source
from calcreport.core.world import NO_SUCH_FILE

#: files larger than this are not read as text
LARGEST_TEXT, LARGEST_BYTES = 8_000_000, 100_000_000
#: an unfinished file this much older than a finished one (seconds) was left by a run that was killed
_LEFT_BEHIND = 600.0
#: the folder of frozen issues beside a project file, and the record in the folder of each
ISSUES, ISSUE_RECORD = "issues", "issue.yaml"
#: times of writing and of change, size, number
Stamp: TypeAlias = tuple[int, int, int, int]


def library_folder() -> Path:
    """Return the folder of the template library: inside the package as installed, beside it in a checkout."""
    within = Path(__file__).parent / "templates"
    return within if within.is_dir() else Path(__file__).parent.parent / "templates"


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
        real, why = inside(self.folder, path)
        return why if real is None else _read(real, LARGEST_BYTES)

    def template_text(self, name: str) -> Source | str:
        """Return a file of the library, else of the project folder."""
        found = read_text(self.library, name)
        if isinstance(found, Source):
            return Source("templates/" + name, found.text)
        return read_text(self.folder, name) if found == NO_SUCH_FILE else found

    def template_names(self) -> tuple[str, ...]:
        """Return the names of the library's templates."""
        names = []
        for path in sorted(self.library.rglob("*.yaml")):
            name = path.relative_to(self.library).with_suffix("").as_posix()
            table = path.name == "symbols.yaml" or path.name.startswith("bars-")
            is_starter = path.parent.name == "starter"
            if "/" in name and not table and not is_starter and not path.name.endswith(".cases.yaml"):
                names.append(name)
        return tuple(names)


def inside(folder: Path, path: str) -> tuple[Path | None, str]:
    """Return the real path of a file inside a folder, or None and why it may not be read."""
    if not path or len(path) > 300 or "\0" in path or "\\" in path or Path(path).is_absolute():
        return None, "it is not a path inside the folder"
    if os.path.normpath(path).split(os.sep)[0] == os.pardir:
        # also where it comes back in: then it would hang on what the folder is called
        return None, "it leads outside the folder"
    try:
        real, home = Path(os.path.realpath(folder / path)), Path(os.path.realpath(folder))
        if home != real and home not in real.parents:
            return None, "it leads outside the folder"
        if not real.exists():
            return None, NO_SUCH_FILE
        return (real, "") if real.is_file() else (None, "it is not a file")
    except OSError as error:
        return None, (error.strerror or "it cannot be read").lower()


def read_text(folder: Path, path: str) -> Source | str:
    """Return a UTF-8 text file with its line ends made alike, or why it cannot be read."""
    real, why = inside(folder, path)
    if real is None:
        return why
    data = _read(real, LARGEST_TEXT)
    if isinstance(data, str):
        return data
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError as error:
        return f"it is not UTF-8 text: see line {data.count(10, 0, error.start) + 1}"
    shown = folder.as_posix()
    return Source(path, text.removeprefix("\ufeff").replace("\r\n", "\n"), "" if shown == "." else shown)


def stamp(path: Path) -> Stamp | None:
    """Return how a file looks from outside, None where there is none; it looks different after every save."""
    try:
        found = path.stat()
    except (OSError, ValueError):
        return None
    # a file moved into place has another number; one whose old time was set again has a new time of change
    return found.st_mtime_ns, found.st_ctime_ns, found.st_size, found.st_ino


def begins_with(path: Path, mark: bytes) -> bool:
    """Tell whether a file can be read and begins with these bytes."""
    try:
        with path.open("rb") as file:
            return file.read(len(mark)) == mark
    except OSError:
        return False


def read_file(path: Path) -> bytes | str:
    """Return the bytes of a file that a person names, or why not."""
    return _read(path, LARGEST_BYTES) if path.is_file() or not path.exists() else "it is not a file"


def _read(path: Path, largest: int) -> bytes | str:
    try:
        if path.stat().st_size > largest:
            return f"it is larger than {largest:,} bytes"
        return path.read_bytes()
    except OSError as error:
        return (error.strerror or "it cannot be read").lower()


def make_folder(path: Path) -> str:
    """Make a folder, or take one that is empty. Returns '' or why not."""
    try:
        path.mkdir(parents=True, exist_ok=True)
        return "files stand in it" if any(path.iterdir()) else ""
    except OSError as error:
        return (error.strerror or "it cannot be made").lower()


def make_files(files: dict[Path, bytes]) -> str:
    """Write files that are not there yet, all or none of them. Returns '' or why not."""
    made: list[Path] = []
    if any(map(_is_frozen, files)):
        return "it would stand in a frozen issue"
    why = ""
    try:
        for path, data in files.items():
            with path.open("xb") as file:
                made.append(path)
                file.write(data)
    except FileExistsError:
        why = f"{path.name} stands there already"
    except OSError as error:
        why = (error.strerror or "the file cannot be written").lower()
    for path in made if why else ():
        with suppress(OSError):
            path.unlink()
    return why


def replace_file(path: Path, data: bytes) -> str:
    """Write a file whole or not at all: beside it first, then moved into place. Returns '' or why not."""
    beside = path.parent / f".{path.name[:80]}.{os.getpid()}.part"
    if _is_frozen(path):
        return "it would stand in a frozen issue"
    try:
        if path.exists() and not path.is_file():
            return "something that is not a file stands there"
        beside.unlink(missing_ok=True)
        _write_beside(beside, data)
        if path.exists():
            shutil.copymode(path, beside)
        os.replace(beside, path)
    except OSError as error:
        return (error.strerror or "the file cannot be written").lower()
    finally:
        with suppress(OSError):
            beside.unlink(missing_ok=True)
    _sweep(path)
    return ""


def _is_frozen(path: Path) -> bool:
    """Tell whether a path leads into a folder of `issues` that holds the record of an issue."""
    parents = Path(os.path.abspath(path)).parents
    return any(folder.parent.name == ISSUES and os.path.isfile(folder / ISSUE_RECORD) for folder in parents)


def stands(path: Path) -> str:
    """Return the name of what stands at a path, however it is capitalised, or ''."""
    try:
        names = os.listdir(path.parent)
    except OSError:
        return ""
    return next((name for name in names if name.casefold() == path.name.casefold()), "")


def put_folder(path: Path, files: Mapping[str, bytes], last: Callable[[], str]) -> str:
    """Make a folder of files where nothing stands: written beside its place, then moved into it, all or none of it.

    `last` is called when the files are written and before they are moved, and may say why they must not be. Missing
    folders above are made. Returns '' or why not; then nothing is left, neither files nor folders.
    """
    beside = path.parent / f".{path.name}.{os.getpid()}.part"
    why, made = "", [folder for folder in (path.parent, *path.parent.parents) if not folder.exists()]
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        shutil.rmtree(beside, ignore_errors=True)
        for name, data in files.items():
            file = beside / name
            file.parent.mkdir(parents=True, exist_ok=True)
            _write(os.open(file, os.O_CREAT | os.O_EXCL | os.O_WRONLY, 0o644), data, None)
        why = last() or ("something stands there" if stands(path) else "")
        if not why:
            os.rename(beside, path)
    except OSError as error:
        why = (error.strerror or "the folder cannot be written").lower()
    finally:
        shutil.rmtree(beside, ignore_errors=True)
        for folder in made if why or not path.exists() else ():
            with suppress(OSError):
                folder.rmdir()
    if not why:
        _sweep(path)
    return why


def _write_beside(path: Path, data: bytes) -> None:
    """Write a new file; where the system can, it has no name until it is whole, so a killed run leaves nothing."""
    if hasattr(os, "O_TMPFILE"):
        with suppress(OSError):
            _write(os.open(path.parent, os.O_TMPFILE | os.O_WRONLY, 0o644), data, path)
            return
    _write(os.open(path, os.O_CREAT | os.O_EXCL | os.O_WRONLY, 0o644), data, None)


def _write(handle: int, data: bytes, name: Path | None) -> None:
    with os.fdopen(handle, "wb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())
        if name is not None:
            # with `src_dir_fd` this is the system call that can follow the link in /proc to the file itself
            os.link(f"/proc/self/fd/{file.fileno()}", name, src_dir_fd=file.fileno(), follow_symlinks=True)


def _sweep(path: Path) -> None:
    """Remove what earlier runs that were killed left beside a file or a folder now written."""
    with suppress(OSError):
        written = path.stat().st_mtime
        for left in path.parent.glob(f".{glob.escape(path.name[:80])}.*.part"):
            if written - left.stat().st_mtime > _LEFT_BEHIND:
                if left.is_dir() and not left.is_symlink():
                    shutil.rmtree(left, ignore_errors=True)
                else:
                    left.unlink(missing_ok=True)
