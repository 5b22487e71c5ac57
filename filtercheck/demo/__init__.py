"""The example board, shipped with the program: an invented logger on a bridge.

It measures the vibration of a bearing and the strain of the deck; all names and parts are
invented.
"""

from __future__ import annotations

from importlib.resources import files
from importlib.resources.abc import Traversable
from pathlib import Path

from filtercheck.errors import UsageError

# The one edit that breaks a requirement: in this file, this value of a damping resistor.
SPOILED = "filters/vibration-antialias.filter.yaml"
GOOD, BAD = "38k3", "48k7"


def write(folder: Path) -> None:
    """Write the board's files into a folder; those that are there already are left alone.

    Raises
    ------
    UsageError
        If a file is there with other content, which would be lost, or cannot be written.
    """
    board = dict(_files(files(__package__) / "board", Path()))
    for inside, text in board.items():
        place = folder / inside
        if place.exists() and place.read_text("utf-8") != text:
            raise UsageError(f"{place} is there already and differs; name another folder")
    try:
        for inside, text in board.items():
            (folder / inside).parent.mkdir(parents=True, exist_ok=True)
            (folder / inside).write_text(text, "utf-8")
    except OSError as error:
        raise UsageError(f"{folder}: cannot be written, {error.strerror}") from error


def guide(folder: str) -> str:
    """Return what to look at, and how to see a requirement break."""
    return f"""\
The board is in {folder}, the results in {folder}/results:
  junit.xml       for the CI system
  evidence.json   all figures, with the hash of every file

To see a requirement break, change one damping resistor and check again:
  in {folder}/{SPOILED}
  change R312 from {GOOD} to {BAD}, then run
  filtercheck check {folder}

Random boards can miss what the proof finds: all of 100 000 meet HUM-1 in
{folder}/filters/mains-notch.filter.yaml. Delete its line `verify:` to see a
board that does not.
"""


def _files(source: Traversable, inside: Path) -> list[tuple[Path, str]]:
    found: list[tuple[Path, str]] = []
    for entry in sorted(source.iterdir(), key=lambda entry: entry.name):
        if entry.is_dir():
            found += _files(entry, inside / entry.name)
        elif entry.name.endswith(".yaml"):
            found.append((inside / entry.name, entry.read_text("utf-8")))
    return found
