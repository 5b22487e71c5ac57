"""Between what limits the value of a part lies, and what of it a matched network shares."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from math import inf

from filtercheck.model.part import Figure, Part, Parts, Passive
from filtercheck.network.elements import Symbol
from filtercheck.network.expansion import network_functions
from filtercheck.wiring.groups import Group

FIGURES = {"inverse bandwidth": ".gain_bandwidth", "inverse gain": ".open_loop_gain"}


@dataclass(frozen=True)
class Slot:
    """A symbol of a group's network and the part behind it."""

    symbol: Symbol
    part: Part
    own: Figure  # its own value: where a network is tracked, without the shared factor

    @property
    def name(self) -> str:
        """The part, or the amplifier's figure, such as `U1.gain_bandwidth`."""
        return self.part.designator + FIGURES.get(self.symbol.kind, "")

    @property
    def power(self) -> int:
        """1 or -1: the power of the part's value that the symbol is."""
        return 1 if self.symbol.kind in ("capacitance", "inductance") else -1


@dataclass(frozen=True)
class Tracked:
    """The parts of a matched network in one group."""

    members: tuple[tuple[int, Slot], ...]  # with the place of each in the group
    factor: Figure  # what all their values share

    @property
    def mask(self) -> int:
        """The symbols, as a mask."""
        return sum(1 << place for place, _ in self.members)

    @property
    def like(self) -> Slot:
        """One of them; they are all alike."""
        return self.members[0][1]


def stated(part: Part, kind: str) -> Figure:
    """Return the limits that a part's tolerance, or its figure, states. [SI]"""
    if isinstance(part, Passive):
        below = part.tolerance.below if part.tolerance else 0.0
        above = part.tolerance.above if part.tolerance else 0.0
        return Figure(part.value, part.value * (1.0 + below), part.value * (1.0 + above))
    figure = part.open_loop_gain if kind == "inverse gain" else part.gain_bandwidth
    return figure or Figure(inf, inf, inf)


def slots(group: Group, parts: Parts) -> Iterator[Slot]:
    """Yield the symbols of a group's network in their order."""
    for symbol in network_functions(group.network).denominator.symbols:
        part = parts[group.designator[symbol.element]]
        own = stated(part, symbol.kind)
        if isinstance(part, Passive) and part.track is not None and _shared(part):
            low, high = part.value * (1.0 - part.track), part.value * (1.0 + part.track)
            own = Figure(part.value, low, high)
        yield Slot(symbol, part, own)


def tracked(of: Sequence[Slot]) -> dict[str, Tracked]:
    """Return the matched networks of a group whose parts track, by name."""
    members: dict[str, list[tuple[int, Slot]]] = {}
    factors: dict[str, Figure] = {}
    for place, slot in enumerate(of):
        factor = _shared(slot.part) if isinstance(slot.part, Passive) else None
        if factor and isinstance(slot.part, Passive) and slot.part.network:
            members.setdefault(slot.part.network, []).append((place, slot))
            factors[slot.part.network] = factor
    return {name: Tracked(tuple(found), factors[name]) for name, found in members.items()}


def _shared(part: Passive) -> Figure | None:
    """Return the limits of the factor that a tracking part shares with its network; None where
    it may stray as far on its own as its tolerance allows.

    With own factors within 1 +- track all values stay within the tolerance; and all values
    within the tolerance whose ratios keep within (1 + track)/(1 - track) are so composed.
    """
    if part.track is None or part.tolerance is None:
        return None
    low = (1.0 + part.tolerance.below) / (1.0 - part.track)
    high = (1.0 + part.tolerance.above) / (1.0 + part.track)
    return Figure(1.0, low, high) if low < high else None
