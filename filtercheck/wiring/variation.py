"""How the parts of a filter may vary: its wiring -> chains of boxes, and boards back to parts.

Every part of a filter is in one group, so the boxes of the groups are independent. Only the
parts of one matched network may sit in several groups; their common factor is then taken as
independent in each, which allows more boards than there are. What is proved stays proved, and
no such board is ever reported: `reconciled` gives all groups the same factor.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from math import floor, log10

import numpy as np

from filtercheck.model.part import Figure, Part, Parts
from filtercheck.network.elements import Symbol
from filtercheck.network.expansion import network_functions
from filtercheck.network.ratio import Real, units
from filtercheck.tolerance.box import Box, Common
from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.stage import Stage
from filtercheck.wiring.fitting import as_symbol, with_number
from filtercheck.wiring.groups import Wiring
from filtercheck.wiring.limits import Slot, Tracked, slots, stated, tracked

DIGITS = 10  # of the values of a reported board


@dataclass(frozen=True, eq=False)
class Variation:
    """One filter's wiring and parts, seen as boxes."""

    wiring: Wiring
    parts: Parts

    def chain(self, output: str) -> Chain:
        """Return the stages from the signal to an output."""
        if output not in self._chains:
            last, node = self.wiring.outputs[output]
            ends = [*(group.drive for group in self.wiring.groups[:last]), node]
            self._chains[output] = self._chain(ends)
        return self._chains[output]

    @cached_property
    def _chains(self) -> dict[str, Chain]:
        return {}

    @cached_property
    def whole(self) -> Chain:
        """All groups: the denominators hold every pole there is."""
        return self._chain([group.drive for group in self.wiring.groups])

    def _chain(self, ends: list[str]) -> Chain:
        stages = []
        for group, box, node in zip(self.wiring.groups, self._boxes, ends, strict=False):
            functions = network_functions(group.network)
            numerator, denominator = functions.numerators[node], functions.denominator
            unused = ~(numerator.members | denominator.members)
            stages.append(Stage(numerator, denominator, box.fixed(unused, box.nominal)))
        return Chain(tuple(stages), self._omega0)

    def fitted(self, board: Board) -> dict[str, Part]:
        """Return the parts of a board; those of groups behind its output stay as they are."""
        parts = dict(self.parts)
        for index, point in enumerate(board):
            values = self._boxes[index].symbol_values(point[None, :])[0] * self.scales[index]
            for slot, value in zip(self.slots[index], values, strict=True):
                name, kind = slot.part.designator, slot.symbol.kind
                number = _decimal(as_symbol(kind, float(value)), stated(slot.part, kind))
                parts[name] = with_number(parts[name], kind, number)
        return parts

    def varying(self, index: int) -> Iterator[tuple[str, int, int]]:
        """Yield what may vary in a group: a part or an amplifier's figure by name, its symbol,
        and 1 or -1, the power of its value that the symbol is."""
        for i, slot in enumerate(self.slots[index]):
            if slot.own.min < slot.own.max:
                yield slot.name, i, slot.power

    def reconciled(self, board: Board) -> Iterator[Board]:
        """Yield the board with one factor for each network whose parts are in several groups:
        that of one group after the other."""
        places: dict[str, list[tuple[int, int]]] = {}
        for index, networks in enumerate(self.networks[: len(board)]):
            for k, name in enumerate(networks):
                places.setdefault(name, []).append((index, len(self.slots[index]) + k))
        spread = [found for found in places.values() if len(found) > 1]
        for source in range(max(map(len, spread), default=1)):
            points = [point.copy() for point in board]
            for found in spread:
                index, coordinate = found[min(source, len(found) - 1)]
                for other, own in found:
                    points[other][own] = board[index][coordinate]
            yield tuple(points)

    @cached_property
    def slots(self) -> list[tuple[Slot, ...]]:
        """The symbols of every group."""
        return [tuple(slots(group, self.parts)) for group in self.wiring.groups]

    @cached_property
    def networks(self) -> list[dict[str, Tracked]]:
        """The matched networks of every group, in the order of its common factors."""
        return [tracked(of) for of in self.slots]

    @cached_property
    def scales(self) -> list[Real]:
        """The units of the symbols of every group."""
        found = []
        for of in self.slots:
            unit = units(_typical(of), self._omega0)
            found.append(np.array([unit[slot.symbol.kind] for slot in of]))
        return found

    @cached_property
    def _omega0(self) -> float:
        first = next((of for of in self.slots if of), ())
        return units(_typical(first))["angular frequency"]

    @cached_property
    def _boxes(self) -> list[Box]:
        return [_box(*three) for three in zip(self.slots, self.scales, self.networks, strict=True)]


def _typical(of: tuple[Slot, ...]) -> dict[Symbol, float]:
    return {s.symbol: as_symbol(s.symbol.kind, s.own.typical) for s in of}


def _box(of: tuple[Slot, ...], scale: Real, networks: Mapping[str, Tracked]) -> Box:
    ends = [_interval(slot.symbol.kind, slot.own) for slot in of]
    low, high = np.array(ends).reshape(len(of), 2).T / scale
    nominal = np.array(list(_typical(of).values())) / scale
    commons = tuple(
        Common(one.mask, *_interval(one.like.symbol.kind, one.factor)) for one in networks.values()
    )
    return Box(low, high, np.array([*nominal, *np.ones(len(commons))]), commons)


def _interval(kind: str, within: Figure) -> tuple[float, float]:
    """Return the limits of a kind of symbol, the lower one first."""
    ends = as_symbol(kind, within.min), as_symbol(kind, within.max)
    return min(ends), max(ends)


def _decimal(number: float, within: Figure) -> float:
    """Return a number to `DIGITS` digits, not outside of its limits by more than a rounding."""
    near = float(f"{number:.{DIGITS}g}")
    step = 10.0 ** (floor(log10(number)) - DIGITS + 1)
    if near < within.min * (1.0 - 1e-14):
        return float(f"{near + step:.{DIGITS}g}")
    return float(f"{near - step:.{DIGITS}g}") if near > within.max * (1.0 + 1e-14) else near
