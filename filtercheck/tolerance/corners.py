"""The network functions at all corners of a box, and at what stands between for common factors.

A polynomial is affine in every own value. It is kept as a table of its terms, from which one
symbol after the other is folded out: where a term without the symbol is a(...) and the term
with it b(...), the new terms are a + low b and a + high b. The table shrinks as the arrays
double, so that all 2^n corners cost little more than the last fold.

A common factor u enters a term as often as symbols that share it do; after the fold the
polynomial has a degree m in u, and is turned into its m + 1 Bernstein coefficients over the
interval of u. Own values and common factors together so give the Bernstein coefficients of the
polynomial over the whole box: `nodes`. What is linear and holds for every node holds in the box.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import product

import numpy as np

from filtercheck.network.polynomial import Polynomial, Real
from filtercheck.tolerance.box import Box, Common

Key = tuple[int, int, tuple[int, ...]]  # free symbols left, power of s, powers of common factors
Table = dict[Key, Real]


@dataclass(frozen=True, eq=False)
class Nodes:
    """Bernstein coefficients of one polynomial over a box, and a bound of its terms' size."""

    values: Real  # (2^n, C, d + 1), ascending powers of s; bit k of the first index is corner k
    size: Real  # (d + 1,), the largest sum of |terms|, from which rounding errors are judged


def nodes(polynomial: Polynomial, box: Box, degrees: tuple[int, ...]) -> Nodes:
    """Return a polynomial at all nodes of a box.

    Parameters
    ----------
    degrees : tuple of int
        To what degree in each common factor it is written, so that numerator and denominator
        have the same nodes; not below its own.
    """
    table = _fixed(polynomial, box)
    for index in box.own_free:
        table = _folded(table, 1 << index, float(box.own_low[index]), float(box.own_high[index]))
    corners = 2 ** len(box.own_free)
    dense = np.zeros((corners, *(m + 1 for m in degrees), polynomial.degree + 1))
    for (_, power, exponents), values in table.items():
        place: tuple[slice | int, ...] = (slice(None), *exponents, power)
        dense[place] += values
    for axis, (common, degree) in enumerate(zip(box.commons, degrees, strict=True), start=1):
        dense = np.moveaxis(
            np.tensordot(dense, _bernstein(common, degree), axes=(axis, 0)), -1, axis
        )
    flat = dense.reshape(corners, -1, polynomial.degree + 1)
    return Nodes(flat, _size(polynomial, box))


def common_degrees(polynomials: tuple[Polynomial, ...], box: Box) -> tuple[int, ...]:
    """Return the degree of the polynomials in each common factor, the larger one of them."""
    terms = [mask for polynomial in polynomials for mask in polynomial.terms]
    return tuple(
        max(((mask & common.mask).bit_count() for mask in terms), default=0)
        for common in box.commons
    )


def true_corners(degrees: tuple[int, ...]) -> list[int]:
    """Return which nodes of the common factors are corners: each factor at one of its ends."""
    ends = [(0, m) if m else (0,) for m in degrees]
    shape = tuple(m + 1 for m in degrees)
    return [int(np.ravel_multi_index(one, shape)) if shape else 0 for one in product(*ends)]


def _fixed(polynomial: Polynomial, box: Box) -> Table:
    """Return the terms with the exact symbols multiplied out."""
    exact = [i for i in range(len(box.own_low)) if box.own_low[i] == box.own_high[i]]
    left = sum(1 << i for i in box.own_free)
    table: Table = {}
    for mask, coefficient in polynomial.terms.items():
        value = float(coefficient)
        for i in exact:
            if mask >> i & 1:
                value *= float(box.own_low[i])
        exponents = tuple((mask & common.mask).bit_count() for common in box.commons)
        key = (mask & left, polynomial.power(mask), exponents)
        table[key] = table.get(key, np.zeros(1)) + value
    return table


def _folded(table: Table, bit: int, low: float, high: float) -> Table:
    without: Table = {}
    for (mask, power, exponents), values in table.items():
        key = (mask & ~bit, power, exponents)
        ends = (low, high) if mask & bit else (1.0, 1.0)
        grown = np.concatenate([values * ends[0], values * ends[1]])
        without[key] = without[key] + grown if key in without else grown
    return without


def _bernstein(common: Common, degree: int) -> Real:
    """Return the Bernstein coefficients over the interval of u of 1, u, u^2, ... as rows."""
    binomial = np.ones(1)
    for _ in range(degree):
        binomial = np.convolve(binomial, [1.0, 1.0])
    rows = []
    for k in range(degree + 1):
        row = np.ones(1)
        for factor in [(common.low, common.high)] * k + [(1.0, 1.0)] * (degree - k):
            row = np.convolve(row, factor)
        rows.append(row / binomial)
    return np.array(rows)


def _size(polynomial: Polynomial, box: Box) -> Real:
    """Return the sum of the terms' sizes at the highest values, for each power of s."""
    absolute = replace(polynomial, terms={m: abs(c) for m, c in polynomial.terms.items()})
    return np.asarray(absolute.at_points(box.symbol_values(box.high[None, :]))[0])
