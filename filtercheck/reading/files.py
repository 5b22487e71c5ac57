"""Read a file of the repository under check, and none that lies outside it.

A repository under check is untrusted: a symbolic link in it may point anywhere, and a name
may stand for a pipe or a device.
"""

from __future__ import annotations

import os
from dataclasses import dataclass
from hashlib import sha256
from pathlib import Path
from stat import S_ISREG

from filtercheck.errors import InputError, InputErrors
from filtercheck.position import Position
from filtercheck.reading.source import LARGEST, LINE_END


@dataclass(frozen=True)
class File:
    """A file to read: where it is, how to name it, and the folder it must lie in."""

    path: Path
    name: str
    root: Path


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
    except (OSError, RuntimeError) as error:  # a loop of links is a RuntimeError
        found = getattr(error, "strerror", None) or "a loop of links, or an error"
        raise _refused(file, "cannot be read", found) from error
    if len(data) > LARGEST:
        raise _refused(file, "is too large", f"more than {LARGEST:,} bytes")
    try:
        return data.decode("utf-8-sig"), sha256(data).hexdigest()
    except UnicodeDecodeError as error:
        raise _not_utf8(file, error) from error


def _opened(path: str, flags: int) -> int:
    """Open without waiting for a writer, should the file be a pipe."""
    return os.open(path, flags | getattr(os, "O_NONBLOCK", 0))


def _refused(file: File, problem: str, found: str) -> InputErrors:
    at = Position(file.name, 1, 1, 1, "")
    allowed = f"an ordinary file below the folder, of at most {LARGEST:,} bytes"
    fix = "put the file itself there, or take it away"
    return InputErrors(
        [InputError(f"the file {problem}", at, found=found, allowed=allowed, fix=fix)]
    )


def _not_utf8(file: File, error: UnicodeDecodeError) -> InputErrors:
    data = error.object  # without a byte order mark, unlike what was read
    before = LINE_END.split(data[: error.start].decode("utf-8", "replace"))
    line = LINE_END.split(data.decode("utf-8", "replace"))[len(before) - 1]
    return InputErrors(
        [
            InputError(
                "the file is not UTF-8",
                Position(file.name, len(before), len(before[-1]) + 1, 1, line),
                found=f"byte 0x{data[error.start]:02x}",
                allowed="text in UTF-8",
                fix="save the file as UTF-8",
            )
        ]
    )
