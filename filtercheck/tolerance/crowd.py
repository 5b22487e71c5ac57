"""Many boards at once, on a grid of frequencies that lies where their responses bend.

The power |H|^2 of a board is a ratio of polynomials in w^2, so that a chunk of boards on the
whole grid is a few matrix products. What lies between two points of the grid is estimated from
the parabola through the three points about the largest; where that leaves a board's standing in
doubt, it is for the caller to work the board out exactly.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property, lru_cache
from math import log

import numpy as np
from numpy.typing import NDArray

from filtercheck.network.ratio import Complex, Real
from filtercheck.network.response import DECIBEL_PER_NEPER
from filtercheck.tolerance.chain import Board, Chain
from filtercheck.tolerance.limit import Limit
from filtercheck.tolerance.poles import poles, qualities

BENT = 0.25  # neper by which ln|H|^2 may bend from one point of a grid to the next
LEAST_POINTS = 24  # of a grid
MOST_FINE = 100_000  # points that tell where responses bend
SHARP = 2.0  # a Q from which on a peak may hide between points
# Of the height of a parabola over its middle point, what it may be wrong by.
DOUBTFUL = 0.5
LEAST_DOUBT = 1e-6  # of ln|H|, for rounding


def grid(chain: Chain, boards: Board, band: tuple[float, float]) -> Real:
    """Return angular frequencies of a band, ends included, in rising order.

    The step is such that ln|H| bends by `BENT` at most from one point to the next, on any board:
    the second derivative by ln w is the largest that some boards have nearby, as near as their
    sharp poles lie to one another.

    Parameters
    ----------
    boards : points of every stage, each of shape (S, P + T)
    """
    every = [poles(stage, points) for stage, points in zip(chain.stages, boards, strict=True)]
    sizes = np.abs(np.concatenate([one.ravel() for one in every]))
    if not len(sizes):
        return np.unique([*band])
    # A decade beyond the poles a response is its own asymptote.
    low, high = (min(max(end, sizes.min() / 10.0), sizes.max() * 10.0) for end in band)
    if not low < high:
        return np.unique([*band])
    sharpest, stray = _sharpness(every)
    step = min(1.0 / (4.0 * sharpest), log(high / low) / 1000.0)
    fine = np.linspace(log(low), log(high), min(int(log(high / low) / step), MOST_FINE))
    step = float(fine[1] - fine[0])
    bend = np.abs(np.diff(np.log(power(chain, boards, np.exp(fine))), n=2, axis=1)).max(axis=0)
    nearby = _widened(np.pad(bend, 1, mode="edge"), int(2.0 * stray / step) + 1)
    counts = np.sqrt(nearby / BENT) + LEAST_POINTS / len(fine)
    steps = np.concatenate([[0.0], np.cumsum((counts[:-1] + counts[1:]) / 2.0)])
    inner = np.interp(np.arange(1, int(steps[-1])), steps, fine)
    return np.unique([band[0], low, *np.exp(inner), high, band[1]])


def _sharpness(every: list[Complex]) -> tuple[float, float]:
    """Return the highest Q of the poles of some boards, and how far the poles of a network that
    has a sharp one stray from board to board, in ln w."""
    sharpest, stray = 1.0, 0.0
    for found in every:
        q = qualities(found)
        q = np.where(np.isfinite(q), q, 0.0)
        sharpest = max(sharpest, float(q.max(initial=0.0)))
        sharp = np.abs(found[q > SHARP])
        if len(sharp):
            stray = max(stray, log(sharp.max() / sharp.min()))
    return sharpest, stray


def _widened(values: Real, width: int) -> Real:
    """Return the largest of the values within so many places to either side."""
    from scipy.ndimage import maximum_filter1d

    return np.asarray(maximum_filter1d(values, 2 * width + 1, mode="nearest"))


def power(chain: Chain, boards: Board, omega: Real) -> Real:
    """Return |H|^2 of boards at frequencies, shape (S, F); 0 and infinity are allowed."""
    total: Real = np.ones(1)
    for stage, points in zip(chain.stages, boards, strict=True):
        top, bottom = (_squared(one, omega, stage.degree) for one in stage.at(points))
        with np.errstate(divide="ignore", invalid="ignore"):
            np.divide(top, bottom, out=bottom)
            total = total * bottom
    return total


def _squared(coefficients: Real, omega: Real, degree: int) -> Real:
    """Return |P(jw)|^2/(1 + w)^(2 degree), a polynomial in w^2, at frequencies."""
    squares = _square_coefficients(coefficients)
    values = squares @ _columns(tuple(omega), degree, squares.shape[1])
    # Near a null of the response rounding may leave less than nothing.
    return np.maximum(values, 0.0, out=values)


def _square_coefficients(coefficients: Real) -> Real:
    """Return the coefficients of 1, w^2, w^4, ... of |P(jw)|^2, shape (S, K)."""
    count = coefficients.shape[1]
    squares = np.zeros_like(coefficients)
    for k in range(count):
        for m in range(k % 2, count, 2):
            # (j w)^k times the conjugate of (j w)^m, which is real since k - m is even.
            sign = 1.0 if (k - m) % 4 == 0 else -1.0
            squares[:, (k + m) // 2] += sign * coefficients[:, k] * coefficients[:, m]
    return squares


@lru_cache(maxsize=256)
def _columns(omega: tuple[float, ...], degree: int, count: int) -> Real:
    """Return w^(2k)/(1 + w)^(2 degree) for k below `count`, shape (count, F)."""
    w = np.array(omega)
    finite = np.isfinite(w)
    near, far = np.zeros(len(w)), np.ones(len(w))
    near[finite] = 1.0 / (1.0 + w[finite])
    far[finite] = w[finite] / (1.0 + w[finite])
    return np.array([near ** (2 * (degree - k)) * far ** (2 * k) for k in range(count)])


@dataclass(frozen=True)
class Standing:
    """By how much each board is beyond a limit, and how wrong that may be; both of ln|H|."""

    excess: Real  # (S,), positive beyond
    doubt: Real  # (S,)


@dataclass(frozen=True, eq=False)
class Screen:
    """A limit on a grid."""

    chain: Chain
    limit: Limit
    band: Real  # angular frequencies, rising
    reference: Real  # likewise; empty where there is none

    def standing(self, powers: Callable[[Real], Real]) -> Standing:
        """Return where boards stand, from their powers on the band and on the reference.

        Parameters
        ----------
        powers : callable
            Frequencies -> |H|^2 of the boards, shape (S, F).
        """
        sign, reference = self.limit.sign, self.limit.reference
        with np.errstate(divide="ignore", invalid="ignore"):
            gain = powers(self.band)
            level = gain * self._factor if sign > 0 else self._factor / gain
            if reference is None:
                return Standing(*_peak(level, self.band))
            gain = powers(self.reference)
            if reference.side:
                level = np.where(self._beside(gain), level, 0.0)
                return _sum(_peak(level, self.band), _peak(gain, self.reference), -sign)
            if reference.every:
                return _sum(_peak(level, self.band), _peak(gain**-sign, self.reference), 1)
            return _sum(_peak(level, self.band), _peak(gain**sign, self.reference), -1)

    @cached_property
    def _factor(self) -> Real:
        """One over the power that is allowed."""
        allowed = [self.limit.excess_allowed_db(self.chain.freq_hz(w)) for w in self.band]
        return np.exp(-2.0 * np.array(allowed) / DECIBEL_PER_NEPER)

    def _beside(self, gain: Real) -> NDArray[np.bool_]:
        """Return which frequencies are on the limit's side of each board's largest gain."""
        start = self.reference[np.argmax(gain, axis=1)][:, None]
        above = self.limit.reference is not None and self.limit.reference.side == "above"
        return np.asarray(self.band >= start if above else self.band <= start)


def _sum(one: tuple[Real, Real], other: tuple[Real, Real], sign: int) -> Standing:
    return Standing(one[0] + sign * other[0], one[1] + other[1])


def _peak(level: Real, omega: Real) -> tuple[Real, Real]:
    """Return half the logarithm of the largest value between the points of a grid, as the
    parabola about the largest point has it, and the doubt that is left.

    The parabola is one in w^2/(w^2 + w0^2): the logarithm of a power is analytic in w^2, at 0
    and with its inverse at infinity.
    """
    rows, last, at = np.arange(len(level)), level.shape[1] - 1, np.argmax(level, axis=1)
    top = np.log(level[rows, at]) / 2.0
    if last < 2:
        return top, np.full(len(level), LEAST_DOUBT)
    middle = np.clip(at, 1, last - 1)
    before, here, after = (np.log(level[rows, middle + k]) / 2.0 for k in (-1, 0, 1))
    place = _compact(tuple(omega))
    left, right = place[middle] - place[middle - 1], place[middle + 1] - place[middle]
    with np.errstate(divide="ignore", invalid="ignore"):
        falling, rising = (here - before) / left, (after - here) / right
        bend = (rising - falling) / (left + right)
        slope = (falling * right + rising * left) / (left + right)
        step = np.clip(-slope / (2.0 * bend), -left, right)
        rise = np.where(bend < 0.0, (slope + bend * step) * step, 0.0)
    peak = np.maximum(top, np.where(np.isfinite(rise), here + rise, top))
    curved = np.abs(np.where(np.isfinite(bend), bend, 0.0)) * np.minimum(left, right) ** 2
    return peak, DOUBTFUL * np.abs(peak - top) + 0.02 * curved + LEAST_DOUBT


@lru_cache(maxsize=256)
def _compact(omega: tuple[float, ...]) -> Real:
    """Return w^2/(w^2 + w0^2), w0 being the geometric mean of the inner frequencies."""
    w = np.array(omega)
    centre = float(np.sqrt(w[1] * w[-2]))
    with np.errstate(invalid="ignore"):
        return np.where(np.isfinite(w), w**2 / (w**2 + centre**2), 1.0)
