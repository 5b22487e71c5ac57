"""What a known circuit is: elements named by their role, and the outputs it offers."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import dataclass, field, replace
from typing import Literal

from filtercheck.network.elements import Amplifier, Capacitor, Element, Resistor


@dataclass(frozen=True)
class Circuit:
    """One circuit; the signal enters at `INPUT`, an element's name is its role."""

    name: str
    manual: str  # the module's docstring
    elements: tuple[Element, ...]
    outputs: Mapping[str, str]  # output -> node
    # What stands in the place of a role that is left out; other roles must be given.
    optional: Mapping[str, Literal["open", "wire"]] = field(default_factory=dict)

    @property
    def roles(self) -> dict[str, str]:
        """The quantity that each role takes, in the order of the drawing."""
        return {element.name: takes(element) for element in self.elements}

    def fitted(self, given: Collection[str]) -> tuple[Element, ...]:
        """Return the elements when only the roles in `given` are fitted."""
        elements = self.elements
        for role, place in self.optional.items():
            if role not in given:
                gone = next(e for e in elements if e.name == role)
                elements = tuple(e for e in elements if e is not gone)
                if place == "wire":
                    kept, merged = gone.nodes
                    elements = tuple(renamed(e, {merged: kept}) for e in elements)
        return elements


def takes(element: Element) -> str:
    """Return the quantity that an element's part must state."""
    match element:
        case Resistor():
            return "resistance"
        case Capacitor():
            return "capacitance"
        case Amplifier():
            return "amplifier"
    return "inductance"


def renamed(element: Element, node: Mapping[str, str]) -> Element:
    """Return the element with its nodes renamed; a node not in `node` keeps its name."""
    if isinstance(element, Amplifier):
        plus, minus, out = (node.get(n, n) for n in element.nodes)
        return replace(element, plus=plus, minus=minus, out=out)
    a, b = (node.get(n, n) for n in element.nodes)
    return replace(element, a=a, b=b)
