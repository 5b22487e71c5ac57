"""A polynomial over the free coordinates of a box: what is exact is multiplied out.

    P(x, s) = sum over terms t of weight_t * s^power_t * prod over coordinates i of x_i^e_ti

For an own value e is 0 or 1; for a common factor it says how many of the values that share it
are in the term.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from filtercheck.network.polynomial import Polynomial
from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.box import Box


@dataclass(frozen=True, eq=False)
class Terms:
    """T terms over F free coordinates."""

    free: NDArray[np.intp]  # (F,), which coordinates of the box they are
    exponents: Real  # (T, F)
    powers: NDArray[np.intp]  # (T,)
    weights: Real  # (T,)
    shared: int  # how many of the coordinates are common factors; these come last

    @cached_property
    def degree(self) -> int:
        """The highest power of s."""
        return int(self.powers.max(initial=0))

    def at(self, points: Real) -> Real:
        """Return the coefficients of 1, s, s^2, ..., (S, degree + 1), at boards (S, P + T).

        Products are sums of logarithms, so that all boards are one matrix product; that is a
        few hundred roundings from exact.
        """
        return np.asarray(np.exp(np.log(points[:, self.free]) @ self._columns) @ self._by_power)

    def lines(self, point: Real, powers: Complex) -> tuple[complex, Complex]:
        """Return the polynomial at a board, and its slopes by each own value, (n,).

        `powers` are the values of 1, s, s^2, ..., (degree + 1,).
        """
        products = np.exp(np.log(point[self.free]) @ self._columns) * self.weights
        valued = products * powers[self.powers]
        own = self.own
        return complex(valued.sum()), self._columns[:own] @ valued / point[self.free[:own]]

    @property
    def own(self) -> int:
        """How many of the coordinates are own values; these come first."""
        return len(self.free) - self.shared

    def size(self, point: Real) -> Real:
        """Return the sums of the terms' sizes, (degree + 1,), at one board."""
        products = np.exp(np.log(point[self.free]) @ self._columns)
        return np.asarray(products @ np.abs(self._by_power))

    def influence(self, box: Box, symbols: int) -> Real:
        """Return by how much the own values of a mask can change the coefficients, (degree + 1,),
        with every other value at its upper end."""
        chosen = np.array([i < len(box.own_low) and symbols >> int(i) & 1 for i in self.free], bool)
        high, low = (np.log(ends[self.free]) for ends in (box.high, box.low))
        least = np.where(chosen, low, high)
        products = np.exp(high @ self._columns) - np.exp(least @ self._columns)
        return np.asarray(np.maximum(products, 0.0) @ np.abs(self._by_power))

    def influence_part(self, box: Box, symbols: int) -> float:
        """Return the same as a part of the sum of the terms' sizes, the largest of any power."""
        size = self.size(box.high)
        return float((self.influence(box, symbols)[size > 0.0] / size[size > 0.0]).max(initial=0.0))

    @cached_property
    def _columns(self) -> Real:
        return np.ascontiguousarray(self.exponents.T)

    @cached_property
    def _by_power(self) -> Real:
        """The weights, each in the column of its power of s."""
        table = np.zeros((len(self.powers), self.degree + 1))
        table[np.arange(len(self.powers)), self.powers] = self.weights
        return table


def terms(polynomial: Polynomial, box: Box) -> Terms:
    """Return the polynomial over the free coordinates of a box."""
    coefficients, members, powers = polynomial.table
    count = len(box.own_low)
    own = box.free[box.free < count]
    exact = np.setdiff1d(np.arange(count), own)
    weights = coefficients * np.where(members[:, exact], box.own_low[exact], 1.0).prod(axis=1)
    shared = members.astype(float) @ box.members.T
    varying = box.free[box.free >= count] - count
    for k in np.setdiff1d(np.arange(len(box.commons)), varying):
        weights = weights * box.commons[k].low ** shared[:, k]
    rows = np.concatenate([members[:, own], shared[:, varying], powers[:, None]], axis=1)
    _, first, places = np.unique(_keys(rows), return_index=True, return_inverse=True)
    total = np.bincount(places.ravel(), weights=weights, minlength=len(first))
    merged = rows[first]
    return Terms(
        box.free,
        merged[:, :-1],
        merged[:, -1].astype(np.intp),
        np.asarray(total, float),
        len(varying),
    )


def _keys(rows: Real) -> NDArray[np.float64] | NDArray[np.int64]:
    """Return a number for each row of small whole numbers, the same for equal rows only."""
    bases = rows.max(axis=0, initial=0.0).astype(int) + 1
    steps = [1]
    for base in bases:
        steps.append(steps[-1] * int(base))
    if steps[-1] < 2**62:
        return np.asarray(rows.astype(np.int64) @ np.array(steps[:-1], dtype=np.int64))
    # Wider than a word: number the rows by their sorted order.
    return np.unique(rows, axis=0, return_inverse=True)[1].astype(float).ravel()
