"""A filter's file -> model: names that must lead somewhere, and requirements."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import cast

from filtercheck.errors import InputError, InputErrors, bounded
from filtercheck.model.requirement import Requirement, Sampling
from filtercheck.model.subject import Connection, Name, Section, Subject
from filtercheck.quantities import parse
from filtercheck.reading import schema
from filtercheck.reading.links import loose_ends
from filtercheck.reading.networks import unlike
from filtercheck.reading.parts import parts
from filtercheck.reading.source import Data, Path, Source, read

# The keys that all kinds share; the others are the kind's own settings.
_COMMON = ("kind", "output", "verify")


def subject(text: str, file: str) -> Subject:
    """Return the filter that a file describes.

    Raises
    ------
    InputErrors
        All that is wrong with it.
    """
    source = read(text, file)
    schema.check(source, "filter")
    data = cast("Mapping[str, Data]", source.data)
    faults: list[InputError] = []
    if ("sections" in data) == ("connect" in data):
        # What is fitted where cannot be told then, so nothing more is said of it.
        raise InputErrors([_not_one_circuit(source, "connect" in data)])
    found = Subject(
        name=str(data["filter"]),
        title=str(data.get("title", "")),
        file=file,
        sections=tuple(_sections(source)),
        connections=tuple(_connections(source)),
        parts=parts(source, faults),
        outputs={key: _name(source, "outputs", key) for key in _keys(source, "outputs")},
        requirements=tuple(_requirements(source, faults)),
        at=source.values["filter",],
    )
    faults.extend(bounded(unlike(found.parts)))
    stated = {part: source.at("parts", part) for part in _keys(source, "parts")}
    faults.extend(bounded(loose_ends(found, stated)))
    if faults:
        raise InputErrors(faults)
    return found


def _not_one_circuit(source: Source, both: bool) -> InputError:
    return InputError(
        "the circuit is given twice" if both else "the circuit is missing",
        source.at("connect") if both else source.values[()],
        found="both `sections` and `connect`" if both else "neither `sections` nor `connect`",
        allowed="`sections` of known circuits, or `connect` with the nodes of every part",
        fix="delete one of them" if both else "add `sections:`, see `filtercheck explain filter`",
    )


def _sections(source: Source) -> Iterator[Section]:
    for i, _ in enumerate(_items(source, "sections")):
        path: Path = ("sections", i)
        drives = (*path, "drives")
        yield Section(
            name=_name(source, *path, "name").word,
            circuit=_name(source, *path, "circuit"),
            fit={role: _name(source, *path, "fit", role) for role in _keys(source, *path, "fit")},
            drives=_name(source, *drives) if drives in source.values else None,
            at=source.values[(*path, "name")],
        )


def _connections(source: Source) -> Iterator[Connection]:
    for designator in _keys(source, "connect"):
        nodes = _data(source, "connect", designator)
        pairs = nodes.items() if isinstance(nodes, dict) else zip("ab", nodes, strict=True)
        yield Connection(
            designator,
            {terminal: str(node) for terminal, node in pairs},
            source.at("connect", designator),
        )


def _requirements(source: Source, faults: list[InputError]) -> Iterator[Requirement]:
    for name in _keys(source, "requirements"):
        data = cast("Mapping[str, Data]", _data(source, "requirements", name))
        verify = data.get("verify", "worst-case")
        rules = schema.schema("filter")["definitions"][f"kind-{data['kind']}"]["properties"]
        yield Requirement(
            name=name,
            kind=str(data["kind"]),
            output=str(data["output"]),
            verify=verify if isinstance(verify, str) else "yield",
            sampling=None if isinstance(verify, str) else _sampling(source, name, faults),
            settings={
                key: schema.converted(value, rules[key])
                for key, value in data.items()
                if key not in _COMMON
            },
            places={key: source.values["requirements", name, key] for key in data},
            at=source.at("requirements", name),
        )


def _sampling(source: Source, name: str, faults: list[InputError]) -> Sampling:
    """Return what a yield must be; add what no sample could show."""
    path = ("requirements", name, "verify")
    data = cast("Mapping[str, Data]", _data(source, *path))
    share, confidence = (parse(str(data[key]), "percentage") for key in ("yield", "confidence"))
    boards = parse(str(data.get("boards", "100000")), "number")
    for key, right, allowed in (
        ("yield", share < 1.0, "less than 100 %: `verify: worst-case` is for every board"),
        ("confidence", confidence < 1.0, "less than 100 %"),
        ("boards", boards.is_integer() and 100 <= boards <= 1e7, "a whole number, 100 to 10000000"),
    ):
        if not right:
            found, fix = str(data[key]), f"mend `{key}` of {name}"
            problem = f"no sample of boards can show this `{key}`"
            faults.append(
                InputError(
                    problem, source.values[(*path, key)], found=found, allowed=allowed, fix=fix
                )
            )
    return Sampling(share, confidence, int(boards))


def _data(source: Source, *path: str | int) -> Data | Mapping[str, Data]:
    data = source.data
    for step in path:
        data = data[step]  # type: ignore[index]  # the schema has held
    return data


def _keys(source: Source, *path: str | int) -> list[str]:
    return list(cast("Mapping[str, Data]", _data(source, *path))) if path in source.values else []


def _items(source: Source, *path: str | int) -> list[Data]:
    return cast("list[Data]", _data(source, *path)) if path in source.values else []


def _name(source: Source, *path: str | int) -> Name:
    return Name(cast("str", _data(source, *path)), source.values[path])
