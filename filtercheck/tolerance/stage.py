"""One network of a chain as far as an output: its function N/D and the box of its values."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from filtercheck.network.polynomial import Polynomial
from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.box import Box
from filtercheck.tolerance.corners import Nodes, common_degrees, nodes, true_corners
from filtercheck.tolerance.terms import Terms, terms

# What is kept free for rounding, as a part of the sum of the terms' sizes: some hundred times
# what the few hundred operations on the way to a coefficient can lose.
ROUNDING = 1e-12
OVERHEAD = 200_000  # numbers that could be computed while a trial does everything else
MINOR = 2e-5  # of the sum of the terms' sizes, what values taken as exact may do together
MOST_LISTED = 14  # free values of a network whose corners are listed


@dataclass(frozen=True, eq=False)
class Stage:
    """Stages in a row multiply; their boxes are independent of one another.

    Values are normalised, with the same unit of angular frequency in all stages.
    """

    numerator: Polynomial
    denominator: Polynomial
    box: Box
    # By how much the coefficients of N and D may be wrong, where values were taken as exact.
    doubts: tuple[Real, Real] = (np.zeros(1), np.zeros(1))

    def within(self, box: Box) -> Stage:
        """Return the same network with a part of its box, in which the same values are free."""
        part = replace(self, box=box)
        part.__dict__["terms"] = self.terms
        return part

    @cached_property
    def terms(self) -> tuple[Terms, Terms]:
        """N and D over the free coordinates."""
        return terms(self.numerator, self.box), terms(self.denominator, self.box)

    def named(self, side: str) -> Terms:
        """Return the terms of the "numerators" or of the "denominators"."""
        return self.terms[0] if side == "numerators" else self.terms[1]

    def nodes(self, side: str) -> Nodes:
        """Return the "numerators" or the "denominators" at all nodes of the box."""
        return self.numerators if side == "numerators" else self.denominators

    def doubt(self, side: str) -> Real:
        """Return how wrong the coefficients of the "numerators" or "denominators" may be."""
        left_out = self.doubts[0 if side == "numerators" else 1]
        return left_out + ROUNDING * self.named(side).size(self.box.high)

    @property
    def is_large(self) -> bool:
        """Whether it has more free values than corners can be listed for."""
        return len(self.box.own_free) > MOST_LISTED

    @property
    def cost(self) -> int:
        """About how many numbers a trial computes, or might in the time that it takes."""
        if self.is_large:
            return OVERHEAD + 100 * sum(len(of.weights) for of in self.terms)
        corners: int = (1 << len(self.box.own_free)) * self.common_nodes
        return OVERHEAD + corners * sum(of.degree + 1 for of in self.terms)

    @property
    def common_nodes(self) -> int:
        """How many Bernstein coefficients the common factors make."""
        return int(np.prod([m + 1 for m in self.degrees], dtype=int))

    def at(self, points: Real) -> tuple[Real, Real]:
        """Return the coefficients of N and D, each (S, K), at boards of shape (S, P + T)."""
        return self.terms[0].at(points), self.terms[1].at(points)

    @cached_property
    def lightened(self) -> Stage:
        """Return the stage with own values that hardly matter taken as exact, in their middle;
        what they can do is a doubt of the coefficients."""
        minor = 0
        for i in self.box.own_free:
            if all(of.influence_part(self.box, minor | 1 << i) < MINOR for of in self.terms):
                minor |= 1 << i
        doubts = tuple(of.influence(self.box, minor) for of in self.terms)
        box = self.box.fixed(minor, self.box.centre)
        return Stage(self.numerator, self.denominator, box, (doubts[0], doubts[1]))

    @cached_property
    def worst(self) -> dict[object, Real]:
        """The worst boards that were found already, by what they are worst at."""
        return {}

    @cached_property
    def degrees(self) -> tuple[int, ...]:
        return common_degrees(self.terms, self.box)

    @cached_property
    def numerators(self) -> Nodes:
        return nodes(self.terms[0], self.box, self.degrees, self.doubt("numerators"))

    @cached_property
    def denominators(self) -> Nodes:
        return nodes(self.terms[1], self.box, self.degrees, self.doubt("denominators"))

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
        top, bottom = self.at(points)
        return at_frequency(top, omega, self.degree), at_frequency(bottom, omega, self.degree)

    def changes(self, omega: float) -> Real:
        """Return how much N and D change along each free coordinate at one frequency, as a part
        of their size; shape (F,)."""
        change = np.zeros(len(self.box.free))
        for values in self.responses(self.box.ends(self.box.centre), omega):
            low, high = np.split(values, 2)
            with np.errstate(divide="ignore", invalid="ignore"):
                change += np.nan_to_num(np.abs(high - low) / (np.abs(high) + np.abs(low)))
        return change

    @cached_property
    def degree(self) -> int:
        return max(of.degree for of in self.terms)


def at_frequency(coefficients: Real, omega: float, degree: int) -> Complex:
    """Return polynomials in s, shape (S, K), at s = j omega, divided by (1 + omega)^degree.

    The divisor is the same for all that is compared, and keeps infinity among the frequencies.
    """
    scale = 1.0 + omega if np.isfinite(omega) else 1.0
    first = 1.0 / scale if np.isfinite(omega) else 0.0
    second = 1j * omega / scale if np.isfinite(omega) else 1j
    powers = [first ** (degree - k) * second**k for k in range(coefficients.shape[-1])]
    return np.asarray(coefficients @ np.array(powers))
