"""A polynomial at all corners of a box, and at what stands between for common factors.

A polynomial is affine in every own value. One value after the other is folded out of its terms:
where those without the value make a(...) and those with it b(...), the new ones are a + low b
and a + high b. The terms shrink as the arrays double, so that all 2^n corners cost little more
than the last fold.

A common factor u enters a term as often as values that share it do; after the fold the
polynomial has a degree m in u, and is turned into its m + 1 Bernstein coefficients over the
interval of u. Own values and common factors together so give the Bernstein coefficients of the
polynomial over the whole box: `nodes`. What is linear and holds for every node holds in the box.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product

import numpy as np

from filtercheck.network.ratio import Real
from filtercheck.tolerance.box import Box, Common
from filtercheck.tolerance.segment import binomials, powers
from filtercheck.tolerance.terms import Terms

Key = tuple[tuple[int, ...], int, tuple[int, ...]]  # own values left, power of s, of factors
Table = dict[Key, Real]


@dataclass(frozen=True, eq=False)
class Nodes:
    """Bernstein coefficients of one polynomial over a box, and a bound of its terms' size."""

    values: Real  # (2^n, C, d + 1), ascending powers of s; bit k of the first index is corner k
    doubt: Real  # (d + 1,), by how much a coefficient may be wrong


def nodes(of: Terms, box: Box, degrees: tuple[int, ...], doubt: Real) -> Nodes:
    """Return a polynomial at all nodes of a box, where `doubt` is how wrong it may be.

    Parameters
    ----------
    degrees : tuple of int
        To what degree in each common factor it is written, so that numerator and denominator
        have the same nodes; not below its own.
    """
    own = box.own_free
    table = _table(of, box)
    for index in own:
        table = _folded(table, float(box.own_low[index]), float(box.own_high[index]))
    dense = np.zeros((2 ** len(own), *(m + 1 for m in degrees), of.degree + 1))
    for (_, power, exponents), values in table.items():
        place: tuple[slice | int, ...] = (slice(None), *exponents, power)
        dense[place] += values
    for axis, (common, degree) in enumerate(zip(box.commons, degrees, strict=True), start=1):
        dense = np.moveaxis(
            np.tensordot(dense, bernstein(common, degree), axes=(axis, 0)), -1, axis
        )
    return Nodes(dense.reshape(2 ** len(own), -1, of.degree + 1), doubt)


def common_degrees(polynomials: tuple[Terms, ...], box: Box) -> tuple[int, ...]:
    """Return the degree of the polynomials in each common factor, the larger one of them."""
    degrees = [0] * len(box.commons)
    for column, coordinate in enumerate(box.free):
        k = int(coordinate) - len(box.own_low)
        if k >= 0:
            highest = (of.exponents[:, column].max(initial=0.0) for of in polynomials)
            degrees[k] = int(max(highest))
    return tuple(degrees)


def true_corners(degrees: tuple[int, ...]) -> list[int]:
    """Return which nodes of the common factors are corners: each factor at one of its ends."""
    ends = [(0, m) if m else (0,) for m in degrees]
    shape = tuple(m + 1 for m in degrees)
    return [int(np.ravel_multi_index(one, shape)) if shape else 0 for one in product(*ends)]


def _table(of: Terms, box: Box) -> Table:
    """Return the weights by what is in each term; exponents of exact factors are 0."""
    own, count = len(box.own_free), len(box.own_low)
    varying = [int(coordinate) - count for coordinate in box.free[own:]]
    table: Table = {}
    for row, power, weight in zip(of.exponents.astype(int), of.powers, of.weights, strict=True):
        exponents = [0] * len(box.commons)
        for k, exponent in zip(varying, row[own:], strict=True):
            exponents[k] = int(exponent)
        key = (tuple(int(e) for e in row[:own]), int(power), tuple(exponents))
        table[key] = np.array([weight])
    return table


def _folded(table: Table, low: float, high: float) -> Table:
    """Fold the first own value out."""
    without: Table = {}
    for ((first, *others), power, exponents), values in table.items():
        key = (tuple(others), power, exponents)
        ends = (low, high) if first else (1.0, 1.0)
        grown = np.concatenate([values * ends[0], values * ends[1]])
        without[key] = without[key] + grown if key in without else grown
    return without


def bernstein(common: Common, degree: int) -> Real:
    """Return the Bernstein coefficients over the interval of u of 1, u, u^2, ... as rows."""
    forms = powers((common.low, common.high), (1.0, 1.0), degree)
    return np.real(forms) / binomials(degree)
