"""Between what limits the value of a part lies, and what of it a matched network shares."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from filtercheck.model.part import Part, Parts, Passive
from filtercheck.network.elements import Symbol
from filtercheck.network.expansion import network_functions
from filtercheck.wiring.fitting import number
from filtercheck.wiring.groups import Group


@dataclass(frozen=True)
class Range:
    """The lowest, the usual and the highest value of a part, or of an amplifier's figure. [SI]"""

    low: float
    typical: float
    high: float


@dataclass(frozen=True)
class Slot:
    """A symbol of a group's network and the part behind it."""

    symbol: Symbol
    part: Part
    own: Range  # of its own value: where a network is tracked, without the shared factor


def stated(part: Part, kind: str) -> Range:
    """Return the limits that a part's tolerance, or its figure, states."""
    typical = number(part, kind)
    if isinstance(part, Passive):
        if part.tolerance is None:
            return Range(typical, typical, typical)
        below, above = part.tolerance.below, part.tolerance.above
        return Range(typical * (1.0 + below), typical, typical * (1.0 + above))
    figure = part.open_loop_gain if kind == "inverse gain" else part.gain_bandwidth
    return Range(figure.min, typical, figure.max) if figure else Range(typical, typical, typical)


def slots(group: Group, parts: Parts) -> Iterator[Slot]:
    """Yield the symbols of a group's network in their order."""
    for symbol in network_functions(group.network).denominator.symbols:
        part = parts[group.designator[symbol.element]]
        if isinstance(part, Passive) and part.track is not None and shared(part):
            low, high = part.value * (1.0 - part.track), part.value * (1.0 + part.track)
            yield Slot(symbol, part, Range(low, part.value, high))
        else:
            yield Slot(symbol, part, stated(part, symbol.kind))


def networks(group: Group, parts: Parts) -> Mapping[str, list[tuple[int, Passive]]]:
    """Return the matched networks of a group, with the symbols and the parts that track."""
    found: dict[str, list[tuple[int, Passive]]] = {}
    for index, slot in enumerate(slots(group, parts)):
        if isinstance(slot.part, Passive) and slot.part.network and shared(slot.part):
            found.setdefault(slot.part.network, []).append((index, slot.part))
    return found


def shared(part: Passive) -> Range | None:
    """Return the limits of the factor that a tracking part shares with its network; None where
    it may stray as far on its own as its tolerance allows.

    With own factors within 1 +- track all values stay within the tolerance; and all values
    within the tolerance whose ratios keep within (1 + track)/(1 - track) are so composed.
    """
    if part.track is None or part.tolerance is None:
        return None
    low = (1.0 + part.tolerance.below) / (1.0 - part.track)
    high = (1.0 + part.tolerance.above) / (1.0 + part.track)
    return Range(low, 1.0, high) if low < high else None
