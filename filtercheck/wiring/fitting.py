"""What a part is in a network: the kind of its element, and the values of its symbols."""

from __future__ import annotations

from dataclasses import replace
from math import inf, pi
from typing import TypeVar

from filtercheck.model.part import Figure, OpAmp, Part, Passive
from filtercheck.network.elements import Amplifier, Element, Symbol
from filtercheck.network.ratio import Real

Number = TypeVar("Number", float, Real)

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
        return as_symbol(symbol.kind, part.value)
    figure = part.open_loop_gain if symbol.kind == "inverse gain" else part.gain_bandwidth
    return as_symbol(symbol.kind, figure.typical if figure else inf)


def with_number(part: Part, kind: str, number: float) -> Part:
    """Return the part with its value, or the figure that a kind of symbol stands for, so."""
    if isinstance(part, Passive):
        return replace(part, value=number)
    figure = Figure(number, number, number)
    if kind == "inverse gain":
        return replace(part, open_loop_gain=figure)
    return replace(part, gain_bandwidth=figure)


def as_symbol(kind: str, number: Number) -> Number:
    """Return the value of a kind of symbol for the value of a part or of its figure. [SI]

    The way back is the same, but for capacitances and inductances, which are what they are.
    """
    if kind in ("capacitance", "inductance"):
        return number
    return 1.0 / (2.0 * pi * number) if kind == "inverse bandwidth" else 1.0 / number
