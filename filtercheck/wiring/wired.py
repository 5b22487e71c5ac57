"""Join a filter's parts, and check that what they make has a solution."""

from __future__ import annotations

from functools import lru_cache

from filtercheck.errors import InputError, InputErrors, NetworkError
from filtercheck.model.subject import Subject
from filtercheck.network import diagnosis
from filtercheck.network.elements import Network
from filtercheck.network.response import Response
from filtercheck.wiring.connections import connected
from filtercheck.wiring.groups import Group, Wiring
from filtercheck.wiring.sections import cascade


def wired(subject: Subject) -> Wiring:
    """Join a filter's parts.

    Raises
    ------
    InputErrors
        Parts of the wrong kind, outputs that do not exist, a network without a solution.
    """
    faults: list[InputError] = []
    join, kind = (connected, "node") if subject.connections else (cascade, "output")
    groups, places = join(subject, faults)
    for output in subject.outputs.values():
        if output.word not in places:
            faults.append(output.unknown(kind, places))
    if faults:
        raise InputErrors(faults)
    wiring = Wiring(tuple(groups), {n: places[o.word] for n, o in subject.outputs.items()})
    for index, group in enumerate(groups):
        read = {node for at, node in wiring.outputs.values() if at == index}
        try:
            _check(group.network, frozenset({group.drive, *read}))
        except NetworkError as error:
            raise InputErrors([_located(error, group, subject)]) from error
    return wiring


def responses(subject: Subject, wiring: Wiring) -> tuple[dict[str, Response], Response]:
    """Return the response at every output of a filter as fitted, and that through the whole.

    Raises
    ------
    InputErrors
        If the equations are singular at these values.
    """
    try:
        return wiring.responses(subject.parts), wiring.whole(subject.parts)
    except NetworkError as error:
        raise InputErrors([_located(error, wiring.groups[0], subject)]) from error


@lru_cache(maxsize=512)
def _check(network: Network, observed: frozenset[str]) -> None:
    """Check each shape once; an error is not remembered but found anew."""
    diagnosis.check(network, observed)


def _located(error: NetworkError, group: Group, subject: Subject) -> InputError:
    """Return the error at the connection of the culprit, or at its part."""
    designator = group.designator.get(error.culprit, error.culprit)
    places = {c.designator: c.at for c in subject.connections}
    at = places.get(designator) or subject.parts[designator].at
    return InputError(error.problem, at, found=error.found, allowed=error.allowed, fix=error.fix)
