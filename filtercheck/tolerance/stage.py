"""One network of a chain as far as an output: its function N/D and the box of its values."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from filtercheck.network.polynomial import Polynomial
from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.box import Box
from filtercheck.tolerance.corners import Nodes, common_degrees, nodes, true_corners


@dataclass(frozen=True, eq=False)
class Stage:
    """Stages in a row multiply; their boxes are independent of one another.

    Values are normalised, with the same unit of angular frequency in all stages.
    """

    numerator: Polynomial
    denominator: Polynomial
    box: Box

    def within(self, box: Box) -> Stage:
        """Return the same network with a part of its box."""
        return replace(self, box=box)

    @cached_property
    def degrees(self) -> tuple[int, ...]:
        return common_degrees((self.numerator, self.denominator), self.box)

    @cached_property
    def numerators(self) -> Nodes:
        return nodes(self.numerator, self.box, self.degrees)

    @cached_property
    def denominators(self) -> Nodes:
        return nodes(self.denominator, self.box, self.degrees)

    @cached_property
    def true_corners(self) -> list[int]:
        return true_corners(self.degrees)

    def corner(self, own: int, common: int) -> Real:
        """Return the board at a corner: bit k of `own` says that the k-th free own value is
        high, `common` counts the true corners of the common factors."""
        point = self.box.low.copy()
        chosen = [i for k, i in enumerate(self.box.own_free) if own >> k & 1]
        point[chosen] = self.box.high[chosen]
        count = len(self.box.own_low)
        varied = [count + t for t, m in enumerate(self.degrees) if m]
        for k, coordinate in enumerate(reversed(varied)):
            ends = (self.box.low, self.box.high)
            point[coordinate] = ends[common >> k & 1][coordinate]
        return point

    def responses(self, points: Real, omega: float) -> tuple[Complex, Complex]:
        """Return N and D of boards of the box at one frequency, each of shape (S,)."""
        values = self.box.symbol_values(points)
        return (
            at_frequency(self.numerator.at_points(values), omega, self.degree),
            at_frequency(self.denominator.at_points(values), omega, self.degree),
        )

    def changes(self, omega: float) -> Real:
        """Return how much N and D change along each free coordinate at one frequency, as a part
        of their size; shape (F,)."""
        free, box = self.box.free, self.box
        rows = np.arange(len(free))
        points = np.tile(box.centre, (2 * len(free), 1))
        points[rows, free], points[len(free) + rows, free] = box.low[free], box.high[free]
        change = np.zeros(len(free))
        for values in self.responses(points, omega):
            low, high = values[: len(free)], values[len(free) :]
            with np.errstate(divide="ignore", invalid="ignore"):
                change += np.nan_to_num(np.abs(high - low) / (np.abs(high) + np.abs(low)))
        return change

    @property
    def degree(self) -> int:
        return max(self.numerator.degree, self.denominator.degree)


def at_frequency(coefficients: Real, omega: float, degree: int) -> Complex:
    """Return polynomials in s, shape (S, K), at s = j omega, divided by (1 + omega)^degree.

    The divisor is the same for all that is compared, and keeps infinity among the frequencies.
    """
    scale = 1.0 + omega if np.isfinite(omega) else 1.0
    first = 1.0 / scale if np.isfinite(omega) else 0.0
    second = 1j * omega / scale if np.isfinite(omega) else 1j
    powers = [first ** (degree - k) * second**k for k in range(coefficients.shape[-1])]
    return np.asarray(coefficients @ np.array(powers))
