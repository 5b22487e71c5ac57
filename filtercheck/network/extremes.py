"""Where the gain of a response turns, found from its derivative and not from a grid.

In u = ln f the slope E(u) = d gain / du is analytic but for simple poles at the poles and
zeros of H: a root r of the polynomials stands at u = ln|r| with the imaginary part
asin(|Re r| / |r|), which is about 1/(2Q) for a resonance. The axis is cut into pieces none
of which is longer than its distance from the nearest root, so that on every piece E agrees
with its Chebyshev interpolant of `NODES` points to about 5.8**-NODES, relative to its size
there. However high Q is, the roots of the interpolants are all the turning points.

Source: the convergence rate is Trefethen, Approximation Theory and Approximation Practice
(SIAM, 2013), theorem 8.2 (from memory); for a singularity one length beyond the end of a
piece its ellipse has the parameter 3 + sqrt(8) = 5.8.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

from filtercheck.network.ratio import Real
from filtercheck.network.response import Response

NODES = 18
# Below this part of the lowest root, or as many times above the highest, a response differs
# from its asymptote by less than 1e-13 dB, and an asymptote does not turn.
BEYOND = 1e-8
# A piece as short as this around a root on the axis itself (a perfect null) is not cut further.
SHORTEST = 1e-11


@dataclass(frozen=True, eq=False)
class Slope:
    """The derivative of a gain over all frequencies, as Chebyshev series on pieces of ln f."""

    left: Real  # (M,)
    right: Real  # (M,)
    series: Real  # (M, NODES), coefficients of E on each piece [dB/neper]
    nulls: Real  # (Z,), ln f of the zeros: on a perfect null E jumps and has no root

    def turns_hz(self, low_hz: float, high_hz: float, line: float = 0.0) -> Real:
        """Return where gain - line * ln f is stationary or has a null, strictly inside a band.

        Parameters
        ----------
        low_hz, high_hz : float
            The band; 0 and infinity are allowed. [Hz]
        line : float
            Slope of a straight limit over the logarithm of frequency. [dB/neper]

        Returns
        -------
        float array, shape (K,)
            Frequencies in rising order. A flat response may yield points of no meaning
            (its slope is rounding noise); they do no harm, being points of the response.
        """
        with np.errstate(divide="ignore"):
            low, high = np.log([low_hz, high_hz])
        series = self.series.copy()
        series[:, 0] -= line
        within = (self.right > low) & (self.left < high)
        may_vanish = ~(np.abs(series[:, 0]) > np.abs(series[:, 1:]).sum(axis=1))
        found: list[float] = list(self.nulls)
        for i in np.flatnonzero(within & may_vanish):
            middle, half = (
                (self.left[i] + self.right[i]) / 2,
                (self.right[i] - self.left[i]) / 2,
            )
            found.extend(middle + half * x for x in _real_roots(series[i]))
        return np.exp([u for u in sorted(found) if low < u < high])


def slope(response: Response) -> Slope:
    """Return the derivative of the gain of `response`, resolved about all its roots."""
    roots = np.concatenate([response.zeros, response.poles])
    # A root so far away that it is lost to rounding, at 0 or infinity, bends nothing.
    roots = roots[np.isfinite(roots) & (roots != 0)]
    if not len(roots):
        empty = np.empty(0)
        return Slope(empty, empty, np.empty((0, NODES)), empty)
    size = np.abs(roots)
    place = np.log(size / (2.0 * np.pi))
    depth = np.arcsin(np.abs(roots.real) / size)
    left, right = _pieces(place, depth)
    points = chebyshev.chebpts1(NODES)
    u = (left + right)[:, None] / 2 + (right - left)[:, None] / 2 * points
    values = np.nan_to_num(response.slope(np.exp(u)), posinf=0.0, neginf=0.0)
    # Interpolation at the points of the first kind is a discrete cosine transform.
    transform = 2.0 / NODES * chebyshev.chebvander(points, NODES - 1)
    transform[:, 0] /= 2.0
    zeros = response.zeros[np.isfinite(response.zeros) & (response.zeros != 0)]
    nulls = place[: len(zeros)]
    return Slope(left, right, values @ transform, nulls)


def _pieces(place: Real, depth: Real) -> tuple[Real, Real]:
    """Cut ln f until every piece is no longer than its distance from the nearest root."""
    reach = np.log(1.0 / BEYOND)
    left = np.array([place.min() - reach])
    right = np.array([place.max() + reach])
    done: list[NDArray[np.float64]] = []
    while len(left):
        beside = np.maximum(left[:, None] - place, place - right[:, None]).clip(min=0.0)
        distance = np.hypot(beside, depth).min(axis=1)
        length = right - left
        fine = (length <= distance) | (length <= SHORTEST)
        done.append(np.stack([left[fine], right[fine]]))
        middle = (left + right)[~fine] / 2
        left, right = (
            np.concatenate([left[~fine], middle]),
            np.concatenate([middle, right[~fine]]),
        )
    pieces = np.concatenate(done, axis=1)
    ordered = pieces[:, np.argsort(pieces[0])]
    return ordered[0], ordered[1]


def _real_roots(series: Real) -> list[float]:
    """Return the roots of a Chebyshev series in [-1, 1].

    Roots a little off the real axis, or a little beyond an end, are taken as well: a double
    root moves so far by rounding, and a point too many does no harm.
    """
    size = np.abs(series)
    kept = np.flatnonzero(size > 1e-15 * size.max())
    if not len(kept) or kept[-1] == 0:
        return []
    roots = chebyshev.chebroots(series[: kept[-1] + 1])
    near = (np.abs(roots.imag) < 1e-3) & (np.abs(roots.real) < 1.0 + 1e-6)
    return [float(x) for x in np.clip(roots[near].real, -1.0, 1.0)]
