"""The example board: the bearing-vibration logger of a bridge, all names and parts invented."""

from __future__ import annotations

from importlib.resources import files
from importlib.resources.abc import Traversable
from pathlib import Path

# The one edit that breaks a requirement: the file, what stands there and what to write.
SPOILED = "filters/band-splitter.filter.yaml"
GOOD, BAD = "R4: {resistance: 28k7,", "R4: {resistance: 24k9,"


def write(folder: Path) -> None:
    """Write the board into a folder; files that are there already are written anew."""
    _copy(files(__package__) / "board", folder)


def _copy(source: Traversable, target: Path) -> None:
    target.mkdir(parents=True, exist_ok=True)
    for entry in sorted(source.iterdir(), key=lambda e: e.name):
        if entry.is_dir():
            _copy(entry, target / entry.name)
        elif entry.name.endswith(".yaml"):
            (target / entry.name).write_text(entry.read_text("utf-8"), "utf-8")
