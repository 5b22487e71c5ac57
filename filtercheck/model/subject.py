"""A filter under judgement: what its file says, with the place of everything said."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from filtercheck.errors import InputError
from filtercheck.model.part import Parts
from filtercheck.model.requirement import Requirement
from filtercheck.position import Position
from filtercheck.wording import listed, suggestion


@dataclass(frozen=True)
class Name:
    """A word from a file and where it stands."""

    word: str
    at: Position

    def __str__(self) -> str:
        return self.word

    def unknown(self, kind: str, allowed: Iterable[str]) -> InputError:
        """Return the error for a name of no part, output or node that there is."""
        known = list(allowed)
        meant = suggestion(self.word, known)
        return InputError(
            f"there is no {kind} {self.word!r}",
            self.at,
            found=self.word,
            allowed=listed(known),
            fix=f"write {meant}" if meant else f"write one of the above, or add {self.word}",
        )


@dataclass(frozen=True)
class Section:
    """A known circuit, fitted with parts."""

    name: str
    circuit: Name
    fit: Mapping[str, Name]  # role -> designator
    drives: Name | None  # the output that feeds the next section
    at: Position


@dataclass(frozen=True)
class Connection:
    """A part between nodes: [a, b], or {plus, minus, out} for an amplifier."""

    designator: str
    nodes: Mapping[str, str]
    at: Position


@dataclass(frozen=True)
class Subject:
    """One filter: either `sections` or `connections` has members, never both."""

    name: str
    title: str
    file: str
    sections: tuple[Section, ...]
    connections: tuple[Connection, ...]
    parts: Parts
    outputs: Mapping[str, Name]  # output -> "section.output" or a node
    requirements: tuple[Requirement, ...]
    at: Position  # of the filter's name
