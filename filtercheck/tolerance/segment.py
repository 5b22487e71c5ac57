"""A stretch of frequencies, and polynomials in s on it.

The frequencies from w1 to w2 are X(t)/Y(t) for t from 0 to 1, where X and Y are linear and not
negative: X = X1 (1 - t) + X2 t, Y likewise, with X1/Y1 = w1 and X2/Y2 = w2. So 0 and infinity
are ends like any other, and t = 1/2 is the geometric mean. A polynomial P of degree d becomes
the form Y^d P(jX/Y), a sum of c_j (1 - t)^(d-j) t^j. Both sides of a comparison are forms of
the same degree, so that the factor Y^d > 0 does not matter; and since (1 - t)^(d-j) t^j is never
negative, an inequality that is linear in the c_j holds on the whole stretch once it holds for
each c_j (the c_j are Bernstein coefficients but for a binomial, which is the same on both sides).

Source: Lorentz, Bernstein Polynomials (1953; from memory) for the form and its positivity.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property, lru_cache
from math import inf, isinf, sqrt

import numpy as np

from filtercheck.network.ratio import Complex, Real


@dataclass(frozen=True)
class Segment:
    """Angular frequencies from `low` to `high`, in any unit; equal ends are one frequency."""

    low: float  # 0 is allowed
    high: float  # infinity is allowed

    @property
    def is_point(self) -> bool:
        return self.low == self.high

    @cached_property
    def ends(self) -> tuple[tuple[float, float], tuple[float, float]]:
        """(X1, Y1) and (X2, Y2)."""
        below = sqrt(self.low) if 0.0 < self.low < inf else None
        above = sqrt(self.high) if 0.0 < self.high < inf else None
        if below and above:
            return (below, 1.0 / below), (above, 1.0 / above)
        if above:
            return (0.0, 1.0 / above), (above, 1.0 / above)
        if below:
            return (below, 1.0 / below), (below, 0.0)
        zero, infinity = (0.0, 1.0), (1.0, 0.0)
        return infinity if isinf(self.low) else zero, zero if self.high == 0.0 else infinity

    @property
    def middle(self) -> float:
        (x1, y1), (x2, y2) = self.ends
        return (x1 + x2) / (y1 + y2)

    @property
    def is_divisible(self) -> bool:
        """Whether there is a number between the ends, by more than a few roundings."""
        middle = self.middle
        return self.low * (1.0 + 1e-13) < middle < self.high * (1.0 - 1e-13)

    def halves(self) -> tuple[Segment, Segment]:
        return Segment(self.low, self.middle), Segment(self.middle, self.high)

    def powers(self, degree: int) -> Complex:
        """Return the forms of 1, s, s^2, ... at s = j w as rows.

        Returns
        -------
        complex array, shape (degree + 1, J)
            J = degree + 1 on a stretch, 1 at one frequency.
        """
        return _frequency_powers(self, degree)


@lru_cache(maxsize=4096)
def _frequency_powers(segment: Segment, degree: int) -> Complex:
    (x1, y1), (x2, y2) = segment.ends
    if segment.is_point:
        return np.array([[(1j * x1) ** k * y1 ** (degree - k)] for k in range(degree + 1)])
    return powers((1j * x1, 1j * x2), (y1, y2), degree)


def powers(x: tuple[complex, complex], y: tuple[complex, complex], degree: int) -> Complex:
    """Return the forms of 1, s, s^2, ... as rows, where s = X(t)/Y(t) and X, Y are linear
    between their two values; shape (degree + 1, degree + 1)."""
    rows = []
    for k in range(degree + 1):
        row = np.ones(1, complex)
        for factor in [x] * k + [y] * (degree - k):
            row = np.convolve(row, factor)
        rows.append(row)
    return np.array(rows)


def times_linear(forms: Complex, at_start: complex, at_end: complex) -> Complex:
    """Return forms, shape (..., J), times at_start (1 - t) + at_end t, shape (..., J + 1)."""
    grown = np.zeros((*forms.shape[:-1], forms.shape[-1] + 1), complex)
    grown[..., :-1] += at_start * forms
    grown[..., 1:] += at_end * forms
    return grown


def times_size(doubts: Real, at_start: complex, at_end: complex) -> Real:
    """Return how wrong forms may be when `times_linear` has multiplied them, (J + 1,) from (J,)."""
    return np.real(times_linear(doubts.astype(complex), abs(at_start), abs(at_end)))


def largest_product(ends: list[Real]) -> float:
    """Return an upper bound of a product of functions that are linear in t, or in t and t', none
    negative: the largest of its Bernstein coefficients.

    Each is given by its values at the ends, (2, 1), or at the four ends, (2, 2).
    """
    product = np.ones((1, 1))
    for values in ends:
        grown = np.zeros((product.shape[0] + 1, product.shape[1] + values.shape[1] - 1))
        for k, row in enumerate(values):
            for m, value in enumerate(row):
                grown[k : k + product.shape[0], m : m + product.shape[1]] += value * product
        product = grown
    rows, columns = (binomials(count - 1) for count in product.shape)
    return float((product / np.outer(rows, columns)).max())


@lru_cache(maxsize=64)
def binomials(degree: int) -> Real:
    """Return the binomial coefficients of a degree."""
    row = np.ones(1)
    for _ in range(degree):
        row = np.convolve(row, [1.0, 1.0])
    return row
