"""A place in a file that a user wrote."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Position:
    """Where something stands: line and column count from 1, width in characters."""

    file: str
    line: int
    column: int
    width: int
    text: str  # the whole line, so that a message can show it without the file

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"
