"""Names in a filter's file that lead nowhere, and parts that nothing leads to."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from filtercheck.errors import InputError
from filtercheck.model.subject import Connection, Name, Subject
from filtercheck.position import Position


def loose_ends(found: Subject, parts: Mapping[str, Position]) -> Iterator[InputError]:
    """Yield what leads nowhere, and what nothing leads to.

    `parts` are the parts that the file states, also those that could not be read, and where.
    """
    yield from _fitted(found, parts)
    yield from _named(found)
    for connection in found.connections:
        if len(set(connection.nodes.values())) == 1:
            yield _short(connection)


def _fitted(found: Subject, parts: Mapping[str, Position]) -> Iterator[InputError]:
    used: dict[str, Position] = {}
    fitted = [name for section in found.sections for name in section.fit.values()]
    fitted += [Name(c.designator, c.at) for c in found.connections]
    for name in fitted:
        if name.word in used:
            yield _twice(name, used[name.word], "part", "one place in the circuit")
        elif name.word not in parts:
            yield name.unknown("part", parts)
        used.setdefault(name.word, name.at)
    for part, at in parts.items():
        if part not in used:
            yield _unused(part, at)


def _named(found: Subject) -> Iterator[InputError]:
    named: dict[str, Position] = {}
    for section in found.sections:
        if section.name in named:
            name = Name(section.name, section.at)
            yield _twice(name, named[section.name], "section", "each name once")
        named.setdefault(section.name, section.at)
    for requirement in found.requirements:
        if requirement.output not in found.outputs:
            name = Name(requirement.output, requirement.places["output"])
            yield name.unknown("output", found.outputs)


def _twice(name: Name, first: Position, kind: str, allowed: str) -> InputError:
    return InputError(
        f"the {kind} {name.word!r} stands twice in the circuit",
        name.at,
        found=f"first at {first}",
        allowed=allowed,
        fix="rename one of them, or delete it",
    )


def _unused(part: str, at: Position) -> InputError:
    return InputError(
        f"{part} is used nowhere",
        at,
        found="a part that no section fits and no connection names",
        allowed="parts that are in the circuit",
        fix=f"fit {part} in a section, or delete it",
    )


def _short(connection: Connection) -> InputError:
    return InputError(
        f"{connection.designator} is connected to one node only",
        connection.at,
        found=f"both ends at {next(iter(connection.nodes.values()))!r}",
        allowed="different nodes",
        fix="mend one of the nodes",
    )
