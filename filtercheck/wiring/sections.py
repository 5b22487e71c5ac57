"""Sections in a row -> groups: known circuits, joined where they meet.

A section whose output is driven by an amplifier is not loaded by the next: a group ends
there, and responses multiply. Any other section shares its group's network with the next
one, and so is loaded by it.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace

from filtercheck.circuits import CIRCUITS
from filtercheck.circuits.circuit import Circuit, renamed, takes
from filtercheck.errors import InputError
from filtercheck.model.part import Part
from filtercheck.model.subject import Name, Section, Subject
from filtercheck.network.elements import GROUND, INPUT, Element, Network
from filtercheck.wiring.fitting import as_real_as, kind, noun
from filtercheck.wiring.groups import Group, Places
from filtercheck.wording import listed


@dataclass
class _Open:
    """A group under construction. Names carry the place of their section in the group, not
    its own name, so that equal circuits make equal networks, which are expanded once."""

    entry: str = INPUT  # the node that the next section starts from
    count: int = 0
    elements: list[Element] = field(default_factory=list)
    designator: dict[str, str] = field(default_factory=dict)


def cascade(subject: Subject, faults: list[InputError]) -> tuple[list[Group], Places]:
    """Return the groups, and where each "section.output" stands; add what is wrong."""
    groups: list[Group] = []
    places: Places = {}
    group = _Open()
    for section in subject.sections:
        last = section is subject.sections[-1]
        circuit = CIRCUITS[section.circuit.word]
        node = _fit(section, circuit, subject, group, faults)
        for output, place in circuit.outputs.items():
            places[f"{section.name}.{output}"] = (len(groups), node[place])
        drive = node[circuit.outputs[_driven(section, circuit, last, faults)]]
        network = Network(tuple(group.elements))
        if last or drive in network.stiff:
            groups.append(Group(network, group.designator, drive))
            group = _Open()
        else:
            group.entry, group.count = drive, group.count + 1
    return groups, places


def _fit(
    section: Section, circuit: Circuit, subject: Subject, group: _Open, faults: list[InputError]
) -> dict[str, str]:
    """Add a section's elements to the group; return its nodes by their names in the circuit."""
    node = {n: f"{group.count}.{n}" for e in circuit.elements for n in e.nodes}
    node |= {INPUT: group.entry, GROUND: GROUND}
    for element in circuit.fitted(section.fit):
        name = section.fit[element.name]
        part = subject.parts[name.word]
        if kind(part) != takes(element):
            faults.append(_misfit(part, takes(element), name))
        own = replace(renamed(element, node), name=f"{group.count}.{element.name}")
        group.elements.append(as_real_as(part, own))
        group.designator[own.name] = name.word
    return node


def _driven(section: Section, circuit: Circuit, last: bool, faults: list[InputError]) -> str:
    """Return the output that feeds the next section; any, where there is none next."""
    only = next(iter(circuit.outputs))
    if section.drives is None:
        if len(circuit.outputs) > 1 and not last:
            faults.append(
                InputError(
                    f"section {section.name!r} does not say which output drives the next",
                    section.at,
                    found=f"a {section.circuit} section with {listed(circuit.outputs)} outputs",
                    allowed="`drives` in every section but the last",
                    fix=f"add `drives: {only}`, or another of its outputs",
                )
            )
    elif section.drives.word not in circuit.outputs:
        faults.append(section.drives.unknown("output", circuit.outputs))
    else:
        return section.drives.word
    return only


def _misfit(part: Part, wanted: str, name: Name) -> InputError:
    return InputError(
        f"{part.designator} does not fit that role",
        name.at,
        found=f"{part.designator} is {noun(kind(part))}",
        allowed=noun(wanted),
        fix=f"name {noun(wanted)} here, or mend what `parts` says of {part.designator}",
    )
