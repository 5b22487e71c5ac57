"""Sparse polynomials in s whose coefficients are affine in each part value.

A polynomial is a sum of terms; a term is a small integer times a product of different
symbols, kept as a bit mask. The power of s of a term is the number of its dynamic symbols.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from filtercheck.network.elements import Symbol

Real = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Polynomial:
    """Terms `{mask: coefficient}` over `symbols`; bit i of a mask stands for symbol i."""

    symbols: tuple[Symbol, ...]
    terms: Mapping[int, int]
    lift: int = 0  # powers of s in front of it all

    @cached_property
    def table(self) -> tuple[Real, NDArray[np.bool_], NDArray[np.intp]]:
        """The terms as arrays: coefficients (T,), members (T, P), powers of s (T,)."""
        count = len(self.symbols)
        bits = [[mask >> i & 1 for i in range(count)] for mask in self.terms]
        members = np.array(bits, dtype=bool).reshape(len(self.terms), count)
        dynamic = np.array([symbol.dynamic for symbol in self.symbols], dtype=bool)
        coefficients = np.array(list(self.terms.values()), dtype=float)
        return coefficients, members, members[:, dynamic].sum(axis=1) + self.lift

    def coefficients(self, values: Real) -> Real:
        """Return the coefficients of 1, s, s**2, ... at these values of the symbols.

        Parameters
        ----------
        values : float array, shape (P,)
            One value a symbol, in any consistent units.

        Returns
        -------
        float array, shape (K,)
            Ascending powers of s; a single 0 where the polynomial is zero.

        Notes
        -----
        Every product is a few roundings from exact; a coefficient in which terms cancel
        loses what they lose. Coefficients that cancel to within rounding are set to zero:
        an exact null must not turn into a pole or zero far away.
        """
        if not self.terms:
            return np.zeros(1)
        coefficients, members, powers = self.table
        products = coefficients * np.where(members, values, 1.0).prod(axis=1)
        total = np.bincount(powers, weights=products)
        size = np.bincount(powers, weights=np.abs(products))
        return np.where(np.abs(total) > 1e-14 * size, total, 0.0)

    @cached_property
    def dynamic(self) -> int:
        """The dynamic symbols as a mask."""
        return sum(1 << i for i, symbol in enumerate(self.symbols) if symbol.dynamic)

    @cached_property
    def members(self) -> int:
        """The symbols that occur in it, as a mask."""
        found = 0
        for mask in self.terms:
            found |= mask
        return found

    def without_common(self) -> Polynomial:
        """Return the polynomial with the symbols that stand in every term divided out; the
        powers of s that go with them stay."""
        common = -1
        for mask in self.terms:
            common &= mask
        terms = {mask & ~common: c for mask, c in self.terms.items()}
        return Polynomial(self.symbols, terms, self.lift + (common & self.dynamic).bit_count())

    def power(self, mask: int) -> int:
        """Return the power of s of a term."""
        return (mask & self.dynamic).bit_count() + self.lift
