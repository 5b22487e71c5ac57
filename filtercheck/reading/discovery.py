"""Find the filter files that a command is about: those of a board, of a folder, or named."""

from __future__ import annotations

import os
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from filtercheck.errors import InputError, InputErrors, UsageError
from filtercheck.position import Position
from filtercheck.reading import schema
from filtercheck.reading.files import File, content
from filtercheck.reading.source import read

BOARD = "filtercheck.yaml"
SUFFIX = ".filter.yaml"


@dataclass(frozen=True)
class Found:
    """The filter files to judge, in order of their names; the board's name and file, if any."""

    board: str
    files: tuple[File, ...]
    hashes: Mapping[str, str]  # board file -> SHA-256


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
    hashes: dict[str, str] = {}
    files: dict[str, File] = {}
    for place in places:
        if place.is_dir():
            inside = _folder(place, boards, hashes)
            if not inside:
                raise UsageError(f"no *{SUFFIX} file in {_named(place)}")
        elif place.exists():
            inside = [File(place, _named(place), _root(place))]
        else:
            raise UsageError(f"{_named(place)} does not exist")
        files |= {os.path.abspath(file.path): file for file in inside}  # noqa: PTH100  (of a/..)
    return Found(
        ", ".join(boards), tuple(sorted(files.values(), key=lambda file: file.name)), hashes
    )


def _around(here: Path) -> Path:
    """Return the nearest folder upwards that holds a board file, or `here`."""
    for up in (here, *(Path(*[".."] * n) for n in range(1, len(here.absolute().parts)))):
        if (up / BOARD).is_file():
            return up
    return here


def _folder(folder: Path, boards: list[str], hashes: dict[str, str]) -> list[File]:
    """Return the filter files of a folder; add the name and the hash of its board file."""
    if not (folder / BOARD).exists():
        return [File(p, _named(p), folder) for p in _below(folder)]
    file = File(folder / BOARD, _named(folder / BOARD), folder)
    text, hashes[file.name] = content(file)
    source = read(text, file.name)
    schema.check(source, "board")
    data = source.data
    if not isinstance(data, dict):
        raise TypeError("the board's schema lets nothing but a mapping pass")
    boards.append(str(data["board"]))
    patterns = data.get("filters")
    if not isinstance(patterns, list):
        return [File(p, _named(p), folder) for p in _below(folder)]
    found: list[Path] = []
    for i, pattern in enumerate(patterns):
        found += _matching(folder, str(pattern), source.values["filters", i])
    return [File(p, _named(p), folder) for p in found]


def _below(folder: Path) -> Iterator[Path]:
    """Yield the filter files below a folder; hidden folders and links are not entered."""
    for here, folders, files in os.walk(folder, onerror=_unlisted):
        folders[:] = [name for name in folders if not name.startswith(".")]
        yield from (Path(here, name) for name in files if name.endswith(SUFFIX))


def _unlisted(error: OSError) -> None:
    """Refuse to pass over a folder: a filter in it would go unjudged."""
    raise UsageError(f"{error.filename}: the folder cannot be listed, {error.strerror}")


def _matching(folder: Path, pattern: str, at: Position) -> list[Path]:
    """Return the files that a pattern of the board file stands for."""
    parts = Path(pattern).parts
    problem = "matches no file"
    if Path(pattern).is_absolute() or ".." in parts:
        problem = "leads outside the board's folder"
    elif pattern.count("**") > 1:
        problem = "has more than one `**`"  # the search would take time without bound
    elif found := _globbed(folder, pattern):
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


def _globbed(folder: Path, pattern: str) -> list[Path]:
    try:
        return [path for path in folder.glob(pattern) if not path.is_dir()]
    except (
        ValueError,
        IndexError,
        AttributeError,
        NotImplementedError,
    ):  # no pattern that can be searched
        return []


def _root(place: Path) -> Path:
    """Return the folder that a file named on the command line must lie in."""
    here = Path()
    inside = not place.is_absolute() and ".." not in place.parts
    return here if inside else place.parent


def _named(place: Path) -> str:
    return place.as_posix()
