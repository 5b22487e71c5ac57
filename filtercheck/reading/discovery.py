"""Find the files of a board, and read none that lies outside it.

A repository under check is untrusted: a symbolic link in it may point anywhere, and a
pattern may climb out of it.
"""

from __future__ import annotations

import os
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from hashlib import sha256
from pathlib import Path
from stat import S_ISREG

from filtercheck.errors import InputError, InputErrors, UsageError
from filtercheck.position import Position
from filtercheck.reading import schema
from filtercheck.reading.source import LARGEST, read

BOARD = "filtercheck.yaml"
SUFFIX = ".filter.yaml"


@dataclass(frozen=True)
class File:
    """A file to read: where it is, how to name it, and the folder it must lie in."""

    path: Path
    name: str
    root: Path


@dataclass(frozen=True)
class Found:
    """The filter files to judge, in order of their names, and the board's name if it has one."""

    board: str
    files: tuple[File, ...]


def find(paths: Sequence[str]) -> Found:
    """Return the files that the paths stand for: files, folders, or the board around here.

    Raises
    ------
    InputErrors
        If a board file is wrong.
    UsageError
        If a path does not exist, or nothing is found.
    """
    places = [Path(path) for path in paths] or [_around(Path())]
    boards: list[str] = []
    files: dict[Path, File] = {}
    for place in places:
        if place.is_dir():
            board, inside = _folder(place)
            boards += [board] if board else []
            if not inside:
                raise UsageError(f"no *{SUFFIX} file in {_named(place)}")
        elif place.exists():
            inside = [File(place, _named(place), _root(place))]
        else:
            raise UsageError(f"{_named(place)} does not exist")
        files |= {file.path.absolute(): file for file in inside}
    return Found(", ".join(boards), tuple(sorted(files.values(), key=lambda file: file.name)))


def content(file: File) -> tuple[str, str]:
    """Return a file's text, and the SHA-256 of its bytes.

    Raises
    ------
    InputErrors
        If it leads out of its folder, is no ordinary file, is too large or is no UTF-8.
    """
    try:
        if not file.path.resolve().is_relative_to(file.root.resolve()):
            raise _refused(file, "leads outside the folder under check", "a symbolic link")
        with open(file.path, "rb", opener=_opened) as stream:
            if not S_ISREG(os.fstat(stream.fileno()).st_mode):
                raise _refused(file, "is no ordinary file", "a device, a pipe or a folder")
            data = stream.read(LARGEST + 1)
    except OSError as error:
        raise _refused(file, "cannot be read", error.strerror or "an error") from error
    if len(data) > LARGEST:
        raise _refused(file, "is too large", f"more than {LARGEST:,} bytes")
    try:
        return data.decode("utf-8-sig"), sha256(data).hexdigest()
    except UnicodeDecodeError as error:
        raise _not_utf8(file, data, error) from error


def _opened(path: str, flags: int) -> int:
    """Open without waiting for a writer, should the file be a pipe."""
    return os.open(path, flags | getattr(os, "O_NONBLOCK", 0))


def _around(here: Path) -> Path:
    """Return the nearest folder upwards that holds a board file, or `here`."""
    for up in (here, *(Path(*[".."] * n) for n in range(1, len(here.absolute().parts)))):
        if (up / BOARD).is_file():
            return up
    return here


def _folder(folder: Path) -> tuple[str, list[File]]:
    """Return the name of a folder's board, and its filter files."""
    if not (folder / BOARD).exists():
        return "", [File(p, _named(p), folder) for p in _below(folder)]
    file = File(folder / BOARD, _named(folder / BOARD), folder)
    source = read(content(file)[0], file.name)
    schema.check(source, "board")
    data = source.data
    if not isinstance(data, dict):
        raise TypeError("the board's schema lets nothing but a mapping pass")
    patterns = data.get("filters")
    if not isinstance(patterns, list):
        return str(data["board"]), [File(p, _named(p), folder) for p in _below(folder)]
    found: list[Path] = []
    for i, pattern in enumerate(patterns):
        found += _matching(folder, str(pattern), source.values["filters", i])
    return str(data["board"]), [File(p, _named(p), folder) for p in found]


def _below(folder: Path) -> Iterator[Path]:
    """Yield the filter files below a folder; hidden folders and links are not entered."""
    for here, folders, files in os.walk(folder):
        folders[:] = [name for name in folders if not name.startswith(".")]
        yield from (Path(here, name) for name in files if name.endswith(SUFFIX))


def _matching(folder: Path, pattern: str, at: Position) -> list[Path]:
    """Return the files that a pattern of the board file stands for."""
    parts = Path(pattern).parts
    problem = "matches no file"
    if Path(pattern).is_absolute() or ".." in parts:
        problem = "leads outside the board's folder"
    elif found := [path for path in folder.glob(pattern) if not path.is_dir()]:
        return found
    raise InputErrors(
        [
            InputError(
                f"the pattern {problem}",
                at,
                found=pattern,
                allowed="a pattern of files below this one, such as filters/*.filter.yaml",
                fix="mend the pattern, or delete it",
            )
        ]
    )


def _root(place: Path) -> Path:
    """Return the folder that a file named on the command line must lie in."""
    here = Path()
    inside = not place.is_absolute() and ".." not in place.parts
    return here if inside else place.parent


def _named(place: Path) -> str:
    return place.as_posix()


def _refused(file: File, problem: str, found: str) -> InputErrors:
    at = Position(file.name, 1, 1, 1, "")
    allowed = f"an ordinary file below the folder, of at most {LARGEST:,} bytes"
    fix = "put the file itself there, or take it away"
    return InputErrors(
        [InputError(f"the file {problem}", at, found=found, allowed=allowed, fix=fix)]
    )


def _not_utf8(file: File, data: bytes, error: UnicodeDecodeError) -> InputErrors:
    before = data[: error.start].decode("utf-8", "replace")
    line = data.splitlines()[before.count("\n")].decode("utf-8", "replace")
    at = Position(file.name, before.count("\n") + 1, len(before) - before.rfind("\n"), 1, line)
    return InputErrors(
        [
            InputError(
                "the file is not UTF-8",
                at,
                found=f"byte 0x{data[error.start]:02x}",
                allowed="text in UTF-8",
                fix="save the file as UTF-8",
            )
        ]
    )
