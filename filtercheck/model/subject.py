"""A filter under judgement: what its file says, with the place of everything said."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from filtercheck.model.part import Parts
from filtercheck.model.requirement import Requirement
from filtercheck.position import Position


@dataclass(frozen=True)
class Name:
    """A word from a file and where it stands."""

    word: str
    at: Position

    def __str__(self) -> str:
        return self.word


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
