"""The worst board of a stage at given frequencies: coordinate ascent with exact line maxima.

Along one own value x a polynomial is a + b x, so |N|^2 and |D|^2 are quadratic in x, and the
logarithm of a product of their powers has its turning points where a sum of +-q'/q vanishes.
Candidates are the ends of the line and the point where each quadratic is least, near which a
resonance on the line must lie; Newton's method on the sum makes them exact.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from filtercheck.network.ratio import Complex, Real
from filtercheck.tolerance.stage import Stage, at_frequency

SWEEPS = 40
NEWTON_STEPS = 4
SAMPLES = 9  # of a line along a common factor, in which the response is not affine
SMALLEST = 1e-300


@dataclass(frozen=True)
class Aim:
    """The sum of sign * ln|H| over frequencies, which the worst board makes largest."""

    terms: tuple[tuple[float, int], ...]  # (angular frequency, +1 or -1)


def heights(stage: Stage, aim: Aim, points: Real) -> Real:
    """Return the aim at boards of a box, shape (S,), from points of shape (S, P + T)."""
    top, bottom = stage.at(points)
    total = np.zeros(len(points))
    for omega, sign in aim.terms:
        total += sign * (
            _log(at_frequency(top, omega, stage.degree))
            - _log(at_frequency(bottom, omega, stage.degree))
        )
    return total


def _log(values: Complex) -> Real:
    return np.log(np.maximum(np.abs(values), SMALLEST))


def best_corner(stage: Stage, aim: Aim) -> Real:
    """Return the corner of the box where the aim is largest, shape (P + T,).

    Where there are too many to list, return the one that the single values lead to, from the
    middle and then once more from there.
    """
    if stage.is_large:
        return _led_corner(stage, aim)
    total = np.zeros(())
    for omega, sign in aim.terms:
        for nodes, part in ((stage.numerators, sign), (stage.denominators, -sign)):
            corners = nodes.values[:, stage.true_corners]
            total = total + part * _log(at_frequency(corners, omega, stage.degree))
    corner, common = np.unravel_index(int(np.argmax(total)), total.shape)
    return stage.corner(int(corner), int(common))


def _led_corner(stage: Stage, aim: Aim) -> Real:
    point, box = stage.box.centre, stage.box
    own = np.array(box.own_free, dtype=int)
    for _ in range(2):
        ends = _Lines.through(stage, aim, point).heights(np.array([0.0, 1.0]))
        point = point.copy()
        point[own] = np.where(ends[:, 0] > ends[:, 1], box.low[own], box.high[own])
    return point


def climb(stage: Stage, aim: Aim, start: Real) -> Real:
    """Return a board from which no single value can raise the aim, beginning at `start`."""
    point, height = start, float(heights(stage, aim, start[None, :])[0])
    for _ in range(SWEEPS):
        reached, candidate = max(
            [_own_best(stage, aim, point), _common_best(stage, aim, point)],
            key=lambda pair: pair[0],
        )
        if not reached > height + 1e-12:
            break
        point, height = candidate, reached
    return point


def _own_best(stage: Stage, aim: Aim, point: Real) -> tuple[float, Real]:
    """Return the highest point, with its height, on the lines along own values."""
    box = stage.box
    if not box.own_free:
        return -np.inf, point
    lines = _Lines.through(stage, aim, point)
    places = lines.turning_points()
    reached = lines.heights(places)
    line, column = np.unravel_index(int(np.argmax(reached)), reached.shape)
    coordinate = box.own_free[int(line)]
    low, high = box.low[coordinate], box.high[coordinate]
    best = point.copy()
    best[coordinate] = min(max(low + places[line, column] * (high - low), low), high)
    return float(reached[line, column]), best


def _common_best(stage: Stage, aim: Aim, point: Real) -> tuple[float, Real]:
    """Return the highest of samples, with its height, on the lines along common factors."""
    box = stage.box
    commons = [i for i in box.free if i >= len(box.own_low)]
    if not commons:
        return -np.inf, point
    samples = np.tile(point, (SAMPLES * len(commons), 1))
    for k, i in enumerate(commons):
        samples[SAMPLES * k : SAMPLES * (k + 1), i] = np.linspace(box.low[i], box.high[i], SAMPLES)
    reached = heights(stage, aim, samples)
    best = int(np.argmax(reached))
    return float(reached[best]), samples[best]


@dataclass(frozen=True, eq=False)
class _Lines:
    """N and D at every frequency of an aim, on the lines through a board along its own values."""

    start: Complex  # (M, n), at the lower ends
    change: Complex  # (M, n), to the upper ends
    weights: Real  # (M,), 1 or -1 in the aim

    @staticmethod
    def through(stage: Stage, aim: Aim, point: Real) -> _Lines:
        box = stage.box
        own = np.array(box.own_free, dtype=int)
        start, change, weights = [], [], []
        for omega, sign in aim.terms:
            for of, part in zip(stage.terms, (sign, -sign), strict=True):
                value, slopes = of.lines(
                    point, at_frequency(np.eye(of.degree + 1), omega, stage.degree)
                )
                start.append(value + slopes * (box.low[own] - point[own]))
                change.append(slopes * (box.high - box.low)[own])
                weights.append(float(part))
        return _Lines(np.array(start), np.array(change), np.array(weights))

    def heights(self, places: Real) -> Real:
        """Return the aim, (n, K), at parts of the way along each line, (n, K) or (K,)."""
        z = self.start[:, :, None] + self.change[:, :, None] * places
        return np.asarray(np.tensordot(self.weights, _log(z), axes=1))

    def turning_points(self) -> Real:
        """Return the ends of each line and where the aim may be largest between, (n, K)."""
        z0, dz = self.start, self.change
        w = self.weights[:, None, None]
        with np.errstate(divide="ignore", invalid="ignore"):
            places = _inside(-np.real(z0 * np.conj(dz)) / np.abs(dz) ** 2, 0.0).T
            for _ in range(NEWTON_STEPS):
                rate = dz[:, :, None] / (z0[:, :, None] + dz[:, :, None] * places)
                slope = (w * np.real(rate)).sum(axis=0)
                bend = -(w * np.real(rate**2)).sum(axis=0)
                places = _inside(places - np.where(bend < 0.0, slope / bend, 0.0), places)
        ends = np.zeros((len(places), 2)) + np.array([0.0, 1.0])
        return np.concatenate([places, ends], axis=1)


def _inside(places: Real, instead: Real | float) -> Real:
    """Return places on a line, those that are no numbers replaced."""
    return np.clip(np.where(np.isfinite(places), places, instead), 0.0, 1.0)
