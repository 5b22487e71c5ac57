"""Parts between nodes -> one group: a circuit that has no module of its own."""

from __future__ import annotations

from collections.abc import Callable

from filtercheck.errors import InputError
from filtercheck.model.part import OpAmp, Part
from filtercheck.model.subject import Connection, Subject
from filtercheck.network.elements import (
    INPUT,
    Amplifier,
    Capacitor,
    Element,
    Inductor,
    Network,
    Resistor,
)
from filtercheck.wiring.fitting import as_real_as, kind, noun
from filtercheck.wiring.groups import Group, Places
from filtercheck.wording import listed

_ELEMENTS: dict[str, Callable[[str, str, str], Element]] = {
    "resistance": Resistor,
    "capacitance": Capacitor,
    "inductance": Inductor,
}


def connected(subject: Subject, faults: list[InputError]) -> tuple[list[Group], Places]:
    """Return the one group, and where each node stands; add what is wrong."""
    elements: list[Element] = []
    for connection in subject.connections:
        part = subject.parts[connection.designator]
        if isinstance(part, OpAmp) == ("out" in connection.nodes):
            elements.append(_element(part, connection))
        else:
            faults.append(_misconnected(part, connection))
    network = Network(tuple(elements))
    if not faults and not any(INPUT in element.nodes for element in elements):
        faults.append(_without_signal(subject, network))
    names = {element.name: element.name for element in elements}
    return [Group(network, names, drive=INPUT)], {node: (0, node) for node in network.nodes}


def _element(part: Part, connection: Connection) -> Element:
    if isinstance(part, OpAmp):
        plus, minus, out = (connection.nodes[end] for end in ("plus", "minus", "out"))
        return as_real_as(part, Amplifier(part.designator, plus, minus, out))
    a, b = connection.nodes.values()
    return _ELEMENTS[part.quantity](part.designator, a, b)


def _misconnected(part: Part, connection: Connection) -> InputError:
    return InputError(
        f"{part.designator} is connected like another kind of part",
        connection.at,
        found=f"{part.designator} is {noun(kind(part))}",
        allowed="{plus: , minus: , out: } for an amplifier, [node, node] for any other part",
        fix=f"mend the connection of {part.designator}, or what `parts` says of it",
    )


def _without_signal(subject: Subject, network: Network) -> InputError:
    return InputError(
        "no part is connected to the signal's node",
        subject.connections[0].at,
        found=f"the nodes {listed(network.nodes)}",
        allowed=f"the signal enters at {INPUT!r}",
        fix=f"call the node where the signal enters {INPUT!r}",
    )
