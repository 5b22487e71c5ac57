"""Random boards of a filter: every part is drawn on its own from its distribution.

    uniform     every value within the tolerance is as likely as any other
    normal      the tolerance is three standard deviations; what lies beyond is drawn again
    two-sided   the same, but the inner half of the tolerance has been sorted out

The parts of a matched network share one factor, drawn once for a board, and each has its own
within its track.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from filtercheck.model.part import Figure
from filtercheck.network.ratio import Real
from filtercheck.wiring.fitting import as_symbol
from filtercheck.wiring.variation import Variation

SIGMAS = 3.0  # standard deviations to the end of a tolerance
SORTED_OUT = 0.5  # of the tolerance, about its middle


@dataclass(frozen=True, eq=False)
class Drawing:
    """A source of boards; equal seeds draw equal boards."""

    variation: Variation
    random: np.random.Generator

    def boards(self, count: int) -> tuple[Real, ...]:
        """Return so many boards as points of the box of every group, each of shape (S, P + T)."""
        factors: dict[str, Real] = {}
        points = []
        for index, scale in enumerate(self.variation.scales):
            columns = [
                as_symbol(slot.symbol.kind, self._values(slot.own, slot.part.distribution, count))
                / unit
                for slot, unit in zip(self.variation.slots[index], scale, strict=True)
            ]
            for name, network in self.variation.networks[index].items():
                like = network.like
                if name not in factors:
                    factors[name] = self._values(network.factor, like.part.distribution, count)
                columns.append(as_symbol(like.symbol.kind, factors[name]))
            points.append(np.array(columns).reshape(len(columns), count).T)
        return tuple(points)

    def _values(self, within: Figure, distribution: str, count: int) -> Real:
        if within.min == within.max:
            return np.full(count, within.typical)
        if distribution == "uniform":
            return self.random.uniform(within.min, within.max, count)
        part = self._normal(SORTED_OUT if distribution == "two-sided" else 0.0, count)
        side = np.where(part < 0.0, within.typical - within.min, within.max - within.typical)
        return np.asarray(within.typical + part * side)

    def _normal(self, inner: float, count: int) -> Real:
        """Return parts of the way to the end of a tolerance, from -1 to 1."""
        kept = np.empty(0)
        while len(kept) < count:
            more = self.random.standard_normal(count) / SIGMAS
            kept = np.append(kept, more[(np.abs(more) <= 1.0) & (np.abs(more) >= inner)])
        return kept[:count]
