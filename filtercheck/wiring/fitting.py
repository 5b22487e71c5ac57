"""What a part is in a network: the kind of its element, and the values of its symbols."""

from __future__ import annotations

from dataclasses import replace
from math import inf, pi

from filtercheck.model.part import OpAmp, Part, Passive
from filtercheck.network.elements import Amplifier, Element, Symbol

_NOUNS = {
    "resistance": "a resistor",
    "capacitance": "a capacitor",
    "inductance": "an inductor",
    "amplifier": "an amplifier",
}


def kind(part: Part) -> str:
    """Return what a part states: "resistance", "capacitance", "inductance" or "amplifier"."""
    return part.quantity if isinstance(part, Passive) else "amplifier"


def noun(kind: str) -> str:
    """Return a kind of part in words."""
    return _NOUNS[kind]


def as_real_as(part: Part, element: Element) -> Element:
    """Return an amplifier without the terms that its part's data make zero."""
    if isinstance(element, Amplifier) and isinstance(part, OpAmp):
        return replace(
            element,
            finite_gain=part.open_loop_gain is not None,
            finite_bandwidth=part.gain_bandwidth is not None,
        )
    return element


def value(symbol: Symbol, part: Part) -> float:
    """Return the value of a symbol in SI units, from the part as fitted."""
    if isinstance(part, Passive):
        return 1.0 / part.value if part.quantity == "resistance" else part.value
    if symbol.kind == "inverse gain":
        return 1.0 / (part.open_loop_gain.typical if part.open_loop_gain else inf)
    return 1.0 / (2.0 * pi * (part.gain_bandwidth.typical if part.gain_bandwidth else inf))
