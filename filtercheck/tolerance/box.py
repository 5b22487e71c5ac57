"""The box: between what limits each number of a network lies.

A board of the box is a point of it: for every symbol of the network (a conductance, a
capacitance, ...) its own value, and for every group of symbols that track one another a common
factor on top. Own values are independent, so that the box is a product of intervals.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from filtercheck.network.polynomial import Real

NARROWEST = 1e-9  # of a value: an interval as narrow is not halved


@dataclass(frozen=True)
class Common:
    """A factor that all symbols of a mask share, and its limits."""

    mask: int
    low: float
    high: float


@dataclass(frozen=True, eq=False)
class Box:
    """Intervals of P own values and T common factors, numbered in that order."""

    own_low: Real  # (P,)
    own_high: Real  # (P,)
    nominal: Real  # (P + T,)
    commons: tuple[Common, ...] = ()

    @cached_property
    def low(self) -> Real:
        """The lower ends of all coordinates, shape (P + T,)."""
        return np.array([*self.own_low, *(common.low for common in self.commons)])

    @cached_property
    def high(self) -> Real:
        """The upper ends of all coordinates, shape (P + T,)."""
        return np.array([*self.own_high, *(common.high for common in self.commons)])

    @cached_property
    def free(self) -> NDArray[np.intp]:
        """The coordinates that are not exact."""
        return np.flatnonzero(self.low < self.high)

    @cached_property
    def own_free(self) -> list[int]:
        """The symbols whose own value is not exact."""
        return [int(i) for i in self.free if i < len(self.own_low)]

    @property
    def centre(self) -> Real:
        """The point in the middle, shape (P + T,)."""
        return (self.low + self.high) / 2.0

    def fixed(self, symbols: int, at: Real) -> Box:
        """Return the box with the own values of the symbols of a mask exact, as at a point."""
        chosen = np.array([bool(symbols >> i & 1) for i in range(len(self.own_low))], dtype=bool)
        own = at[: len(self.own_low)]
        return replace(
            self,
            own_low=np.where(chosen, own, self.own_low),
            own_high=np.where(chosen, own, self.own_high),
        )

    @cached_property
    def members(self) -> NDArray[np.bool_]:
        """Which symbols each common factor multiplies, shape (T, P)."""
        count = len(self.own_low)
        rows = [[bool(c.mask >> i & 1) for i in range(count)] for c in self.commons]
        return np.array(rows, dtype=bool).reshape(len(self.commons), count)

    def symbol_values(self, points: Real) -> Real:
        """Return the values of the symbols, shape (S, P), at points of shape (S, P + T)."""
        count = len(self.own_low)
        values = points[:, :count]
        for k, row in enumerate(self.members):
            values = np.where(row, values * points[:, count + k, None], values)
        return values

    def ends(self, point: Real) -> Real:
        """Return the point with each free coordinate at its lower end, then with each at its
        upper end; shape (2 F, P + T)."""
        count = len(self.free)
        points = np.tile(point, (2 * count, 1))
        points[np.arange(count), self.free] = self.low[self.free]
        points[count + np.arange(count), self.free] = self.high[self.free]
        return points

    def is_divisible(self, coordinate: int) -> bool:
        """Whether an interval is wider than rounding lets its halves be."""
        return bool(self.low[coordinate] * (1.0 + NARROWEST) < self.high[coordinate])

    def halves(self, coordinate: int) -> Iterator[Box]:
        """Yield the two halves of the box along one coordinate."""
        middle = self.centre[coordinate]
        for low, high in ((self.low[coordinate], middle), (middle, self.high[coordinate])):
            yield self._between(coordinate, float(low), float(high))

    def _between(self, coordinate: int, low: float, high: float) -> Box:
        count = len(self.own_low)
        if coordinate >= count:
            k = coordinate - count
            common = replace(self.commons[k], low=low, high=high)
            return replace(self, commons=(*self.commons[:k], common, *self.commons[k + 1 :]))
        own_low, own_high = self.own_low.copy(), self.own_high.copy()
        own_low[coordinate], own_high[coordinate] = low, high
        return replace(self, own_low=own_low, own_high=own_high)


def widest(box: Box, changes: Real) -> int | None:
    """Return the free coordinate that changes most, of those that can be halved; None where
    there is none."""
    divisible = [k for k, i in enumerate(box.free) if box.is_divisible(int(i))]
    if not divisible:
        return None
    return int(box.free[max(divisible, key=lambda k: float(changes[k]))])
